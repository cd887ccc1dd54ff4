package blend

import "math"

// bracketed solves f(x) = 0 between a and b, where f has opposite signs, by the Illinois variant of regula falsi with
// bisection whenever three steps have not halved the bracket. It stops at rounding, or when f fails.
func bracketed(a, fa, b, fb float64, f func(float64) (float64, error)) (float64, error) {
	best, least := a, math.Abs(fa)
	if math.Abs(fb) < least {
		best, least = b, math.Abs(fb)
	}
	width := math.Abs(b - a)
	for i := range 200 {
		x := b - fb*(b-a)/(fb-fa)
		if i%3 == 2 {
			if math.Abs(b-a) > width/2 {
				x = a + (b-a)/2
			}
			width = math.Abs(b - a)
		}
		if least == 0 || x == a || x == b || math.Abs(b-a) <= 4e-16*math.Abs(b) {
			break
		}
		fx, err := f(x)
		if err != nil {
			return x, err
		}
		if math.Abs(fx) < least {
			best, least = x, math.Abs(fx)
		}
		if (fx < 0) != (fb < 0) {
			a, fa = b, fb
		} else {
			fa /= 2
		}
		b, fb = x, fx
	}
	return best, nil
}

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
		if x, err := bracketed(a, fa, b, fb, plain); err == nil && !math.IsNaN(value(x)) {
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
		if x, fx, crosses := turning(grid[from], grid[i], value); crosses {
			root(grid[from], values[from], x, fx)
			root(x, fx, grid[i], v)
		}
	}
}

// turning looks for the extremum of f towards zero between a and b by golden section and reports whether f crosses zero on
// the way.
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
