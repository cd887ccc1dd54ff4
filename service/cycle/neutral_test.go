package cycle_test

import (
	"math"
	"testing"

	"dewmark/props"
	"dewmark/service/cycle"
)

// neutralTolerance is how closely a layout whose extra component does nothing agrees with the layout without it.
const neutralTolerance = 1e-10

// TestNeutralisedComponents: a component that does nothing changes nothing.
func TestNeutralisedComponents(t *testing.T) {
	lossless := func(r *cycle.Request) { // two steps of compression are one only without losses
		r.Compressor.IsentropicEfficiency = new(1.0)
	}
	saturated := func(r *cycle.Request) {
		r.Evaporation.Superheat = new(0.0)
	}
	co2 := func(r *cycle.Request) {
		r.Refrigerant = refrigerant(t, "R744", props.IIR)
		r.Layout, r.Condensation = cycle.Transcritical, cycle.Condensation{}
		r.GasCooler = &cycle.GasCooler{OutletTemperature: new(308.15), Pressure: new(95e5)}
	}
	for _, k := range []struct {
		name   string
		common func(r *cycle.Request) // both
		change func(r *cycle.Request) // the layout with the idle component
	}{
		{"exchanger of effectiveness 0", nil, func(r *cycle.Request) {
			r.Layout, r.InternalExchanger = cycle.SuctionExchanger, &cycle.InternalExchanger{Effectiveness: new(0.0)}
		}},
		{"transcritical exchanger of effectiveness 0", co2, func(r *cycle.Request) {
			r.With, r.InternalExchanger = []cycle.Layout{cycle.SuctionExchanger}, &cycle.InternalExchanger{Effectiveness: new(0.0)}
		}},
		{"transcritical with single_stage", co2, func(r *cycle.Request) { r.With = []cycle.Layout{cycle.SingleStage} }},
		{"no injection from the subcooler, by ratio", lossless, func(r *cycle.Request) {
			r.Layout, r.Economiser = cycle.EconomisedSubcooler, &cycle.Economiser{InjectionRatio: new(0.0)}
		}},
		{"no injection from the subcooler, by approach", lossless, func(r *cycle.Request) {
			r.Layout, r.Economiser = cycle.EconomisedSubcooler, &cycle.Economiser{Approach: new(60.0)}
		}},
		{"first step of no pressure", nil, func(r *cycle.Request) {
			r.Layout, r.Economiser = cycle.EconomisedSubcooler, &cycle.Economiser{InjectionRatio: new(0.0)}
			r.Intermediate = &cycle.Intermediate{Temperature: r.Evaporation.Temperature}
		}},
		{"no flash gas in the economiser's tank", lossless, func(r *cycle.Request) {
			r.Layout, r.Intermediate = cycle.EconomisedFlash, &cycle.Intermediate{Temperature: r.Condensation.Temperature}
		}},
		{"no flash gas between two stages", lossless, func(r *cycle.Request) {
			r.Layout, r.Intermediate = cycle.TwoStageFlash, &cycle.Intermediate{Temperature: r.Condensation.Temperature}
			r.Intercooler = &cycle.Intercooler{Kind: cycle.FlashGasRemoval}
		}},
		{"intercooler warmer than the gas", lossless, func(r *cycle.Request) {
			r.Layout, r.Intercooler = cycle.TwoStageIntercooled, &cycle.Intercooler{Kind: cycle.ExternalIntercooler, Temperature: new(400.0)}
		}},
		{"low stage of no pressure", nil, func(r *cycle.Request) {
			r.Layout, r.Intercooler = cycle.TwoStageIntercooled, &cycle.Intercooler{Kind: cycle.ExternalIntercooler, Temperature: new(400.0)}
			r.Intermediate = &cycle.Intermediate{Temperature: r.Evaporation.Temperature}
		}},
		{"no flash gas in the receiver", nil, func(r *cycle.Request) {
			r.Layout, r.Intermediate = cycle.ParallelCompression, &cycle.Intermediate{Temperature: r.Condensation.Temperature}
		}},
		{"ejector without any speed", func(r *cycle.Request) { co2(r); saturated(r) }, func(r *cycle.Request) {
			r.Layout = cycle.Ejector
			r.Ejector = &cycle.EjectorGeometry{MotiveEfficiency: new(0.0), SuctionEfficiency: new(0.0), DiffuserEfficiency: new(0.0), SuctionPressureDrop: new(0.0)}
		}},
		{"ejector without any speed, with an exchanger", func(r *cycle.Request) {
			co2(r)
			saturated(r)
			r.With = []cycle.Layout{cycle.SuctionExchanger}
			r.InternalExchanger = &cycle.InternalExchanger{Effectiveness: new(0.6)}
		}, func(r *cycle.Request) {
			r.With = []cycle.Layout{cycle.SuctionExchanger, cycle.Ejector}
			r.Ejector = &cycle.EjectorGeometry{MotiveEfficiency: new(0.0), SuctionEfficiency: new(0.0), DiffuserEfficiency: new(0.0), SuctionPressureDrop: new(0.0)}
		}},
	} {
		t.Run(k.name, func(t *testing.T) {
			r := heatPump(t)
			if k.common != nil {
				k.common(r)
			}
			want := solve(t, r)
			k.change(r)
			got := solve(t, r)
			for what, pair := range map[string][2]float64{
				"heating COP":           {got.Performance.COPHeating, want.Performance.COPHeating},
				"cooling COP":           {got.Performance.COPCooling, want.Performance.COPCooling},
				"mass flow":             {got.Performance.MassFlow, want.Performance.MassFlow},
				"discharge temperature": {got.Performance.DischargeTemperature, want.Performance.DischargeTemperature},
				"swept volume flow":     {got.Performance.SweptVolumeFlow, want.Performance.SweptVolumeFlow},
				"exergy destruction":    {got.Closure.ExergyDestruction, want.Closure.ExergyDestruction},
			} {
				if !near(pair[0], pair[1], neutralTolerance, 0) {
					t.Errorf("%s is %.13g, without the component %.13g (relative %.1e)", what, pair[0], pair[1], pair[0]/pair[1]-1)
				}
			}
			checkAccounts(t, got)
		})
	}
}

