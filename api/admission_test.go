package api

import (
	"bufio"
	"context"
	"fmt"
	"io"
	"net"
	"net/http"
	"net/http/httptest"
	"runtime"
	"strings"
	"sync"
	"sync/atomic"
	"testing"
	"testing/synctest"
	"time"

	"github.com/gin-gonic/gin"
	"github.com/prometheus/client_golang/prometheus/testutil"
)

// pipes is a listener whose connections are pipes, which take nothing that is not read.
type pipes struct {
	accepted chan net.Conn
	closed   chan struct{}
	once     sync.Once
}

func newPipes() *pipes { return &pipes{accepted: make(chan net.Conn), closed: make(chan struct{})} }

func (p *pipes) Accept() (net.Conn, error) {
	select {
	case c := <-p.accepted:
		return c, nil
	case <-p.closed:
		return nil, net.ErrClosed
	}
}

func (p *pipes) Close() error {
	p.once.Do(func() { close(p.closed) })
	return nil
}

func (p *pipes) Addr() net.Addr { return &net.UnixAddr{Name: "pipe", Net: "pipe"} }

func (p *pipes) dial() net.Conn {
	client, server := net.Pipe()
	p.accepted <- server
	return client
}

// piped serves an API on pipes within a bubble.
func piped(t *testing.T, a *API) *pipes {
	t.Helper()
	l := newPipes()
	server := &http.Server{Handler: a.Handler(), ReadHeaderTimeout: 5 * time.Second, ReadTimeout: 30 * time.Second, WriteTimeout: 2 * time.Minute}
	done := make(chan struct{})
	go func() {
		_ = server.Serve(l)
		close(done)
	}()
	t.Cleanup(func() {
		_ = server.Close()
		<-done
	})
	return l
}

// blocked adds a route whose handler computes until it is let go.
func blocked(a *API) (release chan struct{}) {
	release = make(chan struct{})
	a.engine.GET("/block", a.limit, a.admitAtOnce, a.handle(func(*gin.Context) (any, error) {
		<-release
		return health{"ok", "devel"}, nil
	}))
	return release
}

// Beyond the slots requests wait in order, beyond the queue they are turned away at once, and none waits for long.
func TestQueue(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		a := newAPI(t, func(o *Options) { o.MaxConcurrent, o.MaxQueue = 1, 2 })
		release := blocked(a)
		var answered sync.Map
		ask := func(i int) {
			w := serve(a.Handler(), httptest.NewRequest("GET", "/block", nil))
			answered.Store(i, fmt.Sprint(w.Code, " ", w.Header().Get("Retry-After")))
		}
		for i := range 4 {
			go ask(i)
			synctest.Wait()
		}
		if got, _ := answered.Load(3); got != "503 1" {
			t.Errorf("with a full queue: %v", got)
		}
		for i := range 2 {
			release <- struct{}{}
			synctest.Wait()
			if got, _ := answered.Load(i); got != "200 " {
				t.Errorf("request %d: %v", i, got)
			}
		}
		go ask(4) // behind number 2, which computes for too long
		time.Sleep(queueWait + time.Millisecond)
		synctest.Wait()
		if got, _ := answered.Load(4); got != "503 1" {
			t.Errorf("after %v: %v", queueWait, got)
		}
		release <- struct{}{}
		synctest.Wait()
		for reason, want := range map[string]float64{refusedQueueFull: 1, refusedQueueWait: 1} {
			if got := testutil.ToFloat64(a.metrics.refused.WithLabelValues(reason)); got != want {
				t.Errorf("%s: %v", reason, got)
			}
		}
		if len(a.admission.short.slots) != 0 || a.admission.short.waiting.Load() != 0 {
			t.Error("a slot is lost")
		}
	})
}

