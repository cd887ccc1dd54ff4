package saturation_test

import (
	"math"
	"sync"
	"testing"

	"dewmark/props/data"
	"dewmark/props/helmholtz"
	"dewmark/props/internal/precise"
	"dewmark/props/saturation"
)

// subject is the curve of a refrigerant with its equation and the exact counterpart of that.
type subject struct {
	data.Record
	eq    *helmholtz.Equation
	exact *precise.Equation
	curve *saturation.Curve
}

func (s *subject) make() (*saturation.Curve, error) {
	return saturation.New(s.eq, saturation.Options{
		TMin: s.Validity.TemperatureMin, TCritical: s.Critical.Temperature, RhoCritical: s.Critical.Density, Acentric: s.Acentric,
	})
}

var all = sync.OnceValues(func() ([]*subject, error) {
	records, err := data.Load()
	if err != nil {
		return nil, err
	}
	var out []*subject
	for _, r := range records {
		c := helmholtz.Coefficients{
			GasConstant: r.GasConstant, ReducingTemperature: r.Reducing.Temperature, ReducingDensity: r.Reducing.Density,
			Ideal: r.Ideal, Residual: r.Residual,
		}
		eq, err := helmholtz.New(c)
		if err != nil {
			return nil, err
		}
		s := &subject{Record: r, eq: eq, exact: precise.New(c)}
		if s.curve, err = s.make(); err != nil {
			return nil, err
		}
		out = append(out, s)
	}
	return out, nil
})

func curves(t testing.TB) []*subject {
	t.Helper()
	out, err := all()
	if err != nil {
		t.Fatal(err)
	}
	return out
}

// temperatures returns n temperatures of a curve from its lowest to nearest of its critical one (a fraction), even in
// the square root of the distance to the critical one, in which the curve is smooth.
func (s *subject) temperatures(n int, nearest float64) []float64 {
	c := s.curve
	from, to := math.Sqrt(1-c.TMin/c.TCritical), math.Sqrt(1-nearest)
	out := make([]float64, n)
	for i := range out {
		x := from + (to-from)*float64(i)/float64(n-1)
		out[i] = math.Max(c.TMin, c.TCritical*(1-x*x))
	}
	return out
}
