package blend

import (
	"fmt"
	"strings"
)

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
