package props

import "dewmark/props/terms"

// The vocabulary of package terms under the names that users of this package need.
type (
	// State is a thermodynamic state. A property that does not exist in the state's phase is NaN.
	State = terms.State
	// Property names an intensive property that can fix a state.
	Property = terms.Property
	// Given is a property with its value in SI units.
	Given = terms.Given
	// Phase names the kind of a state.
	Phase = terms.Phase
	// Datum says where enthalpy and entropy are zero or have an agreed value.
	Datum = terms.Datum
	// Limits is the range in which a model is valid.
	Limits = terms.Limits
	// Point is a state point named by temperature, pressure and density.
	Point = terms.Point

	// RangeError reports a property outside the limits of a model.
	RangeError = terms.RangeError
	// AmbiguousError reports a pair that more than one state has, and holds them all.
	AmbiguousError = terms.AmbiguousError
	// NoSolutionError reports a pair of values that no state within the limits has.
	NoSolutionError = terms.NoSolutionError
	// DependentPairError reports a pair that cannot fix a state.
	DependentPairError = terms.DependentPairError
	// ConvergenceError reports a solver that stopped without an answer.
	ConvergenceError = terms.ConvergenceError
	// UnknownRefrigerantError reports a name that the catalogue does not have.
	UnknownRefrigerantError = terms.UnknownRefrigerantError
	// DatumError reports a datum that a refrigerant cannot have.
	DatumError = terms.DatumError
	// ConditionError reports a pair that fixes its state so weakly that rounding leaves a property uncertain.
	ConditionError = terms.ConditionError
)

// The properties that can fix a state.
const (
	Temperature    = terms.Temperature    // K
	Pressure       = terms.Pressure       // Pa
	Density        = terms.Density        // kg/m3
	Enthalpy       = terms.Enthalpy       // J/kg
	Entropy        = terms.Entropy        // J/(kg K)
	InternalEnergy = terms.InternalEnergy // J/kg
	Quality        = terms.Quality        // mass fraction of vapour, 0 to 1
)

// The phases.
const (
	AnyPhase      = terms.AnyPhase
	Liquid        = terms.Liquid
	Vapour        = terms.Vapour
	TwoPhase      = terms.TwoPhase
	Supercritical = terms.Supercritical
)

// The datums.
const (
	DefaultDatum = terms.DefaultDatum
	IIR          = terms.IIR
	ASHRAE       = terms.ASHRAE
	NBP          = terms.NBP
	TriplePoint  = terms.TriplePoint
)

// ParsePhase returns the phase with that name and reports whether there is one.
func ParsePhase(name string) (Phase, bool) { return terms.ParsePhase(name) }

// ParseDatum returns the datum with that name and reports whether there is one.
func ParseDatum(name string) (Datum, bool) { return terms.ParseDatum(name) }
