package api

import (
	"context"
	"math"
	"runtime"
	"sync"
	"sync/atomic"
	"time"
)

// A burst may fill the queue, since it passes, and so may clients who are patient. But where requests keep coming faster than
// they are answered, the queue overflows and never empties, and each would wait for as long as the queue is. Then it is cut
// to what passes within a short time, which keeps as many processors busy and answers soon, until none has to be turned away
// any more (after Nichols and Jacobson, Controlling Queue Delay, ACM Queue 10(5), 2012).
const (
	burst  = 100 * time.Millisecond // a queue that overflows and has not been empty for so long is no burst
	target = 6 * time.Millisecond   // what those who wait then should wait
)

// pool holds slots. Those who wait get them in the order they came.
type pool struct {
	slots      chan struct{}
	processors int
	waiting    atomic.Int64
	made       time.Time    // which moments count from, so that a wall clock that is set moves none
	glanced    atomic.Int64 // when somebody who began at once let others go last
	turned     atomic.Int64 // when somebody was turned away last

	mu       sync.Mutex
	cut      bool          // the queue
	empty    time.Time     // when nobody waited last
	granted  time.Time     // when somebody who waited began last
	interval time.Duration // between two such moments, of late
}

func newPool(size int) *pool {
	p := &pool{slots: make(chan struct{}, size), processors: runtime.GOMAXPROCS(0), made: time.Now()}
	p.glanced.Store(never)
	p.turned.Store(never)
	return p
}

// never is long before any moment.
const never = math.MinInt64 / 2

// moment returns now in ns.
func (p *pool) moment(now time.Time) int64 { return int64(now.Sub(p.made)) }

// room returns how many may wait, most at the most.
func (p *pool) room(now time.Time, most int) int {
	p.mu.Lock()
	defer p.mu.Unlock()
	if p.waiting.Load() == 0 {
		p.empty = now
	}
	switch overflows := p.overflows(now); {
	case p.cut && !overflows:
		p.cut, p.empty = false, now
	case overflows && now.Sub(p.empty) > burst:
		p.cut = true
	}
	return min(most, p.briefly())
}

// overflows reports whether somebody was turned away of late.
func (p *pool) overflows(now time.Time) bool { return p.moment(now)-p.turned.Load() <= int64(burst) }

// briefly returns how many may wait for as long as the queue is not cut, or else about as many as begin within the target.
func (p *pool) briefly() int {
	if !p.cut || p.interval <= 0 {
		return math.MaxInt
	}
	return max(cap(p.slots), int(target/p.interval))
}

// grant notes that somebody who has waited since then may begin, unless that was for long and too many others wait.
func (p *pool) grant(then, now time.Time) (late bool) {
	p.mu.Lock()
	defer p.mu.Unlock()
	if now.Sub(then) > target && int(p.waiting.Load()) > p.briefly() {
		p.turned.Store(p.moment(now))
		return true
	}
	if since := now.Sub(p.granted); since < burst {
		p.interval += (since - p.interval) / 8
	}
	p.granted = now
	return false
}

// turnedAway notes that there was no room for somebody.
func (p *pool) turnedAway(now time.Time) { p.turned.Store(p.moment(now)) }

// try takes a slot that is free.
func (p *pool) try() bool {
	if p.waiting.Load() > 0 {
		return false
	}
	select {
	case p.slots <- struct{}{}:
		return true
	default:
		return false
	}
}

// wait takes a slot as soon as there is one. It returns the cause when ctx ends first, and errQueueWait when patience, unless
// it is zero, does.
func (p *pool) wait(ctx context.Context, patience time.Duration) error {
	p.waiting.Add(1)
	defer p.waiting.Add(-1)
	runtime.Gosched() // most that compute are done then, and nothing need be made to wait with
	select {
	case p.slots <- struct{}{}:
		p.yield()
		return nil
	default:
	}
	var over <-chan time.Time
	if patience > 0 {
		over = time.After(patience)
	}
	select {
	case p.slots <- struct{}{}:
		p.yield()
		return nil
	case <-over:
		return errQueueWait
	case <-ctx.Done():
		return context.Cause(ctx)
	}
}

func (p *pool) release() { <-p.slots }

// yield lets others go before a calculation that has just got its slot and would take the last processor: those who came at
// the same time shall see that the slot is taken. Otherwise each would find it free again after the one before, and none
// would be turned away.
func (p *pool) yield() {
	if p.busy() {
		runtime.Gosched()
	}
}

// busy reports whether calculations take all processors.
func (p *pool) busy() bool { return len(p.slots) >= p.processors }

// glance is yield for a calculation that did not have to wait. As long as nobody is turned away, now and then is enough to
// see that others come.
func (p *pool) glance(now time.Time) {
	const often = time.Millisecond
	if at := p.moment(now); p.busy() && (at-p.glanced.Load() >= int64(often) || p.overflows(now)) {
		p.glanced.Store(at)
		runtime.Gosched()
	}
}
