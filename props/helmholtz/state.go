package helmholtz

import (
	"math"

	"dewmark/props/internal/elementary"
)

// At sets ideal to the ideal part without its ln(delta) and out to the residual part at T in K and rho in mol/m3, which must
// be positive. It is what an [Isotherm] gives that is set for one density, for two thirds of the time.
func (e *Equation) At(T, rho float64, ideal, out *Alpha) {
	tau, delta := e.TRed/T, rho/e.RhoRed
	lnTau := elementary.Log(tau)
	var pw [maxPowers]float64
	e.powers.fill(&pw, tau, 1/tau, lnTau)
	var pow [deltaPowers]float64
	e.fillPowers(&pow, delta)
	const mask, deltaMask = maxPowers - 1, deltaPowers - 1 // an index within a table needs no bounds check

	e.ideal.at(&pw, tau, lnTau, ideal)
	*out = Alpha{}
	for i := range e.groups {
		g := &e.groups[i]
		var a, d, dd, t, dt, tt float64
		for j := g.first; j < g.last; j++ {
			k := &e.terms[j]
			z := k.n * pw[k.tau&mask] * pow[k.delta&deltaMask]
			zd, zt := k.d*z, k.t*z
			a += z
			d += zd
			dd += k.d1 * zd
			t += zt
			dt += k.d * zt
			tt += k.t1 * zt
		}
		if g.l == 0 {
			out.A += a
			out.D += d
			out.DD += dd
			out.T += t
			out.DT += dt
			out.TT += tt
			continue
		}
		// As in Isotherm.Residual: a function for both costs a fifth of the whole here.
		v := g.g * pow[g.l&deltaMask]
		u := g.lf * v
		f := elementary.Exp(-v)
		out.A += f * a
		out.D += f * (d - u*a)
		out.DD += f * (dd - 2*u*d + u*(u-g.lf+1)*a)
		out.T += f * t
		out.DT += f * (dt - u*t)
		out.TT += f * tt
	}
	for i := range e.special {
		k := &e.special[i]
		sh := &e.shapes[k.shape]
		q, t, tt := k.factor(&pw, tau)
		var d, dd float64
		if k.bell >= 0 {
			b := &e.bells[k.bell]
			x := delta - b.epsilon
			q -= b.eta * x * x
			d = sh.d - 2*b.eta*delta*x
			dd = d*(d-1) - 2*b.eta*delta*(delta+x)
		} else {
			g := &e.groups[k.group]
			v := g.g * pow[g.l&deltaMask]
			u := g.lf * v
			if g.l == 0 {
				v = 0
			}
			q -= v
			d = sh.d - u
			dd = d*(d-1) - u*g.lf
		}
		z := k.n * pw[k.power&mask] * pow[sh.at&deltaMask] * elementary.Exp(q)
		out.A += z
		out.D += d * z
		out.DD += dd * z
		out.T += t * z
		out.DT += d * t * z
		out.TT += tt * z
	}
	if len(e.peaks) > 0 {
		e.addPeaks(out, tau, (e.TRed-T)/T, delta, (rho-e.RhoRed)/e.RhoRed)
	}
}

// fill sets the table.
func (p *powerTable) fill(pw *[maxPowers]float64, tau, inverse, lnTau float64) {
	const mask = maxPowers - 1
	pw[0], pw[1], pw[2] = 1, tau, inverse
	for i := range p.roots {
		k := &p.roots[i]
		pw[k.at&mask] = math.Sqrt(pw[k.a&mask])
	}
	for _, i := range p.exps {
		pw[i&mask] = elementary.Exp(p.t[i] * lnTau)
	}
	for i := range p.products {
		k := &p.products[i]
		pw[k.at&mask] = pw[k.a&mask] * pw[k.b&mask]
	}
}

// factor returns the logarithm q of the further factor in tau, and what tau^t e^q is multiplied with by its first and second reduced
// derivatives.
func (k *specialTerm) factor(pw *[maxPowers]float64, tau float64) (q, t, tt float64) {
	t = k.t
	switch k.kind {
	case tauExp:
		u := pw[k.mPower&(maxPowers-1)]
		v := k.beta * u
		t -= v
		return -u, t, t*(t-1) - k.beta*v
	case tauBell:
		x := tau - k.gamma
		t -= 2 * k.beta * tau * x
		return -k.beta * x * x, t, t*(t-1) - 2*k.beta*tau*(tau+x)
	default: // tauInvert
		x := tau - k.gamma
		q = 1 / (k.beta*x*x + k.b)
		g := 2 * k.beta * tau * x * q * q // -tau dq/dtau
		t -= g
		return q, t, t*(t-1) - 2*k.beta*tau*(tau+x)*q*q + 2*g*g/q
	}
}

// at sets out to the ideal part: A without ln(delta), T and TT.
func (p *ideal) at(pw *[maxPowers]float64, tau, lnTau float64, out *Alpha) {
	a := p.Constant + p.Tau*tau + p.LnTau*lnTau + p.TauLnTau*tau*lnTau
	t := p.Tau*tau + p.LnTau + p.TauLnTau*tau*(lnTau+1)
	tt := p.TauLnTau*tau - p.LnTau
	for i := range p.powers {
		k := &p.powers[i]
		z := pw[k.power&(maxPowers-1)]
		a += k.n * z
		t += k.nt * z
		tt += k.ntt * z
	}
	for i := range p.PlanckEinstein {
		r := &p.PlanckEinstein[i]
		x := r[1] * tau
		y := elementary.Exp(-x)
		f := 1 / (1 - y)
		y *= x * f
		a -= r[0] * elementary.Log(f)
		t += r[0] * y
		tt -= r[0] * x * y * f
	}
	*out = Alpha{A: a, T: t, TT: tt}
}
