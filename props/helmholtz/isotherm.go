package helmholtz

import "math"

// Isotherm holds everything of an equation that depends on temperature alone. Set it once, then evaluate it at many
// densities. The zero value is not usable before Set. An Isotherm is not safe for concurrent use; it needs no heap.
type Isotherm struct {
	eq       *Equation
	T        float64 // K
	Tau      float64
	Ideal    Alpha // ideal part without ln(delta): A, T and TT are set
	weights  [maxShapes]weight
	powers   [maxPowers]float64 // scratch of Set
	peakTau1 float64            // tau - 1
}

// weight is the coefficient of a shape and its reduced derivatives in tau.
type weight struct{ c, ct, ctt float64 }

// Set prepares the isotherm of e at temperature T in K, which must be positive.
func (s *Isotherm) Set(e *Equation, T float64) {
	s.eq, s.T = e, T
	tau := e.TRed / T
	s.Tau = tau
	if len(e.peaks) > 0 {
		s.peakTau1 = (e.TRed - T) / T
	}
	lnTau := log(tau)

	pw := &s.powers
	pw[0], pw[1] = 1, tau
	const mask = maxPowers - 1 // an index within the table needs no bounds check
	for _, k := range e.powers.roots {
		pw[k.at&mask] = math.Sqrt(pw[k.a&mask])
	}
	for _, k := range e.powers.inverses {
		pw[k.at&mask] = 1 / pw[k.a&mask]
	}
	for _, i := range e.powers.exps {
		pw[i&mask] = exp(e.powers.t[i] * lnTau)
	}
	for _, k := range e.powers.products {
		pw[k.at&mask] = pw[k.a&mask] * pw[k.b&mask]
	}

	weights := s.weights[:len(e.first)]
	for i := range e.first {
		k := &e.first[i]
		z := pw[k.power&mask]
		weights[i] = weight{k.n * z, k.nt * z, k.ntt * z}
	}
	for i := range e.plain {
		k := &e.plain[i]
		w, z := &s.weights[k.shape], pw[k.power&mask]
		w.c += k.n * z
		w.ct += k.nt * z
		w.ctt += k.ntt * z
	}
	for i := range e.special {
		k := &e.special[i]
		w := &s.weights[k.shape]
		c, a := k.n*pw[k.power&mask], k.t
		switch k.kind {
		case tauExp:
			u := pw[k.mPower&mask]
			v := k.beta * u
			c *= exp(-u)
			a -= v
			w.ctt += c * (a*(a-1) - k.beta*v)
		case tauBell:
			x := tau - k.gamma
			c *= exp(-k.beta * x * x)
			a -= 2 * k.beta * tau * x
			w.ctt += c * (a*(a-1) - 2*k.beta*tau*(tau+x))
		case tauInvert:
			x := tau - k.gamma
			q := 1 / (k.beta*x*x + k.b)
			c *= exp(q)
			g := 2 * k.beta * tau * x * q * q // -tau dq/dtau
			a -= g
			w.ctt += c * (a*(a-1) - 2*k.beta*tau*(tau+x)*q*q + 2*g*g/q)
		}
		w.c += c
		w.ct += c * a
	}

	p := &e.ideal
	s.Ideal = Alpha{
		A:  p.Constant + p.Tau*tau + p.LnTau*lnTau + p.TauLnTau*tau*lnTau,
		T:  p.Tau*tau + p.LnTau + p.TauLnTau*tau*(lnTau+1),
		TT: -p.LnTau + p.TauLnTau*tau,
	}
	for _, k := range p.powers {
		z := pw[k.power&mask]
		s.Ideal.A += k.n * z
		s.Ideal.T += k.nt * z
		s.Ideal.TT += k.ntt * z
	}
	for _, r := range p.PlanckEinstein {
		x := r[1] * tau
		y := exp(-x)
		f := 1 / (1 - y)
		y *= x * f
		s.Ideal.A -= r[0] * log(f)
		s.Ideal.T += r[0] * y
		s.Ideal.TT -= r[0] * x * y * f
	}
}

