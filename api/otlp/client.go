// Package otlp sends spans to a collector by the OpenTelemetry protocol over HTTP, with protobuf as its encoding. The
// usual exporter brings gRPC along, half as much again as the whole service.
package otlp

import (
	"bytes"
	"compress/gzip"
	"context"
	"errors"
	"fmt"
	"io"
	"math/rand/v2"
	"net/http"
	"net/url"
	"os"
	"strconv"
	"strings"
	"time"

	"go.opentelemetry.io/otel/attribute"
	"go.opentelemetry.io/otel/exporters/otlp/otlptrace"
	"go.opentelemetry.io/otel/sdk/resource"
	sdktrace "go.opentelemetry.io/otel/sdk/trace"
	tracepb "go.opentelemetry.io/proto/otlp/trace/v1"
	"google.golang.org/protobuf/proto"
)

// Wanted reports whether the environment asks for spans, by the variables of the OpenTelemetry specification: an endpoint,
// or otlp as the exporter of traces, and nothing that forbids it.
func Wanted() bool {
	if disabled, _ := strconv.ParseBool(os.Getenv("OTEL_SDK_DISABLED")); disabled {
		return false
	}
	switch os.Getenv("OTEL_TRACES_EXPORTER") {
	case "otlp":
		return true
	case "":
		return variable("ENDPOINT") != ""
	}
	return false
}

// variable returns a setting of the exporter, the one for traces alone before the one for all.
func variable(name string) string {
	if v := os.Getenv("OTEL_EXPORTER_OTLP_TRACES_" + name); v != "" {
		return v
	}
	return os.Getenv("OTEL_EXPORTER_OTLP_" + name)
}

// Client posts spans to a collector.
type Client struct {
	http    *http.Client
	url     string
	header  http.Header
	gzip    bool
	timeout time.Duration // for one batch, with all tries
}

const (
	defaultEndpoint = "http://localhost:4318"
	defaultTimeout  = 10 * time.Second
	tracesPath      = "/v1/traces"
)

// New reads the settings from the environment: OTEL_EXPORTER_OTLP_ENDPOINT, _PROTOCOL, _HEADERS, _TIMEOUT in milliseconds
// and _COMPRESSION, each also with _TRACES before its last word, which goes first. Certificates are those of the system,
// which SSL_CERT_FILE names.
func New() (*Client, error) {
	c := &Client{
		http: &http.Client{Transport: &http.Transport{
			Proxy: http.ProxyFromEnvironment, MaxIdleConnsPerHost: 1, IdleConnTimeout: 90 * time.Second, ForceAttemptHTTP2: true,
		}},
		header: http.Header{"Content-Type": {"application/x-protobuf"}}, timeout: defaultTimeout,
	}
	if p := variable("PROTOCOL"); p != "" && p != "http/protobuf" {
		return nil, fmt.Errorf("OTEL_EXPORTER_OTLP_PROTOCOL is %q; spans are sent as http/protobuf alone", p)
	}
	c.url = os.Getenv("OTEL_EXPORTER_OTLP_TRACES_ENDPOINT") // as it is, says the specification
	if c.url == "" {
		base := os.Getenv("OTEL_EXPORTER_OTLP_ENDPOINT")
		if base == "" {
			base = defaultEndpoint
		}
		c.url = strings.TrimSuffix(base, "/") + tracesPath
	}
	if u, err := url.Parse(c.url); err != nil || u.Scheme != "http" && u.Scheme != "https" || u.Host == "" {
		return nil, errors.New("the OTLP endpoint is no URL such as " + defaultEndpoint) // it may hold a password
	}
	for pair := range strings.SplitSeq(variable("HEADERS"), ",") {
		if strings.TrimSpace(pair) == "" {
			continue
		}
		name, value, ok := strings.Cut(pair, "=")
		value, err := url.PathUnescape(strings.TrimSpace(value))
		if !ok || err != nil || strings.TrimSpace(name) == "" {
			return nil, errors.New("OTEL_EXPORTER_OTLP_HEADERS is no list such as name=value,name=value") // it may hold a secret
		}
		c.header.Set(strings.TrimSpace(name), value)
	}
	if v := variable("TIMEOUT"); v != "" {
		ms, err := strconv.Atoi(v)
		if err != nil || ms <= 0 {
			return nil, fmt.Errorf("OTEL_EXPORTER_OTLP_TIMEOUT is %q; it is a number of milliseconds above zero", v)
		}
		c.timeout = time.Duration(ms) * time.Millisecond
	}
	switch v := variable("COMPRESSION"); v {
	case "gzip":
		c.gzip = true
		c.header.Set("Content-Encoding", "gzip")
	case "", "none":
	default:
		return nil, fmt.Errorf("OTEL_EXPORTER_OTLP_COMPRESSION is %q; allowed are gzip and none", v)
	}
	return c, nil
}

