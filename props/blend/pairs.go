package blend

import (
	"cmp"
	"math"
	"slices"
)

// BubblePoint returns saturated liquid at temperature T in K: phase Liquid, quality 0. Where two bubble points have that
// temperature, it returns the one of lower density.
func (b *Blend) BubblePoint(T float64) (State, error) { return b.ordinary(Temperature, T, 0) }

// DewPoint returns saturated vapour at temperature T in K: phase Vapour, quality 1. Between the critical point and the
// cricondentherm two dew points may have that temperature; it returns the one of lower density, and [Blend.States] with a
// quality of 1 returns both.
func (b *Blend) DewPoint(T float64) (State, error) { return b.ordinary(Temperature, T, 1) }

// BubblePointAtPressure returns saturated liquid at pressure p in Pa. Where two bubble points have that pressure, it
// returns the colder one.
func (b *Blend) BubblePointAtPressure(p float64) (State, error) { return b.ordinary(Pressure, p, 0) }

// DewPointAtPressure returns saturated vapour at pressure p in Pa. Where two dew points have that pressure, it returns the
// warmer one.
func (b *Blend) DewPointAtPressure(p float64) (State, error) { return b.ordinary(Pressure, p, 1) }

// ordinary returns the point of the bubble line (quality 0) or the dew line (quality 1) on the far side of the top of the
// envelope, as most applications mean it.
func (b *Blend) ordinary(of Property, value, quality float64) (State, error) {
	l := b.d.lines[int(quality)]
	if lo, hi := b.linesSpan(of, l); lo <= value && value <= hi { // the common case, without a solver
		T := value
		if of == Pressure {
			T = l.temperature(math.Log(value))
		}
		a := l.saturated(T)
		r := a.result()
		if of == Pressure {
			r.p = value
		}
		return b.state(&r), nil
	}
	s := b.solver()
	defer b.release(s)
	all, err := s.quality(of, s.snap(of, value), quality)
	if err != nil {
		return State{}, err
	}
	// Both edges come in the order dense, light.
	pick := 0
	if of == Temperature || quality == 1 {
		pick = len(all) - 1
	}
	return b.state(&all[pick]), nil
}

func (b *Blend) linesSpan(of Property, l *line) (lo, hi float64) {
	if of == Pressure {
		return l.lo.p, l.hi.p
	}
	return l.lo.T, l.hi.T
}

// TemperatureDensity returns the state at T in K and rho in kg/m3.
func (b *Blend) TemperatureDensity(T, rho float64) (State, error) {
	return b.only(Given{Property: Temperature, Value: T}, Given{Property: Density, Value: rho})
}

// TemperaturePressure returns the state at T in K and p in Pa, which may be one of two phases. At an azeotrope, where the
// pair does not tell liquid from vapour, it returns an [*AmbiguousError] with both.
func (b *Blend) TemperaturePressure(T, p float64) (State, error) {
	return b.only(Given{Property: Temperature, Value: T}, Given{Property: Pressure, Value: p})
}

// TemperatureQuality returns the state inside the envelope at T in K and vapour quality q by mass, from 0 to 1. Between the
// critical point and the cricondentherm there may be two, which it returns as an [*AmbiguousError].
func (b *Blend) TemperatureQuality(T, q float64) (State, error) {
	return b.only(Given{Property: Temperature, Value: T}, Given{Property: Quality, Value: q})
}

// PressureQuality returns the state inside the envelope at p in Pa and vapour quality q by mass, from 0 to 1. Between the
// critical point and the cricondenbar there may be two, which it returns as an [*AmbiguousError].
func (b *Blend) PressureQuality(p, q float64) (State, error) {
	return b.only(Given{Property: Pressure, Value: p}, Given{Property: Quality, Value: q})
}

// PressureEnthalpy returns the state at p in Pa and h in J/kg. The pair has one solution at most.
func (b *Blend) PressureEnthalpy(p, h float64) (State, error) {
	return b.only(Given{Property: Pressure, Value: p}, Given{Property: Enthalpy, Value: h})
}

// PressureEntropy returns the state at p in Pa and s in J/(kg K). The pair has one solution at most.
func (b *Blend) PressureEntropy(p, s float64) (State, error) {
	return b.only(Given{Property: Pressure, Value: p}, Given{Property: Entropy, Value: s})
}

// PressureInternalEnergy returns the state at p in Pa and u in J/kg. The pair has one solution at most.
func (b *Blend) PressureInternalEnergy(p, u float64) (State, error) {
	return b.only(Given{Property: Pressure, Value: p}, Given{Property: InternalEnergy, Value: u})
}

