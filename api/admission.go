package api

import (
	"cmp"
	"context"
	"errors"
	"net/http"
	"runtime"
	"time"

	"github.com/gin-gonic/gin"
)

// Work is short, a single question, or long, a batch or a stream. Each kind has slots of its own, so that neither waits
// for the other, and whoever computes holds a slot. Long work has fewer than there are processors where there are several:
// one is left to answer the short questions and to read the network. A slot is held for computing alone and never while a
// body is read or an answer is sent, so that a client that stalls holds none.

// admission decides which calculations run, which wait and which are turned away.
type admission struct {
	short, long *pool
	batches     chan struct{} // a place is taken by each long batch, from its body to the last byte of its answer
	streams     chan struct{} // likewise by each stream
	queue       int           // requests that may wait for a slot of a pool
	deadline    time.Duration // for one calculation, its wait included; a table in rows has it for each, a stream has none
}

// The default limits of admission.
const (
	DefaultMaxQueue   = 100
	DefaultMaxStreams = 64
	DefaultDeadline   = 20 * time.Second
)

func newAdmission(o *Options) admission {
	return admission{
		short:    newPool(cmp.Or(o.MaxConcurrent, defaultSlots())),
		long:     newPool(longSlots()),
		batches:  make(chan struct{}, cmp.Or(o.MaxBatches, batchesPerSlot*longSlots())),
		streams:  make(chan struct{}, cmp.Or(o.MaxStreams, DefaultMaxStreams)),
		queue:    cmp.Or(o.MaxQueue, DefaultMaxQueue),
		deadline: cmp.Or(o.Deadline, DefaultDeadline),
	}
}

// defaultSlots is more than there are processors, so that one question that takes long does not hold up the next ones, but
// not by much: all that compute at once wait for each other.
func defaultSlots() int { return 2 * runtime.GOMAXPROCS(0) }

// longSlots leaves a quarter of the processors, one at least where there are several, to short questions.
func longSlots() int { return max(1, runtime.GOMAXPROCS(0)*3/4) }

const (
	batchesPerSlot = 10 // so that the last one does not wait for long, and little memory is taken

	longItems = 64          // a batch of more states, or of what costs as much, is long work
	longBody  = 64 << 10    // bytes; so is a larger body, whatever it holds
	queueWait = time.Second // nobody waits longer for a slot to begin
)

// ticket is the right of one request to compute. It belongs to the goroutine of the request. A nil ticket bounds nothing.
type ticket struct {
	a        *API
	ctx      context.Context // ends with the client's patience or at the deadline
	deadline *deadline       // ctx, once the calculation is admitted
	pool     *pool
	held     bool // a slot of pool
	batch    bool // a place among the batches
}

const ticketKey = "ticket"

type ticketContextKey struct{}

// ticketOf returns the ticket of a request that computes, nil for others.
func ticketOf(c *gin.Context) *ticket {
	v, _ := c.Get(ticketKey)
	t, _ := v.(*ticket)
	return t
}

// contextOf is the context of the calculation that a request asks for.
func contextOf(c *gin.Context) context.Context {
	if t := ticketOf(c); t != nil {
		return t.ctx
	}
	return c.Request.Context()
}

// The reasons for which requests are turned away, as metrics name them.
const (
	refusedQueueFull    = "queue_full"
	refusedQueueWait    = "queue_wait"
	refusedBatches      = "batches"
	refusedStreams      = "streams"
	refusedDeadline     = "deadline"
	refusedRate         = "rate_limit"
	refusedUnauthorized = "unauthorized"
)

var refusalReasons = []string{
	refusedQueueFull, refusedQueueWait, refusedBatches, refusedStreams, refusedDeadline, refusedRate, refusedUnauthorized,
}

// errDeadline is the cause that ends a calculation whose time is up, and the answer to it.
var errDeadline = refusal(http.StatusServiceUnavailable, "deadline-exceeded", "the calculation took longer than the service allows; ask for less at a time")

var errQueueWait = errors.New("no slot was free in time")

// turnAway counts a refusal and returns it.
func (a *API) turnAway(reason string, p *Problem) error {
	a.metrics.refused.WithLabelValues(reason).Inc()
	return p
}

func busy(detail string) *Problem {
	return refusal(http.StatusServiceUnavailable, "busy", detail+"; try again in a second")
}

// limit gives a request a ticket, with which [API.decode] admits it once its body is read, and takes back what the handler
// still holds in the end.
func (a *API) limit(c *gin.Context) {
	t := &ticket{a: a, ctx: c.Request.Context(), pool: a.admission.short}
	c.Set(ticketKey, t)
	defer t.close()
	c.Next()
}

// admitAtOnce admits requests that have no body to read before.
func (a *API) admitAtOnce(c *gin.Context) {
	if err := a.admit(c); err != nil {
		c.Abort()
		a.fail(c, err)
		return
	}
	c.Next()
}

// admit starts the clock of a calculation and takes a slot for it.
func (a *API) admit(c *gin.Context) error {
	t := ticketOf(c)
	if t == nil {
		return nil
	}
	t.deadline = newDeadline(c.Request.Context(), t, a.admission.deadline, a.now)
	t.ctx = t.deadline
	return t.start()
}

