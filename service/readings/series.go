package readings

import (
	"context"
	"errors"
	"maps"
	"math"
	"slices"
	"time"
)

// Series goes through the samples of one machine in the order of their times, keeps those in which it is steady and sums up.
// Its memory does not grow with their number. It serves one goroutine at a time.
type Series struct {
	evaluator *Evaluator
	options   SeriesOptions
	window    window
	summary   Summary
	last      time.Time // of the latest sample in order
	highest   float64   // W, highest power
	stopped   time.Time // when the compressor was first seen to stand still; zero while it runs

	all, baseline, since [FigureCount]tally
	residuals            [FeatureCount]struct{ difference, normalised tally }
	begun                time.Time // first steady sample
}

// drifting are the figures whose baseline a series can take from its own beginning.
var drifting = []Figure{
	FigureCOPHeating, FigureCOPCooling, FigureIsentropicEfficiency, FigureVolumetricEfficiency, FigureSecondLawEfficiency, FigureSuperheat, FigureSubcooling,
}

// doubting are the findings that make the readings of a sample useless for means.
var doubting = []FindingCode{
	DischargeNotHottest, EvaporationAboveSource, CondensationBelowSink, SuperheatImplausible, SubcoolingImplausible,
	EfficiencyImplausible, VolumetricImplausible, COPImplausible, OutsideSaturation, NegativeDuty, EnthalpiesOutOfOrder,
}

// fewSamples is how many samples a mean should have at least.
const fewSamples = 30

// NewSeries begins a series. It returns a [*RefusedError] for options that cannot be.
func NewSeries(e *Evaluator, o SeriesOptions) (*Series, error) {
	var r refusals
	notNegative := func(field string, v float64) {
		if !(0 <= v && v <= math.MaxFloat64) {
			r.add(OutOfBounds, field, message("%s is out of bounds: it must not be negative", plain(v)))
		}
	}
	notNegative("window", o.Window.Seconds())
	notNegative("deviation", o.Deviation)
	notNegative("slope", o.Slope)
	notNegative("standstill_power", o.StandstillPower)
	notNegative("baseline_period", o.BaselinePeriod.Seconds())
	for f := range FigureCount {
		b, ok := o.Baseline[f]
		if !ok {
			continue
		}
		if math.IsNaN(b.Value) || math.IsInf(b.Value, 0) || b.Value == 0 && !absolute(f) {
			r.add(OutOfBounds, "baseline."+f.String(), message("%s is out of bounds: a baseline is a finite number, and not 0 where changes are relative", plain(b.Value)))
		}
		notNegative("baseline."+f.String()+".standard", b.Standard)
	}
	for f := range o.Baseline {
		if f >= FigureCount {
			r.add(NotAllowed, "baseline", message("there is no such figure"))
		}
	}
	if err := r.err(); err != nil {
		return nil, err
	}
	s := &Series{evaluator: e, options: o, summary: Summary{
		Rejections: map[Rejection]int{}, Findings: map[FindingCode]int{}, Indicated: map[string]int{},
	}}
	s.window = window{span: o.Window, deviation: o.Deviation, slope: o.Slope}
	if s.window.span == 0 {
		s.window.span = defaultWindow
	}
	if s.window.deviation == 0 {
		s.window.deviation = defaultDeviation
	}
	if s.window.slope == 0 {
		s.window.slope = defaultSlope
	}
	return s, nil
}

// Add answers the next sample. A sample that is refused, or that does not count, is a step like any other; the error is the
// context's.
func (s *Series) Add(ctx context.Context, sample *Sample) (Step, error) {
	step, err := s.step(ctx, sample)
	if err != nil {
		return Step{}, err
	}
	s.summary.Samples++
	if step.Rejection != Accepted {
		s.summary.Rejections[step.Rejection]++
	}
	if step.Result != nil {
		for i := range step.Result.Plausibility {
			if code := step.Result.Plausibility[i].Code; !slices.ContainsFunc(step.Result.Plausibility[:i], func(f Finding) bool { return f.Code == code }) {
				s.summary.Findings[code]++
			}
		}
	}
	if step.Steady {
		s.count(sample.Time, step.Result)
	}
	return step, nil
}

func (s *Series) step(ctx context.Context, given *Sample) (Step, error) {
	sample := *given
	inOrder := !sample.Time.IsZero() && sample.Time.After(s.last)
	if inOrder {
		if s.last.IsZero() {
			s.summary.From = sample.Time
		}
		s.last, s.summary.To = sample.Time, sample.Time
		s.watchStandstill(&sample)
	}
	step := Step{Rejection: OutOfOrder}
	r, err := s.evaluator.evaluate(ctx, &sample, func(r *Result) bool {
		if inOrder {
			step.Rejection, step.Field = s.judge(&sample, r)
		}
		return step.Rejection == Accepted
	})
	if refused, ok := errors.AsType[*RefusedError](err); ok {
		return Step{Refused: refused, Rejection: RefusedSample}, nil
	}
	if err != nil {
		return Step{}, err
	}
	if inOrder && sample.Standstill > 0 {
		step.Rejection = StandingStill
	}
	step.Result, step.Steady = r, step.Rejection == Accepted
	return step, nil
}

