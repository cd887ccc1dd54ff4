package machine

import (
	"math/rand/v2"
	"testing"

	"dewmark/props/secondary"
)

// scene is a machine of the demonstration with random conditions inside its envelope.
type scene struct {
	name string
	draw func(r *rand.Rand) Condition
}

func within(r *rand.Rand, low, high float64) *float64 { return new(low + (high-low)*r.Float64()) }

func brine(t testing.TB, name string, w float64) *secondary.Liquid {
	t.Helper()
	l, err := secondary.NewBrine(name, w)
	if err != nil {
		t.Fatal(err)
	}
	return l
}

func scenes(t testing.TB) []scene {
	glycol := brine(t, secondary.EthyleneGlycol, 0.30)
	all := []scene{
		{"harrow-8", func(r *rand.Rand) Condition {
			k := Condition{
				Source: Stream{InletTemperature: within(r, 258, 293), RelativeHumidity: within(r, 0.2, 1), VolumeFlow: within(r, 0.6, 1.6)},
				Sink:   Stream{Liquid: water(), OutletTemperature: within(r, 303, 333), TemperatureChange: within(r, 3, 12)},
				Speed:  within(r, 30, 100),
			}
			if r.IntN(2) == 0 { // fixed flow
				k.Sink.TemperatureChange, k.Sink.MassFlow = nil, within(r, 0.2, 0.6)
			}
			return k
		}},
		{"harrow-25-hot-water", func(r *rand.Rand) Condition {
			return Condition{
				Source: Stream{InletTemperature: within(r, 262, 293), RelativeHumidity: within(r, 0.2, 1), VolumeFlow: within(r, 1.5, 3.5)},
				Sink:   Stream{Liquid: water(), InletTemperature: within(r, 278, 298), OutletTemperature: within(r, 328, 348)},
				Speed:  within(r, 30, 70),
			}
		}},
		{"harrow-60-brine", func(r *rand.Rand) Condition {
			k := Condition{
				Source: Stream{Liquid: glycol, InletTemperature: within(r, 268, 288), MassFlow: within(r, 3, 6)},
				Sink:   Stream{Liquid: water(), OutletTemperature: within(r, 303, 328), TemperatureChange: within(r, 3, 10)},
				Speed:  within(r, 25, 75),
			}
			if r.IntN(2) == 0 {
				k.Source.MassFlow, k.Source.TemperatureChange = nil, within(r, 2, 5)
			}
			return k
		}},
	}
	var have []scene
	for _, s := range all {
		if s.name == "harrow-60-brine" && !haveRefrigerant("R454B") {
			continue
		}
		have = append(have, s)
	}
	return have
}

// TestSweep draws conditions all over the demonstration's machines: every one has an operating point, and compressor and
// exchangers agree there within 1e-8 of the duty.
func TestSweep(t *testing.T) {
	draws := 20000
	if testing.Short() {
		draws = 400
	}
	r := rand.New(rand.NewPCG(1, 2))
	all := scenes(t)
	evaluations, inside, worst, most := 0, 0, 0.0, 0
	for i := range draws {
		s := all[i%len(all)]
		k := s.draw(r)
		p, err := Solve(t.Context(), demo(t, s.name), &k)
		if err != nil {
			t.Errorf("%s, draw %d: %v", s.name, i, err)
			continue
		}
		if !(p.ResidualFraction <= 1e-8) {
			t.Errorf("%s, draw %d: residual %g of the duty", s.name, i, p.ResidualFraction)
		}
		if c := p.Cycle.Closure; !(c.EnergyResidualFraction <= 1e-9) || !(c.SmallestEntropyGeneration >= 0) {
			t.Errorf("%s, draw %d: closure %+v", s.name, i, c)
		}
		for _, e := range []*ExchangerResult{&p.Evaporator, &p.Condenser} {
			if !(e.Pinch >= 0) {
				t.Errorf("%s, draw %d: pinch %g K", s.name, i, e.Pinch)
			}
		}
		if p.Envelope.Verdict == InsideEnvelope {
			inside++
		}
		evaluations += p.Evaluations
		worst, most = max(worst, p.ResidualFraction), max(most, p.Evaluations)
	}
	t.Logf("%d points, %d inside the envelope, worst residual %.1e, %.1f evaluations a point, at most %d", draws, inside, worst, float64(evaluations)/float64(draws), most)
}

// typical returns a condition in the middle of what a scene draws.
func (s *scene) typical() Condition {
	k := s.draw(rand.New(rand.NewPCG(7, 7)))
	return k
}
