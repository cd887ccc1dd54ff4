package api

import (
	"slices"
	"strings"
	"time"

	"dewmark/service/readings"
)

// parts are those of a result that a request wants beside its figures.
type parts map[string]bool

// partNames are the parts in the order that they are written.
var partNames = []string{"states", "budget", "routes", "plausibility", "comparison", "indications", "cautions"}

// briefParts are those of a result in a stream, unless a request names others: enough to watch a machine by.
var briefParts = []string{"plausibility", "indications", "cautions"}

// selectParts returns the parts that names choose, the usual ones when there are none.
func selectParts(c *choices, names, usual []string) parts {
	chosen := parts{}
	for i, name := range names {
		if !slices.Contains(partNames, name) {
			c.fault(place{"#/include", i}.String(), "not_allowed", quote(name)+" is no part of a result; allowed are "+strings.Join(partNames, ", "))
		}
		chosen[name] = true
	}
	if names == nil {
		for _, name := range usual {
			chosen[name] = true
		}
	}
	return chosen
}

// standing reports whether a caution is the same for every sample of an installation. A stream tells it once.
func standing(c *readings.Caution) bool {
	return c.Code == readings.Assumed || c.Code == readings.Safety || c.Code == readings.CircularMap
}

// selectStates returns the members that states of a result show: those named, or all but the transport properties.
func selectStates(names []string) (*selection, error) {
	if len(names) == 0 {
		for _, f := range everything.fields {
			if f < firstTransportField || f >= firstSaturationField {
				names = append(names, stateFields[f].name)
			}
		}
	}
	return selectFields(names)
}

// figureKinds are the kinds of the figures.
var figureKinds = [readings.FigureCount]kind{
	readings.FigureSuperheat: kindTemperatureDifference, readings.FigureEvaporatorSuperheat: kindTemperatureDifference,
	readings.FigureSubcooling: kindTemperatureDifference, readings.FigureDischargeSuperheat: kindTemperatureDifference,
	readings.FigureEvaporationTemperature: kindTemperature, readings.FigureCondensationTemperature: kindTemperature,
	readings.FigurePressureRatio: kindNone, readings.FigureIsentropicEfficiency: kindNone, readings.FigureVolumetricEfficiency: kindNone,
	readings.FigureMassFlow: kindMassFlow, readings.FigureHeatingCapacity: kindHeatFlow, readings.FigureCoolingCapacity: kindHeatFlow,
	readings.FigureCompressorPower: kindPower, readings.FigureCOPHeating: kindNone, readings.FigureCOPCooling: kindNone,
	readings.FigureSecondLawEfficiency: kindNone, readings.FigureEnergyClosure: kindNone,
}

// item adds the answer to a sample as an object: a result or a problem, with what a series says of it where there is one.
func (in *installation) item(b []byte, id string, r *readings.Result, problem *Problem, step *readings.Step) ([]byte, error) {
	o := begin(b)
	if id != "" {
		o.text("id", strings.ToValidUTF8(id[:min(len(id), maxID)], ""))
	}
	if problem != nil {
		err := o.value("problem", problem)
		return o.end(), err
	}
	if step != nil {
		in.writeStep(&o, step)
	}
	err := in.members(&o, r)
	return o.end(), err
}

// writeStep adds whether a sample counts in the means of its series, or why not.
func (in *installation) writeStep(o *object, step *readings.Step) {
	if step.Steady {
		o.name("steady")
		o.b = append(o.b, "true"...)
		return
	}
	o.name("steady")
	o.b = append(o.b, "false"...)
	o.text("rejection", string(step.Rejection))
	if step.Field != "" {
		o.text("rejected_for", step.Field)
	}
}

// members adds the members of a result.
func (in *installation) members(o *object, r *readings.Result) error {
	if !r.Time.IsZero() {
		o.text("time", r.Time.Format(time.RFC3339Nano))
	}
	for f := range readings.FigureCount {
		in.figure(o, f, &r.Figures[f])
	}
	if in.parts["states"] {
		in.writeStates(o, r.States)
	}
	if in.parts["budget"] {
		in.budget(o, r)
	}
	for _, part := range []struct {
		name string
		make func(*readings.Result) any
	}{
		{"routes", in.routes}, {"plausibility", in.plausibility}, {"comparison", in.comparison}, {"indications", in.indications},
	} {
		if in.parts[part.name] {
			if err := o.value(part.name, part.make(r)); err != nil {
				return err
			}
		}
	}
	if r.Draws != nil {
		if err := o.value("draws", drawsOf(r.Draws)); err != nil {
			return err
		}
	}
	if !in.parts["cautions"] {
		return nil
	}
	cautions := r.Cautions
	if in.brief {
		cautions = slices.DeleteFunc(slices.Clone(cautions), func(c readings.Caution) bool { return standing(&c) })
	}
	return o.value("cautions", in.reservations(cautions))
}

