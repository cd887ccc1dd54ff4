package cycle_test

import (
	"errors"
	"math"
	"slices"
	"testing"

	"dewmark/props"
	"dewmark/service/cycle"
)

// refusal is a request that cannot be and the field that is to blame for it.
type refusal struct {
	name   string
	change func(t *testing.T, r *cycle.Request)
	code   cycle.RefusalCode
	field  string
}

var refusals = []refusal{
	{"no refrigerant", func(_ *testing.T, r *cycle.Request) { r.Refrigerant = nil }, cycle.Missing, "refrigerant"},
	{"no layout", func(_ *testing.T, r *cycle.Request) { r.Layout = 0 }, cycle.NotAllowed, "layout"},
	{"unknown layout", func(_ *testing.T, r *cycle.Request) { r.Layout = 99 }, cycle.NotAllowed, "layout"},
	{"no purpose", func(_ *testing.T, r *cycle.Request) { r.Purpose = 0 }, cycle.NotAllowed, "purpose"},

	{"neither temperature nor pressure", func(_ *testing.T, r *cycle.Request) { r.Evaporation.Temperature = nil }, cycle.Missing, "evaporation"},
	{"both temperature and pressure", func(_ *testing.T, r *cycle.Request) { r.Condensation.Pressure = new(1e6) }, cycle.Surplus, "condensation"},
	{"NaN", func(_ *testing.T, r *cycle.Request) { r.Evaporation.Temperature = new(math.NaN()) }, cycle.OutOfBounds, "evaporation.temperature"},
	{"infinite", func(_ *testing.T, r *cycle.Request) { r.Condensation.Temperature = new(math.Inf(1)) }, cycle.OutOfBounds, "condensation.temperature"},
	{"huge", func(_ *testing.T, r *cycle.Request) { r.Evaporation.Superheat = new(1e308) }, cycle.OutOfBounds, "evaporation.superheat"},
	{"below absolute zero", func(_ *testing.T, r *cycle.Request) { r.Evaporation.Temperature = new(-1.0) }, cycle.OutOfBounds, "evaporation.temperature"},
	{"negative pressure", func(_ *testing.T, r *cycle.Request) {
		r.Evaporation = cycle.Evaporation{Pressure: new(-1e5), Superheat: new(5.0)}
	}, cycle.OutOfBounds, "evaporation.pressure"},
	{"negative superheat", func(_ *testing.T, r *cycle.Request) { r.Evaporation.Superheat = new(-1.0) }, cycle.OutOfBounds, "evaporation.superheat"},
	{"negative subcooling", func(_ *testing.T, r *cycle.Request) { r.Condensation.Subcooling = new(-1.0) }, cycle.OutOfBounds, "condensation.subcooling"},
	{"quality above 1", func(_ *testing.T, r *cycle.Request) {
		r.Evaporation.Superheat, r.Evaporation.OutletQuality = nil, new(1.1)
	}, cycle.OutOfBounds, "evaporation.outlet_quality"},
	{"quality and superheat", func(_ *testing.T, r *cycle.Request) { r.Evaporation.OutletQuality = new(0.9) }, cycle.Surplus, "evaporation.outlet_quality"},
	{"reference of a pressure", func(_ *testing.T, r *cycle.Request) {
		r.Condensation = cycle.Condensation{Pressure: new(1.3e6), Reference: cycle.Mean, Subcooling: new(3.0)}
	}, cycle.Surplus, "condensation.reference"},

	{"efficiency zero", func(_ *testing.T, r *cycle.Request) { r.Compressor.IsentropicEfficiency = new(0.0) }, cycle.OutOfBounds, "compressor.isentropic_efficiency"},
	{"efficiency above 1", func(_ *testing.T, r *cycle.Request) { r.Compressor.IsentropicEfficiency = new(1.0001) }, cycle.OutOfBounds, "compressor.isentropic_efficiency"},
	{"volumetric efficiency above 1", func(_ *testing.T, r *cycle.Request) { r.Compressor.VolumetricEfficiency = new(1.1) }, cycle.OutOfBounds, "compressor.volumetric_efficiency"},
	{"all power lost", func(_ *testing.T, r *cycle.Request) { r.Compressor.HeatLossFraction = new(1.0) }, cycle.OutOfBounds, "compressor.heat_loss_fraction"},
	{"efficiency and discharge temperature", func(_ *testing.T, r *cycle.Request) { r.Compressor.DischargeTemperature = new(340.0) }, cycle.Surplus, "compressor.discharge_temperature"},
	{"discharge colder than isentropic", func(_ *testing.T, r *cycle.Request) {
		r.Compressor.IsentropicEfficiency, r.Compressor.DischargeTemperature = nil, new(320.0)
	}, cycle.ImpossibleMeasurement, "compressor.discharge_temperature"},
	{"liquid discharge", func(_ *testing.T, r *cycle.Request) {
		r.Compressor.IsentropicEfficiency, r.Compressor.DischargeTemperature = nil, new(280.0)
	}, cycle.ImpossibleMeasurement, "compressor.discharge_temperature"},

	{"two kinds of drop", func(_ *testing.T, r *cycle.Request) {
		r.SuctionLine.Drop = cycle.Drop{Pressure: 1e3, TemperatureEquivalent: 1}
	}, cycle.Surplus, "suction_line.temperature_drop_equivalent"},
	{"negative drop", func(_ *testing.T, r *cycle.Request) { r.Evaporator.Pressure = -1 }, cycle.OutOfBounds, "evaporator.pressure_drop"},
	{"drop of all pressure", func(_ *testing.T, r *cycle.Request) { r.SuctionLine.Pressure = 1e6 }, cycle.OutOfBounds, "suction_line.pressure_drop"},
	{"drop below the saturation curve", func(_ *testing.T, r *cycle.Request) { r.SuctionLine.TemperatureEquivalent = 250 }, cycle.NoState, "suction_line.temperature_drop_equivalent"},
	{"drop beyond the critical point", func(_ *testing.T, r *cycle.Request) { r.Condenser.TemperatureEquivalent = 90 }, cycle.NoState, "condenser.temperature_drop_equivalent"},

	{"two sizes", func(_ *testing.T, r *cycle.Request) { r.Size.MassFlow = new(1.0) }, cycle.Surplus, "size"},
	{"no size in size", func(_ *testing.T, r *cycle.Request) { r.Size = &cycle.Size{} }, cycle.Missing, "size"},
	{"size zero", func(_ *testing.T, r *cycle.Request) { r.Size.Heating = new(0.0) }, cycle.OutOfBounds, "size.heating"},

	{"condensing above critical", func(_ *testing.T, r *cycle.Request) { r.Condensation.Temperature = new(370.0) }, cycle.AboveCritical, "condensation.temperature"},
	{"condensing pressure above critical", func(_ *testing.T, r *cycle.Request) {
		r.Condensation = cycle.Condensation{Pressure: new(5e6), Subcooling: new(3.0)}
	}, cycle.AboveCritical, "condensation.pressure"},
	{"evaporating above critical", func(_ *testing.T, r *cycle.Request) { r.Evaporation.Temperature = new(370.0) }, cycle.AboveCritical, "evaporation.temperature"},
	{"evaporation at condensation", func(_ *testing.T, r *cycle.Request) { r.Evaporation.Temperature = new(313.15) }, cycle.PressuresOutOfOrder, "evaporation.temperature"},
	{"evaporation above condensation", func(_ *testing.T, r *cycle.Request) { r.Evaporation.Temperature = new(330.0) }, cycle.PressuresOutOfOrder, "evaporation.temperature"},
	{"evaporation below the triple point", func(_ *testing.T, r *cycle.Request) { r.Evaporation.Temperature = new(80.0) }, cycle.NoState, "evaporation.temperature"},
	{"superheat beyond validity", func(_ *testing.T, r *cycle.Request) { r.Evaporation.Superheat = new(1000.0) }, cycle.NoState, "evaporation.superheat"},
	{"subcooling into the solid", func(_ *testing.T, r *cycle.Request) { r.Condensation.Subcooling = new(250.0) }, cycle.NoState, "condensation.subcooling"},
	{"source colder than the evaporator", func(_ *testing.T, r *cycle.Request) { r.SourceTemperature = new(255.0) }, cycle.SecondLaw, "source_temperature"},
	{"sink hotter than the condenser", func(_ *testing.T, r *cycle.Request) { r.SinkTemperature = new(330.0) }, cycle.SecondLaw, "sink_temperature"},
	{"suction line warmed by the cold", func(_ *testing.T, r *cycle.Request) {
		r.AmbientTemperature, r.SuctionLine.TemperatureRise = new(260.0), 10
	}, cycle.SecondLaw, "ambient_temperature"},
	{"condensed in the suction line", func(_ *testing.T, r *cycle.Request) {
		r.SuctionLine.TemperatureRise, r.AmbientTemperature = -6, new(250.0)
	}, cycle.NoSolution, "suction_line.temperature_rise"},
	{"condensed in the discharge line", func(_ *testing.T, r *cycle.Request) { r.DischargeLine.TemperatureDrop = 40 }, cycle.NoSolution, "discharge_line.temperature_drop"},
	{"boiled in the liquid line", func(_ *testing.T, r *cycle.Request) {
		r.LiquidLine.TemperatureChange, r.AmbientTemperature = 4, new(330.0)
	}, cycle.NoSolution, "liquid_line.temperature_change"},
	{"discharge at the dew point", func(_ *testing.T, r *cycle.Request) {
		r.Compressor.IsentropicEfficiency, r.Compressor.DischargeTemperature = nil, new(313.15)
	}, cycle.ImpossibleMeasurement, "compressor.discharge_temperature"},

	{"gas cooler in a single stage", func(_ *testing.T, r *cycle.Request) { r.GasCooler = &cycle.GasCooler{} }, cycle.Surplus, "gas_cooler"},
	{"exchanger in a single stage", func(_ *testing.T, r *cycle.Request) { r.InternalExchanger = &cycle.InternalExchanger{} }, cycle.Surplus, "internal_exchanger"},
	{"intermediate pressure in a single stage", func(_ *testing.T, r *cycle.Request) { r.Intermediate = &cycle.Intermediate{} }, cycle.Surplus, "intermediate"},
	{"second compressor in a single stage", func(_ *testing.T, r *cycle.Request) { r.SecondCompressor = &cycle.Compressor{} }, cycle.Surplus, "second_compressor"},
	{"economiser in a single stage", func(_ *testing.T, r *cycle.Request) { r.Economiser = &cycle.Economiser{} }, cycle.Surplus, "economiser"},
	{"intercooler in a single stage", func(_ *testing.T, r *cycle.Request) { r.Intercooler = &cycle.Intercooler{} }, cycle.Surplus, "intercooler"},
	{"cascade in a single stage", func(_ *testing.T, r *cycle.Request) { r.Cascade = &cycle.CascadeCircuit{} }, cycle.Surplus, "cascade"},
	{"ejector in a single stage", func(_ *testing.T, r *cycle.Request) { r.Ejector = &cycle.EjectorGeometry{} }, cycle.Surplus, "ejector"},
	{"combined single stage", func(_ *testing.T, r *cycle.Request) { r.With = []cycle.Layout{cycle.SuctionExchanger} }, cycle.Surplus, "with"},
}

