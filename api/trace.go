package api

import (
	"context"
	"math/rand/v2"
	"net/http"
	"strconv"

	"github.com/gin-gonic/gin"
	"go.opentelemetry.io/otel/attribute"
	"go.opentelemetry.io/otel/codes"
	"go.opentelemetry.io/otel/propagation"
	"go.opentelemetry.io/otel/trace"
)

const requestIDHeader = "X-Request-Id"

// maxRequestID is in bytes.
const maxRequestID = 128

// requestID returns the id that the client gave its request, or a new one. Ids go to the log and back to the client, so
// that only plain ones are taken over.
func requestID(given string) string {
	if given != "" && len(given) <= maxRequestID && plain(given) {
		return given
	}
	const digits = "0123456789abcdef"
	var id [32]byte
	for i := 0; i < len(id); i += 16 {
		for k, random := 0, rand.Uint64(); k < 16; k++ { //nolint:gosec // an id is no secret
			id[i+k] = digits[random&15]
			random >>= 4
		}
	}
	return string(id[:])
}

// plain reports whether text has letters, digits and -._~ alone, the unreserved characters of RFC 3986.
func plain(text string) bool {
	for i := range len(text) {
		switch b := text[i]; {
		case 'a' <= b && b <= 'z', 'A' <= b && b <= 'Z', '0' <= b && b <= '9', b == '-', b == '.', b == '_', b == '~':
		default:
			return false
		}
	}
	return true
}

// traced is what a request tells of where it belongs.
type traced struct {
	id   string // of the request
	span trace.Span
	ids  trace.SpanContext // of our own span, or else of the caller's
}

// trace reads the headers of a request that say where it belongs, W3C Trace Context among them, and begins a span if
// there is a tracer.
func (a *API) trace(c *gin.Context) traced {
	t := traced{id: requestID(c.GetHeader(requestIDHeader))}
	c.Writer.Header()[requestIDHeader] = []string{t.id}
	ctx := c.Request.Context()
	if c.GetHeader("Traceparent") != "" {
		ctx = propagation.TraceContext{}.Extract(ctx, propagation.HeaderCarrier(c.Request.Header))
		t.ids = trace.SpanContextFromContext(ctx)
	}
	if a.tracer == nil {
		return t
	}
	route := routeOf(c)
	ctx, t.span = a.tracer.Start(ctx, methodLabel(c.Request.Method)+" "+route, trace.WithSpanKind(trace.SpanKindServer), trace.WithAttributes(
		attribute.String("http.request.method", methodLabel(c.Request.Method)),
		attribute.String("http.route", route),
		attribute.String("url.scheme", schemeOf(c.Request)),
		attribute.String("dewmark.request_id", t.id),
	))
	t.ids = t.span.SpanContext()
	c.Request = c.Request.WithContext(ctx)
	return t
}

func schemeOf(r *http.Request) string {
	if r.TLS != nil {
		return "https"
	}
	return "http"
}

// end closes the span of a request.
func (t *traced) end(status int, causes []string) {
	if t.span == nil {
		return
	}
	t.span.SetAttributes(attribute.Int("http.response.status_code", status))
	if len(causes) > 0 {
		t.span.SetAttributes(attribute.StringSlice("dewmark.problems", causes))
	}
	if status >= http.StatusInternalServerError {
		t.span.SetStatus(codes.Error, strconv.Itoa(status))
	}
	t.span.End()
}

// event notes a step of a request in its span, if it has one.
func event(ctx context.Context, name string) {
	if span := trace.SpanFromContext(ctx); span.IsRecording() {
		span.AddEvent(name)
	}
}
