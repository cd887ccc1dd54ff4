package machine

import (
	"context"
	"errors"
	"math"
	"slices"
	"testing"

	"dewmark/props/secondary"
	"dewmark/service/cycle"
)

// airWater is a plain R290 machine between 7 °C air and 30/35 °C water.
func airWater(t testing.TB) (*Machine, *Condition) {
	m := &Machine{
		Refrigerant: refrigerant(t, "R290"), Layout: cycle.SingleStage, Purpose: cycle.Heating,
		Compressor: Compressor{
			SweptVolume:          new(40e-6),
			IsentropicEfficiency: &Law{Coefficients: []float64{0.6, 0.08, -0.013}},
			VolumetricEfficiency: &Law{Kind: ClearanceLaw, Coefficients: []float64{0.97, 0.03, 1.1}},
			HeatLossFraction:     new(0.0), Speed: new(50.0), SpeedMin: new(25.0), SpeedMax: new(100.0),
		},
		Evaporator: Exchanger{UA: new(900.0), SecondaryShare: new(0.7), SuperheatRatio: new(0.5)},
		Condenser:  Exchanger{UA: new(1500.0), DesuperheatRatio: new(0.4), SubcoolingRatio: new(0.4)},
		Superheat:  new(5.0), Subcooling: new(3.0),
	}
	k := &Condition{
		Source: Stream{InletTemperature: new(280.15), RelativeHumidity: new(0.87), VolumeFlow: new(0.9)},
		Sink:   Stream{Liquid: water(), InletTemperature: new(303.15), OutletTemperature: new(308.15)},
	}
	return m, k
}

// waterWater is the same compressor between 12/7 °C and 30/35 °C water.
func waterWater(t testing.TB) (*Machine, *Condition) {
	m, k := airWater(t)
	m.Evaporator = Exchanger{UA: new(1500.0), SuperheatRatio: new(0.3)}
	k.Source = Stream{Liquid: water(), InletTemperature: new(285.15), OutletTemperature: new(280.15)}
	return m, k
}

func solve(t *testing.T, m *Machine, k *Condition) *OperatingPoint {
	t.Helper()
	p, err := Solve(t.Context(), m, k)
	if err != nil {
		t.Fatal(err)
	}
	if fault := unsound(p); fault != "" {
		t.Error(fault)
	}
	return p
}

func hasCaution(p *OperatingPoint, code CautionCode) bool {
	return slices.ContainsFunc(p.Cautions, func(c Caution) bool { return c.Code == code })
}

// The worked condenser backwards: with the conductance of the example the machine condenses at the 45 °C of the example.
func TestWorkedCondenserBackwards(t *testing.T) {
	r := refrigerant(t, "R134a")
	m := &Machine{
		Refrigerant: r, Layout: cycle.SingleStage, Purpose: cycle.Heating,
		Compressor: Compressor{
			SweptVolume:          new(0.1 / 9.79848 / 50), // 0.1 kg/s at the density of state 1, 9.79848 kg/m3
			IsentropicEfficiency: &Law{Coefficients: []float64{0.70}}, VolumetricEfficiency: &Law{Coefficients: []float64{1}},
			HeatLossFraction: new(0.0), Speed: new(50.0),
		},
		Evaporator: Exchanger{Approach: new(15.0), ApproachOf: EnteringApproach},
		Condenser:  Exchanger{UA: new(1640.85)},
		Superheat:  new(5.0), Subcooling: new(5.0),
	}
	k := &Condition{
		Source: Stream{Liquid: water(), InletTemperature: new(278.15)}, // its flow does not matter
		Sink:   Stream{Liquid: water(), InletTemperature: new(303.15), OutletTemperature: new(311.15)},
	}
	p := solve(t, m, k)
	// UA is printed to 3e-6; water's changing heat capacity moves it by as much again. The slope is about 1 K in 10 %.
	if got := p.CondensationTemperature; !(math.Abs(got-318.15) <= 0.001) {
		t.Errorf("condensation at %.5f °C, want 45", got-273.15)
	}
	if !(math.Abs(p.Condenser.Duty-19425) <= 1) || !(math.Abs(p.EvaporationTemperature-263.15) <= 1e-9) {
		t.Errorf("duty %g W, evaporation %g K", p.Condenser.Duty, p.EvaporationTemperature)
	}
	if !math.IsNaN(p.Evaporator.UA) || !math.IsNaN(p.Evaporator.Pinch) || !math.IsNaN(p.Evaporator.Secondary.MassFlow) {
		t.Errorf("an evaporator without a flow has a conductance: %+v", p.Evaporator)
	}
}

