package api

import (
	"errors"
	"runtime"
	"sync"
	"time"

	"github.com/gin-gonic/gin"
	"github.com/prometheus/client_golang/prometheus"
	"github.com/prometheus/client_golang/prometheus/collectors"
	"go.opentelemetry.io/otel/trace"
)

// metrics are what the service tells Prometheus about itself. Label values come from closed sets.
type metrics struct {
	requests     *prometheus.CounterVec
	latency      *prometheus.HistogramVec
	calculations *prometheus.CounterVec
	iterations   *prometheus.HistogramVec
	batches      *prometheus.HistogramVec
	refrigerants *prometheus.CounterVec
	listed       map[string]struct{} // designations that are labels
	refused      *prometheus.CounterVec
	queued       prometheus.Histogram
	inFlight     prometheus.Gauge

	mixtureHits, mixtureMisses prometheus.Counter
	mixturesKept               prometheus.Gauge

	ready prometheus.Gauge

	good       children[prometheus.Counter]  // of calculations, those that succeeded, by kind
	about      children[prometheus.Counter]  // of refrigerants
	batchItems children[prometheus.Observer] // of batches
}

// children keeps the members of a vector by one label, whose values come from a closed set. A vector takes several times as long
// to find them.
type children[T any] struct {
	kept sync.Map // label to T
	find func(label string) T
}

func (k *children[T]) of(label string) T {
	if v, ok := k.kept.Load(label); ok {
		return v.(T)
	}
	v := k.find(label)
	k.kept.Store(label, v)
	return v
}

