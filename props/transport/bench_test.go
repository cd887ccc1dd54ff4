package transport

import (
	"math"
	"testing"
)

// BenchmarkExp is the calibration that the figures of the others are quoted in.
func BenchmarkExp(b *testing.B) {
	x := 0.5
	for b.Loop() {
		x = math.Exp(-x)
	}
}

func BenchmarkViscosityAndConductivity(b *testing.B) {
	for _, c := range []struct{ name, n string }{
		{"correlation/R134a", "R134a"},
		{"correlation/R290", "R290"},
		{"correlation/R1234yf", "R1234yf"},
		{"IAPWS/R718", "R718"},
		{"corresponding-states/R22", "R22"},
		{"entropy-scaling/R1130(E)", "R1130(E)"},
		{"concentration/R23", "R23"},
	} {
		r := refrigerants()[c.n]
		T := 0.8 * r.curve.TCritical
		_, liquid, _ := r.curve.At(T)
		s := r.State(T, liquid)
		b.Run(c.name, func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				_, _, _ = r.ViscosityAndConductivity(s)
			}
		})
	}
}

func BenchmarkState(b *testing.B) {
	r := refrigerants()["R134a"]
	b.ReportAllocs()
	for b.Loop() {
		_ = r.State(300, 11000)
	}
}

func BenchmarkViscosity(b *testing.B) {
	for _, n := range []string{"R134a", "R22"} {
		r := refrigerants()[n]
		_, liquid, _ := r.curve.At(300)
		s := r.State(300, liquid)
		b.Run(n, func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				_, _ = r.Viscosity(s)
			}
		})
	}
}

func BenchmarkSurfaceTension(b *testing.B) {
	r := refrigerants()["R134a"]
	b.ReportAllocs()
	for b.Loop() {
		_, _ = r.SurfaceTension(300, r.curve.TCritical)
	}
}

func BenchmarkMixture(b *testing.B) {
	var models []*Model
	for _, n := range []string{"R32", "R125", "R134a"} {
		models = append(models, refrigerants()[n].Model)
	}
	m, err := NewMixture(models...)
	if err != nil {
		b.Fatal(err)
	}
	s := ideal(models, []float64{0.38, 0.18, 0.44}, 298.15, []float64{18000, 9900, 11800})
	s.Cp0 = []float64{models[0].idealHeatCapacity(298.15), models[1].idealHeatCapacity(298.15), models[2].idealHeatCapacity(298.15)}
	b.ReportAllocs()
	for b.Loop() {
		_, _, _ = m.ViscosityAndConductivity(s)
	}
}

func BenchmarkNew(b *testing.B) {
	r := refrigerants()["R32"]
	references := []*Model{refrigerants()["R134a"].Model, refrigerants()["R290"].Model}
	for b.Loop() {
		if _, err := New(r.fluid, r.record.Transport, references...); err != nil {
			b.Fatal(err)
		}
	}
}
