package api

import (
	"cmp"
	"errors"
	"fmt"
	"math"
	"net/http"
	"slices"
	"strings"

	"dewmark/props"
	"dewmark/service/cycle"
)

// Problem is an RFC 9457 problem document. It is also an error, so that handlers can return one.
type Problem struct {
	Type        string        `json:"type"` // a path such as /problems/out-of-range, or about:blank
	Title       string        `json:"title"`
	Status      int           `json:"status"`
	Detail      string        `json:"detail,omitempty"`
	Instance    string        `json:"instance,omitempty"` // the path of the request; absent inside a batch
	Errors      []MemberError `json:"errors,omitempty"`
	Solutions   []stateView   `json:"solutions,omitempty"`   // every state that the given properties have
	Suggestions []string      `json:"suggestions,omitempty"` // designations near an unknown one
}

// MemberError says what is wrong with one member of the request.
type MemberError struct {
	Pointer string `json:"pointer"` // JSON pointer as a URI fragment, such as "#/points/3/pressure"
	Code    string `json:"code"`
	Detail  string `json:"detail"`
}

func (p *Problem) Error() string { return cmp.Or(p.Detail, p.Title) }

// outcome names the problem for a metric.
func (p *Problem) outcome() string {
	if name, ok := strings.CutPrefix(p.Type, "/problems/"); ok {
		return strings.ReplaceAll(name, "-", "_")
	}
	return "error"
}

// unprocessable makes a problem of status 422 with a type of our own.
func unprocessable(kind, title, detail string, faults ...MemberError) *Problem {
	return &Problem{Type: "/problems/" + kind, Title: title, Status: http.StatusUnprocessableEntity, Detail: detail, Errors: faults}
}

// refusal makes a problem of another status with a type of our own.
func refusal(status int, kind, detail string) *Problem {
	return &Problem{Type: "/problems/" + kind, Title: http.StatusText(status), Status: status, Detail: detail}
}

// blank is the answer to what must not happen. The cause goes to the log alone.
func blank() *Problem {
	return &Problem{Type: "about:blank", Title: http.StatusText(http.StatusInternalServerError), Status: http.StatusInternalServerError}
}

// malformed reports a body that is not JSON.
func malformed(pointer, detail string) *Problem {
	return &Problem{
		Type: "/problems/malformed-json", Title: "Malformed JSON", Status: http.StatusBadRequest, Detail: detail,
		Errors: []MemberError{{Pointer: pointer, Code: "malformed", Detail: detail}},
	}
}

// invalid reports members that are not what the description of the interface allows. It returns nil without faults.
func invalid(faults []MemberError) error {
	if len(faults) == 0 {
		return nil
	}
	return invalidItem(faults...)
}

// invalidItem is invalid for one item of a batch, with a fault at least.
func invalidItem(faults ...MemberError) *Problem {
	return unprocessable("invalid-request", "Invalid request", summary(faults), faults...)
}

// below returns p with its pointers leading through the item that pointer leads to.
func (p *Problem) below(pointer string) *Problem {
	inner := *p
	inner.Errors = slices.Clone(p.Errors)
	for i := range inner.Errors {
		inner.Errors[i].Pointer = pointer + strings.TrimPrefix(inner.Errors[i].Pointer, "#")
	}
	if p.Detail == summary(p.Errors) {
		inner.Detail = summary(inner.Errors)
	}
	return &inner
}

// tooMany reports a list longer than the service allows.
func tooMany(pointer string, have, limit int) error {
	return invalidItem(MemberError{Pointer: pointer, Code: "too_many", Detail: fmt.Sprintf("%d items; allowed are %d at most", have, limit)})
}

// summary says in one line what the faults say.
func summary(faults []MemberError) string {
	if len(faults) == 0 {
		return ""
	}
	first := faults[0].Pointer + ": " + faults[0].Detail
	if len(faults) > 1 {
		return first + "; and more, see errors"
	}
	return first
}

// problemFor maps what a handler returns. Its default is a bare 500, whose text goes to the log.
func problemFor(err error) *Problem {
	if p, ok := errors.AsType[*Problem](err); ok {
		return p
	}
	return blank()
}

// voice tells an error of the property core or of the engineering in the words of a request: its units, the names it has
// for properties, and where they stand. The zero value speaks SI of a request's refrigerant and datum.
type voice struct {
	units *units
	r     props.Refrigerant
	at    string // pointer to the item
	given []given
}

