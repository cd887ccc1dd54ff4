package main

import (
	"bufio"
	"bytes"
	"context"
	"errors"
	"fmt"
	"io"
	"maps"
	"net"
	"net/http"
	"slices"
	"strings"
	"sync"
	"time"
)

const (
	excess      = 10               // times the capacity
	maxInFlight = 2000             // requests that the generator keeps open before it holds new ones back
	recovery    = 60 * time.Second // until the memory counts
)

// overload asks for ten times of what the service can do, at a steady rate that does not wait for answers: first with short
// questions, then with long work, which waits in a queue of its own.
func overload(ctx context.Context, s *settings) (*report, error) {
	r := newReport("what", "measured", "goal", "")
	for _, q := range []question{bestCycle, rating} {
		if err := s.overloadWith(ctx, r, &q); err != nil {
			return r, fmt.Errorf("%s: %w", q.name, err)
		}
	}
	return r, nil
}

func (s *settings) overloadWith(ctx context.Context, r *report, q *question) error {
	p, err := s.start(ctx, launch{})
	if err != nil {
		return err
	}
	defer p.end(r)
	if err := p.quiet(ctx); err != nil {
		return err
	}
	short := *s
	short.time = 5 * time.Second
	full, err := short.measure(ctx, p, q, connections)
	if err != nil {
		return err
	}
	alone, err := short.measure(ctx, p, q, 1)
	if err != nil {
		return err
	}
	capacity := float64(full.Requests-full.Errors) / full.Seconds // of the long ones a few are turned away
	// Idle is as it is after ordinary work: code and buffers that any request needs are no remains of a flood.
	before, err := s.recovered(ctx, p)
	if err != nil {
		return err
	}
	r.row("**"+q.name+"**: capacity", fmt.Sprintf("%.0f requests a second", capacity), "", "")
	r.row("p50 without load", fmt.Sprintf("%.2f ms", 1e3*alone.P50), "", "")

	began, err := cpuTime(p.pid())
	if err != nil {
		return err
	}
	f, err := flood(ctx, p.address, q, excess*capacity, s.time)
	if err != nil {
		return err
	}
	ended, err := cpuTime(p.pid())
	if err != nil {
		return err
	}
	r.row("asked", fmt.Sprintf("%.0f requests a second for %v; %d sent, %d held back by the generator", excess*capacity, s.time, f.sent, f.held), "", "")
	statuses, fine := f.judge(r)
	r.row("answers by status", statuses, "200, 429, 503", map[bool]string{true: "met", false: "missed"}[fine])
	r.row("processor time of the service", fmt.Sprintf("%.2f of a core", (ended-began).Seconds()/s.time.Seconds()), "", "")
	p50, p99 := quantile(f.accepted, 0.5).Seconds(), quantile(f.accepted, 0.99).Seconds()
	r.row("p50 of the accepted", fmt.Sprintf("%.1f ms; p95 %.1f ms", 1e3*p50, 1e3*quantile(f.accepted, 0.95).Seconds()), "", "")
	r.row("p99 of the accepted", fmt.Sprintf("%.1f ms, %.1f times the p50 without load", 1e3*p99, p99/alone.P50), "20 times", goal(p99/alone.P50, 20))

	after, err := s.recovered(ctx, p)
	if err != nil {
		return err
	}
	growth := after.memory/before.memory - 1
	r.row("resident memory a minute later", fmt.Sprintf("%.1f MB, %.1f MB before: %+.0f %%", after.memory, before.memory, 100*growth), "+20 %", goal(growth, 0.2))
	r.row("goroutines a minute later", fmt.Sprintf("%.0f, %.0f before", after.goroutines, before.goroutines), "no leak", goal(after.goroutines, before.goroutines+5))
	if after.goroutines > before.goroutines+100 {
		r.fail("%.0f goroutines are left over", after.goroutines-before.goroutines)
	}
	return nil
}

// recovered waits and returns what a service holds then.
func (s *settings) recovered(ctx context.Context, p *service) (resources, error) {
	s.note("waiting %v for the memory", recovery)
	select {
	case <-time.After(recovery):
		return p.resources(ctx)
	case <-ctx.Done():
		return resources{}, ctx.Err()
	}
}

// judge lists the answers by status and reports whether all are what overload may bring.
func (f *flooded) judge(r *report) (statuses string, fine bool) {
	var all []string
	fine = true
	for _, status := range slices.Sorted(maps.Keys(f.statuses)) {
		all = append(all, fmt.Sprintf("%d: %d", status, f.statuses[status]))
		if status != http.StatusOK && status != http.StatusTooManyRequests && status != http.StatusServiceUnavailable {
			r.fail("%d answers of status %d", f.statuses[status], status)
			fine = false
		}
	}
	for cause, n := range f.broken {
		all = append(all, fmt.Sprintf("%s: %d", cause, n))
		r.fail("%d requests without an answer: %s", n, cause)
		fine = false
	}
	if unhinted := f.statuses[http.StatusServiceUnavailable] + f.statuses[http.StatusTooManyRequests] - f.hinted; unhinted > 0 {
		r.fail("%d refusals do not say when to try again", unhinted)
	}
	return strings.Join(all, ", "), fine
}

