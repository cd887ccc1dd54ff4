package readings_test

import (
	"errors"
	"math"
	"math/rand/v2"
	"testing"

	"dewmark/service/cycle"
	"dewmark/service/readings"
	"dewmark/service/readings/uncertainty"
)

// FuzzEvaluate puts any numbers on any sensors: the sample is answered or refused, and what is answered is a number with an
// uncertainty, or neither.
func FuzzEvaluate(f *testing.F) {
	f.Add(uint64(1), uint64(0xffffffff), 500e3, 281.0, 1.5e6, 343.0, 2500.0)
	f.Add(uint64(7), uint64(0x3ff), 1e-300, 1e-300, 8e6, 5000.0, 0.0)
	f.Add(uint64(9), uint64(0xfffffffffff), 4.25e6, 369.8, 4.25e6, 369.9, 1e12)
	names := []string{"R290", "R744", "R454B"}
	f.Fuzz(func(t *testing.T, seed, which uint64, p1, T1, p2, T2, rest float64) {
		rng := rand.New(rand.NewPCG(seed, 1))
		var s readings.Sample
		for i, r := range readings.Readings() {
			if which>>i&1 == 0 {
				continue
			}
			v := rest * rng.Float64()
			switch {
			case r == readings.SuctionPressure || r == readings.EvaporatorOutletPressure:
				v = p1
			case r.IsPressure():
				v = p2
			case r == readings.SuctionTemperature || r == readings.LiquidTemperature:
				v = T1
			case r.Quantity() == cycle.Temperature:
				v = T2 * (0.9 + 0.1*rng.Float64())
			case r.Quantity() == cycle.Dimensionless:
				v = rng.Float64()
			}
			s.Set(r, v)
		}
		if seed%2 == 0 {
			s.Sink.Liquid, s.Source.MoistAir = water(t), true
		}
		i := readings.Installation{Refrigerant: refrigerant(t, names[seed%3])}
		if seed%5 == 0 {
			i.Layout, i.With = cycle.Transcritical, []cycle.Layout{cycle.SuctionExchanger}
		}
		o := &readings.Options{}
		if seed%7 == 0 {
			o.Method, o.Draws = readings.MonteCarlo, uncertainty.Draws{Seed: seed, Count: 1000}
		}
		r, err := evaluator(t, i, o).Evaluate(t.Context(), &s)
		if err != nil {
			if _, refused := errors.AsType[*readings.RefusedError](err); !refused {
				t.Fatal(err)
			}
			return
		}
		for f := range readings.FigureCount {
			e := r.Figure(f)
			if e.Known() != !math.IsNaN(e.Standard) || math.IsInf(e.Value, 0) || e.Standard < 0 {
				t.Errorf("%s: %+v", f, e)
			}
		}
		for _, c := range r.Cautions {
			_ = c.Message.String()
		}
		for _, x := range r.Plausibility {
			_ = x.Message.String()
		}
	})
}
