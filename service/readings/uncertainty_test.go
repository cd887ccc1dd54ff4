package readings_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"dewmark/service/cycle"
	"dewmark/service/readings"
	"dewmark/service/readings/uncertainty"
)

// A water side with 0.50 L/s to 1 %, 5 K from two sensors of 0.1 K, density to 0.2 % and heat capacity to 0.5 % tells its
// heat to sqrt(1² + (√2·0.1/5·100)² + 0.2² + 0.5²) = 3.05 %, expanded 6.1 %.
func TestWaterSideWorkedExample(t *testing.T) {
	var s readings.Sample
	s.Set(readings.SinkInletTemperature, 303.15)
	s.Set(readings.SinkOutletTemperature, 308.15)
	s.Set(readings.SinkVolumeFlow, 0.50e-3)
	s.Sink.Liquid = water(t)
	e := evaluator(t, readings.Installation{Refrigerant: refrigerant(t, "R290"), Uncertainties: map[readings.Reading]readings.Uncertainty{
		readings.SinkInletTemperature:  {Standard: new(0.1)},
		readings.SinkOutletTemperature: {Standard: new(0.1)},
		readings.SinkVolumeFlow:        {Relative: new(0.01)},
	}}, nil)
	q := evaluate(t, e, &s).Figure(readings.FigureHeatingCapacity)
	// 0.5 L/s of water at 30 °C, 995.65 kg/m3, and 4.180 kJ/(kg K) at 32.5 °C (IAPWS-95): 10.40 kW.
	if !(math.Abs(q.Value/10.404e3-1) < 1e-3) {
		t.Errorf("heat %.1f W", q.Value)
	}
	if u := q.Standard / q.Value; !(math.Abs(u-0.0305) < 0.00005) {
		t.Errorf("standard uncertainty %.4f %%, the worked example has 3.05", 100*u)
	}
	if U := q.Expanded / q.Value; !(math.Abs(U-0.061) < 0.0005) || q.CoverageFactor != 2 {
		t.Errorf("expanded uncertainty %.3f %% with k = %g, the worked example has 6.1", 100*U, q.CoverageFactor)
	}
	// Each thermometer takes half of (2.83/3.05)²; the heat capacity is not quite the same at both.
	if b := q.Budget; len(b) != 5 || !(math.Abs(b[0].Share-0.430) < 0.002) || !(math.Abs(b[1].Share-0.430) < 0.002) {
		t.Errorf("budget %+v", b)
	}
}

// An error that both water thermometers share cancels in their difference; so does a full correlation.
func TestSharedErrorCancels(t *testing.T) {
	var s readings.Sample
	s.Set(readings.SinkInletTemperature, 303.15)
	s.Set(readings.SinkOutletTemperature, 308.15)
	s.Set(readings.SinkVolumeFlow, 0.50e-3)
	s.Sink.Liquid = water(t)
	both := []readings.Reading{readings.SinkInletTemperature, readings.SinkOutletTemperature}
	u := map[readings.Reading]readings.Uncertainty{
		readings.SinkInletTemperature:  {Standard: new(0.1)},
		readings.SinkOutletTemperature: {Standard: new(0.1)},
		readings.SinkVolumeFlow:        {Standard: new(0.0)},
	}
	relative := func(i readings.Installation) float64 {
		i.Refrigerant = refrigerant(t, "R290")
		i.Uncertainties = u
		q := evaluate(t, evaluator(t, i, nil), &s).Figure(readings.FigureHeatingCapacity)
		return q.Standard / q.Value
	}
	alone := relative(readings.Installation{})
	if shared := relative(readings.Installation{Shared: []readings.SharedError{{Name: "calibration", Readings: both, Standard: 1}}}); !(math.Abs(shared/alone-1) < 2e-3) {
		t.Errorf("a shared error of 1 K moves the uncertainty from %.5f to %.5f", alone, shared)
	}
	correlated := relative(readings.Installation{Correlations: []readings.Correlation{{A: both[0], B: both[1], Coefficient: 1}}})
	if want := math.Hypot(0.002, 0.005); !(math.Abs(correlated/want-1) < 0.01) {
		t.Errorf("fully correlated thermometers leave %.5f, density and heat capacity alone %.5f", correlated, want)
	}
}