// watchStandstill notes how long the compressor has stood still.
func (s *Series) watchStandstill(sample *Sample) {
	power, hasPower := sample.Value(CompressorPower)
	speed, hasSpeed := sample.Value(Speed)
	s.highest = math.Max(s.highest, power)
	limit := s.options.StandstillPower
	if limit == 0 {
		limit = 0.01 * s.highest
	}
	still := sample.Standstill > 0 || hasPower && power <= limit || hasSpeed && speed == 0
	if !still {
		s.stopped = time.Time{}
		return
	}
	s.window.forget()
	if s.stopped.IsZero() {
		s.stopped = sample.Time
	}
	if sample.Standstill == 0 {
		sample.Standstill = max(sample.Time.Sub(s.stopped), time.Nanosecond)
	}
}

// judge tells whether a sample of a running machine counts, or why not.
func (s *Series) judge(sample *Sample, r *Result) (Rejection, string) {
	for i := range r.Plausibility {
		f := &r.Plausibility[i]
		switch {
		case f.Code == PressuresTooClose:
			s.window.forget()
			return Defrosting, f.Field
		case slices.Contains(doubting, f.Code):
			// What makes it implausible need not make the machine unsteady: the window goes on.
			if m, tells := momentOf(sample, r); tells {
				s.window.judge(&m)
			}
			return ImplausibleSample, f.Field
		}
	}
	m, tells := momentOf(sample, r)
	if !tells {
		return NothingToJudge, ""
	}
	return s.window.judge(&m)
}

// count takes a steady sample into the means.
func (s *Series) count(at time.Time, r *Result) {
	if s.begun.IsZero() {
		s.begun = at
	}
	s.summary.Steady++
	inBaseline := at.Sub(s.begun) < s.options.BaselinePeriod
	for f := range FigureCount {
		e := r.Figure(f)
		if !e.Known() {
			continue
		}
		s.all[f].add(at, e.Value, e.Standard)
		if inBaseline {
			s.baseline[f].add(at, e.Value, e.Standard)
		} else {
			s.since[f].add(at, e.Value, e.Standard)
		}
	}
	if r.Comparison != nil {
		for i := range r.Comparison.Residuals {
			x := &r.Comparison.Residuals[i]
			s.residuals[x.Feature].difference.add(at, x.Measured-x.Expected, x.Standard)
			s.residuals[x.Feature].normalised.add(at, x.Normalised, 1)
		}
	}
	if len(r.Indications) > 0 {
		s.summary.Indicated[r.Indications[0].Fault]++
	}
}

// Summary sums up the samples so far.
func (s *Series) Summary() *Summary {
	out := s.summary
	out.Rejections, out.Findings, out.Indicated = maps.Clone(out.Rejections), maps.Clone(out.Findings), maps.Clone(out.Indicated)
	for f := range FigureCount {
		if s.all[f].n > 0 {
			out.Means = append(out.Means, s.all[f].asMean(f))
		}
		if d, ok := s.drift(f); ok {
			out.Drifts = append(out.Drifts, d)
		}
	}
	for f := range FeatureCount {
		if x := &s.residuals[f]; x.difference.n > 0 {
			out.Deviations = append(out.Deviations, Deviation{f, x.difference.n, x.difference.mean, x.normalised.mean})
		}
	}
	if out.Steady < fewSamples {
		out.Cautions = append(out.Cautions, Caution{Code: FewSamples, Message: message(
			"%s steady samples: a mean should have %s at least", plain(float64(out.Steady)), plain(fewSamples))})
	}
	if len(out.Drifts) > 0 {
		out.Cautions = append(out.Cautions, Caution{Code: WeatherMoves, Message: message(
			"a COP moves with the temperatures of source and sink too: compare equal seasons, or the second-law and compressor efficiencies, which move less")})
	}
	out.Cautions = append(out.Cautions, safety)
	return &out
}

// absolute reports whether changes of a figure are differences in K.
func absolute(f Figure) bool {
	return f == FigureSuperheat || f == FigureSubcooling || f == FigureEvaporatorSuperheat || f == FigureDischargeSuperheat
}

// drift compares a figure with its baseline. Against a baseline of the series' own what makes its sensors uncertain cancels,
// and only the scatter counts.
func (s *Series) drift(f Figure) (Drift, bool) {
	d := Drift{Figure: f}
	var u float64
	var since *tally
	if b, given := s.options.Baseline[f]; given {
		since = &s.all[f]
		if since.n == 0 {
			return d, false
		}
		d.Baseline, d.BaselineStandard, u = b.Value, b.Standard, since.standard()
	} else {
		b := &s.baseline[f]
		since = &s.since[f]
		if b.n == 0 || since.n == 0 || !slices.Contains(drifting, f) {
			return d, false
		}
		d.Baseline, d.BaselineStandard, u = b.mean, b.scatter(), since.scatter()
	}
	d.Count, d.Mean = since.n, since.mean
	d.Change, d.Standard = d.Mean-d.Baseline, math.Hypot(u, d.BaselineStandard)
	if !absolute(f) {
		d.Change /= d.Baseline
		d.Standard = math.Hypot(u/d.Baseline, d.BaselineStandard*d.Mean/(d.Baseline*d.Baseline))
	}
	d.Significant = math.Abs(d.Change) > 2*d.Standard
	return d, true
}
