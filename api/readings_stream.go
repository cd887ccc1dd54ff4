package api

import (
	"context"
	"strconv"
	"time"

	"github.com/gin-gonic/gin"

	"dewmark/service/readings"
)

// seriesRequest says which samples of a series count, and what its figures are compared with.
type seriesRequest struct {
	WindowMinutes   *float64         `json:"window_minutes"`
	Deviation       *float64         `json:"deviation"`        // of temperatures from their mean
	SlopePerMinute  *float64         `json:"slope_per_minute"` // of temperatures
	StandstillPower *float64         `json:"standstill_power"`
	BaselineHours   *float64         `json:"baseline_hours"`
	Baseline        *baselineRequest `json:"baseline"`
}

// baselineRequest holds what figures were when the machine was known to be well.
type baselineRequest struct {
	Superheat            *baselineFigure `json:"superheat"`
	EvaporatorSuperheat  *baselineFigure `json:"evaporator_superheat"`
	Subcooling           *baselineFigure `json:"subcooling"`
	DischargeSuperheat   *baselineFigure `json:"discharge_superheat"`
	PressureRatio        *baselineFigure `json:"pressure_ratio"`
	IsentropicEfficiency *baselineFigure `json:"isentropic_efficiency"`
	VolumetricEfficiency *baselineFigure `json:"volumetric_efficiency"`
	MassFlow             *baselineFigure `json:"mass_flow"`
	HeatingCapacity      *baselineFigure `json:"heating_capacity"`
	CoolingCapacity      *baselineFigure `json:"cooling_capacity"`
	CompressorPower      *baselineFigure `json:"compressor_power"`
	COPHeating           *baselineFigure `json:"cop_heating"`
	COPCooling           *baselineFigure `json:"cop_cooling"`
	SecondLawEfficiency  *baselineFigure `json:"second_law_efficiency"`
}

type baselineFigure struct {
	Value    float64 `json:"value"`
	Standard float64 `json:"standard"` // standard uncertainty
}

// si turns what a request says of a series into what the evaluation reads.
func (r *seriesRequest) si(u *units, c *choices) readings.SeriesOptions {
	var o readings.SeriesOptions
	if r == nil {
		return o
	}
	duration := func(member string, number *float64, unit time.Duration) time.Duration {
		if number == nil {
			return 0
		}
		if most := 1e6 * time.Hour.Seconds() / unit.Seconds(); !(0 < *number && *number <= most) {
			c.fault("#/series/"+member, "out_of_range", "must be above 0 and at most "+sixDigits(most))
			return 0
		}
		return time.Duration(*number * float64(unit))
	}
	positive := func(member string, number *float64, k kind) float64 {
		switch {
		case number == nil:
			return 0
		case !(*number > 0): // 0 would stand for the default
			c.fault("#/series/"+member, "out_of_range", "must be above 0")
		}
		return u.in(k, *number)
	}
	o.Window, o.BaselinePeriod = duration("window_minutes", r.WindowMinutes, time.Minute), duration("baseline_hours", r.BaselineHours, time.Hour)
	o.Deviation, o.Slope = positive("deviation", r.Deviation, kindTemperatureDifference), positive("slope_per_minute", r.SlopePerMinute, kindTemperatureDifference)/60
	o.StandstillPower = positive("standstill_power", r.StandstillPower, kindPower)
	if b := r.Baseline; b != nil {
		o.Baseline = map[readings.Figure]readings.Baseline{}
		for f, x := range map[readings.Figure]*baselineFigure{
			readings.FigureSuperheat: b.Superheat, readings.FigureEvaporatorSuperheat: b.EvaporatorSuperheat, readings.FigureSubcooling: b.Subcooling,
			readings.FigureDischargeSuperheat: b.DischargeSuperheat, readings.FigurePressureRatio: b.PressureRatio,
			readings.FigureIsentropicEfficiency: b.IsentropicEfficiency, readings.FigureVolumetricEfficiency: b.VolumetricEfficiency,
			readings.FigureMassFlow: b.MassFlow, readings.FigureHeatingCapacity: b.HeatingCapacity, readings.FigureCoolingCapacity: b.CoolingCapacity,
			readings.FigureCompressorPower: b.CompressorPower, readings.FigureCOPHeating: b.COPHeating, readings.FigureCOPCooling: b.COPCooling,
			readings.FigureSecondLawEfficiency: b.SecondLawEfficiency,
		} {
			if x != nil {
				k := figureKinds[f]
				o.Baseline[f] = readings.Baseline{Value: u.in(k, x.Value), Standard: u.in(k.difference(), x.Standard)}
			}
		}
	}
	return o
}

