package readings_test

import (
	"testing"

	"dewmark/props"
	"dewmark/service/readings"
)

// heatPump is a sample of a heat pump with R290 or another refrigerant, at about 0 °C and 45 °C, with sensors wherever a
// supervised installation has some.
func heatPump(t testing.TB, fluid props.Refrigerant) *readings.Sample {
	t.Helper()
	low, err := fluid.DewPoint(273.15)
	if err != nil {
		t.Fatal(err)
	}
	high, err := fluid.BubblePoint(318.15)
	if err != nil {
		t.Fatal(err)
	}
	var s readings.Sample
	for r, v := range map[readings.Reading]float64{
		readings.SuctionPressure: low.P, readings.SuctionTemperature: 281.15,
		readings.DischargePressure: high.P, readings.DischargeTemperature: 343.15,
		readings.LiquidTemperature: 313.15, readings.CompressorPower: 2500, readings.HeatLossFraction: 0.05,
		readings.SinkInletTemperature: 308.15, readings.SinkOutletTemperature: 313.15, readings.SinkVolumeFlow: 0.5e-3,
	} {
		s.Set(r, v)
	}
	s.Sink.Liquid = water(t)
	return &s
}

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
