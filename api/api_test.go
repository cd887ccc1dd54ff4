package api

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"log/slog"
	"net/http"
	"net/http/httptest"
	"strings"
	"sync"
	"testing"
	"time"

	"github.com/gin-gonic/gin"
	"github.com/goccy/go-yaml"
	"github.com/prometheus/client_golang/prometheus"
	"github.com/prometheus/client_golang/prometheus/testutil"

	"dewmark/openapi"
	"dewmark/props"
)

var theCatalogue = sync.OnceValues(props.NewCatalogue)

// newAPI returns an API of its own for a test that changes it.
func newAPI(t testing.TB, change func(*Options)) *API {
	t.Helper()
	gin.SetMode(gin.ReleaseMode)
	catalogue, err := theCatalogue()
	if err != nil {
		t.Fatal(err)
	}
	o := Options{Catalogue: catalogue, Registry: prometheus.NewPedanticRegistry(), Logger: slog.New(slog.DiscardHandler), Version: "devel"}
	if change != nil {
		change(&o)
	}
	a, err := New(o)
	if err != nil {
		t.Fatal(err)
	}
	return a
}

// newRequest returns a POST with a JSON body.
func newRequest(path, body string) *http.Request {
	r := httptest.NewRequest(http.MethodPost, path, strings.NewReader(body))
	r.Header.Set("Content-Type", mediaJSON)
	return r
}

// serve answers a request without a look at the contract.
func serve(h http.Handler, r *http.Request) *httptest.ResponseRecorder {
	w := httptest.NewRecorder()
	h.ServeHTTP(w, r)
	return w
}

func TestOptions(t *testing.T) {
	catalogue, err := theCatalogue()
	if err != nil {
		t.Fatal(err)
	}
	whole := Options{Catalogue: catalogue, Registry: prometheus.NewRegistry(), Logger: slog.New(slog.DiscardHandler), Version: "1"}
	for name, spoil := range map[string]func(*Options){
		"catalogue": func(o *Options) { o.Catalogue = nil },
		"registry":  func(o *Options) { o.Registry = nil },
		"logger":    func(o *Options) { o.Logger = nil },
		"version":   func(o *Options) { o.Version = "" },
		"limit":     func(o *Options) { o.MaxPoints = -1 },
	} {
		o := whole
		spoil(&o)
		if _, err := New(o); err == nil || !strings.Contains(err.Error(), name) {
			t.Errorf("without %s: %v", name, err)
		}
	}
	if _, err := New(whole); err != nil {
		t.Error(err)
	}
	if _, err := New(whole); err == nil {
		t.Error("two APIs on one registry would count into each other")
	}
}

// problemOf decodes a problem document.
func problemOf(t *testing.T, w *httptest.ResponseRecorder) *Problem {
	t.Helper()
	var p struct {
		Problem
		Solutions []json.RawMessage
	}
	if err := json.Unmarshal(w.Body.Bytes(), &p); err != nil {
		t.Fatalf("%v: %s", err, w.Body)
	}
	return &p.Problem
}