// A burst may wait for as long as it takes within a second, and so may patient clients. When more keeps coming than can be answered, nobody waits for
// much longer than the target, and the processor is kept busy all the same.
func TestQueueUnderLastingOverload(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		const cost = 2 * time.Millisecond
		a := newAPI(t, func(o *Options) { o.MaxConcurrent, o.MaxQueue = 1, 100 })
		a.engine.GET("/work", a.limit, a.admitAtOnce, a.handle(func(*gin.Context) (any, error) {
			time.Sleep(cost)
			return health{"ok", "devel"}, nil
		}))
		var mu sync.Mutex
		var all sync.WaitGroup
		ask := func(done func(status int, took time.Duration)) {
			all.Go(func() {
				start := time.Now()
				status := serve(a.Handler(), httptest.NewRequest("GET", "/work", nil)).Code
				mu.Lock()
				defer mu.Unlock()
				done(status, time.Since(start))
			})
		}
		for range 50 {
			ask(func(status int, took time.Duration) {
				if status != 200 {
					t.Errorf("one of a burst of 50 got %d after %v", status, took)
				}
			})
		}
		all.Wait()

		for range 50 { // clients who ask again when they have their answer
			all.Go(func() {
				for begun := time.Now(); time.Since(begun) < time.Second; {
					if status := serve(a.Handler(), httptest.NewRequest("GET", "/work", nil)).Code; status != 200 {
						t.Errorf("one of 50 patient clients got %d", status)
						return
					}
				}
			})
		}
		all.Wait()

		served, turnedAway, late := 0, 0, 0
		var longest time.Duration
		begun := time.Now()
		for time.Since(begun) < 2*time.Second { // ten times of what can be done
			lasting := time.Since(begun) > 2*burst
			ask(func(status int, took time.Duration) {
				switch {
				case status != 200:
					turnedAway++
				case lasting && took > 3*target+cost:
					late++
					longest = max(longest, took)
					fallthrough
				default:
					served++
				}
			})
			time.Sleep(cost / 10)
		}
		all.Wait()
		if late > 0 {
			t.Errorf("%d answers came late, after %v at most", late, longest)
		}
		if want := int(2 * time.Second / cost); served < want*9/10 || turnedAway < 8*want {
			t.Errorf("%d served and %d turned away; at most %d could be served", served, turnedAway, want)
		}
		ask(func(status int, took time.Duration) {
			if status != 200 || took != cost {
				t.Errorf("after the overload: %d after %v", status, took)
			}
		})
		all.Wait()
	})
}

// A client that goes away while it waits leaves the queue.
func TestQueueForgetsTheGone(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		a := newAPI(t, func(o *Options) { o.MaxConcurrent = 1 })
		release := blocked(a)
		go serve(a.Handler(), httptest.NewRequest("GET", "/block", nil))
		synctest.Wait()
		ctx, cancel := context.WithCancel(t.Context())
		status := make(chan int, 1)
		go func() {
			status <- serve(a.Handler(), httptest.NewRequestWithContext(ctx, "GET", "/block", nil)).Code
		}()
		synctest.Wait()
		cancel()
		synctest.Wait()
		if n := a.admission.short.waiting.Load(); n != 0 {
			t.Errorf("%d wait", n)
		}
		<-status
		if got := testutil.ToFloat64(a.metrics.requests.WithLabelValues("/block", "GET", "499")); got != 1 {
			t.Errorf("counted %v", got)
		}
		close(release)
	})
}

// A calculation that takes longer than allowed ends between its pieces.
func TestDeadline(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		a := newAPI(t, func(o *Options) { o.Deadline = 2500 * time.Millisecond })
		a.engine.GET("/slow", a.limit, a.admitAtOnce, a.handle(func(c *gin.Context) (any, error) {
			for {
				time.Sleep(time.Second)
				if err := breathe(contextOf(c)); err != nil {
					return nil, err
				}
			}
		}))
		start := time.Now()
		w := serve(a.Handler(), httptest.NewRequest("GET", "/slow", nil))
		if w.Code != 503 || problemOf(t, w).Type != "/problems/deadline-exceeded" || w.Header().Get("Retry-After") == "" || time.Since(start) != 3*time.Second {
			t.Errorf("after %v: %d %s", time.Since(start), w.Code, w.Body)
		}
	})
	// Both kinds of batch notice it.
	for _, r := range []*http.Request{
		newRequest("/v1/states", `{"refrigerant": "R134a", "points": [`+batch(10000, ",")+`]}`),
		newRequest("/v1/saturation", `{"refrigerant": "R134a", "range": {"of": "temperature", "from": 0, "to": 50, "step": 0.01}}`),
	} {
		a := newAPI(t, func(o *Options) { o.Deadline = time.Nanosecond })
		if w := ask(t, a.Handler(), r); w.Code != 503 {
			t.Errorf("%s: %d %.200s", r.URL, w.Code, w.Body)
		}
		if len(a.admission.long.slots) != 0 || len(a.admission.batches) != 0 {
			t.Error("a place is lost")
		}
	}
}

