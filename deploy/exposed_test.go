// Package deploy_test holds what stands in the files of this folder against the service itself: names of metrics and their
// labels, names of settings.
package deploy_test

import (
	"log/slog"
	"net/http"
	"net/http/httptest"
	"os"
	"regexp"
	"slices"
	"strings"
	"testing"

	"github.com/gin-gonic/gin"
	"github.com/prometheus/client_golang/prometheus"

	"dewmark/api"
	"dewmark/props"
)

// series says which labels the series of each name have, and which values these take.
type series map[string]map[string][]string

// exposed returns what /metrics shows once the service has answered requests of every kind, good ones and refused ones. The
// outcomes of calculations are all those that the README lists: not each can be had by asking.
func exposed(t *testing.T) series {
	t.Helper()
	gin.SetMode(gin.ReleaseMode)
	catalogue, err := props.NewCatalogue()
	if err != nil {
		t.Fatal(err)
	}
	registry := prometheus.NewRegistry()
	a, err := api.New(api.Options{Catalogue: catalogue, Registry: registry, Logger: slog.New(slog.DiscardHandler), Version: "test"})
	if err != nil {
		t.Fatal(err)
	}
	const points = `{"refrigerant": "R290", "points": [{"temperature": 5, "pressure": 400}, {"temperature": 5, "pressure": -1}]}`
	for _, r := range []struct{ method, path, body string }{
		{"GET", "/livez", ""},
		{"GET", "/nowhere", ""},
		{"GET", "/v1/refrigerants", ""},
		{"GET", "/v1/refrigerants/R290", ""},
		{"GET", "/v1/states?refrigerant=R290&temperature=5&pressure=400", ""},
		{"POST", "/v1/states", points},
		{"POST", "/v1/states", "{"},
		{"POST", "/v1/saturation", `{"refrigerant": "R290", "temperatures": [0]}`},
		{"POST", "/v1/cycles", `{"refrigerant": "R290", "evaporation": {"temperature": 0}, "condensation": {"temperature": 40}, "compressor": {"isentropic_efficiency": 0.7}}`},
		{"POST", "/v1/cycles", `{"refrigerant": "R290", "evaporation": {"temperature": 0}, "condensation": {"temperature": 97}}`},
	} {
		request := httptest.NewRequest(r.method, r.path, strings.NewReader(r.body))
		request.Header.Set("Content-Type", "application/json")
		answer := httptest.NewRecorder()
		a.Handler().ServeHTTP(answer, request)
		if answer.Code >= http.StatusInternalServerError {
			t.Fatalf("%s %s: %d %s", r.method, r.path, answer.Code, answer.Body)
		}
	}
	// Instrumented handlers have metrics of their own, which appear with the handler.
	a.AdminHandler().ServeHTTP(httptest.NewRecorder(), httptest.NewRequest(http.MethodGet, "/metrics", http.NoBody))
	families, err := registry.Gather()
	if err != nil {
		t.Fatal(err)
	}
	found := series{"up": {}}
	for _, f := range families {
		names := []string{f.GetName()}
		for _, m := range f.GetMetric() {
			if m.GetHistogram() != nil {
				names = []string{f.GetName() + "_bucket", f.GetName() + "_sum", f.GetName() + "_count"}
			} else if m.GetSummary() != nil {
				names = []string{f.GetName(), f.GetName() + "_sum", f.GetName() + "_count"}
			}
			for _, name := range names {
				if found[name] == nil {
					found[name] = map[string][]string{}
				}
				for _, l := range m.GetLabel() {
					found[name][l.GetName()] = append(found[name][l.GetName()], l.GetValue())
				}
				for _, b := range m.GetHistogram().GetBucket() {
					if strings.HasSuffix(name, "_bucket") {
						found[name]["le"] = append(found[name]["le"], number(b.GetUpperBound()))
					}
				}
				for _, q := range m.GetSummary().GetQuantile() {
					if name == f.GetName() {
						found[name]["quantile"] = append(found[name]["quantile"], number(q.GetQuantile()))
					}
				}
			}
		}
	}
	for _, problem := range regexp.MustCompile("\n\\| [0-9]{3} \\| `([a-z-]+)`").FindAllSubmatch(read(t, "../README.md"), -1) {
		outcome := strings.ReplaceAll(string(problem[1]), "-", "_")
		found["dewmark_calculations_total"]["outcome"] = append(found["dewmark_calculations_total"]["outcome"], outcome)
	}
	for _, of := range found {
		for label := range of {
			slices.Sort(of[label])
			of[label] = slices.Compact(of[label])
		}
		// Prometheus knows these from where it reads the metrics; the namespace comes in a cluster alone.
		for _, label := range []string{"job", "instance", "namespace"} {
			of[label] = nil
		}
	}
	return found
}

// read returns the text of a file.
func read(t *testing.T, name string) []byte {
	t.Helper()
	text, err := os.ReadFile(name)
	if err != nil {
		t.Fatal(err)
	}
	return text
}
