package main

import (
	"bytes"
	"cmp"
	"context"
	"encoding/json"
	"errors"
	"flag"
	"fmt"
	"io"
	"log/slog"
	"math/rand/v2"
	"net"
	"net/http"
	"os"
	"reflect"
	"runtime/debug"
	"strconv"
	"time"

	"github.com/gin-gonic/gin"
	"github.com/go-playground/validator/v10"
	"github.com/prometheus/client_golang/prometheus"
)

// exchange is a request and the answer that the service gave it, from which a bare route takes its types.
type exchange struct {
	Path     string
	Request  json.RawMessage
	Response json.RawMessage
}

// serveBare answers as a service would that computes nothing: each route decodes, validates and encodes JSON of the shape
// and size of a real exchange, in the ordinary way, behind the same middleware as dewmark's and with the same collector
// setting. What dewmark takes beyond that is what its calculation and its care for the client cost.
func serveBare(ctx context.Context, args []string) error {
	flags := flag.NewFlagSet("bare", flag.ContinueOnError)
	file := flags.String("exchanges", "", "`file` with the exchanges to imitate")
	if err := flags.Parse(args); err != nil {
		return err
	}
	text, err := os.ReadFile(*file)
	if err != nil {
		return err
	}
	var exchanges []exchange
	if err := json.Unmarshal(text, &exchanges); err != nil {
		return err
	}
	debug.SetGCPercent(300)
	gin.SetMode(gin.ReleaseMode)
	log := slog.New(slog.NewJSONHandler(os.Stderr, nil))
	engine := gin.New()
	engine.Use(observed(log, prometheus.NewRegistry()), recovered(log), secured, slots(256))
	for _, x := range exchanges {
		route, err := newBareRoute(&x)
		if err != nil {
			return fmt.Errorf("%s: %w", x.Path, err)
		}
		engine.POST(x.Path, route.answer)
	}
	var config net.ListenConfig
	listener, err := config.Listen(ctx, "tcp", anyPort)
	if err != nil {
		return err
	}
	log.LogAttrs(ctx, slog.LevelInfo, "listening", slog.String("address", listener.Addr().String()))
	const patience = 30 * time.Second
	srv := &http.Server{Handler: engine, ReadHeaderTimeout: 5 * time.Second, ReadTimeout: patience, WriteTimeout: patience, IdleTimeout: 2 * time.Minute}
	failed := make(chan error, 1)
	go func() { failed <- srv.Serve(listener) }()
	select {
	case err := <-failed:
		return err
	case <-ctx.Done():
		return srv.Close()
	}
}

// observed counts, times and logs requests as the service does.
func observed(log *slog.Logger, registry *prometheus.Registry) gin.HandlerFunc {
	requests := prometheus.NewCounterVec(prometheus.CounterOpts{Name: "requests_total"}, []string{"route", "method", "code"})
	latency := prometheus.NewHistogramVec(prometheus.HistogramOpts{
		Name: "request_duration_seconds", Buckets: []float64{.0001, .00025, .0005, .001, .0025, .005, .01, .025, .05, .1, .25, 1, 2.5},
		NativeHistogramBucketFactor: 1.1, NativeHistogramMaxBucketNumber: 100, NativeHistogramMinResetDuration: time.Hour,
	}, []string{"route", "method", "code"})
	inFlight := prometheus.NewGauge(prometheus.GaugeOpts{Name: "requests_in_flight"})
	registry.MustRegister(requests, latency, inFlight)
	return func(c *gin.Context) {
		start := time.Now()
		inFlight.Inc()
		id := cmp.Or(c.GetHeader("X-Request-Id"), fmt.Sprintf("%016x%016x", rand.Uint64(), rand.Uint64())) //nolint:gosec // an id is no secret
		c.Header("X-Request-Id", id)
		c.Next()
		inFlight.Dec()
		seconds, status, route := time.Since(start).Seconds(), c.Writer.Status(), cmp.Or(c.FullPath(), "unmatched")
		requests.WithLabelValues(route, c.Request.Method, strconv.Itoa(status)).Inc()
		latency.WithLabelValues(route, c.Request.Method, strconv.Itoa(status)).Observe(seconds)
		if log.Enabled(c.Request.Context(), slog.LevelDebug) {
			log.LogAttrs(c.Request.Context(), slog.LevelDebug, "request", slog.String("method", c.Request.Method), slog.String("route", route),
				slog.Int("status", status), slog.Float64("duration_s", seconds), slog.String("request_id", id))
		}
	}
}

