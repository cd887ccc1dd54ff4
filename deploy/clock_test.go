package deploy_test

import (
	"bufio"
	"fmt"
	"io"
	"log/slog"
	"net/http"
	"net/http/httptest"
	"strings"
	"sync/atomic"
	"testing"
	"time"
	"unsafe"

	"github.com/gin-gonic/gin"
	"github.com/prometheus/client_golang/prometheus"

	"dewmark/api"
	"dewmark/props"
)

// jumpingClock tells the time of a machine whose wall clock somebody sets, by so many seconds since the test began. As on
// such a machine the monotonic reading goes on undisturbed.
type jumpingClock struct{ seconds atomic.Int64 }

func (c *jumpingClock) now() time.Time {
	t := time.Now()
	// The first word of a Time with a monotonic reading holds a flag, 33 bits of seconds and 30 bits of nanoseconds. Add would
	// shift the monotonic reading too.
	*(*uint64)(unsafe.Pointer(&t)) += uint64(c.seconds.Load()) << 30
	return t
}

func TestJumpingClock(t *testing.T) {
	var c jumpingClock
	before := c.now()
	c.seconds.Store(-86_400)
	if after := c.now(); after.Sub(before) < 0 || after.Sub(before) > time.Hour || before.Round(0).Sub(after.Round(0)) < 23*time.Hour {
		t.Errorf("%v after %v: not a jump of the wall clock alone", after, before)
	}
}

// The wall clock jumps a day back and forth between and within requests. All are answered, streams go on, and no time that
// the metrics count is negative or a day long.
func TestServiceWithJumpingClock(t *testing.T) {
	gin.SetMode(gin.ReleaseMode)
	catalogue, err := props.NewCatalogue()
	if err != nil {
		t.Fatal(err)
	}
	var clock jumpingClock
	registry := prometheus.NewRegistry()
	a, err := api.New(api.Options{Catalogue: catalogue, Registry: registry, Logger: slog.New(slog.DiscardHandler), Version: "test", Now: clock.now})
	if err != nil {
		t.Fatal(err)
	}
	server := httptest.NewServer(a.Handler())
	defer server.Close()

	body, sink := io.Pipe()
	request, err := http.NewRequestWithContext(t.Context(), http.MethodPost, server.URL+"/v1/states", body)
	if err != nil {
		t.Fatal(err)
	}
	request.Header.Set("Content-Type", "application/x-ndjson")
	go fmt.Fprintln(sink, `{"refrigerant": "R290"}`)
	stream, err := http.DefaultClient.Do(request)
	if err != nil {
		t.Fatal(err)
	}
	defer stream.Body.Close()
	lines := bufio.NewScanner(stream.Body)
	for i, jump := range []int64{86_400, -86_400, 0, 3600, -3600, 100_000_000, -100_000_000} {
		clock.seconds.Store(jump)
		answer, err := http.Get(server.URL + "/v1/states?refrigerant=R290&temperature=5&pressure=400") //nolint:noctx // a loopback address within a test
		if err != nil || answer.StatusCode != http.StatusOK {
			t.Fatalf("jump of %d s: %v %v", jump, answer, err)
		}
		answer.Body.Close()
		clock.seconds.Store(-jump) // between the lines of the stream
		go fmt.Fprintf(sink, `{"id": "%d", "temperature": 5, "pressure": 400}`+"\n", i)
		if !lines.Scan() || !strings.Contains(lines.Text(), fmt.Sprintf(`"id":"%d"`, i)) {
			t.Fatalf("jump of %d s: the stream says %q, %v", -jump, lines.Text(), lines.Err())
		}
	}
	sink.Close()
	if lines.Scan() || lines.Err() != nil {
		t.Errorf("the stream ends with %q, %v", lines.Text(), lines.Err())
	}
	families, err := registry.Gather()
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range families {
		if f.GetName() != "dewmark_http_request_duration_seconds" {
			continue
		}
		for _, m := range f.GetMetric() {
			if sum := m.GetHistogram().GetSampleSum(); sum < 0 || sum > 60 {
				t.Errorf("requests took %g s together: %v", sum, m.GetLabel())
			}
		}
	}
}
