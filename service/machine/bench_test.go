package machine

import (
	"context"
	"errors"
	"testing"
)

// table is a rating table of the pure-fluid air-water machine, 30 source by 20 sink temperatures.
func table() *Grid {
	g := &Grid{Condition: Condition{
		Source: Stream{RelativeHumidity: new(0.85), VolumeFlow: new(1.0)},
		Sink:   Stream{Liquid: water(), TemperatureChange: new(5.0)},
	}}
	for i := range 30 {
		g.SourceTemperatures = append(g.SourceTemperatures, 258.15+float64(i))
	}
	for i := range 20 {
		g.SinkTemperatures = append(g.SinkTemperatures, 303.15+1.4*float64(i))
	}
	return g
}

func BenchmarkTable(b *testing.B) {
	for _, c := range []struct {
		name    string
		workers int
	}{{"one worker", 1}, {"all cores", 0}} {
		b.Run(c.name, func(b *testing.B) {
			m, g := demo(b, "harrow-8"), table()
			g.Workers = c.workers
			b.ReportAllocs()
			for b.Loop() {
				if err := Rate(b.Context(), m, g, func(r Row) error { return r.Err }); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

func BenchmarkFirstRow(b *testing.B) {
	m, g := demo(b, "harrow-8"), table()
	enough := errors.New("first row")
	for b.Loop() {
		if err := Rate(b.Context(), m, g, func(Row) error { return enough }); !errors.Is(err, enough) {
			b.Fatal(err)
		}
	}
}

func BenchmarkPoint(b *testing.B) {
	for _, s := range scenes(b) {
		b.Run(s.name, func(b *testing.B) {
			m, k := demo(b, s.name), s.typical()
			for b.Loop() {
				if _, err := Solve(context.Background(), m, &k); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
