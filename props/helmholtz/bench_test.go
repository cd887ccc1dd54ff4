package helmholtz_test

import (
	"math"
	"testing"

	"dewmark/props/helmholtz"
)

// benchmarked holds a vapour near 0 °C for each refrigerant that the figures in the package documentation speak of: K,
// mol/m3.
var benchmarked = []struct {
	id     string
	T, rho float64
}{{"R134a", 280, 150}, {"R1234yf", 280, 150}}

// BenchmarkExp is the measure for the others, because machines differ.
func BenchmarkExp(b *testing.B) {
	x, sum := -0.5, 0.0
	for b.Loop() {
		sum += math.Exp(x)
		x += 1e-9
	}
	sink = sum
}

var sink float64

// BenchmarkResidual evaluates the residual part with all its derivatives, of an equation that has no ideal part, at one
// temperature after another.
func BenchmarkResidual(b *testing.B) {
	for _, s := range benchmarked {
		of := equation(b, s.id)
		eq, err := helmholtz.New(helmholtz.Coefficients{
			GasConstant: of.GasConstant, ReducingTemperature: of.Reducing.Temperature, ReducingDensity: of.Reducing.Density, Residual: of.Residual,
		})
		if err != nil {
			b.Fatal(err)
		}
		benchmarkAt(b, eq, s.id, s.T, s.rho)
	}
}

// BenchmarkBothParts is BenchmarkResidual with the ideal part.
func BenchmarkBothParts(b *testing.B) {
	for _, s := range benchmarked {
		benchmarkAt(b, equation(b, s.id).eq, s.id, s.T, s.rho)
	}
}

func benchmarkAt(b *testing.B, eq *helmholtz.Equation, id string, from, rho float64) {
	b.Helper()
	b.Run(id, func(b *testing.B) {
		b.ReportAllocs()
		T, sum := from, 0.0
		for b.Loop() {
			var ideal, r helmholtz.Alpha
			eq.At(T, rho, &ideal, &r)
			sum += r.A + r.TT + ideal.A
			T += 1e-9
		}
		sink = sum
	})
}

// BenchmarkIsotherm sets an isotherm for each temperature and evaluates it once.
func BenchmarkIsotherm(b *testing.B) {
	for _, s := range benchmarked {
		eq := equation(b, s.id).eq
		b.Run(s.id, func(b *testing.B) {
			b.ReportAllocs()
			T, sum := s.T, 0.0
			for b.Loop() {
				var iso helmholtz.Isotherm
				iso.Set(eq, T)
				r := iso.Residual(s.rho)
				sum += r.A + r.TT + iso.Ideal.A
				T += 1e-9
			}
			sink = sum
		})
	}
}

// BenchmarkResidualOnIsotherm evaluates at one density after another on an isotherm that is set.
func BenchmarkResidualOnIsotherm(b *testing.B) {
	for _, s := range benchmarked {
		eq := equation(b, s.id).eq
		b.Run(s.id, func(b *testing.B) {
			b.ReportAllocs()
			var iso helmholtz.Isotherm
			iso.Set(eq, s.T)
			rho, sum := s.rho, 0.0
			for b.Loop() {
				r := iso.Residual(rho)
				sum += r.A + r.TT
				rho += 1e-9
			}
			sink = sum
		})
	}
}
