// Package api serves dewmark over HTTP: routes, request and response schemas, validation, problem details, units at the
// edge, metrics and limits. It computes nothing itself: states come from props, cycles, machines and readings from service.
//
// Every calculating endpoint is a pure function of its request, so that the same request gives the same bytes.
package api

import (
	"cmp"
	"context"
	"errors"
	"fmt"
	"log/slog"
	"net/http"
	"net/http/pprof"
	"sync"
	"sync/atomic"
	"time"

	"github.com/gin-gonic/gin"
	"github.com/prometheus/client_golang/prometheus"
	"github.com/prometheus/client_golang/prometheus/promhttp"
	"go.opentelemetry.io/otel/trace"

	"dewmark/props"
	"dewmark/props/secondary"
)

// Options holds what an API needs. Catalogue, Registry, Logger and Version are required.
type Options struct {
	Catalogue *props.Catalogue
	Registry  *prometheus.Registry // receives the metrics of this API and serves them to the admin handler
	Logger    *slog.Logger
	Version   string           // of the service; part of every answer
	Now       func() time.Time // clock of the request log and the deadlines; default time.Now
	LogLost   func() int       // records that Logger has dropped so far, for a metric; default none

	MaxBody       int64 // bytes of a JSON request; default DefaultMaxBody
	MaxPoints     int   // items of a batch; default DefaultMaxPoints
	MaxMixtures   int   // mixtures by fractions kept for later requests; default DefaultMaxMixtures
	MaxConcurrent int   // short questions computed at once; default two a processor

	MaxQueue   int           // requests that wait for a slot of each kind before others are turned away; default DefaultMaxQueue
	MaxBatches int           // long batches in memory; default ten for each processor that computes them
	MaxStreams int           // streams open; default DefaultMaxStreams
	Deadline   time.Duration // for one calculation, not for a stream; default DefaultDeadline

	Tokens         *Tokens      // of the clients that may use /v1; default nil, which lets everybody
	Origins        []string     // of scripts in browsers that may read answers, see [ParseOrigins]; default none
	Rate           float64      // requests a second of one client; default 0, which is no limit
	Burst          int          // requests that a client may send at once after a pause; default Rate
	TrustedProxies []string     // addresses or networks whose X-Forwarded-For tells the client's address; default none
	Tracer         trace.Tracer // makes a span of each request; default nil, for none
}

// The default limits. A batch of DefaultMaxPoints with long ids and all digits has 1.5 MB.
const (
	DefaultMaxBody     = 2_000_000
	DefaultMaxPoints   = 10_000
	DefaultMaxMixtures = 128 // of some 0.15 MB each
)

// API answers the requests of dewmark's clients. It is safe for concurrent use.
type API struct {
	engine    *gin.Engine
	catalogue *props.Catalogue
	registry  *prometheus.Registry
	log       *slog.Logger
	now       func() time.Time
	version   string
	metrics   *metrics
	lists     lists
	bases     sync.Map // of []byte by props.Refrigerant: encoded bases, see [job.appendBasis]
	mixtures  *mixtures
	water     func() (*secondary.Liquid, error) // made when it is first wanted
	ready     atomic.Bool

	maxBody   int64
	maxPoints int
	admission admission

	tokens       *Tokens
	origins      []string
	rates        *rates
	tracer       trace.Tracer
	cacheControl string // of answers that change with the version alone
}

// New returns an API that is not ready yet; see [API.Warm].
func New(o Options) (*API, error) {
	switch {
	case o.Catalogue == nil:
		return nil, errors.New("api: no catalogue")
	case o.Registry == nil:
		return nil, errors.New("api: no registry")
	case o.Logger == nil:
		return nil, errors.New("api: no logger")
	case o.Version == "":
		return nil, errors.New("api: no version")
	case o.MaxBody < 0 || o.MaxPoints < 0 || o.MaxMixtures < 0 || o.MaxConcurrent < 0,
		o.MaxQueue < 0 || o.MaxBatches < 0 || o.MaxStreams < 0 || o.Deadline < 0, !(o.Rate >= 0) || o.Burst < 0:
		return nil, errors.New("api: a limit is negative")
	}
	a := &API{
		engine: gin.New(), catalogue: o.Catalogue, registry: o.Registry, log: o.Logger, version: o.Version, now: o.Now,
		maxBody:   cmp.Or(o.MaxBody, DefaultMaxBody),
		maxPoints: cmp.Or(o.MaxPoints, DefaultMaxPoints),
		admission: newAdmission(&o),
	}
	a.tokens, a.origins, a.rates, a.tracer = o.Tokens, o.Origins, newRates(o.Rate, o.Burst), o.Tracer
	a.cacheControl = "public, max-age=3600"
	if a.tokens != nil {
		a.cacheControl = "private, max-age=3600" // a cache on the way would hand it to those without a token
	}
	a.engine.RemoteIPHeaders = []string{"X-Forwarded-For"}
	if err := a.engine.SetTrustedProxies(o.TrustedProxies); err != nil {
		return nil, fmt.Errorf("api: trusted proxies: %w", err)
	}
	if a.now == nil {
		a.now = time.Now
	}
	var err error
	if a.metrics, err = newMetrics(&o, &a.admission); err != nil {
		return nil, err
	}
	a.mixtures = newMixtures(cmp.Or(o.MaxMixtures, DefaultMaxMixtures), a.metrics)
	a.water = sync.OnceValues(func() (*secondary.Liquid, error) { return makeWater(a.catalogue) })
	a.makeLists()
	a.routes()
	return a, nil
}

