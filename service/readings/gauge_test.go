package readings_test

import (
	"math"
	"testing"

	"dewmark/service/readings"
)

// Where pressures are gauge pressures, all of them move with the ambient pressure, and their difference does not.
func TestAmbientPressureMovesGauges(t *testing.T) {
	fluid := refrigerant(t, "R600a")
	s := heatPump(t, fluid)
	site := readings.Site{Gauges: true, AmbientPressure: new(95461.0), AmbientUncertainty: new(2000.0)}
	quiet := certain(1e-9)
	i := readings.Installation{Refrigerant: fluid, Site: site, Uncertainties: quiet}
	r := evaluate(t, evaluator(t, i, nil), s)
	// dp/dT of R600a at 0 °C is 5.56 kPa/K (computed with its equation of state for the domain's table).
	if u := r.Figure(readings.FigureSuperheat).Standard; !(math.Abs(u-2000/5.56e3) < 0.002) {
		t.Errorf("2 kPa are %.4f K of superheat, want %.4f", u, 2000/5.56e3)
	}
	if share := r.Figure(readings.FigureSuperheat).Budget[0]; share.Input != "ambient_pressure" || share.Assumed {
		t.Errorf("first in the budget: %+v", share)
	}
	i.Site = readings.Site{}
	r = evaluate(t, evaluator(t, i, nil), s)
	if u := r.Figure(readings.FigureSuperheat).Standard; !(u < 1e-6) {
		t.Errorf("absolute pressures leave %.2g K", u)
	}
	i.Site = readings.Site{Gauges: true, AmbientPressure: new(95461.0)}
	r = evaluate(t, evaluator(t, i, nil), s)
	if b := r.Figure(readings.FigureSuperheat).Budget[0]; b.Input != "ambient_pressure" || !b.Assumed || b.Standard != 1700 || !cautioned(r, readings.Assumed) {
		t.Errorf("weather is not assumed: %+v", b)
	}
}

// A sealed gauge counts from the standard atmosphere: on a mountain the pressure is higher than the ambient's sum says, by
// 101.325 - 79.495 kPa at 2000 m (ISO 2533), and weather does not matter.
func TestSealedGauge(t *testing.T) {
	fluid := refrigerant(t, "R134a")
	const ambient = 79495.0
	truth := heatPump(t, fluid)
	truth.Unset(readings.SinkVolumeFlow) // leaves one route, so that no weights move
	read := *truth
	p, _ := truth.Value(readings.SuctionPressure)
	read.Set(readings.SuctionPressure, p-101325+ambient) // what the sealed gauge shows, with the ambient pressure added
	want := evaluate(t, evaluator(t, readings.Installation{Refrigerant: fluid, Uncertainties: certain(1e-9)}, nil), truth)
	e := evaluator(t, readings.Installation{
		Refrigerant: fluid, Uncertainties: certain(1e-9),
		Site: readings.Site{Gauges: true, AmbientPressure: new(ambient), Sealed: []readings.Reading{readings.SuctionPressure}},
	}, nil)
	got := evaluate(t, e, &read)
	for _, f := range []readings.Figure{readings.FigureSuperheat, readings.FigureEvaporationTemperature, readings.FigureIsentropicEfficiency} {
		if a, b := got.Figure(f).Value, want.Figure(f).Value; !(math.Abs(a/b-1) < 1e-9) {
			t.Errorf("%s %.10g with a sealed gauge, %.10g with an absolute one", f, a, b)
		}
	}
	for _, b := range got.Figure(readings.FigureSuperheat).Budget {
		if b.Input == "ambient_pressure" {
			t.Error("weather moves a sealed gauge")
		}
	}
	if b := got.Figure(readings.FigureSubcooling).Budget; b[0].Input != "ambient_pressure" {
		t.Errorf("weather does not move the other gauge: %+v", b)
	}
}
