package api

import (
	"bytes"
	"errors"
	"fmt"
	"strings"
	"sync"

	"dewmark/props"
)

// calculation holds what all requests that compute share.
type calculation struct {
	Refrigerant substance         `json:"refrigerant" validate:"required"`
	Datum       string            `json:"datum"` // default IIR, or triple_point where the refrigerant has no IIR
	Units       map[string]string `json:"units"` // default {"system": "SI"}
	Site        *site             `json:"site"`  // needed by gauge pressures
	Extrapolate bool              `json:"extrapolate"`
	Estimates   bool              `json:"accept_estimates"` // of mixture parameters that nobody has tested
}

// basis names what a result rests on.
type basis struct {
	Refrigerant  string `json:"refrigerant"`
	Model        string `json:"model"`
	Source       string `json:"source"` // of the equation, or of a blend's composition
	Datum        string `json:"datum"`
	Extrapolated bool   `json:"extrapolated"` // some result lies outside the validity of the equation
	Version      string `json:"version"`      // of the service

	*blendBasis
	Transport []transportBasis `json:"transport,omitempty"` // of the transport properties shown
}

// caution is a reservation about a result.
type caution struct {
	Code   string `json:"code"`
	Detail string `json:"detail"`
}

// job is a calculation whose refrigerant, datum and units are known.
type job struct {
	r           props.Refrigerant
	components  []string // of a blend, in the order of its compositions
	extrapolate bool
	units       *units
	basis       basis
	cautions    []caution

	bases *sync.Map // where the basis may be encoded already; nil where it is the request's own
	usual bool      // the basis is that of any answer with all members
}

// begin resolves what a request says of its refrigerant, datum and units.
func (a *API) begin(c *calculation) (*job, error) {
	u, err := newUnits(c.Units, c.Site)
	if err != nil {
		return nil, err
	}
	r, err := a.refrigerant(c, u)
	if err != nil {
		return nil, err
	}
	if c.Extrapolate {
		r = props.Extrapolate(r)
	}
	a.metrics.used(r.Designation())
	id := r.Identity()
	j := &job{r: r, extrapolate: c.Extrapolate, units: u, cautions: []caution{}, basis: basis{
		Refrigerant: r.Designation(), Model: id.Model, Source: id.Source, Datum: r.Datum().String(), Version: a.version,
	}}
	if id.Kind == props.KindBlend {
		j.components, j.basis.blendBasis = componentsOf(r), blendBasisOf(&id)
	} else if !c.Extrapolate {
		j.bases = &a.bases
	}
	if c.Refrigerant.mixture != nil {
		j.basis.Source = "composition of the request"
	}
	for _, reservation := range r.Reservations() {
		j.caution(reservation.Code, reservation.Detail)
	}
	if c.Datum == "" && r.Datum() != props.IIR {
		j.caution("datum_not_defined", r.Designation()+" has no saturated liquid at 0 °C, so that IIR, the datum by default, is not defined; "+
			"enthalpy, entropy and internal energy count from "+r.Datum().String())
	}
	return j, nil
}

// refrigerant finds the refrigerant of a request, counting from the datum that it names.
func (a *API) refrigerant(c *calculation, u *units) (props.Refrigerant, error) {
	d, ok := props.ParseDatum(c.Datum)
	if !ok && c.Datum != "" {
		return nil, invalid([]MemberError{{
			Pointer: "#/datum", Code: "not_allowed", Detail: quote(c.Datum) + " is no datum; allowed are " + strings.Join(datumNames(allDatums), ", "),
		}})
	}
	find := func(d props.Datum) (props.Refrigerant, error) {
		if m := c.Refrigerant.mixture; m != nil {
			return a.mixture(m, d, c.Estimates, u)
		}
		return a.catalogue.Refrigerant(c.Refrigerant.designation, d)
	}
	r, err := find(d)
	if e, ok := errors.AsType[*props.DatumError](err); ok && d == props.DefaultDatum && len(e.Allowed) > 0 {
		r, err = find(e.Allowed[0]) // the request leaves the choice to us
	}
	if err == nil {
		return r, nil
	}
	if p, ok := errors.AsType[*Problem](err); ok {
		return nil, p
	}
	return nil, voice{units: u}.problem(err)
}

var allDatums = []props.Datum{props.IIR, props.ASHRAE, props.NBP, props.TriplePoint}

func datumNames(datums []props.Datum) []string {
	names := make([]string, len(datums))
	for i, d := range datums {
		names[i] = d.String()
	}
	return names
}

func (j *job) caution(code, detail string) { j.cautions = append(j.cautions, caution{code, detail}) }

// conclude tells what the calculations as a whole have to say, and what the properties shown rest on.
func (j *job) conclude(a *account, shown *selection) {
	if a.outside > 0 {
		j.basis.Extrapolated = true
		j.caution("extrapolated", fmt.Sprintf("%d of %d states lie outside the validity of the equation of state and are marked; their uncertainty is not known", a.outside, a.states))
	}
	j.basis.Transport = transportBases(j.r, shown)
	j.usual = j.bases != nil && shown == everything
	for i := range a.reservations {
		j.cautions = append(j.cautions, a.reservations[i].say(j.units, a.states))
	}
}

// view returns a state in the caller's units and enters what is to be said of it.
func (j *job) view(s props.State, shown *selection, into *account) stateView {
	w := takeWorker(j, shown)
	defer w.giveBack()
	w.show(s)
	into.add(&w.account)
	return w.view
}

// head writes the members that a response begins with.
func (j *job) head(o *object, kinds []kind) error {
	o.text("refrigerant", j.basis.Refrigerant)
	o.text("datum", j.basis.Datum)
	j.units.write(o, kinds)
	if j.units.site != nil {
		return o.value("site", j.units.site)
	}
	return nil
}

// tail writes the members that a response ends with.
func (j *job) tail(o *object) error {
	o.name("basis")
	var err error
	if o.b, err = j.appendBasis(o.b); err != nil {
		return err
	}
	o.list("cautions", len(j.cautions), func(i int, c *object) {
		c.text("code", j.cautions[i].Code)
		c.text("detail", j.cautions[i].Detail)
	})
	return nil
}

// appendBasis appends the basis to b. That of a pure refrigerant with all members is encoded once.
func (j *job) appendBasis(b []byte) ([]byte, error) {
	if !j.usual {
		return j.basis.encode(b)
	}
	if kept, ok := j.bases.Load(j.r); ok {
		return append(b, kept.([]byte)...), nil
	}
	start := len(b)
	b, err := j.basis.encode(b)
	if err == nil {
		j.bases.Store(j.r, bytes.Clone(b[start:]))
	}
	return b, err
}

// encode appends the basis to b.
func (s *basis) encode(b []byte) ([]byte, error) {
	o := begin(b)
	o.text("refrigerant", s.Refrigerant)
	o.text("model", s.Model)
	o.text("source", s.Source)
	o.text("datum", s.Datum)
	o.flag("extrapolated", s.Extrapolated)
	o.text("version", s.Version)
	if s.blendBasis != nil {
		if err := o.members(s.blendBasis); err != nil {
			return nil, err
		}
	}
	if len(s.Transport) > 0 {
		o.list("transport", len(s.Transport), func(i int, t *object) {
			t.text("property", s.Transport[i].Property)
			t.text("method", s.Transport[i].Method)
			t.text("source", s.Transport[i].Source)
		})
	}
	return o.end(), nil
}

// MarshalJSON writes a basis that stands inside other members.
func (s basis) MarshalJSON() ([]byte, error) { return s.encode(nil) }
