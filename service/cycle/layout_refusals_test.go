package cycle_test

import (
	"fmt"
	"slices"
	"strings"
	"testing"

	"dewmark/props"
	"dewmark/service/cycle"
)

// transcriticalHeatPump is a complete request for R744: 0 °C, 95 bar, 35 °C behind the gas cooler.
func transcriticalHeatPump(t testing.TB, with ...cycle.Layout) *cycle.Request {
	r := heatPump(t)
	r.Refrigerant = refrigerant(t, "R744", props.IIR)
	r.Layout, r.With, r.Condensation = cycle.Transcritical, with, cycle.Condensation{}
	r.Evaporation.Temperature, r.SourceTemperature = new(273.15), new(280.0)
	r.GasCooler = &cycle.GasCooler{OutletTemperature: new(308.15), Pressure: new(95e5)}
	r.SinkTemperature = new(300.0)
	return r
}

func TestLayoutRefusals(t *testing.T) {
	base := map[string]func(t *testing.T) *cycle.Request{
		"single stage":  func(t *testing.T) *cycle.Request { return heatPump(t) },
		"transcritical": func(t *testing.T) *cycle.Request { return transcriticalHeatPump(t) },
		"two stages": func(t *testing.T) *cycle.Request {
			r := heatPump(t)
			r.Layout = cycle.TwoStageFlash
			return r
		},
		"cascade": func(t *testing.T) *cycle.Request {
			r := heatPump(t)
			r.Layout = cycle.Cascade
			r.Refrigerant, r.Evaporation.Temperature, r.SourceTemperature = refrigerant(t, "R744", props.IIR), new(233.15), new(245.0)
			r.Cascade = &cycle.CascadeCircuit{Upper: []cycle.Refrigerant{refrigerant(t, "R717", props.IIR)}, Approach: new(5.0)}
			return r
		},
	}
	propane := func(t *testing.T) cycle.Refrigerant { return refrigerant(t, "R290", props.IIR) }
	for _, k := range []struct {
		base string
		refusal
	}{
		{"single stage", refusal{"ejector without a transcritical high side", func(_ *testing.T, r *cycle.Request) { r.Layout = cycle.Ejector }, cycle.Missing, "gas_cooler"}},
		{"single stage", refusal{"ejector with a condenser", func(_ *testing.T, r *cycle.Request) { r.Layout = cycle.Ejector }, cycle.Surplus, "condensation"}},
		{"single stage", refusal{"exchanger without effectiveness", func(_ *testing.T, r *cycle.Request) { r.Layout = cycle.SuctionExchanger }, cycle.Missing, "internal_exchanger.effectiveness"}},
		{"single stage", refusal{"effectiveness above 1", func(_ *testing.T, r *cycle.Request) {
			r.Layout, r.InternalExchanger = cycle.SuctionExchanger, &cycle.InternalExchanger{Effectiveness: new(1.01)}
		}, cycle.OutOfBounds, "internal_exchanger.effectiveness"}},
		{"single stage", refusal{"parallel compression without a receiver's pressure", func(_ *testing.T, r *cycle.Request) { r.Layout = cycle.ParallelCompression }, cycle.Missing, "intermediate"}},
		{"single stage", refusal{"cascade without an upper circuit", func(_ *testing.T, r *cycle.Request) { r.Layout = cycle.Cascade }, cycle.Missing, "cascade"}},

		{"transcritical", refusal{"no gas cooler", func(_ *testing.T, r *cycle.Request) { r.GasCooler = nil }, cycle.Missing, "gas_cooler"}},
		{"transcritical", refusal{"empty gas cooler", func(_ *testing.T, r *cycle.Request) { r.GasCooler = &cycle.GasCooler{} }, cycle.Missing, "gas_cooler"}},
		{"transcritical", refusal{"pressure and optimum", func(_ *testing.T, r *cycle.Request) { r.GasCooler.Optimise = cycle.OptimiseCOP }, cycle.Surplus, "gas_cooler"}},
		{"transcritical", refusal{"limit without a search", func(_ *testing.T, r *cycle.Request) { r.GasCooler.PressureMax = new(1e7) }, cycle.Surplus, "gas_cooler.pressure_max"}},
		{"transcritical", refusal{"no room for a search", func(_ *testing.T, r *cycle.Request) {
			r.GasCooler.Pressure, r.GasCooler.Optimise, r.GasCooler.PressureMax = nil, cycle.OptimiseCOP, new(7e6)
		}, cycle.PressuresOutOfOrder, "gas_cooler.optimise"}},
		{"transcritical", refusal{"approach without a sink", func(_ *testing.T, r *cycle.Request) {
			r.GasCooler.OutletTemperature, r.GasCooler.Approach, r.SinkTemperature = nil, new(3.0), nil
		}, cycle.Missing, "sink_temperature"}},
		{"transcritical", refusal{"pressure below critical", func(_ *testing.T, r *cycle.Request) { r.GasCooler.Pressure = new(6e6) }, cycle.BelowCritical, "gas_cooler.pressure"}},
		{"transcritical", refusal{"pressure beyond validity", func(_ *testing.T, r *cycle.Request) { r.GasCooler.Pressure = new(1e9) }, cycle.NoState, "gas_cooler.pressure"}},
		{"transcritical", refusal{"outlet beyond validity", func(_ *testing.T, r *cycle.Request) { r.GasCooler.OutletTemperature = new(3000.0) }, cycle.NoState, "gas_cooler.outlet_temperature"}},
		{"transcritical", refusal{"outlet too hot for any cooling", func(_ *testing.T, r *cycle.Request) { r.GasCooler.OutletTemperature = new(370.0) }, cycle.NoSolution, "gas_cooler.pressure"}},
		{"transcritical", refusal{"correlation for another refrigerant", func(t *testing.T, r *cycle.Request) {
			r.Refrigerant = refrigerant(t, "R170", props.IIR)
			r.GasCooler.Pressure, r.GasCooler.Correlation = nil, cycle.Liao
		}, cycle.NotAllowed, "gas_cooler.correlation"}},
		{"transcritical", refusal{"unknown correlation", func(_ *testing.T, r *cycle.Request) {
			r.GasCooler.Pressure, r.GasCooler.Correlation = nil, 99
		}, cycle.NotAllowed, "gas_cooler.correlation"}},
		{"transcritical", refusal{"optimum at a measured discharge temperature", func(_ *testing.T, r *cycle.Request) {
			r.GasCooler.Pressure, r.GasCooler.Optimise = nil, cycle.OptimiseCOP
			r.Compressor.IsentropicEfficiency, r.Compressor.DischargeTemperature = nil, new(370.0)
		}, cycle.Surplus, "gas_cooler.optimise"}},
		{"transcritical", refusal{"with a cascade", func(_ *testing.T, r *cycle.Request) { r.With = []cycle.Layout{cycle.Cascade} }, cycle.NotAllowed, "with.0"}},
		{"transcritical", refusal{"with itself", func(_ *testing.T, r *cycle.Request) { r.With = []cycle.Layout{cycle.Transcritical} }, cycle.NotAllowed, "with.0"}},
		{"transcritical", refusal{"with one layout twice", func(_ *testing.T, r *cycle.Request) {
			r.With = []cycle.Layout{cycle.SuctionExchanger, cycle.SuctionExchanger}
		}, cycle.Surplus, "with.1"}},
		{"transcritical", refusal{"ejector with parallel compression", func(_ *testing.T, r *cycle.Request) {
			r.With = []cycle.Layout{cycle.Ejector, cycle.ParallelCompression}
		}, cycle.Surplus, "with.1"}},
		{"transcritical", refusal{"exchanger with two stages", func(_ *testing.T, r *cycle.Request) {
			r.With = []cycle.Layout{cycle.SuctionExchanger, cycle.TwoStageFlash}
			r.InternalExchanger = &cycle.InternalExchanger{Effectiveness: new(0.5)}
		}, cycle.Surplus, "with"}},
		{"transcritical", refusal{"ejector that cannot lift", func(_ *testing.T, r *cycle.Request) {
			r.Layout = cycle.Ejector
			r.Ejector = &cycle.EjectorGeometry{MotiveEfficiency: new(0.01), SuctionPressureDrop: new(1e5)}
		}, cycle.NoSolution, "ejector"}},
		{"transcritical", refusal{"ejector that draws no gas", func(_ *testing.T, r *cycle.Request) {
			r.Layout = cycle.Ejector
			r.Ejector = &cycle.EjectorGeometry{SuctionPressureDrop: new(1e8)}
		}, cycle.OutOfBounds, "ejector.suction_pressure_drop"}},

		{"two stages", refusal{"two ways of the pressure", func(_ *testing.T, r *cycle.Request) {
			r.Intermediate = &cycle.Intermediate{Pressure: new(7e5), Temperature: new(290.0)}
		}, cycle.Surplus, "intermediate"}},
		{"two stages", refusal{"intermediate below evaporation", func(_ *testing.T, r *cycle.Request) {
			r.Intermediate = &cycle.Intermediate{Pressure: new(1e5)}
		}, cycle.PressuresOutOfOrder, "intermediate.pressure"}},
		{"two stages", refusal{"intermediate above condensation", func(_ *testing.T, r *cycle.Request) {
			r.Intermediate = &cycle.Intermediate{Temperature: new(330.0)}
		}, cycle.PressuresOutOfOrder, "intermediate.temperature"}},
		{"two stages", refusal{"intermediate without boiling", func(_ *testing.T, r *cycle.Request) {
			r.Intermediate = &cycle.Intermediate{Temperature: new(400.0)}
		}, cycle.NoState, "intermediate.temperature"}},
		{"two stages", refusal{"external intercooler in a flash tank", func(_ *testing.T, r *cycle.Request) {
			r.Intercooler = &cycle.Intercooler{Kind: cycle.ExternalIntercooler}
		}, cycle.NotAllowed, "intercooler.kind"}},
		{"two stages", refusal{"approach of an open intercooler", func(_ *testing.T, r *cycle.Request) {
			r.Intercooler = &cycle.Intercooler{Approach: new(5.0)}
		}, cycle.Surplus, "intercooler.approach"}},
		{"two stages", refusal{"water colder than the intermediate dew point", func(_ *testing.T, r *cycle.Request) {
			r.Layout = cycle.TwoStageIntercooled
			r.Intercooler = &cycle.Intercooler{Kind: cycle.ExternalIntercooler, Temperature: new(270.0)}
		}, cycle.NoSolution, "intercooler.temperature"}},
		{"two stages", refusal{"intercooler without water", func(_ *testing.T, r *cycle.Request) {
			r.Layout, r.SinkTemperature = cycle.TwoStageIntercooled, nil
			r.Intercooler = &cycle.Intercooler{Kind: cycle.ExternalIntercooler}
		}, cycle.Missing, "intercooler.temperature"}},
		{"two stages", refusal{"approach and ratio", func(_ *testing.T, r *cycle.Request) {
			r.Layout, r.Economiser = cycle.EconomisedSubcooler, &cycle.Economiser{Approach: new(5.0), InjectionRatio: new(0.1)}
		}, cycle.Surplus, "economiser.injection_ratio"}},
		{"two stages", refusal{"injection beyond the liquid's heat", func(_ *testing.T, r *cycle.Request) {
			r.Layout, r.Economiser = cycle.EconomisedSubcooler, &cycle.Economiser{InjectionRatio: new(0.6)}
		}, cycle.SecondLaw, "economiser"}},
		{"two stages", refusal{"second discharge temperature left out", func(_ *testing.T, r *cycle.Request) {
			r.Compressor.IsentropicEfficiency, r.Compressor.DischargeTemperature = nil, new(310.0)
		}, cycle.Missing, "second_compressor"}},
		{"two stages", refusal{"second efficiency above 1", func(_ *testing.T, r *cycle.Request) {
			r.SecondCompressor = &cycle.Compressor{IsentropicEfficiency: new(1.5)}
		}, cycle.OutOfBounds, "second_compressor.isentropic_efficiency"}},

		{"cascade", refusal{"three refrigerants", func(t *testing.T, r *cycle.Request) {
			r.Cascade.Upper = append(r.Cascade.Upper, propane(t))
		}, cycle.NotAllowed, "cascade.upper"}},
		{"cascade", refusal{"one refrigerant", func(_ *testing.T, r *cycle.Request) { r.Cascade.Upper = nil }, cycle.NotAllowed, "cascade.upper"}},
		{"cascade", refusal{"gas cooler", func(_ *testing.T, r *cycle.Request) { r.GasCooler = &cycle.GasCooler{} }, cycle.Surplus, "gas_cooler"}},
		{"cascade", refusal{"lower circuit above its critical point", func(_ *testing.T, r *cycle.Request) {
			r.Intermediate = &cycle.Intermediate{Pressure: new(8e6)}
		}, cycle.AboveCritical, "intermediate.pressure"}},
		{"cascade", refusal{"lower circuit that cannot condense", func(_ *testing.T, r *cycle.Request) {
			r.Intermediate = &cycle.Intermediate{Temperature: new(230.0)}
		}, cycle.PressuresOutOfOrder, "intermediate.temperature"}},
		{"cascade", refusal{"upper circuit above its condensation", func(t *testing.T, r *cycle.Request) {
			r.Refrigerant = propane(t)
			r.Intermediate = &cycle.Intermediate{Temperature: new(330.0)}
		}, cycle.PressuresOutOfOrder, "intermediate.temperature"}},
		{"cascade", refusal{"evaporation too warm for two circuits", func(t *testing.T, r *cycle.Request) {
			r.Refrigerant = propane(t)
			r.Evaporation.Temperature = new(340.0)
		}, cycle.PressuresOutOfOrder, "evaporation.temperature"}},
	} {
		r := base[k.base](t)
		k.change(t, r)
		checkRefusal(t, k.refusal, r)
	}
	for name, request := range base { // what the rows above change for the worse is right as it is
		if _, err := cycle.Solve(t.Context(), request(t)); err != nil {
			t.Errorf("%s: %v", name, err)
		}
	}
}