// Every request that cannot be answered gets a problem document with the right status.
func TestBadRequests(t *testing.T) {
	const point = `{"temperature": 5, "pressure": 400}`
	tooMany := `{"refrigerant": "R290", "points": [` + strings.Repeat(point+",", 10000) + point + `]}`
	for _, tt := range []struct {
		name, method, path, media, accept, body string
		status                                  int
		kind, pointer                           string
	}{
		{"no such path", "GET", "/v2/states", "", "", "", 404, "not-found", ""},
		{"trailing slash", "GET", "/v1/refrigerants/", "", "", "", 404, "not-found", ""},
		{"unknown refrigerant in the path", "GET", "/v1/refrigerants/R1234y", "", "", "", 404, "unknown-refrigerant", ""},
		{"system in the query", "GET", "/v1/refrigerants?system=us", "", "", "", 422, "invalid-request", "#/units/system"},
		{"unknown in the query", "GET", "/v1/refrigerants?unit=SI", "", "", "", 422, "invalid-request", "#/unit"},
		{"method", "PUT", "/v1/states", mediaJSON, "", "{}", 405, "method-not-allowed", ""},
		{"method of a read", "DELETE", "/v1/refrigerants/R290", "", "", "", 405, "method-not-allowed", ""},
		{"unknown method", "BREW", "/v1/cycles", "", "", "", 405, "method-not-allowed", ""},
		{"no media type", "POST", "/v1/cycles", "", "", "{}", 415, "unsupported-media-type", ""},
		{"form", "POST", "/v1/states", "application/x-www-form-urlencoded", "", "a=1", 415, "unsupported-media-type", ""},
		{"lines where there are none", "POST", "/v1/cycles", mediaLines, "", "{}", 415, "unsupported-media-type", ""},
		{"other characters", "POST", "/v1/states", "application/json; charset=iso-8859-1", "", "{}", 415, "unsupported-media-type", ""},
		{"nonsense as media type", "POST", "/v1/states", "json", "", "{}", 415, "unsupported-media-type", ""},
		{"accepts HTML alone", "POST", "/v1/saturation", mediaJSON, "text/html", "{}", 406, "not-acceptable", ""},
		{"accepts everything but ours", "POST", "/v1/saturation", mediaJSON, "*/*;q=0", "{}", 406, "not-acceptable", ""},
		{"no body", "POST", "/v1/states", mediaJSON, "", "", 400, "malformed-json", "#"},
		{"NaN", "POST", "/v1/states", mediaJSON, "", `{"refrigerant": "R290", "points": [{"temperature": NaN}]}`, 400, "malformed-json", "#/points/0/temperature"},
		{"Infinity", "POST", "/v1/cycles", mediaJSON, "", `{"evaporation": {"temperature": Infinity}}`, 400, "malformed-json", "#/evaporation/temperature"},
		{"1e999", "POST", "/v1/cycles", mediaJSON, "", `{"evaporation": {"temperature": 1e999}}`, 422, "invalid-request", "#/evaporation/temperature"},
		{"1e308", "POST", "/v1/cycles", mediaJSON, "", `{"refrigerant": "R290", "evaporation": {"pressure": 1e308}, "condensation": {"temperature": 40}}`, 422, "impossible-cycle", "#/evaporation/pressure"},
		{"-1e308", "POST", "/v1/cycles", mediaJSON, "", `{"refrigerant": "R290", "evaporation": {"temperature": -1e308}, "condensation": {"temperature": 40}}`, 422, "impossible-cycle", "#/evaporation/temperature"},
		{"text for a number", "POST", "/v1/cycles", mediaJSON, "", `{"evaporation": {"temperature": "-7"}}`, 422, "invalid-request", "#/evaporation/temperature"},
		{"twice", "POST", "/v1/cycles", mediaJSON, "", `{"size": {"heating": 8, "heating": 9}}`, 422, "invalid-request", "#/size/heating"},
		{"unknown", "POST", "/v1/saturation", mediaJSON, "", `{"temps": [1]}`, 422, "invalid-request", "#/temps"},
		{"nested", "POST", "/v1/states", mediaJSON, "", `{"points": ` + strings.Repeat("[", 100000), 400, "malformed-json", "#/points/0"},
		{"10 001 points", "POST", "/v1/states", mediaJSON, "", tooMany, 422, "invalid-request", "#/points"},
		{"10 001 temperatures", "POST", "/v1/saturation", mediaJSON, "", `{"refrigerant": "R290", "temperatures": [` + strings.Repeat("1,", 10000) + `1]}`, 422, "invalid-request", "#/temperatures"},
		{"10 001 steps", "POST", "/v1/saturation", mediaJSON, "", `{"refrigerant": "R290", "range": {"of": "temperature", "from": 0, "to": 10, "step": 0.001}}`, 422, "invalid-request", "#/range/step"},
		{"a step of nothing", "POST", "/v1/saturation", mediaJSON, "", `{"refrigerant": "R290", "range": {"of": "temperature", "from": 0, "to": 10, "step": 1e-320}}`, 422, "invalid-request", "#/range/step"},
		{"2 MB", "POST", "/v1/states", mediaJSON, "", strings.Repeat(" ", 2<<20), 413, "body-too-large", ""},
		{"no points", "POST", "/v1/states", mediaJSON, "", `{"refrigerant": "R290"}`, 422, "invalid-request", "#/points"},
		{"empty points", "POST", "/v1/states", mediaJSON, "", `{"refrigerant": "R290", "points": []}`, 422, "invalid-request", "#/points"},
		{"no refrigerant", "POST", "/v1/states", mediaJSON, "", `{"points": [` + point + `]}`, 422, "invalid-request", "#/refrigerant"},
		{"long refrigerant", "POST", "/v1/states", mediaJSON, "", `{"refrigerant": "` + strings.Repeat("R", 65) + `", "points": [` + point + `]}`, 422, "invalid-request", "#/refrigerant"},
		{"unknown refrigerant", "POST", "/v1/states", mediaJSON, "", `{"refrigerant": "R1234y", "points": [` + point + `]}`, 422, "unknown-refrigerant", "#/refrigerant"},
		{"gauge without site", "POST", "/v1/states", mediaJSON, "", `{"refrigerant": "R290", "units": {"pressure": "bar(g)"}, "points": [` + point + `]}`, 422, "invalid-request", "#/site"},
		{"no rows", "POST", "/v1/saturation", mediaJSON, "", `{"refrigerant": "R290"}`, 422, "invalid-request", "#"},
		{"empty rows", "POST", "/v1/saturation", mediaJSON, "", `{"refrigerant": "R290", "pressures": []}`, 422, "invalid-request", "#/pressures"},
		{"rows two ways", "POST", "/v1/saturation", mediaJSON, "", `{"refrigerant": "R290", "pressures": [1], "temperatures": [1]}`, 422, "invalid-request", "#/pressures"},
		{"range of something", "POST", "/v1/saturation", mediaJSON, "", `{"refrigerant": "R290", "range": {"of": "quality", "from": 0, "to": 1, "step": 1}}`, 422, "invalid-request", "#/range/of"},
		{"range without end", "POST", "/v1/saturation", mediaJSON, "", `{"refrigerant": "R290", "range": {"of": "pressure", "from": 0, "step": 1}}`, 422, "invalid-request", "#/range/to"},
		{"range backwards", "POST", "/v1/saturation", mediaJSON, "", `{"refrigerant": "R290", "range": {"of": "pressure", "from": 5, "to": 1, "step": 1}}`, 422, "invalid-request", "#/range/to"},
		{"no evaporation", "POST", "/v1/cycles", mediaJSON, "", `{"refrigerant": "R290", "condensation": {"temperature": 40}}`, 422, "impossible-cycle", "#/evaporation"},
		{"layout", "POST", "/v1/cycles", mediaJSON, "", `{"refrigerant": "R290", "layout": "simple"}`, 422, "invalid-request", "#/layout"},
		{"purpose", "POST", "/v1/cycles", mediaJSON, "", `{"refrigerant": "R290", "purpose": "comfort"}`, 422, "invalid-request", "#/purpose"},
		{"reference", "POST", "/v1/cycles", mediaJSON, "", `{"refrigerant": "R290", "evaporation": {"reference": "bubble"}}`, 422, "invalid-request", "#/evaporation/reference"},
		{"condensing above critical", "POST", "/v1/cycles", mediaJSON, "", `{"refrigerant": "R290", "evaporation": {"temperature": 0}, "condensation": {"temperature": 97}}`, 422, "impossible-cycle", "#/condensation/temperature"},
		{"evaporating above condensing", "POST", "/v1/cycles", mediaJSON, "", `{"refrigerant": "R290", "evaporation": {"temperature": 50}, "condensation": {"temperature": 40}}`, 422, "impossible-cycle", ""},
		{"efficiency", "POST", "/v1/cycles", mediaJSON, "", `{"refrigerant": "R290", "evaporation": {"temperature": 0}, "condensation": {"temperature": 40}, "compressor": {"isentropic_efficiency": 0}}`, 422, "impossible-cycle", "#/compressor/isentropic_efficiency"},
		{"second law", "POST", "/v1/cycles", mediaJSON, "", `{"refrigerant": "R290", "evaporation": {"temperature": 0}, "condensation": {"temperature": 40}, "source_temperature": -5}`, 422, "impossible-cycle", "#/source_temperature"},
	} {
		r := httptest.NewRequestWithContext(t.Context(), tt.method, tt.path, strings.NewReader(tt.body))
		if tt.media != "" {
			r.Header.Set("Content-Type", tt.media)
		}
		if tt.accept != "" {
			r.Header.Set("Accept", tt.accept)
		}
		w := ask(t, testHandler(t), r)
		p := problemOf(t, w)
		if w.Code != tt.status || p.Status != tt.status || p.Type != "/problems/"+tt.kind || p.Title == "" || p.Detail == "" {
			t.Errorf("%s: %d %.1000s", tt.name, w.Code, w.Body)
			continue
		}
		if tt.pointer != "" && (len(p.Errors) == 0 || p.Errors[0].Pointer != tt.pointer) {
			t.Errorf("%s: %+v, want %s", tt.name, p.Errors, tt.pointer)
		}
		if w.Body.Len() > 20000 {
			t.Errorf("%s: a problem of %d bytes", tt.name, w.Body.Len())
		}
	}
}

