package readings_test

import (
	"math"
	"testing"

	"dewmark/service/cycle"
	"dewmark/service/readings"
)

func stateAt(t *testing.T, r *readings.Result, label string) readings.StateAt {
	t.Helper()
	for _, s := range r.States {
		if s.Label == label {
			return s
		}
	}
	t.Fatalf("no state %s", label)
	return readings.StateAt{}
}

// A superheat within twice its uncertainty leaves the quality unknown: no enthalpy is invented, what hangs on it is not
// answered, and the water side answers all the same.
func TestWetSuctionIsUnknown(t *testing.T) {
	for _, name := range []string{"R290", "R454C"} {
		fluid := refrigerant(t, name)
		s := heatPump(t, fluid)
		for superheat, known := range map[float64]bool{-3: false, 0: false, 0.9: false, 1.2: true} {
			s.Set(readings.SuctionTemperature, 273.15+superheat)
			u := map[readings.Reading]readings.Uncertainty{
				readings.SuctionTemperature: {Standard: new(0.5)}, readings.SuctionPressure: {Standard: new(1.0)},
			}
			r := evaluate(t, evaluator(t, readings.Installation{Refrigerant: fluid, Uncertainties: u}, nil), s)
			at := stateAt(t, r, "1")
			if at.Known != known || math.IsNaN(at.State.H) == known || math.IsNaN(at.State.T) {
				t.Errorf("%s, superheat %g K: known %v, %+v", name, superheat, at.Known, at.State)
			}
			if cautioned(r, readings.QualityUnknown) == known {
				t.Errorf("%s, superheat %g K: cautions %v", name, superheat, r.Cautions)
			}
			if e := r.Figure(readings.FigureSuperheat); !(math.Abs(e.Value-superheat) < 1e-6) || !(math.Abs(e.Standard-0.5) < 1e-3) {
				t.Errorf("%s: superheat %+v, want %g", name, e, superheat)
			}
			if r.Figure(readings.FigureIsentropicEfficiency).Known() != known {
				t.Errorf("%s, superheat %g K: efficiency %v", name, superheat, r.Figure(readings.FigureIsentropicEfficiency).Value)
			}
			for _, f := range []readings.Figure{readings.FigureHeatingCapacity, readings.FigureCoolingCapacity, readings.FigureCOPHeating} {
				if !r.Figure(f).Known() {
					t.Errorf("%s, superheat %g K: no %s, although water, power and liquid are read", name, superheat, f)
				}
			}
		}
	}
}

// Liquid without certain subcooling may have flashed; above the critical pressure there is nothing to flash.
func TestFlashedLiquidIsUnknown(t *testing.T) {
	fluid := refrigerant(t, "R290")
	s := heatPump(t, fluid)
	s.Set(readings.LiquidTemperature, 318.15-0.3)
	r := evaluate(t, evaluator(t, readings.Installation{Refrigerant: fluid}, nil), s)
	if stateAt(t, r, "4").Known || r.Figure(readings.FigureMassFlow).Known() == false {
		t.Errorf("liquid known %v, flow %v: the compressor balance does not need the liquid", stateAt(t, r, "4").Known, r.Figure(readings.FigureMassFlow))
	}
	fluid = refrigerant(t, "R744")
	r = evaluate(t, evaluator(t, readings.Installation{Refrigerant: fluid, Layout: cycle.Transcritical}, nil), heatPump(t, fluid))
	if !stateAt(t, r, "4").Known || r.Figure(readings.FigureSubcooling).Known() || r.Figure(readings.FigureCondensationTemperature).Known() {
		t.Error("above the critical pressure a state is known, and there is no subcooling and no condensation")
	}
	if !r.Figure(readings.FigureCOPHeating).Known() {
		t.Error("no COP of a transcritical machine")
	}
}

// For a blend superheat counts from the dew line and subcooling from the bubble line.
func TestGlide(t *testing.T) {
	fluid := refrigerant(t, "R407C")
	s := heatPump(t, fluid)
	r := evaluate(t, evaluator(t, readings.Installation{Refrigerant: fluid}, nil), s)
	p2, _ := s.Value(readings.DischargePressure)
	dew, err := fluid.DewPointAtPressure(p2)
	if err != nil {
		t.Fatal(err)
	}
	for f, want := range map[readings.Figure]float64{
		readings.FigureSuperheat: 8, readings.FigureSubcooling: 5, readings.FigureEvaporationTemperature: 273.15, readings.FigureCondensationTemperature: dew.T,
	} {
		if got := r.Figure(f).Value; !(math.Abs(got-want) < 1e-6) {
			t.Errorf("%s %.8g, want %.8g", f, got, want)
		}
	}
	if !(dew.T > 318.15+3) {
		t.Errorf("R407C has no glide: dew %.2f K", dew.T)
	}
}
