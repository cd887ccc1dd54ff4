package machine

import (
	"context"
	"fmt"
	"math"
	"runtime"
	"slices"
	"sync"
)

// rowsAhead is how many rows a worker may be ahead of the slowest one, so that a slow row does not hold the others up.
const rowsAhead = 4

// Rate computes the rows of g and hands them to yield in order, on the goroutine of the caller. Rows are independent of each
// other and of the number of workers. It stops when yield returns an error, which it returns, or when ctx ends, whose cause
// it returns. Memory does not grow with the table. A machine or a grid that cannot be is refused with a [*RefusedError]
// before the first row.
func Rate(ctx context.Context, m *Machine, g *Grid, yield func(Row) error) error {
	u := newUnit(m)
	if err := g.check(u); err != nil {
		return err
	}
	total := len(g.SourceTemperatures) * len(g.SinkTemperatures) * max(1, len(g.Speeds))
	workers := g.Workers
	if workers <= 0 {
		workers = runtime.GOMAXPROCS(0)
	}
	workers = min(workers, total)

	ctx, stop := context.WithCancelCause(ctx)
	var wg sync.WaitGroup
	defer wg.Wait()
	defer stop(nil)

	type job struct {
		i   int
		row chan Row
	}
	jobs := make(chan job)
	order := make(chan chan Row, workers*rowsAhead)
	for range workers {
		wg.Go(func() {
			for j := range jobs {
				j.row <- g.row(ctx, u, j.i)
			}
		})
	}
	wg.Go(func() {
		defer close(order)
		defer close(jobs)
		for i := range total {
			j := job{i, make(chan Row, 1)}
			select {
			case order <- j.row:
			case <-ctx.Done():
				return
			}
			select {
			case jobs <- j:
			case <-ctx.Done():
				return
			}
		}
	})
	for {
		var next chan Row
		var open bool
		select {
		case next, open = <-order:
			if !open {
				return context.Cause(ctx)
			}
		case <-ctx.Done():
			return context.Cause(ctx)
		}
		select {
		case row := <-next:
			if ctx.Err() != nil {
				return context.Cause(ctx)
			}
			if err := yield(row); err != nil {
				return err
			}
		case <-ctx.Done():
			return context.Cause(ctx)
		}
	}
}

// row computes one row.
func (g *Grid) row(ctx context.Context, u *unit, i int) (row Row) {
	// A fault in one row must not end the process that serves all others.
	defer func() {
		if fault := recover(); fault != nil {
			row.Err = fmt.Errorf("machine: row %d: %v", i, fault)
		}
	}()
	k, row := g.condition(i)
	if g.Admit != nil {
		release, err := g.Admit(ctx)
		if err != nil {
			row.Err = err
			return row
		}
		defer release()
	}
	row.Point, row.Err = u.solve(ctx, &k)
	return row
}

// condition returns the condition of row i.
func (g *Grid) condition(i int) (Condition, Row) {
	k := g.Condition
	row := Row{Index: i, Speed: math.NaN()}
	if n := len(g.Speeds); n > 0 {
		row.Speed = g.Speeds[i%n]
		k.Speed = &row.Speed
		i /= n
	}
	n := len(g.SinkTemperatures)
	row.SourceTemperature, row.SinkTemperature = g.SourceTemperatures[i/n], g.SinkTemperatures[i%n]
	source, sink := row.SourceTemperature, row.SinkTemperature
	k.Source.InletTemperature = &source
	if g.SinkByInlet {
		k.Sink.InletTemperature = &sink
	} else {
		k.Sink.OutletTemperature = &sink
	}
	return k, row
}

// check refuses a grid that has no rows, or a machine or condition that no row could make good.
func (g *Grid) check(u *unit) error {
	c := checker{refusals: slices.Clone(u.refusals)}
	for _, f := range []struct {
		field  string
		values []float64
		bounds *bounds
	}{
		{"source_temperatures", g.SourceTemperatures, &temperatureBounds},
		{"sink_temperatures", g.SinkTemperatures, &temperatureBounds},
		{"speeds", g.Speeds, &amountBounds},
	} {
		if len(f.values) == 0 && f.field != "speeds" {
			c.missing(f.field, "one temperature at least is needed")
		}
		for i, v := range f.values {
			c.value(index(f.field, i), v, f.bounds)
		}
	}
	k := &g.Condition
	if k.Source.InletTemperature != nil {
		c.surplus("condition.source.inlet_temperature", "source_temperatures gives it")
	}
	if g.SinkByInlet && k.Sink.InletTemperature != nil {
		c.surplus("condition.sink.inlet_temperature", "sink_temperatures gives it")
	}
	if !g.SinkByInlet && k.Sink.OutletTemperature != nil {
		c.surplus("condition.sink.outlet_temperature", "sink_temperatures gives it")
	}
	if len(g.Speeds) > 0 && (k.Speed != nil || k.Demand != (Demand{})) {
		c.surplus("condition.speed", "speeds gives it")
	}
	if err := c.err(); err != nil {
		return err
	}
	first, _ := g.condition(0)
	if _, err := newPlan(u, &first); err != nil {
		e := err.(*RefusedError) //nolint:errorlint // newPlan returns nothing else
		for _, r := range e.Refusals {
			if r.Code == Missing || r.Code == Surplus || r.Code == NotAllowed {
				return err // the same in every row
			}
		}
	}
	return nil
}
