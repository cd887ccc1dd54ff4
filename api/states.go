package api

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"github.com/gin-gonic/gin"

	"dewmark/props"
)

// statesRequest asks for the states of one refrigerant.
type statesRequest struct {
	calculation
	Points     []point  `json:"points" validate:"required,min=1"`
	Properties []string `json:"properties" validate:"max=64"` // members of a state; default all
}

// point names a state by exactly two of its properties. Phase says which one is meant where a pair has several.
type point struct {
	ID             string   `json:"id"`
	Temperature    *float64 `json:"temperature"`
	Pressure       *float64 `json:"pressure"`
	Density        *float64 `json:"density"`
	SpecificVolume *float64 `json:"specific_volume"` // in place of density
	Enthalpy       *float64 `json:"enthalpy"`
	Entropy        *float64 `json:"entropy"`
	InternalEnergy *float64 `json:"internal_energy"`
	Quality        *float64 `json:"quality"`
	Phase          string   `json:"phase"`
}

// singleStateRequest is the query of GET /v1/states, read as if it were an object.
type singleStateRequest struct {
	calculation
	point
	Properties []string `json:"properties" validate:"max=64"`
}

// statesResponse holds the answers in the order of the points. Its members are those that write lists.
type statesResponse struct {
	*job
	kinds  []kind
	failed int
	states []stateItem
}

// stateItem is one place of a batch: a state, or the problem that stands for it.
type stateItem struct {
	id      string
	state   stateView
	problem *Problem
}

// singleStateResponse is the answer to GET /v1/states: the members of the state stand beside those of the response.
type singleStateResponse struct {
	*job
	kinds []kind
	state stateView
}

// given is a property that a request fixes, under the name that the request has for it.
type given struct {
	member string
	path   string // from the item to it in the request, such as "/pressure"; empty when the item is it
	kind   kind
	number float64 // as the caller wrote it
	props.Given
}

// states answers POST /v1/states.
func (a *API) states(c *gin.Context) (any, error) {
	var req statesRequest
	if err := a.decode(c, &req); err != nil {
		return nil, err
	}
	if n := len(req.Points); n > a.maxPoints {
		return nil, tooMany("#/points", n, a.maxPoints)
	}
	j, err := a.begin(&req.calculation)
	if err != nil {
		return nil, err
	}
	shown, err := selectFields(req.Properties)
	if err != nil {
		return nil, err
	}
	a.metrics.batch(c, len(req.Points))
	resp := &statesResponse{job: j, kinds: shown.kinds(), states: make([]stateItem, len(req.Points))}
	tally := a.metrics.tally("state")
	defer tally.done()
	outside := 0
	for i := range req.Points {
		if i%256 == 0 && c.Request.Context().Err() != nil {
			return nil, c.Request.Context().Err() // nobody waits for the answer
		}
		item := &resp.states[i]
		*item = j.item(&req.Points[i], "#/points/"+strconv.Itoa(i), shown)
		tally.count(item.problem)
		if item.problem != nil {
			resp.failed++
		}
		if item.state.extrapolated {
			outside++
		}
	}
	j.extrapolated(outside, len(req.Points))
	return resp, nil
}

// singleState answers GET /v1/states.
func (a *API) singleState(c *gin.Context) (any, error) {
	var req singleStateRequest
	if err := decodeQuery(c.Request.URL.Query(), &req); err != nil {
		return nil, err
	}
	if err := validate(&req); err != nil {
		return nil, err
	}
	j, err := a.begin(&req.calculation)
	if err != nil {
		return nil, err
	}
	shown, err := selectFields(req.Properties)
	if err != nil {
		return nil, err
	}
	tally := a.metrics.tally("state")
	defer tally.done()
	item := j.item(&req.point, "#", shown)
	tally.count(item.problem)
	if item.problem != nil {
		return nil, item.problem
	}
	if item.state.extrapolated {
		j.extrapolated(1, 1)
	}
	return &singleStateResponse{job: j, kinds: shown.kinds(), state: item.state}, nil
}

// item solves one point. Pointer leads to it.
func (j *job) item(p *point, pointer string, shown *selection) stateItem {
	item := stateItem{id: p.ID}
	if len(p.ID) > maxID {
		item.id = shorten(p.ID)
		item.problem = invalidItem(MemberError{Pointer: pointer + "/id", Code: "too_long", Detail: fmt.Sprintf("an id may have %d bytes at most", maxID)})
		return item
	}
	pair, phase, problem := j.pair(p, pointer)
	if problem != nil {
		item.problem = problem
		return item
	}
	s, err := j.r.State(pair[0].Given, pair[1].Given, phase)
	if err != nil {
		item.problem = voice{units: j.units, at: pointer, given: pair[:], r: j.r}.problem(err)
		return item
	}
	item.state = j.view(s, shown)
	for _, g := range pair {
		item.state.echo(g.member, g.number)
	}
	return item
}

const maxID = 128 // bytes; an id comes back with the result

// view turns a state into the caller's units and marks it when it is extrapolated.
func (j *job) view(s props.State, shown *selection) stateView {
	v := view(surround(j.r, s, shown.saturation), j.units, shown)
	v.extrapolated = j.extrapolate && j.r.Extrapolated(s)
	return v
}

