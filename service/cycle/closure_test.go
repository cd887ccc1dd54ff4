package cycle_test

import (
	"errors"
	"math"
	"math/rand/v2"
	"testing"

	"dewmark/props"
	"dewmark/service/cycle"
)

// closureTolerance is the first-law and exergy residual that a solved cycle may have, over the compressor power.
const closureTolerance = 1e-9

// between returns a random number from a to b.
func between(rng *rand.Rand, a, b float64) float64 { return a + (b-a)*rng.Float64() }

// sometimes returns v with a probability, and zero else.
func sometimes(rng *rand.Rand, probability, v float64) float64 {
	if rng.Float64() < probability {
		return v
	}
	return 0
}

// randomSingleStage returns a request with everything a single stage can have, its reservoirs such that heat flows down.
func randomSingleStage(rng *rand.Rand, fluid *props.Pure) *cycle.Request {
	Tc, limits := fluid.Critical().T, fluid.Limits()
	cold, _ := fluid.SaturationLimits()
	Te := between(rng, max(cold+1, 0.62*Tc), 0.85*Tc)
	Tk := between(rng, Te+0.03*Tc, 0.97*Tc)
	Tk = min(Tk, limits.TemperatureMax-60)
	superheat, subcooling := sometimes(rng, 0.8, between(rng, 0, 20)), sometimes(rng, 0.8, between(rng, 0, min(15, 0.8*(Tk-Te))))
	p, _ := fluid.SaturationPressure(Te)
	pk, _ := fluid.SaturationPressure(Tk)
	r := &cycle.Request{
		Refrigerant:  fluid,
		Layout:       cycle.SingleStage,
		Purpose:      cycle.Heating + cycle.Purpose(rng.IntN(2)),
		Evaporation:  cycle.Evaporation{Temperature: &Te, Superheat: &superheat},
		Condensation: cycle.Condensation{Temperature: &Tk, Subcooling: &subcooling},
		Compressor: cycle.Compressor{
			IsentropicEfficiency: new(between(rng, 0.4, 1)),
			VolumetricEfficiency: new(between(rng, 0.5, 1)),
			HeatLossFraction:     new(sometimes(rng, 0.5, between(rng, 0, 0.25))),
		},
		// The dead state lies between the vapour in the suction line and what is warm, so that no line takes heat from the cold.
		AmbientTemperature: new(Te + superheat + 6),
		SourceTemperature:  new(Te + superheat + between(rng, 0, 10)),
		SinkTemperature:    new(Tk - subcooling - between(rng, 0, 10)),
		Size:               &cycle.Size{},
	}
	r.SuctionLine.TemperatureRise = sometimes(rng, 0.5, between(rng, 0, 5))
	r.DischargeLine.TemperatureDrop = sometimes(rng, 0.3, between(rng, 0, 5))
	for _, d := range []*cycle.Drop{&r.Evaporator.Drop, &r.SuctionLine.Drop} {
		if rng.IntN(2) == 0 {
			d.Pressure = sometimes(rng, 0.5, between(rng, 0, 0.05*p))
		} else {
			d.TemperatureEquivalent = sometimes(rng, 0.5, between(rng, 0, 1))
		}
	}
	for _, d := range []*cycle.Drop{&r.Condenser.Drop, &r.DischargeLine.Drop, &r.LiquidLine.Drop} {
		d.Pressure = sometimes(rng, 0.5, between(rng, 0, 0.02*(pk-p)))
	}
	v := math.Pow(10, between(rng, 1, 6))
	switch rng.IntN(5) {
	case 0:
		r.Size.Heating = &v
	case 1:
		r.Size.Cooling = &v
	case 2:
		r.Size.CompressorPower = &v
	case 3:
		r.Size.MassFlow = new(v / 1e6)
	default:
		r.Size.SweptVolumeFlow = new(v / 1e6)
	}
	return r
}

