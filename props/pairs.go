package props

import (
	"cmp"
	"errors"
	"slices"
)

// States returns every state within the limits that has both given properties, in order of rising temperature and then
// falling density. It returns an error when there is none, or when the pair leaves a state too uncertain to be of use.
func (r *Pure) States(a, b Given) ([]State, error) {
	if a.Property > b.Property {
		a, b = b, a
	}
	if a.Property == b.Property || a.Property < Temperature || b.Property > Quality {
		return nil, &DependentPairError{Pair: [2]Property{a.Property, b.Property}}
	}
	var states []State
	one := func(s State, err error) error {
		if err == nil {
			states = append(states, s)
		}
		return err
	}
	add := func(s State) { states = append(states, s) }
	var err error
	x, y := a.Value, b.Value
	switch a.Property {
	case Temperature:
		switch b.Property {
		case Pressure:
			err = one(r.TemperaturePressure(x, y))
			if e, ok := errors.AsType[*AmbiguousError](err); ok {
				states, err = e.Solutions, nil
			}
		case Density:
			err = one(r.TemperatureDensity(x, y))
		case Quality:
			err = one(r.TemperatureQuality(x, y))
		default:
			err = r.isotherm(x, b.Property, y, add)
		}
	case Pressure:
		switch b.Property {
		case Density:
			err = r.pressureDensity(x, y, add)
		case Quality:
			err = one(r.PressureQuality(x, y))
		default:
			err = one(r.isobar(x, b.Property, y))
		}
	case Density:
		if b.Property == Quality {
			err = r.qualityLine(y, Density, x, add)
		} else {
			err = one(r.isochore(x, b.Property, y))
		}
	case Enthalpy:
		switch b.Property {
		case Entropy:
			err = one(r.EnthalpyEntropy(x, y))
		case InternalEnergy:
			err = r.enthalpyEnergy(x, y, add)
		default:
			err = r.qualityLine(y, Enthalpy, x, add)
		}
	case Entropy:
		if b.Property == InternalEnergy {
			err = one(r.EntropyInternalEnergy(x, y))
		} else {
			err = r.qualityLine(y, Entropy, x, add)
		}
	default:
		err = r.qualityLine(y, InternalEnergy, x, add)
	}
	if err != nil {
		return nil, err
	}
	if len(states) == 0 {
		return nil, &NoSolutionError{Refrigerant: r.rec.ID, Pair: [2]Given{a, b}}
	}
	for i := range states {
		states[i].Set(a)
		states[i].Set(b)
	}
	slices.SortFunc(states, func(s, t State) int { return cmp.Or(cmp.Compare(s.T, t.T), cmp.Compare(t.Rho, s.Rho)) })
	return states, nil
}

// State returns the one state that has both given properties and, unless phase is AnyPhase, that phase. It returns an
// [*AmbiguousError] when more than one state remains and a [*NoSolutionError] when none does.
func (r *Pure) State(a, b Given, phase Phase) (State, error) {
	states, err := r.States(a, b)
	if err != nil {
		return State{}, err
	}
	match := states
	if phase != AnyPhase {
		match = slices.DeleteFunc(slices.Clone(states), func(s State) bool { return !s.Is(phase) })
	}
	switch len(match) {
	case 1:
		return match[0], nil
	case 0:
		return State{}, &NoSolutionError{Refrigerant: r.rec.ID, Pair: [2]Given{a, b}, Phase: phase, Solutions: states}
	}
	return State{}, &AmbiguousError{Refrigerant: r.rec.ID, Pair: [2]Property{a.Property, b.Property}, Solutions: match}
}