// Short questions do not wait for long work, and long work does not wait for short questions.
func TestKindsOfWorkDoNotWaitForEachOther(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		a := newAPI(t, nil)
		take := func(p *pool) {
			for range cap(p.slots) {
				p.slots <- struct{}{}
			}
		}
		long := func() *http.Request {
			return newRequest("/v1/states", `{"refrigerant": "R134a", "points": [`+batch(longItems+1, ",")+`]}`)
		}
		take(a.admission.long)
		if w := do(t, a.Handler(), "GET", stateOfR32, ""); w.Code != 200 {
			t.Errorf("a short question: %d", w.Code)
		}
		done := make(chan int, 1)
		go func() { done <- serve(a.Handler(), long()).Code }()
		synctest.Wait()
		if n := a.admission.long.waiting.Load(); n != 1 {
			t.Errorf("%d wait for a slot for long work", n)
		}
		a.admission.long.release()
		if code := <-done; code != 200 {
			t.Errorf("a batch: %d", code)
		}
		for len(a.admission.long.slots) > 0 {
			a.admission.long.release()
		}
		take(a.admission.short)
		// A batch is known by its size only once its text is read, for which it has a slot as everyone; a large body says so
		// before.
		text := `{"refrigerant": "R134a", "points": [` + batch(longItems+1, ",") + strings.Repeat(" ", longBody) + `]}`
		if w := serve(a.Handler(), newRequest("/v1/states", text)); w.Code != 200 {
			t.Errorf("a large body: %d", w.Code)
		}
	})
}

// There are places for so many batches and streams, and no more.
func TestPlaces(t *testing.T) {
	a := newAPI(t, func(o *Options) { o.MaxBatches, o.MaxStreams = 1, 1 })
	a.admission.batches <- struct{}{}
	a.admission.streams <- struct{}{}
	large := `{"refrigerant": "R134a", "points": [` + batch(longItems+1, ",") + `]}`
	for name, r := range map[string]*http.Request{
		"many items": newRequest("/v1/states", large),
		"many rows":  newRequest("/v1/saturation", `{"refrigerant": "R134a", "range": {"of": "temperature", "from": 0, "to": 50, "step": 0.1}}`),
		"large body": newRequest("/v1/cycles", strings.Repeat(" ", longBody+1)),
		"a stream":   request("POST", "/v1/states", mediaLines, `{"refrigerant": "R134a"}`),
	} {
		w := ask(t, a.Handler(), r)
		if p := problemOf(t, w); w.Code != 503 || p.Type != "/problems/busy" || w.Header().Get("Retry-After") == "" {
			t.Errorf("%s: %d %s", name, w.Code, w.Body)
		}
	}
	if w := do(t, a.Handler(), "POST", "/v1/states", `{"refrigerant": "R134a", "points": [`+batch(longItems, ",")+`]}`); w.Code != 200 {
		t.Errorf("a small batch: %d", w.Code)
	}
	<-a.admission.batches
	if w := do(t, a.Handler(), "POST", "/v1/states", large); w.Code != 200 || len(a.admission.batches) != 0 {
		t.Errorf("with a place: %d, %d taken", w.Code, len(a.admission.batches))
	}
}

// head returns a request as text, whose body follows.
func head(media string, length int) string {
	text := "POST /v1/states HTTP/1.1\r\nHost: localhost\r\nContent-Type: " + media + "\r\n"
	if length < 0 {
		return text + "Transfer-Encoding: chunked\r\n\r\n"
	}
	return text + fmt.Sprintf("Content-Length: %d\r\n\r\n", length)
}

func piece(text string) string { return fmt.Sprintf("%x\r\n%s\r\n", len(text), text) }

func slotsTaken(a *API) int { return len(a.admission.short.slots) + len(a.admission.long.slots) }

