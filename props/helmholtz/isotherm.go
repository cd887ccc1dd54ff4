package helmholtz

import (
	"math"

	"dewmark/props/internal/elementary"
)

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
	lnTau := elementary.Log(tau)
	pw := &s.powers
	e.powers.fill(pw, tau, 1/tau, lnTau)
	const mask = maxPowers - 1 // an index within the table needs no bounds check

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
		q, a, aa := k.factor(pw, tau)
		c := k.n * pw[k.power&mask] * elementary.Exp(q)
		w.c += c
		w.ct += c * a
		w.ctt += c * aa
	}
	e.ideal.at(pw, tau, lnTau, &s.Ideal)
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
		f := elementary.Exp(-v)
		d += f * (a1 - u*a0)
		dd += f * (a2 - 2*u*a1 + u*(u-g.lf+1)*a0)
	}
	for i := range e.bells {
		b := &e.bells[i]
		sh := &e.shapes[b.at]
		x := delta - b.epsilon
		a := sh.d - 2*b.eta*delta*x
		c := s.weights[b.at].c * pow[sh.at&(deltaPowers-1)] * elementary.Exp(-b.eta*x*x)
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
		f := elementary.Exp(-v)
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
		f := pow[sh.at&(deltaPowers-1)] * elementary.Exp(-b.eta*x*x)
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
		e.addPeaks(&out, s.Tau, s.peakTau1, delta, (rho-e.RhoRed)/e.RhoRed)
	}
	return out
}
