package props_test

import (
	"math"
	"testing"

	"dewmark/props"
)

// TestLeverRule checks that in the dome volume, enthalpy, entropy and internal energy are straight lines between the
// saturated phases, that these have equal Gibbs energies, and that all ways into the dome agree.
func TestLeverRule(t *testing.T) {
	for _, id := range catalogue(t).PureDesignations() {
		r := refrigerant(t, id)
		c := r.Critical()
		Tmin, _ := r.SaturationLimits()
		for i := range 12 {
			T := Tmin + (0.9999*c.T-Tmin)*float64(i)/11
			l, v := mustState(t)(r.BubblePoint(T)), mustState(t)(r.DewPoint(T))
			if l.Quality != 0 || v.Quality != 1 || l.Phase != props.Liquid || v.Phase != props.Vapour || l.P != v.P || l.T != T || v.T != T {
				t.Errorf("%s: %+v, %+v are not the ends of the dome at %g K", id, l, v, T)
			}
			latent := v.H - l.H
			// The Gibbs energies are differences of numbers as large as h and T s, and in the cold of noise in the liquid.
			noise := 1e-12 * (math.Abs(l.H) + T*math.Abs(l.S) + 1e4)
			if id == "R22" {
				noise *= 10 // see the exceptions in props/saturation
			}
			if !(math.Abs((l.H-T*l.S)-(v.H-T*v.S)) < noise) {
				t.Errorf("%s at %g K: Gibbs energies differ by %g J/kg", id, T, (l.H-T*l.S)-(v.H-T*v.S))
			}
			for _, x := range []float64{1e-9, 0.01, 0.25, 0.5, 0.9, 1 - 1e-9} {
				s := mustState(t)(r.TemperatureQuality(T, x))
				if s.Phase != props.TwoPhase || s.Quality != x {
					t.Errorf("%s: quality %g at %g K is %s, %g", id, x, T, s.Phase, s.Quality)
				}
				for _, c := range []struct {
					name       string
					l, v, s    float64
					resolution float64
				}{
					{"volume", l.V(), v.V(), s.V(), v.V()},
					{"enthalpy", l.H, v.H, s.H, latent},
					{"entropy", l.S, v.S, s.S, latent / T},
					{"internal energy", l.U, v.U, s.U, latent},
				} {
					want := c.l + x*(c.v-c.l)
					if !near(s.H-s.U, s.P*s.V(), 1e-12, math.Abs(s.H)) || !near(c.s, want, 1e-12, c.resolution) {
						t.Errorf("%s, %s: %s %.15g, lever rule gives %.15g", id, where(s), c.name, c.s, want)
					}
				}
				for name, y := range map[string]float64{"cp": s.Cp, "cv": s.Cv, "w": s.W, "(dp/d rho)": s.DPDRho} {
					if !math.IsNaN(y) {
						t.Errorf("%s, %s: %s = %g, which does not exist there", id, where(s), name, y)
					}
				}
				other := mustState(t)(r.TemperatureDensity(T, s.Rho))
				if !(math.Abs(other.Quality-x) < 1e-9) || other.Phase != props.TwoPhase {
					t.Errorf("%s: density of quality %g gives %s, quality %g", id, x, other.Phase, other.Quality)
				}
				other = mustState(t)(r.PressureQuality(s.P, x))
				if !near(other.T, T, 1e-11, 0) || !near(other.H, s.H, 1e-9, latent) {
					t.Errorf("%s: pressure of %g K gives %.15g K, h %g for %g", id, T, other.T, other.H, s.H)
				}
			}
		}
	}
}

// mustState fails the test when a state cannot be had.
func mustState(t testing.TB) func(props.State, error) props.State {
	return func(s props.State, err error) props.State {
		t.Helper()
		if err != nil {
			t.Fatal(err)
		}
		return s
	}
}
