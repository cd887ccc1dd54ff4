package main

import (
	"context"
	"fmt"
	"net"
	"net/http"
	"strconv"
	"sync"
	"time"
)

// rolling restarts two replicas in turn while clients ask through a proxy: first as a cluster does, which takes a replica out
// of the proxy and pauses before the signal, then with the signal alone, when only the readiness probe can tell the proxy.
func rolling(ctx context.Context, s *settings) (*report, error) {
	r := newReport("how", "restarts", "requests", "failed", "goal", "")
	for _, way := range []struct {
		how    string
		notice time.Duration
		args   []string
	}{
		{"taken out of the proxy 0.3 s before the signal", 300 * time.Millisecond, nil},
		{"the signal alone, readiness asked every 50 ms, --drain-delay 0.5s", 0, []string{"--drain-delay", "0.5s"}},
	} {
		answered, failed, err := s.roll(ctx, way.notice, way.args)
		if err != nil {
			return r, fmt.Errorf("%s: %w", way.how, err)
		}
		total := 0
		for cause, n := range failed {
			total += n
			s.note("%s: %d times %s", way.how, n, cause)
		}
		if total > 0 {
			r.fail("%s: %d of %d requests failed: %v", way.how, total, answered+total, failed)
		}
		r.row(way.how, strconv.Itoa(s.rounds), strconv.Itoa(answered+total), strconv.Itoa(total), "0", goal(float64(total), 0))
	}
	return r, nil
}

// roll restarts replicas and returns what clients had meanwhile.
func (s *settings) roll(ctx context.Context, notice time.Duration, args []string) (answered int, failed map[string]int, err error) {
	ctx, cancel := context.WithCancel(ctx)
	defer cancel()
	p := newProxy()
	defer func() {
		for _, c := range p.replicas {
			c.kill()
		}
	}()
	for i := range 2 {
		if err := s.replace(ctx, p, i, args); err != nil {
			return 0, nil, err
		}
	}
	go p.probe(ctx)
	var config net.ListenConfig
	listener, err := config.Listen(ctx, "tcp", anyPort)
	if err != nil {
		return 0, nil, err
	}
	srv := &http.Server{Handler: p, ReadHeaderTimeout: 5 * time.Second}
	defer srv.Close()
	go func() { _ = srv.Serve(listener) }()

	var mu sync.Mutex
	failed = map[string]int{}
	asking, stop := context.WithCancel(ctx)
	defer stop()
	var clients sync.WaitGroup
	for i := range connections {
		clients.Go(func() {
			client := &http.Client{Timeout: 20 * time.Second, Transport: &http.Transport{}}
			defer client.CloseIdleConnections()
			for n := i; asking.Err() == nil; n++ {
				q := []question{oneState, oneCycle}[n%2]
				_, err := ask(ctx, client, listener.Addr().String(), &q)
				mu.Lock()
				if err != nil {
					failed[cause(err)]++
				} else {
					answered++
				}
				mu.Unlock()
			}
		})
	}
	for n := range s.rounds {
		old := p.replica(n % 2)
		if notice > 0 {
			old.withdrawn.Store(true)
			time.Sleep(notice)
		}
		if err := old.stop(40 * time.Second); err != nil {
			return answered, failed, fmt.Errorf("restart %d: %w\n%s", n, err, &old.log)
		}
		if err := s.replace(ctx, p, n%2, args); err != nil {
			return answered, failed, err
		}
	}
	stop()
	clients.Wait()
	return answered, failed, ctx.Err()
}

// replace starts a new replica and gives it to the proxy once it is ready.
func (s *settings) replace(ctx context.Context, p *proxy, i int, args []string) error {
	fresh, err := s.start(ctx, launch{args: args})
	if err != nil {
		return err
	}
	if err := fresh.await(ctx, "/readyz", 10*time.Second); err != nil {
		fresh.kill()
		return err
	}
	p.put(i, fresh)
	return nil
}
