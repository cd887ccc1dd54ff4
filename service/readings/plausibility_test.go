package readings_test

import (
	"slices"
	"testing"
	"time"

	"dewmark/service/cycle"
	"dewmark/service/readings"
)

func found(r *readings.Result, code readings.FindingCode) *readings.Finding {
	for i := range r.Plausibility {
		if r.Plausibility[i].Code == code {
			return &r.Plausibility[i]
		}
	}
	return nil
}

// consistentHeatPump is a sample of a solved cycle, so that every route agrees.
func consistentHeatPump(t testing.TB, name string) *readings.Sample {
	t.Helper()
	s, err := cycle.Solve(t.Context(), &cycle.Request{
		Refrigerant: refrigerant(t, name), Layout: cycle.SingleStage, Purpose: cycle.Heating,
		Evaporation:  cycle.Evaporation{Temperature: new(273.15), Superheat: new(8.0)},
		Condensation: cycle.Condensation{Temperature: new(318.15), Subcooling: new(5.0)},
		Compressor:   cycle.Compressor{IsentropicEfficiency: new(0.66), HeatLossFraction: new(0.05)},
		Size:         &cycle.Size{Heating: new(10400.0)},
	})
	if err != nil {
		t.Fatal(err)
	}
	sample := readAll(s)
	for _, r := range []readings.Reading{
		readings.CondenserInletPressure, readings.CondenserInletTemperature, readings.ExpansionInletPressure, readings.ExpansionInletTemperature,
		readings.EvaporatorOutletPressure, readings.EvaporatorOutletTemperature,
	} {
		sample.Unset(r)
	}
	sample.Set(readings.HeatLossFraction, 0.05)
	sample.Set(readings.CompressorPower, s.Performance.CompressorPower)
	sample.Sink.Liquid = water(t)
	sample.Set(readings.SinkInletTemperature, 308.15)
	sample.Set(readings.SinkOutletTemperature, 313.15)
	sample.Set(readings.SinkVolumeFlow, 0.5e-3)
	return sample
}

// Nothing is wrong with a machine that works, and each broken rule is found by its own code.
func TestPlausibility(t *testing.T) {
	type S = readings.Sample
	swap := func(s *S, a, b readings.Reading) {
		x, _ := s.Value(a)
		y, _ := s.Value(b)
		s.Set(a, y)
		s.Set(b, x)
	}
	for _, row := range []struct {
		name   string
		change func(s *S)
		want   readings.FindingCode
	}{
		{"nothing", func(*S) {}, ""},
		{"swapped gauges", func(s *S) { swap(s, readings.SuctionPressure, readings.DischargePressure) }, readings.PressuresTooClose},
		{"a gauge pressure of 0 taken as absolute", func(s *S) { s.Set(readings.SuctionPressure, 5e3) }, readings.PressuresTooClose},
		{"a discharge colder than the suction", func(s *S) { s.Set(readings.DischargeTemperature, 279) }, readings.DischargeNotHottest},
		{"a discharge at condensation", func(s *S) { s.Set(readings.DischargeTemperature, 318) }, readings.DischargeNotHottest},
		{"a discharge 6 K above condensation", func(s *S) { s.Set(readings.DischargeTemperature, 324) }, readings.FloodbackSuspected},
		{"a source colder than the evaporation", func(s *S) {
			s.Set(readings.SourceInletTemperature, 273)
			s.Set(readings.SourceOutletTemperature, 271)
		}, readings.EvaporationAboveSource},
		{"a source that enters colder than the evaporation", func(s *S) { s.Set(readings.SourceInletTemperature, 272) }, readings.EvaporationAboveSource},
		{"a sink that enters hotter than the condensation", func(s *S) {
			s.Set(readings.SinkInletTemperature, 320)
			s.Unset(readings.SinkOutletTemperature)
		}, readings.CondensationBelowSink},
		{"a sink hotter than the condensation", func(s *S) {
			s.Set(readings.SinkInletTemperature, 325)
			s.Set(readings.SinkOutletTemperature, 330)
		}, readings.CondensationBelowSink},
		{"water that cools in the condenser", func(s *S) { swap(s, readings.SinkInletTemperature, readings.SinkOutletTemperature) }, readings.NegativeDuty},
		{"a heat meter that runs backwards", func(s *S) { s.Set(readings.HeatingCapacity, -9000) }, readings.NegativeDuty},
		{"a superheat of 60 K", func(s *S) { s.Set(readings.SuctionTemperature, 333) }, readings.SuperheatImplausible},
		{"a superheat of -5 K", func(s *S) { s.Set(readings.SuctionTemperature, 268) }, readings.SuperheatImplausible},
		{"a subcooling of 40 K", func(s *S) { s.Set(readings.LiquidTemperature, 278) }, readings.SubcoolingImplausible},
		{"an efficiency of 1.0", func(s *S) { s.Set(readings.DischargeTemperature, 329) }, readings.EfficiencyImplausible},
		{"litres per minute taken for litres per second", func(s *S) {
			s.Unset(readings.DischargeTemperature)
			s.Set(readings.SinkVolumeFlow, 30e-3)
		}, readings.COPImplausible},
		{"swapped thermometers of the condenser", func(s *S) { s.Set(readings.CondenserInletTemperature, 312); s.Set(readings.DischargeTemperature, 312) }, readings.DischargeNotHottest},
		{"a heat meter that disagrees with the water", func(s *S) { s.Set(readings.HeatingCapacity, 7000) }, readings.RoutesDisagree},
		{"capacities that do not close", func(s *S) { s.Set(readings.CoolingCapacity, 4000) }, readings.EnergyNotClosed},
		{"a suction below the triple point", func(s *S) { s.Set(readings.SuctionPressure, 1e-5) }, readings.PressuresTooClose},
		{"a suction above the critical pressure", func(s *S) { s.Set(readings.SuctionPressure, 9e6) }, readings.OutsideSaturation},
		{"a condensation above the critical pressure", func(s *S) { s.Set(readings.DischargePressure, 9e6); s.Unset(readings.LiquidPressure) }, readings.OutsideSaturation},
	} {
		s := consistentHeatPump(t, "R290")
		row.change(s)
		r := evaluate(t, evaluator(t, readings.Installation{Refrigerant: refrigerant(t, "R290")}, nil), s)
		if row.want == "" {
			for _, f := range r.Plausibility {
				t.Errorf("%s: %s: %s", row.name, f.Code, f.Message)
			}
			continue
		}
		if f := found(r, row.want); f == nil {
			t.Errorf("%s: no %s in %v", row.name, row.want, r.Plausibility)
		} else if f.Message.String() == "" {
			t.Errorf("%s: %+v", row.name, f)
		}
	}
}

