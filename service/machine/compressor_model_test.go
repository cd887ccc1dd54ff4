package machine

import (
	"math"
	"testing"

	"dewmark/service/cycle"
)

// Between its own flanges the compressor of an operating point moves what flows there.
func TestCompressorModel(t *testing.T) {
	for i, s := range scenes(t) {
		m := demo(t, s.name)
		k, err := NewCompressorModel(m)
		if err != nil {
			t.Fatal(err)
		}
		compared := 0
		for j := range 20 {
			condition := s.draw(rngFor(i, j))
			p, err := Solve(t.Context(), m, &condition)
			if err != nil || !p.WithinEnvelope() {
				continue
			}
			in, out := stateAt(p.Cycle, "1").State, stateAt(p.Cycle, "2").State
			flow, err := k.Flow(in.P, in.T, out.P, p.Speed)
			if want := p.Cycle.Performance.MassFlow; err != nil || !(math.Abs(flow/want-1) < 1e-9) {
				t.Errorf("%s: %g kg/s, %v; the operating point has %g", s.name, flow, err, want)
			}
			compared++
			if _, err := k.Flow(in.P, in.T, out.P, 1e6); err == nil {
				t.Errorf("%s: a speed of a million per second is taken", s.name)
			}
			if _, err := k.Flow(in.P, in.T, 1e9, p.Speed); err == nil {
				t.Errorf("%s: a flow against 1 GPa", s.name)
			}
		}
		if compared < 5 {
			t.Errorf("%s: only %d points", s.name, compared)
		}
	}
	m := demo(t, "harrow-8")
	m.Layout = cycle.TwoStageFlash
	if _, err := NewCompressorModel(m); err == nil {
		t.Error("a machine of two stages has one compressor")
	}
}
