package blend

import (
	"fmt"
	"strings"
)

// RangeError reports a property outside the limits of a blend, or outside what the blend can attain with the other given
// property. Value, Min and Max are SI; an open side is infinite.
type RangeError struct {
	Refrigerant string
	Property    Property
	Value       float64
	Min, Max    float64
	Limit       string // what sets the limit that was broken, such as "validity of the equation"
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
	for i := range e.Solutions {
		s := &e.Solutions[i]
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
	wanted := ""
	if e.Phase != AnyPhase {
		wanted = e.Phase.String() + " "
	}
	return fmt.Sprintf("%s: no %sstate with %s %g %s and %s %g %s within the limits", e.Refrigerant, wanted,
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

// DatumError reports a datum that a blend cannot have, because it is not a liquid there.
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
	if len(names) == 0 {
		names = append(names, "none")
	}
	return fmt.Sprintf("%s has no saturated liquid at the reference point of datum %s, possible: %s", e.Refrigerant, e.Datum, strings.Join(names, ", "))
}

// UnknownBlendError reports a designation that is not in the list of blends.
type UnknownBlendError struct{ Designation string }

func (e *UnknownBlendError) Error() string { return fmt.Sprintf("unknown blend %q", e.Designation) }

// CompositionError reports a composition that makes no mixture. Index is the component at fault, or -1 when it is the
// composition as a whole.
type CompositionError struct {
	Index       int
	Designation string  // of the component at fault
	Value       float64 // the fraction at fault, or the sum of all
	Reason      string
}

func (e *CompositionError) Error() string {
	if e.Index < 0 {
		return "composition: " + e.Reason
	}
	return fmt.Sprintf("composition: component %d (%s): %s", e.Index, e.Designation, e.Reason)
}

// UnverifiedPairError reports pairs whose parameters nobody has tested, for which an answer must be asked for expressly.
type UnverifiedPairError struct {
	Refrigerant string
	Pairs       []Pair
}

func (e *UnverifiedPairError) Error() string {
	names := make([]string, len(e.Pairs))
	for i, p := range e.Pairs {
		names[i] = p.Components[0] + "/" + p.Components[1]
	}
	return fmt.Sprintf("%s: the mixture parameters of %s are unverified; estimates must be accepted expressly", e.Refrigerant, strings.Join(names, ", "))
}

// EnvelopeError reports a mixture for which the model has no simple region of liquid and vapour between a bubble line and
// a dew line that meet in one critical point.
type EnvelopeError struct {
	Refrigerant string
	T           float64 // where the construction stopped, K
	Reason      string
}

func (e *EnvelopeError) Error() string {
	return fmt.Sprintf("%s: no ordinary phase envelope: %s (near %.4g K)", e.Refrigerant, e.Reason, e.T)
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
