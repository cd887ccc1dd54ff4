package props_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"dewmark/props"
)

// TestDerived holds the derivatives against differences of p-h states, and the fundamental derivative against the ideal
// gas, where it follows from the isentropic exponent.
func TestDerived(t *testing.T) {
	rng := rand.New(rand.NewPCG(7, 7))
	checked := map[props.Phase]int{}
	for _, id := range catalogue(t).PureDesignations() {
		r := refrigerant(t, id)
		for range 60 {
			s, ok := sample(r, rng)
			c := r.Critical()
			if !ok || math.Abs(s.T/c.T-1) < 0.05 || math.IsNaN(s.H) {
				continue // differences are too coarse where everything bends
			}
			d := r.Derived(s)
			dh, dp := 1e-5*(math.Abs(s.H)+1e5), 1e-5*s.P
			lo, e1 := r.PressureEnthalpy(s.P, s.H-dh)
			hi, e2 := r.PressureEnthalpy(s.P, s.H+dh)
			down, e3 := r.PressureEnthalpy(s.P-dp, s.H)
			up, e4 := r.PressureEnthalpy(s.P+dp, s.H)
			if e1 != nil || e2 != nil || e3 != nil || e4 != nil || lo.Phase != s.Phase || hi.Phase != s.Phase || down.Phase != s.Phase || up.Phase != s.Phase {
				continue // at an edge
			}
			checked[s.Phase]++
			// Volume, unlike density, is straight in enthalpy inside the dome.
			byH, byP := -s.Rho*s.Rho*(hi.V()-lo.V())/(2*dh), -s.Rho*s.Rho*(up.V()-down.V())/(2*dp)
			if !(math.Abs(d.DensityByEnthalpy/byH-1) < 1e-4) {
				t.Errorf("%s at %g K, %g kg/m3: (d rho/dh) = %g, differences give %g", id, s.T, s.Rho, d.DensityByEnthalpy, byH)
			}
			// In a cold liquid the difference of densities over so small a change of pressure is rounding.
			if noise := 4e-15 * s.Rho / dp; !(math.Abs(d.DensityByPressure-byP) < 1e-4*math.Abs(byP)+noise) {
				t.Errorf("%s at %g K, %g kg/m3: (d rho/dp) = %g, differences give %g", id, s.T, s.Rho, d.DensityByPressure, byP)
			}
		}
		l := r.Limits()
		// An ideal gas has w^2 = kappa R T and so 1 + (kappa-1)/2 (1 + d ln kappa/d ln T).
		kappa := func(T float64) float64 {
			s, err := r.TemperatureDensity(T, 1e-7)
			if err != nil {
				t.Fatal(err)
			}
			return s.IsentropicExponent()
		}
		T := 0.9 * l.TemperatureMax
		thin, err := r.TemperatureDensity(T, 1e-7)
		if err != nil {
			t.Fatal(err)
		}
		want := 1 + (kappa(T)-1)/2*(1+math.Log(kappa(T*1.001)/kappa(T*0.999))/0.002)
		if g := r.Derived(thin).Fundamental; !(math.Abs(g-want) < 1e-6) {
			t.Errorf("%s: fundamental derivative of the thin gas %g, want %g", id, g, want)
		}
	}
	if checked[props.Vapour] < 200 || checked[props.Liquid] < 200 || checked[props.TwoPhase] < 200 {
		t.Errorf("too few states checked: %v", checked)
	}
}
