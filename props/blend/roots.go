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

// eachRoot calls found with every zero of f between the first and the last value of the rising grid. Between neighbours it
// sees one zero, or two when f turns back once in between. Where f is NaN there is nothing to find.
func eachRoot(grid []float64, f func(float64) float64, found func(x float64)) {
	plain := func(x float64) (float64, error) { return f(x), nil }
	values := make([]float64, len(grid))
	for i, x := range grid {
		values[i] = f(x)
	}
	for i, v := range values {
		if v == 0 {
			found(grid[i])
		}
		if i == 0 {
			continue
		}
		before := values[i-1]
		switch {
		case math.IsNaN(before) || math.IsNaN(v) || v == 0 || before == 0:
		case (before < 0) != (v < 0):
			if x, err := bracketed(grid[i-1], before, grid[i], v, plain); err == nil && !math.IsNaN(f(x)) {
				found(x)
			}
		case i >= 2 && (values[i-2] < 0) == (v < 0) && math.Abs(before) <= math.Abs(values[i-2]) && math.Abs(before) <= math.Abs(v):
			// A turn towards zero around the neighbour before.
			x, fx, crosses := turning(grid[i-2], grid[i], f)
			if !crosses {
				continue
			}
			for _, end := range []int{i - 2, i} {
				if r, err := bracketed(grid[end], values[end], x, fx, plain); err == nil && !math.IsNaN(f(r)) {
					found(r)
				}
			}
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
