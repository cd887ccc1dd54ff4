package blend

import (
	"math"

	"dewmark/props/internal/roots"
)

// edgeTie is the share of the way across the envelope within which a state counts as lying on its edge.
const edgeTie = 1e-10

// limitSlack is the relative distance by which a value may lie beyond a limit of temperature: rounding on the way there.
const limitSlack = 1e-12

// isobar returns the state at pressure p with a given volume, enthalpy, entropy or internal energy. Along an isobar all of
// them rise with temperature.
func (s *solver) isobar(p float64, of Property, value float64) (result, error) {
	if err := s.checkPressure(p); err != nil {
		return result{}, err
	}
	if err := s.checkFinite(of, value); err != nil {
		return result{}, err
	}
	if of == Density {
		if err := s.checkVolume(value); err != nil {
			return result{}, err
		}
	}
	fixed, other := constraint{Pressure, p}, constraint{of, value}
	lo, hi := s.reach.TemperatureMin, s.reach.TemperatureMax
	if p >= s.d.topP.p {
		return s.isobarAbove(p, of, value, lo, hi)
	}
	if p < s.d.min[light].p {
		T := lo
		if q, ok := s.singleAt(T, p, light); ok {
			return s.isobarSingle(q, p, of, value, lo, hi, light)
		}
		return result{}, s.stuck(fixed, other)
	}
	dew, ok := s.edgeAtP(p, light)
	if !ok {
		return result{}, s.stuck(fixed, other)
	}
	warm := dew.bulk.value(of)
	if p < s.d.min[dense].p { // the isobar begins inside the envelope
		cold, ok := s.coldEnd(p)
		if !ok {
			return result{}, s.stuck(fixed, other)
		}
		c := cold.result()
		first := c.value(of)
		slack := edgeTie*(warm-first) + limitSlack*(math.Abs(first)+math.Abs(warm))
		switch {
		case value < first-slack:
			return result{}, s.unattainable(of, value, first, s.ceiling(p, of))
		case value < first+edgeTie*(warm-first):
			return c, nil
		case value > warm+edgeTie*(warm-first):
			return s.isobarSingle(dew.bulk, p, of, value, dew.T, hi, light)
		case value > warm-edgeTie*(warm-first):
			return dew.result(), nil
		}
		o, ok := s.between(cold.tie(), dew.tie(s.m.z), fixed, other)
		if !ok {
			return result{}, s.stuck(fixed, other)
		}
		return o.result(), nil
	}
	bubble, ok := s.edgeAtP(p, dense)
	if !ok {
		return result{}, s.stuck(fixed, other)
	}
	cold := bubble.bulk.value(of)
	switch {
	case value < cold-edgeTie*(warm-cold):
		return s.isobarSingle(bubble.bulk, p, of, value, lo, bubble.T, dense)
	case value < cold+edgeTie*(warm-cold):
		return bubble.result(), nil
	case value > warm+edgeTie*(warm-cold):
		return s.isobarSingle(dew.bulk, p, of, value, dew.T, hi, light)
	case value > warm-edgeTie*(warm-cold):
		return dew.result(), nil
	}
	o, ok := s.between(bubble.tie(s.m.z), dew.tie(s.m.z), fixed, other)
	if !ok {
		return result{}, s.stuck(fixed, other)
	}
	return o.result(), nil
}

// isobarSingle returns the single phase on one side of the envelope, between temperatures lo and hi, starting from a point
// on the isobar.
func (s *solver) isobarSingle(from point, p float64, of Property, value, lo, hi float64, sd side) (result, error) {
	if of != Density {
		T, rho := from.along(of, value)
		T = min(max(T, lo), hi)
		if q, ok := s.newton(p, of, value, T, rho); ok && lo*(1-1e-9) <= q.T && q.T <= hi*(1+1e-9) && s.onSide(&q, sd) {
			return singlePhase(q), s.check(&q)
		}
	}
	return s.isobarSearch(p, of, value, lo, hi, sd)
}

// onSide reports whether a single phase lies outside the envelope on that side.
func (s *solver) onSide(q *point, sd side) bool {
	if q.T >= s.d.topT.T {
		return true
	}
	edge, ok := s.boundaryAt(q.T, sd)
	if !ok {
		return false
	}
	if sd == dense {
		return q.rho >= edge.rho*(1-1e-9)
	}
	return q.rho <= edge.rho*(1+1e-9)
}

