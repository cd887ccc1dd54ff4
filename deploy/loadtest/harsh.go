package main

import (
	"context"
	"errors"
	"fmt"
	"net"
	"net/http"
	"os"
	"sync"
	"time"
)

// freeAddresses returns two addresses that nobody listens on.
func freeAddresses(ctx context.Context) (public, admin string, err error) {
	var config net.ListenConfig
	var addresses [2]string
	for i := range addresses {
		l, err := config.Listen(ctx, "tcp", anyPort)
		if err != nil {
			return "", "", err
		}
		defer l.Close()
		addresses[i] = l.Addr().String()
	}
	return addresses[0], addresses[1], nil
}

// refused sends requests that the service refuses and logs, and returns how many were answered.
func refused(ctx context.Context, p *service, n int) int {
	request, err := (&question{"refused", "/v1/states", `{"refrigerant": "R290", "points": 1}`}).wire(ctx, p.address)
	if err != nil {
		return 0
	}
	l := &line{patience: time.Second}
	defer l.close()
	answered := 0
	for failures := 0; n > 0 && failures < 5; n-- {
		status, _, err := l.ask(ctx, p.address, request)
		switch {
		case err != nil:
			failures++
		case status == http.StatusBadRequest || status == http.StatusUnprocessableEntity:
			answered++
		}
	}
	return answered
}

// withLog starts another service with another end to its log and sends it refused requests.
func (s *settings) withLog(ctx context.Context, log *os.File, n int) (string, error) {
	public, admin, err := freeAddresses(ctx)
	if err != nil {
		return "", err
	}
	p, err := s.start(ctx, launch{address: public, admin: admin, stderr: log, args: []string{"--log-level", "DEBUG"}})
	if err != nil {
		return "", err
	}
	defer p.kill()
	answered := refused(ctx, p, n)
	if answered < n {
		return "", fmt.Errorf("%d of %d refused requests were answered", answered, n)
	}
	client := &http.Client{Timeout: 2 * time.Second}
	if _, err := ask(ctx, client, p.address, &oneCycle); err != nil {
		return "", err
	}
	return fmt.Sprintf("all %d were answered", n), p.stop(30 * time.Second)
}

// fullDisk gives the service a log that takes no more.
func fullDisk(ctx context.Context, s *settings, _ *service) (string, error) {
	full, err := os.OpenFile("/dev/full", os.O_WRONLY, 0)
	if err != nil {
		return "", err
	}
	defer full.Close()
	return s.withLog(ctx, full, 1000)
}

// stuckLog gives the service a pipe that nobody reads.
func stuckLog(ctx context.Context, s *settings, _ *service) (string, error) {
	reader, writer, err := os.Pipe()
	if err != nil {
		return "", err
	}
	defer reader.Close()
	defer writer.Close()
	return s.withLog(ctx, writer, 2000)
}

// killed kills services under load and starts others at once in their place.
func killed(ctx context.Context, s *settings, _ *service) (string, error) {
	public, admin, err := freeAddresses(ctx)
	if err != nil {
		return "", err
	}
	var slowest time.Duration
	for range 5 {
		p, err := s.start(ctx, launch{address: public, admin: admin})
		if err != nil {
			return "", err
		}
		if err := p.await(ctx, "/readyz", 10*time.Second); err != nil {
			p.kill()
			return "", err
		}
		slowest = max(slowest, time.Since(p.began))
		asking, stop := context.WithCancel(ctx)
		var clients sync.WaitGroup
		for range connections {
			clients.Go(func() {
				client := &http.Client{Timeout: time.Second, Transport: &http.Transport{}}
				defer client.CloseIdleConnections()
				for asking.Err() == nil {
					if _, err := ask(asking, client, public, &oneCycle); err != nil {
						time.Sleep(time.Millisecond) // it is being killed
					}
				}
			})
		}
		time.Sleep(500 * time.Millisecond)
		p.kill()
		stop()
		clients.Wait()
	}
	return fmt.Sprintf("ready again within %.0f ms", 1e3*slowest.Seconds()), nil
}

// descriptors opens more connections than the service may have.
func descriptors(ctx context.Context, _ *settings, p *service) (string, error) {
	all, err := crowd(ctx, p, 200) // the kernel completes them; the service may accept some
	if err != nil {
		return "", err
	}
	time.Sleep(2 * time.Second)
	disperse(all)
	begun := time.Now()
	if err := p.await(ctx, "/readyz", 10*time.Second); err != nil {
		return "", errors.Join(errors.New("no answer after the connections closed"), err)
	}
	return fmt.Sprintf("answers %.0f ms after they closed", 1e3*time.Since(begun).Seconds()), nil
}
