package main

import (
	"context"
	"errors"
	"fmt"
	"net/http"
	"slices"
	"strings"
	"sync"
	"time"
)

// fault is one way to misbehave. It does so to a service of its own, says what it saw, and returns an error if the service
// failed others meanwhile or holds on to what it should let go.
type fault struct {
	name, does string
	launch     launch
	run        func(context.Context, *settings, *service) (string, error)
}

var allFaults = []fault{
	{"slow headers", "500 clients send a byte of the header a second", launch{}, slowHeaders},
	{"slow bodies", "300 clients send a byte of the body a second", launch{}, slowBodies},
	{"slow readers", "300 clients ask for 6 MB each and do not read", launch{}, slowReaders},
	{"half-open", "300 clients vanish without a word: before, within and after a request", launch{}, halfOpen},
	{"vanishing", "50 clients reset the connection in the middle of a stream", launch{}, vanishing},
	{"full disk", "every write to the log fails; 1000 refused requests want to be logged", launch{}, fullDisk},
	{"stuck log", "nobody reads the log; 2000 refused requests want to be logged", launch{}, stuckLog},
	{"kill -9", "the service is killed under load and started again on the same address, five times", launch{}, killed},
	{"descriptors", "64 file descriptors, 200 connections", launch{files: 64}, descriptors},
}

// faults runs all of them one after the other. A clock that jumps is a Go test, deploy/clock_test.go: there is one clock on
// this machine, and others read it too.
func faults(ctx context.Context, s *settings) (*report, error) {
	r := newReport("fault", "what happens", "what was seen", "answers afterwards")
	for _, f := range allFaults {
		if s.only != "" && s.only != f.name {
			continue
		}
		if ctx.Err() != nil {
			return r, ctx.Err()
		}
		seen, err := s.suffer(ctx, &f)
		after := "yes"
		if err != nil {
			r.fail("%s: %v", f.name, err)
			after = "**" + strings.ReplaceAll(err.Error(), "\n", " ") + "**"
		}
		s.note("%s: %s; %s", f.name, seen, after)
		r.row(f.name, f.does, seen, after)
	}
	return r, nil
}

// suffer runs one fault and asks afterwards.
func (s *settings) suffer(ctx context.Context, f *fault) (seen string, err error) {
	ctx, cancel := context.WithTimeout(ctx, 5*time.Minute)
	defer cancel()
	p, err := s.start(ctx, f.launch)
	if err != nil {
		return "", err
	}
	defer func() { p.kill() }()
	if err := p.await(ctx, "/readyz", 10*time.Second); err != nil {
		return "", err
	}
	seen, err = f.run(ctx, s, p)
	if err != nil {
		return seen, err
	}
	select {
	case <-p.exited:
		return seen, fmt.Errorf("the service ended: %w", p.exit)
	default:
	}
	client := &http.Client{Timeout: 2 * time.Second, Transport: &http.Transport{DisableKeepAlives: true}}
	if _, err := ask(ctx, client, p.address, &oneCycle); err != nil {
		return seen, fmt.Errorf("no answer afterwards: %w", err)
	}
	return seen, p.stop(30 * time.Second)
}

// others asks as an innocent client does, ten times a second on new connections, until told to stop.
type others struct {
	stop   chan struct{}
	done   sync.WaitGroup
	times  []time.Duration
	failed []error
}

func ofOthers(ctx context.Context, p *service) *others {
	o := &others{stop: make(chan struct{})}
	client := &http.Client{Timeout: 2 * time.Second, Transport: &http.Transport{DisableKeepAlives: true}}
	o.done.Go(func() {
		tick := time.NewTicker(100 * time.Millisecond)
		defer tick.Stop()
		for {
			select {
			case <-o.stop:
				return
			case <-tick.C:
			}
			start := time.Now()
			if _, err := ask(ctx, client, p.address, &oneState); err != nil {
				o.failed = append(o.failed, err)
				continue
			}
			o.times = append(o.times, time.Since(start))
		}
	})
	return o
}

// result stops asking and says how the innocent fared.
func (o *others) result() (string, error) {
	close(o.stop)
	o.done.Wait()
	all := len(o.times) + len(o.failed)
	if len(o.failed) > 0 {
		return "", fmt.Errorf("%d of %d requests of others failed: %w", len(o.failed), all, o.failed[0])
	}
	if all == 0 {
		return "", errors.New("no other request was sent")
	}
	return fmt.Sprintf("%d requests of others answered within %.0f ms", all, 1e3*slices.Max(o.times).Seconds()), nil
}

// settle waits until the service holds no more descriptors and goroutines than before, but for some.
func (p *service) settle(ctx context.Context, before resources, patience time.Duration) (time.Duration, error) {
	const spare = 10
	var now resources
	var err error
	for begun := time.Now(); ; time.Sleep(100 * time.Millisecond) {
		if now, err = p.resources(ctx); err == nil && now.goroutines <= before.goroutines+spare && now.descriptors <= before.descriptors+spare {
			return time.Since(begun), nil
		}
		if time.Since(begun) > patience {
			return patience, errors.Join(err, fmt.Errorf("%v later the service still has %.0f goroutines and %.0f descriptors, %.0f and %.0f before",
				patience, now.goroutines, now.descriptors, before.goroutines, before.descriptors))
		}
	}
}
