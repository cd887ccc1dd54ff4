package props_test

import (
	"math"
	"testing"

	"dewmark/props"
)

// TestIdealGasLimit follows isotherms to low density, where every gas is ideal: the deviation must vanish in proportion
// to density.
func TestIdealGasLimit(t *testing.T) {
	for _, id := range catalogue(t).PureDesignations() {
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
