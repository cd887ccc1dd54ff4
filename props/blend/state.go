package blend

import "dewmark/props/terms"

// The vocabulary of package terms. The default datum of a blend is IIR, or NBP for one that is no liquid at 0 °C.
type (
	// State is a thermodynamic state of a blend.
	State = terms.State
	// Property names an intensive property that can fix a state.
	Property = terms.Property
	// Given is a property with its value in SI units.
	Given = terms.Given
	// Phase names the kind of a state.
	Phase = terms.Phase
	// Datum says where enthalpy and entropy are zero or have an agreed value.
	Datum = terms.Datum
	// Limits is the range in which a blend is computed.
	Limits = terms.Limits
	// Point is a state point named by temperature, pressure and density.
	Point = terms.Point

	// RangeError reports a property outside the limits of a blend.
	RangeError = terms.RangeError
	// AmbiguousError reports a pair that more than one state has, and holds them all.
	AmbiguousError = terms.AmbiguousError
	// NoSolutionError reports a pair of values that no state within the limits has.
	NoSolutionError = terms.NoSolutionError
	// DependentPairError reports a pair that cannot fix a state.
	DependentPairError = terms.DependentPairError
	// ConvergenceError reports a solver that stopped without an answer.
	ConvergenceError = terms.ConvergenceError
	// DatumError reports a datum that a blend cannot have.
	DatumError = terms.DatumError
	// ConditionError reports a pair that fixes its state so weakly that rounding leaves a property uncertain.
	ConditionError = terms.ConditionError
)

// The words of package terms that the code here needs.
const (
	Temperature    = terms.Temperature
	Pressure       = terms.Pressure
	Density        = terms.Density
	Enthalpy       = terms.Enthalpy
	Entropy        = terms.Entropy
	InternalEnergy = terms.InternalEnergy
	Quality        = terms.Quality

	AnyPhase      = terms.AnyPhase
	Liquid        = terms.Liquid
	Vapour        = terms.Vapour
	TwoPhase      = terms.TwoPhase
	Supercritical = terms.Supercritical

	DefaultDatum = terms.DefaultDatum
	IIR          = terms.IIR
	ASHRAE       = terms.ASHRAE
	NBP          = terms.NBP
)