// The zones of a solved machine, calculated once more from its printed states and temperatures alone.
func TestSolvedZonesByHand(t *testing.T) {
	m, k := waterWater(t)
	p := solve(t, m, k)
	lm := func(a, b float64) float64 { return (a - b) / math.Log(a/b) }
	for _, c := range []struct {
		e     *ExchangerResult
		ratio map[ZoneName]float64
		ua    float64
	}{
		{&p.Condenser, map[ZoneName]float64{Desuperheating: 0.4, Condensing: 1, Subcooling: 0.4}, 1500},
		{&p.Evaporator, map[ZoneName]float64{Evaporating: 1, Superheating: 0.3}, 1500},
	} {
		var whole float64
		for _, z := range c.e.Zones {
			whole += z.Duty / math.Abs(lm(z.RefrigerantInlet-z.SecondaryOutlet, z.RefrigerantOutlet-z.SecondaryInlet)) / c.ratio[z.Name]
		}
		if !(math.Abs(whole/c.ua-1) <= 1e-8) {
			t.Errorf("the zones take %.9g W/K of %g", whole, c.ua)
		}
	}
	// Flow by swept volume and law, at the suction state.
	perf := &p.Cycle.Performance
	law := 0.97 - 0.03*(math.Pow(perf.PressureRatio, 1/1.1)-1)
	if want := law * 40e-6 * 50 * stateAt(p.Cycle, "1").State.Rho; !(math.Abs(perf.MassFlow/want-1) <= 1e-12) {
		t.Errorf("flow %g kg/s, law %g", perf.MassFlow, want)
	}
	// The streams take and give what the refrigerant gives and takes.
	q := &p.Condenser.Secondary
	if got := q.MassFlow * (water().Enthalpy(308.15) - water().Enthalpy(303.15)); !(math.Abs(got/perf.HeatingCapacity-1) <= 1e-12) {
		t.Errorf("the water takes up %g of %g W", got, perf.HeatingCapacity)
	}
}

// An approach, a pinch and a conductance that belong together give the same point.
func TestWaysToDescribeAnExchanger(t *testing.T) {
	m, k := waterWater(t)
	want := solve(t, m, k)
	for name, c := range map[string]struct{ evaporator, condenser Exchanger }{
		"leaving":  {Exchanger{Approach: new(280.15 - want.EvaporationTemperature)}, Exchanger{Approach: new(want.CondensationTemperature - 308.15)}},
		"entering": {Exchanger{Approach: new(285.15 - want.EvaporationTemperature), ApproachOf: EnteringApproach}, Exchanger{Approach: new(want.CondensationTemperature - 303.15), ApproachOf: EnteringApproach}},
		"pinch":    {Exchanger{Pinch: &want.Evaporator.Pinch}, Exchanger{Pinch: &want.Condenser.Pinch}},
		"mean": {
			Exchanger{Approach: new(280.15 - want.EvaporationTemperature), Reference: cycle.Mean},
			Exchanger{Approach: new(want.CondensationTemperature - 308.15), Reference: cycle.Mean},
		},
	} {
		n := *m
		n.Evaporator, n.Condenser = c.evaporator, c.condenser
		n.Evaporator.SuperheatRatio = new(0.3)
		n.Condenser.DesuperheatRatio, n.Condenser.SubcoolingRatio = new(0.4), new(0.4)
		p := solve(t, &n, k)
		if !(math.Abs(p.EvaporationTemperature-want.EvaporationTemperature) <= 1e-7 && math.Abs(p.CondensationTemperature-want.CondensationTemperature) <= 1e-7) {
			t.Errorf("%s: %g and %g K, want %g and %g", name, p.EvaporationTemperature, p.CondensationTemperature, want.EvaporationTemperature, want.CondensationTemperature)
		}
		if !(math.Abs(p.Condenser.UA/1500-1) <= 1e-6 && math.Abs(p.Evaporator.UA/1500-1) <= 1e-6) {
			t.Errorf("%s: needs %g and %g W/K, want 1500", name, p.Evaporator.UA, p.Condenser.UA)
		}
	}
}

