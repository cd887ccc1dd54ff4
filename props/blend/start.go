package blend

import "math"

// wilson returns ln(K_i p/Pa) by the correlation of Wilson: the vapour pressure of component i that follows from its
// critical point and acentric factor.
func (m *model) wilson(i int, T float64) float64 {
	r := m.records[i]
	return math.Log(r.Critical.Pressure) + 5.373*(1+r.Acentric)*(1-r.Critical.Temperature/T)
}

// densityFrom solves p(rho) = p at the temperature and mole fractions of ph by Newton's method from rho, on the isotherm
// that the kernel is set to. Started denser than any liquid, it descends on the convex liquid branch; started from the
// ideal gas, it climbs on the concave vapour branch; either way it stops with false where the branch ends before p.
func (k *kernel) densityFrom(ph *phase, p, rho float64) bool {
	R := mean(ph.x, k.m.R)
	for range 100 {
		a := k.residual(ph.x, rho)
		slope := R * ph.T * (1 + 2*a.D + a.DD)
		if !(slope > 0) {
			return false
		}
		step := (rho*R*ph.T*(1+a.D) - p) / slope
		// A longer step might land beyond the end of the branch, on one of the false stretches that look stable.
		step = max(-0.1*rho, min(step, 0.1*rho))
		rho -= step
		if math.Abs(step) <= 1e-11*rho {
			ph.rho = rho
			return true
		}
	}
	return false
}

// liquidDensity solves for the density of a liquid at pressure p; ph holds temperature and mole fractions.
func (k *kernel) liquidDensity(ph *phase, p float64) bool {
	k.setIsotherm(ph.T, ph.x)
	R := mean(ph.x, k.m.R)
	// Three times the reducing density is about that of a cold liquid.
	for rho := 2.6 / k.red.V; rho < 5/k.red.V; rho *= 1.05 {
		a := k.residual(ph.x, rho)
		if rho*R*ph.T*(1+a.D) > p && 1+2*a.D+a.DD > 0 {
			return k.densityFrom(ph, p, rho)
		}
	}
	return false
}

// vapourDensity solves for the density of a vapour at pressure p; ph holds temperature and mole fractions.
func (k *kernel) vapourDensity(ph *phase, p float64) bool {
	k.setIsotherm(ph.T, ph.x)
	return k.densityFrom(ph, p, p/(mean(ph.x, k.m.R)*ph.T))
}

// start finds a bubble point at or near the temperature T by successive substitution from the correlation of Wilson, then
// by Newton's method. It reports whether it found one.
func (s *solver) start(T float64) (edge, bool) {
	n := len(s.m.z)
	liquid, vapour := s.bulk, s.inc
	liquid.T, vapour.T = T, T
	copy(liquid.x, s.m.z)
	lnK := make([]float64, n) // ln(K_i p)
	p := 0.0
	for i := range lnK {
		lnK[i] = s.m.model.wilson(i, T)
		p += s.m.z[i] * math.Exp(lnK[i])
	}
	if !s.k.liquidDensity(liquid, p) {
		return nil, false
	}
	for range 30 {
		sum := 0.0
		for i := range lnK {
			vapour.x[i] = s.m.z[i] * math.Exp(lnK[i])
			sum += vapour.x[i]
		}
		for i := range lnK {
			vapour.x[i] /= sum
		}
		change := math.Abs(sum/p - 1)
		p = sum
		if !s.k.liquidDensity(liquid, p) {
			return nil, false
		}
		s.k.evaluate(liquid, false)
		for !s.k.vapourDensity(vapour, p) { // beyond the end of the vapour branch
			if p *= 0.8; p < 1e-3 {
				return nil, false
			}
		}
		s.k.evaluate(vapour, false)
		for i := range lnK {
			lnK[i] = liquid.lnF[i] - math.Log(liquid.x[i]) - (vapour.lnF[i] - math.Log(vapour.x[i])) + math.Log(p)
		}
		if change < 1e-3 {
			break
		}
	}
	u := make(edge, n+2)
	for i := range n {
		u[i] = math.Log(vapour.x[i] * vapour.rho)
	}
	u[n], u[n+1] = math.Log(liquid.rho), math.Log(T)
	if !s.solveEdge(u, fixedT, math.Log(T), false) || s.inc.rho > 0.5*s.bulk.rho {
		return nil, false
	}
	return u, true
}