// EnthalpyEntropy returns the state at h in J/kg and s in J/(kg K). The pair has one solution at most.
func (b *Blend) EnthalpyEntropy(h, s float64) (State, error) {
	return b.only(Given{Property: Enthalpy, Value: h}, Given{Property: Entropy, Value: s})
}

// EntropyInternalEnergy returns the state at s in J/(kg K) and u in J/kg. The pair has one solution at most.
func (b *Blend) EntropyInternalEnergy(s, u float64) (State, error) {
	return b.only(Given{Property: Entropy, Value: s}, Given{Property: InternalEnergy, Value: u})
}

// only returns the one state that has both given properties.
func (b *Blend) only(x, y Given) (State, error) {
	results, err := b.solve(x, y)
	if err != nil {
		return State{}, err
	}
	switch len(results) {
	case 1:
		st := b.state(&results[0])
		st.Set(x)
		st.Set(y)
		return st, nil
	case 0:
		return State{}, &NoSolutionError{Refrigerant: b.designation, Pair: [2]Given{x, y}}
	}
	return State{}, &AmbiguousError{Refrigerant: b.designation, Pair: [2]Property{x.Property, y.Property}, Solutions: b.states(results, x, y)}
}

// States returns every state within the limits that has both given properties, in order of rising temperature and then
// falling density. It returns an error when there is none, or when the pair leaves a state too uncertain to be of use.
func (b *Blend) States(x, y Given) ([]State, error) {
	results, err := b.solve(x, y)
	if err != nil {
		return nil, err
	}
	if len(results) == 0 {
		return nil, &NoSolutionError{Refrigerant: b.designation, Pair: [2]Given{x, y}}
	}
	return b.states(results, x, y), nil
}

// State returns the one state that has both given properties and, unless phase is AnyPhase, that phase. It returns an
// [*AmbiguousError] when more than one state remains and a [*NoSolutionError] when none does.
func (b *Blend) State(x, y Given, phase Phase) (State, error) {
	all, err := b.States(x, y)
	if err != nil {
		return State{}, err
	}
	match := all
	if phase != AnyPhase {
		match = slices.DeleteFunc(slices.Clone(all), func(s State) bool { return !s.Is(phase) })
	}
	switch len(match) {
	case 1:
		return match[0], nil
	case 0:
		return State{}, &NoSolutionError{Refrigerant: b.designation, Pair: [2]Given{x, y}, Phase: phase, Solutions: all}
	}
	return State{}, &AmbiguousError{Refrigerant: b.designation, Pair: [2]Property{x.Property, y.Property}, Solutions: match}
}

func (b *Blend) states(results []result, x, y Given) []State {
	out := make([]State, len(results))
	for i := range results {
		out[i] = b.state(&results[i])
		out[i].Set(x)
		out[i].Set(y)
	}
	slices.SortFunc(out, func(s, t State) int { return cmp.Or(cmp.Compare(s.T, t.T), cmp.Compare(t.Rho, s.Rho)) })
	return out
}

// solve returns every result that has both given properties.
func (b *Blend) solve(x, y Given) ([]result, error) {
	if x.Property > y.Property {
		x, y = y, x
	}
	if x.Property == y.Property || x.Property < Temperature || y.Property > Quality {
		return nil, &DependentPairError{Pair: [2]Property{x.Property, y.Property}}
	}
	s := b.solver()
	defer b.release(s)
	u, v := b.inward(x.Property, s.snap(x.Property, x.Value)), b.inward(y.Property, s.snap(y.Property, y.Value))
	one := func(r result, err error) ([]result, error) {
		if err != nil {
			return nil, err
		}
		return []result{r}, nil
	}
	switch x.Property {
	case Temperature:
		switch y.Property {
		case Pressure:
			return s.temperaturePressure(u, v)
		case Density:
			return one(s.temperatureVolume(u, v))
		case Quality:
			return s.quality(Temperature, u, v)
		}
		return s.isotherm(u, y.Property, v)
	case Pressure:
		if y.Property == Quality {
			return s.quality(Pressure, u, v)
		}
		return one(s.isobar(u, y.Property, v))
	case Density:
		if y.Property == Quality {
			return s.qualityLine(v, Density, u)
		}
		return one(s.isochore(u, y.Property, v))
	case Enthalpy:
		switch y.Property {
		case Entropy:
			return one(s.isentrope(v, Enthalpy, u))
		case InternalEnergy:
			return s.isenthalp(u, v)
		}
	case Entropy:
		if y.Property == InternalEnergy {
			return one(s.isentrope(u, InternalEnergy, v))
		}
	}
	return s.qualityLine(v, x.Property, u)
}