// Density returns delta * d alpha/d delta and delta^2 * d2 alpha/d delta2 of the residual part at density rho in mol/m3:
// all that a search for the density at a given pressure needs, at half the price of [Isotherm.Residual].
func (s *Isotherm) Density(rho float64) (d, dd float64) {
	e := s.eq
	if len(e.peaks) > 0 {
		r := s.Residual(rho)
		return r.D, r.DD
	}
	delta := rho / e.RhoRed
	var pow [deltaPowers]float64
	e.fillPowers(&pow, delta)
	for i := range e.groups {
		g := &e.groups[i]
		var a0, a1, a2 float64
		for j := g.from; j < g.to; j++ {
			sh := &e.shapes[j]
			c := s.weights[j].c * pow[sh.at&(deltaPowers-1)]
			dc := sh.d * c
			a0 += c
			a1 += dc
			a2 += (sh.d - 1) * dc
		}
		if g.l == 0 {
			d += a1
			dd += a2
			continue
		}
		v := g.g * pow[g.l&(deltaPowers-1)]
		u := g.lf * v
		f := exp(-v)
		d += f * (a1 - u*a0)
		dd += f * (a2 - 2*u*a1 + u*(u-g.lf+1)*a0)
	}
	for i := range e.bells {
		b := &e.bells[i]
		sh := &e.shapes[b.at]
		x := delta - b.epsilon
		a := sh.d - 2*b.eta*delta*x
		c := s.weights[b.at].c * pow[sh.at&(deltaPowers-1)] * exp(-b.eta*x*x)
		d += c * a
		dd += c * (a*(a-1) - 2*b.eta*delta*(delta+x))
	}
	return d, dd
}

// fillPowers sets the powers of delta that the shapes use, even and odd ones in turn so that they do not wait for each
// other.
func (e *Equation) fillPowers(pow *[deltaPowers]float64, delta float64) {
	square := delta * delta
	pow[0], pow[1] = 1, delta
	for i := 2; i <= e.maxDelta; i++ {
		pow[i&(deltaPowers-1)] = pow[(i-2)&(deltaPowers-1)] * square
	}
	for i, d := range e.fraction {
		pow[(maxPower+1+i)&(deltaPowers-1)] = math.Pow(delta, d)
	}
}

// Residual returns the residual part and its derivatives at density rho in mol/m3, which must be positive.
func (s *Isotherm) Residual(rho float64) Alpha {
	e := s.eq
	delta := rho / e.RhoRed
	var pow [deltaPowers]float64
	e.fillPowers(&pow, delta)
	var out Alpha
	for i := range e.groups {
		g := &e.groups[i]
		var a0, a1, a2, t0, t1, tt float64
		for j := g.from; j < g.to; j++ {
			w, sh := &s.weights[j], &e.shapes[j]
			z := pow[sh.at&(deltaPowers-1)]
			c, ct := w.c*z, w.ct*z
			dc := sh.d * c
			a0 += c
			a1 += dc
			a2 += (sh.d - 1) * dc
			t0 += ct
			t1 += sh.d * ct
			tt += w.ctt * z
		}
		if g.l == 0 {
			out.A += a0
			out.D += a1
			out.DD += a2
			out.T += t0
			out.DT += t1
			out.TT += tt
			continue
		}
		v := g.g * pow[g.l&(deltaPowers-1)]
		u := g.lf * v
		f := exp(-v)
		out.A += f * a0
		out.D += f * (a1 - u*a0)
		out.DD += f * (a2 - 2*u*a1 + u*(u-g.lf+1)*a0)
		out.T += f * t0
		out.DT += f * (t1 - u*t0)
		out.TT += f * tt
	}
	for i := range e.bells {
		b := &e.bells[i]
		w, sh := &s.weights[b.at], e.shapes[b.at]
		x := delta - b.epsilon
		f := pow[sh.at&(deltaPowers-1)] * exp(-b.eta*x*x)
		a := sh.d - 2*b.eta*delta*x
		c := f * w.c
		out.A += c
		out.D += c * a
		out.DD += c * (a*(a-1) - 2*b.eta*delta*(delta+x))
		out.T += f * w.ct
		out.DT += f * w.ct * a
		out.TT += f * w.ctt
	}
	if len(e.peaks) > 0 {
		s.addPeaks(&out, delta, (rho-e.RhoRed)/e.RhoRed)
	}
	return out
}