func TestUnknownRefrigerantSuggests(t *testing.T) {
	w := do(t, testHandler(t), "POST", "/v1/states", `{"refrigerant": "R1234y", "points": [{"temperature": 5, "pressure": 400}]}`)
	if p := problemOf(t, w); len(p.Suggestions) == 0 || p.Suggestions[0] != "R1234yf" || !strings.Contains(p.Detail, "R1234yf") {
		t.Errorf("%+v", p)
	}
}

func TestMethodNotAllowedNamesTheOthers(t *testing.T) {
	w := do(t, testHandler(t), "PATCH", "/v1/states", "")
	if allow := w.Header().Get("Allow"); !strings.Contains(allow, "GET") || !strings.Contains(allow, "POST") || !strings.Contains(problemOf(t, w).Detail, allow) {
		t.Errorf("Allow: %s; %s", allow, w.Body)
	}
}

// A spelling that people use finds the refrigerant.
func TestSpelling(t *testing.T) {
	for spelling, want := range map[string]string{
		"R290": "R290", "r-290": "R290", "propane": "R290", "HFC-134a": "R134a", "CO2": "R744", "R%201234ze(e)": "R1234ze(E)", "ammonia": "R717", "Water": "R718",
	} {
		if got := at(answer(t, "GET", "/v1/refrigerants/"+spelling, "", 200), "designation"); got != want {
			t.Errorf("%s is %v, want %s", spelling, got, want)
		}
	}
}

