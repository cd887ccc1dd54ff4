package machine

import (
	"context"
	"errors"
	"math"
	"runtime"
	"testing"
	"time"
)

// Rows come in order and are the same whatever the number of workers, and the same as single points.
func TestRate(t *testing.T) {
	m := demo(t, "harrow-8")
	g := table()
	g.SourceTemperatures, g.SinkTemperatures = g.SourceTemperatures[:5], g.SinkTemperatures[:4]
	g.Speeds = []float64{40, 80}
	rows := func(workers int) (out []Row) {
		g.Workers = workers
		if err := Rate(t.Context(), m, g, func(r Row) error { out = append(out, r); return nil }); err != nil {
			t.Fatal(err)
		}
		return out
	}
	one := rows(1)
	if len(one) != 40 {
		t.Fatalf("%d rows, want 40", len(one))
	}
	for _, workers := range []int{0, 2, 7, 100} {
		for i, r := range rows(workers) {
			a, b := one[i].Point, r.Point
			if r.Index != i || r.Err != nil || a.EvaporationTemperature != b.EvaporationTemperature || a.System != b.System {
				t.Errorf("%d workers, row %d (%d): %+v, alone %+v, %v", workers, i, r.Index, b.System, a.System, r.Err)
			}
		}
	}
	for i, r := range one {
		if want := g.SourceTemperatures[i/8]; r.SourceTemperature != want || r.SinkTemperature != g.SinkTemperatures[i/2%4] || r.Speed != g.Speeds[i%2] {
			t.Errorf("row %d: %+v", i, r)
		}
		k := g.Condition
		k.Source.InletTemperature, k.Sink.OutletTemperature, k.Speed = &r.SourceTemperature, &r.SinkTemperature, &r.Speed
		if p := solve(t, m, &k); p.System != r.Point.System {
			t.Errorf("row %d: %+v, as a single point %+v", i, r.Point.System, p.System)
		}
	}
}

// A row without an operating point does not spoil the others.
func TestRateWithGaps(t *testing.T) {
	m := demo(t, "harrow-8")
	g := table()
	g.SourceTemperatures, g.SinkTemperatures = []float64{235, 270, 275}, []float64{308, 365}
	points, gaps := 0, 0
	err := Rate(t.Context(), m, g, func(r Row) error {
		if (r.Point == nil) == (r.Err == nil) {
			t.Errorf("row %d: %v, %v", r.Index, r.Point, r.Err)
		}
		if r.Err != nil {
			gaps++
			if _, ok := errors.AsType[*RefusedError](r.Err); !ok {
				t.Errorf("row %d: %v", r.Index, r.Err)
			}
		} else {
			points++
		}
		return nil
	})
	if err != nil || points != 2 || gaps != 4 {
		t.Errorf("%d points and %d gaps, %v", points, gaps, err)
	}
}

func TestRateStops(t *testing.T) {
	m := demo(t, "harrow-8")
	g := table()
	enough := errors.New("enough")
	seen := 0
	if err := Rate(t.Context(), m, g, func(Row) error {
		if seen++; seen == 5 {
			return enough
		}
		return nil
	}); !errors.Is(err, enough) || seen != 5 {
		t.Errorf("after 5 rows: %d, %v", seen, err)
	}
	gone := errors.New("the client went away")
	ctx, cancel := context.WithCancelCause(t.Context())
	seen = 0
	if err := Rate(ctx, m, g, func(Row) error {
		if seen++; seen == 7 {
			cancel(gone)
		}
		return nil
	}); !errors.Is(err, gone) || seen != 7 {
		t.Errorf("after the end of the context: %d rows, %v", seen, err)
	}
	if err := Rate(ctx, m, g, func(Row) error { t.Error("a row after the end"); return nil }); !errors.Is(err, gone) {
		t.Errorf("with a context that has ended: %v", err)
	}
}