// The same streams described by other numbers give the same point.
func TestWaysToDescribeAStream(t *testing.T) {
	m, k := waterWater(t)
	want := solve(t, m, k)
	q := &want.Condenser.Secondary
	for name, s := range map[string]Stream{
		"inlet and change":       {InletTemperature: new(303.15), TemperatureChange: new(5.0)},
		"outlet and change":      {OutletTemperature: new(308.15), TemperatureChange: new(5.0)},
		"inlet and mass flow":    {InletTemperature: new(303.15), MassFlow: &q.MassFlow},
		"outlet and mass flow":   {OutletTemperature: new(308.15), MassFlow: &q.MassFlow},
		"inlet and volume flow":  {InletTemperature: new(303.15), VolumeFlow: &q.VolumeFlow},
		"outlet and volume flow": {OutletTemperature: new(308.15), VolumeFlow: &q.VolumeFlow},
	} {
		n := *k
		n.Sink = s
		n.Sink.Liquid = water()
		p := solve(t, m, &n)
		if !(math.Abs(p.CondensationTemperature-want.CondensationTemperature) <= 1e-7 && math.Abs(p.Condenser.Secondary.MassFlow/q.MassFlow-1) <= 1e-8) {
			t.Errorf("%s: condensation %g K, flow %g kg/s, want %g and %g", name, p.CondensationTemperature, p.Condenser.Secondary.MassFlow, want.CondensationTemperature, q.MassFlow)
		}
	}
}

// Counterflow beats crossflow, and that parallel flow, by the capacity of the machine.
func TestArrangementsOrder(t *testing.T) {
	last := math.Inf(1)
	for _, a := range []Arrangement{Counterflow, CrossflowUnmixed, CrossflowStreamUnmixed, CrossflowStreamMixed, ParallelFlow} {
		m, k := waterWater(t)
		m.Condenser.Arrangement, m.Evaporator.Arrangement = a, a
		p := solve(t, m, k)
		if cop := p.Cycle.Performance.COPHeating; a == Counterflow || a == CrossflowUnmixed || a == ParallelFlow {
			if !(cop < last) {
				t.Errorf("%s: COP %g, not below %g", a, cop, last)
			}
			last = cop
		}
		if p.Condenser.Arrangement != a || len(p.Condenser.Zones) != 3 || len(p.Evaporator.Zones) != 2 {
			t.Errorf("%s: zones %+v %+v", a, p.Condenser.Zones, p.Evaporator.Zones)
		}
	}
}

// The coil of an air-water machine: the air's balance closes with its condensate, side by side and in series.
func TestCoilOfAMachine(t *testing.T) {
	for _, a := range []Arrangement{CrossflowUnmixed, Counterflow, ParallelFlow} {
		m, k := airWater(t)
		m.Evaporator.Arrangement = a
		p := solve(t, m, k)
		q := &p.Evaporator.Secondary
		in, err := secondary.AirByRelativeHumidity(101325, 280.15, 0.87)
		if err != nil {
			t.Fatal(err)
		}
		out, err := secondary.AirByHumidityRatio(101325, q.OutletTemperature, q.OutletRatio)
		if err != nil {
			t.Fatal(err)
		}
		dry := 0.9 / in.Volume()
		gives := dry * (in.Enthalpy() - out.Enthalpy() - (in.W-out.W)*secondary.CondensateEnthalpy(q.SurfaceTemperature))
		if !(math.Abs(gives/p.Cycle.Performance.CoolingCapacity-1) <= 1e-9) {
			t.Errorf("%s: the air gives off %g of %g W", a, gives, p.Cycle.Performance.CoolingCapacity)
		}
		if !(math.Abs(q.CondensateFlow/(dry*(in.W-out.W))-1) <= 1e-9) || !q.Wet || !(q.CondensateFlow > 0) {
			t.Errorf("%s: condensate %g kg/s, by the air %g", a, q.CondensateFlow, dry*(in.W-out.W))
		}
		if !(math.Abs((q.SensibleDuty+q.LatentDuty)/p.Evaporator.Duty-1) <= 1e-12) || !(q.SensibleRatio > 0.5 && q.SensibleRatio < 1) {
			t.Errorf("%s: sensible %g, latent %g of %g W", a, q.SensibleDuty, q.LatentDuty, p.Evaporator.Duty)
		}
		if !(q.SurfaceTemperature > p.EvaporationTemperature && q.SurfaceTemperature < 280.15) {
			t.Errorf("%s: surface at %g K", a, q.SurfaceTemperature)
		}
	}
	// Where most of the heat is latent, air that stayed dry would have to leave colder than the refrigerant.
	n, muggy := airWater(t)
	muggy.Source.InletTemperature, muggy.Source.RelativeHumidity, muggy.Source.VolumeFlow = new(305.15), new(0.95), new(0.2)
	if p := solve(t, n, muggy); !(p.Evaporator.Secondary.SensibleRatio < 0.45) || !(p.Evaporator.Secondary.OutletTemperature > p.EvaporationTemperature) {
		t.Errorf("muggy air: %+v", p.Evaporator.Secondary)
	}
	// Dry air gives no water, and moist air more heat.
	m, k := airWater(t)
	wet := solve(t, m, k)
	k.Source.RelativeHumidity = new(0.0)
	dry := solve(t, m, k)
	if q := &dry.Evaporator.Secondary; q.Wet || q.CondensateFlow != 0 || q.SensibleRatio != 1 || !(dry.EvaporationTemperature < wet.EvaporationTemperature) {
		t.Errorf("dry air: %+v", dry.Evaporator.Secondary)
	}
}

