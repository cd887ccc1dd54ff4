package blend

import "math"

// What sets a limit, as [RangeError] names it.
const (
	LimitValidity   = "range of the mixture model, from the validity of its components"
	LimitDensity    = "highest density of the components; beyond it the blend may be solid"
	LimitEnvelope   = "phase envelope of the blend"
	LimitAttainable = "attainable with the other given property"
	LimitPhysical   = "physically possible"
)

// Nobody states a validity for these mixtures. The limits are those of the components that make up the blend: a minor
// component is dissolved in the others, and its own freezing point, or the end of its own measurements, does not bind.
const (
	bindingShare     = 0.2  // mole fraction from which the limits of a component count
	lowestReduced    = 0.45 // of the reducing temperature; colder, the vapour pressure is of no use any more
	highestReduced   = 1.1  // of the reducing temperature, at least covered whatever the components say
	pressureHeadroom = 1.2  // of the highest pressure on the envelope, likewise
)

// componentLimits returns the limits that follow from the components alone, with the density in mol/m3.
func componentLimits(m *model, z []float64, Tred float64) Limits {
	major := 0
	for i := range z {
		if z[i] > z[major] {
			major = i
		}
	}
	l := Limits{TemperatureMin: lowestReduced * Tred, TemperatureMax: math.Inf(1), PressureMax: math.Inf(1)}
	var volume float64
	for i, r := range m.records {
		v := r.Validity
		volume += z[i] / v.DensityMax
		if z[i] < bindingShare && i != major {
			continue
		}
		l.TemperatureMin = math.Max(l.TemperatureMin, v.TemperatureMin)
		l.TemperatureMax = math.Min(l.TemperatureMax, v.TemperatureMax)
		l.PressureMax = math.Min(l.PressureMax, v.PressureMax)
	}
	if T := 273.15; T < l.TemperatureMin && l.TemperatureMin <= 273.16 {
		l.TemperatureMin = T // a blend with water: 0.01 K more lets it have the usual datum
	}
	l.TemperatureMax = math.Max(l.TemperatureMax, highestReduced*Tred)
	l.DensityMax = 1 / volume
	return l
}

// molarLimits returns the limits of a mixture whose envelope is known, with the density in mol/m3.
func (m *mixture) molarLimits(d *dome) Limits {
	l := componentLimits(m.model, m.z, m.whole.T)
	l.TemperatureMin = d.min[dense].T // warmer where the cold liquid would split
	l.TemperatureMax = math.Max(l.TemperatureMax, 1.02*d.topT.T)
	l.PressureMax = math.Max(l.PressureMax, pressureHeadroom*d.topP.p)
	l.DensityMax = math.Max(l.DensityMax, d.min[dense].rho*(1+1e-9))
	return l
}

func (s *solver) outOfRange(p Property, value, lo, hi float64, limit string) error {
	return &RangeError{Refrigerant: s.m.designation, Property: p, Value: value, Min: lo, Max: hi, Limit: limit}
}

func (s *solver) checkTemperature(T float64) error {
	if !(s.reach.TemperatureMin <= T && T <= s.reach.TemperatureMax) {
		return s.outOfRange(Temperature, T, s.reach.TemperatureMin, s.reach.TemperatureMax, LimitValidity)
	}
	return nil
}

func (s *solver) checkPressure(p float64) error {
	if !(0 < p && p <= s.reach.PressureMax) {
		return s.outOfRange(Pressure, p, 0, s.reach.PressureMax, LimitValidity)
	}
	return nil
}

// checkVolume checks a molar volume in m3/mol.
func (s *solver) checkVolume(v float64) error {
	if M := s.m.whole.M; !(v > 0 && !math.IsInf(v, 0) && 1/v <= s.reach.DensityMax) {
		return s.outOfRange(Density, M/v, 0, s.reach.DensityMax*M, LimitDensity)
	}
	return nil
}

func (s *solver) checkFinite(p Property, value float64) error {
	if math.IsNaN(value) || math.IsInf(value, 0) {
		return s.outOfRange(p, s.b.outward(p, value), math.Inf(-1), math.Inf(1), LimitPhysical)
	}
	return nil
}

func (s *solver) checkQuality(q float64) error {
	if !(0 <= q && q <= 1) {
		return s.outOfRange(Quality, q, 0, 1, LimitPhysical)
	}
	return nil
}

// slack is the relative rounding within which a limit counts as reached, whether a solver or a caller rounded it.
const slack = 1e-10

// snap moves a given value onto the limit that it overshoots by rounding, so that a limit read from a printed page can be
// asked for.
func (s *solver) snap(of Property, value float64) float64 {
	lo, hi := s.reach.TemperatureMin, s.reach.TemperatureMax
	switch of {
	case Temperature:
	case Pressure:
		lo, hi = 0, s.reach.PressureMax
	default:
		return value
	}
	if clamped := min(max(value, lo), hi); math.Abs(value-clamped) <= slack*clamped { // false for NaN too
		return clamped
	}
	return value
}

// check returns a RangeError unless a single phase that a solver found lies in the range. Limits count as reached within
// rounding.
func (s *solver) check(q *point) error {
	l := s.reach
	T := q.T
	if T < l.TemperatureMin && T > l.TemperatureMin*(1-slack) || T > l.TemperatureMax && T < l.TemperatureMax*(1+slack) {
		T = min(max(T, l.TemperatureMin), l.TemperatureMax)
	}
	if err := s.checkTemperature(T); err != nil {
		return err
	}
	if err := s.checkPressure(q.p / (1 + slack)); err != nil {
		return err
	}
	return s.checkVolume((1 + slack) / q.rho)
}

// unattainable reports a value that does not go with the other given property; lo and hi are the ends of what does.
func (s *solver) unattainable(p Property, value, lo, hi float64) error {
	value, lo, hi = s.b.outward(p, value), s.b.outward(p, lo), s.b.outward(p, hi)
	return s.outOfRange(p, value, math.Min(lo, hi), math.Max(lo, hi), LimitAttainable)
}

// stuck reports a solver that found no answer.
func (s *solver) stuck(a, b constraint) error {
	given := func(c constraint) Given { return Given{Property: c.of, Value: s.b.outward(c.of, c.value)} }
	return &ConvergenceError{Refrigerant: s.m.designation, Pair: [2]Given{given(a), given(b)}, T: s.bulk.T, Rho: s.bulk.rho * s.m.whole.M}
}
