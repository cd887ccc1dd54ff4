package blend

import (
	"math"

	"dewmark/props/internal/roots"
)

// eachRoot calls found with every zero of f between the first and the last value of the rising grid. f returns its value
// and its slope, or NaN for a slope that it does not know. Between neighbours eachRoot sees one zero, or two when f turns
// back once in between. Where f is NaN there is nothing to find.
func eachRoot(grid []float64, f func(x float64) (v, slope float64), found func(x float64)) {
	value := func(x float64) float64 { v, _ := f(x); return v }
	plain := func(x float64) (float64, error) { return value(x), nil }
	values, slopes := make([]float64, len(grid)), make([]float64, len(grid))
	for i, x := range grid {
		values[i], slopes[i] = f(x)
	}
	root := func(a, fa, b, fb float64) {
		if x, err := roots.Bracketed(a, fa, b, fb, plain); err == nil && !math.IsNaN(value(x)) {
			found(x)
		}
	}
	for i, v := range values {
		if v == 0 {
			found(grid[i])
		}
		if i == 0 {
			continue
		}
		before := values[i-1]
		from := i // where f may turn towards zero on the way from there to i
		switch {
		case math.IsNaN(before) || math.IsNaN(v) || v == 0 || before == 0:
		case (before < 0) != (v < 0):
			root(grid[i-1], before, grid[i], v)
		case !math.IsNaN(slopes[i-1]) && !math.IsNaN(slopes[i]):
			if (slopes[i-1] < 0) == (before > 0) && (slopes[i] < 0) != (v > 0) {
				from = i - 1
			}
		case i >= 2 && (values[i-2] < 0) == (v < 0) && math.Abs(before) <= math.Abs(values[i-2]) && math.Abs(before) <= math.Abs(v):
			from = i - 2
		}
		if from == i {
			continue
		}
		if x, fx, crosses := roots.Turning(grid[from], grid[i], value); crosses {
			root(grid[from], values[from], x, fx)
			root(x, fx, grid[i], v)
		}
	}
}