// close gives everything back.
func (t *ticket) close() {
	t.pause()
	if t.batch {
		t.batch = false
		<-t.a.admission.batches
	}
	if t.deadline != nil {
		t.deadline.close()
	}
}

// start takes a slot, waiting for it among few others and not for long.
func (t *ticket) start() error {
	if t == nil || t.held {
		return nil
	}
	if t.pool.try() {
		t.held = true
		event(t.ctx, "computing")
		t.pool.glance(t.began())
		return nil
	}
	a := t.a
	event(t.ctx, "waiting")
	from := a.now()
	room := a.admission.queue
	if t.pool == a.admission.short { // long work is bounded by its places
		room = t.pool.room(from, room)
	}
	if t.pool.waiting.Load() >= int64(room) {
		t.pool.turnedAway(from)
		return a.turnAway(refusedQueueFull, busy("too many calculations are under way"))
	}
	err := t.pool.wait(t.ctx, queueWait)
	now := a.now()
	a.metrics.queued.Observe(now.Sub(from).Seconds())
	t.held = err == nil
	if t.held && t.pool.grant(from, now) && t.pool == a.admission.short {
		t.pause()
		err = errQueueWait
	}
	if errors.Is(err, errQueueWait) {
		return a.turnAway(refusedQueueWait, busy("other calculations did not end soon enough for this one to begin"))
	}
	if t.held {
		event(t.ctx, "computing")
	}
	return err
}

// began returns when the calculation began, or now where nothing tells.
func (t *ticket) began() time.Time {
	if t.deadline != nil {
		return t.deadline.began
	}
	return t.a.now()
}

// pause gives the slot back while the request waits for its client.
func (t *ticket) pause() {
	if t != nil && t.held {
		t.held = false
		t.pool.release()
	}
}

// resume takes a slot again for work that has begun already and is not turned away any more.
func (t *ticket) resume() error {
	if t == nil || t.held {
		return nil
	}
	err := t.pool.wait(t.ctx, 0)
	t.held = err == nil
	return err
}

// lengthen makes long work of the request, which needs a place among the batches.
func (t *ticket) lengthen() error {
	if t == nil || t.pool == t.a.admission.long {
		return nil
	}
	select {
	case t.a.admission.batches <- struct{}{}:
		t.batch = true
	default:
		return t.a.turnAway(refusedBatches, busy("too many large batches are under way"))
	}
	began := t.held
	t.pause()
	t.pool = t.a.admission.long
	if began {
		return t.start()
	}
	return nil
}

// batch enters how many items a request has, which makes long work of it if they are many. Each costs as much as so many
// states.
func (a *API) batch(c *gin.Context, items, states int) error {
	a.metrics.batch(c, items)
	if items*states <= longItems {
		return nil
	}
	return ticketOf(c).lengthen()
}

// stream takes a place among the streams, to be given back by end.
func (a *API) stream(c *gin.Context) (t *ticket, end func(), err error) {
	select {
	case a.admission.streams <- struct{}{}:
	default:
		return nil, nil, a.turnAway(refusedStreams, busy("too many streams are open"))
	}
	end = func() { <-a.admission.streams }
	if t = ticketOf(c); t != nil {
		t.pool = a.admission.long
	}
	return t, end, nil
}

// breathe stands between the pieces of long work. It lets others have the slot if any wait for it, and returns the cause
// when ctx has ended: then nobody waits for the answer.
func breathe(ctx context.Context) error {
	if ctx.Err() != nil {
		return context.Cause(ctx)
	}
	t, _ := ctx.Value(ticketContextKey{}).(*ticket)
	return t.breathe()
}

func (t *ticket) breathe() error {
	if t == nil || t.pool != t.a.admission.long {
		return nil
	}
	if t.pool.waiting.Load() == 0 {
		runtime.Gosched() // a short question waits for no slot, but perhaps for a processor
		return nil
	}
	t.pause()
	return t.resume()
}

// share is for work whose pieces run on goroutines of their own: the request gives its slot back, and each piece takes one
// when it begins and releases it when it ends.
func (t *ticket) share() (admit func(context.Context) (release func(), err error)) {
	if t == nil {
		return nil
	}
	t.pause()
	p := t.pool
	return func(ctx context.Context) (func(), error) {
		if err := p.wait(ctx, 0); err != nil {
			return nil, err
		}
		return p.release, nil
	}
}

// renew gives a request its whole time again, because who gets a table row by row sees that it goes on.
func (t *ticket) renew() {
	if t != nil && t.deadline != nil {
		t.deadline.extend(t.a.admission.deadline)
	}
}

// helper takes a slot for one more goroutine of the work of ctx, if one is free. The goroutine ends when relieved says so,
// and then calls release.
func helper(ctx context.Context) (relieved func() bool, release func(), ok bool) {
	t, _ := ctx.Value(ticketContextKey{}).(*ticket)
	if t == nil {
		return func() bool { return false }, func() {}, true
	}
	p := t.pool
	if p != t.a.admission.long || !p.try() {
		return nil, nil, false
	}
	return func() bool { return p.waiting.Load() > 0 }, p.release, true
}