// readingsSeries answers the samples of one machine in the order of their times.
type readingsSeries struct {
	*installation
	*readings.Series
	unread   int                // samples that could not be read
	standing []readings.Caution // those of the first result that a brief stream tells at its end
	begun    bool
}

func (in *installation) series() (*readingsSeries, error) {
	var c choices
	o := in.head.Series.si(in.units, &c)
	if err := invalid(c); err != nil {
		return nil, err
	}
	s, err := readings.NewSeries(in.evaluate, o)
	if err != nil {
		return nil, in.problem(err, "#/series")
	}
	return &readingsSeries{installation: in, Series: s}, nil
}

// answer adds the answer to the next sample, or to the problem that came instead. It returns the problem of a sample that
// has no result.
func (s *readingsSeries) answer(ctx context.Context, b []byte, id string, sample *readings.Sample, problem *Problem, at string) ([]byte, *Problem, error) {
	if problem != nil {
		s.unread++
		b, err := s.item(b, id, nil, problem, nil)
		return b, problem, err
	}
	step, err := s.Add(ctx, sample)
	if err != nil {
		return b, nil, err
	}
	if step.Refused != nil {
		problem = s.problem(step.Refused, at)
	}
	if step.Result != nil && !s.begun {
		s.begun = true
		for i := range step.Result.Cautions {
			if k := &step.Result.Cautions[i]; s.brief && standing(k) && k.Code != readings.Safety { // which the summary has
				s.standing = append(s.standing, *k)
			}
		}
	}
	b, err = s.item(b, id, step.Result, problem, &step)
	return b, problem, err
}

// postReadings answers POST /v1/readings in the form of the request.
func (a *API) postReadings(c *gin.Context) {
	if !hasMedia(c, mediaLines) {
		a.handle(a.readings)(c)
		return
	}
	if err := a.streamReadings(c); err != nil {
		a.fail(c, err)
	}
}

// streamReadings answers a stream of samples, one line in, one line out, and a line that sums up, in memory that does not
// grow. It returns an error while nothing is sent yet.
func (a *API) streamReadings(c *gin.Context) error {
	var all account
	defer func() { a.metrics.calculated("reading", &all) }()
	return a.answerLines(c, func(first []byte) (*lineAnswers, error) {
		var head readingsHead
		if err := a.read(first, &head); err != nil {
			return nil, err
		}
		in, err := a.install(&head, briefParts)
		if err != nil {
			return nil, err
		}
		in.brief = head.Include == nil
		s, err := in.series()
		if err != nil {
			return nil, err
		}
		in.caution("calculation_aid", handling(in.r, nil))
		if err := in.announce(c, in.kinds()); err != nil {
			return nil, err
		}
		ctx := contextOf(c)
		return &lineAnswers{
			line: func(out, text []byte, broken error, n int) ([]byte, error) {
				at := place{"#/samples", n}.String()
				var r sample
				var given *readings.Sample
				var problem *Problem
				if broken != nil {
					problem = invalidItem(MemberError{Pointer: at, Code: "too_long", Detail: "a line may have " + strconv.Itoa(maxLine) + " bytes at most"})
				} else if err := decodeJSON(text, &r); err != nil {
					problem = problemFor(err).below(at)
				} else {
					given, problem = in.sample(&r, at)
				}
				out, problem, err := s.answer(ctx, out, r.ID, given, problem, at)
				all.count(problem, false)
				return out, err
			},
			end: func(out []byte) ([]byte, error) {
				o := begin(out)
				err := o.value("summary", new(s.summary()))
				return append(o.end(), '\n'), err
			},
		}, nil
	})
}

