package readings_test

import (
	"math"
	"math/rand/v2"
	"runtime"
	"testing"
	"time"

	"dewmark/service/readings"
)

var midnight = time.Date(2026, 1, 14, 0, 0, 0, 0, time.UTC)

// run puts n samples at an interval through a series. Change alters sample i.
func run(t testing.TB, s *readings.Series, n int, every time.Duration, change func(i int, s *readings.Sample)) []readings.Step {
	t.Helper()
	base := heatPump(t, refrigerant(t, "R290"))
	steps := make([]readings.Step, n)
	for i := range n {
		sample := *base
		sample.Time = midnight.Add(time.Duration(i) * every)
		if change != nil {
			change(i, &sample)
		}
		var err error
		if steps[i], err = s.Add(t.Context(), &sample); err != nil {
			t.Fatal(err)
		}
	}
	return steps
}

func series(t testing.TB, o readings.SeriesOptions) *readings.Series {
	t.Helper()
	s, err := readings.NewSeries(evaluator(t, readings.Installation{Refrigerant: refrigerant(t, "R290")}, nil), o)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func move(s *readings.Sample, r readings.Reading, by float64) {
	v, _ := s.Value(r)
	s.Set(r, v+by)
}

// A machine counts once it has been steady for ten minutes, at one sample a minute, a second or a quarter of an hour.
func TestSteadyMachine(t *testing.T) {
	for every, first := range map[time.Duration]int{time.Minute: 10, time.Second: 600, 15 * time.Minute: 2} {
		n := max(40, 3*first)
		if testing.Short() && n > 1000 {
			continue
		}
		s := series(t, readings.SeriesOptions{})
		for i, step := range run(t, s, n, every, nil) {
			if want := i >= first; step.Steady != want || (step.Rejection == readings.Starting) == want || step.Result == nil {
				t.Fatalf("sample %d every %s: steady %v, %q", i, every, step.Steady, step.Rejection)
			}
		}
		sum := s.Summary()
		if sum.Samples != n || sum.Steady != n-first || sum.Rejections[readings.Starting] != first || !sum.To.Equal(midnight.Add(time.Duration(n-1)*every)) {
			t.Errorf("every %s: %+v", every, sum)
		}
		for _, m := range sum.Means {
			// Rounding is all that scatters.
			if m.Count != n-first || !(m.Deviation <= 1e-9*math.Abs(m.Mean)) || m.Low > m.High {
				t.Errorf("every %s: %+v", every, m)
			}
		}
	}
}

// What makes samples count for nothing, and which reading is to blame.
func TestRejections(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 1))
	for _, row := range []struct {
		name   string
		change func(i int, s *readings.Sample)
		want   readings.Rejection
		field  string
	}{
		{"a water temperature that rises by 0.2 K/min", func(i int, s *readings.Sample) {
			move(s, readings.SinkInletTemperature, 0.2*float64(i))
			move(s, readings.SinkOutletTemperature, 0.2*float64(i))
		}, readings.Drifting, "sink.inlet_temperature"},
		{"a discharge that swings by 2 K", func(i int, s *readings.Sample) {
			move(s, readings.DischargeTemperature, 2*math.Sin(float64(i)*math.Pi/2+0.1))
		}, readings.Unsteady, "discharge_temperature"},
		{"an evaporating pressure that swings by 30 kPa, 2 K", func(i int, s *readings.Sample) { move(s, readings.SuctionPressure, 30e3*float64(1-2*(i%2))) }, readings.Unsteady, "evaporation_temperature"},
		{"swapped gauges, as in a defrost", func(_ int, s *readings.Sample) {
			low, _ := s.Value(readings.SuctionPressure)
			high, _ := s.Value(readings.DischargePressure)
			s.Set(readings.SuctionPressure, high)
			s.Set(readings.DischargePressure, low)
		}, readings.Defrosting, "discharge_pressure"},
		{"a discharge colder than the suction", func(_ int, s *readings.Sample) { s.Set(readings.DischargeTemperature, 275) }, readings.ImplausibleSample, "discharge_temperature"},
		{"no power", func(_ int, s *readings.Sample) { s.Set(readings.CompressorPower, 0) }, readings.StandingStill, ""},
		{"hardly any power", func(i int, s *readings.Sample) {
			if i > 0 {
				s.Set(readings.CompressorPower, 20)
			}
		}, readings.StandingStill, ""},
		{"no time", func(_ int, s *readings.Sample) { s.Time = time.Time{} }, readings.OutOfOrder, ""},
		{"times that run backwards", func(i int, s *readings.Sample) { s.Time = midnight.Add(time.Duration(-i) * time.Minute) }, readings.OutOfOrder, ""},
		{"a temperature below absolute zero", func(_ int, s *readings.Sample) { s.Set(readings.SuctionTemperature, -1) }, readings.RefusedSample, ""},
		{"nothing but power", func(_ int, s *readings.Sample) {
			for _, r := range readings.Readings() {
				if r != readings.CompressorPower {
					s.Unset(r)
				}
			}
		}, readings.NothingToJudge, ""},
		{"noise of 0.05 K", func(_ int, s *readings.Sample) {
			move(s, readings.SuctionTemperature, 0.05*rng.NormFloat64())
			move(s, readings.SinkInletTemperature, 0.05*rng.NormFloat64())
		}, readings.Accepted, ""},
	} {
		s := series(t, readings.SeriesOptions{})
		steps := run(t, s, 25, time.Minute, row.change)
		if got := steps[24]; got.Rejection != row.want || got.Field != row.field || got.Steady != (row.want == readings.Accepted) || (got.Refused != nil) != (row.want == readings.RefusedSample) {
			t.Errorf("%s: %q by %q, want %q by %q", row.name, got.Rejection, got.Field, row.want, row.field)
		}
		sum := s.Summary()
		total := sum.Steady
		for _, n := range sum.Rejections {
			total += n
		}
		if total != 25 || sum.Samples != 25 {
			t.Errorf("%s: %d steady and %v of %d samples", row.name, sum.Steady, sum.Rejections, sum.Samples)
		}
	}
}

