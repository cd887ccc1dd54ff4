package machine

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"sync"
	"sync/atomic"
	"testing"

	"dewmark/props/secondary"
)

// scene is a machine of the demonstration with random conditions inside its envelope.
type scene struct {
	name string
	draw func(r *rand.Rand) Condition
}

func rngFor(seed, i int) *rand.Rand { return rand.New(rand.NewPCG(uint64(seed), uint64(i))) }

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
		draws = 120
	}
	all := scenes(t)
	machines := make([]*Machine, len(all))
	for i := range all {
		machines[i] = demo(t, all[i].name)
	}
	var next, evaluations, inside, most atomic.Int64
	var worst [2]float64
	var wg sync.WaitGroup
	for worker := range worst {
		wg.Go(func() {
			for {
				i := int(next.Add(1)) - 1
				if i >= draws {
					return
				}
				s := &all[i%len(all)]
				k := s.draw(rand.New(rand.NewPCG(1, uint64(i))))
				p, err := Solve(t.Context(), machines[i%len(all)], &k)
				if err != nil {
					t.Errorf("%s, draw %d: %v", s.name, i, err)
					continue
				}
				if fault := unsound(p); fault != "" {
					t.Errorf("%s, draw %d: %s", s.name, i, fault)
				}
				if p.Envelope.Verdict == InsideEnvelope {
					inside.Add(1)
				}
				evaluations.Add(int64(p.Evaluations))
				most.Store(max(most.Load(), int64(p.Evaluations)))
				worst[worker] = max(worst[worker], p.ResidualFraction)
			}
		})
	}
	wg.Wait()
	t.Logf("%d points, %d inside the envelope, worst residual %.1e, %.1f evaluations a point, at most about %d",
		draws, inside.Load(), max(worst[0], worst[1]), float64(evaluations.Load())/float64(draws), most.Load())
}

// unsound says what is wrong with any operating point that is.
func unsound(p *OperatingPoint) string {
	c := &p.Cycle.Closure
	perf := &p.Cycle.Performance
	switch {
	case !(p.ResidualFraction <= 1e-8):
		return fmt.Sprintf("residual %g of the duty", p.ResidualFraction)
	case !(c.EnergyResidualFraction <= 1e-9):
		return fmt.Sprintf("energy residual %g", c.EnergyResidualFraction)
	case !(c.SmallestEntropyGeneration >= -1e-9): // rounding
		return fmt.Sprintf("entropy generation %g W/K of the %s", c.SmallestEntropyGeneration, c.SmallestComponent)
	case !(math.Abs(c.ExergyResidualFraction) <= 1e-9):
		return fmt.Sprintf("exergy residual %g", c.ExergyResidualFraction)
	case !(math.Abs(p.Evaporator.Duty/perf.CoolingCapacity-1) <= 1e-12 && math.Abs(p.Condenser.Duty/perf.HeatingCapacity-1) <= 1e-12):
		return "the exchangers' duties are not the capacities"
	case !(perf.IsentropicEfficiency > 0 && perf.IsentropicEfficiency < 1):
		return fmt.Sprintf("isentropic efficiency %g", perf.IsentropicEfficiency)
	}
	for i, e := range []*ExchangerResult{&p.Evaporator, &p.Condenser} {
		oversized := slices.ContainsFunc(p.Cautions, func(c Caution) bool {
			return c.Code == Oversized && c.Field == [2]string{"machine.evaporator", "machine.condenser"}[i]
		})
		if fault := e.unsound(oversized); fault != "" {
			return fault
		}
	}
	return ""
}

func (e *ExchangerResult) unsound(oversized bool) string {
	q := &e.Secondary
	if math.IsNaN(q.MassFlow) { // an inlet temperature alone
		return ""
	}
	var duty, share float64
	for _, z := range e.Zones {
		duty += z.Duty
		share += z.Share
		if !(z.Duty > 0 && z.UA > 0 && z.LMTD > 0 && z.Share > 0) {
			return fmt.Sprintf("zone %+v", z)
		}
	}
	switch {
	case !(math.Abs(duty/e.Duty-1) <= 1e-9):
		return fmt.Sprintf("the zones' duties add up to %g of %g W", duty, e.Duty)
	case !(share <= 1+1e-6 && (share >= 1-1e-6 || oversized)):
		return fmt.Sprintf("the zones' shares add up to %g", share)
	case !(e.Pinch >= 0):
		return fmt.Sprintf("pinch %g K", e.Pinch)
	case !(q.MassFlow > 0 && q.VolumeFlow > 0):
		return fmt.Sprintf("secondary flow %g kg/s", q.MassFlow)
	case q.Fluid == "moist_air" && !(q.OutletHumidity >= 0 && q.OutletHumidity <= 1 && q.SensibleRatio > 0 && q.SensibleRatio <= 1+1e-9):
		return fmt.Sprintf("air leaves as %+v", q)
	}
	return ""
}

// Capacity rises with the source's temperature and the heating COP falls with the sink's, over all machines. A transcritical
// unit at one high-side pressure is an exception where its gas leaves near the pseudo-critical temperature: there more flow
// leaves so much warmer that the heat falls.
func TestMonotone(t *testing.T) {
	for _, s := range scenes(t) {
		m := demo(t, s.name)
		draws, compared := 60, 0
		if testing.Short() {
			draws = 9
		}
		for i := range draws {
			k := s.draw(rngFor(2, i))
			p, err := Solve(t.Context(), m, &k)
			if err != nil {
				t.Fatal(err)
			}
			if p.Condenser.Zones[0].Name == GasCooling && p.Condenser.Zones[0].RefrigerantOutlet > 303.15 {
				continue
			}
			compared++
			warmer, hotter := k, k
			warmer.Source.InletTemperature = new(*k.Source.InletTemperature + 1)
			hotter.Sink.OutletTemperature = new(*k.Sink.OutletTemperature + 1)
			w, err := Solve(t.Context(), m, &warmer)
			if err != nil {
				t.Fatal(err)
			}
			h, err := Solve(t.Context(), m, &hotter)
			if err != nil {
				t.Fatal(err)
			}
			a, b, c := &p.Cycle.Performance, &w.Cycle.Performance, &h.Cycle.Performance
			if !(b.HeatingCapacity > a.HeatingCapacity && b.CoolingCapacity > a.CoolingCapacity) {
				t.Errorf("%s, draw %d: heating capacity %g W, with a source warmer by 1 K %g W", s.name, i, a.HeatingCapacity, b.HeatingCapacity)
			}
			if !(c.COPHeating < a.COPHeating) {
				t.Errorf("%s, draw %d: heating COP %g, with a sink hotter by 1 K %g", s.name, i, a.COPHeating, c.COPHeating)
			}
		}
		if compared < draws/3 {
			t.Errorf("%s: only %d of %d draws were compared", s.name, compared, draws)
		}
	}
}

// typical returns a condition in the middle of what a scene draws.
func (s *scene) typical() Condition {
	k := s.draw(rand.New(rand.NewPCG(7, 7)))
	return k
}