// The catalogue is the same list in both systems, each row as its own resource shows it.
func TestRefrigerants(t *testing.T) {
	si, ip := answer(t, "GET", "/v1/refrigerants", "", 200), answer(t, "GET", "/v1/refrigerants?system=IP", "", 200)
	list, _ := at(si, "refrigerants").([]any)
	catalogue, err := theCatalogue()
	if err != nil {
		t.Fatal(err)
	}
	if len(list) != len(catalogue.Designations()) || at(ip, "units", "temperature") != "[degF]" {
		t.Fatalf("%d refrigerants, units %v", len(list), at(ip, "units"))
	}
	for i, row := range list {
		name := fmt.Sprint(at(row, "designation"))
		detail := answer(t, "GET", "/v1/refrigerants/"+name, "", 200)
		for member, v := range row.(jsonObject) {
			if fmt.Sprint(detail[member]) != fmt.Sprint(v) {
				t.Errorf("%s: %s is %v in the list, %v by itself", name, member, v, detail[member])
			}
		}
		tc, _ := at(row, "critical_temperature").(float64)
		wantNumbers(t, name, at(ip, "refrigerants", i), map[string][2]float64{"critical_temperature": {tc*1.8 + 32, 1e-9}})
	}
}

// An unknown number is null, and says so; a known one comes from its column.
func TestClassification(t *testing.T) {
	propane := answer(t, "GET", "/v1/refrigerants/R290", "", 200)
	if at(propane, "safety_class") != "A3" || at(propane, "gwp_100") != 0.02 || at(propane, "gwp", "ar4") != 3. || at(propane, "gwp", "ar5") != nil ||
		at(propane, "lower_flammability_limit") != 0.038 || at(propane, "provenance", "safety") != "S2" || at(propane, "cautions", 0, "code") != "safety_data" {
		t.Errorf("%v", propane)
	}
	other := answer(t, "GET", "/v1/refrigerants/R1243zf", "", 200)
	if at(other, "safety_class") != nil || at(other, "cautions", 1, "code") != "safety_class_unknown" {
		t.Errorf("%v", other)
	}
}