// Air heated by a condenser keeps its water; cooling a room turns purposes around.
func TestAirCooledChiller(t *testing.T) {
	m, k := waterWater(t)
	m.Purpose = cycle.Cooling
	m.Condenser = Exchanger{UA: new(1200.0), DesuperheatRatio: new(0.5), SubcoolingRatio: new(0.5)}
	k.Sink = Stream{InletTemperature: new(308.15), RelativeHumidity: new(0.4), VolumeFlow: new(1.2)}
	p := solve(t, m, k)
	q := &p.Condenser.Secondary
	if q.InletRatio != q.OutletRatio || !(q.OutletHumidity < q.InletHumidity) || q.LatentDuty != 0 {
		t.Errorf("heated air: %+v", q)
	}
	k.Sink = Stream{OutletTemperature: &q.OutletTemperature, HumidityRatio: &q.InletRatio, MassFlow: &q.MassFlow}
	if back := solve(t, m, k); !(math.Abs(back.Condenser.Secondary.InletTemperature-308.15) <= 1e-6) {
		t.Errorf("from the outlet the air enters at %g K", back.Condenser.Secondary.InletTemperature)
	}
	if got := p.Cycle.Performance.SecondLawEfficiency; !(got > 0.1 && got < 0.6) {
		t.Errorf("second-law efficiency %g", got)
	}
}

// A conductance that belongs to a reference flow follows the flow; fouling adds its resistance.
func TestConductance(t *testing.T) {
	x := plainExchange(Counterflow, 1000)
	x.share, x.exponent, x.reference = 0.6, 0.8, 0.5
	s := side{sign: 1, liquid: water(), inlet: 300, outlet: nan, change: nan, mass: 1, volume: nan}
	p := s.pass(10000)
	ua, share := x.conductance(&p)
	own, rest := 0.6/1000*math.Pow(0.5, 0.8), 0.4/1000
	if want := 1 / (own + rest); !(math.Abs(ua/want-1) <= 1e-12) || !(math.Abs(share-own/(own+rest)) <= 1e-12) {
		t.Errorf("at twice the flow: %g W/K and %g, want %g and %g", ua, share, want, own/(own+rest))
	}
	x.fouling = 2e-4
	if fouled, _ := x.conductance(&p); !(math.Abs(1/fouled-1/ua-2e-4) <= 1e-15) {
		t.Errorf("fouling adds %g K/W", 1/fouled-1/ua)
	}
}

