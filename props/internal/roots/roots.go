// Package roots finds zeros of functions of one variable within brackets.
package roots

import "math"

// Bracketed solves f(x) = 0 between a and b, where f has opposite signs, by the Illinois variant of regula falsi with
// bisection whenever three steps have not halved the bracket. It stops at rounding, or when f fails.
func Bracketed(a, fa, b, fb float64, f func(float64) (float64, error)) (float64, error) {
	const limit = 200
	best, least := a, math.Abs(fa)
	if math.Abs(fb) < least {
		best, least = b, math.Abs(fb)
	}
	width := math.Abs(b - a)
	for i := range limit {
		x := b - fb*(b-a)/(fb-fa)
		if i%3 == 2 {
			if math.Abs(b-a) > width/2 {
				x = a + (b-a)/2
			}
			width = math.Abs(b - a)
		}
		if least == 0 || math.Abs(b-a) <= 4e-16*math.Abs(b) {
			break
		}
		if x == a || x == b { // the step is lost in rounding, next to a root or because f is far steeper at one end
			if x = a + (b-a)/2; x == a || x == b {
				break
			}
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

// All calls found with every zero of the continuous function f between the first and the last value of the
// rising grid. f returns its value and its slope, or NaN for a slope that it does not know. Between neighbours one zero
// is seen, or two when f turns back once in between; the grid must be fine enough for that. Where f is NaN there is
// nothing to find.
func All(grid []float64, f func(x float64) (v, slope float64), found func(x float64)) {
	value := func(x float64) float64 { v, _ := f(x); return v }
	plain := func(x float64) (float64, error) { return value(x), nil }
	var x0, f0, x1, f1, d1 float64
	run := 0 // consecutive values of f that exist
	for _, x2 := range grid {
		f2, d2 := f(x2)
		if math.IsNaN(f2) {
			run = 0
			continue
		}
		run++
		from, ahead := x1, false // whether f may turn towards zero, and from where
		switch {
		case f2 == 0:
			found(x2)
		case run < 2 || f1 == 0:
		case (f1 < 0) != (f2 < 0):
			x, _ := Bracketed(x1, f1, x2, f2, plain)
			found(x)
		case !math.IsNaN(d1) && !math.IsNaN(d2):
			ahead = (d1 < 0) == (f1 > 0) && (d2 < 0) != (f2 > 0)
		case run > 2 && (f0 < 0) == (f1 < 0):
			from, ahead = x0, math.Abs(f1) < math.Abs(f0) && math.Abs(f1) < math.Abs(f2)
		}
		if ahead {
			if xm, fm, crosses := Turning(from, x2, value); crosses {
				a, _ := Bracketed(from, value(from), xm, fm, plain)
				b, _ := Bracketed(xm, fm, x2, f2, plain)
				found(a)
				if b != a {
					found(b)
				}
			}
		}
		x0, f0, x1, f1, d1 = x1, f1, x2, f2, d2
	}
}

// Turning looks for the extremum of f towards zero between a and b by golden section and reports whether f crosses
// zero on the way.
func Turning(a, b float64, f func(float64) float64) (x, fx float64, crosses bool) {
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