func TestLayoutCautions(t *testing.T) {
	for _, k := range []struct {
		name    string
		request func(t *testing.T) *cycle.Request
		code    cycle.CautionCode
		field   string
	}{
		{"no intermediate pressure", func(t *testing.T) *cycle.Request {
			r := heatPump(t)
			r.Layout = cycle.TwoStageFlash
			return r
		}, cycle.Assumed, "intermediate"},
		{"no approach", func(t *testing.T) *cycle.Request {
			r := heatPump(t)
			r.Layout = cycle.EconomisedSubcooler
			return r
		}, cycle.Assumed, "economiser.approach"},
		{"no ejector efficiency", func(t *testing.T) *cycle.Request {
			return transcriticalHeatPump(t, cycle.Ejector)
		}, cycle.Assumed, "ejector.motive_efficiency"},
		{"ejector better than real ones", func(t *testing.T) *cycle.Request {
			return transcriticalHeatPump(t, cycle.Ejector)
		}, cycle.OptimisticEjector, "ejector"},
		{"correlation outside its range", func(t *testing.T) *cycle.Request {
			r := transcriticalHeatPump(t)
			r.Evaporation.Temperature, r.SourceTemperature = new(253.15), new(262.0)
			r.GasCooler.Pressure, r.GasCooler.Correlation = nil, cycle.Liao
			return r
		}, cycle.CorrelationRange, "gas_cooler.correlation"},
		{"optimum at the end of the search", func(t *testing.T) *cycle.Request {
			r := transcriticalHeatPump(t)
			r.GasCooler.Pressure, r.GasCooler.Optimise, r.GasCooler.PressureMax = nil, cycle.OptimiseCOP, new(80e5)
			return r
		}, cycle.OptimumAtLimit, "gas_cooler.optimise"},
		{"optimum at an upper end close to the critical pressure", func(t *testing.T) *cycle.Request {
			r := transcriticalHeatPump(t)
			r.GasCooler.Pressure, r.GasCooler.Optimise, r.GasCooler.PressureMax = nil, cycle.OptimiseCOP, new(74.4e5)
			return r
		}, cycle.OptimumAtLimit, "gas_cooler.optimise"},
		{"optimum at the critical pressure", func(t *testing.T) *cycle.Request {
			r := transcriticalHeatPump(t)
			r.SinkTemperature = new(283.15)
			r.GasCooler.OutletTemperature, r.GasCooler.Pressure, r.GasCooler.Optimise = new(285.15), nil, cycle.OptimiseCOP
			return r
		}, cycle.OptimumAtLimit, "gas_cooler.optimise"},
	} {
		s, err := cycle.Solve(t.Context(), k.request(t))
		if err != nil {
			t.Errorf("%s: %v", k.name, err)
			continue
		}
		if !slices.ContainsFunc(s.Cautions, func(c cycle.Caution) bool { return c.Code == k.code && c.Field == k.field }) {
			t.Errorf("%s: got %v, want %s of %q", k.name, s.Cautions, k.code, k.field)
		}
		if k.code == cycle.OptimumAtLimit {
			if points := strings.Contains(fmt.Sprint(s.Cautions), "a condenser below it may serve better"); points != (k.name == "optimum at the critical pressure") {
				t.Errorf("%s: points to a condenser: %t", k.name, points)
			}
		}
	}
}