// pair returns the two properties that p gives and the phase it wants.
func (j *job) pair(p *point, pointer string) (pair [2]given, phase props.Phase, problem *Problem) {
	var found []given
	for _, m := range [...]struct {
		name     string
		kind     kind
		property props.Property
		number   *float64
	}{
		{"temperature", kindTemperature, props.Temperature, p.Temperature},
		{"pressure", kindPressure, props.Pressure, p.Pressure},
		{"density", kindDensity, props.Density, p.Density},
		{"specific_volume", kindSpecificVolume, props.Density, p.SpecificVolume},
		{"enthalpy", kindEnthalpy, props.Enthalpy, p.Enthalpy},
		{"entropy", kindEntropy, props.Entropy, p.Entropy},
		{"internal_energy", kindEnthalpy, props.InternalEnergy, p.InternalEnergy},
		{"quality", kindNone, props.Quality, p.Quality},
	} {
		if m.number == nil {
			continue
		}
		si := j.units.in(m.kind, *m.number)
		if m.name == "specific_volume" {
			si = 1 / si
		}
		if math.IsInf(si, 0) {
			return pair, 0, invalidItem(MemberError{Pointer: pointer + "/" + m.name, Code: "out_of_range", Detail: fmt.Sprintf("%s %g cannot be", m.name, *m.number)})
		}
		found = append(found, given{m.name, "/" + m.name, m.kind, *m.number, props.Given{Property: m.property, Value: si}})
	}
	if fault := pairFault(found, pointer); fault != nil {
		return pair, 0, fault
	}
	if p.Phase != "" {
		var ok bool
		if phase, ok = props.ParsePhase(p.Phase); !ok {
			return pair, 0, invalidItem(MemberError{
				Pointer: pointer + "/phase", Code: "not_allowed",
				Detail: quote(p.Phase) + " is no phase; allowed are liquid, vapour, two_phase, supercritical",
			})
		}
	}
	return [2]given(found), phase, nil
}

const pairRule = "a point has exactly two of temperature, pressure, density or specific_volume, enthalpy, entropy, internal_energy and quality"

// pairFault returns a problem unless found are two different properties.
func pairFault(found []given, pointer string) *Problem {
	var names []string
	for _, g := range found {
		names = append(names, g.member)
	}
	switch {
	case slices.Contains(names, "density") && slices.Contains(names, "specific_volume"):
		return invalidItem(MemberError{Pointer: pointer + "/specific_volume", Code: "surplus", Detail: "density and specific_volume are one property; give one of them"})
	case len(names) == 0:
		return invalidItem(MemberError{Pointer: pointer, Code: "missing", Detail: pairRule + "; this one has none"})
	case len(names) == 1:
		return invalidItem(MemberError{Pointer: pointer, Code: "missing", Detail: pairRule + "; this one has only " + names[0]})
	case len(names) > 2:
		var faults []MemberError
		for _, name := range names {
			faults = append(faults, MemberError{Pointer: pointer + "/" + name, Code: "surplus", Detail: pairRule + "; this one has " + strings.Join(names, ", ")})
		}
		return invalidItem(faults...)
	}
	return nil
}

// encode writes the response.
func (r *statesResponse) encode(b []byte) ([]byte, error) {
	o := begin(b)
	if err := r.head(&o, r.kinds); err != nil {
		return nil, err
	}
	o.number("failed", float64(r.failed))
	o.name("states")
	o.b = append(o.b, '[')
	for i := range r.states {
		if i > 0 {
			o.b = append(o.b, ',')
		}
		var err error
		if o.b, err = r.states[i].encode(o.b); err != nil {
			return nil, err
		}
	}
	o.b = append(o.b, ']')
	err := r.tail(&o)
	return o.end(), err
}

// encode adds the item as an object.
func (i *stateItem) encode(b []byte) ([]byte, error) {
	o := begin(b)
	if i.id != "" {
		o.text("id", i.id)
	}
	if i.problem != nil {
		err := o.value("problem", i.problem)
		return o.end(), err
	}
	i.state.write(&o)
	return o.end(), nil
}

// encode writes the response.
func (r *singleStateResponse) encode(b []byte) ([]byte, error) {
	o := begin(b)
	if err := r.head(&o, r.kinds); err != nil {
		return nil, err
	}
	r.state.write(&o)
	err := r.tail(&o)
	return o.end(), err
}

// head writes the members that a response begins with.
func (j *job) head(o *object, kinds []kind) error {
	o.text("refrigerant", j.basis.Refrigerant)
	o.text("datum", j.basis.Datum)
	if err := o.value("units", j.units.names(kinds...)); err != nil {
		return err
	}
	if j.units.site != nil {
		return o.value("site", j.units.site)
	}
	return nil
}

// tail writes the members that a response ends with.
func (j *job) tail(o *object) error {
	if err := o.value("basis", j.basis); err != nil {
		return err
	}
	return o.value("cautions", j.cautions)
}

// tooMany reports a list longer than the service allows.
func tooMany(pointer string, have, limit int) error {
	return invalid([]MemberError{{Pointer: pointer, Code: "too_many", Detail: fmt.Sprintf("%d items; allowed are %d at most", have, limit)}})
}