func TestRefusals(t *testing.T) {
	for _, k := range refusals {
		r := heatPump(t)
		k.change(t, r)
		checkRefusal(t, k, r)
	}
}

func checkRefusal(t *testing.T, k refusal, r *cycle.Request) {
	t.Helper()
	s, err := cycle.Solve(t.Context(), r)
	e, ok := errors.AsType[*cycle.RefusedError](err)
	if !ok || s != nil {
		t.Errorf("%s: got %v and %v, want a refusal", k.name, s, err)
		return
	}
	if !slices.ContainsFunc(e.Refusals, func(f cycle.Refusal) bool { return f.Code == k.code && f.Field == k.field }) {
		t.Errorf("%s: refused with %v, want %s in %s", k.name, err, k.code, k.field)
	}
	for _, f := range e.Refusals {
		if f.Message.String() == "" {
			t.Errorf("%s: a refusal without words", k.name)
		}
	}
}

// TestAllFieldsAreNamed: a request with several faults hears of all of them at once.
func TestAllFieldsAreNamed(t *testing.T) {
	r := heatPump(t)
	r.Evaporation.Superheat = new(-1.0)
	r.Compressor.IsentropicEfficiency = new(2.0)
	r.Size.Heating = new(-5.0)
	_, err := cycle.Solve(t.Context(), r)
	e, ok := errors.AsType[*cycle.RefusedError](err)
	if !ok || len(e.Refusals) != 3 {
		t.Fatalf("got %v, want three refusals", err)
	}
}

// TestRefusalCarriesTheCause: the property model's own error, with its limits, is within reach.
func TestRefusalCarriesTheCause(t *testing.T) {
	r := heatPump(t)
	r.Evaporation.Temperature = new(80.0)
	_, err := cycle.Solve(t.Context(), r)
	e, ok := errors.AsType[*props.RangeError](err)
	if !ok || e.Property != props.Temperature || e.Value != 80 {
		t.Errorf("got %v, want the range of the temperature", err)
	}
}

func TestMessageSpeaksTheCallersUnits(t *testing.T) {
	r := heatPump(t)
	r.Condensation.Temperature = new(370.0)
	_, err := cycle.Solve(t.Context(), r)
	e, ok := errors.AsType[*cycle.RefusedError](err)
	if !ok {
		t.Fatal(err)
	}
	const want = "condensation must be below the critical point, <t> and <p>; above it the transcritical layout has a gas cooler"
	got := e.Refusals[0].Message.Render(func(n cycle.Number) string {
		return map[cycle.Quantity]string{cycle.Temperature: "<t>", cycle.Pressure: "<p>"}[n.Quantity]
	})
	if got != want {
		t.Errorf("got %q", got)
	}
}
