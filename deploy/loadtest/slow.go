package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"net"
	"sync/atomic"
	"time"
)

// crowd opens n connections to the service.
func crowd(ctx context.Context, p *service, n int) ([]*net.TCPConn, error) {
	var dialer net.Dialer
	all := make([]*net.TCPConn, 0, n)
	for range n {
		c, err := dialer.DialContext(ctx, "tcp", p.address)
		if err != nil {
			disperse(all)
			return nil, err
		}
		all = append(all, c.(*net.TCPConn))
	}
	return all, nil
}

func disperse(all []*net.TCPConn) {
	for _, c := range all {
		_ = c.Close()
	}
}

// drip sends a text to every connection, a byte a second after the start of it, until the service has closed them all or
// patience ends. It returns how many it closed.
func drip(all []*net.TCPConn, start, rest string, patience time.Duration) int {
	var closed atomic.Int64
	for _, c := range all {
		_, _ = io.WriteString(c, start)
		go func() {
			// The service may answer before it closes.
			_, _ = io.Copy(io.Discard, c)
			closed.Add(1)
		}()
	}
	for i := 0; time.Duration(i)*time.Second < patience && int(closed.Load()) < len(all); i++ {
		time.Sleep(time.Second)
		for _, c := range all {
			_, _ = c.Write([]byte{rest[i%len(rest)]})
		}
	}
	return int(closed.Load())
}

// slowHeaders is the attack that fills a server with requests that never begin.
func slowHeaders(ctx context.Context, _ *settings, p *service) (string, error) {
	return slow(ctx, p, 500, "POST /v1/states HTTP/1.1\r\nHost: dewmark\r\nX-Slow: ", "abcdefgh", 15*time.Second)
}

// slowBodies is the one with bodies that never end. None may keep a place from those who calculate.
func slowBodies(ctx context.Context, _ *settings, p *service) (string, error) {
	return slow(ctx, p, 300, "POST /v1/states HTTP/1.1\r\nHost: dewmark\r\nContent-Type: application/json\r\nContent-Length: 100000\r\n\r\n{", " ", 60*time.Second)
}

func slow(ctx context.Context, p *service, clients int, start, rest string, patience time.Duration) (string, error) {
	before, err := p.resources(ctx)
	if err != nil {
		return "", err
	}
	all, err := crowd(ctx, p, clients)
	if err != nil {
		return "", err
	}
	defer disperse(all)
	innocent := ofOthers(ctx, p)
	begun := time.Now()
	closed := drip(all, start, rest, patience)
	took := time.Since(begun)
	seen, err := innocent.result()
	if closed < clients {
		err = errors.Join(err, fmt.Errorf("%d of %d slow connections are still open after %v", clients-closed, clients, patience))
	}
	if err != nil {
		return seen, err
	}
	_, err = p.settle(ctx, before, 5*time.Second)
	return fmt.Sprintf("all closed after %.0f s, %s", took.Seconds(), seen), err
}

// slowReaders ask for a long answer and leave it in the buffers.
func slowReaders(ctx context.Context, _ *settings, p *service) (string, error) {
	before, err := p.resources(ctx)
	if err != nil {
		return "", err
	}
	all, err := crowd(ctx, p, 300)
	if err != nil {
		return "", err
	}
	defer disperse(all)
	q := batch(10_000)
	request := fmt.Sprintf("POST %s HTTP/1.1\r\nHost: dewmark\r\nContent-Type: application/json\r\nContent-Length: %d\r\n\r\n%s", q.path, len(q.body), q.body)
	for _, c := range all {
		_ = c.SetReadBuffer(4096)
		go func() { _, _ = io.WriteString(c, request) }()
	}
	begun := time.Now()
	innocent := ofOthers(ctx, p)
	time.Sleep(10 * time.Second) // until the last of them is computed
	_, err = p.settle(ctx, before, 150*time.Second)
	seen, err2 := innocent.result()
	peak, err3 := memory(p.pid(), "VmHWM")
	return fmt.Sprintf("let go %.0f s later, %.0f MB at most, %s", time.Since(begun).Seconds(), peak, seen), errors.Join(err, err2, err3)
}
