package machine

import (
	"errors"
	"math"
	"testing"

	"dewmark/service/cycle"
)

// FuzzSolve looks for machines that panic, hang, or have an operating point that is none.
func FuzzSolve(f *testing.F) {
	f.Add(900.0, 1500.0, 5.0, 3.0, 50.0, 280.15, 0.87, 0.9, 303.15, 5.0, uint8(0))
	f.Add(1e5, 1e5, 0.0, 0.0, 25.0, 250.0, 1.0, 5.0, 330.0, 0.01, uint8(1))
	f.Add(1.0, 1.0, 30.0, 20.0, 100.0, 300.0, 0.0, 0.01, 280.0, 60.0, uint8(2))
	f.Add(math.NaN(), math.Inf(1), -5.0, 1e9, 0.0, 1e-9, 2.0, -1.0, 5000.0, 1e300, uint8(3))
	f.Fuzz(func(t *testing.T, evaporator, condenser, superheat, subcooling, speed, source, humidity, flow, sink, change float64, choice uint8) {
		m, k := airWater(t)
		m.Evaporator.UA, m.Condenser.UA, m.Superheat, m.Subcooling = &evaporator, &condenser, &superheat, &subcooling
		k.Speed = &speed
		k.Source = Stream{InletTemperature: &source, RelativeHumidity: &humidity, VolumeFlow: &flow}
		k.Sink = Stream{Liquid: water(), InletTemperature: &sink, TemperatureChange: &change}
		a := []Arrangement{Counterflow, CrossflowUnmixed, ParallelFlow, CrossflowStreamMixed}[choice&3]
		m.Evaporator.Arrangement, m.Condenser.Arrangement = a, a
		switch choice >> 2 & 3 {
		case 1:
			m.Evaporator = Exchanger{Approach: &evaporator}
		case 2:
			m.Condenser = Exchanger{Pinch: &condenser}
		case 3:
			m.Layout, m.InternalExchanger = cycle.SuctionExchanger, &cycle.InternalExchanger{Effectiveness: new(0.5)}
		}
		p, err := Solve(t.Context(), m, k)
		if err != nil {
			if e, ok := errors.AsType[*RefusedError](err); !ok || len(e.Refusals) == 0 || e.Error() == "" {
				t.Fatalf("an error that is no refusal: %v", err)
			}
			return
		}
		if fault := unsound(p); fault != "" {
			t.Fatal(fault)
		}
	})
}

// FuzzEnvelope looks for polygons that are taken although they bound nothing.
func FuzzEnvelope(f *testing.F) {
	f.Add(250.0, 290.0, 280.0, 290.0, 280.0, 330.0, 250.0, 330.0, 265.0, 310.0)
	f.Add(250.0, 290.0, 280.0, 330.0, 280.0, 290.0, 250.0, 330.0, 265.0, 310.0)
	f.Fuzz(func(t *testing.T, x1, y1, x2, y2, x3, y3, x4, y4, x, y float64) {
		g, fault := newPolygon([]Vertex{{x1, y1}, {x2, y2}, {x3, y3}, {x4, y4}}, false)
		if fault != nil || math.IsNaN(x) || math.IsNaN(y) || math.IsInf(x, 0) || math.IsInf(y, 0) {
			return
		}
		r := g.result(at(x, y))
		if math.IsNaN(r.Margin) || (r.Margin > 0) != g.contains(corner{x, y}) && r.Margin != 0 {
			t.Fatalf("%+v of %v", r, g.corners)
		}
	})
}