// After a stop the machine must show again that it is steady, and so after a gap.
func TestStopsAndGaps(t *testing.T) {
	s := series(t, readings.SeriesOptions{})
	steps := run(t, s, 60, time.Minute, func(i int, s *readings.Sample) {
		if 20 <= i && i < 25 {
			s.Set(readings.CompressorPower, 3)
		}
		if i >= 45 {
			s.Time = s.Time.Add(2 * time.Hour)
		}
	})
	for i, want := range map[int]readings.Rejection{
		19: readings.Accepted, 20: readings.StandingStill, 24: readings.StandingStill, 25: readings.Starting, 34: readings.Starting,
		35: readings.Accepted, 44: readings.Accepted, 45: readings.Starting, 55: readings.Accepted,
	} {
		if steps[i].Rejection != want {
			t.Errorf("minute %d: %q, want %q", i, steps[i].Rejection, want)
		}
	}
}

// Two hours of standstill later the pressure must belong to the ambient temperature.
func TestStandstillInASeries(t *testing.T) {
	s := series(t, readings.SeriesOptions{})
	steps := run(t, s, 140, time.Minute, func(i int, s *readings.Sample) {
		s.Set(readings.AmbientTemperature, 283.15)
		if i >= 10 {
			s.Set(readings.CompressorPower, 0)
		}
	})
	findings := func(i int) int { return len(steps[i].Result.Plausibility) }
	if findings(100) != 0 || findings(139) == 0 {
		t.Errorf("%d findings after 90 minutes, %d after 129", findings(100), findings(139))
	}
	if sum := s.Summary(); sum.Findings[readings.StandstillPressureLow] == 0 || sum.Findings[readings.StandstillPressureHigh] == 0 {
		t.Errorf("0 °C and 45 °C at an ambient of 10 °C: %v", sum.Findings)
	}
}

