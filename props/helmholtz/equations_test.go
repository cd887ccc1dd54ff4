package helmholtz_test

import (
	"encoding/json"
	"math"
	"math/rand/v2"
	"os"
	"sync"
	"testing"

	"dewmark/props/data"
	"dewmark/props/helmholtz"
	"dewmark/props/internal/precise"
	"dewmark/props/internal/printed"
)

// subject is an equation under test with its exact counterpart.
type subject struct {
	data.Record
	eq    *helmholtz.Equation
	exact *precise.Equation
}

func prepare(r data.Record) (*subject, error) {
	c := helmholtz.Coefficients{
		GasConstant: r.GasConstant, ReducingTemperature: r.Reducing.Temperature, ReducingDensity: r.Reducing.Density,
		Ideal: r.Ideal, Residual: r.Residual,
	}
	eq, err := helmholtz.New(c)
	return &subject{Record: r, eq: eq, exact: precise.New(c)}, err
}

var embedded = sync.OnceValues(func() ([]*subject, error) {
	records, err := data.Load()
	if err != nil {
		return nil, err
	}
	var out []*subject
	for _, r := range records {
		s, err := prepare(r)
		if err != nil {
			return nil, err
		}
		out = append(out, s)
	}
	return out, nil
})

// equations returns the equations of all refrigerants.
func equations(t testing.TB) []*subject {
	t.Helper()
	all, err := embedded()
	if err != nil {
		t.Fatal(err)
	}
	return all
}

func equation(t testing.TB, id string) *subject {
	t.Helper()
	for _, s := range equations(t) {
		if s.ID == id {
			return s
		}
	}
	return pseudoPure(t, id).subject
}

// blend is a pseudo-pure equation of Lemmon, Int. J. Thermophys. 24 (2003) 991, with its own bubble and dew pressures.
type blend struct {
	*subject
	bubble, dew [][2]float64
}

func pseudoPure(t testing.TB, id string) *blend {
	t.Helper()
	text, err := os.ReadFile(printed.File(t, "pseudo_pure", id+".json"))
	if err != nil {
		t.Fatal(err)
	}
	var r struct {
		data.Record
		Saturation struct {
			Bubble [][2]float64 `json:"bubble_pressure"`
			Dew    [][2]float64 `json:"dew_pressure"`
		} `json:"saturation"`
	}
	if err := json.Unmarshal(text, &r); err != nil {
		t.Fatal(err)
	}
	s, err := prepare(r.Record)
	if err != nil {
		t.Fatal(err)
	}
	return &blend{subject: s, bubble: r.Saturation.Bubble, dew: r.Saturation.Dew}
}

// random returns a temperature within the validity of the equation and a density up to its limit, as many thin as dense.
func (s *subject) random(rng *rand.Rand) (T, rho float64) {
	v := s.Validity
	T = v.TemperatureMin + (v.TemperatureMax-v.TemperatureMin)*rng.Float64()
	if rng.IntN(2) == 0 {
		return T, v.DensityMax * rng.Float64()
	}
	return T, v.DensityMax * math.Exp(-14*rng.Float64())
}

// seed makes the random states of a refrigerant the same in every run.
func (s *subject) seed() *rand.Rand {
	n := uint64(0)
	for _, c := range s.ID {
		n = 31*n + uint64(c)
	}
	return rand.New(rand.NewPCG(1, n))
}

// fluid holds molar properties at a state: Pa, J/(mol K), m/s, J/mol.
type fluid struct{ p, cv, cp, w, h, s float64 }

// at evaluates the properties of the equation at T in K and rho in mol/m3, where 0 stands for the ideal gas.
func (s *subject) at(T, rho float64) fluid {
	var iso helmholtz.Isotherm
	iso.Set(s.eq, T)
	var r helmholtz.Alpha
	lnDelta := 0.0
	if rho > 0 {
		r = iso.Residual(rho)
		lnDelta = math.Log(rho / s.eq.RhoRed)
	}
	R, id := s.eq.R, iso.Ideal
	f := fluid{p: rho * R * T * (1 + r.D), cv: -R * (id.TT + r.TT)}
	slope := 1 + 2*r.D + r.DD // dp/d rho over R T
	b := 1 + r.D - r.DT
	f.cp = f.cv + R*b*b/slope
	f.w = math.Sqrt(R * T / s.MolarMass * slope * f.cp / f.cv)
	f.h = R * T * (1 + id.T + r.T + r.D)
	f.s = R * (id.T + r.T - id.A - r.A - lnDelta)
	return f
}

// density solves the density at which the pressure is p by Newton's method from a start on the right side of the dome.
func (s *subject) density(t testing.TB, T, p, rho float64) float64 {
	t.Helper()
	var iso helmholtz.Isotherm
	iso.Set(s.eq, T)
	for range 50 {
		r := iso.Residual(rho)
		RT := s.eq.R * T
		step := (p - rho*RT*(1+r.D)) / (RT * (1 + 2*r.D + r.DD))
		rho += step
		if math.Abs(step) < 1e-13*rho {
			return rho
		}
	}
	t.Fatalf("%s: no density at %g K, %g Pa", s.ID, T, p)
	return 0
}
