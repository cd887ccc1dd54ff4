package api

import (
	"context"
	"errors"
	"fmt"
	"slices"
	"strings"
	"time"

	"github.com/gin-gonic/gin"

	"dewmark/props"
	"dewmark/service/cycle"
	"dewmark/service/readings"
	"dewmark/service/readings/uncertainty"
)

// readingsHead says what is the same for all samples of an installed machine.
type readingsHead struct {
	Refrigerant substance         `json:"refrigerant" validate:"required"`
	Datum       string            `json:"datum"`
	Units       map[string]string `json:"units"`
	Site        *readingsSite     `json:"site"`
	Extrapolate bool              `json:"extrapolate"`
	Estimates   bool              `json:"accept_estimates"`

	Layout           string          `json:"layout"` // default single_stage
	With             []string        `json:"with"`
	Machine          *machineRequest `json:"machine"` // to compare with
	Expected         *expectedDoubts `json:"expected_uncertainties"`
	Series           *seriesRequest  `json:"series"` // makes a series of the samples of a batch; those of a stream are one anyway
	Sink             fluidRequest    `json:"sink"`   // where samples name none
	Source           fluidRequest    `json:"source"`
	Naming           string          `json:"naming"` // of the points of samples
	Uncertainties    *uncertainties  `json:"uncertainties"`
	Correlations     []correlation   `json:"correlations" validate:"max=100"`
	Shared           []sharedError   `json:"shared_errors" validate:"max=20,dive"`
	ShellConductance *float64        `json:"shell_conductance"`
	SweptVolume      *float64        `json:"swept_volume"`
	ModelUncertainty *float64        `json:"model_uncertainty"`
	Expansion        string          `json:"expansion"` // default controlled
	Method           string          `json:"method"`    // default gum
	Coverage         *float64        `json:"coverage"`  // default that of two standard deviations
	Draws            drawsRequest    `json:"draws"`
	Properties       []string        `json:"properties" validate:"max=64"` // of the states
	Include          []string        `json:"include" validate:"max=16"`    // parts of a result; default all
}

// readingsSite says where pressures are read.
type readingsSite struct {
	site
	AmbientUncertainty *float64 `json:"ambient_uncertainty"`
	Sealed             []string `json:"sealed"` // pressures whose gauges count from the standard atmosphere
}

// expectedDoubts are standard uncertainties of what the machine to compare with would do.
type expectedDoubts struct {
	MassFlowFraction *float64 `json:"mass_flow_fraction"` // of the compressor's flow, relative
}

// uncertainties says how uncertain readings are.
type uncertainties struct {
	perReading[uncertaintyRequest]
	Sink   perStream[uncertaintyRequest] `json:"sink"`
	Source perStream[uncertaintyRequest] `json:"source"`
}

// uncertaintyRequest takes exactly one of its first five members.
type uncertaintyRequest struct {
	Standard         *float64 `json:"standard"`
	Relative         *float64 `json:"relative"`
	Expanded         *float64 `json:"expanded"`
	Limit            *float64 `json:"limit"`
	Sensor           string   `json:"sensor"`
	CoverageFactor   *float64 `json:"coverage_factor"`
	Span             *float64 `json:"span"`
	DegreesOfFreedom *float64 `json:"degrees_of_freedom"`
}

type correlation struct {
	Between     []string `json:"between"`
	Coefficient float64  `json:"coefficient"`
}

type sharedError struct {
	Name     string   `json:"name" validate:"required,max=64"`
	Readings []string `json:"readings" validate:"max=64"`
	Standard float64  `json:"standard"`
}

type drawsRequest struct {
	Seed   *float64 `json:"seed"`
	Count  *float64 `json:"count"`
	Most   *float64 `json:"most"`
	Digits *float64 `json:"digits"`
}

// readingsRequest asks what samples tell.
type readingsRequest struct {
	readingsHead
	Samples []sample `json:"samples" validate:"required,min=1"`
}

// sample is what the sensors said at one time.
type sample struct {
	ID   string `json:"id"`
	Time string `json:"time"` // RFC 3339
	perReading[float64]
	Sink            sampleStream `json:"sink"`
	Source          sampleStream `json:"source"`
	StandstillHours *float64     `json:"standstill_hours"`
	Points          *pointValues `json:"points"` // numbers under the names of the head's naming
}

type sampleStream struct {
	fluidRequest
	perStream[float64]
	MeterAtOutlet bool `json:"meter_at_outlet"`
}

