// Package terms holds the vocabulary that pure refrigerants and blends share: properties, phases, states, datums, limits
// and refusals. Package props repeats it under its own name; only the packages below it need this one.
//
// Units are SI and per mass: K, Pa, kg/m3, J/kg, J/(kg K), m/s.
package terms

import (
	"math"
	"strconv"
)

// Property names an intensive property that can fix a state.
type Property uint8

// The properties that can fix a state.
const (
	Temperature    Property = iota + 1 // K
	Pressure                           // Pa
	Density                            // kg/m3
	Enthalpy                           // J/kg
	Entropy                            // J/(kg K)
	InternalEnergy                     // J/kg
	Quality                            // mass fraction of vapour, 0 to 1
)

var propertyNames = [...]string{"", "temperature", "pressure", "density", "enthalpy", "entropy", "internal energy", "quality"}

var propertyUnits = [...]string{"", "K", "Pa", "kg/m3", "J/kg", "J/(kg K)", "J/kg", "kg/kg"}

func (p Property) String() string { return nameOf(propertyNames[:], int(p)) }

// Unit returns the SI unit of p.
func (p Property) Unit() string { return nameOf(propertyUnits[:], int(p)) }

// nameOf returns names[i], or the number in brackets where there is no such name, so that even an error about it can be
// printed.
func nameOf(names []string, i int) string {
	if i < len(names) {
		return names[i]
	}
	return "(" + strconv.Itoa(i) + ")"
}

// Given is a property with its value in SI units.
type Given struct {
	Property Property
	Value    float64
}

// Phase names the kind of a state.
type Phase uint8

// The phases. A state above the critical temperature is supercritical when its pressure is above the critical pressure
// too, and vapour otherwise; below the critical temperature a state denser than saturated liquid is liquid at any
// pressure. Saturated liquid and vapour themselves are liquid with quality 0 and vapour with quality 1.
const (
	AnyPhase Phase = iota
	Liquid
	Vapour
	TwoPhase
	Supercritical
)

var phaseNames = [...]string{"", "liquid", "vapour", "two_phase", "supercritical"}

func (p Phase) String() string { return nameOf(phaseNames[:], int(p)) }

// ParsePhase returns the phase with that name and reports whether there is one.
func ParsePhase(name string) (Phase, bool) {
	for i, n := range phaseNames {
		if n == name && i > 0 {
			return Phase(i), true
		}
	}
	return AnyPhase, false
}

// State is a thermodynamic state. A property that does not exist in the state's phase is NaN.
type State struct {
	Phase   Phase
	T       float64 // temperature, K
	P       float64 // pressure, Pa
	Rho     float64 // density, kg/m3
	H       float64 // enthalpy, J/kg
	S       float64 // entropy, J/(kg K)
	U       float64 // internal energy, J/kg
	Quality float64 // mass fraction of vapour; NaN outside the dome

	Cp     float64 // isobaric heat capacity, J/(kg K); NaN inside the dome
	Cv     float64 // isochoric heat capacity, J/(kg K); NaN inside the dome
	W      float64 // speed of sound, m/s; NaN inside the dome
	DPDRho float64 // (dp/d rho) at constant T, Pa m3/kg; NaN inside the dome
	DPDT   float64 // (dp/dT) at constant density, Pa/K; inside the dome the slope of the saturation pressure
	Z      float64 // compressibility factor p/(rho R T)

	// LiquidComposition and VapourComposition are the mass fractions of both phases of a blend in the order of its
	// components, of which one is the blend itself on the bubble and the dew line. They are nil for a pure refrigerant and
	// outside the dome. The caller must not modify them.
	LiquidComposition, VapourComposition []float64
}

// V returns the specific volume in m3/kg.
func (s State) V() float64 { return 1 / s.Rho }

// IsentropicExponent returns -(v/p)(dp/dv) at constant entropy.
func (s State) IsentropicExponent() float64 { return s.Rho * s.W * s.W / s.P }

// JouleThomson returns (dT/dp) at constant enthalpy in K/Pa.
func (s State) JouleThomson() float64 {
	return (s.T*s.DPDT/(s.Rho*s.DPDRho) - 1) / (s.Rho * s.Cp)
}

// IsothermalCompressibility returns (1/rho)(d rho/dp) at constant temperature in 1/Pa.
func (s State) IsothermalCompressibility() float64 { return 1 / (s.Rho * s.DPDRho) }

// Expansivity returns the volume expansivity -(1/rho)(d rho/dT) at constant pressure in 1/K.
func (s State) Expansivity() float64 {
	if s.Phase == TwoPhase {
		return math.NaN()
	}
	return s.DPDT / (s.Rho * s.DPDRho)
}

// Is reports whether the state is of that phase; saturated liquid and vapour count as two-phase too.
func (s State) Is(phase Phase) bool {
	return s.Phase == phase || phase == TwoPhase && (s.Quality == 0 || s.Quality == 1)
}

// Of returns the value of a property in state s.
func (p Property) Of(s *State) float64 {
	switch p {
	case Temperature:
		return s.T
	case Pressure:
		return s.P
	case Density:
		return s.Rho
	case Enthalpy:
		return s.H
	case Entropy:
		return s.S
	case InternalEnergy:
		return s.U
	default:
		return s.Quality
	}
}

// Set puts a value that was given into the state, in place of the one that came back from a solver a rounding away.
func (s *State) Set(g Given) {
	switch g.Property {
	case Temperature:
		s.T = g.Value
	case Pressure:
		s.P = g.Value
	case Density:
		s.Rho = g.Value
	case Enthalpy:
		s.H = g.Value
	case Entropy:
		s.S = g.Value
	case InternalEnergy:
		s.U = g.Value
	case Quality:
		s.Quality = g.Value
	}
}
