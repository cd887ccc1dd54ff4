package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"net"
	"strings"
	"syscall"
	"time"
)

// forget closes a connection without telling the peer, as a machine does that loses its power.
func forget(c *net.TCPConn) error {
	const tcpRepair = 19 // linux/tcp.h: a socket under repair is closed without FIN or RST
	raw, err := c.SyscallConn()
	if err != nil {
		return err
	}
	var failed error
	if err := raw.Control(func(fd uintptr) { failed = syscall.SetsockoptInt(int(fd), syscall.IPPROTO_TCP, tcpRepair, 1) }); err != nil {
		return err
	}
	if failed != nil {
		return fmt.Errorf("TCP_REPAIR, which needs root: %w", failed)
	}
	return c.Close()
}

// halfOpen leaves connections of which the service does not learn that they are over.
func halfOpen(ctx context.Context, _ *settings, p *service) (string, error) {
	before, err := p.resources(ctx)
	if err != nil {
		return "", err
	}
	all, err := crowd(ctx, p, 300)
	if err != nil {
		return "", err
	}
	defer disperse(all)
	begun := time.Now()
	for i, c := range all {
		switch i % 3 {
		case 1:
			_, err = io.WriteString(c, "POST /v1/states HTTP/1.1\r\nHost: dewmark\r\nContent-Type: application/json\r\nContent-Length: 1000\r\n\r\n{")
		case 2:
			_, err = io.WriteString(c, "GET /livez HTTP/1.1\r\nHost: dewmark\r\n\r\n")
			_, err2 := c.Read(make([]byte, 4096))
			err = errors.Join(err, err2)
		}
		if err := errors.Join(err, forget(c)); err != nil {
			return "", err
		}
	}
	innocent := ofOthers(ctx, p)
	_, err = p.settle(ctx, before, 2*time.Minute+30*time.Second)
	seen, err2 := innocent.result()
	return fmt.Sprintf("all let go after %.0f s, %s", time.Since(begun).Seconds(), seen), errors.Join(err, err2)
}

// vanishing resets connections while the service is streaming to them.
func vanishing(ctx context.Context, _ *settings, p *service) (string, error) {
	before, err := p.resources(ctx)
	if err != nil {
		return "", err
	}
	all, err := crowd(ctx, p, 50)
	if err != nil {
		return "", err
	}
	defer disperse(all)
	innocent := ofOthers(ctx, p)
	// Some 12 MB of answers, more than the buffers between take: the service is still at it when the client goes.
	lines := `{"refrigerant": "R134a"}` + "\n" + strings.Repeat(`{"temperature": 25, "pressure": 200}`+"\n", 20_000)
	for _, c := range all {
		go fmt.Fprintf(c, "POST /v1/states HTTP/1.1\r\nHost: dewmark\r\nContent-Type: application/x-ndjson\r\nTransfer-Encoding: chunked\r\n\r\n%x\r\n%s\r\n", len(lines), lines)
	}
	time.Sleep(2 * time.Second)
	for _, c := range all {
		if _, err := io.ReadFull(c, make([]byte, 64<<10)); err != nil { // well within the answer
			return "", fmt.Errorf("no stream came: %w", err)
		}
		_ = c.SetLinger(0) // Close then resets
		_ = c.Close()
	}
	took, err := p.settle(ctx, before, 20*time.Second)
	seen, err2 := innocent.result()
	busy, err3 := p.metric(ctx, "dewmark_calculations_in_progress")
	if busy > 0 {
		err3 = errors.Join(err3, fmt.Errorf("%.0f calculations go on for nobody", busy))
	}
	return fmt.Sprintf("all let go after %.1f s, %s", took.Seconds(), seen), errors.Join(err, err2, err3)
}