// checkAccounts checks every account of a solution with a source and a sink against its states, and the sums of the whole.
func checkAccounts(t *testing.T, s *cycle.Solution) {
	t.Helper()
	checkClosed(t, s)
	k := s.Closure
	if !(math.Abs(k.ExergyResidualFraction) <= closureTolerance) {
		t.Errorf("exergy residual fraction %g", k.ExergyResidualFraction)
	}
	// W = sum of I + sum of Q (1 - T0/T) given off
	power, identity := s.Performance.CompressorPower, 0.0
	for _, c := range s.Components {
		identity += c.ExergyDestruction
		if c.Heat != 0 {
			identity -= c.Heat * (1 - s.Ambient/c.HeatTemperature)
		}
	}
	if !(math.Abs(identity-power) <= closureTolerance*power) {
		t.Errorf("power %g W is not the exergy destroyed and delivered, %g W", power, identity)
	}
}

// checkClosed checks the balances that need no reservoirs.
func checkClosed(t *testing.T, s *cycle.Solution) {
	t.Helper()
	states := map[string]cycle.StateAt{}
	for _, x := range s.States {
		if _, twice := states[x.Label]; twice {
			t.Errorf("label %s appears twice", x.Label)
		}
		states[x.Label] = x
	}
	power := s.Performance.CompressorPower
	var heat, work float64
	for _, k := range s.Components {
		var mass, energy, entropy, through float64
		for _, l := range k.Inlets {
			x := states[l]
			mass, energy, entropy, through = mass+x.MassFlow, energy+x.MassFlow*x.State.H, entropy-x.MassFlow*x.State.S, through+x.MassFlow
		}
		for _, l := range k.Outlets {
			x := states[l]
			mass, energy, entropy = mass-x.MassFlow, energy-x.MassFlow*x.State.H, entropy+x.MassFlow*x.State.S
		}
		if !(math.Abs(mass) <= 1e-12*through) {
			t.Errorf("%s: %g of %g kg/s is lost", k.Name, mass, through)
		}
		if energy += k.Heat + k.Work; !(math.Abs(energy) <= closureTolerance*power) {
			t.Errorf("%s: %g W of %g W is lost", k.Name, energy, power)
		}
		if k.Heat != 0 {
			entropy -= k.Heat / k.HeatTemperature
		}
		known := !math.IsNaN(k.EntropyGeneration) // the reservoir's temperature is
		if scale := power / s.Ambient; known && !(math.Abs(entropy-k.EntropyGeneration) <= 1e-9*scale) {
			t.Errorf("%s: entropy generation is %g W/K by its states, %g by its account", k.Name, entropy, k.EntropyGeneration)
		}
		if known && !(math.Abs(k.ExergyDestruction-s.Ambient*k.EntropyGeneration) <= 1e-9*power) {
			t.Errorf("%s: exergy destruction %g W is not T0 times %g W/K", k.Name, k.ExergyDestruction, k.EntropyGeneration)
		}
		heat, work = heat+k.Heat, work+k.Work
	}
	if !(math.Abs(heat+work) <= closureTolerance*power) {
		t.Errorf("first law: heat %g W and work %g W do not close", heat, work)
	}
	if !(math.Abs(work-power) <= closureTolerance*power) {
		t.Errorf("power is %g W, the components take %g W", power, work)
	}
	k := s.Closure
	if !(k.EnergyResidualFraction <= closureTolerance) {
		t.Errorf("energy residual fraction %g", k.EnergyResidualFraction)
	}
	if !(k.SmallestEntropyGeneration >= -1e-9*s.Performance.HeatingCapacity/s.Ambient) {
		t.Errorf("%s destroys entropy, %g W/K", k.SmallestComponent, k.SmallestEntropyGeneration)
	}
}

