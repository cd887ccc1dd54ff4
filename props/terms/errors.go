package terms

import (
	"fmt"
	"strings"
)

// RangeError reports a property outside the limits of an equation, or outside what the refrigerant can attain with the
// other given property. Value, Min and Max are SI; an open side is infinite.
type RangeError struct {
	Refrigerant string
	Property    Property
	Value       float64
	Min, Max    float64
	Limit       string // what sets the limit that was broken, such as "validity of the equation" or "melting pressure"
}

func (e *RangeError) Error() string {
	return fmt.Sprintf("%s: %s %g %s is outside %g to %g (%s)", e.Refrigerant, e.Property, e.Value, e.Property.Unit(), e.Min, e.Max, e.Limit)
}

// AmbiguousError reports a pair that more than one state has. Solutions holds them all.
type AmbiguousError struct {
	Refrigerant string
	Pair        [2]Property
	Solutions   []State
}

func (e *AmbiguousError) Error() string {
	phases := make([]string, len(e.Solutions))
	for i, s := range e.Solutions {
		phases[i] = fmt.Sprintf("%s at %.6g K, %.6g Pa", s.Phase, s.T, s.P)
	}
	return fmt.Sprintf("%s: %s and %s fix %d states (%s)", e.Refrigerant, e.Pair[0], e.Pair[1], len(e.Solutions), strings.Join(phases, "; "))
}

// NoSolutionError reports a pair of values that no state within the limits has, each value being possible by itself, or
// a phase that was asked for and that none of the solutions has.
type NoSolutionError struct {
	Refrigerant string
	Pair        [2]Given
	Phase       Phase   // the phase asked for, or AnyPhase
	Solutions   []State // states of other phases
}

func (e *NoSolutionError) Error() string {
	kind := "state"
	if e.Phase != AnyPhase {
		kind = e.Phase.String() + " state"
	}
	return fmt.Sprintf("%s: no %s with %s %g %s and %s %g %s within the limits", e.Refrigerant, kind,
		e.Pair[0].Property, e.Pair[0].Value, e.Pair[0].Property.Unit(), e.Pair[1].Property, e.Pair[1].Value, e.Pair[1].Property.Unit())
}

// DependentPairError reports a pair that cannot fix a state, such as temperature twice.
type DependentPairError struct{ Pair [2]Property }

func (e *DependentPairError) Error() string {
	return fmt.Sprintf("%s and %s do not fix a state", e.Pair[0], e.Pair[1])
}

// ConvergenceError reports a solver that stopped without an answer. T and Rho are its last iterate.
type ConvergenceError struct {
	Refrigerant string
	Pair        [2]Given
	T, Rho      float64 // K, kg/m3
}

func (e *ConvergenceError) Error() string {
	return fmt.Sprintf("%s: no convergence for %s %g and %s %g, last iterate %g K, %g kg/m3", e.Refrigerant,
		e.Pair[0].Property, e.Pair[0].Value, e.Pair[1].Property, e.Pair[1].Value, e.T, e.Rho)
}

// UnknownRefrigerantError reports a name that the catalogue does not have, with those closest to it.
type UnknownRefrigerantError struct {
	Name        string
	Suggestions []string // canonical designations, the closest first
}

func (e *UnknownRefrigerantError) Error() string {
	if len(e.Suggestions) == 0 {
		return fmt.Sprintf("unknown refrigerant %q", e.Name)
	}
	return fmt.Sprintf("unknown refrigerant %q, near names: %s", e.Name, strings.Join(e.Suggestions, ", "))
}

// DatumError reports a datum that a refrigerant cannot have, because it is not a liquid there.
type DatumError struct {
	Refrigerant string
	Datum       Datum
	Allowed     []Datum
}

func (e *DatumError) Error() string {
	names := make([]string, len(e.Allowed))
	for i, d := range e.Allowed {
		names[i] = d.String()
	}
	return fmt.Sprintf("%s has no saturated liquid at the reference point of datum %s, possible: %s", e.Refrigerant, e.Datum, strings.Join(names, ", "))
}

// ConditionError reports a pair that fixes its state so weakly that rounding alone leaves a property uncertain, such as
// the density of a thin gas whose temperature and enthalpy are given.
type ConditionError struct {
	Refrigerant string
	Pair        [2]Property
	Property    Property // the one left uncertain
	Uncertainty float64  // relative
}

func (e *ConditionError) Error() string {
	return fmt.Sprintf("%s: %s and %s leave the %s uncertain by a fraction of %.1e", e.Refrigerant, e.Pair[0], e.Pair[1], e.Property, e.Uncertainty)
}
