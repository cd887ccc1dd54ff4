// Package transport computes viscosity, thermal conductivity and surface tension of refrigerants and of their mixtures
// from published correlations, extended corresponding states and residual-entropy scaling.
//
// Units are SI: K, mol/m3, Pa s, W/(m K), N/m. Uncertainties are relative standard uncertainties (k = 1); most are
// estimates of this project, see [Record.Uncertainty].
//
// A [Model] is made once from the records of a refrigerant's coefficient file and its equation of state. The
// correlations take temperature and density, so the caller gives a [State] that the equation of state has solved. Most
// were fitted together with particular equations of state; with another one the effect is mostly below 0.3 % and was
// 1.2 % at the worst.
//
// Each property has ranked records. The one of lowest rank answers; where it has a pole, residual-entropy scaling stands
// in for it. Whatever limits an answer is told by [Value.Cautions]. The kinds of records are
//
//   - viscosity_sum, conductivity_sum: a dilute gas, an initial density dependence and a residual sum, the conductivity
//     with the critical enhancement of Olchowy and Sengers;
//   - iapws_2008, iapws_2011, iapws_surface: the releases for water;
//   - shan_2000: the residual concentration model of R23;
//   - corresponding_states: the background of a reference fluid at a conformal state;
//   - entropy_scaling: a function of the residual entropy, fitted to the fluid or to its group;
//   - sigma_sum, brock_bird: surface tension by a sum of powers or from the boiling point.
//
// Densities in coefficient files are kg/m3 (mol/L for R23), viscosities uPa s, conductivities W/(m K) (mW/(m K) for
// R23), lengths m but for molecules in nm.
//
// Models are immutable and safe for concurrent use; an evaluation needs no heap.
package transport

import (
	"fmt"
	"math"

	"dewmark/props/helmholtz"
)

// Constants of CODATA 2018, exact.
const (
	boltzmann = 1.380649e-23     // J/K
	avogadro  = 6.02214076e23    // 1/mol
	molarGas  = 8.31446261815324 // J/(mol K)
)

// Critical is the critical point that the authors of an equation of state state.
type Critical struct {
	T   float64 // K
	P   float64 // Pa
	Rho float64 // mol/m3
}

// Fluid is what a model needs to know of a refrigerant besides its transport records.
type Fluid struct {
	Designation string
	MolarMass   float64 // kg/mol
	Critical    Critical
	Equation    *helmholtz.Equation

	// The range of the equation of state, which is also that of a record that states none.
	TemperatureMin, TemperatureMax float64 // K
	PressureMax                    float64 // Pa
	DensityMax                     float64 // mol/m3
}

// State is a single-phase state as its equation of state sees it. At zero density Residual is zero.
type State struct {
	T        float64         // K
	Rho      float64         // mol/m3
	R        float64         // gas constant of the equation, J/(mol K)
	Ideal    helmholtz.Alpha // ideal part; only TT is used
	Residual helmholtz.Alpha
}

// Property names what is computed.
type Property uint8

// The properties.
const (
	Viscosity           Property = iota + 1 // Pa s
	ThermalConductivity                     // W/(m K)
	SurfaceTension                          // N/m
)

var propertyNames = [...]string{"", "viscosity", "thermal conductivity", "surface tension"}

func (p Property) String() string { return propertyNames[p] }

// StateError reports a state for which no model gives a positive, finite value: one with a negative or infinite
// argument, or far outside any range.
type StateError struct {
	Refrigerant string
	Property    Property
	T, Rho      float64 // K, mol/m3
}

func (e *StateError) Error() string {
	return fmt.Sprintf("%s: no %s at %g K and %g mol/m3", e.Refrigerant, e.Property, e.T, e.Rho)
}

// point is a state with what several models need of it.
type point struct {
	State
	mass     float64 // density, kg/m3
	p        float64 // Pa
	slope    float64 // (dp/d rho) at constant T, J/mol
	cv       float64 // J/(mol K)
	cp0      float64 // isobaric heat capacity of the ideal gas, J/(mol K)
	conforms conformal
}

// heatCapacity returns cp in J/(mol K) for a compressibility (d rho/dp) of k in mol/J.
func (p *point) heatCapacity(k float64) float64 {
	a := p.R * (1 + p.Residual.D - p.Residual.DT) // (dp/dT)/rho
	return p.cv + p.T*a*a*k
}

// newPoint derives the quantities of a state and reports whether it can be one.
func newPoint(s State, molarMass float64) (point, bool) {
	rt := s.R * s.T
	p := point{
		State: s,
		mass:  s.Rho * molarMass,
		p:     s.Rho * rt * (1 + s.Residual.D),
		slope: rt * (1 + 2*s.Residual.D + s.Residual.DD),
		cv:    -s.R * (s.Ideal.TT + s.Residual.TT),
		cp0:   s.R * (1 - s.Ideal.TT),
	}
	ok := s.T > 0 && s.Rho >= 0 && rt > 0 && finite(p.mass) && finite(p.p) && finite(p.slope) && finite(p.cv) && finite(p.cp0)
	return p, ok
}

func finite(x float64) bool { return math.Abs(x) <= math.MaxFloat64 } // false for NaN