// Sensitivities are the derivatives that differences of whole evaluations give. Each sample has one route alone, because the
// weights of several move with the readings, which the law of propagation leaves out.
func TestSensitivities(t *testing.T) {
	for _, name := range []string{"R290", "R744", "R454C"} {
		for _, without := range [][]readings.Reading{{readings.SinkVolumeFlow}, {readings.CompressorPower}, {readings.CompressorPower, readings.DischargeTemperature}} {
			fluid := refrigerant(t, name)
			s := heatPump(t, fluid)
			for _, r := range without {
				s.Unset(r)
			}
			if len(without) == 2 { // heat given off and taken up, and their difference is the power
				s.Source.MoistAir = true
				s.Set(readings.SourceVolumeFlow, 0.9)
				s.Set(readings.SourceInletTemperature, 280.15)
				s.Set(readings.SourceOutletTemperature, 276.15)
				s.Set(readings.SourceInletHumidity, 0.9)
				s.Set(readings.SourceOutletHumidity, 0.95)
			}
			i := readings.Installation{Refrigerant: fluid, Uncertainties: certain(1e-3)}
			if name == "R744" {
				i.Layout = cycle.Transcritical
			}
			e := evaluator(t, i, nil)
			r := evaluate(t, e, s)
			checked := 0
			for f := range readings.FigureCount {
				for _, share := range r.Figure(f).Budget {
					reading, ok := readings.ParseReading(share.Input)
					if !ok {
						continue
					}
					v, _ := s.Value(reading)
					step := 1e-6 * math.Max(1e-2, math.Abs(v))
					at := func(v float64) float64 {
						moved := *s
						moved.Set(reading, v)
						return evaluate(t, e, &moved).Figure(f).Value
					}
					want := (at(v+step) - at(v-step)) / (2 * step)
					rounding := 1e-12 * math.Abs(r.Figure(f).Value) / step
					checked++
					if !(math.Abs(share.Sensitivity-want) <= 2e-6*math.Abs(want)+rounding) {
						t.Errorf("%s without %v: d %s / d %s = %.8g, differences give %.8g", name, without, f, reading, share.Sensitivity, want)
					}
				}
			}
			if checked < 25 {
				t.Errorf("%s without %v: only %d sensitivities", name, without, checked)
			}
		}
	}
}

// In well-behaved cases the drawn intervals confirm the law of propagation, 200 000 draws each: to one digit of the standard
// uncertainty with good sensors, to two digits where uncertainties are so small that nothing of the curvature is left.
func TestFirstOrderAgainstDraws(t *testing.T) {
	draws, names := 200_000, []string{"R290", "R134a", "R717", "R454B"}
	if testing.Short() {
		draws, names = 20_000, names[:2]
	}
	for _, name := range names {
		for digits, size := range map[int]float64{1: 1, 2: 0.1} {
			fluid := refrigerant(t, name)
			u := map[readings.Reading]readings.Uncertainty{}
			for r, v := range map[readings.Reading]float64{
				readings.SuctionTemperature: 0.2, readings.DischargeTemperature: 0.2, readings.LiquidTemperature: 0.2,
				readings.SinkInletTemperature: 0.03, readings.SinkOutletTemperature: 0.03, readings.HeatLossFraction: 0.01,
			} {
				u[r] = readings.Uncertainty{Standard: new(v * size)}
			}
			for r, v := range map[readings.Reading]float64{
				readings.SuctionPressure: 0.002, readings.DischargePressure: 0.002, readings.CompressorPower: 0.005, readings.SinkVolumeFlow: 0.01,
			} {
				u[r] = readings.Uncertainty{Relative: new(v * size)}
			}
			e := evaluator(t, readings.Installation{Refrigerant: fluid, Uncertainties: u, ModelUncertainty: new(0.003 * size)},
				&readings.Options{Method: readings.MonteCarlo, Coverage: 0.95, Draws: uncertainty.Draws{Seed: 1, Count: draws, Digits: digits}})
			r := evaluate(t, e, heatPump(t, fluid))
			confirmed := 0
			for f := range readings.FigureCount {
				v := r.Figures[f].Validation
				if v == nil {
					continue
				}
				switch v.Verdict {
				case uncertainty.Refuted:
					t.Errorf("%s, %d digits: %s is refuted: %.6g ± %.3g, drawn %+v, %+v", name, digits, f, r.Figure(f).Value, r.Figure(f).Expanded, r.Figures[f].Drawn, *v)
				case uncertainty.Confirmed:
					confirmed++
				}
			}
			t.Logf("%s, %d digits: %d figures confirmed, %d draws failed", name, digits, confirmed, r.Draws.Failed)
			if !testing.Short() && digits == 1 && confirmed < 12 || r.Draws.Failed > 0 {
				t.Errorf("%s: %d figures confirmed, %d draws failed", name, confirmed, r.Draws.Failed)
			}
		}
	}
}

