package cycle_test

import (
	"slices"
	"testing"

	"dewmark/props"
	"dewmark/service/cycle"
)

func TestCompleteRequestRaisesNoCaution(t *testing.T) {
	if s := solve(t, heatPump(t)); len(s.Cautions) > 0 {
		t.Errorf("got %v", s.Cautions)
	}
}

func TestCautions(t *testing.T) {
	for _, k := range []struct {
		name   string
		change func(r *cycle.Request)
		code   cycle.CautionCode
		field  string
		label  string
	}{
		{"no size", func(r *cycle.Request) { r.Size = nil }, cycle.PerUnitFlow, "size", ""},
		{"no efficiency", func(r *cycle.Request) { r.Compressor.IsentropicEfficiency = nil }, cycle.Assumed, "compressor.isentropic_efficiency", ""},
		{"no volumetric efficiency", func(r *cycle.Request) { r.Compressor.VolumetricEfficiency = nil }, cycle.Assumed, "compressor.volumetric_efficiency", ""},
		{"no heat loss", func(r *cycle.Request) { r.Compressor.HeatLossFraction = nil }, cycle.Assumed, "compressor.heat_loss_fraction", ""},
		{"no superheat", func(r *cycle.Request) { r.Evaporation.Superheat = nil }, cycle.Assumed, "evaporation.superheat", ""},
		{"no subcooling", func(r *cycle.Request) { r.Condensation.Subcooling = nil }, cycle.Assumed, "condensation.subcooling", ""},
		{"no ambient", func(r *cycle.Request) { r.AmbientTemperature = nil }, cycle.Assumed, "ambient_temperature", ""},
		{"wet suction", func(r *cycle.Request) {
			r.Evaporation.Superheat, r.Evaporation.OutletQuality = nil, new(0.95)
		}, cycle.WetSuction, "", "1"},
		{"very wet suction", func(r *cycle.Request) {
			r.Evaporation.Superheat, r.Evaporation.OutletQuality = nil, new(0.8)
		}, cycle.WetDischarge, "", "2"},
		{"hot discharge", func(r *cycle.Request) { r.Compressor.IsentropicEfficiency = new(0.25) }, cycle.HotDischarge, "", "2"},
		{"low pressure", func(r *cycle.Request) { r.Evaporation.Temperature = new(230.0) }, cycle.BelowAtmosphere, "", "1"},
		{"high ratio", func(r *cycle.Request) {
			r.Evaporation.Temperature, r.Condensation.Temperature = new(240.0), new(333.15)
		}, cycle.HighPressureRatio, "", "2"},
		{"near critical", func(r *cycle.Request) { r.Condensation.Temperature = new(369.2) }, cycle.NearCritical, "condensation.temperature", "4"},
		{"liquid colder than the sink", func(r *cycle.Request) { r.Condensation.Subcooling = new(10.0) }, cycle.SubcoolingBelowSink, "sink_temperature", "4"},
		{"liquid colder than the source", func(r *cycle.Request) { r.Condensation.Subcooling = new(42.0) }, cycle.SubcoolingBelowSource, "source_temperature", "4"},
		{"liquid colder than it evaporates", func(r *cycle.Request) {
			r.Condensation.Subcooling, r.SinkTemperature = new(48.0), new(270.0)
		}, cycle.SubcooledBelowEvaporation, "", "5"},
		{"flash gas", func(r *cycle.Request) { r.LiquidLine.Pressure = 200e3 }, cycle.FlashBeforeValve, "", "5"},
		{"vapour warmer than the source", func(r *cycle.Request) { r.Evaporation.Superheat = new(9.0) }, cycle.OutletAboveSource, "source_temperature", "7"},
		{"beyond validity", func(r *cycle.Request) {
			r.Refrigerant = r.Refrigerant.(*props.Pure).Extrapolate()
			r.Compressor.IsentropicEfficiency = new(0.06)
		}, cycle.Extrapolated, "", "2"},
	} {
		r := heatPump(t)
		k.change(r)
		s, err := cycle.Solve(t.Context(), r)
		if err != nil {
			t.Errorf("%s: %v", k.name, err)
			continue
		}
		if !slices.ContainsFunc(s.Cautions, func(c cycle.Caution) bool {
			return c.Code == k.code && c.Field == k.field && c.Label == k.label
		}) {
			t.Errorf("%s: got %v, want %s of %q at %q", k.name, s.Cautions, k.code, k.field, k.label)
		}
		for _, c := range s.Cautions {
			if c.Message.String() == "" {
				t.Errorf("%s: a caution without words", k.name)
			}
		}
	}
}

// TestThinAir: what counts is the air around the machine. At 1500 m it has 84.6 kPa by ISO 2533 (from memory).
func TestThinAir(t *testing.T) {
	r := heatPump(t)
	r.Evaporation.Temperature, r.AmbientPressure = new(230.0), new(84.6e3)
	for _, c := range solve(t, r).Cautions {
		if c.Code == cycle.BelowAtmosphere {
			t.Errorf("boiling a degree below the normal boiling point: %s", c.Message)
		}
	}
}

// TestCompositionShift: a vessel parts a blend, an economiser that boils a branch of it away does not. Taking both phases as
// the blend itself makes the vessel destroy entropy, for which no request is refused.
func TestCompositionShift(t *testing.T) {
	c, err := catalogue()
	if err != nil {
		t.Fatal(err)
	}
	blend, err := c.Refrigerant("R407C", props.IIR)
	if err != nil {
		t.Fatal(err)
	}
	for layout, want := range map[cycle.Layout]bool{
		cycle.SingleStage: false, cycle.EconomisedSubcooler: false, cycle.EconomisedFlash: true, cycle.TwoStageFlash: true, cycle.ParallelCompression: true,
	} {
		r := heatPump(t)
		r.Refrigerant, r.Layout = blend, layout
		if layout == cycle.ParallelCompression {
			r.Intermediate = &cycle.Intermediate{Temperature: new(290.0)}
		}
		if got := slices.ContainsFunc(solve(t, r).Cautions, func(c cycle.Caution) bool { return c.Code == cycle.CompositionShift }); got != want {
			t.Errorf("%s: caution %t, want %t", layout, got, want)
		}
	}
}

// TestWetSuctionCOP: the compressor works with the two-phase state it is given.
func TestWetSuctionCOP(t *testing.T) {
	r := heatPump(t)
	r.Evaporation.Superheat, r.Evaporation.OutletQuality = nil, new(0.9)
	s := solve(t, r)
	if x := at(t, s, "1"); x.Phase != props.TwoPhase || !near(x.Quality, 0.9, 1e-12, 0) {
		t.Errorf("suction is %s of quality %g", x.Phase, x.Quality)
	}
	checkAccounts(t, s)
	r.Evaporation.OutletQuality = new(1.0)
	saturated := solve(t, r)
	r.Evaporation.OutletQuality, r.Evaporation.Superheat = nil, new(0.0)
	if got, want := saturated.Performance, solve(t, r).Performance; !near(got.COPHeating, want.COPHeating, 1e-12, 0) {
		t.Errorf("quality 1 and superheat 0 give %g and %g", got.COPHeating, want.COPHeating)
	}
}