// A client that does not read its answer holds a place among the batches, no slot, and neither for ever.
func TestSlowReader(t *testing.T) {
	body := `{"refrigerant": "R134a", "points": [` + batch(1000, ",") + `]}`
	synctest.Test(t, func(t *testing.T) {
		a := newAPI(t, nil)
		c := piped(t, a).dial()
		defer c.Close()
		if _, err := io.WriteString(c, head(mediaJSON, len(body))+body); err != nil {
			t.Fatal(err)
		}
		synctest.Wait()
		if slotsTaken(a) != 0 || len(a.admission.batches) != 1 {
			t.Errorf("%d slots and %d places taken", slotsTaken(a), len(a.admission.batches))
		}
		time.Sleep(2 * time.Minute)
		synctest.Wait()
		if len(a.admission.batches) != 0 {
			t.Error("the place is still taken")
		}
		whole := new(strings.Builder)
		if _, _ = io.Copy(whole, c); whole.Len() > 100_000 {
			t.Errorf("%d bytes of an answer that nobody took in time", whole.Len())
		}
	})
}

// Whoever takes a rating table slowly holds no slot meanwhile. The deadline is for each row, so that the table as a whole
// may take longer.
func TestSlowReaderOfTable(t *testing.T) {
	body := hugeGrid(t)
	synctest.Test(t, func(t *testing.T) {
		a := newAPI(t, nil)
		c := piped(t, a).dial()
		defer c.Close()
		text := strings.Replace(head(mediaJSON, len(body)), "/v1/states HTTP/1.1\r\n", "/v1/ratings HTTP/1.1\r\nAccept: "+mediaLines+"\r\n", 1)
		if _, err := io.WriteString(c, text+body); err != nil {
			t.Fatal(err)
		}
		answer := bufio.NewReaderSize(c, 16)
		for range 5 {
			synctest.Wait()
			if slotsTaken(a) != 0 || len(a.admission.batches) != 1 {
				t.Errorf("%d slots and %d places taken", slotsTaken(a), len(a.admission.batches))
			}
			time.Sleep(DefaultDeadline - time.Second)
			if _, err := answer.Discard(3000); err != nil {
				t.Fatal(err)
			}
		}
		time.Sleep(2 * time.Minute)
		synctest.Wait()
		if len(a.admission.batches) != 0 {
			t.Error("the place is still taken")
		}
	})
}

// A client that stalls in the middle of its body holds no slot, and is cut off.
func TestSlowBody(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		a := newAPI(t, nil)
		c := piped(t, a).dial()
		defer c.Close()
		if _, err := io.WriteString(c, head(mediaJSON, 1000)+`{"refrigerant": `); err != nil {
			t.Fatal(err)
		}
		synctest.Wait()
		if slotsTaken(a) != 0 || testutil.ToFloat64(a.metrics.inFlight) != 1 {
			t.Errorf("%d slots taken, %v in flight", slotsTaken(a), testutil.ToFloat64(a.metrics.inFlight))
		}
		answer, err := http.ReadResponse(bufio.NewReader(c), nil)
		if err != nil || answer.StatusCode != 400 {
			t.Errorf("%v, %v", answer, err)
		}
		synctest.Wait()
		if got := testutil.ToFloat64(a.metrics.inFlight); got != 0 {
			t.Errorf("%v in flight", got)
		}
	})
}

// A stream holds no slot while it waits for its client, whether for a line, for something that is not yet one, or for the
// answers to be taken.
func TestStreamHoldsNoSlot(t *testing.T) {
	const point = `{"temperature": 5, "pressure": 400}` + "\n"
	for name, tt := range map[string]struct {
		sent string
		read bool
	}{
		"waits for the head":     {"", true},
		"waits for a line":       {piece(`{"refrigerant": "R290"}`+"\n") + piece(point), true},
		"waits for half a line":  {piece(`{"refrigerant": "R290"}`+"\n") + piece(point+`{"temp`), true},
		"waits behind no line":   {piece(`{"refrigerant": "R290"}`+"\n") + piece(point+"\n \r\n"), true},
		"answers are not taken":  {piece(`{"refrigerant": "R290"}`+"\n") + piece(strings.Repeat(point, 1000)), false},
		"nothing is taken":       {piece(`{"refrigerant": "R290"}` + "\n"), false},
		"an endless line begins": {piece(`{"refrigerant": "R290"}`+"\n") + piece(strings.Repeat("x", 2*maxLine)), true},
	} {
		t.Run(name, func(t *testing.T) {
			synctest.Test(t, func(t *testing.T) {
				a := newAPI(t, nil)
				c := piped(t, a).dial()
				defer c.Close()
				go func() { _, _ = io.WriteString(c, head(mediaLines, -1)+tt.sent) }()
				if tt.read {
					go func() { _, _ = io.Copy(io.Discard, c) }()
				}
				synctest.Wait()
				if slotsTaken(a) != 0 || len(a.admission.streams) != 1 {
					t.Errorf("%d slots, %d streams", slotsTaken(a), len(a.admission.streams))
				}
				time.Sleep(2*patience + time.Second) // neither direction may stand still for longer than patience
				synctest.Wait()
				if len(a.admission.streams) != 0 {
					t.Error("the stream is still open")
				}
			})
		})
	}
}