// TestTotalsOfTwoCompressors: power is the sum, the hottest discharge counts, and a shared swept volume counts once.
func TestTotalsOfTwoCompressors(t *testing.T) {
	for _, layout := range []cycle.Layout{cycle.EconomisedFlash, cycle.EconomisedSubcooler, cycle.TwoStageFlash, cycle.TwoStageIntercooled} {
		r := heatPump(t)
		r.Layout = layout
		r.SecondCompressor = &cycle.Compressor{IsentropicEfficiency: new(0.6), VolumetricEfficiency: new(0.8)}
		s := solve(t, r)
		if len(s.Compressors) != 2 {
			t.Fatalf("%s: %d compressors", layout, len(s.Compressors))
		}
		first, last := s.Compressors[0], s.Compressors[1]
		if got := first.Power + last.Power; !near(got, s.Performance.CompressorPower, 1e-12, 0) {
			t.Errorf("%s: powers add up to %g W of %g W", layout, got, s.Performance.CompressorPower)
		}
		if got := max(first.DischargeTemperature, last.DischargeTemperature); got != s.Performance.DischargeTemperature {
			t.Errorf("%s: discharge temperature %g K", layout, s.Performance.DischargeTemperature)
		}
		if !near(last.IsentropicEfficiency, 0.6, 1e-12, 0) {
			t.Errorf("%s: second efficiency %g", layout, last.IsentropicEfficiency)
		}
		shared := layout == cycle.EconomisedFlash || layout == cycle.EconomisedSubcooler
		if (last.SweptVolumeFlow != last.SweptVolumeFlow) != shared {
			t.Errorf("%s: swept volume flow of the second is %g", layout, last.SweptVolumeFlow)
		}
		if got := first.PressureRatio * last.PressureRatio; !near(got, s.Performance.PressureRatio, 1e-12, 0) {
			t.Errorf("%s: pressure ratio %g of %g", layout, got, s.Performance.PressureRatio)
		}
	}
}