// Where a result is far from a straight line in its inputs, or draws leave the single phase, the service says so.
func TestFirstOrderRefuted(t *testing.T) {
	fluid := refrigerant(t, "R290")
	draws := uncertainty.Draws{Seed: 1, Count: 50_000}
	// A difference of 1 K read to 0.4 K: the COP is a quotient by a power that is known poorly.
	s := heatPump(t, fluid)
	s.Unset(readings.DischargeTemperature)
	e := evaluator(t, readings.Installation{Refrigerant: fluid, Uncertainties: map[readings.Reading]readings.Uncertainty{
		readings.CompressorPower: {Relative: new(0.25)},
	}}, &readings.Options{Method: readings.MonteCarlo, Draws: draws})
	r := evaluate(t, e, s)
	if v := r.Figures[readings.FigureCOPHeating].Validation; v == nil || v.Verdict != uncertainty.Refuted || !cautioned(r, readings.FirstOrderRefuted) {
		t.Errorf("a COP with a power to 25 %%: %+v, %+v", r.Figures[readings.FigureCOPHeating], v)
	}
	// A superheat just beyond twice its uncertainty: one draw in fifty is wet.
	s = heatPump(t, fluid)
	s.Set(readings.SuctionTemperature, 273.15+2.2)
	e = evaluator(t, readings.Installation{Refrigerant: fluid, Uncertainties: map[readings.Reading]readings.Uncertainty{
		readings.SuctionTemperature: {Standard: new(1.0)}, readings.SuctionPressure: {Standard: new(0.0)},
	}}, &readings.Options{Method: readings.MonteCarlo, Draws: draws})
	r = evaluate(t, e, s)
	share := float64(r.Draws.Failures[readings.WetSuction]) / float64(r.Draws.Draws)
	if want := 0.0139; !(math.Abs(share-want) < 0.003) || !cautioned(r, readings.DrawsFailed) { // Φ(-2.2)
		t.Errorf("%.4f of the draws are wet, want %.4f", share, want)
	}
}

func cautioned(r *readings.Result, code readings.CautionCode) bool {
	for i := range r.Cautions {
		if r.Cautions[i].Code == code {
			return true
		}
	}
	return false
}

