package readings_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"dewmark/props"
	"dewmark/service/cycle"
	"dewmark/service/readings"
)

// randomCycle makes a request of single stage with everything that a machine may have: lines, drops, an internal exchanger,
// a gas cooler, heat loss.
func randomCycle(rng *rand.Rand, fluid props.Refrigerant) *cycle.Request {
	within := func(low, high float64) *float64 { return new(low + (high-low)*rng.Float64()) }
	critical := fluid.Critical().T
	Te := math.Max(fluid.Limits().TemperatureMin+15, critical*(0.6+0.15*rng.Float64()))
	r := &cycle.Request{
		Refrigerant:  fluid,
		Layout:       cycle.SingleStage,
		Purpose:      cycle.Heating,
		Evaporation:  cycle.Evaporation{Temperature: &Te, Superheat: within(1, 15)},
		Condensation: cycle.Condensation{Temperature: new(Te + (0.97*critical-Te)*(0.3+0.6*rng.Float64())), Subcooling: within(1, 12)},
		Compressor:   cycle.Compressor{IsentropicEfficiency: within(0.5, 0.8), VolumetricEfficiency: within(0.7, 0.95), HeatLossFraction: within(0, 0.15)},
		Size:         &cycle.Size{Heating: within(2e3, 200e3)},
	}
	if rng.IntN(2) == 0 {
		r.SuctionLine = cycle.SuctionLine{Drop: cycle.Drop{TemperatureEquivalent: rng.Float64()}, TemperatureRise: 3 * rng.Float64()}
		r.DischargeLine = cycle.DischargeLine{Drop: cycle.Drop{TemperatureEquivalent: 0.3 * rng.Float64()}, TemperatureDrop: 3 * rng.Float64()}
		r.LiquidLine = cycle.LiquidLine{Drop: cycle.Drop{Pressure: 5e3 * rng.Float64()}}
		r.Evaporator = cycle.Exchanger{Drop: cycle.Drop{TemperatureEquivalent: rng.Float64()}}
		r.Condenser = cycle.Exchanger{Drop: cycle.Drop{TemperatureEquivalent: rng.Float64()}}
	}
	if rng.IntN(3) == 0 {
		r.Layout = cycle.SuctionExchanger
		r.InternalExchanger = &cycle.InternalExchanger{Effectiveness: within(0.1, 0.6)}
	}
	if fluid.Designation() == "R744" {
		r.With = []cycle.Layout{r.Layout}
		r.Layout = cycle.Transcritical
		r.Condensation = cycle.Condensation{}
		r.GasCooler = &cycle.GasCooler{OutletTemperature: within(300, 315), Pressure: within(8.5e6, 12e6)}
	}
	return r
}

// label is one of the places that readings know.
var labels = map[string][2]readings.Reading{
	"1": {readings.SuctionPressure, readings.SuctionTemperature},
	"2": {readings.DischargePressure, readings.DischargeTemperature},
	"3": {readings.CondenserInletPressure, readings.CondenserInletTemperature},
	"4": {readings.LiquidPressure, readings.LiquidTemperature},
	"5": {readings.ExpansionInletPressure, readings.ExpansionInletTemperature},
	"7": {readings.EvaporatorOutletPressure, readings.EvaporatorOutletTemperature},
}

// readAll puts gauges and thermometers at every place of a solved cycle.
func readAll(s *cycle.Solution) *readings.Sample {
	var sample readings.Sample
	for _, at := range s.States {
		if r, ok := labels[at.Label]; ok {
			sample.Set(r[0], at.State.P)
			sample.Set(r[1], at.State.T)
		}
	}
	return &sample
}

// wet reports whether a place that is read is two-phase, so that pressure and temperature do not fix its state, or whether
// gas has condensed altogether before the condenser.
func wet(s *cycle.Solution) bool {
	for _, at := range s.States {
		_, read := labels[at.Label]
		if read && (at.State.Phase == props.TwoPhase || at.Label == "3" && at.State.Phase == props.Liquid) {
			return true
		}
	}
	return false
}

// Noise-free readings of solved cycles return the cycle.
func TestSolvedCyclesComeBack(t *testing.T) {
	cycles := 5000
	if testing.Short() {
		cycles = 300
	}
	const tolerance = 1e-8
	names := []string{"R290", "R134a", "R32", "R600a", "R717", "R1234yf", "R1234ze(E)", "R744", "R410A", "R454B", "R407C", "R454C"}
	rng := rand.New(rand.NewPCG(7, 1))
	sizes := []struct {
		reading readings.Reading
		value   func(*cycle.Solution) float64
	}{
		{readings.CompressorPower, func(s *cycle.Solution) float64 { return s.Performance.CompressorPower }},
		{readings.HeatingCapacity, func(s *cycle.Solution) float64 { return s.Performance.HeatingCapacity }},
		{readings.CoolingCapacity, func(s *cycle.Solution) float64 { return s.Performance.CoolingCapacity }},
		{readings.MassFlow, func(s *cycle.Solution) float64 { return s.Performance.MassFlow }},
	}
	worst := map[string]float64{}
	done, refused := 0, 0
	for done < cycles && refused < 10*cycles {
		name := names[rng.IntN(len(names))]
		request := randomCycle(rng, refrigerant(t, name))
		s, err := cycle.Solve(t.Context(), request)
		if err != nil || wet(s) {
			refused++
			continue
		}
		sample := readAll(s)
		sample.Set(readings.HeatLossFraction, *request.Compressor.HeatLossFraction)
		size := sizes[rng.IntN(len(sizes))]
		sample.Set(size.reading, size.value(s))
		e := evaluator(t, readings.Installation{
			Refrigerant: request.Refrigerant, Layout: request.Layout, With: request.With, Uncertainties: certain(1e-9),
		}, nil)
		r := evaluate(t, e, sample)
		for f, want := range map[readings.Figure]float64{
			readings.FigureMassFlow:             s.Performance.MassFlow,
			readings.FigureHeatingCapacity:      s.Performance.HeatingCapacity,
			readings.FigureCoolingCapacity:      s.Performance.CoolingCapacity,
			readings.FigureCompressorPower:      s.Performance.CompressorPower,
			readings.FigureCOPHeating:           s.Performance.COPHeating,
			readings.FigureCOPCooling:           s.Performance.COPCooling,
			readings.FigureIsentropicEfficiency: s.Performance.IsentropicEfficiency,
		} {
			off := math.Abs(r.Figure(f).Value/want - 1)
			if !(off <= tolerance) {
				t.Errorf("%s %s, sized by %s: %s %.12g, the cycle has %.12g (off by %.1e)", name, request.Layout, size.reading, f, r.Figure(f).Value, want, off)
			}
			worst[f.String()] = math.Max(worst[f.String()], off)
		}
		done++
		if t.Failed() && done > 50 {
			break
		}
	}
	t.Logf("%d cycles, %d requests refused, worst relative errors %v", done, refused, worst)
	if done < cycles {
		t.Errorf("only %d cycles", done)
	}
}
