// Package precise evaluates equations of state with about fifty digits, term by term as their sources print them, and
// solves equilibria with them. Tests hold the fast evaluation against it, to tell rounding from error; nothing else may
// use it. It shares with that evaluation the coefficients and nothing more: derivatives come from the arithmetic of
// truncated Taylor series, exponentials and logarithms from series of their own.
package precise

import (
	"math"
	"math/big"
)

// bits is the length of the mantissas: 57 digits, of which some seven go to range reduction and cancellation.
const bits = 192

func zero() *big.Float { return new(big.Float).SetPrec(bits) }

// Number returns x, exactly.
func Number(x float64) *big.Float { return zero().SetFloat64(x) }

func add(a, b *big.Float) *big.Float { return zero().Add(a, b) }
func sub(a, b *big.Float) *big.Float { return zero().Sub(a, b) }
func mul(a, b *big.Float) *big.Float { return zero().Mul(a, b) }
func quo(a, b *big.Float) *big.Float { return zero().Quo(a, b) }

// Float returns the float64 nearest to x.
func Float(x *big.Float) float64 {
	f, _ := x.Float64()
	return f
}

// Deviation returns (x - want)/want, formed before it is rounded.
func Deviation(x float64, want *big.Float) float64 { return Float(quo(sub(Number(x), want), want)) }

// ln2 is 2 artanh(1/3).
var ln2 = func() *big.Float {
	sum, power, nine := zero(), quo(Number(2), Number(3)), Number(9)
	for k := 1; power.MantExp(nil) > -bits-4; k += 2 {
		sum.Add(sum, quo(power, Number(float64(k))))
		power.Quo(power, nine)
	}
	return sum
}()

// exp returns e^x by the Taylor series of a small part of x, which is then doubled up.
func exp(x *big.Float) *big.Float {
	const doublings = 12
	k := math.Round(Float(x) / math.Ln2)
	r := sub(x, mul(Number(k), ln2))
	r.SetMantExp(r, -doublings)
	sum, term := Number(1), Number(1)
	for i := 1; term.Sign() != 0 && term.MantExp(nil) > -bits-4; i++ {
		term.Mul(term, r)
		term.Quo(term, Number(float64(i)))
		sum.Add(sum, term)
	}
	for range doublings {
		sum.Mul(sum, sum)
	}
	return sum.SetMantExp(sum, int(k))
}

// log returns ln x by Halley's iteration on exp, which triples the digits of each start.
func log(x *big.Float) *big.Float {
	m, e := zero(), 0
	if f := Float(x); f > 0.7 && f < 1.5 {
		m.Set(x) // the sum of two logarithms would cancel
	} else {
		e = x.MantExp(m)
	}
	y := Number(math.Log(Float(m)))
	for range 2 { // 16, 48, all digits
		z := exp(y)
		step := quo(sub(m, z), add(m, z))
		y.Add(y, step.SetMantExp(step, 1))
	}
	return add(y, mul(Number(float64(e)), ln2))
}

// whole returns x^n for n >= 0.
func whole(x *big.Float, n int) *big.Float {
	y, x := Number(1), zero().Set(x)
	for ; n > 0; n >>= 1 {
		if n&1 == 1 {
			y.Mul(y, x)
		}
		x.Mul(x, x)
	}
	return y
}
