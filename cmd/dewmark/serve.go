package main

import (
	"context"
	"crypto/tls"
	"errors"
	"flag"
	"fmt"
	"log/slog"
	"net"
	"net/http"
	"os"
	"runtime/debug"
	"strings"
	"time"

	"github.com/gin-gonic/gin"
	"github.com/prometheus/client_golang/prometheus"

	"dewmark/api"
	"dewmark/props"
)

// settings are the flags of serve.
type settings struct {
	listen, adminListen string
	drainDelay, drain   time.Duration
	logLevel            slog.Level
	logLost             func() int // no flag: records of the log that were dropped
	limits
	load
	access
}

// limits are the flags that serve and call share.
type limits struct {
	maxBody   int64
	maxPoints int
}

func (l *limits) register(flags *flag.FlagSet) {
	flags.Int64Var(&l.maxBody, "max-body", api.DefaultMaxBody, "largest JSON request in `bytes`")
	flags.IntVar(&l.maxPoints, "max-points", api.DefaultMaxPoints, "largest batch, in `items`")
}

func (l *limits) apply(o *api.Options) { o.MaxBody, o.MaxPoints = l.maxBody, l.maxPoints }

// load are the flags that bound what runs at once.
type load struct {
	maxConcurrent, maxQueue, maxBatches, maxStreams, maxMixtures int
	deadline                                                     time.Duration
	rate                                                         float64
	burst                                                        int
	trustedProxies                                               string
}

func (l *load) register(flags *flag.FlagSet) {
	flags.IntVar(&l.maxConcurrent, "max-concurrent", 0, "short `questions` computed at once; 0 for two a processor")
	flags.IntVar(&l.maxQueue, "max-queue", api.DefaultMaxQueue, "`requests` that wait to be computed before others get a 503")
	flags.IntVar(&l.maxBatches, "max-batches", 0, "long `batches` under way before others get a 503; 0 for ten a processor")
	flags.IntVar(&l.maxStreams, "max-streams", api.DefaultMaxStreams, "`streams` open before others get a 503")
	flags.IntVar(&l.maxMixtures, "max-mixtures", api.DefaultMaxMixtures, "`mixtures` by fractions kept for later requests, of some 0.15 MB each")
	flags.DurationVar(&l.deadline, "deadline", api.DefaultDeadline, "`time` for one calculation, after which it ends with a 503")
	flags.Float64Var(&l.rate, "rate", 0, "`requests` a second of one client before it gets a 429; 0 for no limit")
	flags.IntVar(&l.burst, "burst", 0, "`requests` that a client may send at once after a pause; 0 for those of a second")
	flags.StringVar(&l.trustedProxies, "trusted-proxies", "", "`addresses` or networks with commas between, whose X-Forwarded-For tells the client's address")
}

func (l *load) apply(o *api.Options) {
	o.MaxConcurrent, o.MaxQueue, o.MaxBatches, o.MaxStreams = l.maxConcurrent, l.maxQueue, l.maxBatches, l.maxStreams
	o.MaxMixtures, o.Deadline, o.Rate, o.Burst = l.maxMixtures, l.deadline, l.rate, l.burst
	for proxy := range strings.SplitSeq(l.trustedProxies, ",") {
		if proxy = strings.TrimSpace(proxy); proxy != "" {
			o.TrustedProxies = append(o.TrustedProxies, proxy)
		}
	}
}

const defaultListen = "127.0.0.1:8080"

func serveCommand(ctx context.Context, args []string, log *journal) error {
	s := settings{logLost: log.lost}
	flags := newFlags("serve", "", log)
	flags.StringVar(&s.listen, "listen", defaultListen, "`address` that clients use")
	flags.StringVar(&s.adminListen, "admin-listen", "127.0.0.1:9090", "`address` of /metrics and the profiler; empty for none")
	s.access.register(flags)
	s.limits.register(flags)
	s.load.register(flags)
	flags.DurationVar(&s.drainDelay, "drain-delay", 0, "`time` at shutdown to go on accepting while /readyz says no, for balancers to notice")
	flags.DurationVar(&s.drain, "drain", 20*time.Second, "`time` that requests under way have to end at shutdown")
	flags.TextVar(&s.logLevel, "log-level", slog.LevelInfo, "lowest `level` logged: DEBUG has every request, INFO the refused ones, WARN, ERROR")
	if err := parse(flags, args, 0); err != nil {
		return err
	}
	if err := s.check(); err != nil {
		return err
	}
	return s.serve(ctx, slog.New(log.handler(s.logLevel)))
}

// check refuses a zero where it does not stand for anything. The API would take it for its default.
func (s *settings) check() error {
	for _, limit := range []struct {
		flag string
		zero bool
	}{
		{"max-body", s.maxBody == 0},
		{"max-points", s.maxPoints == 0},
		{"max-queue", s.maxQueue == 0},
		{"max-streams", s.maxStreams == 0},
		{"max-mixtures", s.maxMixtures == 0},
		{"deadline", s.deadline == 0},
	} {
		if limit.zero {
			return fmt.Errorf("--%s must be above zero", limit.flag)
		}
	}
	if s.drain < 0 || s.drainDelay < 0 {
		return errors.New("--drain and --drain-delay must not be negative")
	}
	return nil
}

