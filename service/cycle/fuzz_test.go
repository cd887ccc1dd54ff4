package cycle_test

import (
	"errors"
	"math"
	"testing"

	"dewmark/props"
	"dewmark/service/cycle"
)

// FuzzSolve: whatever the numbers, there is a refusal with words or a solution without NaN whose accounts close.
func FuzzSolve(f *testing.F) {
	for layout := range byte(12) {
		for with := range byte(4) {
			f.Add(layout, with, layout, 263.15, 5.0, 313.15, 3.0, 0.7, 0.05, 0.6, 5e5, 1000.0, 273.15, 308.15)
			f.Add(layout, with, byte(30), 270.0, 0.0, 308.0, 0.0, 1.0, 0.0, 1.0, 95e5, 0.0, 280.0, 300.0)
		}
	}
	f.Add(byte(1), byte(0), byte(3), math.NaN(), math.Inf(1), 1e308, -1.0, 0.0, 1.0, 2.0, -5.0, 1e300, 0.0, -1.0)
	c, err := catalogue()
	if err != nil {
		f.Fatal(err)
	}
	names := c.PureDesignations()
	f.Fuzz(func(t *testing.T, layout, with, name byte, te, superheat, tk, subcooling, efficiency, loss, share, p, drop, source, sink float64) {
		r := &cycle.Request{
			Refrigerant: refrigerant(t, names[int(name)%len(names)], props.DefaultDatum),
			Layout:      cycle.Layout(layout), Purpose: cycle.Purpose(1 + with%2),
			Evaporation:       cycle.Evaporation{Temperature: &te, Superheat: &superheat, Reference: cycle.Reference(with % 2)},
			Compressor:        cycle.Compressor{IsentropicEfficiency: &efficiency, HeatLossFraction: &loss},
			SourceTemperature: &source, SinkTemperature: &sink,
		}
		r.SuctionLine.Pressure, r.DischargeLine.TemperatureEquivalent, r.LiquidLine.TemperatureChange = drop, loss, -loss
		if r.Layout == cycle.Transcritical || r.Layout == cycle.Ejector {
			r.GasCooler = &cycle.GasCooler{OutletTemperature: &tk, Pressure: &p}
			if r.Layout == cycle.Transcritical && with > 0 {
				r.With = []cycle.Layout{cycle.Layout(with % 11)}
			}
		} else {
			r.Condensation = cycle.Condensation{Temperature: &tk, Subcooling: &subcooling, Reference: cycle.Reference(with / 2 % 2)}
		}
		switch with % 3 {
		case 0:
			r.Intermediate = &cycle.Intermediate{Pressure: new(math.Sqrt(math.Abs(p)) * 400)}
		case 1:
			r.Intermediate = &cycle.Intermediate{Optimise: cycle.OptimiseCOP}
		}
		if r.Layout == cycle.SingleStage || r.Layout == cycle.SuctionExchanger || r.Layout == cycle.Transcritical || r.Layout == cycle.Ejector {
			r.Intermediate = nil
		}
		if r.Layout == cycle.SuctionExchanger || len(r.With) > 0 && r.With[0] == cycle.SuctionExchanger {
			r.InternalExchanger = &cycle.InternalExchanger{Effectiveness: &share}
		}
		if r.Layout == cycle.Cascade {
			r.Cascade = &cycle.CascadeCircuit{Upper: []cycle.Refrigerant{refrigerant(t, names[int(with)%len(names)], props.DefaultDatum)}, Approach: &share}
		}
		if r.Layout == cycle.Ejector {
			r.Ejector = &cycle.EjectorGeometry{MotiveEfficiency: &share, SuctionPressureDrop: &drop}
		}
		s, err := cycle.Solve(t.Context(), r)
		if e, ok := errors.AsType[*cycle.RefusedError](err); ok {
			for _, x := range e.Refusals {
				if x.Message.String() == "" || x.Code == "" {
					t.Fatalf("a refusal without words: %+v", x)
				}
			}
			return
		}
		if err != nil {
			t.Fatal(err)
		}
		q := s.Performance
		for _, v := range []float64{
			q.MassFlow, q.HeatingCapacity, q.CoolingCapacity, q.CompressorPower, q.COPHeating, q.COPCooling, q.PressureRatio,
			q.DischargeTemperature, q.SuctionVolumeFlow, q.SweptVolumeFlow, q.VolumetricHeatingCapacity, q.VolumetricCoolingCapacity,
		} {
			if !(v > 0) || math.IsInf(v, 0) {
				t.Fatalf("%+v", q)
			}
		}
		checkClosed(t, s)
	})
}
