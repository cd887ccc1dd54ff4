package cycle_test

import (
	"fmt"
	"testing"

	"dewmark/service/cycle"
)

// A solution that is used again holds nothing of what it held before, a refused request between two solved ones included.
func TestSolveAgain(t *testing.T) {
	single := heatPump(t)
	requests := []*cycle.Request{single}
	for _, k := range optima {
		r := heatPump(t)
		k.change(t, r)
		requests = append(requests, r)
	}
	refused := heatPump(t)
	refused.Refrigerant = nil
	var s cycle.Solution
	for _, first := range requests {
		for _, second := range requests {
			if err := s.Solve(t.Context(), first); err != nil {
				t.Fatal(err)
			}
			if err := s.Solve(t.Context(), refused); err == nil {
				t.Error("solved without a refrigerant")
			}
			if err := s.Solve(t.Context(), second); err != nil {
				t.Fatal(err)
			}
			if got, want := fmt.Sprintf("%+v", s), fmt.Sprintf("%+v", *solve(t, second)); got != want {
				t.Errorf("after layout %v:\n%s\nwant\n%s", first.Layout, got, want)
			}
		}
	}
	if n := testing.AllocsPerRun(20, func() {
		if err := s.Solve(t.Context(), single); err != nil {
			t.Fatal(err)
		}
	}); n != 0 {
		t.Errorf("%g allocations", n)
	}
}