// Over many machines with noise at the stated uncertainties the 95 % interval holds the truth in 93 to 97 of 100.
func TestCoverage(t *testing.T) {
	machines := 2000
	if testing.Short() {
		machines = 300
	}
	rng := rand.New(rand.NewPCG(11, 12))
	names := []string{"R290", "R134a", "R32", "R600a", "R717", "R1234yf", "R410A", "R454B"}
	held, counted := map[readings.Figure]int{}, map[readings.Figure]int{}
	for done := 0; done < machines; {
		request := randomCycle(rng, refrigerant(t, names[rng.IntN(len(names))]))
		request.Evaporation.Superheat = new(5 + 8*rng.Float64())
		request.Condensation.Subcooling = new(4 + 8*rng.Float64())
		request.SuctionLine, request.DischargeLine, request.LiquidLine = cycle.SuctionLine{}, cycle.DischargeLine{}, cycle.LiquidLine{}
		s, err := cycle.Solve(t.Context(), request)
		if err != nil || wet(s) {
			continue
		}
		truth := map[readings.Figure]float64{
			readings.FigureMassFlow:             s.Performance.MassFlow,
			readings.FigureHeatingCapacity:      s.Performance.HeatingCapacity,
			readings.FigureCoolingCapacity:      s.Performance.CoolingCapacity,
			readings.FigureCompressorPower:      s.Performance.CompressorPower,
			readings.FigureCOPHeating:           s.Performance.COPHeating,
			readings.FigureCOPCooling:           s.Performance.COPCooling,
			readings.FigureIsentropicEfficiency: s.Performance.IsentropicEfficiency,
		}
		exact := readAll(s)
		exact.Set(readings.HeatLossFraction, *request.Compressor.HeatLossFraction)
		exact.Set(readings.CompressorPower, s.Performance.CompressorPower)
		if rng.IntN(2) == 0 {
			exact.Set(readings.HeatingCapacity, s.Performance.HeatingCapacity)
		}
		if rng.IntN(3) == 0 {
			exact.Set(readings.MassFlow, s.Performance.MassFlow)
		}
		u, noisy := map[readings.Reading]readings.Uncertainty{}, *exact
		for _, r := range readings.Readings() {
			v, given := exact.Value(r)
			if !given {
				continue
			}
			var standard float64
			switch {
			case r.IsPressure():
				standard = 0.004 * v
			case r == readings.HeatLossFraction:
				standard = 0.01
			case r.Quantity() == cycle.Temperature:
				standard = 0.3
			default:
				standard = 0.015 * v
			}
			u[r] = readings.Uncertainty{Standard: &standard}
			if r == readings.HeatLossFraction {
				noisy.Set(r, math.Max(0, v+standard*rng.NormFloat64()))
			} else {
				noisy.Set(r, v+standard*rng.NormFloat64())
			}
		}
		// The properties of the cycle are those of the readings: no uncertainty of the model.
		e := evaluator(t, readings.Installation{
			Refrigerant: request.Refrigerant, Layout: request.Layout, With: request.With, Uncertainties: u, ModelUncertainty: new(0.0),
		}, &readings.Options{Coverage: 0.95})
		r := evaluate(t, e, &noisy)
		done++
		for f, want := range truth {
			if got := r.Figure(f); got.Known() {
				counted[f]++
				if math.Abs(got.Value-want) <= got.Expanded {
					held[f]++
				}
			}
		}
	}
	for f := range counted {
		share := float64(held[f]) / float64(counted[f])
		slack := 0.0
		if testing.Short() {
			slack = 0.02
		}
		t.Logf("%s: %d of %d (%.2f %%)", f, held[f], counted[f], 100*share)
		if !(0.93-slack <= share && share <= 0.97+slack) {
			t.Errorf("%s: the interval holds the truth in %.2f %%", f, 100*share)
		}
	}
}

// A reading known from few samples widens the interval: by Welch and Satterthwaite the degrees of freedom of a figure that
// hangs on it alone are its own.
func TestFewDegreesOfFreedom(t *testing.T) {
	fluid := refrigerant(t, "R290")
	u := certain(1e-9)
	u[readings.SuctionTemperature] = readings.Uncertainty{Standard: new(0.3), DegreesOfFreedom: new(4.0)}
	r := evaluate(t, evaluator(t, readings.Installation{Refrigerant: fluid, Uncertainties: u}, &readings.Options{Coverage: 0.95}), heatPump(t, fluid))
	sh := r.Figure(readings.FigureSuperheat)
	// Student's factor for 4 degrees of freedom at 95 % is 2.78 (JCGM 100, table G.2).
	if !(math.Abs(sh.DegreesOfFreedom-4) < 1e-6) || !(math.Abs(sh.CoverageFactor-2.78) < 0.005) || !(math.Abs(sh.Expanded-2.78*0.3) < 0.002) {
		t.Errorf("%+v", sh)
	}
	if cooling := r.Figure(readings.FigureSubcooling); !math.IsInf(cooling.DegreesOfFreedom, 1) || !(math.Abs(cooling.CoverageFactor-1.96) < 0.001) {
		t.Errorf("%+v", cooling)
	}
}
