module dewmark

go 1.26.0