// A COP that falls by a tenth after a quarter of the series is a drift by a tenth, with a baseline of its own or a given one.
func TestDrift(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 1))
	change := func(i int, s *readings.Sample) {
		s.Unset(readings.SinkVolumeFlow) // the power alone would move with the flow
		s.Unset(readings.DischargeTemperature)
		s.Set(readings.HeatingCapacity, 10e3*(1+0.005*rng.NormFloat64()))
		if i >= 100 {
			v, _ := s.Value(readings.CompressorPower)
			s.Set(readings.CompressorPower, v/0.9)
		}
	}
	s := series(t, readings.SeriesOptions{
		BaselinePeriod: 90 * time.Minute,
		Baseline:       map[readings.Figure]readings.Baseline{readings.FigureCOPHeating: {Value: 4, Standard: 0.02}},
	})
	run(t, s, 400, time.Minute, change)
	sum := s.Summary()
	drifts := map[readings.Figure]readings.Drift{}
	for _, d := range sum.Drifts {
		drifts[d.Figure] = d
	}
	// 90 of 390 steady samples have COP 4, the rest 3.6.
	cop := drifts[readings.FigureCOPHeating]
	if want := (90*4+300*3.6)/390/4 - 1; !(math.Abs(cop.Change-want) < 0.002) || cop.Baseline != 4 || cop.Count != 390 {
		t.Errorf("against 4: %+v, want a change of %.4f", cop, want)
	}
	cooling := drifts[readings.FigureCOPCooling]
	if want := 2.6/3.0 - 1; !(math.Abs(cooling.Change-want) < 0.002) || !cooling.Significant || cooling.Count != 300 {
		t.Errorf("against the first 90 minutes: %+v, want a change of %.4f", cooling, want)
	}
	if sh := drifts[readings.FigureSuperheat]; sh.Significant || sh.Change != 0 {
		t.Errorf("superheat: %+v", sh)
	}
}

// Means, scatter and trend of a figure that rises evenly.
func TestTrend(t *testing.T) {
	s := series(t, readings.SeriesOptions{})
	run(t, s, 200, time.Minute, func(i int, s *readings.Sample) {
		for _, r := range []readings.Reading{readings.SinkVolumeFlow, readings.DischargeTemperature} {
			s.Unset(r)
		}
		s.Set(readings.HeatingCapacity, 10e3+10*float64(i))
	})
	for _, m := range s.Summary().Means {
		if m.Figure != readings.FigureHeatingCapacity {
			continue
		}
		// Samples 10 to 199.
		if !(math.Abs(m.Mean-11045) < 1e-6) || m.Low != 10100 || m.High != 11990 || !(math.Abs(m.Trend-10./60) < 1e-9) || !(m.TrendStandard < 1e-9) {
			t.Errorf("%+v", m)
		}
		if want := 10 * math.Sqrt((190*190-1)/12.*190/189); !(math.Abs(m.Deviation-want) < 1e-6) {
			t.Errorf("deviation %g, want %g", m.Deviation, want)
		}
		return
	}
	t.Error("no mean of the heating capacity")
}

func TestSeriesRefusals(t *testing.T) {
	e := evaluator(t, readings.Installation{Refrigerant: refrigerant(t, "R290")}, nil)
	for field, o := range map[string]readings.SeriesOptions{
		"window":               {Window: -time.Second},
		"deviation":            {Deviation: math.NaN()},
		"slope":                {Slope: -1},
		"standstill_power":     {StandstillPower: math.Inf(1)},
		"baseline_period":      {BaselinePeriod: -1},
		"baseline.cop_heating": {Baseline: map[readings.Figure]readings.Baseline{readings.FigureCOPHeating: {Value: 0}}},
		"baseline":             {Baseline: map[readings.Figure]readings.Baseline{200: {Value: 1}}},
	} {
		_, err := readings.NewSeries(e, o)
		refuses(t, err, field)
	}
}

// A series of any length needs no more memory than a short one.
func TestConstantMemory(t *testing.T) {
	if testing.Short() {
		t.Skip("40 000 samples")
	}
	s := series(t, readings.SeriesOptions{BaselinePeriod: time.Hour})
	sample := heatPump(t, refrigerant(t, "R290"))
	sample.Time = midnight
	used := func(samples int) uint64 {
		for range samples {
			sample.Time = sample.Time.Add(10 * time.Second)
			if _, err := s.Add(t.Context(), sample); err != nil {
				t.Fatal(err)
			}
		}
		runtime.GC()
		var m runtime.MemStats
		runtime.ReadMemStats(&m)
		return m.HeapAlloc
	}
	short, long := used(10_000), used(30_000)
	// Anything kept for each sample would be 30 000 times at least a float64.
	if long > short+200_000 {
		t.Errorf("%d bytes after 10 000 samples, %d after 40 000", short, long)
	}
	if sum := s.Summary(); sum.Samples != 40_000 {
		t.Errorf("%d samples", sum.Samples)
	}
}
