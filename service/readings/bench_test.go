package readings_test

import (
	"math/rand/v2"
	"testing"
	"time"

	"dewmark/service/readings"
	"dewmark/service/readings/uncertainty"
)

func BenchmarkEvaluate(b *testing.B) {
	for _, name := range []string{"R290", "R134a", "R1234yf", "R410A", "R454B"} {
		fluid := refrigerant(b, name)
		e := evaluator(b, readings.Installation{Refrigerant: fluid}, nil)
		s := heatPump(b, fluid)
		b.Run(name, func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				if _, err := e.Evaluate(b.Context(), s); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

// BenchmarkSeries goes through a series, a sample a minute, as a stream does.
func BenchmarkSeries(b *testing.B) {
	fluid := refrigerant(b, "R290")
	s, err := readings.NewSeries(evaluator(b, readings.Installation{Refrigerant: fluid}, nil), readings.SeriesOptions{})
	if err != nil {
		b.Fatal(err)
	}
	sample := heatPump(b, fluid)
	sample.Time = time.Date(2026, 1, 1, 0, 0, 0, 0, time.UTC)
	b.ReportAllocs()
	for b.Loop() {
		sample.Time = sample.Time.Add(time.Minute)
		if _, err := s.Add(b.Context(), sample); err != nil {
			b.Fatal(err)
		}
	}
}

// BenchmarkDraws is a thousand random draws of one sample.
func BenchmarkDraws(b *testing.B) {
	fluid := refrigerant(b, "R290")
	e := evaluator(b, readings.Installation{Refrigerant: fluid}, &readings.Options{Method: readings.MonteCarlo, Draws: uncertainty.Draws{Count: 1000}})
	s := heatPump(b, fluid)
	for b.Loop() {
		if _, err := e.Evaluate(b.Context(), s); err != nil {
			b.Fatal(err)
		}
	}
}

// BenchmarkCompare is a sample with a machine to compare with, whose operating point is solved each time.
func BenchmarkCompare(b *testing.B) {
	m := waterHeatPump(b)
	expected, err := readings.Expected(m, readings.ExpectOptions{})
	if err != nil {
		b.Fatal(err)
	}
	e := evaluator(b, readings.Installation{Refrigerant: m.Refrigerant, Machine: expected}, nil)
	rng := rand.New(rand.NewPCG(1, 1))
	s, ok := runMachine(b, rng, m, nil, surroundings(b, rng))
	if !ok {
		b.Fatal("the machine does not settle")
	}
	for b.Loop() {
		if _, err := e.Evaluate(b.Context(), s); err != nil {
			b.Fatal(err)
		}
	}
}
