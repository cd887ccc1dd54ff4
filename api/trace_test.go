package api

import (
	"bytes"
	"log/slog"
	"net/http/httptest"
	"strings"
	"testing"

	"go.opentelemetry.io/otel/attribute"
	sdktrace "go.opentelemetry.io/otel/sdk/trace"
	"go.opentelemetry.io/otel/sdk/trace/tracetest"
)

// The example of the specification W3C Trace Context, section 3.2.
const (
	traceID     = "4bf92f3577b34da6a3ce929d0e0e4736"
	parentID    = "00f067aa0ba902b7"
	traceparent = "00-" + traceID + "-" + parentID + "-01"
)

func TestRequestID(t *testing.T) {
	for given, taken := range map[string]bool{
		"7c9e6679-7425-40de-944b-e07fc1f90ae7": true, "a.b_c~d": true, "x": true, strings.Repeat("x", 128): true,
		"": false, strings.Repeat("x", 129): false, "a b": false, "a\"b": false, "a<b>": false, "é": false, "a=b": false,
	} {
		w := withHeaders(t, testHandler(t), "GET", "/livez", "X-Request-Id", given)
		got := w.Header().Get("X-Request-Id")
		if (got == given) != taken || got == "" || !plain(got) {
			t.Errorf("%q: %q", given, got)
		}
	}
	if a, b := requestID(""), requestID(""); a == b || len(a) != 32 {
		t.Errorf("%q, %q", a, b)
	}
}

// The log names request and trace and repeats nothing of the request that a client wrote freely.
func TestLogNamesRequest(t *testing.T) {
	var log bytes.Buffer
	a := newAPI(t, func(o *Options) {
		o.Logger = slog.New(slog.NewJSONHandler(&log, &slog.HandlerOptions{Level: slog.LevelDebug}))
	})
	r := newRequest("/v1/states", `{"refrigerant": "confidential", "points": [{"temperature": 1, "pressure": 2}]}`)
	r.Header.Set("X-Request-Id", "order-66")
	r.Header.Set("Traceparent", traceparent)
	if w := ask(t, a.Handler(), r); w.Code != 422 {
		t.Fatalf("%d %s", w.Code, w.Body)
	}
	for _, want := range []string{`"request_id":"order-66"`, `"trace_id":"` + traceID + `"`, `"err":["unknown_refrigerant"]`} {
		if !strings.Contains(log.String(), want) {
			t.Errorf("no %s in %s", want, &log)
		}
	}
	if strings.Contains(log.String(), "confidential") {
		t.Errorf("the log has a part of the body: %s", &log)
	}
	log.Reset()
	r = httptest.NewRequest("GET", "/livez", nil)
	r.Header.Set("Traceparent", "00-"+strings.Repeat("0", 32)+"-"+parentID+"-01") // invalid, says the specification
	serve(a.Handler(), r)
	if strings.Contains(log.String(), "trace_id") {
		t.Errorf("a trace that cannot be: %s", &log)
	}
}

// A histogram has examples of requests whose traces are recorded, and of those alone.
func TestExemplars(t *testing.T) {
	a := newAPI(t, nil)
	exposed := func() string {
		r := httptest.NewRequest("GET", "/metrics", nil)
		r.Header.Set("Accept", "application/openmetrics-text; version=1.0.0")
		return serve(a.AdminHandler(), r).Body.String()
	}
	withHeaders(t, a.Handler(), "GET", stateOfR32, "Traceparent", strings.TrimSuffix(traceparent, "1")+"0")
	if strings.Contains(exposed(), traceID) {
		t.Error("an example that nobody recorded")
	}
	withHeaders(t, a.Handler(), "GET", stateOfR32, "Traceparent", traceparent)
	if want := `# {trace_id="` + traceID + `"}`; !strings.Contains(exposed(), want) {
		t.Errorf("no %s", want)
	}
}

// With a tracer each request is a span below the caller's, with the route as its name.
func TestSpans(t *testing.T) {
	recorder := tracetest.NewSpanRecorder()
	a := newAPI(t, func(o *Options) {
		o.Tracer = sdktrace.NewTracerProvider(sdktrace.WithSpanProcessor(recorder)).Tracer("dewmark")
	})
	withHeaders(t, a.Handler(), "GET", stateOfR32, "Traceparent", traceparent, "X-Request-Id", "order-66")
	do(t, a.Handler(), "POST", "/v1/cycles", "{")
	do(t, a.Handler(), "GET", "/nowhere/at/all", "")
	spans := recorder.Ended()
	if len(spans) != 3 {
		t.Fatalf("%d spans", len(spans))
	}
	for i, want := range []string{"GET /v1/states", "POST /v1/cycles", "GET unmatched"} {
		if spans[i].Name() != want {
			t.Errorf("span %d is called %q, want %q", i, spans[i].Name(), want)
		}
	}
	if got := spans[0].Parent(); got.SpanID().String() != parentID || spans[0].SpanContext().TraceID().String() != traceID {
		t.Errorf("parent %v", got)
	}
	attributes := attribute.NewSet(spans[0].Attributes()...)
	for name, want := range map[attribute.Key]string{"http.route": "/v1/states", "dewmark.request_id": "order-66", "http.response.status_code": "200"} {
		if got, _ := attributes.Value(name); got.String() != want {
			t.Errorf("%s is %q, want %q", name, got.String(), want)
		}
	}
	var events []string
	for _, e := range spans[0].Events() {
		events = append(events, e.Name)
	}
	if strings.Join(events, " ") != "computing computed" {
		t.Errorf("events %q", events)
	}
	attributes = attribute.NewSet(spans[1].Attributes()...)
	if got, _ := attributes.Value("dewmark.problems"); got.String() != `["malformed_json"]` {
		t.Errorf("problems %s", got.String())
	}
}
