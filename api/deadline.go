package api

import (
	"context"
	"sync"
	"sync/atomic"
	"time"
)

// deadline is the context of one calculation. It ends with the request, or once its time is up, which can be put off. Most
// calculations are over long before and ask for Err at most, so that only Done makes a timer.
type deadline struct {
	context.Context // of the request
	ticket          *ticket
	now             func() time.Time
	began           time.Time
	allowed         atomic.Int64 // ns from began

	mu    sync.Mutex // guards making and ending timed
	timed atomic.Pointer[timed]
	over  bool // nothing is made any more
}

// timed is the context that a timer ends.
type timed struct {
	context.Context
	cancel context.CancelCauseFunc
	timer  *time.Timer
}

func newDeadline(ctx context.Context, t *ticket, allowed time.Duration, now func() time.Time) *deadline {
	d := &deadline{Context: ctx, ticket: t, now: now, began: now()}
	d.allowed.Store(int64(allowed))
	return d
}

func (d *deadline) left() time.Duration {
	return time.Duration(d.allowed.Load()) - d.now().Sub(d.began)
}

// Deadline is never known for sure, because it can be put off.
func (d *deadline) Deadline() (time.Time, bool) { return time.Time{}, false }

func (d *deadline) Done() <-chan struct{} {
	if t := d.timed.Load(); t != nil {
		return t.Done()
	}
	d.mu.Lock()
	defer d.mu.Unlock()
	t := d.timed.Load()
	if t == nil {
		t = &timed{}
		t.Context, t.cancel = context.WithCancelCause(d.Context)
		if d.over {
			t.cancel(context.Canceled)
		} else {
			t.timer = time.AfterFunc(d.left(), func() { t.cancel(errDeadline) })
		}
		d.timed.Store(t)
	}
	return t.Done()
}

func (d *deadline) Err() error {
	if t := d.timed.Load(); t != nil {
		return t.Err()
	}
	if err := d.Context.Err(); err != nil {
		return err
	}
	if d.left() <= 0 {
		return context.DeadlineExceeded
	}
	return nil
}

func (d *deadline) Value(key any) any {
	if key == (ticketContextKey{}) {
		return d.ticket
	}
	if t := d.timed.Load(); t != nil {
		return t.Value(key)
	}
	return d.Context.Value(key)
}

// extend gives the calculation its whole time again.
func (d *deadline) extend(allowed time.Duration) {
	d.mu.Lock()
	defer d.mu.Unlock()
	d.allowed.Store(int64(d.now().Sub(d.began) + allowed))
	if t := d.timed.Load(); t != nil && !d.over {
		t.timer.Reset(allowed)
	}
}

// close ends the context if it has not ended.
func (d *deadline) close() {
	d.mu.Lock()
	defer d.mu.Unlock()
	if t := d.timed.Load(); t != nil && !d.over {
		t.timer.Stop()
		t.cancel(context.Canceled)
	}
	d.over = true
}
