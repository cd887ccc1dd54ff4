package props_test

import (
	"math"
	"testing"

	"dewmark/props"
)

// TestDatums checks the agreed values of every datum and that differences between states do not depend on it.
func TestDatums(t *testing.T) {
	for _, id := range catalogue(t).PureDesignations() {
		base := refrigerant(t, id)
		c, l := base.Critical(), base.Limits()
		states := func(r *props.Pure) []props.State {
			return []props.State{
				mustState(t)(r.TemperatureDensity(0.9*c.T, 0.01*c.Rho)),
				mustState(t)(r.TemperatureQuality(0.8*c.T, 0.3)),
				mustState(t)(r.TemperatureDensity(math.Min(1.01*c.T, l.TemperatureMax), 0.8*c.Rho)),
			}
		}
		want := states(base)
		for _, d := range base.Datums() {
			r, err := catalogue(t).Pure(id, d)
			if err != nil {
				t.Fatal(err)
			}
			if r.Datum() != d {
				t.Errorf("%s: datum %s, asked for %s", id, r.Datum(), d)
			}
			got := states(r)
			for i := range got {
				dH, dS := got[i].H-got[0].H, got[i].S-got[0].S
				if !near(dH, want[i].H-want[0].H, 1e-12, 1e6) || !near(dS, want[i].S-want[0].S, 1e-12, 1e4) || !near(got[i].U-got[0].U, want[i].U-want[0].U, 1e-12, 1e6) {
					t.Errorf("%s, %s: differences of %g J/kg, %g J/(kg K); %g, %g from %s", id, d, dH, dS, want[i].H-want[0].H, want[i].S-want[0].S, base.Datum())
				}
				if got[i].T != want[i].T || got[i].P != want[i].P || got[i].Rho != want[i].Rho || math.Float64bits(got[i].Cp) != math.Float64bits(want[i].Cp) {
					t.Errorf("%s, %s: %+v, want the state of %+v", id, d, got[i], want[i])
				}
			}
			ref, h, s, u := reference(t, r, d)
			for name, y := range map[string][2]float64{"h": {ref.H, h}, "s": {ref.S, s}, "u": {ref.U, u}} {
				if !math.IsNaN(y[1]) && !(math.Abs(y[0]-y[1]) < 1e-7) {
					t.Errorf("%s, %s: %s at its reference point is %.12g, want %g", id, d, name, y[0], y[1])
				}
			}
		}
	}
}

// reference returns the saturated liquid from which a datum counts and its agreed h, s and u, NaN where none is agreed:
// IIR and ASHRAE as every handbook has them, the triple point as in IAPWS R6-95(2018).
func reference(t *testing.T, r *props.Pure, d props.Datum) (ref props.State, h, s, u float64) {
	t.Helper()
	nan := math.NaN()
	switch d {
	case props.IIR:
		return mustState(t)(r.BubblePoint(273.15)), 200e3, 1e3, nan
	case props.ASHRAE:
		return mustState(t)(r.BubblePoint(233.15)), 0, 0, nan
	case props.NBP:
		return mustState(t)(r.BubblePointAtPressure(101325)), 0, 0, nan
	default:
		T, _ := r.SaturationLimits()
		return mustState(t)(r.BubblePoint(T)), nan, 0, 0
	}
}