// A machine charged with another refrigerant than said: superheat or subcooling cannot be, and the true one is among the
// candidates that would fit.
func TestWrongRefrigerant(t *testing.T) {
	others := func() []readings.Refrigerant {
		var all []readings.Refrigerant
		for _, name := range []string{"R134a", "R32", "R290", "R600a", "R410A", "R717", "R744", "R1234yf"} {
			all = append(all, refrigerant(t, name))
		}
		return all
	}
	for _, pair := range [][2]string{{"R134a", "R290"}, {"R410A", "R134a"}, {"R290", "R600a"}} {
		charged, said := pair[0], pair[1]
		s := consistentHeatPump(t, charged)
		e := evaluator(t, readings.Installation{Refrigerant: refrigerant(t, said), OtherRefrigerants: others}, nil)
		r := evaluate(t, e, s)
		i := slices.IndexFunc(r.Plausibility, func(f readings.Finding) bool { return len(f.Candidates) > 0 })
		if i < 0 {
			t.Errorf("%s taken for %s: %v", charged, said, r.Plausibility)
			continue
		}
		names := []string{}
		for _, c := range r.Plausibility[i].Candidates {
			names = append(names, c.Designation)
			if c.Designation == charged && !(near(c.Superheat, 8, 0.01) && near(c.Subcooling, 5, 0.01) && near(c.IsentropicEfficiency, 0.66, 0.001)) {
				t.Errorf("%s as %s would have %+v", charged, said, c)
			}
		}
		if !slices.Contains(names, charged) || slices.Contains(names, said) {
			t.Errorf("%s taken for %s: candidates %v", charged, said, names)
		}
	}
}

func near(got, want, tolerance float64) bool { return got-want <= tolerance && want-got <= tolerance }

// A machine that has stood for hours has the pressure of saturation at the ambient's temperature, or something is wrong.
func TestStandstill(t *testing.T) {
	fluid := refrigerant(t, "R134a")
	e := evaluator(t, readings.Installation{Refrigerant: fluid}, nil)
	for T, want := range map[float64]readings.FindingCode{
		293.15: "", 294.5: "", 296.15: readings.StandstillPressureHigh, 288.15: readings.StandstillPressureLow,
	} {
		at, err := fluid.DewPoint(T)
		if err != nil {
			t.Fatal(err)
		}
		s := readings.Sample{Standstill: 3 * time.Hour}
		s.Set(readings.SuctionPressure, at.P)
		s.Set(readings.DischargePressure, at.P)
		s.Set(readings.SuctionTemperature, 293.15)
		s.Set(readings.AmbientTemperature, 293.15)
		s.Set(readings.CompressorPower, 0)
		r := evaluate(t, e, &s)
		switch {
		case want == "" && len(r.Plausibility) > 0, want != "" && found(r, want) == nil:
			t.Errorf("saturation at %g K in 293.15 K: %v, want %q", T, r.Plausibility, want)
		}
		if r.Figure(readings.FigureSuperheat).Known() || !near(r.Figure(readings.FigureEvaporationTemperature).Value, T, 1e-6) {
			t.Errorf("a standing machine has a superheat of %v", r.Figure(readings.FigureSuperheat).Value)
		}
		s.Standstill = time.Hour
		if r := evaluate(t, e, &s); len(r.Plausibility) > 0 {
			t.Errorf("after one hour: %v", r.Plausibility)
		}
	}
}
