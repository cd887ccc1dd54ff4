package readings_test

import (
	"testing"

	"dewmark/service/readings"
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