// secured sends the headers that keep browsers from mischief.
func secured(c *gin.Context) {
	c.Header("X-Content-Type-Options", "nosniff")
	c.Header("Content-Security-Policy", "default-src 'none'; frame-ancestors 'none'")
	c.Header("Referrer-Policy", "no-referrer")
	c.Header("Cross-Origin-Resource-Policy", "same-origin")
	c.Next()
}

func recovered(log *slog.Logger) gin.HandlerFunc {
	return func(c *gin.Context) {
		defer func() {
			if cause := recover(); cause != nil {
				log.LogAttrs(c.Request.Context(), slog.LevelError, "panic", slog.Any("cause", cause))
				c.AbortWithStatus(http.StatusInternalServerError)
			}
		}()
		c.Next()
	}
}

func slots(n int) gin.HandlerFunc {
	free := make(chan struct{}, n)
	return func(c *gin.Context) {
		select {
		case free <- struct{}{}:
			defer func() { <-free }()
			c.Next()
		default:
			c.AbortWithStatus(http.StatusServiceUnavailable)
		}
	}
}

// bareRoute has the types of an exchange and a ready answer.
type bareRoute struct {
	request  reflect.Type
	response any
	validate *validator.Validate
}

func newBareRoute(x *exchange) (*bareRoute, error) {
	var request, response any
	if err := errors.Join(json.Unmarshal(x.Request, &request), json.Unmarshal(x.Response, &response)); err != nil {
		return nil, err
	}
	answer := reflect.New(typeOf(response, false))
	if err := decodeStrictly(x.Response, answer.Interface()); err != nil {
		return nil, err
	}
	r := &bareRoute{request: typeOf(request, true), response: answer.Elem().Interface(), validate: validator.New(validator.WithRequiredStructEnabled())}
	text, err := json.Marshal(r.response)
	if err != nil {
		return nil, err
	}
	if ratio := float64(len(text)) / float64(len(x.Response)); ratio < 0.97 || ratio > 1.03 {
		return nil, fmt.Errorf("the answer has %d bytes, that of the service %d", len(text), len(x.Response))
	}
	return r, nil
}

func (r *bareRoute) answer(c *gin.Context) {
	body, err := io.ReadAll(http.MaxBytesReader(c.Writer, c.Request.Body, 2_000_000))
	if err != nil {
		_ = c.AbortWithError(http.StatusRequestEntityTooLarge, err)
		return
	}
	request := reflect.New(r.request).Interface()
	if err := decodeStrictly(body, request); err != nil {
		_ = c.AbortWithError(http.StatusBadRequest, err)
		return
	}
	if err := r.validate.Struct(request); err != nil {
		_ = c.AbortWithError(http.StatusUnprocessableEntity, err)
		return
	}
	var out bytes.Buffer
	enc := json.NewEncoder(&out)
	enc.SetEscapeHTML(false)
	if err := enc.Encode(r.response); err != nil {
		_ = c.AbortWithError(http.StatusInternalServerError, err)
		return
	}
	c.Data(http.StatusOK, "application/json", out.Bytes())
}

// decodeStrictly reads one JSON value without unknown members.
func decodeStrictly(text []byte, v any) error {
	dec := json.NewDecoder(bytes.NewReader(text))
	dec.DisallowUnknownFields()
	if err := dec.Decode(v); err != nil {
		return err
	}
	if _, err := dec.Token(); !errors.Is(err, io.EOF) {
		return errors.New("something follows the JSON value")
	}
	return nil
}
