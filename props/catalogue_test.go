package props_test

import (
	"context"
	"errors"
	"math/rand/v2"
	"slices"
	"sync"
	"testing"

	"dewmark/props"
)

func TestDesignations(t *testing.T) {
	names := catalogue(t).PureDesignations()
	if len(names) != 46 {
		t.Errorf("%d refrigerants, want 46", len(names))
	}
	// Natural order: by number, then by letter.
	order := []string{"R11", "R32", "R134a", "R152a", "R290", "R600", "R600a", "R717", "R744", "R1234yf", "R1234ze(E)", "R1234ze(Z)"}
	at := -1
	for _, name := range order {
		i := slices.Index(names, name)
		if i <= at {
			t.Errorf("%s stands at %d, after %d", name, i, at)
		}
		at = i
	}
}

// TestConcurrentUse asks for states from many goroutines while the curves are being made; the race detector watches.
// All must get the same answers as one alone.
func TestConcurrentUse(t *testing.T) {
	shared, err := props.NewCatalogue()
	if err != nil {
		t.Fatal(err)
	}
	alone := catalogue(t)
	ids := []string{"R134a", "R290", "R717", "R1234yf", "R32"}
	var wg sync.WaitGroup
	ctx, cancel := context.WithCancel(t.Context())
	wg.Go(func() { _ = shared.Warm(ctx) })
	for i := range 8 {
		wg.Go(func() {
			rng := rand.New(rand.NewPCG(3, uint64(i)))
			for range 40 {
				id := ids[rng.IntN(len(ids))]
				a, err := shared.Pure(id, props.DefaultDatum)
				if err != nil {
					t.Error(err)
					return
				}
				b, err := alone.Pure(id, props.DefaultDatum)
				if err != nil {
					t.Error(err)
					return
				}
				T, p := 250+60*rng.Float64(), 1e5*(1+9*rng.Float64())
				s, errA := a.TemperaturePressure(T, p)
				u, errB := b.TemperaturePressure(T, p)
				if errA != nil || errB != nil || s.H != u.H || s.Rho != u.Rho || s.S != u.S {
					t.Errorf("%s at %g K, %g Pa: %v, %v; %v, %v", id, T, p, s, u, errA, errB)
				}
			}
		})
	}
	cancel()
	wg.Wait()
}

func TestWarm(t *testing.T) {
	c, err := props.NewCatalogue()
	if err != nil {
		t.Fatal(err)
	}
	cause := errors.New("no time")
	ctx, cancel := context.WithCancelCause(t.Context())
	cancel(cause)
	if err := c.Warm(ctx); !errors.Is(err, cause) {
		t.Errorf("ended before it began: %v, want %v", err, cause)
	}
	if testing.Short() {
		return
	}
	if err := c.Warm(t.Context()); err != nil {
		t.Error(err)
	}
	if err := c.Warm(t.Context()); err != nil {
		t.Errorf("again: %v", err)
	}
}

// TestCurves: the curves are made once each, and all of them fit into 4 MB.
func TestCurves(t *testing.T) {
	c, err := props.NewCatalogue()
	if err != nil {
		t.Fatal(err)
	}
	if made, bytes := c.Curves(); made != 0 || bytes != 0 {
		t.Errorf("a new catalogue has %d curves of %d bytes", made, bytes)
	}
	if err := c.Warm(t.Context()); err != nil {
		t.Fatal(err)
	}
	made, bytes := c.Curves()
	if want := len(c.PureDesignations()); made != want || !(0 < bytes && bytes < 4<<20) {
		t.Errorf("%d curves of %d bytes after warm-up, want %d under 4 MB", made, bytes, want)
	}
}