// figure adds a figure with its uncertainty, null where it is not known.
func (in *installation) figure(o *object, f readings.Figure, r *readings.FigureResult) {
	o.name(f.String())
	if !r.Known() {
		o.b = append(o.b, "null"...)
		return
	}
	u, k := in.units, figureKinds[f]
	d := k.difference()
	x := begin(o.b)
	x.number("value", u.out(k, r.Value))
	x.number("standard_uncertainty", u.out(d, r.Standard))
	x.number("expanded_uncertainty", u.out(d, r.Expanded))
	x.number("coverage_factor", r.CoverageFactor)
	x.number("degrees_of_freedom", r.DegreesOfFreedom) // null for unlimited
	if r.Drawn != nil {
		x.name("drawn")
		y := begin(x.b)
		y.number("mean", u.out(k, r.Drawn.Mean))
		y.number("standard_uncertainty", u.out(d, r.Drawn.Standard))
		y.number("low", u.out(k, r.Drawn.Low))
		y.number("high", u.out(k, r.Drawn.High))
		y.number("shortest_low", u.out(k, r.Drawn.ShortLow))
		y.number("shortest_high", u.out(k, r.Drawn.ShortHigh))
		if r.Validation != nil {
			y.text("first_order", string(r.Validation.Verdict))
			y.number("tolerance", u.out(d, r.Validation.Tolerance))
		}
		x.b = y.end()
	}
	o.b = x.end()
}

var pressureField = fieldNamed("pressure")

// writeStates adds the states of the refrigerant. One that the readings do not fix has pressure and temperature alone.
func (in *installation) writeStates(o *object, states []readings.StateAt) {
	o.name("states")
	o.b = append(o.b, '[')
	w := takeWorker(in.job, in.states)
	defer w.giveBack()
	for i := range states {
		if i > 0 {
			o.b = append(o.b, ',')
		}
		s, item := &states[i], begin(o.b)
		item.text("label", s.Label)
		item.text("place", s.Place)
		if s.Known {
			w.show(s.State)
			w.view.echo("pressure", tidy(w.view.numbers[pressureField])) // a reading, there and back
			w.view.write(&item)
		} else {
			item.name("phase")
			item.b = append(item.b, "null"...)
			item.number("temperature", in.units.out(kindTemperature, s.State.T))
			item.number("pressure", tidy(in.units.out(kindPressure, s.State.P)))
		}
		o.b = item.end()
	}
	o.b = append(o.b, ']')
}

// budget adds what each reading adds to the variance of each figure.
func (in *installation) budget(o *object, r *readings.Result) {
	o.name("budget")
	x := begin(o.b)
	for f := range readings.FigureCount {
		if len(r.Figures[f].Budget) == 0 {
			continue
		}
		x.name(f.String())
		x.b = append(x.b, '[')
		for i := range r.Figures[f].Budget {
			if i > 0 {
				x.b = append(x.b, ',')
			}
			s, y := &r.Figures[f].Budget[i], begin(x.b)
			y.text("reading", s.Input)
			y.number("share", s.Share)
			y.name("assumed")
			if s.Assumed {
				y.b = append(y.b, "true"...)
			} else {
				y.b = append(y.b, "false"...)
			}
			x.b = y.end()
		}
		x.b = append(x.b, ']')
	}
	o.b = x.end()
}

type routeView struct {
	Figure              string  `json:"figure"`
	Route               string  `json:"route"`
	Value               float64 `json:"value"`
	StandardUncertainty float64 `json:"standard_uncertainty"`
	Weight              float64 `json:"weight"`
	Disagrees           []any   `json:"disagrees_with,omitempty"` // other routes to the figure
}

// routes lists the ways to mass flow, capacities and power.
func (in *installation) routes(r *readings.Result) any {
	list := make([]routeView, 0, len(r.Routes))
	for i := range r.Routes {
		x := &r.Routes[i]
		k := figureKinds[x.Figure]
		v := routeView{x.Figure.String(), string(x.Name), in.units.out(k, x.Value), in.units.out(k.difference(), x.Standard), x.Weight, nil}
		for _, d := range r.Disagreements {
			switch {
			case d.Figure != x.Figure:
			case d.A == x.Name:
				v.Disagrees = append(v.Disagrees, d.B)
			case d.B == x.Name:
				v.Disagrees = append(v.Disagrees, d.A)
			}
		}
		list = append(list, v)
	}
	return list
}

type findingView struct {
	Code       string          `json:"code"`
	Detail     string          `json:"detail"`
	Candidates []candidateView `json:"candidates,omitempty"`
}