// Fixed answers carry an entity tag, and who has it gets 304.
func TestCaching(t *testing.T) {
	for _, path := range []string{
		"/v1/refrigerants", "/v1/refrigerants?system=IP", "/v1/refrigerants/R32", "/v1/states?refrigerant=R32&temperature=0&quality=1", "/openapi.yaml", "/openapi.json",
	} {
		first := do(t, testHandler(t), "GET", path, "")
		tag := first.Header().Get("ETag")
		if first.Code != 200 || tag == "" || first.Header().Get("Cache-Control") == "" {
			t.Errorf("%s: %d, headers %v", path, first.Code, first.Header())
			continue
		}
		for header, status := range map[string]int{tag: 304, "W/" + tag: 304, `"x", ` + tag: 304, "*": 304, `"x"`: 200, "": 200} {
			r := httptest.NewRequestWithContext(t.Context(), "GET", path, nil)
			r.Header.Set("If-None-Match", header)
			w := ask(t, testHandler(t), r)
			if w.Code != status || status == 304 && w.Body.Len() > 0 || w.Header().Get("ETag") != tag {
				t.Errorf("%s with %q: %d, %d bytes", path, header, w.Code, w.Body.Len())
			}
		}
	}
	if w := do(t, testHandler(t), "GET", "/v1/states?refrigerant=R32&temperature=0", ""); w.Header().Get("ETag") != "" || w.Header().Get("Cache-Control") != "" {
		t.Errorf("a problem may be cached: %v", w.Header())
	}
}

func TestHead(t *testing.T) {
	for _, path := range []string{"/livez", "/v1/refrigerants", "/v1/states?refrigerant=R32&temperature=0&quality=1", "/openapi.yaml"} {
		get, head := do(t, testHandler(t), "GET", path, ""), do(t, testHandler(t), "HEAD", path, "")
		if head.Code != get.Code || head.Header().Get("Content-Length") != get.Header().Get("Content-Length") || head.Header().Get("ETag") != get.Header().Get("ETag") {
			t.Errorf("%s: %v, %v", path, head.Header(), get.Header())
		}
	}
}

func TestNegotiate(t *testing.T) {
	offers := []string{mediaJSON, mediaCSV}
	for accept, want := range map[string]string{
		"": mediaJSON, "*/*": mediaJSON, "application/json": mediaJSON, "text/csv": mediaCSV, "text/*": mediaCSV, "application/*": mediaJSON,
		"text/html, text/csv;q=0.5": mediaCSV, "text/csv, application/json;q=0.9": mediaCSV, "application/json;q=0.1, text/csv;q=0.2": mediaCSV,
		"text/csv;q=0": "", "text/csv;q=0, */*": mediaJSON, "application/json;q=0, */*;q=0.1": mediaCSV, "text/html": "", "rubbish": "", "application/problem+json": "",
	} {
		if got := negotiate(accept, offers); got != want {
			t.Errorf("%q gets %q, want %q", accept, got, want)
		}
	}
}

// The description is one document in two notations.
func TestDescription(t *testing.T) {
	w := do(t, testHandler(t), "GET", "/openapi.yaml", "")
	if !bytes.Equal(w.Body.Bytes(), openapi.Document) {
		t.Error("/openapi.yaml is not the document")
	}
	var fromYAML any
	if err := yaml.Unmarshal(openapi.Document, &fromYAML); err != nil {
		t.Fatal(err)
	}
	asJSON, err := json.Marshal(fromYAML)
	if err != nil {
		t.Fatal(err)
	}
	var want, got any
	if err := errors.Join(json.Unmarshal(asJSON, &want), json.Unmarshal(do(t, testHandler(t), "GET", "/openapi.json", "").Body.Bytes(), &got)); err != nil {
		t.Fatal(err)
	}
	if fmt.Sprint(got) != fmt.Sprint(want) {
		t.Error("/openapi.json says something else than /openapi.yaml")
	}
}

// The service asks for traffic once it is warm, and no longer when it drains; it answers all the time.
func TestReadiness(t *testing.T) {
	a := newAPI(t, nil)
	status := func() int { return do(t, a.Handler(), "GET", "/readyz", "").Code }
	if got := status(); got != 503 {
		t.Errorf("cold: %d", got)
	}
	if w := do(t, a.Handler(), "GET", "/readyz", ""); w.Header().Get("Retry-After") == "" {
		t.Error("503 without Retry-After")
	}
	if got := do(t, a.Handler(), "GET", "/livez", "").Code; got != 200 {
		t.Errorf("alive: %d", got)
	}
	if got := do(t, a.Handler(), "GET", "/v1/states?refrigerant=R32&temperature=0&quality=1", "").Code; got != 200 {
		t.Errorf("cold, but answering: %d", got)
	}
	if err := a.Warm(t.Context()); err != nil {
		t.Fatal(err)
	}
	if got := status(); got != 200 {
		t.Errorf("warm: %d", got)
	}
	a.Drain()
	if got := status(); got != 503 {
		t.Errorf("draining: %d", got)
	}
}

