package saturation_test

import (
	"math"
	"testing"

	"dewmark/props/saturation"
)

// BenchmarkExp is the measure for the others, because machines differ.
func BenchmarkExp(b *testing.B) {
	x, sum := -0.5, 0.0
	for b.Loop() {
		sum += math.Exp(x)
		x += 1e-9
	}
	sink = sum
}

func each(b *testing.B, f func(b *testing.B, s *subject)) {
	b.Helper()
	for _, s := range curves(b) {
		if s.ID == "R134a" || s.ID == "R1234yf" {
			b.Run(s.ID, func(b *testing.B) {
				b.ReportAllocs()
				f(b, s)
			})
		}
	}
}

// BenchmarkAt evaluates pressure and both densities over 100 K.
func BenchmarkAt(b *testing.B) {
	each(b, func(b *testing.B, s *subject) {
		T, sum := 230.0, 0.0
		for b.Loop() {
			p, l, v := s.curve.At(T)
			sum += p + l + v
			if T += 0.37; T > 330 {
				T -= 100
			}
		}
		sink = sum
	})
}

func BenchmarkTemperature(b *testing.B) {
	each(b, func(b *testing.B, s *subject) {
		p, sum := 1e5, 0.0
		for b.Loop() {
			sum += s.curve.Temperature(p)
			if p += 7e3; p > 2e6 {
				p -= 1.9e6
			}
		}
		sink = sum
	})
}

// BenchmarkNew makes the curve of one refrigerant.
func BenchmarkNew(b *testing.B) {
	each(b, func(b *testing.B, s *subject) {
		for b.Loop() {
			if _, err := s.make(); err != nil {
				b.Fatal(err)
			}
		}
	})
}

// BenchmarkNewAll makes the curves of all refrigerants on one core.
func BenchmarkNewAll(b *testing.B) {
	all := curves(b)
	curves := make([]*saturation.Curve, len(all))
	for b.Loop() {
		for i, s := range all {
			c, err := s.make()
			if err != nil {
				b.Fatal(err)
			}
			curves[i] = c
		}
	}
}
