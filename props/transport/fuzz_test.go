package transport

import (
	"math"
	"testing"
)

// A coefficient file of any content is refused or makes a model that never panics.
func FuzzRecords(f *testing.F) {
	for _, n := range []string{"R32", "R22", "R23", "R152a", "R290", "R718", "R717", "R1130(E)"} {
		f.Add([]byte(refrigerants()[n].record.Transport))
	}
	fluid := refrigerants()["R32"].fluid
	references := []*Model{refrigerants()["R134a"].Model, refrigerants()["R290"].Model}
	f.Fuzz(func(_ *testing.T, records []byte) {
		m, err := New(fluid, records, references...)
		if err != nil {
			return
		}
		for _, rho := range []float64{0, 50, 20000} {
			eta, lambda, err := m.ViscosityAndConductivity(m.State(300, rho))
			if err == nil && !(eta.Value > 0 && lambda.Value > 0) {
				panic("a value that is not positive without an error")
			}
			_, _ = eta.Cautions(), lambda.Cautions()
		}
		_, _ = m.SurfaceTension(300, 351)
	})
}

// Any temperature and density give positive, finite values or an error.
func FuzzState(f *testing.F) {
	f.Add(0, 300.0, 100.0)
	f.Add(3, 647.096, 17873.0)
	f.Add(20, math.NaN(), math.Inf(1))
	all := names()
	f.Fuzz(func(t *testing.T, which int, T, rho float64) {
		r := refrigerants()[all[uint(which)%uint(len(all))]]
		if !(T > 0 && rho >= 0) || math.IsInf(T, 0) || math.IsInf(rho, 0) {
			return // the equation of state has no such state
		}
		eta, lambda, err := r.ViscosityAndConductivity(r.State(T, rho))
		if err == nil && !(eta.Value > 0 && lambda.Value > 0 && finite(eta.Value) && finite(lambda.Value)) {
			t.Errorf("%s at %g K, %g mol/m3: %g, %g", r.fluid.Designation, T, rho, eta.Value, lambda.Value)
		}
	})
}
