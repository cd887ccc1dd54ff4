package cycle_test

import (
	"testing"

	"dewmark/props"
	"dewmark/service/cycle"
)

// TestPressuresOfThePlaces: the evaporating pressure is that at 7, the condensing pressure that at 4, and drops add up
// from there.
func TestPressuresOfThePlaces(t *testing.T) {
	r := heatPump(t)
	r.Evaporator.Pressure, r.SuctionLine.Pressure = 11e3, 7e3
	r.Condenser.Pressure, r.DischargeLine.Pressure, r.LiquidLine.Pressure = 13e3, 17e3, 19e3
	s := solve(t, r)
	fluid := r.Refrigerant.(*props.Pure)
	pe, _ := fluid.SaturationPressure(*r.Evaporation.Temperature)
	pc, _ := fluid.SaturationPressure(*r.Condensation.Temperature)
	for label, want := range map[string]float64{
		"7": pe, "6": pe + 11e3, "1": pe - 7e3, "4": pc, "3": pc + 13e3, "2": pc + 30e3, "2s": pc + 30e3, "5": pc - 19e3,
	} {
		if got := at(t, s, label).P; !near(got, want, 1e-12, 0) {
			t.Errorf("pressure at %s is %.9g, want %.9g", label, got, want)
		}
	}
	// No heat is given to the lines, so they keep the enthalpy.
	for _, line := range [][2]string{{"7", "1"}, {"2", "3"}, {"4", "5"}, {"5", "6"}} {
		if a, b := at(t, s, line[0]).H, at(t, s, line[1]).H; !near(a, b, 1e-11, 0) {
			t.Errorf("enthalpy goes from %.12g at %s to %.12g at %s", a, line[0], b, line[1])
		}
	}
	checkAccounts(t, s)
}

func TestDropsOfSaturationTemperature(t *testing.T) {
	r := heatPump(t)
	r.Evaporator.TemperatureEquivalent, r.SuctionLine.TemperatureEquivalent = 1, 0.7
	r.Condenser.TemperatureEquivalent, r.DischargeLine.TemperatureEquivalent, r.LiquidLine.TemperatureEquivalent = 0.5, 0.3, 0.2
	s := solve(t, r)
	fluid := r.Refrigerant.(*props.Pure)
	Te, Tk := *r.Evaporation.Temperature, *r.Condensation.Temperature
	for label, want := range map[string]float64{"7": Te, "6": Te + 1, "1": Te - 0.7, "4": Tk, "3": Tk + 0.5, "2": Tk + 0.8, "5": Tk - 0.2} {
		if got := boiling(t, fluid, at(t, s, label).P); !near(got, want, 0, 1e-9) {
			t.Errorf("saturation temperature at %s is %.12g, want %.12g", label, got, want)
		}
	}
	checkAccounts(t, s)
}

// TestOnTheSaturationLine: where temperature and pressure leave the quality open, a gas is saturated vapour and a liquid
// saturated liquid.
func TestOnTheSaturationLine(t *testing.T) {
	r := heatPump(t)
	r.AmbientTemperature = new(250.0)
	r.SuctionLine.TemperatureRise = -*r.Evaporation.Superheat
	if got := at(t, solve(t, r), "1").Quality; got != 1 {
		t.Errorf("vapour cooled to its dew point has quality %g", got)
	}
	r = heatPump(t)
	r.AmbientTemperature = new(330.0)
	r.LiquidLine.TemperatureChange = *r.Condensation.Subcooling
	if got := at(t, solve(t, r), "5").Quality; got != 0 {
		t.Errorf("liquid warmed to its bubble point has quality %g", got)
	}
	r = heatPump(t)
	r.Evaporation.Superheat, r.Condensation.Subcooling = new(1e-12), new(1e-12)
	s := solve(t, r)
	if gas, liquid := at(t, s, "7").Quality, at(t, s, "4").Quality; gas != 1 || liquid != 0 {
		t.Errorf("vanishing superheat and subcooling give qualities %g and %g", gas, liquid)
	}
}

func TestLinesChangeTheTemperature(t *testing.T) {
	r := heatPump(t)
	r.AmbientTemperature = new(290.0)
	r.SuctionLine = cycle.SuctionLine{Drop: cycle.Drop{Pressure: 5e3}, TemperatureRise: 4}
	r.DischargeLine.TemperatureDrop = 6
	r.LiquidLine.TemperatureChange = -2
	s := solve(t, r)
	for line, want := range map[[2]string]float64{{"7", "1"}: 4, {"2", "3"}: -6, {"4", "5"}: -2} {
		if got := at(t, s, line[1]).T - at(t, s, line[0]).T; !near(got, want, 0, 1e-9) {
			t.Errorf("temperature changes by %g K from %s to %s, want %g K", got, line[0], line[1], want)
		}
	}
	if q := component(t, s, "suction_line").Heat; q <= 0 {
		t.Errorf("the suction line takes up %g W", q)
	}
	checkAccounts(t, s)
}

