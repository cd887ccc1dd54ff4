package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"log/slog"
	"net/http"
	"strings"
)

// callCommand answers one request in this process, without a network.
func callCommand(ctx context.Context, args []string, stdin io.Reader, stdout, stderr io.Writer) (code int, err error) {
	var l limits
	flags := newFlags("call", "METHOD PATH", stderr)
	accept := flags.String("accept", "", "`media type` wanted, such as text/csv")
	contentType := flags.String("content-type", "application/json", "`media type` of the body, such as application/x-ndjson")
	l.register(flags)
	if err := parse(flags, args, 2); err != nil {
		return exitOther, err
	}
	method, path := strings.ToUpper(flags.Arg(0)), flags.Arg(1)
	if !strings.HasPrefix(path, "/") {
		return exitOther, fmt.Errorf("the path must begin with /, unlike %q", path)
	}
	if method == http.MethodGet || method == http.MethodHead {
		stdin = http.NoBody // a terminal would wait for input
	}
	r, err := http.NewRequestWithContext(ctx, method, "http://localhost"+path, stdin)
	if err != nil {
		return exitOther, err
	}
	if stdin != http.NoBody {
		r.Header.Set("Content-Type", *contentType)
	}
	if *accept != "" {
		r.Header.Set("Accept", *accept)
	}
	a, err := newAPI(slog.New(slog.NewTextHandler(stderr, &slog.HandlerOptions{Level: slog.LevelError})), l.apply)
	if err != nil {
		return exitOther, err
	}
	defer func() {
		if cause := recover(); cause == http.ErrAbortHandler { //nolint:errorlint // net/http documents this very value
			code, err = exitOther, errors.New("the input broke off")
		} else if cause != nil {
			panic(cause)
		}
	}()
	w := &printer{out: stdout, header: http.Header{}, mute: method == http.MethodHead}
	a.Handler().ServeHTTP(w, r)
	switch w.status / 100 {
	case 2:
		return exitGood, w.err
	case 4:
		return exitRefused, w.err
	}
	return exitOther, w.err
}

// printer is a response writer that prints the body.
type printer struct {
	out    io.Writer
	header http.Header
	status int
	mute   bool // HEAD has no body
	err    error
}

func (p *printer) Header() http.Header { return p.header }

func (p *printer) WriteHeader(status int) {
	if p.status == 0 {
		p.status = status
	}
}

func (p *printer) Write(b []byte) (int, error) {
	p.WriteHeader(http.StatusOK)
	if p.mute {
		return len(b), nil
	}
	n, err := p.out.Write(b)
	if err != nil {
		p.err = err
	}
	return n, err
}

// Flush has nothing to do: nothing is held back.
func (p *printer) Flush() {}