// A demand is met by speed, and clamped with a caution where speed ends.
func TestDemand(t *testing.T) {
	m, k := airWater(t)
	for _, c := range []struct {
		heating, cooling float64
		clamped          bool
	}{{heating: 6000}, {cooling: 5500}, {heating: 3000, clamped: true}, {heating: 30000, clamped: true}} {
		n := *k
		if c.heating > 0 {
			n.Demand.Heating = &c.heating
		} else {
			n.Demand.Cooling = &c.cooling
		}
		p := solve(t, m, &n)
		perf := &p.Cycle.Performance
		met := math.Abs(perf.HeatingCapacity/c.heating-1) <= 1e-8 || math.Abs(perf.CoolingCapacity/c.cooling-1) <= 1e-8
		if met == c.clamped || hasCaution(p, SpeedClamped) != c.clamped {
			t.Errorf("%+v: speed %g, %g W and %g W, clamped %t", c, p.Speed, perf.HeatingCapacity, perf.CoolingCapacity, hasCaution(p, SpeedClamped))
		}
		if c.clamped && p.Speed != 25 && p.Speed != 100 {
			t.Errorf("%+v: clamped at %g", c, p.Speed)
		}
		// The speed that was found gives the same point when it is asked for.
		n.Demand, n.Speed = Demand{}, &p.Speed
		if q := solve(t, m, &n); !(math.Abs(q.Cycle.Performance.HeatingCapacity/perf.HeatingCapacity-1) <= 1e-8) {
			t.Errorf("%+v: at the speed found %g W, before %g W", c, q.Cycle.Performance.HeatingCapacity, perf.HeatingCapacity)
		}
	}
}

// A valve with a limited opening pressure holds the evaporation; the superheat rises until the evaporator passes no more.
func TestEvaporationHeld(t *testing.T) {
	m, k := airWater(t)
	k.Source.InletTemperature = new(293.15)
	free := solve(t, m, k)
	m.Limits.EvaporationMax = new(278.15)
	held := solve(t, m, k)
	if held.EvaporationTemperature != 278.15 || !(held.Superheat > 5) || !hasCaution(held, EvaporationHeld) || !(free.EvaporationTemperature > 278.15) {
		t.Errorf("held at %g K with %g K of superheat, free %g K", held.EvaporationTemperature, held.Superheat, free.EvaporationTemperature)
	}
	if !(held.Cycle.Performance.CoolingCapacity < free.Cycle.Performance.CoolingCapacity) {
		t.Error("holding the evaporation does not lower the capacity")
	}
	m.Limits.EvaporationMax = new(290.0)
	if p := solve(t, m, k); p.EvaporationTemperature != free.EvaporationTemperature || hasCaution(p, EvaporationHeld) {
		t.Errorf("a limit above the evaporation changes it to %g K", p.EvaporationTemperature)
	}
}

// Limits and envelope are judged, not enforced.
func TestBreaches(t *testing.T) {
	m, k := airWater(t)
	p := solve(t, m, k)
	perf := &p.Cycle.Performance
	m.Limits = Limits{
		DischargeTemperature: new(perf.DischargeTemperature - 1), PressureRatioMax: new(perf.PressureRatio - 0.1),
		PressureRatioMin: new(perf.PressureRatio + 0.1), HighPressure: new(p.DischargePressure - 1e4),
		LowPressure: new(p.DischargePressure), PressureDifferenceMin: new(p.DischargePressure),
	}
	m.Compressor.Envelopes = []Envelope{{Source: "invented data sheet", Vertices: []Vertex{{255, 300}, {255, 330}, {270, 330}, {270, 300}}}}
	q := solve(t, m, k)
	var fields []string
	for _, b := range q.Breaches {
		fields = append(fields, b.Field)
	}
	want := []string{
		"machine.compressor.envelopes.0", "machine.limits.discharge_temperature", "machine.limits.pressure_ratio_max",
		"machine.limits.pressure_ratio_min", "machine.limits.pressure_difference_min", "machine.limits.high_pressure", "machine.limits.low_pressure",
	}
	if !slices.Equal(fields, want) {
		t.Errorf("breaches %v, want %v", fields, want)
	}
	if q.WithinEnvelope() || q.Envelope.Verdict != OutsideEnvelope || q.Envelope.Edge != TooWarm || q.Envelope.Source != "invented data sheet" {
		t.Errorf("envelope %+v", q.Envelope)
	}
	if !(math.Abs(q.Envelope.Margin-(270-q.EvaporationTemperature)) <= 1e-9) || !hasCaution(q, BeyondEnvelope) || !hasCaution(q, LimitBroken) {
		t.Errorf("margin %g K at %g K", q.Envelope.Margin, q.EvaporationTemperature)
	}
	if q.EvaporationTemperature != p.EvaporationTemperature {
		t.Error("limits change the point")
	}
}

