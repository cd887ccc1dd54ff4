package readings

import "dewmark/service/internal/reasons"

// Code is a stable name for a reason to refuse.
type Code string

// The reasons to refuse an installation or a sample.
const (
	Missing     Code = "missing"       // a field that is needed
	Surplus     Code = "surplus"       // a field that contradicts another or does not belong here
	OutOfBounds Code = "out_of_bounds" // a number outside what it can be
	NotAllowed  Code = "not_allowed"   // a choice that does not exist here
	NoState     Code = "no_state"      // a secondary fluid has no such state within its limits
)

// Refusal says why one field cannot be.
type Refusal struct {
	Code    Code
	Field   string  // path of the field to blame, such as "sink.volume_flow"; "" when it is the whole
	Message Message // what was wrong and what is allowed
	Cause   error   // of a property model, or nil
}

// RefusedError reports an installation or a sample that cannot be. It lists every field at fault.
type RefusedError struct{ Refusals []Refusal }

func (e *RefusedError) Error() string { return reasons.Text("readings", e.Refusals) }

// Unwrap returns the errors behind the refusals.
func (e *RefusedError) Unwrap() []error { return reasons.Causes(e.Refusals) }

// Blame returns the field, the message in SI units and the cause.
func (r Refusal) Blame() (field, text string, cause error) {
	return r.Field, r.Message.String(), r.Cause
}

// refusals collects what is wrong.
type refusals []Refusal

func (r *refusals) add(code Code, field string, m Message) {
	*r = append(*r, Refusal{Code: code, Field: field, Message: m})
}

// err returns what was wrong, or nil.
func (r refusals) err() error {
	if len(r) == 0 {
		return nil
	}
	return &RefusedError{r}
}