// installation is an installed machine whose head was read: the samples of a request follow.
type installation struct {
	*job
	head     *readingsHead
	evaluate *readings.Evaluator
	fluids   *fluids
	sink     readings.Stream
	source   readings.Stream
	naming   *naming // nil for our own names
	states   *selection
	parts    parts
	brief    bool // standing cautions are told once, behind the last sample
	machine  machineVoice
}

// install checks the head of a request. Its results have the usual parts unless it names others.
func (a *API) install(h *readingsHead, usual []string) (*installation, error) {
	var where *site
	if h.Site != nil {
		where = &h.Site.site
	}
	j, err := a.begin(&calculation{Refrigerant: h.Refrigerant, Datum: h.Datum, Units: h.Units, Site: where, Extrapolate: h.Extrapolate, Estimates: h.Estimates})
	if err != nil {
		return nil, err
	}
	in := &installation{
		job: j, head: h, fluids: a.fluids(j.units),
		machine: machineVoice{voice: voice{units: j.units, r: j.r}, condition: "#", oneMap: h.Machine != nil && h.Machine.Compressor.Map != nil},
	}
	var c choices
	if in.states, err = selectStates(h.Properties); err != nil {
		return nil, err
	}
	in.parts = selectParts(&c, h.Include, usual)
	if h.Naming != "" {
		in.naming = choose(&c, "#/naming", h.Naming, nil, namingOf, namingNames())
	}
	in.sink, in.source = in.fluid(&h.Sink, &c, "#/sink"), in.fluid(&h.Source, &c, "#/source")
	described, options := in.si(&c)
	described.OtherRefrigerants = a.others(in.r)
	if len(c) == 0 && h.Machine != nil {
		if described.Machine, err = a.compared(in, h); err != nil {
			return nil, err
		}
	}
	if err := invalid(c); err != nil {
		return nil, err
	}
	in.evaluate, err = readings.New(described, options)
	if err != nil {
		return nil, in.problem(err, "#")
	}
	return in, nil
}

// compared returns the machine that the installed one is compared with.
func (a *API) compared(in *installation, h *readingsHead) (readings.Machine, error) {
	of := calculation{Refrigerant: h.Machine.Refrigerant, Datum: h.Datum, Units: h.Units, Extrapolate: h.Extrapolate, Estimates: h.Estimates}
	if h.Site != nil {
		of.Site = &h.Site.site
	}
	j, err := a.begin(&of)
	if err != nil {
		return nil, within(err, "#/refrigerant", "#/machine/refrigerant")
	}
	if j.r.Designation() != in.r.Designation() {
		return nil, invalidItem(MemberError{Pointer: "#/machine/refrigerant", Code: "not_allowed", Detail: fmt.Sprintf(
			"the machine runs on %s, the readings are of %s; they can be compared on one refrigerant alone", j.r.Designation(), in.r.Designation())})
	}
	m, err := h.Machine.si(in.r, in.units)
	if err != nil {
		return nil, err
	}
	var o readings.ExpectOptions
	if x := h.Expected; x != nil && x.MassFlowFraction != nil {
		o.FlowUncertainty = *x.MassFlowFraction
	}
	compared, err := readings.Expected(m, o)
	if err != nil {
		return nil, in.machine.problem(err)
	}
	return compared, nil
}

// others returns what may be in a machine instead of the refrigerant that it is said to have.
func (a *API) others(r props.Refrigerant) func() []readings.Refrigerant {
	return func() []readings.Refrigerant {
		var list []readings.Refrigerant
		for _, name := range a.catalogue.Designations() {
			other, err := a.catalogue.Refrigerant(name, props.DefaultDatum)
			if err == nil && name != r.Designation() { // without the usual datum it is water
				list = append(list, other)
			}
		}
		return list
	}
}

// fluid returns a stream that the head names, if it does.
func (in *installation) fluid(r *fluidRequest, c *choices, at string) readings.Stream {
	if *r == (fluidRequest{}) {
		return readings.Stream{}
	}
	return readings.Stream{Liquid: in.fluids.liquid(r, c, at), MoistAir: r.Fluid == fluidAir}
}

