package main

import (
	"context"
	"errors"
	"flag"
	"fmt"
	"io"
	"log/slog"
	"net"
	"net/http"
	"os"
	"runtime/debug"
	"time"

	"github.com/gin-gonic/gin"
	"github.com/prometheus/client_golang/prometheus"

	"dewmark/api"
	"dewmark/props"
)

// settings are the flags of serve.
type settings struct {
	listen, adminListen string
	drain               time.Duration
	logLevel            slog.Level
	limits
}

// limits are the flags that serve and call share.
type limits struct {
	maxBody                  int64
	maxPoints, maxConcurrent int
}

func (l *limits) register(flags *flag.FlagSet) {
	flags.Int64Var(&l.maxBody, "max-body", api.DefaultMaxBody, "largest JSON request in `bytes`")
	flags.IntVar(&l.maxPoints, "max-points", api.DefaultMaxPoints, "largest batch, in `items`")
}

const defaultListen = "127.0.0.1:8080"

func serveCommand(ctx context.Context, args []string, stderr io.Writer) error {
	var s settings
	flags := newFlags("serve", "", stderr)
	flags.StringVar(&s.listen, "listen", defaultListen, "`address` that clients use")
	flags.StringVar(&s.adminListen, "admin-listen", "127.0.0.1:9090", "`address` of /metrics and the profiler; empty for none")
	flags.DurationVar(&s.drain, "drain", 20*time.Second, "`time` that requests under way have to end at shutdown")
	flags.TextVar(&s.logLevel, "log-level", slog.LevelInfo, "lowest `level` logged: DEBUG has every request, INFO the refused ones, WARN, ERROR")
	s.register(flags)
	flags.IntVar(&s.maxConcurrent, "max-concurrent", 0, "short `questions` computed at once; 0 for four a processor")
	if err := parse(flags, args, 0); err != nil {
		return err
	}
	return s.serve(ctx, slog.New(slog.NewJSONHandler(stderr, &slog.HandlerOptions{Level: s.logLevel})))
}

// serve answers until ctx ends.
func (s *settings) serve(ctx context.Context, log *slog.Logger) error {
	if os.Getenv("GOGC") == "" {
		// A request leaves a few kilobytes of garbage on a heap of a few megabytes, so that at Go's default of 100 the
		// collector would run every few hundred requests. At 400 it takes some 20 MB more and a fifth less time.
		debug.SetGCPercent(400)
	}
	a, err := newAPI(log, s.limits)
	if err != nil {
		return err
	}
	var config net.ListenConfig
	public, err := config.Listen(ctx, "tcp", s.listen)
	if err != nil {
		return err
	}
	servers := []*server{newServer(public, a.Handler(), 30*time.Second)}
	if s.adminListen != "" {
		admin, err := config.Listen(ctx, "tcp", s.adminListen)
		if err != nil {
			return errors.Join(err, public.Close())
		}
		servers = append(servers, newServer(admin, a.AdminHandler(), 2*time.Minute)) // a profile takes 30 s by default
		log.LogAttrs(ctx, slog.LevelInfo, "metrics", slog.String("address", admin.Addr().String()))
	}
	log.LogAttrs(ctx, slog.LevelInfo, "listening", slog.String("address", public.Addr().String()), slog.String("version", release()))

	ctx, stop := context.WithCancelCause(ctx)
	defer stop(nil)
	failed := make(chan error, len(servers))
	for _, srv := range servers {
		go func() { failed <- srv.http.Serve(srv.listener) }()
	}
	go func() {
		start := time.Now()
		if err := a.Warm(ctx); err != nil {
			return
		}
		log.LogAttrs(ctx, slog.LevelInfo, "ready", slog.Float64("warm_up_s", time.Since(start).Seconds()))
		if err := a.WarmBlends(ctx); err == nil { // ready without them: a first request makes the one it needs
			log.LogAttrs(ctx, slog.LevelInfo, "blends ready", slog.Float64("warm_up_s", time.Since(start).Seconds()))
		}
	}()
	select {
	case err = <-failed:
	case <-ctx.Done():
	}
	a.Drain()
	log.LogAttrs(ctx, slog.LevelInfo, "stopping", slog.Float64("drain_s", s.drain.Seconds()))
	deadline, cancel := context.WithTimeout(context.WithoutCancel(ctx), s.drain)
	defer cancel()
	for _, srv := range servers {
		if late := srv.http.Shutdown(deadline); late != nil {
			err = errors.Join(err, fmt.Errorf("drain: %w", late), srv.http.Close())
		}
	}
	return err
}

type server struct {
	http     *http.Server
	listener net.Listener
}

// newServer returns a server that gives up on clients who are slower than patience. Streams prolong it line by line.
func newServer(l net.Listener, h http.Handler, patience time.Duration) *server {
	return &server{listener: l, http: &http.Server{
		Handler: h, ReadHeaderTimeout: 5 * time.Second, ReadTimeout: patience, WriteTimeout: patience, IdleTimeout: 2 * time.Minute,
	}}
}

// newAPI returns the API of this process.
func newAPI(log *slog.Logger, l limits) (*api.API, error) {
	gin.SetMode(gin.ReleaseMode)
	catalogue, err := props.NewCatalogue()
	if err != nil {
		return nil, err
	}
	return api.New(api.Options{
		Catalogue: catalogue, Registry: prometheus.NewRegistry(), Logger: log, Version: release(),
		MaxBody: l.maxBody, MaxPoints: l.maxPoints, MaxConcurrent: l.maxConcurrent,
	})
}
