package machine

import (
	"errors"
	"math"
	"strings"
	"testing"

	"dewmark/props/secondary"
	"dewmark/service/cycle"
)

func TestRefusals(t *testing.T) {
	for _, c := range []struct {
		name   string
		change func(m *Machine, k *Condition)
		code   Code
		field  string
	}{
		{"no refrigerant", func(m *Machine, _ *Condition) { m.Refrigerant = nil }, Missing, "machine.refrigerant"},
		{"no layout", func(m *Machine, _ *Condition) { m.Layout = 0 }, NotAllowed, "machine.layout"},
		{"no purpose", func(m *Machine, _ *Condition) { m.Purpose = 0 }, NotAllowed, "machine.purpose"},
		{"cascade", func(m *Machine, _ *Condition) { m.Layout = cycle.Cascade }, NotAllowed, "machine.layout"},
		{"negative superheat", func(m *Machine, _ *Condition) { m.Superheat = new(-1.0) }, OutOfBounds, "machine.superheat"},
		{"subcooling no number", func(m *Machine, _ *Condition) { m.Subcooling = new(math.NaN()) }, OutOfBounds, "machine.subcooling"},
		{"gas cooler below", func(m *Machine, _ *Condition) { m.GasCooler = &HighSide{Pressure: new(9e6)} }, Surplus, "machine.gas_cooler"},
		{"second compressor", func(m *Machine, _ *Condition) { m.SecondCompressor = &Compressor{} }, Surplus, "machine.second_compressor"},
		{"optimised intermediate", func(m *Machine, _ *Condition) {
			m.Layout, m.Intermediate = cycle.TwoStageFlash, &cycle.Intermediate{Optimise: cycle.OptimiseCOP}
		}, NotAllowed, "machine.intermediate.optimise"},

		{"swept volume in cubic centimetres", func(m *Machine, _ *Condition) { m.Compressor.SweptVolume = new(40.0) }, OutOfBounds, "machine.compressor.swept_volume"},
		{"no swept volume", func(m *Machine, _ *Condition) { m.Compressor.SweptVolume = nil }, Missing, "machine.compressor.swept_volume"},
		{"no laws", func(m *Machine, _ *Condition) { m.Compressor.IsentropicEfficiency = nil }, Missing, "machine.compressor"},
		{"law of four", func(m *Machine, _ *Condition) {
			m.Compressor.IsentropicEfficiency = &Law{Coefficients: []float64{1, 2, 3, 4}}
		}, OutOfBounds, "machine.compressor.isentropic_efficiency"},
		{"law with infinity", func(m *Machine, _ *Condition) {
			m.Compressor.IsentropicEfficiency = &Law{Coefficients: []float64{0.7, math.Inf(1)}}
		}, OutOfBounds, "machine.compressor.isentropic_efficiency.1"},
		{"clearance of power", func(m *Machine, _ *Condition) {
			m.Compressor.IsentropicEfficiency = &Law{Kind: ClearanceLaw, Coefficients: []float64{0.7, 0.1, 1}}
		}, NotAllowed, "machine.compressor.isentropic_efficiency"},
		{"clearance exponent", func(m *Machine, _ *Condition) {
			m.Compressor.VolumetricEfficiency = &Law{Kind: ClearanceLaw, Coefficients: []float64{0.7, 0.1, 0}}
		}, OutOfBounds, "machine.compressor.volumetric_efficiency"},
		{"unknown law", func(m *Machine, _ *Condition) {
			m.Compressor.VolumetricEfficiency = &Law{Kind: 9, Coefficients: []float64{0.7}}
		}, NotAllowed, "machine.compressor.volumetric_efficiency"},
		{"law leaves what is possible", func(m *Machine, _ *Condition) {
			m.Compressor.IsentropicEfficiency = &Law{Coefficients: []float64{1.5}}
		}, Impossible, "machine.compressor.isentropic_efficiency"},
		{"all power lost as heat", func(m *Machine, _ *Condition) { m.Compressor.HeatLossFraction = new(1.0) }, OutOfBounds, "machine.compressor.heat_loss_fraction"},
		{"half a range of speeds", func(m *Machine, _ *Condition) { m.Compressor.SpeedMax = nil }, Missing, "machine.compressor"},
		{"range upside down", func(m *Machine, _ *Condition) { m.Compressor.SpeedMin = new(200.0) }, OutOfBounds, "machine.compressor.speed_min"},
		{"own speed outside", func(m *Machine, _ *Condition) { m.Compressor.Speed = new(10.0) }, OutOfBounds, "machine.compressor.speed"},
		{"envelope of two", func(m *Machine, _ *Condition) {
			m.Compressor.Envelopes = []Envelope{{Vertices: []Vertex{{250, 300}, {260, 300}}}}
		}, BadEnvelope, "machine.compressor.envelopes.0.vertices"},
		{"envelopes without speeds", func(m *Machine, _ *Condition) {
			e := Envelope{Vertices: []Vertex{{250, 300}, {280, 300}, {280, 340}}}
			m.Compressor.Envelopes = []Envelope{e, e}
		}, Missing, "machine.compressor.envelopes.0.speed"},
		{"envelope of pressures", func(m *Machine, _ *Condition) {
			m.Compressor.Envelopes = []Envelope{{Vertices: []Vertex{{250, 8e6}, {280, 8e6}, {280, 12e6}}, PressureAxis: true}}
		}, NotAllowed, "machine.compressor.envelopes.0"},
		{"map and laws", func(m *Machine, _ *Condition) { m.Compressor.Maps = demo(t, "harrow-8").Compressor.Maps }, Surplus, "machine.compressor.maps"},
		{"map of nine", func(m *Machine, _ *Condition) {
			m.Compressor = demo(t, "harrow-8").Compressor
			m.Compressor.Maps[1].MassFlow = m.Compressor.Maps[1].MassFlow[:9]
		}, OutOfBounds, "machine.compressor.maps.1.mass_flow"},
		{"map of no kind", func(m *Machine, _ *Condition) {
			m.Compressor = demo(t, "harrow-8").Compressor
			m.Compressor.Maps[0].Kind = 7
		}, NotAllowed, "machine.compressor.maps.0.kind"},
		{"biquadratic of ten", func(m *Machine, _ *Condition) {
			m.Compressor = demo(t, "harrow-8").Compressor
			m.Compressor.Maps[2].Kind = Biquadratic
		}, OutOfBounds, "machine.compressor.maps.2.mass_flow"},
		{"map without suction gas", func(m *Machine, _ *Condition) {
			m.Compressor = demo(t, "harrow-8").Compressor
			m.Compressor.Maps[0].SuctionSuperheat = nil
		}, Missing, "machine.compressor.maps.0"},
		{"maps out of order", func(m *Machine, _ *Condition) {
			m.Compressor = demo(t, "harrow-8").Compressor
			m.Compressor.Maps[0], m.Compressor.Maps[1] = m.Compressor.Maps[1], m.Compressor.Maps[0]
		}, OutOfBounds, "machine.compressor.maps.1.speed"},
		{"map beyond its speeds", func(m *Machine, _ *Condition) {
			m.Compressor = demo(t, "harrow-8").Compressor
			m.Compressor.SpeedMax = new(130.0)
		}, OutOfBounds, "machine.compressor.speed_max"},
		{"map of two stages", func(m *Machine, _ *Condition) {
			m.Compressor, m.Layout = demo(t, "harrow-8").Compressor, cycle.TwoStageFlash
		}, NotAllowed, "machine.compressor.maps"},

		{"no exchanger", func(m *Machine, _ *Condition) { m.Condenser = Exchanger{} }, Missing, "machine.condenser"},
		{"two ways", func(m *Machine, _ *Condition) { m.Condenser.Pinch = new(2.0) }, Surplus, "machine.condenser"},
		{"no conductance", func(m *Machine, _ *Condition) { m.Condenser.UA = new(0.0) }, OutOfBounds, "machine.condenser.ua"},
		{"no such arrangement", func(m *Machine, _ *Condition) { m.Condenser.Arrangement = 40 }, NotAllowed, "machine.condenser.arrangement"},
		{"no such approach", func(m *Machine, _ *Condition) { m.Condenser.ApproachOf = 40 }, NotAllowed, "machine.condenser.approach_of"},
		{"no slices", func(m *Machine, _ *Condition) { m.Condenser.Slices = new(0) }, OutOfBounds, "machine.condenser.slices"},
		{"a million slices", func(m *Machine, _ *Condition) { m.Condenser.Slices = new(1000000) }, OutOfBounds, "machine.condenser.slices"},
		{"zone of another exchanger", func(m *Machine, _ *Condition) { m.Evaporator.SubcoolingRatio = new(0.5) }, Surplus, "machine.evaporator.subcooling_ratio"},
		{"exponent without flow", func(m *Machine, _ *Condition) { m.Condenser.FlowExponent = new(0.8) }, Missing, "machine.condenser.reference_flow"},
		{"coil by pinch", func(m *Machine, _ *Condition) { m.Evaporator = Exchanger{Pinch: new(2.0)} }, NotAllowed, "machine.evaporator"},

		{"no inlet", func(_ *Machine, k *Condition) { k.Sink = Stream{Liquid: water(), MassFlow: new(1.0)} }, Missing, "condition.sink.inlet_temperature"},
		{"inlet alone", func(_ *Machine, k *Condition) { k.Sink = Stream{Liquid: water(), InletTemperature: new(300.0)} }, Missing, "condition.sink"},
		{"three numbers", func(_ *Machine, k *Condition) { k.Sink.MassFlow = new(1.0) }, Surplus, "condition.sink"},
		{"two flows", func(_ *Machine, k *Condition) {
			k.Source.MassFlow = new(1.0)
		}, Surplus, "condition.source.mass_flow"},
		{"sink that cools", func(_ *Machine, k *Condition) { k.Sink.OutletTemperature = new(300.0) }, OutOfBounds, "condition.sink.outlet_temperature"},
		{"humid water", func(_ *Machine, k *Condition) { k.Sink.RelativeHumidity = new(0.5) }, Surplus, "condition.sink.relative_humidity"},
		{"humidity twice", func(_ *Machine, k *Condition) { k.Source.WetBulb = new(278.0) }, Surplus, "condition.source"},
		{"humidity above 1", func(_ *Machine, k *Condition) { k.Source.RelativeHumidity = new(1.2) }, NoState, "condition.source.relative_humidity"},
		{"air cooled to", func(_ *Machine, k *Condition) {
			k.Source.VolumeFlow, k.Source.OutletTemperature = nil, new(275.0)
		}, NotAllowed, "condition.source"},
		{"speed outside", func(_ *Machine, k *Condition) { k.Speed = new(200.0) }, OutOfBounds, "condition.speed"},
		{"speed and demand", func(_ *Machine, k *Condition) { k.Speed, k.Demand.Heating = new(50.0), new(6e3) }, Surplus, "condition"},
		{"demand at one speed", func(m *Machine, k *Condition) {
			m.Compressor.SpeedMin, m.Compressor.SpeedMax, k.Demand.Heating = nil, nil, new(6e3)
		}, Missing, "machine.compressor.speed_max"},

		{"condenser too small", func(m *Machine, _ *Condition) { m.Condenser.UA = new(30.0) }, ExchangerTooSmall, "machine.condenser.ua"},
		{"evaporator too small", func(m *Machine, _ *Condition) { m.Evaporator.UA = new(0.05) }, ExchangerTooSmall, "machine.evaporator.ua"},
		{"streams cross", func(m *Machine, _ *Condition) {
			m.Condenser = Exchanger{Approach: new(4.0), ApproachOf: EnteringApproach}
		}, TemperatureCross, "machine.condenser"},
		{"approach below the superheat", func(m *Machine, _ *Condition) { m.Evaporator = Exchanger{Approach: new(2.0)} }, TemperatureCross, "machine.evaporator"},
		{"sink colder than the source", func(_ *Machine, k *Condition) {
			k.Source.InletTemperature = new(310.0)
			k.Sink = Stream{Liquid: water(), InletTemperature: new(280.0), MassFlow: new(2.0)}
		}, LiftTooSmall, "condition.sink"},
		{"sink above the critical point", func(_ *Machine, k *Condition) {
			k.Sink = Stream{Liquid: water(), InletTemperature: new(368.0), OutletTemperature: new(373.0)}
		}, NoState, "condition.sink"},
		{"frozen water", func(m *Machine, k *Condition) {
			m.Evaporator = Exchanger{UA: new(1500.0)}
			k.Source = Stream{Liquid: water(), InletTemperature: new(276.0), OutletTemperature: new(272.0)}
		}, Freezing, "condition.source"},
		{"far outside the map", func(m *Machine, k *Condition) {
			*m = *demo(t, "harrow-8")
			k.Source.InletTemperature = new(235.0)
			k.Source.RelativeHumidity = new(0.5)
			k.Speed = new(60.0)
		}, EnvelopeLeft, "machine.compressor.maps.0.envelope"},
	} {
		t.Run(c.name, func(t *testing.T) {
			m, k := airWater(t)
			c.change(m, k)
			p, err := Solve(t.Context(), m, k)
			e, ok := errors.AsType[*RefusedError](err)
			if !ok {
				t.Fatalf("no refusal: %v, %+v", err, p)
			}
			if r := e.Refusals[0]; r.Code != c.code || r.Field != c.field {
				t.Errorf("refused %s of %q, want %s of %q: %v", r.Code, r.Field, c.code, c.field, err)
			}
			for _, r := range e.Refusals {
				if text := r.Message.String(); len(text) < 10 || strings.Contains(text, "%!") {
					t.Errorf("says %q", text)
				}
			}
		})
	}
}

