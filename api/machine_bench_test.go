//go:build unix

package api

import (
	"fmt"
	"io"
	"net/http"
	"strings"
	"testing"
	"time"
)

// firstByte notes when the first row was sent.
type firstByte struct {
	discard
	first time.Time
}

func (w *firstByte) Write(b []byte) (int, error) {
	if w.first.IsZero() {
		w.first = time.Now()
	}
	return len(b), nil
}

// numbers lists n numbers in steps.
func numbers(from, step float64, n int) string {
	list := make([]string, n)
	for i := range list {
		list[i] = fmt.Sprint(from + step*float64(i))
	}
	return "[" + strings.Join(list, ",") + "]"
}

// A table of 30 source and 20 sink temperatures, and how long its first row takes.
func BenchmarkRatings(b *testing.B) {
	for _, name := range []string{"harrow-8", "harrow-60-brine"} {
		b.Run(name, func(b *testing.B) {
			body := gridOf(b, name, `"source_temperatures": `+numbers(-10, 0.7, 30)+`, "sink_temperatures": `+numbers(35, 1, 20))
			h := newAPI(b, nil).Handler()
			r, reader := request("POST", "/v1/ratings", mediaJSON, body), strings.NewReader(body)
			r.Header.Set("Accept", mediaLines)
			r.Body = io.NopCloser(reader)
			var first time.Duration
			before := processorTime(b)
			for b.Loop() {
				reader.Reset(body)
				w := &firstByte{discard: discard{http.Header{}}}
				start := time.Now()
				h.ServeHTTP(w, r)
				first += w.first.Sub(start)
			}
			b.ReportMetric(float64(processorTime(b)-before)/float64(b.N)/600, "cpu-ns/row")
			b.ReportMetric(float64(first.Microseconds())/float64(b.N), "us-to-first-row")
		})
	}
}

func BenchmarkOperatingPoint(b *testing.B) {
	benchmark(b, "POST", "/v1/operating-points", mediaJSON, `{"machine": `+invented(b, "harrow-8")+`, "conditions": [{"source": `+winterAir+`, "sink": `+warmWater+`}]}`, 1)
}

func BenchmarkReadings(b *testing.B) {
	const sample = `{"suction_pressure": 320, "suction_temperature": -6, "discharge_pressure": 1225, "discharge_temperature": 58, "liquid_temperature": 31, "compressor_power": 1.25, "sink": {"fluid": "water", "inlet_temperature": 30, "outlet_temperature": 35, "volume_flow": 0.87}}`
	b.Run("one", func(b *testing.B) {
		benchmark(b, "POST", "/v1/readings", mediaJSON, `{"refrigerant": "R290", "samples": [`+sample+`]}`, 1)
	})
	b.Run("stream=1000", func(b *testing.B) {
		benchmark(b, "POST", "/v1/readings", mediaLines, `{"refrigerant": "R290"}`+"\n"+strings.Repeat(sample+"\n", 1000), 1000)
	})
	b.Run("compared", func(b *testing.B) {
		benchmark(b, "POST", "/v1/readings", mediaJSON, "{"+seriesHead(b, "")+`, "samples": [`+winter(1)[0]+"]}", 1)
	})
}
