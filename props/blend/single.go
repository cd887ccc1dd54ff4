package blend

import "math"

// branch is the stretch of an isotherm at overall composition on which pressure rises with density: all of it above the
// highest temperature of the envelope, the part on one side of the envelope below. Staying on it keeps the solvers away
// from the false roots that many equations have inside.
type branch struct{ lo, hi, start float64 } // mol/m3

// boundary is where an isotherm meets one side of the envelope.
type boundary struct{ p, rho, dpdrho float64 }

// boundaryAt returns where the isotherm T meets a side of the envelope; T lies between the limits of the envelope.
func (s *solver) boundaryAt(T float64, sd side) (boundary, bool) {
	if l := s.d.lines[sd]; T <= l.hi.T {
		var v [lineDPDRho + 1]float64
		l.at(T, v[:])
		return boundary{math.Exp(v[lineLnP]), math.Exp(v[lineLnRho]), v[lineDPDRho]}, true
	}
	a, ok := s.saturatedAtT(T, sd)
	return boundary{a.p, a.bulk.rho, a.bulk.dpdrho}, ok
}

// beyond returns the branch of isotherm T on a side of the envelope, started for pressure p.
func (s *solver) beyond(b boundary, T, p float64, sd side) branch {
	if sd == light {
		// The compressibility factor falls almost linearly with pressure.
		z := 1 + (b.p/(b.rho*s.m.whole.R*T)-1)*p/b.p
		return branch{lo: 0, hi: b.rho, start: p / (s.m.whole.R * T * z)}
	}
	const stiffening = 8 // of a liquid: how fast its bulk modulus rises with pressure
	modulus := b.rho * math.Max(b.dpdrho, 1e-3*s.m.whole.R*T)
	return branch{lo: b.rho, hi: s.densest(), start: b.rho * math.Pow(1+stiffening*(p-b.p)/modulus, 1.0/stiffening)}
}

// above returns the branch of an isotherm that passes the envelope, started with the cubic equation of Peng and Robinson,
// Ind. Eng. Chem. Fundam. 15 (1976) 59, doi:10.1021/i160057a011, with the critical point of the blend.
func (s *solver) above(T, p float64) branch {
	c := &s.d.critical
	var acentric float64
	for i, r := range s.m.model.records {
		acentric += s.m.z[i] * r.Acentric
	}
	k := 0.37464 + acentric*(1.54226-0.26992*acentric)
	alpha := 1 + k*(1-math.Sqrt(T/c.T))
	a := 0.45724 * alpha * alpha * (p / c.p) * (c.T / T) * (c.T / T)
	b := 0.07780 * (p / c.p) * (c.T / T)
	c2, c1, c0 := b-1, a-b*(3*b+2), -b*(a-b*(1+b))
	z := math.Max(1, 2*b) // above the largest root, where the cubic is convex
	for range 30 {
		f := ((z+c2)*z+c1)*z + c0
		df := (3*z+2*c2)*z + c1
		step := f / df
		if !(df > 0) || math.Abs(step) < 1e-4*z {
			break
		}
		z = math.Max(z-step, 1.0001*b)
	}
	return branch{lo: 0, hi: s.densest(), start: math.Min(p/(z*s.m.whole.R*T), 0.98*s.densest())}
}

// densest is the highest density that solvers try, a little beyond the limit, so that a state beyond it is found and
// refused by name.
func (s *solver) densest() float64 { return 1.15 * s.reach.DensityMax }

// density solves p(rho) = p on a branch of the isotherm that s.iso is set to, by Newton's method with bisection wherever a
// step leaves the branch. It reports whether the branch reaches the pressure.
func (s *solver) density(p float64, b branch) (rho float64, ok bool) {
	lo, hi := b.lo, b.hi
	rho = b.start
	if !(lo <= rho && rho <= hi) {
		rho = (lo + hi) / 2
	}
	last := math.Inf(1)
	for range 100 { // Newton takes 2 to 6 steps, bisection alone would take 60
		have, slope := s.iso.pressure(rho)
		if have > p {
			hi = math.Min(hi, rho)
		} else {
			lo = math.Max(lo, rho)
		}
		step := (p - have) / slope
		next := rho + step
		switch {
		case slope > 0 && math.Abs(step) < 1e-7*rho && last < 1e-2*rho:
			return min(max(next, b.lo), b.hi), true // converging quadratically: exact but for rounding
		case slope > 0 && math.Abs(step) < 1e-12*rho:
			return rho, true
		case !(slope > 0) || next <= lo || next >= hi:
			next = lo + (hi-lo)/2
			if hi-lo <= 1e-14*hi {
				if rho >= b.hi*(1-1e-9) && have < p*(1-1e-9) {
					return rho, false
				}
				return rho, true
			}
		}
		last = math.Abs(next - rho)
		rho = next
	}
	return rho, false
}