// All that is wrong is said at once.
func TestAllRefusalsAtOnce(t *testing.T) {
	m, k := airWater(t)
	m.Superheat, m.Condenser.UA, k.Sink.OutletTemperature, k.Source.RelativeHumidity = new(-3.0), new(-1.0), new(-10.0), new(7.0)
	_, err := Solve(t.Context(), m, k)
	e, ok := errors.AsType[*RefusedError](err)
	if !ok || len(e.Refusals) != 5 { // the outlet is both below absolute zero and below the inlet
		t.Fatalf("%v", err)
	}
	if _, ok := errors.AsType[*secondary.RangeError](err); !ok {
		t.Errorf("the cause is lost: %v", err)
	}
}

func TestTranscriticalRefusals(t *testing.T) {
	for _, c := range []struct {
		name   string
		change func(m *Machine)
		code   Code
		field  string
	}{
		{"no pressure", func(m *Machine) { m.GasCooler = nil }, Missing, "machine.gas_cooler"},
		{"nothing said", func(m *Machine) { m.GasCooler = &HighSide{} }, Missing, "machine.gas_cooler"},
		{"said twice", func(m *Machine) { m.GasCooler.Correlation = cycle.Liao }, Surplus, "machine.gas_cooler"},
		{"below the critical", func(m *Machine) { m.GasCooler.Pressure = new(6e6) }, OutOfBounds, "machine.gas_cooler.pressure"},
		{"limits upside down", func(m *Machine) {
			m.GasCooler = &HighSide{Optimise: cycle.OptimiseCOP, PressureMin: new(12e6), PressureMax: new(9e6)}
		}, OutOfBounds, "machine.gas_cooler.pressure_max"},
		{"subcooling", func(m *Machine) { m.Subcooling = new(2.0) }, Surplus, "machine.subcooling"},
		{"leaving approach", func(m *Machine) { m.Condenser = Exchanger{Approach: new(2.0), ApproachOf: LeavingApproach} }, NotAllowed, "machine.condenser.approach_of"},
		{"envelope of condensation", func(m *Machine) { m.Compressor.Envelopes[0].PressureAxis = false }, BadEnvelope, "machine.compressor.envelopes.0.vertices"},
	} {
		m := demo(t, "harrow-25-hot-water")
		c.change(m)
		k := scenes(t)[1].typical()
		_, err := Solve(t.Context(), m, &k)
		e, ok := errors.AsType[*RefusedError](err)
		if !ok || e.Refusals[0].Code != c.code || e.Refusals[0].Field != c.field {
			t.Errorf("%s: %v, want %s of %q", c.name, err, c.code, c.field)
		}
	}
}

// What was not given is assumed and said.
func TestAssumptions(t *testing.T) {
	m, k := airWater(t)
	m.Superheat, m.Subcooling, m.Compressor.HeatLossFraction = nil, nil, nil
	m.Evaporator.SecondaryShare, m.Evaporator.SuperheatRatio = nil, nil
	k.Source.RelativeHumidity = nil
	p := solve(t, m, k)
	fields := map[string]CautionCode{}
	for _, c := range p.Cautions {
		fields[c.Field] = c.Code
		if text := c.Message.String(); text == "" || strings.Contains(text, "%!") {
			t.Errorf("%s says %q", c.Code, text)
		}
	}
	for field, code := range map[string]CautionCode{
		"machine.superheat": Assumed, "machine.subcooling": Assumed, "machine.compressor.heat_loss_fraction": Assumed,
		"machine.evaporator.secondary_share": Assumed, "condition.source.relative_humidity": Assumed,
		"machine.evaporator": SingleCoefficient, "machine.compressor.envelopes": EnvelopeMissing,
	} {
		if fields[field] != code {
			t.Errorf("%s: caution %q, want %s", field, fields[field], code)
		}
	}
}
