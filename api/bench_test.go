//go:build unix

package api

import (
	"fmt"
	"io"
	"net/http"
	"net/http/httptest"
	"strings"
	"syscall"
	"testing"
	"time"
)

// processorTime returns what this process has used so far. On a machine that others use too it says more than a clock.
func processorTime(b *testing.B) time.Duration {
	b.Helper()
	var used syscall.Rusage
	if err := syscall.Getrusage(syscall.RUSAGE_SELF, &used); err != nil {
		b.Fatal(err)
	}
	return time.Duration(used.Utime.Nano() + used.Stime.Nano())
}

// discard is a response writer for benchmarks: a recorder would copy every answer.
type discard struct{ header http.Header }

func (d *discard) Header() http.Header         { return d.header }
func (d *discard) WriteHeader(int)             {}
func (d *discard) Write(b []byte) (int, error) { return len(b), nil }

// benchmark sends the same request for some items again and again, without the contract and without a network.
func benchmark(b *testing.B, method, path, media, body string, items int) {
	b.Helper()
	h := newAPI(b, nil).Handler()
	if w := serve(h, request(method, path, media, body)); w.Code != http.StatusOK {
		b.Fatalf("%d %.500s", w.Code, w.Body)
	}
	r, reader := request(method, path, media, body), strings.NewReader(body)
	r.Body = io.NopCloser(reader)
	w := &discard{header: http.Header{}}
	b.ReportAllocs()
	before := processorTime(b)
	for b.Loop() {
		reader.Reset(body)
		clear(w.header)
		h.ServeHTTP(w, r)
	}
	b.ReportMetric(float64(processorTime(b)-before)/float64(b.N)/float64(items), "cpu-ns/item")
}

func request(method, path, media, body string) *http.Request {
	r := httptest.NewRequest(method, path, strings.NewReader(body))
	r.Header.Set("Content-Type", media)
	return r
}

// batch returns n points of temperature and pressure, all vapour of R134a.
func batch(n int, separator string) string {
	points := make([]string, n)
	for i := range points {
		points[i] = fmt.Sprintf(`{"temperature": %.2f, "pressure": %.1f}`, 20+float64(i%97)*0.73, 100+float64(i%89)*4.7)
	}
	return strings.Join(points, separator)
}

func BenchmarkLive(b *testing.B) { benchmark(b, "GET", "/livez", "", "", 1) }

func BenchmarkStates(b *testing.B) {
	for _, n := range []int{1, 10, 100, 1000} {
		b.Run(fmt.Sprintf("batch=%d", n), func(b *testing.B) {
			benchmark(b, "POST", "/v1/states", mediaJSON, `{"refrigerant": "R134a", "points": [`+batch(n, ",")+`]}`, n)
		})
	}
	b.Run("stream=1000", func(b *testing.B) {
		benchmark(b, "POST", "/v1/states", mediaLines, `{"refrigerant": "R134a"}`+"\n"+batch(1000, "\n"), 1000)
	})
	b.Run("selected=1000", func(b *testing.B) {
		benchmark(b, "POST", "/v1/states", mediaJSON, `{"refrigerant": "R134a", "properties": ["density", "enthalpy"], "points": [`+batch(1000, ",")+`]}`, 1000)
	})
	b.Run("get", func(b *testing.B) {
		benchmark(b, "GET", "/v1/states?refrigerant=R134a&temperature=30&pressure=300", "", "", 1)
	})
}

func BenchmarkSaturation(b *testing.B) {
	benchmark(b, "POST", "/v1/saturation", mediaJSON, `{"refrigerant": "R134a", "range": {"of": "temperature", "from": -40, "to": 60, "step": 5}}`, 21)
}

func BenchmarkCycle(b *testing.B) {
	for _, name := range []string{"R134a", "R1234yf"} {
		b.Run(name, func(b *testing.B) {
			benchmark(b, "POST", "/v1/cycles", mediaJSON, `{"refrigerant": "`+name+`", "evaporation": {"temperature": -10, "superheat": 5},
				"condensation": {"temperature": 45, "subcooling": 5}, "compressor": {"isentropic_efficiency": 0.7}, "size": {"heating": 8},
				"source_temperature": 0, "sink_temperature": 35, "ambient_temperature": 25}`, 1)
		})
	}
}

func BenchmarkRefrigerants(b *testing.B) { benchmark(b, "GET", "/v1/refrigerants", "", "", 1) }
