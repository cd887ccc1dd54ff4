package readings_test

import (
	"math"
	"slices"
	"testing"

	"dewmark/service/cycle"
	"dewmark/service/machine"
	"dewmark/service/readings"
)

// worked is a solved cycle with both its streams: a sample that has every reading, and what it must say.
func worked(t testing.TB) (*readings.Sample, *cycle.Solution) {
	t.Helper()
	s, err := cycle.Solve(t.Context(), &cycle.Request{
		Refrigerant: refrigerant(t, "R134a"), Layout: cycle.SingleStage, Purpose: cycle.Cooling,
		Evaporation:  cycle.Evaporation{Temperature: new(276.15), Superheat: new(7.0)},
		Condensation: cycle.Condensation{Temperature: new(315.15), Subcooling: new(6.0)},
		Compressor:   cycle.Compressor{IsentropicEfficiency: new(0.7), HeatLossFraction: new(0.06)},
		Size:         &cycle.Size{Cooling: new(50e3)},
	})
	if err != nil {
		t.Fatal(err)
	}
	sample := readAll(s)
	sample.Set(readings.HeatLossFraction, 0.06)
	l := water(t)
	flowFor := func(q, T1, T2, at float64) float64 { return q / (l.Enthalpy(T2) - l.Enthalpy(T1)) / l.Density(at) }
	sample.Sink, sample.Source = readings.Stream{Liquid: l}, readings.Stream{Liquid: l, MeterAtOutlet: true}
	for r, v := range map[readings.Reading]float64{
		readings.CompressorPower:         s.Performance.CompressorPower,
		readings.MassFlow:                s.Performance.MassFlow,
		readings.HeatingCapacity:         s.Performance.HeatingCapacity,
		readings.CoolingCapacity:         s.Performance.CoolingCapacity,
		readings.SinkInletTemperature:    303.15,
		readings.SinkOutletTemperature:   309.15,
		readings.SinkVolumeFlow:          flowFor(s.Performance.HeatingCapacity, 303.15, 309.15, 303.15),
		readings.SourceInletTemperature:  285.15,
		readings.SourceOutletTemperature: 280.15,
		readings.SourceVolumeFlow:        flowFor(s.Performance.CoolingCapacity, 280.15, 285.15, 280.15),
	} {
		sample.Set(r, v)
	}
	return sample, s
}

var sizes = []readings.Reading{
	readings.CompressorPower, readings.MassFlow, readings.HeatingCapacity, readings.CoolingCapacity, readings.SinkVolumeFlow, readings.SourceVolumeFlow,
}

func agrees(t *testing.T, what string, r *readings.Result, s *cycle.Solution, tolerance float64) {
	t.Helper()
	for f, want := range map[readings.Figure]float64{
		readings.FigureMassFlow:             s.Performance.MassFlow,
		readings.FigureHeatingCapacity:      s.Performance.HeatingCapacity,
		readings.FigureCoolingCapacity:      s.Performance.CoolingCapacity,
		readings.FigureCompressorPower:      s.Performance.CompressorPower,
		readings.FigureCOPHeating:           s.Performance.COPHeating,
		readings.FigureCOPCooling:           s.Performance.COPCooling,
		readings.FigureIsentropicEfficiency: s.Performance.IsentropicEfficiency,
	} {
		if got := r.Figure(f).Value; !(math.Abs(got/want-1) <= tolerance) {
			t.Errorf("%s: %s %.12g, want %.12g", what, f, got, want)
		}
	}
}