// problem maps err. Errors that it does not know become a blank 500.
func (v voice) problem(err error) *Problem {
	if e, ok := errors.AsType[*props.UnknownRefrigerantError](err); ok {
		return unknownRefrigerant(e, "#/refrigerant")
	}
	if e, ok := errors.AsType[*props.DatumError](err); ok {
		allowed := "allowed are " + strings.Join(datumNames(e.Allowed), ", ")
		if len(e.Allowed) == 0 {
			allowed = "no other datum has one either"
		}
		detail := fmt.Sprintf("%s has no saturated liquid where %s counts from; %s", e.Refrigerant, e.Datum, allowed)
		return unprocessable("datum-not-defined", "Datum not defined", detail, MemberError{Pointer: "#/datum", Code: "not_allowed", Detail: detail})
	}
	if e, ok := errors.AsType[*cycle.RefusedError](err); ok {
		return v.refused(e)
	}
	if e, ok := errors.AsType[*props.RangeError](err); ok {
		return v.outOfRange(e)
	}
	if e, ok := errors.AsType[*props.AmbiguousError](err); ok {
		return v.ambiguous(e)
	}
	if e, ok := errors.AsType[*props.NoSolutionError](err); ok {
		return v.noSolution(e)
	}
	if _, ok := errors.AsType[*props.DependentPairError](err); ok {
		detail := v.pairNames() + " do not fix a state; give two independent properties"
		return unprocessable("dependent-pair", "Properties depend on each other", detail, v.eachGiven("dependent", detail)...)
	}
	if e, ok := errors.AsType[*props.ConditionError](err); ok {
		detail := fmt.Sprintf("%s leave the %s of %s uncertain by %.1g %%; give another pair", v.pairText(), e.Property, e.Refrigerant, 100*e.Uncertainty)
		return unprocessable("uncertain-state", "Properties leave the state uncertain", detail, v.eachGiven("uncertain", detail)...)
	}
	if e, ok := errors.AsType[*props.ConvergenceError](err); ok {
		detail := fmt.Sprintf("the solver found no state of %s with %s; its last attempt was %s, %s", e.Refrigerant, v.pairText(e.Pair[0], e.Pair[1]),
			v.units.text(kindTemperature, e.T), v.units.text(kindDensity, e.Rho))
		return unprocessable("no-convergence", "No convergence", detail, v.eachGiven("no_convergence", detail)...)
	}
	return blank()
}

func unknownRefrigerant(e *props.UnknownRefrigerantError, pointer string) *Problem {
	detail := "there is no refrigerant " + quote(e.Name) + "; GET /v1/refrigerants lists all"
	if len(e.Suggestions) > 0 {
		detail = "there is no refrigerant " + quote(e.Name) + "; did you mean " + strings.Join(e.Suggestions, ", ") + "?"
	}
	p := unprocessable("unknown-refrigerant", "Unknown refrigerant", detail, MemberError{Pointer: pointer, Code: "unknown_refrigerant", Detail: detail})
	p.Suggestions = e.Suggestions
	return p
}

// outOfRange names the limit that was broken.
func (v voice) outOfRange(e *props.RangeError) *Problem {
	member, kind := propertyNames[e.Property].member, propertyNames[e.Property].kind
	value, low, high := e.Value, e.Min, e.Max
	pointer, said := v.at, ""
	for _, g := range v.given {
		if g.Property != e.Property {
			continue
		}
		pointer = v.at + g.path
		if member, kind = g.member, g.kind; kind == kindSpecificVolume {
			value, low, high = 1/e.Value, 1/e.Max, 1/e.Min
		}
		said = v.say(g)
		break
	}
	if said == "" {
		said = "the state would have " + strings.ReplaceAll(member, "_", " ") + " " + v.text(kind, value) + ", which"
	}
	code, bound := "above_maximum", "above"
	if !(value > high) {
		code, bound = "below_minimum", "below"
	}
	allowed := v.text(kind, low) + " to " + v.text(kind, high)
	switch {
	case math.IsInf(low, -1):
		allowed = "up to " + v.text(kind, high)
	case math.IsInf(high, 1):
		allowed = "from " + v.text(kind, low)
	}
	detail := fmt.Sprintf("%s is %s what %s allows, %s (%s)", said, bound, e.Refrigerant, allowed, e.Limit)
	return unprocessable("out-of-range", "Outside the limits", detail, MemberError{Pointer: pointer, Code: code, Detail: detail})
}

// ambiguous lists what the caller can choose from.
func (v voice) ambiguous(e *props.AmbiguousError) *Problem {
	phases := phasesOf(e.Solutions)
	var pair []props.Given
	for _, p := range e.Pair {
		pair = append(pair, props.Given{Property: p, Value: p.Of(&e.Solutions[0])})
	}
	detail := fmt.Sprintf("%d states of %s have %s", len(e.Solutions), e.Refrigerant, v.pairText(pair...))
	switch {
	case len(v.given) == 0: // deep in a calculation, where the request has no phase to give
		detail += ": " + strings.Join(phases, ", ")
	case len(phases) == len(e.Solutions):
		detail += "; say which is meant with phase: " + strings.Join(phases, ", ")
	default:
		detail += ", some of one phase; see solutions, and name the one that is meant by other properties"
	}
	p := unprocessable("ambiguous-state", "Several states have these properties", detail, MemberError{Pointer: v.at + "/phase", Code: "ambiguous", Detail: detail})
	p.Solutions = v.views(e.Solutions)
	return p
}

