package props_test

import (
	"maps"
	"math"
	"slices"
	"testing"

	"dewmark/props"
)

var sink float64

// BenchmarkExp is the measure for the others, because machines differ.
func BenchmarkExp(b *testing.B) {
	x, sum := -0.5, 0.0
	for b.Loop() {
		sum += math.Exp(x)
		x += 1e-9
	}
	sink = sum
}

// BenchmarkState solves one state again and again; the same start costs what a different one does.
func BenchmarkState(b *testing.B) {
	for _, id := range []string{"R134a", "R1234yf"} {
		calls := operations(b, refrigerant(b, id))
		for _, name := range slices.Sorted(maps.Keys(calls)) {
			f := calls[name]
			b.Run(id+"/"+name, func(b *testing.B) {
				b.ReportAllocs()
				sum := 0.0
				for b.Loop() {
					s, err := f()
					if err != nil {
						b.Fatal(err)
					}
					sum += s.H
				}
				sink = sum
			})
		}
	}
}

// BenchmarkPairs takes the general way, by any pair, which finds every solution and allocates the list of them.
func BenchmarkPairs(b *testing.B) {
	for _, id := range []string{"R134a", "R1234yf"} {
		r := refrigerant(b, id)
		T := 0.85 * r.Critical().T
		s, err := r.DewPoint(T)
		if err == nil {
			s, err = r.TemperaturePressure(T+10, 0.7*s.P)
		}
		if err != nil {
			b.Fatal(err)
		}
		for _, pair := range allPairs() {
			if pair[1] == props.Quality {
				continue
			}
			x, y := props.Given{Property: pair[0], Value: value(s, pair[0])}, props.Given{Property: pair[1], Value: value(s, pair[1])}
			b.Run(id+"/"+pair[0].String()+"-"+pair[1].String(), func(b *testing.B) {
				b.ReportAllocs()
				for b.Loop() {
					if _, err := r.States(x, y); err != nil {
						b.Fatal(err)
					}
				}
			})
		}
	}
}
