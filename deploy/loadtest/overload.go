package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"maps"
	"net/http"
	"slices"
	"strings"
	"sync"
	"time"
)

const (
	excess      = 10               // times the capacity
	maxInFlight = 4000             // requests that the generator keeps open before it holds new ones back
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
	before, err := p.resources(ctx)
	if err != nil {
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
	capacity := float64(full.Requests) / full.Seconds
	r.row("**"+q.name+"**: capacity", fmt.Sprintf("%.0f requests a second", capacity), "", "")
	r.row("p50 without load", fmt.Sprintf("%.2f ms", 1e3*alone.P50), "", "")

	f := flood(ctx, p.address, q, excess*capacity, s.time)
	r.row("asked", fmt.Sprintf("%.0f requests a second for %v; %d sent, %d held back by the generator", excess*capacity, s.time, f.sent, f.held), "", "")
	statuses, fine := f.judge(r)
	r.row("answers by status", statuses, "200, 429, 503", map[bool]string{true: "met", false: "missed"}[fine])
	p50, p99 := quantile(f.accepted, 0.5).Seconds(), quantile(f.accepted, 0.99).Seconds()
	r.row("p50 of the accepted", fmt.Sprintf("%.1f ms", 1e3*p50), "", "")
	r.row("p99 of the accepted", fmt.Sprintf("%.1f ms, %.1f times the p50 without load", 1e3*p99, p99/alone.P50), "20 times", goal(p99/alone.P50, 20))

	s.note("waiting %v for the memory", recovery)
	select {
	case <-time.After(recovery):
	case <-ctx.Done():
		return ctx.Err()
	}
	after, err := p.resources(ctx)
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

// flood sends requests at a rate, whether or not the ones before are answered.
func flood(ctx context.Context, address string, q *question, rate float64, duration time.Duration) *flooded {
	client := &http.Client{Timeout: 20 * time.Second, Transport: &http.Transport{MaxIdleConnsPerHost: maxInFlight}}
	defer client.CloseIdleConnections()
	f := &flooded{statuses: map[int]int{}, broken: map[string]int{}}
	var mu sync.Mutex
	var all sync.WaitGroup
	free := make(chan struct{}, maxInFlight)
	begun := time.Now()
	tick := time.NewTicker(time.Millisecond)
	defer tick.Stop()
	for due := 0; time.Since(begun) < duration && ctx.Err() == nil; <-tick.C {
		for ; float64(due) < rate*time.Since(begun).Seconds(); due++ {
			select {
			case free <- struct{}{}:
			default:
				f.held++
				continue
			}
			f.sent++
			all.Go(func() {
				defer func() { <-free }()
				start := time.Now()
				status, hint, err := send(ctx, client, address, q)
				mu.Lock()
				defer mu.Unlock()
				switch {
				case err != nil:
					f.broken[cause(err)]++
				default:
					f.statuses[status]++
					if hint {
						f.hinted++
					}
					if status == http.StatusOK {
						f.accepted = append(f.accepted, time.Since(start))
					}
				}
			})
		}
	}
	all.Wait()
	return f
}

// send asks once, reads the whole answer and reports its status and whether it says when to try again.
func send(ctx context.Context, client *http.Client, address string, q *question) (status int, hint bool, err error) {
	r, err := http.NewRequestWithContext(ctx, http.MethodPost, "http://"+address+q.path, strings.NewReader(q.body))
	if err != nil {
		return 0, false, err
	}
	r.Header.Set("Content-Type", "application/json")
	answer, err := client.Do(r)
	if err != nil {
		return 0, false, err
	}
	defer answer.Body.Close()
	_, err = io.Copy(io.Discard, answer.Body)
	return answer.StatusCode, answer.Header.Get("Retry-After") != "", err
}

// cause shortens an error of the transport to what differs between kinds: the addresses left out.
func cause(err error) string {
	for inner := errors.Unwrap(err); inner != nil; inner = errors.Unwrap(err) {
		err = inner
	}
	return err.Error()
}