type candidateView struct {
	Refrigerant          string   `json:"refrigerant"`
	Superheat            *float64 `json:"superheat"`
	Subcooling           *float64 `json:"subcooling"`
	IsentropicEfficiency *float64 `json:"isentropic_efficiency"`
}

// plausibility lists what does not fit.
func (in *installation) plausibility(r *readings.Result) any {
	list := make([]findingView, 0, len(r.Plausibility))
	for i := range r.Plausibility {
		x := &r.Plausibility[i]
		v := findingView{Code: string(x.Code), Detail: in.about(x.Field, "", x.Message, nil)}
		for _, k := range x.Candidates {
			v.Candidates = append(v.Candidates, candidateView{
				k.Designation, in.units.known(kindTemperatureDifference, k.Superheat), in.units.known(kindTemperatureDifference, k.Subcooling), known(k.IsentropicEfficiency),
			})
		}
		list = append(list, v)
	}
	return list
}

// about tells a message with the field and the place that it speaks of.
func (in *installation) about(field, label string, m readings.Message, cause error) string {
	detail := m.Render(in.machine.number)
	if field != "" {
		detail = sharedPath(field) + ": " + detail
	}
	if label != "" {
		detail += " (state " + label + ")"
	}
	if cause != nil {
		detail += ": " + in.obstacle(cause)
	}
	return detail
}

// obstacle tells an error of a model.
func (in *installation) obstacle(err error) string {
	if p := in.machine.problem(err); p.Status < 500 {
		return p.Error()
	}
	return in.machine.cause(err)
}

func (in *installation) reservations(list []readings.Caution) []caution {
	out := make([]caution, 0, len(list))
	for i := range list {
		out = append(out, caution{string(list[i].Code), in.about(list[i].Field, list[i].Label, list[i].Message, list[i].Cause)})
	}
	return out
}

type comparisonView struct {
	Deviates         bool           `json:"deviates"` // by more than chance
	ChiSquared       float64        `json:"chi_squared"`
	Limit            *float64       `json:"limit"`
	DegreesOfFreedom int            `json:"degrees_of_freedom"`
	Residuals        []residualView `json:"residuals"`
	Cautions         []caution      `json:"cautions"`
}

type residualView struct {
	Feature             string  `json:"feature"`
	Measured            float64 `json:"measured"`
	Expected            float64 `json:"expected"`
	StandardUncertainty float64 `json:"standard_uncertainty"` // of the difference
	Normalised          float64 `json:"normalised"`
}

// comparison holds what is measured against the given machine, null without one.
func (in *installation) comparison(r *readings.Result) any {
	x := r.Comparison
	if x == nil {
		return nil
	}
	v := comparisonView{
		Deviates: x.Deviates(), ChiSquared: x.ChiSquared, Limit: known(x.Limit), DegreesOfFreedom: x.Degrees, Residuals: []residualView{}, Cautions: in.reservations(x.Cautions),
	}
	for _, d := range x.Residuals {
		k := quantityKinds[d.Feature.Quantity()]
		v.Residuals = append(v.Residuals, residualView{
			d.Feature.String(), in.units.out(k, d.Measured), in.units.out(k, d.Expected), in.units.out(k.difference(), d.Standard), d.Normalised,
		})
	}
	return v
}

type indicationView struct {
	Fault   string         `json:"fault"`
	Score   float64        `json:"score"`
	Source  string         `json:"source"`
	For     []evidenceView `json:"for"`
	Against []evidenceView `json:"against"`
}

type evidenceView struct {
	Feature     string  `json:"feature"`
	Sign        string  `json:"sign"` // that the fault has in it
	Normalised  float64 `json:"normalised"`
	Probability float64 `json:"probability"`
	Strong      bool    `json:"strong"`
}

// indications lists what deviations may point to.
func (in *installation) indications(r *readings.Result) any {
	list := make([]indicationView, 0, len(r.Indications))
	evidence := func(of []readings.Evidence) []evidenceView {
		views := make([]evidenceView, 0, len(of))
		for _, e := range of {
			views = append(views, evidenceView{e.Feature.String(), e.Sign.String(), e.Normalised, e.Probability, e.Strong})
		}
		return views
	}
	for i := range r.Indications {
		x := &r.Indications[i]
		list = append(list, indicationView{x.Fault, x.Score, x.Source, evidence(x.For), evidence(x.Against)})
	}
	return list
}

type drawsView struct {
	Seed     uint64         `json:"seed"`
	Draws    int            `json:"draws"`
	Failed   int            `json:"failed"`
	Failures map[string]int `json:"failures"`
	Stable   bool           `json:"stable"`
}

func drawsOf(d *readings.DrawReport) drawsView {
	v := drawsView{d.Seed, d.Draws, d.Failed, map[string]int{}, d.Stable}
	for name, n := range d.Failures {
		v.Failures[string(name)] = n
	}
	return v
}
