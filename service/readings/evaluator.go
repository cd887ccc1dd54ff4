package readings

import (
	"context"
	"math"
	"slices"
	"sync"

	"dewmark/service/cycle"
	"dewmark/service/readings/uncertainty"
)

// Evaluator answers samples of one installation. It is safe for concurrent use.
type Evaluator struct {
	installation Installation
	options      Options
	fluid        fluid
	exchanger    bool // an internal exchanger
	several      bool // more than one compression
	gasCooled    bool // a gas cooler instead of a condenser
	given        [readingCount]stated
	sealed       [readingCount]bool
	ambient      float64 // standard uncertainty of the ambient pressure, Pa; 0 without gauges
	ambientKnown bool    // it was given
	model        float64
	// What is taken for the heat loss of the compressor where no reading tells, and its standard uncertainty.
	lossValue, lossDoubt float64
	lossStated           bool // the machine tells it
	works                sync.Pool
}

// stated is an uncertainty of an installation that was checked.
type stated struct {
	stated             bool
	absolute, relative float64
	sensor             Sensor
	span, degrees      float64
	distribution       uncertainty.Distribution
}

// New checks an installation and returns its evaluator, or a [*RefusedError]. The installation must not be changed any
// more. A nil o stands for the zero Options.
func New(i *Installation, o *Options) (*Evaluator, error) {
	e := &Evaluator{installation: *i}
	if o != nil {
		e.options = *o
	}
	var r refusals
	e.checkInstallation(&r)
	e.checkUncertainties(&r)
	e.checkOptions(&r)
	if err := r.err(); err != nil {
		return nil, err
	}
	e.fluid = newFluid(i.Refrigerant)
	e.model = pureModel
	if e.fluid.line == nil {
		e.model = blendModel
	}
	if m := i.ModelUncertainty; m != nil {
		e.model = *m
	}
	e.lossDoubt = heatLossUncertainty
	if m, can := i.Machine.(heatLosing); can {
		if f, u, ok := m.HeatLoss(); ok {
			e.lossValue, e.lossDoubt, e.lossStated = f, u, true
		}
	}
	e.works.New = func() any { return &work{evaluator: e} }
	return e, nil
}

// Evaluate answers a sample, or refuses it with a [*RefusedError]. It ends early with the context's error, which only
// random draws take long enough to meet.
func (e *Evaluator) Evaluate(ctx context.Context, s *Sample) (*Result, error) {
	return e.evaluate(ctx, s, nil)
}

func (e *Evaluator) evaluate(ctx context.Context, s *Sample, worth func(*Result) bool) (*Result, error) {
	if err := e.checkSample(s); err != nil {
		return nil, err
	}
	w := e.works.Get().(*work)
	defer e.works.Put(w)
	return w.evaluate(ctx, s, worth)
}

func (e *Evaluator) checkInstallation(r *refusals) {
	i := &e.installation
	if i.Refrigerant == nil {
		r.add(Missing, "refrigerant", message("a refrigerant is needed"))
	}
	if i.Layout == 0 {
		i.Layout = cycle.SingleStage
	}
	if i.Layout.String() == "" {
		r.add(NotAllowed, "layout", message("there is no such layout"))
	}
	if len(i.With) > 0 && i.Layout != cycle.Transcritical {
		r.add(Surplus, "with", message("only a transcritical layout is combined with others"))
	}
	for k, l := range i.With {
		if l.String() == "" || l == cycle.Transcritical {
			r.add(NotAllowed, at("with", k), message("there is no such layout to combine with"))
		}
	}
	for _, l := range append([]cycle.Layout{i.Layout}, i.With...) {
		switch l {
		case cycle.SingleStage:
		case cycle.Transcritical:
			e.gasCooled = true
		case cycle.SuctionExchanger:
			e.exchanger = true
		case cycle.Ejector:
			e.gasCooled, e.several = true, true
		default:
			e.several = true
		}
	}
	if int(i.Expansion) >= len(expansionNames) {
		r.add(NotAllowed, "expansion", message("expansion must be controlled or fixed_orifice"))
	}
	r.positive("shell_conductance", i.ShellConductance, "")
	r.positive("swept_volume", i.SweptVolume, "")
	r.within("model_uncertainty", i.ModelUncertainty, 0, 1)
	e.checkSite(r)
}

