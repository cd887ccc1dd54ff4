package main

import (
	"context"
	"crypto/tls"
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
	tlsCert := flags.String("tls-cert", "", "`file` with the certificate of the service, if it has one")
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
	scheme, client := "http", &http.Client{}
	if *tlsCert != "" {
		scheme = "https"
		// Names in the certificate are those that clients use, not this machine's own. The answer holds nothing to protect.
		client.Transport = &http.Transport{TLSClientConfig: &tls.Config{InsecureSkipVerify: true}} //nolint:gosec // see above
	}
	r, err := http.NewRequestWithContext(ctx, http.MethodGet, scheme+"://"+net.JoinHostPort(host, port)+"/readyz", http.NoBody)
	if err != nil {
		return err
	}
	answer, err := client.Do(r)
	if err != nil {
		return err
	}
	defer answer.Body.Close()
	if answer.StatusCode != http.StatusOK {
		return fmt.Errorf("not ready: %s", answer.Status)
	}
	return nil
}