// Fans and pumps by the affinity laws; their heat enters the streams.
func TestAuxiliaries(t *testing.T) {
	m, k := airWater(t)
	m.Compressor.DriveEfficiency = new(0.95)
	m.Auxiliaries = Auxiliaries{
		Source:  Auxiliary{Power: new(100.0), ReferenceFlow: new(1.0), HeatToStream: new(1.0)},
		Sink:    Auxiliary{PressureRise: new(30e3), Efficiency: new(0.4), HeatToStream: new(0.5)},
		Control: new(10.0),
	}
	p := solve(t, m, k)
	y, perf := &p.System, &p.Cycle.Performance
	pump := p.Condenser.Secondary.VolumeFlow * 30e3 / 0.4
	for _, c := range []struct {
		name      string
		got, want float64
	}{
		{"fan", y.SourcePower, 100 * 0.9 * 0.9 * 0.9},
		{"pump", y.SinkPower, pump},
		{"compressor", y.CompressorPower, perf.CompressorPower / 0.95},
		{"all", y.Power, perf.CompressorPower/0.95 + 72.9 + pump + 10},
		{"heating", y.HeatingCapacity, perf.HeatingCapacity + pump/2},
		{"cooling", y.CoolingCapacity, perf.CoolingCapacity - 72.9},
		{"COP", y.COPHeating, y.HeatingCapacity / y.Power},
	} {
		if !(math.Abs(c.got/c.want-1) <= 1e-12) {
			t.Errorf("%s: %g, want %g", c.name, c.got, c.want)
		}
	}
	a := auxiliary{power: nan, rise: 20e3, efficiency: 0.5, reference: 1}
	if got, known := a.at(0.5); !known || !(math.Abs(got-20e3*0.25*0.5/0.5) <= 1e-9) {
		t.Errorf("half the flow through a fixed circuit takes %g W", got)
	}
}

// Frost and freezing are said, a stream that would freeze is refused.
func TestFrostAndFreezing(t *testing.T) {
	m, k := airWater(t)
	k.Source.InletTemperature = new(275.15)
	if p := solve(t, m, k); !hasCaution(p, Frost) {
		t.Error("no frost at 2 °C")
	}
	k.Source.InletTemperature, k.Source.RelativeHumidity = new(275.15), new(0.1)
	if p := solve(t, m, k); hasCaution(p, Frost) {
		t.Error("frost in air whose dew point is far below the surface")
	}
	k.Source.InletTemperature, k.Source.RelativeHumidity = new(293.15), new(0.5)
	if p := solve(t, m, k); hasCaution(p, Frost) {
		t.Error("frost on a coil at 20 °C")
	}

	m, k = waterWater(t)
	k.Source.OutletTemperature = new(277.15)
	if p := solve(t, m, k); !hasCaution(p, FreezingRisk) || !(p.EvaporationTemperature < 276.15) {
		t.Errorf("water of 4 °C without a caution, evaporation %g K", p.EvaporationTemperature)
	}
	k.Source = Stream{Liquid: water(), InletTemperature: new(277.15), MassFlow: new(0.15)}
	_, err := Solve(t.Context(), m, k)
	if e, ok := errors.AsType[*RefusedError](err); !ok || e.Refusals[0].Code != Freezing {
		t.Errorf("water below 0 °C: %v", err)
	}
	k.Source = Stream{Liquid: brine(t, secondary.PropyleneGlycol, 0.35), InletTemperature: new(277.15), MassFlow: new(0.3)}
	if p := solve(t, m, k); hasCaution(p, FreezingRisk) || !(p.Evaporator.Secondary.OutletTemperature < 273.15) {
		t.Errorf("brine leaves at %g K", p.Evaporator.Secondary.OutletTemperature)
	}
}