// resources are what a service holds.
type resources struct{ memory, goroutines, descriptors float64 }

func (p *service) resources(ctx context.Context) (resources, error) {
	rss, err := memory(p.pid(), "VmRSS")
	goroutines, err2 := p.metric(ctx, "go_goroutines")
	descriptors, err3 := p.metric(ctx, "process_open_fds")
	return resources{rss, goroutines, descriptors}, errors.Join(err, err2, err3)
}

// flooded says what became of a flood.
type flooded struct {
	sent, held int
	statuses   map[int]int
	hinted     int            // refusals with Retry-After
	broken     map[string]int // requests without an answer, by cause
	accepted   []time.Duration
}

// flood sends requests at a rate, whether or not the ones before are answered. It keeps connections of its own, since a
// general client would use more processor time than the service that it floods.
func flood(ctx context.Context, address string, q *question, rate float64, duration time.Duration) (*flooded, error) {
	request, err := q.wire(ctx, address)
	if err != nil {
		return nil, err
	}
	f := &flooded{statuses: map[int]int{}, broken: map[string]int{}}
	var mu sync.Mutex
	var idle []*line // under mu; the last to come is the first to go
	open := 0
	var all sync.WaitGroup
	begun := time.Now()
	tick := time.NewTicker(time.Millisecond)
	defer tick.Stop()
	for due := 0; time.Since(begun) < duration && ctx.Err() == nil; <-tick.C {
		for ; float64(due) < rate*time.Since(begun).Seconds(); due++ {
			mu.Lock()
			var l *line
			if n := len(idle); n > 0 {
				l, idle = idle[n-1], idle[:n-1]
			} else if open < maxInFlight {
				open++
			} else {
				f.held++
				mu.Unlock()
				continue
			}
			mu.Unlock()
			f.sent++
			all.Go(func() {
				if l == nil {
					l = &line{patience: 20 * time.Second}
				}
				start := time.Now()
				status, hint, err := l.ask(ctx, address, request)
				took := time.Since(start)
				mu.Lock()
				defer mu.Unlock()
				idle = append(idle, l)
				f.enter(status, hint, took, err)
			})
		}
	}
	all.Wait()
	for _, l := range idle {
		l.close()
	}
	return f, nil
}

func (f *flooded) enter(status int, hint bool, took time.Duration, err error) {
	if err != nil {
		f.broken[cause(err)]++
		return
	}
	f.statuses[status]++
	if hint {
		f.hinted++
	}
	if status == http.StatusOK {
		f.accepted = append(f.accepted, took)
	}
}

// wire returns the bytes of a request.
func (q *question) wire(ctx context.Context, address string) ([]byte, error) {
	r, err := http.NewRequestWithContext(ctx, http.MethodPost, "http://"+address+q.path, strings.NewReader(q.body))
	if err != nil {
		return nil, err
	}
	r.Header.Set("Content-Type", "application/json")
	var b bytes.Buffer
	err = r.Write(&b)
	return b.Bytes(), err
}

// line is a connection that carries one request at a time. It is opened when it is first used, and anew after an error.
type line struct {
	patience time.Duration // for one answer
	conn     net.Conn
	answer   *bufio.Reader
}

// ask sends a request, reads the whole answer and reports its status and whether it says when to try again.
func (l *line) ask(ctx context.Context, address string, request []byte) (status int, hint bool, err error) {
	defer func() {
		if err != nil {
			l.close()
		}
	}()
	if l.conn == nil {
		dialer := net.Dialer{Timeout: l.patience}
		if l.conn, err = dialer.DialContext(ctx, "tcp", address); err != nil {
			return 0, false, err
		}
		l.answer = bufio.NewReader(l.conn)
	}
	if err := l.conn.SetDeadline(time.Now().Add(l.patience)); err != nil {
		return 0, false, err
	}
	if _, err := l.conn.Write(request); err != nil {
		return 0, false, err
	}
	r, err := http.ReadResponse(l.answer, nil)
	if err != nil {
		return 0, false, err
	}
	defer r.Body.Close()
	_, err = io.Copy(io.Discard, r.Body)
	return r.StatusCode, r.Header.Get("Retry-After") != "", err
}

func (l *line) close() {
	if l.conn != nil {
		_ = l.conn.Close() // nobody waits for anything on it
		l.conn = nil
	}
}

// cause shortens an error of the transport to what differs between kinds: the addresses left out.
func cause(err error) string {
	for inner := errors.Unwrap(err); inner != nil; inner = errors.Unwrap(err) {
		err = inner
	}
	return err.Error()
}