// si turns the head into what the evaluation reads.
func (in *installation) si(c *choices) (*readings.Installation, *readings.Options) {
	h, u := in.head, in.units
	i := &readings.Installation{
		Refrigerant: in.r, Layout: choose(c, "#/layout", h.Layout, cycle.SingleStage, cycle.ParseLayout, cycle.Layouts()), With: combined(c, "#/with", h.With),
		Site:             readings.Site{Gauges: u.of[kindPressure].gauge, AmbientPressure: u.ambientPressure()},
		ShellConductance: u.optional(kindConductance, h.ShellConductance), SweptVolume: u.optional(kindVolume, h.SweptVolume), ModelUncertainty: h.ModelUncertainty,
		Expansion: choose(c, "#/expansion", h.Expansion, readings.ControlledExpansion, readings.ParseExpansion, wordsOf(readings.ControlledExpansion)),
	}
	if s := h.Site; s != nil {
		i.Site.AmbientUncertainty = u.optional(kindPressureDifference, s.AmbientUncertainty)
		i.Site.Sealed = named(c, "#/site/sealed", s.Sealed)
	}
	if h.Uncertainties != nil {
		i.Uncertainties = map[readings.Reading]readings.Uncertainty{}
		each(&h.Uncertainties.perReading, &h.Uncertainties.Sink, &h.Uncertainties.Source, func(r readings.Reading, x *uncertaintyRequest) {
			i.Uncertainties[r] = x.si(u, differenceOf(r))
		})
	}
	for k := range h.Correlations {
		r, at := &h.Correlations[k], place{"#/correlations", k}.String()
		pair := named(c, at+"/between", r.Between)
		if len(r.Between) != 2 {
			c.fault(at+"/between", "invalid", "a correlation is between two readings")
		}
		if len(pair) == 2 {
			i.Correlations = append(i.Correlations, readings.Correlation{A: pair[0], B: pair[1], Coefficient: r.Coefficient})
		}
	}
	for k := range h.Shared {
		r, at := &h.Shared[k], place{"#/shared_errors", k}.String()
		e := readings.SharedError{Name: r.Name, Readings: named(c, at+"/readings", r.Readings)}
		if len(e.Readings) > 0 {
			e.Standard = u.in(differenceOf(e.Readings[0]), r.Standard)
		}
		i.Shared = append(i.Shared, e)
	}
	o := &readings.Options{Method: choose(c, "#/method", h.Method, readings.GUM, readings.ParseMethod, wordsOf(readings.GUM))}
	if h.Coverage != nil {
		o.Coverage = uncertainty.Coverage(*h.Coverage)
		if *h.Coverage == 0 { // which would stand for the default
			c.fault("#/coverage", "out_of_range", "a coverage is a probability above 0")
		}
	}
	in.draws(c, o)
	return i, o
}

// draws takes what a request says of random draws.
func (in *installation) draws(c *choices, o *readings.Options) {
	d, out := &in.head.Draws, &o.Draws
	if n := c.count("#/draws/seed", d.Seed); n != nil {
		if *n < 0 {
			c.fault("#/draws/seed", "out_of_range", "must not be negative")
		}
		out.Seed = uint64(max(*n, 0))
	}
	for _, x := range []struct {
		name   string
		number *float64
		into   *int
	}{{"count", d.Count, &out.Count}, {"most", d.Most, &out.Most}, {"digits", d.Digits, &out.Digits}} {
		pointer := "#/draws/" + x.name
		if n := c.count(pointer, x.number); n != nil {
			if *n <= 0 { // 0 would stand for the default
				c.fault(pointer, "out_of_range", "must be at least 1")
			}
			*x.into = *n
		}
	}
	if *d != (drawsRequest{}) && o.Method != readings.MonteCarlo {
		c.fault("#/draws", "surplus", "draws belong to the method monte_carlo")
	}
}

// named returns the readings with those names.
func named(c *choices, at string, names []string) []readings.Reading {
	var list []readings.Reading
	for i, name := range names {
		r, ok := readings.ParseReading(strings.ReplaceAll(name, "/", "."))
		if !ok {
			c.fault(place{at, i}.String(), "not_allowed", quote(name)+" is no reading; allowed are "+strings.Join(readingNames(), ", "))
			continue
		}
		list = append(list, r)
	}
	return list
}

func readingNames() []string {
	var names []string
	for _, r := range readings.Readings() {
		names = append(names, r.String())
	}
	return names
}

// si converts an uncertainty of a reading whose differences are of kind k.
func (r *uncertaintyRequest) si(u *units, k kind) readings.Uncertainty {
	return readings.Uncertainty{
		Standard: u.optional(k, r.Standard), Relative: r.Relative, Expanded: u.optional(k, r.Expanded), CoverageFactor: r.CoverageFactor,
		Limit: u.optional(k, r.Limit), Sensor: readings.Sensor(r.Sensor), Span: u.optional(kindPressureDifference, r.Span), DegreesOfFreedom: r.DegreesOfFreedom,
	}
}