// Start has nothing to do: the first batch opens the connection.
func (c *Client) Start(context.Context) error { return nil }

// Stop closes what is open.
func (c *Client) Stop(context.Context) error {
	c.http.CloseIdleConnections()
	return nil
}

// UploadTraces sends spans. While the collector is busy or out of reach it tries again, with longer and longer pauses,
// until the timeout.
func (c *Client) UploadTraces(ctx context.Context, spans []*tracepb.ResourceSpans) error {
	// On the wire a request of the collector's service is the same as TracesData, whose package knows no gRPC.
	body, err := proto.Marshal(&tracepb.TracesData{ResourceSpans: spans})
	if err != nil {
		return err
	}
	if c.gzip {
		var packed bytes.Buffer
		w := gzip.NewWriter(&packed)
		if _, err = w.Write(body); err == nil {
			err = w.Close()
		}
		if err != nil {
			return err
		}
		body = packed.Bytes()
	}
	ctx, cancel := context.WithTimeout(ctx, c.timeout)
	defer cancel()
	for pause := 500 * time.Millisecond; ; pause *= 2 {
		again, wait, err := c.post(ctx, body)
		if !again {
			return err
		}
		wait = max(wait, pause/2+rand.N(pause)) //nolint:gosec // replicas should not come back all at once, which needs no secret
		select {
		case <-ctx.Done():
			return fmt.Errorf("spans are lost: %w", err)
		case <-time.After(wait):
		}
	}
}

// post sends a body once. It reports whether another try makes sense and how long the collector wants to be left alone.
func (c *Client) post(ctx context.Context, body []byte) (again bool, wait time.Duration, err error) {
	r, err := http.NewRequestWithContext(ctx, http.MethodPost, c.url, bytes.NewReader(body))
	if err != nil {
		return false, 0, err
	}
	r.Header = c.header.Clone()
	answer, err := c.http.Do(r)
	if err != nil {
		if e, ok := errors.AsType[*url.Error](err); ok {
			err = e.Err // the URL may hold a password
		}
		return true, 0, err
	}
	defer answer.Body.Close()
	_, _ = io.Copy(io.Discard, io.LimitReader(answer.Body, 64<<10)) // so that the connection can be used again
	if answer.StatusCode/100 == 2 {
		return false, 0, nil
	}
	err = fmt.Errorf("the collector answers %s", answer.Status)
	switch answer.StatusCode {
	case http.StatusTooManyRequests, http.StatusBadGateway, http.StatusServiceUnavailable, http.StatusGatewayTimeout:
		seconds, _ := strconv.Atoi(answer.Header.Get("Retry-After"))
		return true, time.Duration(seconds) * time.Second, err
	}
	return false, 0, err
}

// NewProvider returns a source of tracers for the service, to be shut down in the end. OTEL_TRACES_SAMPLER, OTEL_BSP_...,
// OTEL_SPAN_..., OTEL_SERVICE_NAME and OTEL_RESOURCE_ATTRIBUTES are obeyed.
func NewProvider(ctx context.Context, version string) (*sdktrace.TracerProvider, error) {
	client, err := New()
	if err != nil {
		return nil, err
	}
	exporter, err := otlptrace.New(ctx, client)
	if err != nil {
		return nil, err
	}
	res, err := resource.New(ctx,
		resource.WithAttributes(attribute.String("service.name", "dewmark"), attribute.String("service.version", version)),
		resource.WithTelemetrySDK(), resource.WithHost(), resource.WithFromEnv())
	if err != nil && !errors.Is(err, resource.ErrPartialResource) {
		return nil, err
	}
	return sdktrace.NewTracerProvider(sdktrace.WithBatcher(exporter), sdktrace.WithResource(res)), nil
}