// A client that vanishes in the middle of a stream leaves nothing behind.
func TestStreamVanishes(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		a := newAPI(t, nil)
		l := piped(t, a)
		for range 20 {
			c := l.dial()
			go func() { _, _ = io.CopyN(io.Discard, c, 3000) }()
			_, _ = io.WriteString(c, head(mediaLines, -1)+piece(`{"refrigerant": "R290"}`+"\n"))
			_, _ = io.WriteString(c, piece(strings.Repeat(`{"temperature": 5, "pressure": 400}`+"\n", 3)))
			synctest.Wait()
			_ = c.Close()
		}
		synctest.Wait()
		if slotsTaken(a) != 0 || len(a.admission.streams) != 0 || testutil.ToFloat64(a.metrics.inFlight) != 0 {
			t.Errorf("%d slots, %d streams, %v in flight", slotsTaken(a), len(a.admission.streams), testutil.ToFloat64(a.metrics.inFlight))
		}
	})
}

// Whatever comes at once, each answer is a result or a refusal that says when to come back, and in the end everything is
// as before.
func TestOverload(t *testing.T) {
	a := newAPI(t, func(o *Options) {
		o.MaxConcurrent, o.MaxQueue, o.MaxBatches, o.MaxStreams = 1, 2, 1, 1
		o.Rate, o.Burst = 1e5, 150
	})
	before := runtime.NumGoroutine()
	server := httptest.NewServer(a.Handler())
	client := server.Client()
	client.Transport.(*http.Transport).MaxIdleConnsPerHost = 64
	bodies := []*struct{ media, text string }{
		{mediaJSON, `{"refrigerant": "R134a", "points": [` + batch(1, ",") + `]}`},
		{mediaJSON, `{"refrigerant": "R134a", "points": [` + batch(300, ",") + `]}`},
		{mediaLines, `{"refrigerant": "R134a"}` + "\n" + batch(300, "\n")},
	}
	var statuses [600]atomic.Int64
	var wg sync.WaitGroup
	for i := range 32 {
		wg.Go(func() {
			for k := range 20 {
				body := bodies[(i+k)%len(bodies)]
				r, err := http.NewRequestWithContext(t.Context(), http.MethodPost, server.URL+"/v1/states", strings.NewReader(body.text))
				if err != nil {
					t.Error(err)
					return
				}
				r.Header.Set("Content-Type", body.media)
				w, err := client.Do(r)
				if err != nil {
					t.Error(err)
					return
				}
				_, err = io.Copy(io.Discard, w.Body)
				w.Body.Close()
				if err != nil {
					t.Error(err)
				}
				statuses[w.StatusCode].Add(1)
				if w.StatusCode != 200 && w.Header.Get("Retry-After") == "" {
					t.Errorf("%d without Retry-After", w.StatusCode)
				}
			}
		})
	}
	wg.Wait()
	for status := range statuses {
		n := statuses[status].Load()
		if n == 0 {
			continue
		}
		t.Logf("%d: %d", status, n)
		if status != 200 && status != 429 && status != 503 {
			t.Errorf("%d answers of status %d", n, status)
		}
	}
	if statuses[200].Load() == 0 || statuses[503].Load() == 0 {
		t.Error("nothing came through, or nothing was turned away: the test tests nothing")
	}
	client.CloseIdleConnections()
	server.Close()
	for tries := 0; runtime.NumGoroutine() > before && tries < 500; tries++ {
		time.Sleep(10 * time.Millisecond) // the ends of connections take their time
	}
	if now := runtime.NumGoroutine(); now > before {
		t.Errorf("%d goroutines, %d before", now, before)
	}
	if slotsTaken(a) != 0 || len(a.admission.batches) != 0 || len(a.admission.streams) != 0 || testutil.ToFloat64(a.metrics.inFlight) != 0 {
		t.Error("a place is lost")
	}
}