// kindOf returns the kind of a reading.
func kindOf(r readings.Reading) kind { return quantityKinds[r.Quantity()] }

// differenceOf returns the kind of a difference of two values of a reading, such as its uncertainty.
func differenceOf(r readings.Reading) kind { return kindOf(r).difference() }

// difference returns the kind of a difference of two values of a kind.
func (k kind) difference() kind {
	switch k {
	case kindTemperature:
		return kindTemperatureDifference
	case kindPressure:
		return kindPressureDifference
	}
	return k
}

// si turns a sample into what the evaluation reads.
func (in *installation) sample(r *sample, at string) (*readings.Sample, *Problem) {
	var c choices
	s := &readings.Sample{Sink: in.stream(&r.Sink, &in.sink, &c, at+"/sink"), Source: in.stream(&r.Source, &in.source, &c, at+"/source")}
	if len(r.ID) > maxID {
		c.fault(at+"/id", "too_long", fmt.Sprintf("an id may have %d bytes at most", maxID))
	}
	if r.Time != "" {
		var err error
		if s.Time, err = time.Parse(time.RFC3339, r.Time); err != nil {
			c.fault(at+"/time", "invalid", quote(r.Time)+" is no time of RFC 3339, such as 2026-01-14T06:00:00Z")
		}
	}
	if x := r.StandstillHours; x != nil {
		const most = 1e5 // hours
		if !(0 <= *x && *x <= most) {
			c.fault(at+"/standstill_hours", "out_of_range", fmt.Sprintf("must lie between 0 and %g", most))
		} else {
			s.Standstill = time.Duration(*x * float64(time.Hour))
		}
	}
	each(&r.perReading, &r.Sink.perStream, &r.Source.perStream, func(reading readings.Reading, x *float64) {
		s.Set(reading, in.units.in(kindOf(reading), *x))
	})
	in.points(r.Points, s, &c, at+"/points")
	if len(c) > 0 {
		return nil, invalidItem(c...)
	}
	return s, nil
}

// stream returns what flows in a sample: what it names, else what the head names.
func (in *installation) stream(r *sampleStream, usual *readings.Stream, c *choices, at string) readings.Stream {
	s := *usual
	if r.fluidRequest != (fluidRequest{}) {
		s = readings.Stream{Liquid: in.fluids.liquid(&r.fluidRequest, c, at), MoistAir: r.Fluid == fluidAir}
	}
	s.MeterAtOutlet = r.MeterAtOutlet
	return s
}

// points enters the readings that a sample has under the names of a standard.
func (in *installation) points(p *pointValues, s *readings.Sample, c *choices, at string) {
	if p == nil {
		return
	}
	if in.naming == nil {
		c.fault(at, "surplus", "points have the names of a standard, which naming tells; allowed are "+strings.Join(namingNames(), ", "))
		return
	}
	for i, name := range p.names {
		pointer := at + "/" + escapePointer(name)
		r, ok := in.naming.reading(name)
		if !ok {
			c.fault(pointer, "unknown_member", quote(name)+" is no point of "+in.naming.name+" that a reading stands for; the README lists them")
			continue
		}
		if _, twice := s.Value(r); twice {
			c.fault(pointer, "duplicate_member", "the reading "+r.String()+" is given already")
			continue
		}
		s.Set(r, in.units.in(kindOf(r), p.values[i]))
	}
}

// problem maps what an evaluation returns; at leads to the head or to a sample.
func (in *installation) problem(err error, at string) *Problem {
	e, ok := errors.AsType[*readings.RefusedError](err)
	if !ok {
		return in.machine.voice.problem(err)
	}
	var faults []MemberError
	for _, r := range e.Refusals {
		detail := r.Message.Render(in.machine.number)
		if r.Cause != nil {
			detail += ": " + in.machine.cause(r.Cause)
		}
		pointer := at
		if r.Field != "" {
			pointer += "/" + strings.ReplaceAll(sharedPath(r.Field), ".", "/")
		}
		faults = append(faults, MemberError{Pointer: pointer, Code: string(r.Code), Detail: detail})
	}
	return unprocessable("impossible-readings", "The readings cannot be", summary(faults), faults...)
}

// sharedPath gives the list of shared errors the name that it has on the wire.
func sharedPath(field string) string {
	if rest, ok := strings.CutPrefix(field, "shared."); ok {
		return "shared_errors." + rest
	}
	return field
}

