package cycle

import (
	"strings"

	"dewmark/service/internal/reasons"
)

// RefusalCode is a stable name for a reason to refuse a request.
type RefusalCode string

// The reasons to refuse a request.
const (
	Missing               RefusalCode = "missing"                // a field that the layout needs
	Surplus               RefusalCode = "surplus"                // a field that contradicts another or does not belong to the layout
	OutOfBounds           RefusalCode = "out_of_bounds"          // a number outside what it can be
	NotAllowed            RefusalCode = "not_allowed"            // a choice that does not exist here
	AboveCritical         RefusalCode = "above_critical"         // condensing or evaporating at or above the critical point
	BelowCritical         RefusalCode = "below_critical"         // a gas cooler where a condenser belongs
	PressuresOutOfOrder   RefusalCode = "pressures_out_of_order" // high side not above low side, or intermediate not between
	SecondLaw             RefusalCode = "second_law"             // a component would destroy entropy
	NoState               RefusalCode = "no_state"               // the refrigerant has no such state within its limits
	NoSolution            RefusalCode = "no_solution"            // the layout has no answer for these conditions
	ImpossibleMeasurement RefusalCode = "impossible_measurement" // a discharge temperature that no compressor can have
)

// Refusal says why one field of a request cannot be.
type Refusal struct {
	Code      RefusalCode
	Field     string  // path of the field to blame, such as "condensation.temperature"; "" when it is the whole request
	Component string  // component that cannot work so, or ""
	Label     string  // place in the circuit whose state is at fault, or ""
	Message   Message // what was wrong and what is allowed
	Cause     error   // error of the property model, or nil
}

// RefusedError reports a request that cannot be. It lists every field that a first check finds at fault, or else the one
// obstacle that stopped the calculation.
type RefusedError struct{ Refusals []Refusal }

func (e *RefusedError) Error() string { return reasons.Text("cycle", e.Refusals) }

// Unwrap returns the errors of the property model behind the refusals.
func (e *RefusedError) Unwrap() []error { return reasons.Causes(e.Refusals) }

// Blame returns the field, the message in SI units and the cause.
func (r Refusal) Blame() (field, text string, cause error) {
	return r.Field, r.Message.String(), r.Cause
}

// noState says that the property model has no state for a place.
func (c *circuit) noState(at place, field string, cause error) Refusal {
	n := &placeNames[c.side][at]
	return Refusal{
		Code: NoState, Field: field, Label: n.label,
		Message: message("the refrigerant has no state for " + n.label + " (" + n.words + ") within its limits"), Cause: cause,
	}
}

// againstSecondLaw says what is wrong with a component that would destroy entropy.
func (c *circuit) againstSecondLaw(a *account, generation float64) Refusal {
	r := Refusal{Code: SecondLaw, Component: partNames[a.side][a.part]}
	entropy := Number{EntropyFlow, -generation}
	switch a.part {
	case evaporator:
		r.Field = "source_temperature"
		r.Message = message("the heat source at %s is colder than the evaporator needs: entropy would fall by %s", temperature(a.heatT), entropy)
	case condenser, gasCooler:
		r.Field = "sink_temperature"
		r.Message = message("the heat sink at %s is hotter than the condenser or gas cooler can serve: entropy would fall by %s", temperature(a.heatT), entropy)
	case suctionLine, liquidLine, dischargeLine:
		r.Field = "ambient_temperature"
		r.Message = message("the "+strings.ReplaceAll(r.Component, "_", " ")+" would exchange heat with an ambient at %s against the temperature difference: entropy would fall by %s",
			temperature(a.heatT), entropy)
	default:
		r.Message = message("the "+strings.ReplaceAll(r.Component, "_", " ")+" would destroy entropy, %s", entropy)
	}
	return r
}