// serve answers until ctx ends.
func (s *settings) serve(ctx context.Context, log *slog.Logger) (err error) {
	if os.Getenv("GOGC") == "" {
		// A request leaves a few kilobytes of garbage on a heap of a few megabytes, so that at Go's default of 100 the
		// collector would run every few hundred requests. At 300 it takes some 15 MB more, and a request a few per cent less
		// processor time; beyond, a flood leaves more memory behind. A limit in GOMEMLIMIT holds all the same.
		debug.SetGCPercent(300)
	}
	ctx, stop := context.WithCancel(ctx)
	defer stop()
	guard, err := s.access.load(ctx, log)
	if err != nil {
		return err
	}
	tracer, endTracing, err := tracing(ctx, log)
	if err != nil {
		return err
	}
	defer endTracing()
	a, err := newAPI(log, s.limits.apply, s.load.apply, guard.apply, func(o *api.Options) { o.Tracer, o.LogLost = tracer, s.logLost })
	if err != nil {
		return err
	}
	servers, err := s.open(ctx, log, a, guard)
	if err != nil {
		return err
	}
	failed := make(chan error, len(servers))
	for _, srv := range servers {
		go func() { failed <- srv.serve() }()
	}
	go warm(ctx, log, a)
	go newTrimmer().run(ctx)
	select {
	case err = <-failed:
	case <-ctx.Done():
	}
	a.Drain()
	log.LogAttrs(ctx, slog.LevelInfo, "stopping", slog.Float64("drain_s", s.drain.Seconds()))
	if err == nil {
		time.Sleep(s.drainDelay)
	}
	deadline, cancel := context.WithTimeout(context.WithoutCancel(ctx), s.drain)
	defer cancel()
	for _, srv := range servers {
		if late := srv.http.Shutdown(deadline); late != nil {
			// That was agreed on: the service ends in order, only some clients have to ask again.
			log.LogAttrs(ctx, slog.LevelWarn, "requests cut off", slog.String("address", srv.listener.Addr().String()))
			err = errors.Join(err, srv.http.Close())
		}
	}
	return err
}

// open listens for clients and operators.
func (s *settings) open(ctx context.Context, log *slog.Logger, a *api.API, guard *guard) ([]*server, error) {
	var config net.ListenConfig
	public, err := config.Listen(ctx, "tcp", s.listen)
	if err != nil {
		return nil, err
	}
	if err := guard.admits(public.Addr(), log); err != nil {
		return nil, errors.Join(err, public.Close())
	}
	// Reading, waiting, computing and writing one after the other; the API has tighter limits for each.
	answer := readPatience + s.deadline + 2*time.Minute
	servers := []*server{newServer(public, a.Handler(), guard.tls, answer, log)}
	if s.adminListen != "" {
		admin, err := config.Listen(ctx, "tcp", s.adminListen)
		if err != nil {
			return nil, errors.Join(err, public.Close())
		}
		servers = append(servers, newServer(admin, a.AdminHandler(), nil, 2*time.Minute, log)) // a profile takes 30 s by default
		log.LogAttrs(ctx, slog.LevelInfo, "metrics", slog.String("address", admin.Addr().String()))
	}
	log.LogAttrs(ctx, slog.LevelInfo, "listening", slog.String("address", public.Addr().String()), slog.String("version", release()))
	return servers, nil
}

// warm prepares a for its first requests.
func warm(ctx context.Context, log *slog.Logger, a *api.API) {
	start := time.Now()
	if err := a.Warm(ctx); err != nil {
		return
	}
	log.LogAttrs(ctx, slog.LevelInfo, "ready", slog.Float64("warm_up_s", time.Since(start).Seconds()))
	if err := a.WarmBlends(ctx); err == nil { // ready without them: a first request makes the one it needs
		debug.FreeOSMemory() // what warming up left behind would stay for good in a service that is idle
		log.LogAttrs(ctx, slog.LevelInfo, "blends ready", slog.Float64("warm_up_s", time.Since(start).Seconds()))
	}
}

type server struct {
	http     *http.Server
	listener net.Listener
}

const (
	readPatience   = 30 * time.Second // for a request with its body; streams prolong it line by line
	maxHeaderBytes = 16 << 10         // a query with every unit has a twentieth
)

// newServer returns a server that gives up on clients who are slow: to send a request, to take its answer, which may come
// until answer has passed, or to think of another.
func newServer(l net.Listener, h http.Handler, config *tls.Config, answer time.Duration, log *slog.Logger) *server {
	return &server{listener: l, http: &http.Server{
		Handler: h, TLSConfig: config, MaxHeaderBytes: maxHeaderBytes,
		ReadHeaderTimeout: 5 * time.Second, ReadTimeout: readPatience, WriteTimeout: answer, IdleTimeout: 2 * time.Minute,
		ErrorLog: slog.NewLogLogger(log.Handler(), slog.LevelInfo), // of failed handshakes and the like
	}}
}

// serve answers until the server is shut down.
func (s *server) serve() error {
	var err error
	if s.http.TLSConfig != nil {
		err = s.http.ServeTLS(s.listener, "", "")
	} else {
		err = s.http.Serve(s.listener)
	}
	if errors.Is(err, http.ErrServerClosed) {
		return nil
	}
	return err
}

// newAPI returns the API of this process.
func newAPI(log *slog.Logger, settings ...func(*api.Options)) (*api.API, error) {
	gin.SetMode(gin.ReleaseMode)
	catalogue, err := props.NewCatalogue()
	if err != nil {
		return nil, err
	}
	o := api.Options{Catalogue: catalogue, Registry: prometheus.NewRegistry(), Logger: log, Version: release()}
	for _, apply := range settings {
		apply(&o)
	}
	a, err := api.New(o)
	if err != nil {
		return nil, fmt.Errorf("these settings cannot be: %w", err)
	}
	return a, nil
}
