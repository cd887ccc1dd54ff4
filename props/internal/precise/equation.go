package precise

import (
	"math"
	"math/big"

	"dewmark/props/helmholtz"
)

// Equation evaluates the equation of state that coefficients define.
type Equation struct{ c helmholtz.Coefficients }

// New returns the evaluator of c, which helmholtz.New must have accepted.
func New(c helmholtz.Coefficients) *Equation { return &Equation{c: c} }

// Alpha is a Helmholtz energy with its reduced derivatives, members as in helmholtz.Alpha.
type Alpha struct{ A, D, T, DD, DT, TT *big.Float }

// Each calls f with the name of every member.
func (a Alpha) Each(f func(name string, v *big.Float)) {
	for _, m := range []struct {
		name string
		v    *big.Float
	}{{"A", a.A}, {"D", a.D}, {"T", a.T}, {"DD", a.DD}, {"DT", a.DT}, {"TT", a.TT}} {
		f(m.name, m.v)
	}
}

// reduced turns partial derivatives into reduced ones.
func (a *jet) reduced(tau, delta *big.Float) Alpha {
	return Alpha{
		A: a.v, D: mul(delta, a.d), T: mul(tau, a.t),
		DD: mul(mul(delta, delta), a.dd), DT: mul(mul(delta, tau), a.dt), TT: mul(mul(tau, tau), a.tt),
	}
}

// Residual returns the residual part at T in K and rho in mol/m3, and for each member the sum of the absolute
// contributions of the terms, against which the rounding of any summation is to be seen.
func (e *Equation) Residual(T, rho *big.Float) (sum, size Alpha) {
	tau, delta := constant(0), constant(0)
	tau.v, tau.t = quo(Number(e.c.ReducingTemperature), T), Number(1)
	delta.v, delta.d = quo(rho, Number(e.c.ReducingDensity)), Number(1)
	total, absolute := constant(0), constant(0)
	term := func(j *jet) {
		total = total.plus(j)
		absolute = absolute.plus(each(j, j, func(x, _ *big.Float) *big.Float { return zero().Abs(x) }))
	}
	r := e.c.Residual
	for _, k := range r.Polynomial {
		term(monomial(k, tau, delta))
	}
	for _, k := range r.Exponential {
		g := 1.0
		if len(k) == 5 {
			g = k[4]
		}
		term(monomial(k, tau, delta).times(delta.power(k[3]).scaled(-g).exp()))
	}
	for _, k := range r.DoubleExponential {
		x := delta.power(k[3]).plus(tau.power(k[4]))
		term(monomial(k, tau, delta).times(x.scaled(-1).exp()))
	}
	for _, k := range r.Gaussian {
		x := delta.minus(k[6]).power(2).scaled(-k[3]).plus(tau.minus(k[5]).power(2).scaled(-k[4]))
		term(monomial(k, tau, delta).times(x.exp()))
	}
	for _, k := range r.Associating {
		b := tau.minus(k[5]).power(2).scaled(k[4]).plus(constant(k[7]))
		x := delta.minus(k[6]).power(2).scaled(-k[3]).plus(b.inverse())
		term(monomial(k, tau, delta).times(x.exp()))
	}
	for _, k := range r.NonAnalytic {
		term(peak(k, tau, delta))
	}
	return total.reduced(tau.v, delta.v), absolute.reduced(tau.v, delta.v)
}

// monomial is n tau^t delta^d of the first three numbers of a row.
func monomial(k []float64, tau, delta *jet) *jet {
	return tau.power(k[1]).times(delta.power(k[2])).scaled(k[0])
}

// peak is a non-analytic term: n Delta^b delta psi.
func peak(k []float64, tau, delta *jet) *jet {
	n, a, b, beta, capA, capB, capC, capD := k[0], k[1], k[2], k[3], k[4], k[5], k[6], k[7]
	q := delta.minus(1).power(2)
	theta := tau.scaled(-1).plus(constant(1)).plus(q.power(1 / (2 * beta)).scaled(capA))
	dist := theta.power(2).plus(q.power(a).scaled(capB))
	psi := q.scaled(-capC).plus(tau.minus(1).power(2).scaled(-capD)).exp()
	return dist.power(b).times(delta).times(psi).scaled(n)
}

// Ideal returns the ideal part at T in K without ln(delta); the members with a derivative in delta are zero.
func (e *Equation) Ideal(T *big.Float) Alpha {
	tau := constant(0)
	tau.v, tau.t = quo(Number(e.c.ReducingTemperature), T), Number(1)
	p := e.c.Ideal
	sum := constant(p.Constant).plus(tau.scaled(p.Tau)).plus(tau.log().scaled(p.LnTau)).plus(tau.times(tau.log()).scaled(p.TauLnTau))
	for _, k := range p.TauPowers {
		sum = sum.plus(tau.power(k[1]).scaled(k[0]))
	}
	for _, k := range p.PlanckEinstein {
		x := tau.scaled(-k[1]).exp().scaled(-1).plus(constant(1))
		sum = sum.plus(x.log().scaled(k[0]))
	}
	return sum.reduced(tau.v, Number(1))
}

// Pressure returns the pressure in Pa at T in K and rho in mol/m3.
func (e *Equation) Pressure(T, rho *big.Float) *big.Float {
	r, _ := e.Residual(T, rho)
	return mul(mul(rho, add(Number(1), r.D)), mul(Number(e.c.GasConstant), T))
}

// small reports whether x is below 10^-digits.
func small(x *big.Float, digits float64) bool {
	return x.Sign() == 0 || float64(x.MantExp(nil)) < -digits*math.Log2(10)
}
