package machine

import (
	"math"
	"testing"

	"dewmark/props/secondary"
	"dewmark/service/cycle"
)

// workedCondenser is a worked example made for the handbook chapter on moving boundaries with the equation of state of
// Tillner-Roth and Baehr: R134a, 0.1 kg/s, evaporation -10 °C, condensation 45 °C, 5 K superheat and subcooling, isentropic
// efficiency 0.70, water from 30 to 38 °C in counterflow.
func workedCondenser(t *testing.T) (in, out *cycle.StateAt, s *side) {
	t.Helper()
	r := refrigerant(t, "R134a")
	solution, err := cycle.Solve(t.Context(), &cycle.Request{
		Refrigerant: r, Layout: cycle.SingleStage, Purpose: cycle.Heating,
		Evaporation:  cycle.Evaporation{Temperature: new(263.15), Superheat: new(5.0)},
		Condensation: cycle.Condensation{Temperature: new(318.15), Subcooling: new(5.0)},
		Compressor:   cycle.Compressor{IsentropicEfficiency: new(0.70), VolumetricEfficiency: new(1.0), HeatLossFraction: new(0.0)},
		Size:         &cycle.Size{MassFlow: new(0.1)},
	})
	if err != nil {
		t.Fatal(err)
	}
	// The example takes one heat capacity for the water, so that its temperature is straight over the heat.
	even, err := secondary.NewTable("even water", []secondary.Row{{T: 283.15, Density: 1000, HeatCapacity: 4180}, {T: 333.15, Density: 1000, HeatCapacity: 4180}}, nan)
	if err != nil {
		t.Fatal(err)
	}
	s = &side{sign: 1, liquid: even, inlet: 303.15, outlet: 311.15, change: nan, mass: nan, volume: nan}
	return stateAt(solution, "3"), stateAt(solution, "4"), s
}

// plainExchange is an exchanger by UA without any corrections.
func plainExchange(a Arrangement, ua float64) exchange {
	return exchange{
		field: "machine.condenser", arrangement: a, ua: ua, pinch: nan, approach: nan, approachOf: LeavingApproach, slices: defaultSlices,
		superheat: 1, desuperheat: 1, subcooling: 1, share: 0.5, reference: nan,
	}
}

func TestWorkedZones(t *testing.T) {
	in, out, s := workedCondenser(t)
	x := plainExchange(Counterflow, 1000)
	w, err := x.workAt(refrigerant(t, "R134a"), in, out, s, nan, nil)
	if err != nil {
		t.Fatal(err)
	}
	r := w.result(levels{dew: 318.15})
	for _, c := range []struct {
		name            string
		got, want, half float64
	}{
		{"duty, W", r.Duty, 19425.0, 0.05},
		{"capacity flow of the water, W/K", w.stream.capacity, 2428.1, 0.05},
		{"water at the bubble point, °C", r.Zones[2].SecondaryOutlet - 273.15, 30.31, 0.005},
		{"water at the dew point, °C", r.Zones[1].SecondaryOutlet - 273.15, 36.80, 0.005},
		{"pinch, K", r.Pinch, 8.20, 0.005},
		{"desuperheating from, °C", r.Zones[0].RefrigerantInlet - 273.15, 71.12, 0.005},
		{"desuperheating, W", r.Zones[0].Duty, 2911.3, 0.05},
		{"desuperheating, K", r.Zones[0].LMTD, 17.850, 0.0005},
		{"desuperheating, W/K", r.Zones[0].UA, 163.10, 0.005},
		{"condensing, W", r.Zones[1].Duty, 15757.6, 0.05},
		{"condensing, K", r.Zones[1].LMTD, 11.130, 0.0005},
		{"condensing, W/K", r.Zones[1].UA, 1415.75, 0.005},
		{"subcooling, W", r.Zones[2].Duty, 756.1, 0.05},
		{"subcooling, K", r.Zones[2].LMTD, 12.194, 0.0005},
		{"subcooling, W/K", r.Zones[2].UA, 62.00, 0.005},
		{"whole, W/K", r.UA, 1640.85, 0.015}, // printed as the sum of the three printed zones,
	} {
		if !(math.Abs(c.got-c.want) <= c.half) {
			t.Errorf("%s: %.9g, want %g", c.name, c.got, c.want)
		}
	}
}
