package props

import "math"

// bracketed solves f(x) = 0 between a and b, where f has opposite signs, by the Illinois variant of regula falsi with
// bisection whenever three steps have not halved the bracket. It stops at rounding, or when f fails.
func bracketed(a, fa, b, fb float64, f func(float64) (float64, error)) (float64, error) {
	if fa == 0 {
		return a, nil
	}
	if fb == 0 {
		return b, nil
	}
	const limit = 200
	width := math.Abs(b - a)
	for i := range limit {
		x := b - fb*(b-a)/(fb-fa)
		if i%3 == 2 {
			if math.Abs(b-a) > width/2 || !(math.Min(a, b) < x && x < math.Max(a, b)) {
				x = a + (b-a)/2
			}
			width = math.Abs(b - a)
		}
		if x == a || x == b || math.Abs(b-a) <= 4e-16*math.Abs(b) {
			break
		}
		fx, err := f(x)
		if err != nil {
			return x, err
		}
		if fx == 0 {
			return x, nil
		}
		if (fx < 0) != (fb < 0) {
			a, fa = b, fb
		} else {
			fa /= 2
		}
		b, fb = x, fx
	}
	return b, nil
}

// allRoots calls found with every zero of the continuous function f between the first and the last value of the
// rising grid. Between neighbours it sees one zero, or two when f turns back in between; the grid must be fine enough
// for that.
func allRoots(grid []float64, f func(float64) float64, found func(x float64)) {
	plain := func(x float64) (float64, error) { return f(x), nil }
	var x0, f0, x1, f1 float64
	run := 0 // consecutive values of f that exist
	for _, x2 := range grid {
		f2 := f(x2)
		if math.IsNaN(f2) {
			run = 0
			continue
		}
		run++
		switch {
		case f2 == 0:
			found(x2)
		case run > 1 && f1 != 0 && (f1 < 0) != (f2 < 0):
			x, _ := bracketed(x1, f1, x2, f2, plain)
			found(x)
		}
		// A turning point towards zero between three values of one sign may hide two roots.
		if run > 2 && math.Abs(f1) < math.Abs(f0) && math.Abs(f1) < math.Abs(f2) && (f0 < 0) == (f1 < 0) && (f1 < 0) == (f2 < 0) {
			if xm, fm, crosses := turning(x0, x2, f); crosses {
				a, _ := bracketed(x0, f0, xm, fm, plain)
				b, _ := bracketed(xm, fm, x2, f2, plain)
				found(a)
				if b != a {
					found(b)
				}
			}
		}
		x0, f0, x1, f1 = x1, f1, x2, f2
	}
}

// turning looks for the extremum of f towards zero between a and b by golden section and reports whether f crosses
// zero on the way.
func turning(a, b float64, f func(float64) float64) (x, fx float64, crosses bool) {
	const golden = 0.3819660112501051
	negative := f(a) < 0
	c, d := a+golden*(b-a), b-golden*(b-a)
	fc, fd := f(c), f(d)
	for range 60 {
		if (fc < 0) != negative {
			return c, fc, true
		}
		if (fd < 0) != negative {
			return d, fd, true
		}
		if math.Abs(fc) < math.Abs(fd) {
			b, d, fd = d, c, fc
			c = a + golden*(b-a)
			fc = f(c)
		} else {
			a, c, fc = c, d, fd
			d = b - golden*(b-a)
			fd = f(d)
		}
	}
	return c, fc, false
}
