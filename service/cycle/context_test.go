package cycle_test

import (
	"context"
	"errors"
	"testing"

	"dewmark/props"
	"dewmark/service/cycle"
)

// impatient is a refrigerant that counts the compressions it is asked for, and ends a context at one of them.
type impatient struct {
	cycle.Refrigerant

	asked, endAt int
	end          func()
}

func (m *impatient) PressureEntropy(p, s float64) (props.State, error) {
	if m.asked++; m.asked == m.endAt {
		m.end()
	}
	return m.Refrigerant.PressureEntropy(p, s)
}

// A search ends with the context: with its cause, and after the trial under way.
func TestSearchEndsWithContext(t *testing.T) {
	for _, tt := range []struct {
		name   string
		change func(r *cycle.Request)
	}{
		{"one pressure", func(r *cycle.Request) { withIntermediate(cycle.EconomisedFlash)(t, r) }},
		{"both pressures", func(r *cycle.Request) {
			withHigh(cycle.ParallelCompression)(t, r)
			r.Intermediate = &cycle.Intermediate{Optimise: cycle.OptimiseCOP}
		}},
		{"mean temperature", func(r *cycle.Request) {
			r.Refrigerant = zeotrope{refrigerant(t, "R290", props.IIR), 3}
			r.Evaporation.Reference = cycle.Mean
		}},
	} {
		r := heatPump(t)
		tt.change(r)
		counter := &impatient{Refrigerant: r.Refrigerant}
		r.Refrigerant = counter
		solve(t, r)
		whole := counter.asked
		counter.asked, counter.endAt = 0, 3 // after the first trial
		gone := errors.New("gone")
		ctx, end := context.WithCancelCause(t.Context())
		counter.end = func() { end(gone) }
		if s, err := cycle.Solve(ctx, r); s != nil || !errors.Is(err, gone) {
			t.Errorf("%s: solved: %t, %v", tt.name, s != nil, err)
		}
		if more := counter.asked - counter.endAt; more > 6 || more >= whole-counter.endAt {
			t.Errorf("%s: %d of %d compressions are computed after the end", tt.name, more, whole)
		}
	}
}