// noSolution says that a pair, or the phase asked for, does not exist.
func (v voice) noSolution(e *props.NoSolutionError) *Problem {
	const kind, title = "no-such-state", "No such state"
	if len(e.Solutions) == 0 {
		detail := fmt.Sprintf("no state of %s within the limits has %s", e.Refrigerant, v.pairText(e.Pair[0], e.Pair[1]))
		return unprocessable(kind, title, detail, v.eachGiven("no_such_state", detail)...)
	}
	detail := fmt.Sprintf("no %s state of %s has %s; allowed here: %s", e.Phase, e.Refrigerant, v.pairText(e.Pair[0], e.Pair[1]), strings.Join(phasesOf(e.Solutions), ", "))
	p := unprocessable(kind, title, detail, MemberError{Pointer: v.at + "/phase", Code: "no_such_state", Detail: detail})
	p.Solutions = v.views(e.Solutions)
	return p
}

// refused maps what the cycle solver blames.
func (v voice) refused(e *cycle.RefusedError) *Problem {
	var faults []MemberError
	for _, r := range e.Refusals {
		f := MemberError{Pointer: fieldPointer(r.Field), Code: string(r.Code), Detail: r.Message.Render(v.number)}
		if r.Component != "" {
			f.Detail += " (component " + r.Component + ")"
		}
		if r.Label != "" {
			f.Detail += " (state " + r.Label + ")"
		}
		if r.Cause != nil {
			f.Detail += ": " + v.cause(r.Cause)
		}
		faults = append(faults, f)
	}
	return unprocessable("impossible-cycle", "The cycle cannot be", summary(faults), faults...)
}

// fieldPointer turns a path of the cycle solver into a pointer.
func fieldPointer(field string) string {
	if field == "" {
		return "#"
	}
	return "#/" + strings.ReplaceAll(field, ".", "/")
}

// number writes a number of a cycle's message.
func (v voice) number(n cycle.Number) string { return v.text(quantityKinds[n.Quantity], n.Value) }

// quantityKinds maps the quantities of the engineering to those of the wire.
var quantityKinds = [...]kind{
	cycle.Dimensionless: kindNone, cycle.Temperature: kindTemperature, cycle.TemperatureDifference: kindTemperatureDifference,
	cycle.Pressure: kindPressure, cycle.PressureDifference: kindPressureDifference, cycle.Power: kindPower,
	cycle.HeatFlow: kindHeatFlow, cycle.MassFlow: kindMassFlow, cycle.VolumeFlow: kindVolumeFlow, cycle.Volume: kindVolume,
	cycle.EntropyFlow: kindEntropyFlow, cycle.Enthalpy: kindEnthalpy,
}

// propertyNames are the names that the wire has for the properties that fix a state.
var propertyNames = [...]struct {
	member string
	kind   kind
}{
	props.Temperature: {"temperature", kindTemperature}, props.Pressure: {"pressure", kindPressure}, props.Density: {"density", kindDensity},
	props.Enthalpy: {"enthalpy", kindEnthalpy}, props.Entropy: {"entropy", kindEntropy},
	props.InternalEnergy: {"internal_energy", kindEnthalpy}, props.Quality: {"quality", kindNone},
}

func (v voice) text(k kind, si float64) string { return v.units.text(k, si) }

// say names what was given, as it was given.
func (v voice) say(g given) string {
	text := fmt.Sprintf("%s %g", g.member, g.number)
	if g.kind == kindNone {
		return text
	}
	return text + " " + v.units.of[g.kind].code
}

// pairText names all that was given: by the request, or else by the calculation that asked for the state.
func (v voice) pairText(asked ...props.Given) string {
	var texts []string
	for _, g := range v.given {
		texts = append(texts, v.say(g))
	}
	if len(texts) == 0 {
		for _, g := range asked {
			word := propertyNames[g.Property]
			texts = append(texts, word.member+" "+v.text(word.kind, g.Value))
		}
	}
	return strings.Join(texts, " and ")
}

func (v voice) pairNames() string {
	names := make([]string, len(v.given))
	for i, g := range v.given {
		names[i] = g.member
	}
	return strings.Join(names, " and ")
}

// eachGiven blames every given property alike.
func (v voice) eachGiven(code, detail string) []MemberError {
	faults := make([]MemberError, len(v.given))
	for i, g := range v.given {
		faults[i] = MemberError{Pointer: v.at + g.path, Code: code, Detail: detail}
	}
	return faults
}

func (v voice) views(states []props.State) []stateView {
	views := make([]stateView, len(states))
	j := &job{r: v.r, components: componentsOf(v.r), units: v.units}
	for i, s := range states {
		views[i] = j.view(s, everything, &account{})
	}
	return views
}

// phasesOf returns the different phases of states.
func phasesOf(states []props.State) []string {
	var names []string
	for _, s := range states {
		if name := s.Phase.String(); !slices.Contains(names, name) {
			names = append(names, name)
		}
	}
	return names
}
