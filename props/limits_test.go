package props_test

import (
	"math"
	"testing"

	"dewmark/props"
)

// TestIdealGasLimit follows isotherms to low density, where every gas is ideal: the deviation must vanish in proportion
// to density.
func TestIdealGasLimit(t *testing.T) {
	for _, id := range catalogue(t).Designations() {
		r := refrigerant(t, id)
		l, R := r.Limits(), gasConstant(r)
		cold := math.Max(l.TemperatureMin, 0.5*r.Critical().T) // colder, the thinnest vapour condenses
		for i := range 8 {
			T := cold + (l.TemperatureMax-cold)*float64(i)/7
			base, err := r.TemperatureDensity(T, 1e-8)
			if err != nil {
				t.Fatalf("%s: %v", id, err)
			}
			for _, rho := range []float64{1e-8, 1e-7, 1e-6} {
				s, err := r.TemperatureDensity(T, rho)
				if err != nil {
					t.Fatalf("%s: %v", id, err)
				}
				// Second virial coefficients reach 0.05 m3/kg (water at 50 °C), and more by their second derivative in T.
				within := 5*rho + 1e-9
				for _, c := range []struct {
					name      string
					got, want float64
				}{
					{"Z", s.Z, 1},
					{"p", s.P, rho * R * T},
					{"cp - cv", s.Cp - s.Cv, R},
					{"w2", s.W * s.W, s.Cp / s.Cv * R * T},
					{"isentropic exponent", s.IsentropicExponent(), s.Cp / s.Cv},
					{"(dp/d rho)", s.DPDRho, R * T},
					{"(dp/dT)", s.DPDT, rho * R},
					{"expansivity", s.Expansivity(), 1 / T},
					{"compressibility", s.IsothermalCompressibility(), 1 / s.P},
					{"(h - h0)/(R T)", 1 + (s.H-base.H)/(R*T), 1},
					{"(u - u0)/(R T)", 1 + (s.U-base.U)/(R*T), 1},
					{"s + R ln rho", 1 + (s.S-base.S)/R + math.Log(rho/base.Rho), 1},
				} {
					if !near(c.got, c.want, within, 0) {
						t.Errorf("%s, %s: %s = %.12g, want %.12g within %.1e", id, where(s), c.name, c.got, c.want, within)
					}
				}
				if s.Phase != props.Vapour {
					t.Errorf("%s: %s", id, where(s))
				}
			}
		}
	}
}

// TestLeverRule checks that in the dome volume, enthalpy, entropy and internal energy are straight lines between the
// saturated phases, that these have equal Gibbs energies, and that all ways into the dome agree.
func TestLeverRule(t *testing.T) {
	for _, id := range catalogue(t).Designations() {
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

// TestDatums checks the agreed values of every datum and that differences between states do not depend on it.
func TestDatums(t *testing.T) {
	for _, id := range catalogue(t).Designations() {
		base := refrigerant(t, id)
		c, l := base.Critical(), base.Limits()
		states := func(r *props.Refrigerant) []props.State {
			return []props.State{
				mustState(t)(r.TemperatureDensity(0.9*c.T, 0.01*c.Rho)),
				mustState(t)(r.TemperatureQuality(0.8*c.T, 0.3)),
				mustState(t)(r.TemperatureDensity(math.Min(1.01*c.T, l.TemperatureMax), 0.8*c.Rho)),
			}
		}
		want := states(base)
		for _, d := range base.Datums() {
			r, err := catalogue(t).Refrigerant(id, d)
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
func reference(t *testing.T, r *props.Refrigerant, d props.Datum) (ref props.State, h, s, u float64) {
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