func (e *Evaluator) checkSite(r *refusals) {
	site := &e.installation.Site
	const lowest, highest = 20e3, 120e3 // Pa; more than any site on land
	r.within("site.ambient_pressure", site.AmbientPressure, lowest, highest)
	r.within("site.ambient_uncertainty", site.AmbientUncertainty, 0, highest)
	if (site.Gauges || len(site.Sealed) > 0) && site.AmbientPressure == nil {
		r.add(Missing, "site.ambient_pressure", message("gauge pressures need the ambient pressure that they count from"))
	}
	if len(site.Sealed) > 0 && !site.Gauges {
		r.add(Surplus, "site.sealed", message("sealed gauges are named, but pressures are said to be absolute"))
	}
	for _, s := range site.Sealed {
		if !s.valid() || !s.IsPressure() {
			r.add(NotAllowed, "site.sealed", message("only pressures have sealed gauges"))
			continue
		}
		e.sealed[s] = true
	}
	if site.Gauges {
		e.ambient = ambientUncertainty
		if u := site.AmbientUncertainty; u != nil {
			e.ambient, e.ambientKnown = *u, true
		}
	}
}

func (e *Evaluator) checkUncertainties(r *refusals) {
	i := &e.installation
	for reading := firstReading; reading < readingCount; reading++ {
		if u, ok := i.Uncertainties[reading]; ok {
			e.given[reading] = u.check(r, reading)
		}
	}
	for reading := range i.Uncertainties {
		if !reading.valid() {
			r.add(NotAllowed, "uncertainties", message("there is no such reading"))
		}
	}
	for k, c := range i.Correlations {
		field := at("correlations", k)
		switch {
		case !c.A.valid() || !c.B.valid():
			r.add(NotAllowed, field, message("there is no such reading"))
		case c.A == c.B:
			r.add(NotAllowed, field, message("a correlation is between two different readings"))
		case !(-1 <= c.Coefficient && c.Coefficient <= 1):
			r.add(OutOfBounds, field+".coefficient", message("%s is out of bounds: a correlation coefficient is at least -1 and at most 1", plain(c.Coefficient)))
		case slices.ContainsFunc(i.Correlations[:k], func(o Correlation) bool { return o.A == c.A && o.B == c.B || o.A == c.B && o.B == c.A }):
			r.add(Surplus, field, message("these two readings have a correlation already"))
		}
	}
	for k, s := range i.Shared {
		field := at("shared", k)
		r.within(field+".standard", &s.Standard, 0, math.MaxFloat64)
		if len(s.Readings) == 0 {
			r.add(Missing, field+".readings", message("a shared error needs the readings that it moves"))
		}
		for _, reading := range s.Readings {
			switch {
			case !reading.valid():
				r.add(NotAllowed, field+".readings", message("there is no such reading"))
			case reading.Quantity() != s.Readings[0].Quantity():
				r.add(NotAllowed, field+".readings", message("a shared error moves readings of one kind of quantity: "+reading.String()+" is another than "+s.Readings[0].String()))
			}
		}
	}
	if len(*r) == 0 && !e.correlationsPossible() {
		r.add(NotAllowed, "correlations", message("no readings can have these correlations together: their matrix has a negative eigenvalue"))
	}
}

// correlationsPossible looks at all readings that are correlated as if each were given.
func (e *Evaluator) correlationsPossible() bool {
	var in uncertainty.Inputs
	in.List = make([]uncertainty.Input, readingCount)
	for i := range in.List {
		in.List[i].Standard = 1
	}
	for _, c := range e.installation.Correlations {
		in.Correlations = append(in.Correlations, uncertainty.Correlation{A: int(c.A), B: int(c.B), Coefficient: c.Coefficient})
	}
	return in.Possible()
}

func (e *Evaluator) checkOptions(r *refusals) {
	o := &e.options
	if int(o.Method) >= len(methodNames) {
		r.add(NotAllowed, "method", message("method must be gum or monte_carlo"))
	}
	if o.Coverage == 0 {
		o.Coverage = uncertainty.TwoStandard
	}
	if p := float64(o.Coverage); !(lowestCoverage <= p && p <= highestCoverage) {
		r.add(OutOfBounds, "coverage", message("%s is out of bounds: a coverage is at least %s and at most %s", plain(p), plain(lowestCoverage), plain(highestCoverage)))
	}
	d := &o.Draws
	d.Coverage = o.Coverage
	count := func(field string, v int) {
		if v != 0 && !(leastDraws <= v && v <= MostDraws) {
			r.add(OutOfBounds, field, message("%s is out of bounds: it must be at least %s and at most %s", plain(float64(v)), plain(leastDraws), plain(MostDraws)))
		}
	}
	count("draws.count", d.Count)
	count("draws.most", d.Most)
	if d.Digits < 0 || d.Digits > 2 {
		r.add(OutOfBounds, "draws.digits", message("the significant digits of an uncertainty that count are 1 or 2"))
	}
}

const (
	lowestCoverage, highestCoverage = 0.5, 0.999
	leastDraws                      = 1000
)

// MostDraws is the most random draws of one sample. Each keeps 8 bytes for every figure that is known.
const MostDraws = 1_000_000