// singleAt returns the single phase at T and p on one side of the envelope, or anywhere above it. The side counts only
// below the highest temperature of the envelope.
func (s *solver) singleAt(T, p float64, sd side) (point, bool) {
	if T >= s.d.topT.T {
		s.iso.set(T)
		return s.onBranch(p, s.above(T, p))
	}
	edge, ok := s.boundaryAt(T, sd)
	if !ok {
		return point{}, false
	}
	return s.outside(edge, T, p, sd)
}

// outside returns the single phase at T and p beyond a boundary of the envelope at T.
func (s *solver) outside(edge boundary, T, p float64, sd side) (point, bool) {
	s.iso.set(T)
	if (sd == dense) == (p < edge.p) { // by rounding only: the caller chose the side
		q := s.iso.at(edge.rho)
		q.p = edge.p
		return q, true
	}
	return s.onBranch(p, s.beyond(edge, T, p, sd))
}

// onBranch returns the single phase at pressure p on a branch of the isotherm that s.iso is set to.
func (s *solver) onBranch(p float64, b branch) (point, bool) {
	rho, ok := s.density(p, b)
	if !ok {
		return point{}, false
	}
	q := s.iso.at(rho)
	q.h += (p - q.p) / rho // the equation's pressure of a cold liquid is rounding noise
	q.p = p
	return q, true
}

// newton solves pressure and a caloric property of a single phase together for temperature and density, from a start. It
// reports success only; the caller must check that the solution lies where it was meant to.
func (s *solver) newton(p float64, of Property, value, T, rho float64) (point, bool) {
	last := math.Inf(1)
	for range 25 {
		if !(T > 0.7*s.reach.TemperatureMin && T < 2*s.reach.TemperatureMax && rho > 0 && rho < s.densest()) {
			return point{}, false
		}
		s.iso.set(T)
		q := s.iso.at(rho)
		if !(q.dpdrho > 0) {
			return point{}, false
		}
		yT, yRho := q.slopes(of)
		dy, dp := value-q.value(of), p-q.p
		det := yT*q.dpdrho - yRho*q.dpdT
		dT, dRho := (dy*q.dpdrho-dp*yRho)/det, (dp*yT-dy*q.dpdT)/det
		size := math.Max(math.Abs(dT)/T, math.Abs(dRho)/rho)
		if math.IsNaN(size) {
			return point{}, false
		}
		if size < 1e-8 && last < 1e-2 { // converging quadratically: one more step is exact but for rounding
			s.iso.set(T + dT)
			q = s.iso.at(rho + dRho)
			q.h += (p - q.p) / q.rho
			q.p = p
			return q, true
		}
		last = size
		scale := math.Min(1, 0.3/size)
		T += scale * dT
		rho += scale * dRho
	}
	return point{}, false
}

// along estimates where on an isobar a caloric property has the given value, from a point on it.
func (q *point) along(of Property, value float64) (T, rho float64) {
	yT, yRho := q.slopes(of)
	slope := yT - yRho*q.dpdT/q.dpdrho // at constant pressure
	if !(slope > 0) {
		return q.T, q.rho
	}
	dT := (value - q.value(of)) / slope
	T = q.T + dT
	if of == Entropy {
		T = q.T * math.Exp(dT/q.T)
	}
	T = math.Max(T, 0.3*q.T)
	// Density falls with temperature, in a gas as 1/T, in a liquid by its expansivity.
	expansion := q.T * q.dpdT / (q.rho * q.dpdrho)
	return T, q.rho * math.Pow(q.T/T, math.Min(math.Max(expansion, 0.1), 3))
}