// Each size alone is enough for the rest; together they agree, and the figures are more certain than by the best alone.
func TestEveryRouteAlone(t *testing.T) {
	all, s := worked(t)
	e := evaluator(t, readings.Installation{Refrigerant: refrigerant(t, "R134a")}, nil)
	best := map[readings.Figure]float64{}
	for _, alone := range sizes {
		sample := *all
		for _, other := range sizes {
			if other != alone {
				sample.Unset(other)
			}
		}
		r := evaluate(t, e, &sample)
		agrees(t, "by "+alone.String(), r, s, 1e-10)
		for f := range readings.FigureCount {
			u := r.Figure(f).Standard
			if b, ok := best[f]; !ok || u < b {
				best[f] = u
			}
		}
	}
	r := evaluate(t, e, all)
	agrees(t, "by all", r, s, 1e-10)
	if len(r.Disagreements) > 0 || len(r.Plausibility) > 0 {
		t.Errorf("exact readings disagree: %v, %v", r.Disagreements, r.Plausibility)
	}
	for _, f := range []readings.Figure{readings.FigureMassFlow, readings.FigureHeatingCapacity, readings.FigureCoolingCapacity, readings.FigureCompressorPower} {
		if u := r.Figure(f).Standard; !(u <= best[f]*(1+1e-12)) {
			t.Errorf("%s: u = %g by all routes, %g by the best alone", f, u, best[f])
		}
	}
	weights := map[readings.Figure]float64{}
	names := []readings.RouteName{}
	for _, k := range r.Routes {
		weights[k.Figure] += k.Weight
		names = append(names, k.Name)
	}
	for f, w := range weights {
		if !(math.Abs(w-1) < 1e-12) {
			t.Errorf("weights of %s add up to %g", f, w)
		}
	}
	for _, want := range []readings.RouteName{
		readings.SinkStream, readings.HeatingMeter, readings.SourceStream, readings.CoolingMeter, readings.FlowMeasured, readings.PowerMeasured, readings.CompressorBalance,
	} {
		if !slices.Contains(names, want) {
			t.Errorf("no route %s in %v", want, names)
		}
	}
	if c := r.Figure(readings.FigureEnergyClosure); !(math.Abs(c.Value) < 1e-10) || !(c.Standard > 0) {
		t.Errorf("the energy does not close: %+v", c)
	}
	// Carnot's COP between the entropy means of the streams.
	l := water(t)
	hot, cold := l.EntropyMean(303.15, 309.15), l.EntropyMean(285.15, 280.15)
	if got, want := r.Figure(readings.FigureSecondLawEfficiency).Value, s.Performance.COPHeating/(hot/(hot-cold)); !(math.Abs(got/want-1) < 1e-4) {
		t.Errorf("second-law efficiency %g, want %g", got, want)
	}
}

// Without any size the ratios are there all the same, and the sizes are not.
func TestRatiosWithoutSize(t *testing.T) {
	sample, s := worked(t)
	for _, r := range sizes {
		sample.Unset(r)
	}
	r := evaluate(t, evaluator(t, readings.Installation{Refrigerant: refrigerant(t, "R134a")}, nil), sample)
	for f, want := range map[readings.Figure]float64{
		readings.FigureCOPHeating: s.Performance.COPHeating, readings.FigureCOPCooling: s.Performance.COPCooling, readings.FigureIsentropicEfficiency: 0.7,
	} {
		if got := r.Figure(f).Value; !(math.Abs(got/want-1) < 1e-10) {
			t.Errorf("%s %g, want %g", f, got, want)
		}
	}
	if r.Figure(readings.FigureMassFlow).Known() || r.Figure(readings.FigureHeatingCapacity).Known() || len(r.Routes) > 0 {
		t.Errorf("a size out of nothing: %v", r.Routes)
	}
}

// Heat given off and power are enough for heat taken up without any state of the refrigerant.
func TestEnergyBalance(t *testing.T) {
	full, s := worked(t)
	var sample readings.Sample
	for _, r := range []readings.Reading{readings.CompressorPower, readings.HeatLossFraction, readings.HeatingCapacity, readings.CoolingCapacity} {
		v, _ := full.Value(r)
		sample.Set(r, v)
	}
	e := evaluator(t, readings.Installation{Refrigerant: refrigerant(t, "R134a"), Layout: cycle.TwoStageFlash}, nil)
	for _, without := range []readings.Reading{readings.CompressorPower, readings.HeatingCapacity, readings.CoolingCapacity} {
		x := sample
		x.Unset(without)
		r := evaluate(t, e, &x)
		for f, want := range map[readings.Figure]float64{
			readings.FigureHeatingCapacity: s.Performance.HeatingCapacity, readings.FigureCoolingCapacity: s.Performance.CoolingCapacity,
			readings.FigureCompressorPower: s.Performance.CompressorPower, readings.FigureCOPHeating: s.Performance.COPHeating,
		} {
			if got := r.Figure(f).Value; !(math.Abs(got/want-1) < 1e-10) {
				t.Errorf("without %s: %s %g, want %g", without, f, got, want)
			}
		}
		if !cautioned(r, readings.StatesUnused) {
			t.Error("nothing is said of a layout of two stages")
		}
	}
}

