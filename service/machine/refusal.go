package machine

import "dewmark/service/internal/reasons"

// Code is a stable name for a reason to refuse. Those of a cycle's refusals appear too.
type Code string

// The reasons to refuse a machine or a condition, or to give none of its operating points.
const (
	Missing           Code = "missing"             // a field that is needed
	Surplus           Code = "surplus"             // a field that contradicts another or does not belong here
	OutOfBounds       Code = "out_of_bounds"       // a number outside what it can be
	NotAllowed        Code = "not_allowed"         // a choice that does not exist here
	ImplausibleMap    Code = "implausible_map"     // a map that no compressor can have
	BadEnvelope       Code = "bad_envelope"        // a polygon that bounds no area
	NoState           Code = "no_state"            // the refrigerant or a secondary fluid has no such state within its limits
	ExchangerTooSmall Code = "exchanger_too_small" // it passes the duty at no possible temperature
	LiftTooSmall      Code = "lift_too_small"      // condensation would fall to evaporation
	EnvelopeLeft      Code = "envelope_left"       // the point lies where a map says nothing
	Freezing          Code = "freezing"            // a secondary liquid would freeze
	TemperatureCross  Code = "temperature_cross"   // the streams would cross inside an exchanger
	Impossible        Code = "impossible"          // the refrigerant's circuit cannot work anywhere in reach
	NoConvergence     Code = "no_convergence"      // the search ended without an answer
)

// Refusal says why one field cannot be.
type Refusal struct {
	Code    Code
	Field   string  // path of the field to blame, such as "machine.evaporator.ua"; "" when it is the whole
	Message Message // what was wrong and what is allowed
	Cause   error   // of the property model or of the cycle, or nil
}

// RefusedError reports a machine or a condition that cannot be, or that has no operating point. It lists every field that
// a first check finds at fault, or else the one obstacle that stopped the calculation.
type RefusedError struct{ Refusals []Refusal }

func (e *RefusedError) Error() string { return reasons.Text("machine", e.Refusals) }

// Unwrap returns the errors behind the refusals.
func (e *RefusedError) Unwrap() []error { return reasons.Causes(e.Refusals) }

// Blame returns the field, the message in SI units and the cause.
func (r Refusal) Blame() (field, text string, cause error) {
	return r.Field, r.Message.String(), r.Cause
}
