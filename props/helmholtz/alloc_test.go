package helmholtz_test

import (
	"testing"

	"dewmark/props/helmholtz"
)

func TestNoAllocation(t *testing.T) {
	for _, s := range equations(t) {
		T, rho := s.Critical.Temperature*0.8, s.Critical.Density*0.1
		n := testing.AllocsPerRun(20, func() {
			var iso helmholtz.Isotherm
			iso.Set(s.eq, T)
			r := iso.Residual(rho)
			s.eq.At(T, rho, &iso.Ideal, &r)
			sink += r.A + iso.ThirdDensity(rho)
		})
		if n != 0 {
			t.Errorf("%s: %g allocations", s.ID, n)
		}
	}
}
