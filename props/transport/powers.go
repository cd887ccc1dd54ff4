package transport

import (
	"fmt"
	"math"
	"slices"
)

// maxPowers bounds the distinct exponents of one variable in a sum, so that their values can live on the stack.
const maxPowers = 16

// powers is a set of distinct exponents.
type powers []float64

// index returns where exponent t stands in the set, adding it when it is new.
func (p *powers) index(t float64) uint8 {
	i := slices.Index(*p, t)
	if i < 0 {
		i = len(*p)
		*p = append(*p, t)
	}
	return uint8(i)
}

func (p powers) check() error {
	if len(p) > maxPowers {
		return fmt.Errorf("%d distinct exponents, at most %d are supported", len(p), maxPowers)
	}
	return nil
}

// of fills out with the powers of x, which must not be negative.
func (p powers) of(x float64, out *[maxPowers]float64) {
	b := base{x: x}
	for i, t := range p {
		out[i&(maxPowers-1)] = b.power(t)
	}
}

// base is a number whose powers are wanted. Its logarithm is taken once, when the first broken exponent comes.
type base struct{ x, ln float64 }

// power returns x^t. Whole exponents are exact and defined at x = 0.
func (b *base) power(t float64) float64 {
	n := int(math.Abs(t))
	if float64(n) != math.Abs(t) || n > 32 {
		if b.ln == 0 {
			b.ln = math.Log(b.x)
		}
		return math.Exp(t * b.ln)
	}
	y := 1.0
	for z := b.x; n > 0; n >>= 1 {
		if n&1 == 1 {
			y *= z
		}
		z *= z
	}
	if t < 0 {
		return 1 / y
	}
	return y
}

// polynomial returns sum rows[i][0]*x^rows[i][1].
func polynomial(rows [][2]float64, x float64) float64 {
	b := base{x: x}
	var sum float64
	for _, r := range rows {
		sum += r[0] * b.power(r[1])
	}
	return sum
}

// horner returns c[0] + c[1]*x + c[2]*x^2 + ...
func horner(c []float64, x float64) float64 {
	var sum float64
	for _, v := range slices.Backward(c) {
		sum = sum*x + v
	}
	return sum
}
