package cycle

import (
	"fmt"
	"math"
)

// rootTolerance is the width of the last bracket over the value: pressures far closer than any property is known.
const rootTolerance = 1e-13

// rootSteps is more than bisection alone needs for rootTolerance from any bracket here.
const rootSteps = 100

// BracketError reports that a function did not change its sign between two values.
type BracketError struct{ A, B, FA, FB float64 }

func (e *BracketError) Error() string {
	return fmt.Sprintf("no change of sign between %g (%g) and %g (%g)", e.A, e.FA, e.B, e.FB)
}

// root returns where f passes zero between a and b, at which it is fa and fb, by the bracketed inverse quadratic
// interpolation of Chandrupatla 1997, Advances in Engineering Software 28. It returns a [*BracketError] when both have the
// same sign.
func root(a, fa, b, fb float64, f func(float64) float64) (float64, error) {
	if fa == 0 {
		return a, nil
	}
	if fb == 0 {
		return b, nil
	}
	if !(fa*fb < 0) {
		return nan, &BracketError{a, b, fa, fb}
	}
	var c, fc float64 // the end before the last, for the interpolation
	t := 0.5
	for range rootSteps {
		x := a + t*(b-a)
		fx := f(x)
		if (fx < 0) == (fa < 0) {
			c, fc = a, fa
		} else {
			c, fc = b, fb
			b, fb = a, fa
		}
		a, fa = x, fx
		best, least := a, fa
		if math.Abs(fb) < math.Abs(fa) {
			best, least = b, fb
		}
		limit := rootTolerance * math.Abs(best) / math.Abs(b-a)
		if limit > 0.5 || least == 0 {
			return best, nil
		}
		xi, phi := (a-b)/(c-b), (fa-fb)/(fc-fb)
		if phi*phi < xi && (1-phi)*(1-phi) < 1-xi {
			t = fa/(fb-fa)*fc/(fb-fc) + (c-a)/(b-a)*fa/(fc-fa)*fb/(fc-fb)
		} else {
			t = 0.5
		}
		t = min(1-limit, max(limit, t))
	}
	return a, nil
}