func TestSingleStageAccountsClose(t *testing.T) {
	c, err := catalogue()
	if err != nil {
		t.Fatal(err)
	}
	rng := rand.New(rand.NewPCG(2, 2))
	trials := 40
	if testing.Short() {
		trials = 5
	}
	solved, refused := 0, 0
	for _, name := range c.PureDesignations() {
		fluid := refrigerant(t, name, props.DefaultDatum)
		for range trials {
			r := randomSingleStage(rng, fluid)
			s, err := cycle.Solve(t.Context(), r)
			if e, ok := errors.AsType[*cycle.RefusedError](err); ok {
				refused++
				for _, f := range e.Refusals {
					if f.Code != cycle.NoState && f.Code != cycle.SecondLaw && f.Code != cycle.NoSolution {
						t.Errorf("%s: %v", name, err)
					}
				}
				continue
			}
			if err != nil {
				t.Fatalf("%s: %v", name, err)
			}
			solved++
			checkAccounts(t, s)
			checkSize(t, r, s)
			p := s.Performance
			loss := (component(t, s, "compressor").Heat + component(t, s, "suction_line").Heat +
				component(t, s, "discharge_line").Heat + component(t, s, "liquid_line").Heat) / p.CompressorPower
			if !near(p.COPHeating, p.COPCooling+1+loss, 1e-12, 1e-12) {
				t.Errorf("%s: heating COP %g, cooling COP %g, heat elsewhere %g of the power", name, p.COPHeating, p.COPCooling, loss)
			}
			if t.Failed() {
				t.Fatalf("%s: %+v %+v %+v", name, describe(r), s.Performance, s.Closure)
			}
		}
	}
	if t.Logf("%d solved, %d refused", solved, refused); refused > solved/10 {
		t.Errorf("%d of %d possible requests were refused", refused, solved+refused)
	}
}

func checkSize(t *testing.T, r *cycle.Request, s *cycle.Solution) {
	t.Helper()
	p := s.Performance
	for _, k := range []struct {
		asked *float64
		got   float64
	}{
		{r.Size.Heating, p.HeatingCapacity},
		{r.Size.Cooling, p.CoolingCapacity},
		{r.Size.CompressorPower, p.CompressorPower},
		{r.Size.MassFlow, p.MassFlow},
		{r.Size.SweptVolumeFlow, p.SweptVolumeFlow},
	} {
		if k.asked != nil && !near(k.got, *k.asked, 1e-12, 0) {
			t.Errorf("asked for %g, got %g", *k.asked, k.got)
		}
	}
}

// describe writes the numbers behind a request's pointers.
func describe(r *cycle.Request) map[string]float64 {
	all := map[string]float64{}
	for name, p := range map[string]*float64{
		"evaporation": r.Evaporation.Temperature, "superheat": r.Evaporation.Superheat,
		"condensation": r.Condensation.Temperature, "subcooling": r.Condensation.Subcooling,
		"efficiency": r.Compressor.IsentropicEfficiency, "heat loss": r.Compressor.HeatLossFraction,
		"ambient": r.AmbientTemperature, "source": r.SourceTemperature, "sink": r.SinkTemperature,
	} {
		if p != nil {
			all[name] = *p
		}
	}
	return all
}

func TestCOPDoesNotDependOnDatum(t *testing.T) {
	for _, name := range []string{"R290", "R134a", "R717", "R1234yf", "R744"} {
		r := heatPump(t)
		if name == "R744" {
			r.Condensation.Temperature = new(298.15)
			r.SinkTemperature = new(293.15)
		}
		var first *cycle.Solution
		for _, datum := range []props.Datum{props.IIR, props.ASHRAE, props.NBP} {
			c, err := catalogue()
			if err != nil {
				t.Fatal(err)
			}
			fluid, err := c.Pure(name, datum)
			if _, impossible := errors.AsType[*props.DatumError](err); impossible {
				continue
			}
			if err != nil {
				t.Fatal(err)
			}
			r.Refrigerant = fluid
			s := solve(t, r)
			if first == nil {
				first = s
				continue
			}
			// An enthalpy carries a rounding error of 1e-16 of the datum's offset, some 1e-15 of a difference.
			if !near(s.Performance.COPHeating, first.Performance.COPHeating, 1e-11, 0) ||
				!near(s.Closure.ExergyDestruction, first.Closure.ExergyDestruction, 1e-10, 0) {
				t.Errorf("%s, datum %s: COP %.15g and destruction %.15g, by IIR %.15g and %.15g", name, datum,
					s.Performance.COPHeating, s.Closure.ExergyDestruction, first.Performance.COPHeating, first.Closure.ExergyDestruction)
			}
		}
	}
}