// TestMeasuredDischargeTemperature: the discharge temperature that an efficiency gives, given back as measured, gives the
// efficiency again, with and without heat loss.
func TestMeasuredDischargeTemperature(t *testing.T) {
	for _, loss := range []float64{0, 0.12} {
		r := heatPump(t)
		r.Compressor.HeatLossFraction = &loss
		s := solve(t, r)
		r.Compressor.IsentropicEfficiency = nil
		r.Compressor.DischargeTemperature = new(s.Performance.DischargeTemperature)
		again := solve(t, r)
		if got := again.Performance.IsentropicEfficiency; !near(got, 0.7, 1e-9, 0) {
			t.Errorf("heat loss %g: efficiency %.12g, want 0.7", loss, got)
		}
		if got, want := again.Performance.CompressorPower, s.Performance.CompressorPower; !near(got, want, 1e-9, 0) {
			t.Errorf("heat loss %g: power %.12g, want %.12g", loss, got, want)
		}
	}
}

// TestPressuresInsteadOfTemperatures: a saturation pressure is as good as its temperature.
func TestPressuresInsteadOfTemperatures(t *testing.T) {
	r := heatPump(t)
	want := solve(t, r).Performance
	fluid := r.Refrigerant.(*props.Pure)
	pe, _ := fluid.SaturationPressure(*r.Evaporation.Temperature)
	pc, _ := fluid.SaturationPressure(*r.Condensation.Temperature)
	r.Evaporation.Temperature, r.Evaporation.Pressure = nil, &pe
	r.Condensation.Temperature, r.Condensation.Pressure = nil, &pc
	if got := solve(t, r).Performance; !near(got.COPHeating, want.COPHeating, 1e-10, 0) {
		t.Errorf("COP %.12g by pressures, %.12g by temperatures", got.COPHeating, want.COPHeating)
	}
}

// TestMeanReference: a pure refrigerant has one saturation temperature, so that the references differ by pressure drop alone.
func TestMeanReference(t *testing.T) {
	r := heatPump(t)
	want := solve(t, r).Performance.COPHeating
	r.Evaporation.Reference, r.Condensation.Reference = cycle.Mean, cycle.Mean
	if got := solve(t, r).Performance.COPHeating; !near(got, want, 1e-10, 0) {
		t.Errorf("COP %.12g by mean, %.12g by dew", got, want)
	}
	r.Evaporator.Pressure = 20e3
	s := solve(t, r)
	fluid := r.Refrigerant.(*props.Pure)
	mean := (at(t, s, "6").T + boiling(t, fluid, at(t, s, "7").P)) / 2
	if !near(mean, *r.Evaporation.Temperature, 0, 1e-9) {
		t.Errorf("mean evaporating temperature is %.12g K, want %g K", mean, *r.Evaporation.Temperature)
	}
	checkAccounts(t, s)
}

// TestReferenceCOPs: Carnot between the reservoirs, and no figure where there is none.
func TestReferenceCOPs(t *testing.T) {
	r := heatPump(t)
	p := solve(t, r).Performance
	if !near(p.CarnotCOPHeating, 308.15/35, 1e-14, 0) || !near(p.CarnotCOPCooling, 273.15/35, 1e-14, 0) {
		t.Errorf("Carnot COP %g and %g", p.CarnotCOPHeating, p.CarnotCOPCooling)
	}
	if !near(p.SecondLawEfficiency, p.COPHeating/p.CarnotCOPHeating, 1e-14, 0) {
		t.Errorf("second-law efficiency %g", p.SecondLawEfficiency)
	}
	r.Purpose = cycle.Cooling
	if p := solve(t, r).Performance; !near(p.SecondLawEfficiency, p.COPCooling/p.CarnotCOPCooling, 1e-14, 0) {
		t.Errorf("second-law efficiency for cooling %g", p.SecondLawEfficiency)
	}
	r.SourceTemperature = nil
	s := solve(t, r)
	if p := s.Performance; p.CarnotCOPHeating == p.CarnotCOPHeating || p.SecondLawEfficiency == p.SecondLawEfficiency {
		t.Errorf("without a source: Carnot COP %g, second-law efficiency %g", p.CarnotCOPHeating, p.SecondLawEfficiency)
	}
	if k := component(t, s, "evaporator"); k.EntropyGeneration == k.EntropyGeneration {
		t.Errorf("without a source the evaporator generates %g W/K", k.EntropyGeneration)
	}
	if k := s.Closure; !near(k.EnergyResidualFraction, 0, 0, 1e-9) || k.ExergyDestruction == k.ExergyDestruction {
		t.Errorf("closure without a source: %+v", k)
	}
}

func TestPerUnitFlow(t *testing.T) {
	r := heatPump(t)
	r.Size = nil
	s := solve(t, r)
	if !s.PerUnit || s.Performance.MassFlow != 1 {
		t.Errorf("without a size: %g kg/s, per unit %t", s.Performance.MassFlow, s.PerUnit)
	}
}

func BenchmarkSingleStage(b *testing.B) {
	for _, k := range []struct {
		name      string
		reference cycle.Reference
	}{{"R134a", cycle.Dew}, {"R290", cycle.Dew}, {"R1234yf", cycle.Dew}, {"R454B", cycle.Dew}, {"R454B", cycle.Mean}, {"R448A", cycle.Dew}} {
		b.Run(k.name+"/"+k.reference.String(), func(b *testing.B) {
			c, err := catalogue()
			if err != nil {
				b.Fatal(err)
			}
			r := heatPump(b)
			if r.Refrigerant, err = c.Refrigerant(k.name, props.IIR); err != nil {
				b.Fatal(err)
			}
			r.Evaporation.Reference, r.Condensation.Reference = k.reference, k.reference
			b.ReportAllocs()
			var s cycle.Solution
			for b.Loop() {
				if err := s.Solve(b.Context(), r); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