func (a *API) routes() {
	e := a.engine
	e.HandleMethodNotAllowed = true
	e.RedirectTrailingSlash = false
	e.Use(a.observe, a.recover, a.secure, a.cross, a.authenticate, a.throttle)
	e.NoRoute(a.problem(refusal(http.StatusNotFound, "not-found", "there is no such resource; /openapi.yaml describes all")))
	e.NoMethod(func(c *gin.Context) {
		detail := c.Request.Method + " is not possible here; allowed: " + c.Writer.Header().Get("Allow")
		a.problem(refusal(http.StatusMethodNotAllowed, "method-not-allowed", detail))(c)
	})
	get := func(path string, h ...gin.HandlerFunc) {
		e.GET(path, h...)
		e.HEAD(path, h...)
	}
	get("/livez", a.handle(a.live))
	get("/readyz", a.handle(a.readiness))
	get("/openapi.yaml", a.cached(a.descriptionYAML, "application/yaml"))
	get("/openapi.json", a.cached(a.descriptionJSON, mediaJSON))
	get("/v1/refrigerants", a.cached(a.listRefrigerants, mediaJSON))
	get("/v1/refrigerants/:designation", a.cached(a.describeRefrigerant, mediaJSON))
	get("/v1/states", a.limit, a.admitAtOnce, a.cached(a.singleState, mediaJSON))
	e.POST("/v1/states", a.limit, a.postStates)
	e.POST("/v1/saturation", a.limit, a.handle(a.saturation, mediaJSON, mediaCSV))
	e.POST("/v1/cycles", a.limit, a.handle(a.cycles))
	e.POST("/v1/operating-points", a.limit, a.handle(a.operatingPoints))
	e.POST("/v1/ratings", a.limit, a.ratings)
	e.POST("/v1/compressor-maps/fit", a.limit, a.handle(a.fitMap))
	e.POST("/v1/readings", a.limit, a.postReadings)
}

// Handler answers clients.
func (a *API) Handler() http.Handler { return a.engine }

// AdminHandler answers operators: metrics for Prometheus and the profiler. It does not belong on a public address.
func (a *API) AdminHandler() http.Handler {
	mux := http.NewServeMux()
	mux.Handle("GET /metrics", promhttp.HandlerFor(a.registry, promhttp.HandlerOpts{EnableOpenMetrics: true, Registry: a.registry}))
	mux.HandleFunc("GET /debug/pprof/", pprof.Index)
	mux.HandleFunc("GET /debug/pprof/cmdline", pprof.Cmdline)
	mux.HandleFunc("GET /debug/pprof/profile", pprof.Profile)
	mux.HandleFunc("GET /debug/pprof/symbol", pprof.Symbol)
	mux.HandleFunc("GET /debug/pprof/trace", pprof.Trace)
	return mux
}

// Warm prepares what would make the first requests slow, then turns the API ready. Requests are answered meanwhile.
func (a *API) Warm(ctx context.Context) error {
	if err := a.catalogue.Warm(ctx); err != nil {
		return err
	}
	a.setReady(true)
	return nil
}

// WarmBlends prepares the blends and the lists of the catalogue, which takes a second or two. The API is ready without it:
// requests make what they need first.
func (a *API) WarmBlends(ctx context.Context) error {
	if err := a.catalogue.WarmBlends(ctx); err != nil {
		return err
	}
	for _, encoded := range a.lists {
		if _, err := encoded(); err != nil {
			return err
		}
	}
	return nil
}

// Drain turns the API not ready, so that no new traffic is sent to it. It goes on answering.
func (a *API) Drain() { a.setReady(false) }

func (a *API) setReady(ready bool) {
	a.ready.Store(ready)
	a.metrics.setReady(ready)
}