func newMetrics(o *Options, adm *admission) (*metrics, error) {
	catalogue := o.Catalogue
	m := &metrics{
		requests: prometheus.NewCounterVec(prometheus.CounterOpts{
			Name: "dewmark_http_requests_total", Help: "HTTP requests answered.",
		}, []string{"route", "method", "code"}),
		latency: prometheus.NewHistogramVec(prometheus.HistogramOpts{
			Name: "dewmark_http_request_duration_seconds", Help: "Time to serve an HTTP request.",
			Buckets:                     []float64{.0001, .00025, .0005, .001, .0025, .005, .01, .025, .05, .1, .25, 1, 2.5},
			NativeHistogramBucketFactor: 1.1, NativeHistogramMaxBucketNumber: 100, NativeHistogramMinResetDuration: time.Hour,
		}, []string{"route", "method", "code"}),
		calculations: prometheus.NewCounterVec(prometheus.CounterOpts{
			Name: "dewmark_calculations_total", Help: "States, saturation rows, cycles, machines and readings computed, by what came of them.",
		}, []string{"kind", "outcome"}),
		iterations: prometheus.NewHistogramVec(prometheus.HistogramOpts{
			Name: "dewmark_solver_iterations", Help: "States that a solver asked the property core for until it had its answer; of a machine, evaluations of the whole.",
			Buckets: prometheus.ExponentialBuckets(4, 2, 12),
		}, []string{"kind"}),
		batches: prometheus.NewHistogramVec(prometheus.HistogramOpts{
			Name: "dewmark_batch_items", Help: "Items of a batch request.",
			Buckets: []float64{1, 2, 5, 10, 20, 50, 100, 200, 500, 1000, 2000, 5000, 10000, 100000, 1000000},
		}, []string{"route"}),
		refrigerants: prometheus.NewCounterVec(prometheus.CounterOpts{
			Name: "dewmark_refrigerant_requests_total", Help: "Requests that compute, by the refrigerant they are about.",
		}, []string{"refrigerant"}),
		listed: map[string]struct{}{},
		refused: prometheus.NewCounterVec(prometheus.CounterOpts{
			Name: "dewmark_http_requests_refused_total", Help: "HTTP requests turned away whatever they asked for, by reason.",
		}, []string{"reason"}),
		queued: prometheus.NewHistogram(prometheus.HistogramOpts{
			Name: "dewmark_queue_wait_seconds", Help: "Time that requests waited to be computed, of those that had to wait.",
			Buckets: []float64{.0001, .00025, .0005, .001, .0025, .005, .01, .025, .05, .1, .25, .5, 1},
		}),
		inFlight: prometheus.NewGauge(prometheus.GaugeOpts{
			Name: "dewmark_http_requests_in_flight", Help: "HTTP requests received and not answered yet.",
		}),
		mixturesKept: prometheus.NewGauge(prometheus.GaugeOpts{
			Name: "dewmark_mixtures_kept", Help: "Mixtures by fractions whose phase envelopes are kept.",
		}),
		ready: prometheus.NewGauge(prometheus.GaugeOpts{
			Name: "dewmark_ready", Help: "1 while the service asks for traffic.",
		}),
	}
	m.good.find = func(kind string) prometheus.Counter { return m.calculations.WithLabelValues(kind, "ok") }
	m.about.find = func(designation string) prometheus.Counter { return m.refrigerants.WithLabelValues(designation) }
	m.batchItems.find = func(route string) prometheus.Observer { return m.batches.WithLabelValues(route) }
	mixtureRequests := prometheus.NewCounterVec(prometheus.CounterOpts{
		Name: "dewmark_mixture_requests_total", Help: "Requests for a mixture by its fractions; hit where it was kept already or is being made.",
	}, []string{"result"})
	m.mixtureHits, m.mixtureMisses = mixtureRequests.WithLabelValues("hit"), mixtureRequests.WithLabelValues("miss")
	for _, designation := range catalogue.Designations() {
		m.listed[designation] = struct{}{}
	}
	build := prometheus.NewGauge(prometheus.GaugeOpts{
		Name: "dewmark_build_info", Help: "Always 1; its labels name the build.",
		ConstLabels: prometheus.Labels{"version": o.Version, "goversion": runtime.Version(), "goarch": runtime.GOARCH},
	})
	build.Set(1)
	gauge := func(name, help string, value func() int) prometheus.Collector {
		return prometheus.NewGaugeFunc(prometheus.GaugeOpts{Name: name, Help: help}, func() float64 { return float64(value()) })
	}
	for _, reason := range refusalReasons {
		m.refused.WithLabelValues(reason) // from zero on, so that the first one is an increase
	}
	logLost := prometheus.NewCounterFunc(prometheus.CounterOpts{
		Name: "dewmark_log_records_dropped_total", Help: "Records of the log that were dropped because they could not be written in time.",
	}, func() float64 {
		if o.LogLost == nil {
			return 0
		}
		return float64(o.LogLost())
	})
	var errs []error
	for _, c := range []prometheus.Collector{
		m.requests, m.latency, m.calculations, m.iterations, m.batches, m.refused, m.ready, build,
		mixtureRequests, m.mixturesKept, logLost,
		m.queued, m.inFlight, m.refrigerants,
		gauge("dewmark_calculations_in_progress", "Slots for computing that are taken.", func() int { return len(adm.short.slots) + len(adm.long.slots) }),
		gauge("dewmark_calculations_limit", "Slots for computing.", func() int { return cap(adm.short.slots) + cap(adm.long.slots) }),
		gauge("dewmark_calculations_waiting", "Requests that wait for a slot.", func() int { return int(adm.short.waiting.Load() + adm.long.waiting.Load()) }),
		gauge("dewmark_batches_in_progress", "Long batches under way.", func() int { return len(adm.batches) }),
		gauge("dewmark_saturation_curves", "Saturation curves of pure refrigerants that are made.", func() int { made, _ := catalogue.Curves(); return made }),
		gauge("dewmark_saturation_curve_bytes", "Memory of the saturation curves that are made.", func() int { _, bytes := catalogue.Curves(); return bytes }),
		gauge("dewmark_streams_in_progress", "Streams open.", func() int { return len(adm.streams) }),
		collectors.NewGoCollector(), collectors.NewProcessCollector(collectors.ProcessCollectorOpts{}),
	} {
		errs = append(errs, o.Registry.Register(c))
	}
	return m, errors.Join(errs...)
}

// request enters an answered request. One of a trace that is recorded becomes an example of how long requests take.
func (m *metrics) request(route, method, code string, seconds float64, of trace.SpanContext) {
	m.requests.WithLabelValues(route, method, code).Inc()
	histogram := m.latency.WithLabelValues(route, method, code)
	if of.IsSampled() {
		histogram.(prometheus.ExemplarObserver).ObserveWithExemplar(seconds, prometheus.Labels{"trace_id": of.TraceID().String()})
		return
	}
	histogram.Observe(seconds)
}

// used enters that a request is about a refrigerant. Those that are not in the catalogue, of which there is no end, are
// one.
func (m *metrics) used(designation string) {
	if _, ok := m.listed[designation]; !ok {
		designation = "other"
	}
	m.about.of(designation).Inc()
}

func (m *metrics) batch(c *gin.Context, items int) {
	m.batchItems.of(c.FullPath()).Observe(float64(items))
}

func (m *metrics) setReady(ready bool) {
	if ready {
		m.ready.Set(1)
	} else {
		m.ready.Set(0)
	}
}

// calculated enters what came of calculations of a kind.
func (m *metrics) calculated(kind string, a *account) {
	if a.good > 0 {
		m.good.of(kind).Add(float64(a.good))
	}
	for outcome, n := range a.bad {
		m.calculations.WithLabelValues(kind, outcome).Add(float64(n))
	}
}
