package main

import (
	"context"
	"fmt"
	"io"
	"net"
	"net/http"
	"time"
)

// probeCommand asks a running service whether it is ready.
func probeCommand(ctx context.Context, args []string, stderr io.Writer) error {
	flags := newFlags("probe", "", stderr)
	listen := flags.String("listen", defaultListen, "`address` that the service listens on")
	timeout := flags.Duration("timeout", 2*time.Second, "`time` to wait for the answer")
	if err := parse(flags, args, 0); err != nil {
		return err
	}
	host, port, err := net.SplitHostPort(*listen)
	if err != nil {
		return err
	}
	if ip := net.ParseIP(host); host == "" || ip.IsUnspecified() {
		host = "localhost" // all interfaces is no address to call
	}
	ctx, cancel := context.WithTimeout(ctx, *timeout)
	defer cancel()
	r, err := http.NewRequestWithContext(ctx, http.MethodGet, "http://"+net.JoinHostPort(host, port)+"/readyz", http.NoBody)
	if err != nil {
		return err
	}
	answer, err := http.DefaultClient.Do(r)
	if err != nil {
		return err
	}
	defer answer.Body.Close()
	if answer.StatusCode != http.StatusOK {
		return fmt.Errorf("not ready: %s", answer.Status)
	}
	return nil
}