// The memory that a table takes does not grow with it: rows are made only as fast as they are taken.
func TestRateHoldsFewRows(t *testing.T) {
	m := demo(t, "harrow-8")
	g := table()
	g.Workers = 2
	before := runtime.NumGoroutine()
	made := 0
	fluid := &countedFluid{m.Refrigerant, make(chan struct{}, 1<<20)}
	m.Refrigerant = fluid
	enough := errors.New("enough")
	err := Rate(t.Context(), m, g, func(Row) error {
		runtime.Gosched()
		made++
		if made == 3 {
			return enough
		}
		return nil
	})
	if !errors.Is(err, enough) {
		t.Fatal(err)
	}
	// Three rows were taken; at most the queue's and the workers' were begun besides.
	if most := (3 + 2*rowsAhead + 2 + 1) * 200; len(fluid.states) > most {
		t.Errorf("%d dew points were asked for, more than %d", len(fluid.states), most)
	}
	// A goroutine that is done may be counted a moment longer.
	for tries := 0; runtime.NumGoroutine() > before && tries < 500; tries++ {
		time.Sleep(10 * time.Millisecond)
	}
	if after := runtime.NumGoroutine(); after > before {
		t.Errorf("%d goroutines are left over", after-before)
	}
}

func TestRateRefusals(t *testing.T) {
	m := demo(t, "harrow-8")
	for name, c := range map[string]struct {
		change func(g *Grid)
		field  string
	}{
		"no sources":    {func(g *Grid) { g.SourceTemperatures = nil }, "source_temperatures"},
		"not a number":  {func(g *Grid) { g.SinkTemperatures[3] = math.NaN() }, "sink_temperatures.3"},
		"speed below 0": {func(g *Grid) { g.Speeds = []float64{50, -1} }, "speeds.1"},
		"source twice":  {func(g *Grid) { g.Condition.Source.InletTemperature = new(280.0) }, "condition.source.inlet_temperature"},
		"sink twice":    {func(g *Grid) { g.Condition.Sink.OutletTemperature = new(308.0) }, "condition.sink.outlet_temperature"},
		"sink's inlet":  {func(g *Grid) { g.SinkByInlet, g.Condition.Sink.InletTemperature = true, new(308.0) }, "condition.sink.inlet_temperature"},
		"speed twice":   {func(g *Grid) { g.Speeds, g.Condition.Speed = []float64{50}, new(50.0) }, "condition.speed"},
		"no flow":       {func(g *Grid) { g.Condition.Source.VolumeFlow = nil }, "condition.source"},
	} {
		g := table()
		c.change(g)
		err := Rate(t.Context(), m, g, func(Row) error { t.Errorf("%s: a row", name); return nil })
		e, ok := errors.AsType[*RefusedError](err)
		if !ok || e.Refusals[0].Field != c.field {
			t.Errorf("%s: %v, want %s", name, err, c.field)
		}
	}
	m.Superheat = new(-1.0)
	if err := Rate(t.Context(), m, table(), func(Row) error { t.Error("a row"); return nil }); err == nil {
		t.Error("a machine that cannot be is rated")
	}
}

// The sink by its inlet temperature, and with a fixed flow as EN 14511 has it at application points.
func TestRateBySinkInlet(t *testing.T) {
	m := demo(t, "harrow-8")
	g := table()
	g.SourceTemperatures, g.SinkTemperatures, g.SinkByInlet = []float64{280.15}, []float64{303.15}, true
	var by [2]*OperatingPoint
	for i := range by {
		if err := Rate(t.Context(), m, g, func(r Row) error { by[i] = r.Point; return r.Err }); err != nil {
			t.Fatal(err)
		}
		g.SinkByInlet, g.SinkTemperatures = false, []float64{by[0].Condenser.Secondary.OutletTemperature}
		g.Condition.Sink = Stream{Liquid: water(), MassFlow: &by[0].Condenser.Secondary.MassFlow}
	}
	if !(math.Abs(by[1].Condenser.Secondary.InletTemperature-303.15) <= 1e-7) || !(math.Abs(by[1].System.Power/by[0].System.Power-1) <= 1e-8) {
		t.Errorf("inlet %g K, power %g and %g W", by[1].Condenser.Secondary.InletTemperature, by[0].System.Power, by[1].System.Power)
	}
}
