package api

import (
	"fmt"
	"math"
	"slices"
	"strings"
	"sync"

	"dewmark/props"
)

// worker answers points one after the other. It belongs to one goroutine.
type worker struct {
	*job
	shown  *selection
	stream bool      // nothing follows the states
	solved solved    // the last state
	view   stateView // of it
	account
}

func newWorker(j *job, shown *selection) *worker { return &worker{job: j, shown: shown} }

// workers are large for what one state costs.
var workers = sync.Pool{New: func() any { return new(worker) }}

// takeWorker is newWorker for one that is given back.
func takeWorker(j *job, shown *selection) *worker {
	w := workers.Get().(*worker)
	w.job, w.shown = j, shown
	return w
}

// giveBack returns the worker to the pool, after which nobody may use it.
func (w *worker) giveBack() {
	*w = worker{}
	workers.Put(w)
}

// given is a property that a request fixes, under the name that the request has for it.
type given struct {
	member string
	path   string // from the item to it in the request, such as "/pressure"; empty when the item is it
	kind   kind
	number float64 // as the caller wrote it
	props.Given
}

const maxID = 128 // bytes; an id comes back with the result

// item answers one point with an object at the end of b: the state, or the problem that stands for it.
func (w *worker) item(b []byte, p *point, at place) []byte {
	if problem := w.solve(p, at); problem != nil {
		return failedItem(b, p, problem)
	}
	o := begin(b)
	if p.ID != "" {
		o.text("id", p.ID)
	}
	w.view.write(&o)
	if w.stream {
		w.remark(&o)
	}
	return o.end()
}

// remark writes the reservations about a state beside it: a stream has no place for them behind its states.
func (w *worker) remark(o *object) {
	var cautions []caution
	for i := range w.reservations {
		cautions = append(cautions, w.reservations[i].say(w.units, 1))
	}
	w.reservations = w.reservations[:0]
	if len(cautions) > 0 {
		if err := o.value("cautions", cautions); err != nil {
			panic("api: " + err.Error()) // cautions are text
		}
	}
}

// failedItem writes what stands in the place of a point that has no state.
func failedItem(b []byte, p *point, problem *Problem) []byte {
	o := begin(b)
	if p.ID != "" {
		o.text("id", strings.ToValidUTF8(p.ID[:min(len(p.ID), maxID)], ""))
	}
	if err := o.value("problem", problem); err != nil {
		panic("api: " + err.Error()) // a problem holds nothing that JSON has not
	}
	return o.end()
}

// solve computes the state of one point and leaves it in the view.
func (w *worker) solve(p *point, at place) *Problem {
	problem := w.try(p, at)
	w.count(problem, w.view.extrapolated)
	return problem
}

func (w *worker) try(p *point, at place) *Problem {
	w.view.extrapolated = false
	if len(p.ID) > maxID {
		return invalidItem(MemberError{Pointer: at.String() + "/id", Code: "too_long", Detail: fmt.Sprintf("an id may have %d bytes at most", maxID)})
	}
	var room [8]given
	found := p.given(room[:0], w.units)
	if fault := pairFault(found, at); fault != nil {
		return fault
	}
	phase, ok := props.ParsePhase(p.Phase)
	if !ok && p.Phase != "" {
		return invalidItem(MemberError{
			Pointer: at.String() + "/phase", Code: "not_allowed", Detail: quote(p.Phase) + " is no phase; allowed are liquid, vapour, two_phase, supercritical",
		})
	}
	s, err := w.r.State(found[0].Given, found[1].Given, phase)
	if err != nil {
		return voice{units: w.units, at: at.String(), given: slices.Clone(found), r: w.r}.problem(err)
	}
	w.show(s)
	for i := range found {
		w.view.echo(found[i].member, found[i].number)
	}
	return nil
}

// show leaves s in the view.
func (w *worker) show(s props.State) {
	w.states++
	w.solved.surround(w.r, s, w.shown)
	if len(w.shown.transport) > 0 {
		w.solved.transport = w.transported(s)
	}
	if w.shown.derived {
		w.solved.derived = w.r.Derived(s)
	}
	w.view.fill(&w.solved, w.components, w.units, w.shown)
	w.view.extrapolated = w.extrapolate && w.r.Extrapolated(s)
}

// given appends the properties that p fixes to found.
func (p *point) given(found []given, u *units) []given {
	for _, m := range [...]struct {
		path     string
		kind     kind
		property props.Property
		number   *float64
	}{
		{"/temperature", kindTemperature, props.Temperature, p.Temperature},
		{"/pressure", kindPressure, props.Pressure, p.Pressure},
		{"/density", kindDensity, props.Density, p.Density},
		{"/specific_volume", kindSpecificVolume, props.Density, p.SpecificVolume},
		{"/enthalpy", kindEnthalpy, props.Enthalpy, p.Enthalpy},
		{"/entropy", kindEntropy, props.Entropy, p.Entropy},
		{"/internal_energy", kindEnthalpy, props.InternalEnergy, p.InternalEnergy},
		{"/quality", kindNone, props.Quality, p.Quality},
	} {
		if m.number == nil {
			continue
		}
		si := u.in(m.kind, *m.number)
		if m.kind == kindSpecificVolume {
			si = 1 / si
		}
		found = append(found, given{m.path[1:], m.path, m.kind, *m.number, props.Given{Property: m.property, Value: si}})
	}
	return found
}

const pairRule = "a point has exactly two of temperature, pressure, density or specific_volume, enthalpy, entropy, internal_energy and quality"

// pairFault returns a problem unless found are two different properties with finite values.
func pairFault(found []given, at place) *Problem {
	for i := range found {
		if g := &found[i]; math.IsInf(g.Value, 0) {
			return invalidItem(MemberError{Pointer: at.String() + g.path, Code: "out_of_range", Detail: fmt.Sprintf("%s %g cannot be", g.member, g.number)})
		}
	}
	if len(found) == 2 && found[0].Property != found[1].Property {
		return nil
	}
	names := make([]string, len(found))
	for i, g := range found {
		names[i] = g.member
	}
	switch {
	case slices.Contains(names, "density") && slices.Contains(names, "specific_volume"):
		return invalidItem(MemberError{Pointer: at.String() + "/specific_volume", Code: "surplus", Detail: "density and specific_volume are one property; give one of them"})
	case len(names) == 0:
		return invalidItem(MemberError{Pointer: at.String(), Code: "missing", Detail: pairRule + "; this one has none"})
	case len(names) == 1:
		return invalidItem(MemberError{Pointer: at.String(), Code: "missing", Detail: pairRule + "; this one has only " + names[0]})
	}
	faults := make([]MemberError, len(found))
	for i, g := range found {
		faults[i] = MemberError{Pointer: at.String() + g.path, Code: "surplus", Detail: pairRule + "; this one has " + strings.Join(names, ", ")}
	}
	return invalidItem(faults...)
}
