package machine

import "math"

const (
	// bracketWidth is the width of the last bracket over the value, near rounding.
	bracketWidth = 1e-15
	// bracketSteps is more than bisection alone needs from any bracket here.
	bracketSteps = 120
)

// bracketed returns where f passes zero between a and b, where it must have opposite signs, by the inverse quadratic
// interpolation of Chandrupatla 1997, Advances in Engineering Software 28. It ends with the first error of f. Where f has
// one sign at both ends it returns the end that is closer to zero.
func bracketed(a, b float64, f func(float64) (float64, error)) (float64, error) {
	fa, err := f(a)
	if err != nil || fa == 0 {
		return a, err
	}
	fb, err := f(b)
	if err != nil || fb == 0 {
		return b, err
	}
	x, _, err := narrowed(a, fa, b, fb, 0, f)
	return x, err
}

// narrowed is [bracketed] with known ends; it also stops where f is at most enough from zero. The other end of the last
// bracket comes along.
func narrowed(a, fa, b, fb, enough float64, f func(float64) (float64, error)) (best, other float64, err error) {
	best, other = a, b
	if math.Abs(fb) < math.Abs(fa) {
		best, other = b, a
	}
	if !(fa*fb < 0) {
		return best, best, nil
	}
	var c, fc float64 // the end before the last, for the interpolation
	t := 0.5
	for range bracketSteps {
		x := a + t*(b-a)
		fx, err := f(x)
		if err != nil {
			return x, x, err
		}
		if (fx < 0) == (fa < 0) {
			c, fc = a, fa
		} else {
			c, fc = b, fb
			b, fb = a, fa
		}
		a, fa = x, fx
		least := fa
		best, other = a, b
		if math.Abs(fb) < math.Abs(fa) {
			best, other, least = b, a, fb
		}
		limit := bracketWidth * math.Abs(best) / math.Abs(b-a)
		if limit > 0.5 || math.Abs(least) <= enough {
			break
		}
		xi, phi := (a-b)/(c-b), (fa-fb)/(fc-fb)
		if phi*phi < xi && (1-phi)*(1-phi) < 1-xi {
			t = fa/(fb-fa)*fc/(fb-fc) + (c-a)/(b-a)*fa/(fc-fa)*fb/(fc-fb)
		} else {
			t = 0.5
		}
		t = min(1-limit, max(limit, t))
	}
	return best, other, nil
}