// While all slots are taken, calculations are turned away and probes are not.
func TestBusy(t *testing.T) {
	a := newAPI(t, func(o *Options) { o.MaxConcurrent, o.MaxQueue = 1, 1 })
	a.admission.short.slots <- struct{}{}
	a.admission.short.waiting.Add(1) // the queue is full
	w := do(t, a.Handler(), "POST", "/v1/cycles", `{}`)
	if p := problemOf(t, w); w.Code != 503 || p.Type != "/problems/busy" || w.Header().Get("Retry-After") == "" {
		t.Errorf("%d %+v", w.Code, p)
	}
	if got := do(t, a.Handler(), "GET", "/livez", "").Code; got != 200 {
		t.Errorf("probe: %d", got)
	}
	if got := testutil.ToFloat64(a.metrics.refused.WithLabelValues(refusedQueueFull)); got != 1 {
		t.Errorf("%v refused", got)
	}
	<-a.admission.short.slots
	a.admission.short.waiting.Add(-1)
	if got := do(t, a.Handler(), "GET", "/v1/states?refrigerant=R32&temperature=0&quality=1", "").Code; got != 200 {
		t.Errorf("free again: %d", got)
	}
}

// A panic is our fault: a bare 500 for the client, the cause in the log, and the next request is served.
func TestPanic(t *testing.T) {
	var log bytes.Buffer
	a := newAPI(t, func(o *Options) { o.Logger = slog.New(slog.NewJSONHandler(&log, nil)) })
	a.engine.GET("/broken", func(*gin.Context) { panic("a secret") })
	w := serve(a.Handler(), httptest.NewRequest("GET", "/broken", nil))
	if p := problemOf(t, w); w.Code != 500 || p.Type != "about:blank" || p.Detail != "" || strings.Contains(w.Body.String(), "secret") {
		t.Errorf("%d %s", w.Code, w.Body)
	}
	if !strings.Contains(log.String(), "a secret") || !strings.Contains(log.String(), "api_test.go") || !strings.Contains(log.String(), `"status":500`) {
		t.Errorf("log: %s", &log)
	}
	if got := testutil.ToFloat64(a.metrics.requests.WithLabelValues("/broken", "GET", "500")); got != 1 {
		t.Errorf("counted %v", got)
	}
}

// A value that has no JSON becomes a problem and not half an answer.
func TestUnwritable(t *testing.T) {
	a := newAPI(t, nil)
	a.engine.GET("/broken", a.handle(func(*gin.Context) (any, error) { return func() {}, nil }))
	if w := serve(a.Handler(), httptest.NewRequest("GET", "/broken", nil)); w.Code != 500 || problemOf(t, w).Type != "about:blank" {
		t.Errorf("%d %s", w.Code, w.Body)
	}
}

// One record a request, with the route and never the path.
func TestRequestLog(t *testing.T) {
	var log bytes.Buffer
	var now time.Time
	a := newAPI(t, func(o *Options) {
		o.Logger = slog.New(slog.NewJSONHandler(&log, &slog.HandlerOptions{Level: slog.LevelDebug}))
		o.Now = func() time.Time { now = now.Add(time.Second); return now }
	})
	do(t, a.Handler(), "GET", "/v1/refrigerants/R290", "")
	do(t, a.Handler(), "GET", "/v1/refrigerants/secret", "")
	do(t, a.Handler(), "GET", "/nowhere/at/all", "")
	lines := strings.Split(strings.TrimSpace(log.String()), "\n")
	if len(lines) != 3 {
		t.Fatalf("%d records: %s", len(lines), &log)
	}
	for i, want := range []string{
		`"level":"DEBUG","msg":"request","method":"GET","route":"/v1/refrigerants/:designation","status":200,"duration_s":1,`,
		`"level":"INFO","msg":"request","method":"GET","route":"/v1/refrigerants/:designation","status":404,`,
		`"level":"INFO","msg":"request","method":"GET","route":"unmatched","status":404,`,
	} {
		if !strings.Contains(lines[i], want) {
			t.Errorf("%s\nlacks %s", lines[i], want)
		}
	}
}