// maxSamples bounds a batch: each answers with some 10 KB. A longer series goes by lines.
const maxSamples = 2000

// readings answers POST /v1/readings.
func (a *API) readings(c *gin.Context) (any, error) {
	var req readingsRequest
	if err := a.decode(c, &req); err != nil {
		return nil, err
	}
	limit := min(a.maxPoints, maxSamples)
	if n := len(req.Samples); n > limit {
		return nil, tooMany("#/samples", n, limit)
	}
	in, err := a.install(&req.readingsHead, partNames)
	if err != nil {
		return nil, err
	}
	if err := a.batch(c, len(req.Samples), in.statesPerSample()); err != nil {
		return nil, err
	}
	items := make([]readingsItem, len(req.Samples))
	samples := make([]*readings.Sample, len(req.Samples))
	for i := range req.Samples {
		samples[i], items[i].problem = in.sample(&req.Samples[i], place{"#/samples", i}.String())
	}
	resp := &readingsResponse{installation: in, items: items}
	ctx := contextOf(c)
	if req.Series == nil {
		err = inParallel(ctx, len(samples), func(i int) {
			in.alone(ctx, &items[i], req.Samples[i].ID, samples[i], place{"#/samples", i}.String())
		})
	} else {
		err = in.inSeries(ctx, resp, &req, samples)
	}
	if err != nil {
		return nil, err
	}
	var all account
	for i := range items {
		if items[i].fatal != nil {
			return nil, items[i].fatal
		}
		all.count(items[i].problem, false)
	}
	a.metrics.calculated("reading", &all)
	resp.failed = all.failed()
	in.caution("calculation_aid", handling(in.r, nil))
	return resp, nil
}

// statesPerSample is about how many states one sample costs as much as.
func (in *installation) statesPerSample() int {
	n := 16
	if in.head.Machine != nil {
		n += statesPerOperatingPoint
	}
	if in.head.Method == readings.MonteCarlo.String() {
		n = longItems + 1
	}
	return n
}

// readingsItem is the answer to one sample, written already.
type readingsItem struct {
	text    []byte
	problem *Problem
	fatal   error // no answer at all
}

// alone answers a sample by itself, unless it has a problem already.
func (in *installation) alone(ctx context.Context, into *readingsItem, id string, s *readings.Sample, at string) {
	var result *readings.Result
	if into.problem == nil {
		var err error
		if result, err = in.evaluate.Evaluate(ctx, s); err != nil {
			if into.problem = in.problem(err, at); into.problem.Status >= 500 {
				into.fatal = err
			}
		}
	}
	if into.fatal == nil {
		into.text, into.fatal = in.item(nil, id, result, into.problem, nil)
	}
}

// inSeries answers samples one after the other and sums up.
func (in *installation) inSeries(ctx context.Context, resp *readingsResponse, req *readingsRequest, samples []*readings.Sample) error {
	s, err := in.series()
	if err != nil {
		return err
	}
	for i := range samples {
		x := &resp.items[i]
		if x.text, x.problem, err = s.answer(ctx, nil, req.Samples[i].ID, samples[i], x.problem, place{"#/samples", i}.String()); err != nil {
			return err
		}
		if err := breathe(ctx); err != nil {
			return err
		}
	}
	resp.summary = new(s.summary())
	return nil
}

// readingsResponse holds the answers in the order of the samples.
type readingsResponse struct {
	*installation
	failed  int
	items   []readingsItem
	summary *summaryView // of a series
}

// encode writes the response.
func (r *readingsResponse) encode(b []byte) ([]byte, error) {
	o := begin(b)
	if err := r.job.head(&o, r.kinds()); err != nil {
		return nil, err
	}
	o.number("failed", float64(r.failed))
	o.name("results")
	o.b = append(o.b, '[')
	for i := range r.items {
		if i > 0 {
			o.b = append(o.b, ',')
		}
		o.b = append(o.b, r.items[i].text...)
	}
	o.b = append(o.b, ']')
	if r.summary != nil {
		if err := o.value("summary", r.summary); err != nil {
			return nil, err
		}
	}
	err := r.tail(&o)
	return o.end(), err
}

// kinds are the kinds of quantity of a result.
func (in *installation) kinds() []kind {
	return slices.Concat(in.states.kinds(), []kind{
		kindTemperature, kindTemperatureDifference, kindPressure, kindPressureDifference, kindMassFlow, kindHeatFlow, kindPower,
	})
}
