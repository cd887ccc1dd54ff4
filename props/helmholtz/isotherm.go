package helmholtz

import "math"

// Isotherm holds everything of an equation that depends on temperature alone. Set it once, then evaluate it at many
// densities. The zero value is not usable before Set. An Isotherm is not safe for concurrent use; it needs no heap.
type Isotherm struct {
	eq       *Equation
	T        float64 // K
	Tau      float64
	Ideal    Alpha // ideal part without ln(delta): A, T and TT are set
	weights  [maxTerms]weight
	peakTau1 float64 // tau - 1
}

// weight is the coefficient of a shape and its reduced derivatives in tau.
type weight struct{ c, ct, ctt float64 }

// Set prepares the isotherm of e at temperature T in K, which must be positive.
func (s *Isotherm) Set(e *Equation, T float64) {
	s.eq, s.T = e, T
	tau := e.TRed / T
	s.Tau, s.peakTau1 = tau, (e.TRed-T)/T
	lnTau := math.Log(tau)

	var pw [maxTerms]float64
	for i, t := range e.powers {
		pw[i] = power(tau, lnTau, t)
	}
	for i := range e.shapes {
		s.weights[i] = weight{}
	}
	for i := range e.terms {
		k := &e.terms[i]
		w := &s.weights[k.shape]
		c, a := k.n*pw[k.power], k.t
		switch k.kind {
		case tauPlain:
			w.c += c
			w.ct += c * a
			w.ctt += c * a * (a - 1)
			continue
		case tauExp:
			u := power(tau, lnTau, k.beta)
			v := k.beta * u
			c *= math.Exp(-u)
			a -= v
			w.ctt += c * (a*(a-1) - k.beta*v)
		case tauBell:
			x := tau - k.gamma
			c *= math.Exp(-k.beta * x * x)
			a -= 2 * k.beta * tau * x
			w.ctt += c * (a*(a-1) - 2*k.beta*tau*(tau+x))
		case tauInvert:
			x := tau - k.gamma
			q := 1 / (k.beta*x*x + k.b)
			c *= math.Exp(q)
			g := 2 * k.beta * tau * x * q * q // -tau dq/dtau
			a -= g
			w.ctt += c * (a*(a-1) - 2*k.beta*tau*(tau+x)*q*q + 2*g*g/q)
		}
		w.c += c
		w.ct += c * a
	}
	s.setIdeal(lnTau)
}

func (s *Isotherm) setIdeal(lnTau float64) {
	p, tau := &s.eq.ideal, s.Tau
	s.Ideal = Alpha{
		A:  p.Constant + p.Tau*tau + p.LnTau*lnTau + p.TauLnTau*tau*lnTau,
		T:  p.Tau*tau + p.LnTau + p.TauLnTau*tau*(lnTau+1),
		TT: -p.LnTau + p.TauLnTau*tau,
	}
	for _, r := range p.TauPowers {
		c := r[0] * power(tau, lnTau, r[1])
		s.Ideal.A += c
		s.Ideal.T += c * r[1]
		s.Ideal.TT += c * r[1] * (r[1] - 1)
	}
	for _, r := range p.PlanckEinstein {
		x := r[1] * tau
		e := math.Exp(-x)
		y := x * e / (1 - e)
		s.Ideal.A += r[0] * math.Log(1-e)
		s.Ideal.T += r[0] * y
		s.Ideal.TT -= r[0] * x * y / (1 - e)
	}
}

// Residual returns the residual part and its derivatives at density rho in mol/m3, which must be positive.
func (s *Isotherm) Residual(rho float64) Alpha {
	e := s.eq
	delta := rho / e.RhoRed
	var pow [deltaPowers]float64
	pow[0] = 1
	for i := 1; i <= e.maxDelta; i++ {
		pow[i] = pow[i-1] * delta
	}
	for i, d := range e.fraction {
		pow[(maxPower+1+i)&(deltaPowers-1)] = math.Pow(delta, d)
	}
	var out Alpha
	for i := range e.groups {
		g := &e.groups[i]
		var a0, a1, a2, t0, t1, tt float64
		for j := g.from; j < g.to; j++ {
			w, d := &s.weights[j], e.shapes[j].d
			z := pow[e.shapes[j].at&(deltaPowers-1)]
			c, ct := w.c*z, w.ct*z
			dc := d * c
			a0 += c
			a1 += dc
			a2 += (d - 1) * dc
			t0 += ct
			t1 += d * ct
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
		v := g.g * pow[g.l]
		u := g.lf * v
		f := math.Exp(-v)
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
		f := pow[sh.at&(deltaPowers-1)] * math.Exp(-b.eta*x*x)
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

// power returns x^t given ln(x); small multiples of one half need no exponential.
func power(x, lnX, t float64) float64 {
	n := int(t)
	if float64(n) == t && n >= 0 && n <= 64 {
		return wholeExponent(x, n)
	}
	if n = int(2 * t); float64(n) == 2*t && n > 0 && n <= 64 {
		return wholeExponent(x, n>>1) * math.Sqrt(x)
	}
	return math.Exp(t * lnX)
}

func wholeExponent(x float64, n int) float64 {
	y := 1.0
	for ; n > 0; n >>= 1 {
		if n&1 == 1 {
			y *= x
		}
		x *= x
	}
	return y
}