// The metrics pass the linter on a registry that checks them, and count what happened.
func TestMetrics(t *testing.T) {
	registry := prometheus.NewPedanticRegistry()
	a := newAPI(t, func(o *Options) { o.Registry = registry })
	do(t, a.Handler(), "POST", "/v1/states", `{"refrigerant": "R290", "points": [{"temperature": 5, "pressure": 400}, {"temperature": 5, "pressure": 300}, {"temperature": 5000, "pressure": 400}, {}]}`)
	do(t, a.Handler(), "POST", "/v1/saturation", `{"refrigerant": "R290", "temperatures": [0, 500]}`)
	do(t, a.Handler(), "POST", "/v1/cycles", `{"refrigerant": "R290", "evaporation": {"temperature": 0}, "condensation": {"temperature": 40}}`)
	do(t, a.Handler(), "POST", "/v1/cycles", `{"refrigerant": "R290", "evaporation": {"temperature": 0}, "condensation": {"temperature": 400}}`)
	do(t, a.Handler(), "GET", "/nowhere", "")
	do(t, a.Handler(), "FROB", "/livez", "")
	if problems, err := testutil.GatherAndLint(registry); err != nil || len(problems) > 0 {
		t.Errorf("lint: %v %v", problems, err)
	}
	w := serve(a.AdminHandler(), httptest.NewRequest("GET", "/metrics", nil))
	for _, want := range []string{
		`dewmark_http_requests_total{code="200",method="POST",route="/v1/states"} 1`,
		`dewmark_http_requests_total{code="404",method="GET",route="unmatched"} 1`,
		`dewmark_http_requests_total{code="405",method="other",route="unmatched"} 1`,
		`dewmark_http_request_duration_seconds_count{code="200",method="POST",route="/v1/states"} 1`,
		`dewmark_calculations_total{kind="state",outcome="ok"} 2`,
		`dewmark_calculations_total{kind="state",outcome="out_of_range"} 1`,
		`dewmark_calculations_total{kind="state",outcome="invalid_request"} 1`,
		`dewmark_calculations_total{kind="saturation",outcome="ok"} 1`,
		`dewmark_calculations_total{kind="saturation",outcome="out_of_range"} 1`,
		`dewmark_calculations_total{kind="cycle",outcome="ok"} 1`,
		`dewmark_calculations_total{kind="cycle",outcome="impossible_cycle"} 1`,
		`dewmark_solver_iterations_count{kind="cycle"} 1`,
		`dewmark_batch_items_sum{route="/v1/states"} 4`,
		`dewmark_build_info{goarch=`,
		`dewmark_ready 0`,
		`dewmark_calculations_in_progress 0`,
		`go_goroutines `,
	} {
		if !strings.Contains(w.Body.String(), "\n"+want) {
			t.Errorf("no %s", want)
		}
	}
	if w.Code != 200 || t.Failed() {
		t.Logf("%s", w.Body)
	}
	if got := serve(a.AdminHandler(), httptest.NewRequest("GET", "/debug/pprof/", nil)).Code; got != 200 {
		t.Errorf("profiler: %d", got)
	}
	if got := serve(a.Handler(), httptest.NewRequest("GET", "/metrics", nil)).Code; got != 404 {
		t.Errorf("metrics on the public address: %d", got)
	}
}

// slowBody breaks off in the middle.
type slowBody struct{ io.Reader }

func (slowBody) Close() error { return nil }

func TestBodyBreaksOff(t *testing.T) {
	r := newRequest("/v1/states", "")
	r.Body = slowBody{io.MultiReader(strings.NewReader(`{"refrigerant": `), iotestError{})}
	r.ContentLength = -1
	if w := serve(testHandler(t), r); w.Code != 400 || problemOf(t, w).Type != "/problems/malformed-json" {
		t.Errorf("%d %s", w.Code, w.Body)
	}
	r = newRequest("/v1/states", "")
	r.Body = slowBody{strings.NewReader(strings.Repeat(" ", 3_000_000))} // no length is announced
	r.ContentLength = -1
	if w := serve(testHandler(t), r); w.Code != 413 {
		t.Errorf("%d %s", w.Code, w.Body)
	}
}

// iotestError is a reader that fails.
type iotestError struct{}

func (iotestError) Read([]byte) (int, error) { return 0, errors.New("connection reset") }