// Every layout but the cascade settles.
func TestLayouts(t *testing.T) {
	for _, c := range []struct {
		name   string
		change func(m *Machine)
	}{
		{"suction exchanger", func(m *Machine) {
			m.Layout = cycle.SuctionExchanger
			m.InternalExchanger = &cycle.InternalExchanger{Effectiveness: new(0.4)}
		}},
		{"economised subcooler", func(m *Machine) { m.Layout = cycle.EconomisedSubcooler }},
		{"economised flash", func(m *Machine) { m.Layout = cycle.EconomisedFlash }},
		{"two stage flash", func(m *Machine) { m.Layout = cycle.TwoStageFlash }},
		{"two stage intercooled, own laws", func(m *Machine) {
			m.Layout = cycle.TwoStageIntercooled
			m.SecondCompressor = &Compressor{IsentropicEfficiency: &Law{Coefficients: []float64{0.7}}, VolumetricEfficiency: &Law{Coefficients: []float64{0.9}}}
		}},
		{"lines and drops", func(m *Machine) {
			m.SuctionLine = cycle.SuctionLine{Drop: cycle.Drop{TemperatureEquivalent: 1}, TemperatureRise: 2}
			m.DischargeLine.Pressure = 5e3
			m.LiquidLine.Pressure = 10e3
			m.Evaporator.TemperatureEquivalent = 1.5
			m.Condenser.Pressure = 20e3
		}},
	} {
		t.Run(c.name, func(t *testing.T) {
			m, k := airWater(t)
			k.AmbientTemperature = new(293.15) // warmer than the suction line
			c.change(m)
			p := solve(t, m, k)
			if perf := &p.Cycle.Performance; !(perf.COPHeating > 2.5 && perf.COPHeating < 8) {
				t.Errorf("COP %g", perf.COPHeating)
			}
		})
	}
}

// A transcritical unit by a fixed pressure, by a correlation and at its best pressure, with and without internal exchanger.
func TestTranscritical(t *testing.T) {
	k := Condition{
		Source: Stream{InletTemperature: new(280.15), RelativeHumidity: new(0.87), VolumeFlow: new(2.5)},
		Sink:   Stream{Liquid: water(), InletTemperature: new(303.15), OutletTemperature: new(333.15)},
	}
	at := func(p float64) *OperatingPoint {
		m := demo(t, "harrow-25-hot-water")
		m.GasCooler = &HighSide{Pressure: &p}
		return solve(t, m, &k)
	}
	m := demo(t, "harrow-25-hot-water")
	m.GasCooler = &HighSide{Optimise: cycle.OptimiseCOP}
	best := solve(t, m, &k)
	p, cop := best.DischargePressure, best.Cycle.Performance.COPHeating
	if below, above := at(p*0.98), at(p*1.02); !(below.Cycle.Performance.COPHeating < cop && above.Cycle.Performance.COPHeating < cop) {
		t.Errorf("COP %g at %g Pa, beside it %g and %g", cop, p, below.Cycle.Performance.COPHeating, above.Cycle.Performance.COPHeating)
	}
	if !math.IsNaN(best.CondensationTemperature) || best.Condenser.Zones[0].Name != GasCooling || best.Condenser.Zones[0].Slices != 100 {
		t.Errorf("gas cooler %+v", best.Condenser)
	}
	m.GasCooler = &HighSide{Correlation: cycle.Liao}
	liao := solve(t, m, &k)
	t4 := liao.Condenser.Zones[0].RefrigerantOutlet - 273.15
	te := liao.EvaporationTemperature - 273.15
	if want := ((2.778-0.0157*te)*t4 + 0.381*te - 9.34) * 1e5; !(math.Abs(liao.DischargePressure/want-1) <= 1e-9) {
		t.Errorf("pressure %g Pa, correlation %g", liao.DischargePressure, want)
	}
	m = demo(t, "harrow-25-hot-water")
	m.With = []cycle.Layout{cycle.SuctionExchanger}
	m.InternalExchanger = &cycle.InternalExchanger{Effectiveness: new(0.3)}
	if with := solve(t, m, &k); !(with.Cycle.Performance.DischargeTemperature > at(9.5e6).Cycle.Performance.DischargeTemperature) {
		t.Error("an internal exchanger does not heat the discharge")
	}
	m = demo(t, "harrow-25-hot-water")
	m.Condenser = Exchanger{Approach: new(3.0)}
	if p := solve(t, m, &k); !(math.Abs(p.Condenser.Zones[0].RefrigerantOutlet-306.15) <= 1e-9) || !(math.Abs(p.Condenser.Approach-3) <= 1e-9) {
		t.Errorf("approach of 3 K: the gas leaves at %g K", p.Condenser.Zones[0].RefrigerantOutlet)
	}
	m.Condenser = Exchanger{Pinch: new(2.0)}
	if p := solve(t, m, &k); !(math.Abs(p.Condenser.Pinch-2) <= 1e-9) {
		t.Errorf("pinch %g K instead of 2", p.Condenser.Pinch)
	}
	m = demo(t, "harrow-25-hot-water")
	m.Layout, m.Compressor.Speed = cycle.Ejector, new(40.0)
	solve(t, m, &k)
}