// TestCascadeIsTwoCycles: a cascade is two single stages, and its COP is theirs combined.
func TestCascadeIsTwoCycles(t *testing.T) {
	r := heatPump(t)
	below, above := refrigerant(t, "R744", props.IIR), refrigerant(t, "R717", props.IIR)
	r.Layout, r.Purpose, r.Refrigerant = cycle.Cascade, cycle.Cooling, below
	r.Evaporation = cycle.Evaporation{Temperature: new(233.15), Superheat: new(4.0)}
	r.Intermediate = &cycle.Intermediate{Temperature: new(265.15)}
	r.Cascade = &cycle.CascadeCircuit{Upper: []cycle.Refrigerant{above}, Approach: new(4.0), Superheat: new(2.0), Subcooling: new(1.0)}
	r.SecondCompressor = &cycle.Compressor{IsentropicEfficiency: new(0.75)}
	r.SourceTemperature, r.AmbientTemperature = new(243.15), new(298.15)
	s := solve(t, r)
	checkAccounts(t, s)

	lower := heatPump(t)
	lower.Refrigerant, lower.Evaporation, lower.SourceTemperature = below, r.Evaporation, nil
	lower.Condensation = cycle.Condensation{Temperature: new(265.15), Subcooling: new(1.0)}
	lower.SinkTemperature = nil
	upper := heatPump(t)
	upper.Refrigerant, upper.Compressor, upper.SourceTemperature = above, *r.SecondCompressor, nil
	upper.Evaporation = cycle.Evaporation{Temperature: new(261.15), Superheat: new(2.0)}
	low, high := solve(t, lower).Performance.COPCooling, solve(t, upper).Performance.COPCooling
	// Gosney 1982: 1/COP = (1 + 1/COP_low)(1 + 1/COP_high) - 1
	want := 1 / ((1+1/low)*(1+1/high) - 1)
	if got := s.Performance.COPCooling; !near(got, want, 1e-11, 0) {
		t.Errorf("cooling COP %.12g, combined from both circuits %.12g", got, want)
	}
}

// TestInternalExchangerLimit: an effectiveness of 1 brings one side to the other's inlet temperature, and that side is the one
// with the smaller capacity. Near the critical pressure that is the liquid.
func TestInternalExchangerLimit(t *testing.T) {
	r := heatPump(t)
	r.Layout, r.InternalExchanger = cycle.SuctionExchanger, &cycle.InternalExchanger{Effectiveness: new(1.0)}
	s := solve(t, r)
	if got, want := at(t, s, "1").T, at(t, s, "4").T; !near(got, want, 0, 1e-7) || s.Figures.CapacityLimitedBy != "vapour" {
		t.Errorf("suction at %g K, liquid at %g K, limited by the %s", got, want, s.Figures.CapacityLimitedBy)
	}
	// Vapour so close to its critical point has the larger heat capacity.
	r.Refrigerant = refrigerant(t, "R744", props.IIR)
	r.Evaporation = cycle.Evaporation{Temperature: new(303.0), Superheat: new(0.0)}
	r.Layout, r.With, r.Condensation = cycle.Transcritical, []cycle.Layout{cycle.SuctionExchanger}, cycle.Condensation{}
	r.GasCooler = &cycle.GasCooler{OutletTemperature: new(306.0), Pressure: new(200e5)}
	r.SourceTemperature, r.SinkTemperature, r.AmbientTemperature = new(305.0), new(305.0), new(305.0)
	s = solve(t, r)
	if got, want := at(t, s, "5").T, at(t, s, "7").T; !near(got, want, 0, 1e-7) || s.Figures.CapacityLimitedBy != "liquid" {
		t.Errorf("liquid at %g K, vapour at %g K, limited by the %s", got, want, s.Figures.CapacityLimitedBy)
	}
	checkAccounts(t, s)
}

// TestExchangerHelpsSomeRefrigerants: the sign of the change of COP depends on the refrigerant: it helps R134a, R1234yf,
// R290 and R600a and hurts R717 (Domanski, Didion and Doyle 1994, International Journal of Refrigeration 17, from memory).
func TestExchangerHelpsSomeRefrigerants(t *testing.T) {
	for name, helps := range map[string]bool{"R134a": true, "R1234yf": true, "R290": true, "R600a": true, "R717": false} {
		r := heatPump(t)
		r.Refrigerant = refrigerant(t, name, props.IIR)
		without := solve(t, r).Performance.COPCooling
		r.Layout, r.InternalExchanger = cycle.SuctionExchanger, &cycle.InternalExchanger{Effectiveness: new(0.5)}
		if with := solve(t, r).Performance.COPCooling; (with > without) != helps || math.Abs(with/without-1) > 0.1 {
			t.Errorf("%s: cooling COP %g with an exchanger, %g without", name, with, without)
		}
	}
}
