package api

import (
	"errors"
	"strings"

	"dewmark/service/cycle"
	"dewmark/service/machine"
)

// machineVoice tells what the solver of machines says in the words of a request.
type machineVoice struct {
	voice
	condition string // pointer to what the solver calls the condition
	oneMap    bool   // the machine has one map, not a list
}

// pointer turns a path of the solver into a pointer.
func (v machineVoice) pointer(field string) string {
	const first = "/compressor/maps/0"
	rest := "/" + strings.ReplaceAll(field, ".", "/")
	if field == "" {
		return v.condition
	}
	if inner, ok := strings.CutPrefix(rest, "/condition"); ok {
		return v.condition + inner
	}
	if before, after, ok := strings.Cut(rest, first); ok && v.oneMap && (after == "" || after[0] == '/') {
		rest = before + "/compressor/map" + after
	}
	if v.oneMap && strings.HasSuffix(rest, "/compressor/maps") {
		rest = strings.TrimSuffix(rest, "s")
	}
	return "#" + rest
}

// problem maps what the solver returns.
func (v machineVoice) problem(err error) *Problem {
	e, ok := errors.AsType[*machine.RefusedError](err)
	if !ok {
		return v.voice.problem(err)
	}
	kind, title := "impossible-machine", "The machine cannot be"
	var faults []MemberError
	for _, r := range e.Refusals {
		detail := r.Message.Render(v.number)
		if r.Cause != nil {
			detail += ": " + v.cause(r.Cause)
		}
		faults = append(faults, MemberError{Pointer: v.pointer(r.Field), Code: string(r.Code), Detail: detail})
		switch {
		case r.Code == machine.NoConvergence:
			kind, title = "no-convergence", "No convergence"
		case !ofShape(r.Code):
			kind, title = "no-operating-point", "No operating point"
		}
	}
	return unprocessable(kind, title, summary(faults), faults...)
}

// ofShape reports whether a refusal comes of the description of a machine or condition alone, before any search.
func ofShape(code machine.Code) bool {
	switch code {
	case machine.Missing, machine.Surplus, machine.OutOfBounds, machine.NotAllowed, machine.ImplausibleMap, machine.BadEnvelope:
		return true
	}
	return false
}

// blamesMachine reports whether err is about the machine whatever the condition.
func blamesMachine(err error) bool {
	e, ok := errors.AsType[*machine.RefusedError](err)
	if !ok {
		return false
	}
	for _, r := range e.Refusals {
		if !ofShape(r.Code) || !strings.HasPrefix(r.Field, "machine") {
			return false
		}
	}
	return true
}

// cause tells what lies behind a refusal. A cycle's own members are not the caller's.
func (v machineVoice) cause(err error) string {
	if e, ok := errors.AsType[*cycle.RefusedError](err); ok {
		texts := make([]string, len(e.Refusals))
		for i, r := range e.Refusals {
			texts[i] = r.Message.Render(v.number)
			if r.Cause != nil {
				texts[i] += ": " + v.cause(r.Cause)
			}
		}
		return strings.Join(texts, "; ")
	}
	return v.voice.cause(err)
}

// cautions turns the solver's cautions into the wire's.
func (v machineVoice) cautions(list []machine.Caution) []caution {
	out := make([]caution, 0, len(list)+1)
	for _, c := range list {
		detail := c.Message.Render(v.number)
		if c.Field != "" {
			detail = v.path(c.Field) + ": " + detail
		}
		if c.Label != "" {
			detail += " (state " + c.Label + ")"
		}
		out = append(out, caution{string(c.Code), detail})
	}
	return out
}

// path writes the path of a field as the request has it, below the condition.
func (v machineVoice) path(field string) string {
	p := strings.TrimPrefix(strings.TrimPrefix(v.pointer(field), v.condition), "#")
	return strings.ReplaceAll(strings.TrimPrefix(p, "/"), "/", ".")
}