// summaryView closes a series.
type summaryView struct {
	Samples    int                      `json:"samples"`
	Steady     int                      `json:"steady"`
	From       *string                  `json:"from"`
	To         *string                  `json:"to"`
	Rejections map[string]int           `json:"rejections"`
	Means      map[string]meanView      `json:"means"`
	Drifts     map[string]driftView     `json:"drifts"`
	Deviations map[string]deviationView `json:"deviations"`
	Findings   map[string]int           `json:"findings"`
	Indicated  map[string]int           `json:"indicated"`
	Cautions   []caution                `json:"cautions"`
}

type meanView struct {
	Count               int      `json:"count"`
	Mean                float64  `json:"mean"`
	StandardDeviation   *float64 `json:"standard_deviation"`
	Low                 float64  `json:"low"`
	High                float64  `json:"high"`
	StandardUncertainty *float64 `json:"standard_uncertainty"`
	TrendPerDay         *float64 `json:"trend_per_day"`
	TrendUncertainty    *float64 `json:"trend_standard_uncertainty"`
}

// driftView has a change that is relative, or a difference of temperatures for superheat and subcooling.
type driftView struct {
	Baseline            float64  `json:"baseline"`
	BaselineUncertainty *float64 `json:"baseline_standard_uncertainty"`
	Count               int      `json:"count"`
	Mean                float64  `json:"mean"`
	Change              *float64 `json:"change"`
	StandardUncertainty *float64 `json:"standard_uncertainty"`
	Significant         bool     `json:"significant"`
}

type deviationView struct {
	Count      int      `json:"count"`
	Mean       float64  `json:"mean"` // measured less expected
	Normalised *float64 `json:"normalised"`
}

// summary sums up the series in the caller's units.
func (s *readingsSeries) summary() summaryView {
	const day = 24 * hour // s
	u, x := s.units, s.Summary()
	v := summaryView{
		Samples: x.Samples + s.unread, Steady: x.Steady, Rejections: map[string]int{}, Means: map[string]meanView{}, Drifts: map[string]driftView{},
		Deviations: map[string]deviationView{}, Findings: map[string]int{}, Indicated: x.Indicated, Cautions: s.reservations(append(s.standing, x.Cautions...)),
	}
	if !x.From.IsZero() {
		v.From, v.To = new(x.From.Format(time.RFC3339Nano)), new(x.To.Format(time.RFC3339Nano))
	}
	for code, n := range x.Rejections {
		v.Rejections[string(code)] = n
	}
	if s.unread > 0 {
		v.Rejections[string(readings.RefusedSample)] += s.unread
	}
	for code, n := range x.Findings {
		v.Findings[string(code)] = n
	}
	for _, m := range x.Means {
		k := figureKinds[m.Figure]
		d := k.difference()
		v.Means[m.Figure.String()] = meanView{
			m.Count, u.out(k, m.Mean), u.known(d, m.Deviation), u.out(k, m.Low), u.out(k, m.High), u.known(d, m.Standard),
			u.known(d, m.Trend*day), u.known(d, m.TrendStandard*day),
		}
	}
	for _, m := range x.Drifts {
		k := figureKinds[m.Figure]
		change := kindNone
		if k == kindTemperatureDifference {
			change = k
		}
		v.Drifts[m.Figure.String()] = driftView{
			u.out(k, m.Baseline), u.known(k.difference(), m.BaselineStandard), m.Count, u.out(k, m.Mean), u.known(change, m.Change), u.known(change, m.Standard), m.Significant,
		}
	}
	for _, m := range x.Deviations {
		v.Deviations[m.Feature.String()] = deviationView{m.Count, u.out(quantityKinds[m.Feature.Quantity()].difference(), m.Mean), known(m.Normalised)}
	}
	return v
}