// Twice as many slices change the conductance of a gas cooler, of a blend's exchangers and of exchangers with pressure drop
// by less than 0.5 %.
func TestSlices(t *testing.T) {
	needed := func(t *testing.T, m *Machine, k *Condition, factor int) (evaporator, condenser float64) {
		t.Helper()
		n := *m
		n.Evaporator.Slices, n.Condenser.Slices = new(defaultSlices*factor), new(defaultSlices*factor)
		if m.GasCooler != nil { // its evaporator is not sliced unless asked for
			n.Evaporator.Slices, n.Condenser.Slices = nil, new(defaultGasCoolerSlices*factor)
		}
		p := solve(t, &n, k)
		return p.Evaporator.UA, p.Condenser.UA
	}
	for _, s := range scenes(t) {
		m := demo(t, s.name)
		if s.name == "harrow-8" {
			m.Evaporator.Pressure, m.Condenser.Pressure = 15e3, 20e3
			m.Evaporator.Arrangement = Counterflow
		}
		draws, compared := 60, 0
		if testing.Short() {
			draws = 6
		}
		for i := range draws {
			k := s.draw(rngFor(3, i))
			p := solve(t, m, &k)
			if min(p.Evaporator.Pinch, p.Condenser.Pinch) < 0.05 {
				continue // where the streams touch, the conductance grows beyond all bounds
			}
			compared++
			// The levels of the point, with the conductance left free.
			free := *m
			free.Evaporator.UA, free.Evaporator.Approach, free.Evaporator.ApproachOf = nil, new(p.Evaporator.Secondary.InletTemperature-p.EvaporationTemperature), EnteringApproach
			free.Condenser.UA, free.Condenser.ApproachOf = nil, EnteringApproach
			if m.GasCooler != nil {
				free.Condenser.Approach = new(p.Condenser.Zones[0].RefrigerantOutlet - p.Condenser.Secondary.InletTemperature)
			} else {
				free.Condenser.Approach = new(p.CondensationTemperature - p.Condenser.Secondary.InletTemperature)
			}
			k.Sink = Stream{Liquid: k.Sink.Liquid, InletTemperature: &p.Condenser.Secondary.InletTemperature, OutletTemperature: &p.Condenser.Secondary.OutletTemperature}
			e1, c1 := needed(t, &free, &k, 1)
			e2, c2 := needed(t, &free, &k, 2)
			if !(math.Abs(e2/e1-1) <= 0.005 && math.Abs(c2/c1-1) <= 0.005) {
				t.Errorf("%s, draw %d: %g and %g W/K, with twice the slices %g and %g", s.name, i, e1, c1, e2, c2)
			}
		}
		if compared < draws/3 {
			t.Errorf("%s: only %d of %d draws were compared", s.name, compared, draws)
		}
	}
}

func TestContextEnds(t *testing.T) {
	m, k := airWater(t)
	cause := errors.New("the client went away")
	ctx, cancel := context.WithCancelCause(t.Context())
	cancel(cause)
	if _, err := Solve(ctx, m, k); !errors.Is(err, cause) {
		t.Errorf("after the end of the context: %v", err)
	}
}

// The air around a machine is that of its site: on a mountain less pressure is below it.
func TestBelowTheAirOfTheSite(t *testing.T) {
	m, k := airWater(t)
	p, err := Solve(t.Context(), m, k)
	if err != nil {
		t.Fatal(err)
	}
	lowest := p.Cycle.States[0].State.P
	for _, s := range p.Cycle.States {
		lowest = math.Min(lowest, s.State.P)
	}
	for _, c := range []struct {
		air  float64
		want bool
	}{{lowest + 1, true}, {lowest - 1, false}} {
		k.AmbientPressure = &c.air
		p, err := Solve(t.Context(), m, k)
		if err != nil {
			t.Fatal(err)
		}
		if got := hasCaution(p, CautionCode(cycle.BelowAtmosphere)); got != c.want {
			t.Errorf("air of %g Pa around %g Pa: caution %t", c.air, lowest, got)
		}
	}
}