// isobarAbove returns the single phase at a pressure above the envelope.
func (s *solver) isobarAbove(p float64, of Property, value, lo, hi float64) (result, error) {
	// Near the ridge of the heat capacity, which continues the envelope.
	T := math.Min(s.d.critical.T*math.Pow(p/s.d.critical.p, 0.12), hi)
	if q, ok := s.singleAt(T, p, dense); ok && of != Density {
		T, rho := q.along(of, value)
		T = min(max(T, lo), hi)
		if q, ok := s.newton(p, of, value, T, rho); ok && lo*(1-1e-9) <= q.T && q.T <= hi*(1+1e-9) && s.onSide(&q, dense) {
			return singlePhase(q), s.check(&q)
		}
	}
	return s.isobarSearch(p, of, value, lo, hi, dense)
}

// isobarSearch finds the temperature between lo and hi at which a property has the given value by bracketing, with the
// density solved at each step.
func (s *solver) isobarSearch(p float64, of Property, value, lo, hi float64, sd side) (result, error) {
	fixed, other := constraint{Pressure, p}, constraint{of, value}
	var q point
	miss := func(T float64) (float64, error) {
		var ok bool
		if q, ok = s.singleAt(T, p, sd); !ok {
			return 0, s.stuck(fixed, other)
		}
		if of == Density { // volumes span many decades
			return math.Log(q.value(of) / value), nil
		}
		return q.value(of) - value, nil
	}
	a, err := miss(lo)
	if err != nil {
		return result{}, err
	}
	first := q.value(of)
	b, err := miss(hi)
	if err != nil {
		return result{}, err
	}
	if !(a <= 0 && b >= 0) {
		tie := limitSlack * math.Abs(value)
		if of == Density {
			tie = limitSlack // of the logarithm
		}
		switch { // at the limit but for rounding
		case a > 0 && a <= tie:
			_, err = miss(lo)
			return singlePhase(q), err
		case b < 0 && b >= -tie:
			return singlePhase(q), nil
		}
		if hi < s.reach.TemperatureMax {
			return result{}, s.unattainable(of, value, first, s.ceiling(p, of))
		}
		return result{}, s.unattainable(of, value, s.floor(p, of), q.value(of))
	}
	T, err := roots.Bracketed(lo, a, hi, b, miss)
	if err != nil {
		return result{}, err
	}
	if _, err = miss(T); err != nil {
		return result{}, err
	}
	if of == Density {
		q = s.polishIsochore(q, p, 1/value)
	}
	return singlePhase(q), s.check(&q)
}

// polishIsochore moves the temperature of q until the isochore rho has pressure p: the last digits of a temperature found
// from densities are lost where a liquid hardly expands.
func (s *solver) polishIsochore(q point, p, rho float64) point {
	T := q.T
	for range 8 {
		s.iso.set(T)
		next := s.iso.at(rho)
		step := (p - next.p) / next.dpdT
		if !(math.Abs(step) < 1e-6*T) {
			return q
		}
		q = next
		if math.Abs(step) < 1e-14*T {
			break
		}
		T += step
	}
	q.h += (p - q.p) / q.rho
	q.p = p
	return q
}

// ceiling and floor return the value of a property at pressure p at the highest and the lowest temperature.
func (s *solver) ceiling(p float64, of Property) float64 {
	if q, ok := s.singleAt(s.reach.TemperatureMax, p, light); ok {
		return q.value(of)
	}
	return math.Inf(1)
}

func (s *solver) floor(p float64, of Property) float64 {
	T := s.reach.TemperatureMin
	switch {
	case p >= s.d.min[dense].p:
		if q, ok := s.singleAt(T, p, dense); ok {
			return q.value(of)
		}
	case p <= s.d.min[light].p:
		if q, ok := s.singleAt(T, p, light); ok {
			return q.value(of)
		}
	default:
		if o, ok := s.coldEnd(p); ok {
			c := o.result()
			return c.value(of)
		}
	}
	return math.Inf(-1)
}
