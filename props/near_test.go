package props_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"dewmark/props"
)

// TestNear: a start, good or bad, does not change the answer.
func TestNear(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 9))
	n := 0
	for _, id := range catalogue(t).PureDesignations() {
		r := refrigerant(t, id)
		for range 100 {
			s, ok := sample(r, rng)
			start, ok2 := sample(r, rng)
			if !ok || !ok2 {
				continue
			}
			if rng.IntN(2) == 0 { // a good start
				start = s
				start.T *= 1 + 0.05*rng.NormFloat64()
				start.Rho *= 1 + 0.05*rng.NormFloat64()
			}
			for name, f := range map[string]func() (a, b props.State, e1, e2 error){
				"enthalpy": func() (a, b props.State, e1, e2 error) {
					a, e1 = r.PressureEnthalpy(s.P, s.H)
					b, e2 = r.PressureEnthalpyNear(s.P, s.H, start)
					return a, b, e1, e2
				},
				"entropy": func() (a, b props.State, e1, e2 error) {
					a, e1 = r.PressureEntropy(s.P, s.S)
					b, e2 = r.PressureEntropyNear(s.P, s.S, start)
					return a, b, e1, e2
				},
			} {
				a, b, e1, e2 := f()
				if (e1 == nil) != (e2 == nil) {
					t.Errorf("%s %s at %g K, %g Pa: %v without a start, %v with one", id, name, s.T, s.P, e1, e2)
					continue
				}
				n++
				// Both stop at rounding, which near the critical point moves the density.
				tol := 1e-9 / math.Min(1, math.Abs(a.DPDRho)/(1e-2*a.T*8.3/r.MolarMass()))
				if !(math.Abs(a.T/b.T-1) < 1e-9) || !(math.Abs(a.Rho/b.Rho-1) < tol) && a.Phase != props.TwoPhase || a.Phase != b.Phase {
					t.Errorf("%s %s at %g K, %g Pa: %s %.12g K, %.12g kg/m3 without a start, %s %.12g, %.12g with one", id, name, s.T, s.P, a.Phase, a.T, a.Rho, b.Phase, b.T, b.Rho)
				}
			}
		}
	}
	if n < 4000 {
		t.Errorf("only %d states compared", n)
	}
}