// One meter that is off by six of its standard uncertainties is named; good ones are not.
func TestDisagreement(t *testing.T) {
	sample, s := worked(t)
	u := map[readings.Reading]readings.Uncertainty{}
	for _, r := range []readings.Reading{readings.MassFlow, readings.HeatingCapacity, readings.CoolingCapacity} {
		u[r] = readings.Uncertainty{Relative: new(0.01)}
	}
	sample.Set(readings.HeatingCapacity, s.Performance.HeatingCapacity*1.06)
	r := evaluate(t, evaluator(t, readings.Installation{Refrigerant: refrigerant(t, "R134a"), Uncertainties: u}, nil), sample)
	if len(r.Disagreements) == 0 {
		t.Fatal("no disagreement")
	}
	for _, d := range r.Disagreements {
		if d.A != readings.HeatingMeter && d.B != readings.HeatingMeter || !(d.Ratio > 4) {
			t.Errorf("%+v", d)
		}
	}
	if found(r, readings.RoutesDisagree) == nil {
		t.Errorf("not among the findings: %v", r.Plausibility)
	}
}

// A shell of known conductance tells the heat loss.
func TestShellHeatLoss(t *testing.T) {
	sample, s := worked(t)
	sample.Unset(readings.HeatLossFraction)
	sample.Set(readings.AmbientTemperature, 293.15)
	sample.Set(readings.ShellTemperature, 333.15)
	e := evaluator(t, readings.Installation{
		Refrigerant: refrigerant(t, "R134a"), ShellConductance: new(0.06 * s.Performance.CompressorPower / 40),
	}, nil)
	agrees(t, "by the shell", evaluate(t, e, sample), s, 1e-10)
}

// The compressor of the given machine is one more route, and says so.
func TestMapOfTheMachine(t *testing.T) {
	m := waterHeatPump(t)
	k := &machine.Condition{
		Source: machine.Stream{Liquid: water(t), InletTemperature: new(285.15), VolumeFlow: new(0.6e-3)},
		Sink:   machine.Stream{Liquid: water(t), InletTemperature: new(308.15), VolumeFlow: new(0.5e-3)},
	}
	p, err := machine.Solve(t.Context(), m, k)
	if err != nil {
		t.Fatal(err)
	}
	expected, err := readings.Expected(m, readings.ExpectOptions{})
	if err != nil {
		t.Fatal(err)
	}
	sample := readAll(p.Cycle)
	sample.Set(readings.Speed, 50)
	e := evaluator(t, readings.Installation{Refrigerant: m.Refrigerant, Machine: expected, SweptVolume: m.Compressor.SweptVolume, Uncertainties: certain(1e-9)}, nil)
	r := evaluate(t, e, sample)
	agrees(t, "by the map", r, p.Cycle, 1e-9) // the machine states its heat loss
	if !cautioned(r, readings.CircularMap) || r.Routes[0].Name != readings.CompressorMap {
		t.Errorf("routes %v, cautions %v", r.Routes, r.Cautions)
	}
	if u := r.Figure(readings.FigureMassFlow); !(math.Abs(u.Standard/u.Value-0.05) < 1e-3) {
		t.Errorf("flow by the map to %.4f, want 0.05", u.Standard/u.Value)
	}
	if got, want := r.Figure(readings.FigureVolumetricEfficiency).Value, p.Cycle.Compressors[0].VolumetricEfficiency; !(math.Abs(got/want-1) < 1e-9) {
		t.Errorf("volumetric efficiency %g, want %g", got, want)
	}
	// With the streams read too, everything is as expected.
	sample.Sink.Liquid, sample.Source.Liquid = water(t), water(t)
	for reading, v := range map[readings.Reading]float64{
		readings.SinkInletTemperature: 308.15, readings.SinkOutletTemperature: p.Condenser.Secondary.OutletTemperature, readings.SinkVolumeFlow: 0.5e-3,
		readings.SourceInletTemperature: 285.15, readings.SourceOutletTemperature: p.Evaporator.Secondary.OutletTemperature, readings.SourceVolumeFlow: 0.6e-3,
		readings.CompressorPower: p.System.CompressorPower,
	} {
		sample.Set(reading, v)
	}
	r = evaluate(t, e, sample)
	if r.Comparison == nil || r.Comparison.Deviates() || len(r.Indications) > 0 || len(r.Comparison.Residuals) != int(readings.FeatureCount) {
		t.Fatalf("%+v, %v", r.Comparison, r.Cautions)
	}
	for _, x := range r.Comparison.Residuals {
		if !(math.Abs(x.Normalised) < 1e-3) {
			t.Errorf("%s: %+v", x.Feature, x)
		}
	}
	// A compressor outside its speeds tells nothing, and the rest goes on.
	sample.Set(readings.Speed, 5000)
	r = evaluate(t, e, sample)
	if !cautioned(r, readings.NoExpectedValues) || !r.Figure(readings.FigureCOPHeating).Known() {
		t.Errorf("cautions %v", r.Cautions)
	}
}
