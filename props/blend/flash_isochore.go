package blend

import (
	"math"
	"sort"

	"dewmark/props/internal/roots"
)

// edgeAtRho returns the point of the envelope where the bulk has density rho, of which there is one: the bulk thins out
// all along the envelope.
func (s *solver) edgeAtRho(rho float64) (saturated, bool) {
	d, n, target := s.d, len(s.m.z), math.Log(rho)
	i := sort.Search(len(d.nodes), func(i int) bool { return d.nodes[i].lnRho() < target })
	i = min(max(i, 1), len(d.nodes)-1)
	lo, hi := d.nodes[i-1].S, d.nodes[i].S
	v := make([]float64, n+3)
	var S float64
	for range 50 {
		S = (lo + hi) / 2
		d.interpolate(S, v)
		if v[n] > target {
			lo = S
		} else {
			hi = S
		}
	}
	if math.Abs(S) < gap {
		return s.interpolated(S), true
	}
	ok := s.solveEdge(edge(v[:n+2]), fixedRho, target, true) && math.Abs(math.Log(s.inc.rho/s.bulk.rho)-S) < 0.1
	return s.finish(s.edgePressure()), ok
}

// isochore returns the state at molar volume v with a given enthalpy, entropy or internal energy. Along an isochore all of
// them rise with temperature, through the envelope and out of it, so that there is one state at most.
func (s *solver) isochore(v float64, of Property, value float64) (result, error) {
	if err := s.checkVolume(v); err != nil {
		return result{}, err
	}
	if err := s.checkFinite(of, value); err != nil {
		return result{}, err
	}
	rho := 1 / v
	lo, hi := s.reach.TemperatureMin, s.reach.TemperatureMax
	single := func(T float64) (float64, error) {
		s.iso.set(T)
		q := s.iso.at(rho)
		return q.value(of) - value, nil
	}
	top, _ := single(hi)
	if s.d.min[light].rho < rho && rho < s.d.min[dense].rho {
		edge, ok := s.edgeAtRho(rho)
		if !ok {
			return result{}, s.stuck(constraint{Density, v}, constraint{of, value})
		}
		switch at := edge.bulk.value(of); {
		case math.Abs(value-at) <= edgeTie*math.Abs(top+value-at):
			return edge.result(), nil
		case value < at:
			return s.isochoreTwoPhase(v, of, value, &edge)
		}
		lo = edge.T
	}
	bottom, _ := single(lo)
	if !(bottom <= 0 && top >= 0) {
		return result{}, s.unattainable(of, value, bottom+value, top+value)
	}
	T, err := roots.Bracketed(lo, bottom, hi, top, single)
	if err != nil {
		return result{}, err
	}
	s.iso.set(T)
	q := s.iso.at(rho)
	return singlePhase(q), s.check(&q)
}

// isochoreTwoPhase returns the state inside the envelope, below its edge.
func (s *solver) isochoreTwoPhase(v float64, of Property, value float64, edge *saturated) (result, error) {
	n := len(s.m.z)
	fixed, other := constraint{Density, v}, constraint{of, value}
	Tmin := s.d.min[dense].T
	cold, err := s.isothermTwoPhase(Tmin, Density, v)
	if err != nil {
		return result{}, err
	}
	first := cold.value(of)
	if value < first {
		if value >= first-edgeTie*math.Abs(edge.bulk.value(of)-first) {
			return cold, nil
		}
		return result{}, s.unattainable(of, value, first, s.hottest(v, of))
	}

	// An estimate from the chords of a few temperatures starts Newton's method.
	u := make(split, n+3)
	var c *chord
	estimate := func(T float64) (float64, error) {
		edges, ok := s.edgesAtT(T)
		if !ok {
			return 0, s.stuck(fixed, other)
		}
		c = newChord(s.m, edges[light].tie(s.m.z), edges[dense].tie(s.m.z))
		r := c.aim(Density, v, u)
		return c.look(r, of) - value, nil
	}
	a, b := Tmin, edge.T
	fa, fb := first-value, edge.bulk.value(of)-value
	for range 8 {
		T := a - fa*(b-a)/(fb-fa)
		if !(a < T && T < b) {
			break
		}
		f, err := estimate(T)
		if err != nil {
			break
		}
		if f < 0 {
			a, fa = T, f
		} else {
			b, fb = T, f
		}
		if math.Abs(f) < 1e-3*s.m.whole.R*T || b-a < 1e-3*T {
			break
		}
	}
	if c != nil && s.solveSplit(u, fixed, other) && s.near(c) && Tmin*(1-1e-9) <= s.inc.T && s.inc.T <= edge.T*(1+1e-9) {
		o := s.outcome()
		return o.result(), nil
	}

	var r result
	miss := func(T float64) (float64, error) {
		var err error
		if r, err = s.isothermTwoPhase(T, Density, v); err != nil {
			return 0, err
		}
		return r.value(of) - value, nil
	}
	T, err := roots.Bracketed(Tmin, first-value, edge.T, edge.bulk.value(of)-value, miss)
	if err != nil {
		return result{}, err
	}
	_, err = miss(T)
	return r, err
}

// near reports whether the densities of the phases that were solved last are those that the chord looked at, or nearly.
func (s *solver) near(c *chord) bool {
	return math.Abs(math.Log(s.bulk.rho*c.at.vL)) < 0.2 && math.Abs(math.Log(s.inc.rho*c.at.vV)) < 0.7
}

// hottest returns the value of a property at molar volume v at the highest temperature.
func (s *solver) hottest(v float64, of Property) float64 {
	s.iso.set(s.reach.TemperatureMax)
	q := s.iso.at(1 / v)
	return q.value(of)
}
