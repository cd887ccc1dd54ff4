package main

import (
	"context"
	"crypto/tls"
	"errors"
	"flag"
	"fmt"
	"log/slog"
	"net"

	"dewmark/api"
)

// access are the flags that say who may call.
type access struct {
	tokenFile, tlsCert, tlsKey, corsOrigin string
	open                                   bool
}

func (a *access) register(flags *flag.FlagSet) {
	flags.StringVar(&a.tokenFile, "token-file", "", "`file` with a name and the SHA-256 of a token on each line, which /v1 then asks for; see dewmark token")
	flags.StringVar(&a.tlsCert, "tls-cert", "", "`file` with the certificate, in PEM, for HTTPS")
	flags.StringVar(&a.tlsKey, "tls-key", "", "`file` with the key of the certificate")
	flags.StringVar(&a.corsOrigin, "cors-origin", "", "`origins` with commas between, whose scripts may call from browsers; * for all")
	flags.BoolVar(&a.open, "open", false, "serve on a public address without tokens and without TLS")
}

// guard is what the flags of access stand for.
type guard struct {
	access
	tokens  *api.Tokens
	tls     *tls.Config // nil without a certificate
	origins []string
}

// load reads the files and watches them until ctx ends.
func (a *access) load(ctx context.Context, log *slog.Logger) (*guard, error) {
	g := &guard{access: *a}
	var err error
	if g.origins, err = api.ParseOrigins(a.corsOrigin); err != nil {
		return nil, fmt.Errorf("--cors-origin: %w", err)
	}
	if a.tokenFile != "" {
		if g.tokens, err = api.LoadTokens(a.tokenFile); err != nil {
			return nil, fmt.Errorf("--token-file: %w", err)
		}
		go watch(ctx, log, "tokens", g.tokens)
	}
	if (a.tlsCert == "") != (a.tlsKey == "") {
		return nil, errors.New("--tls-cert and --tls-key go together")
	}
	if a.tlsCert != "" {
		c, err := loadCertificate(a.tlsCert, a.tlsKey)
		if err != nil {
			return nil, fmt.Errorf("--tls-cert, --tls-key: %w", err)
		}
		g.tls = c.config()
		go watch(ctx, log, "certificate", c)
	}
	return g, nil
}

func (g *guard) apply(o *api.Options) { o.Tokens, o.Origins = g.tokens, g.origins }

// admits refuses to serve whoever reaches a public address, unless that is meant.
func (g *guard) admits(address net.Addr, log *slog.Logger) error {
	if tcp, ok := address.(*net.TCPAddr); ok && tcp.IP.IsLoopback() || g.open {
		return nil
	}
	switch {
	case g.tokens == nil && g.tls == nil:
		return fmt.Errorf("%s can be reached from other machines: give --token-file, or --tls-cert and --tls-key, or say --open if a proxy or a network policy guards it", address)
	case g.tls == nil:
		log.LogAttrs(context.Background(), slog.LevelWarn, "tokens travel unencrypted unless something in front of the service speaks TLS")
	case g.tokens == nil:
		log.LogAttrs(context.Background(), slog.LevelWarn, "whoever reaches the address may call")
	}
	return nil
}
