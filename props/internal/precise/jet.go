package precise

import "math/big"

// jet is a function of tau and delta: its value and its partial derivatives to second order at one point.
type jet struct {
	v, d, t, dd, dt, tt *big.Float
	ln                  *big.Float // ln v, once it was needed
}

func constant(x float64) *jet {
	return &jet{v: Number(x), d: zero(), t: zero(), dd: zero(), dt: zero(), tt: zero()}
}

// each combines two jets member by member.
func each(a, b *jet, f func(x, y *big.Float) *big.Float) *jet {
	return &jet{v: f(a.v, b.v), d: f(a.d, b.d), t: f(a.t, b.t), dd: f(a.dd, b.dd), dt: f(a.dt, b.dt), tt: f(a.tt, b.tt)}
}

func (a *jet) plus(b *jet) *jet { return each(a, b, add) }

func (a *jet) minus(x float64) *jet { return a.plus(constant(-x)) }

func (a *jet) scaled(x float64) *jet {
	n := Number(x)
	return each(a, a, func(y, _ *big.Float) *big.Float { return mul(n, y) })
}

// times is the product rule.
func (a *jet) times(b *jet) *jet {
	twice := func(x *big.Float) *big.Float { return x.SetMantExp(x, 1) }
	return &jet{
		v:  mul(a.v, b.v),
		d:  add(mul(a.d, b.v), mul(a.v, b.d)),
		t:  add(mul(a.t, b.v), mul(a.v, b.t)),
		dd: add(add(mul(a.dd, b.v), mul(a.v, b.dd)), twice(mul(a.d, b.d))),
		tt: add(add(mul(a.tt, b.v), mul(a.v, b.tt)), twice(mul(a.t, b.t))),
		dt: add(add(mul(a.dt, b.v), mul(a.v, b.dt)), add(mul(a.d, b.t), mul(a.t, b.d))),
	}
}

// through is the chain rule for a function with value f and derivatives f1 and f2 at a.
func (a *jet) through(f, f1, f2 *big.Float) *jet {
	second := func(x, y, xy *big.Float) *big.Float { return add(mul(f2, mul(x, y)), mul(f1, xy)) }
	return &jet{v: f, d: mul(f1, a.d), t: mul(f1, a.t), dd: second(a.d, a.d, a.dd), dt: second(a.d, a.t, a.dt), tt: second(a.t, a.t, a.tt)}
}

func (a *jet) exp() *jet {
	e := exp(a.v)
	return a.through(e, e, e)
}

func (a *jet) log() *jet {
	if a.ln == nil {
		a.ln = log(a.v)
	}
	inverse := quo(Number(1), a.v)
	return a.through(a.ln, inverse, zero().Neg(mul(inverse, inverse)))
}

func (a *jet) inverse() *jet {
	f := quo(Number(1), a.v)
	f1 := zero().Neg(mul(f, f))
	return a.through(f, f1, mul(Number(-2), mul(f1, f)))
}

// power returns a^x for positive a, and for any a where x is a small whole number.
func (a *jet) power(x float64) *jet {
	if n := int(x); float64(n) == x && n >= 0 && n <= 64 {
		below := func(k int) *big.Float { // derivative of order k of a^n
			if n < k {
				return zero()
			}
			p := whole(a.v, n-k)
			for i := range k {
				p.Mul(p, Number(float64(n-i)))
			}
			return p
		}
		return a.through(below(0), below(1), below(2))
	}
	if a.ln == nil {
		a.ln = log(a.v)
	}
	f := exp(mul(Number(x), a.ln))
	f1 := quo(mul(Number(x), f), a.v)
	return a.through(f, f1, quo(mul(sub(Number(x), Number(1)), f1), a.v))
}
