package api

import (
	"bufio"
	"context"
	"encoding/csv"
	"encoding/json"
	"fmt"
	"io"
	"math"
	"net/http"
	"net/http/httptest"
	"runtime"
	"slices"
	"strings"
	"testing"
)

// grid returns a request for a rating table of a machine of the demonstration.
func gridOf(t testing.TB, name, grid string) string {
	t.Helper()
	streams := map[string]string{
		"harrow-8":            `"source": {"fluid": "moist_air", "relative_humidity": 0.85, "volume_flow": 3400}, "sink": {"fluid": "water", "temperature_change": 5}`,
		"harrow-60-brine":     `"source": {"fluid": "propylene_glycol", "mass_fraction": 0.3, "temperature_change": 3}, "sink": {"fluid": "water", "temperature_change": 5}`,
		"harrow-25-hot-water": `"source": {"fluid": "moist_air", "relative_humidity": 0.85, "volume_flow": 9000}, "sink": {"fluid": "water", "inlet_temperature": 10}`,
	}
	return `{"machine": ` + invented(t, name) + `, ` + streams[name] + `, ` + grid + `}`
}

// table asks for a rating table in a media type.
func table(t *testing.T, body, media string) *httptest.ResponseRecorder {
	t.Helper()
	r := httptest.NewRequestWithContext(t.Context(), http.MethodPost, "/v1/ratings", strings.NewReader(body))
	r.Header.Set("Content-Type", mediaJSON)
	r.Header.Set("Accept", media)
	w := ask(t, testHandler(t), r)
	if w.Code != http.StatusOK {
		t.Fatalf("status %d: %s", w.Code, w.Body)
	}
	return w
}

// Each row is the operating point at its condition, in the order of the grid, and the three forms say the same.
func TestRatingsAreOperatingPoints(t *testing.T) {
	body := gridOf(t, "harrow-8", `"source_temperatures": [-7, 7, 60], "sink_temperatures": [35, 50], "speeds": [40, 60]`)
	var resp jsonObject
	if err := json.Unmarshal(table(t, body, mediaJSON).Body.Bytes(), &resp); err != nil {
		t.Fatal(err)
	}
	rows := at(resp, "rows").([]any)
	n := 0
	for _, source := range []float64{-7, 7, 60} {
		for _, sink := range []float64{35, 50} {
			for _, speed := range []float64{40, 60} {
				row := rows[n]
				n++
				if at(row, "source_temperature") != source || at(row, "sink_temperature") != sink || at(row, "speed") != speed {
					t.Fatalf("row %d: %v", n-1, row)
				}
				point := at(pointsOf(t, invented(t, "harrow-8"), "", fmt.Sprintf(`{"source": {"fluid": "moist_air", "relative_humidity": 0.85, "volume_flow": 3400, "inlet_temperature": %v},
					"sink": {"fluid": "water", "temperature_change": 5, "outlet_temperature": %v}, "speed": %v}`, source, sink, speed), 200), "operating_points", 0)
				if at(point, "problem") != nil {
					if at(row, "problem", "errors", 0, "code") != at(point, "problem", "errors", 0, "code") || at(row, "power") != nil {
						t.Errorf("row %v, point %v", row, point)
					}
					continue
				}
				for member, path := range map[string][]any{
					"heating_capacity": {"system", "heating_capacity"}, "power": {"system", "power"}, "cop_heating": {"system", "cop_heating"},
					"discharge_temperature": {"performance", "discharge_temperature"}, "evaporation_temperature": {"evaporation_temperature"},
					"within_envelope": {"within_envelope"}, "high_pressure": {"figures", "high_pressure"}, "sink_inlet_temperature": {"condenser", "secondary", "inlet_temperature"},
				} {
					if at(row, member) != at(point, path...) {
						t.Errorf("row %d: %s is %v, the point has %v", n-1, member, at(row, member), at(point, path...))
					}
				}
			}
		}
	}
	if n != len(rows) || at(resp, "failed") != 4. {
		t.Errorf("%d rows, failed %v", len(rows), at(resp, "failed"))
	}

	lines := strings.Split(strings.TrimSuffix(table(t, body, mediaLines).Body.String(), "\n"), "\n")
	w := table(t, body, mediaCSV)
	if !strings.Contains(w.Body.String(), "\r\n") || !strings.HasPrefix(w.Header().Get("Content-Type"), "text/csv") {
		t.Errorf("%v %.200q", w.Header(), w.Body)
	}
	cells, err := csv.NewReader(w.Body).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	if len(lines) != len(rows) || len(cells) != len(rows)+1 {
		t.Fatalf("%d rows, %d lines, %d records", len(rows), len(lines), len(cells))
	}
	power := slices.Index(cells[0], "power (kW)")
	for i, row := range rows {
		var line any
		if err := json.Unmarshal([]byte(lines[i]), &line); err != nil {
			t.Fatal(err)
		}
		if fmt.Sprint(line) != fmt.Sprint(row) {
			t.Errorf("line %d: %v, row %v", i, line, row)
		}
		want := ""
		if x, ok := at(row, "power").(float64); ok {
			want = string(appendNumber(nil, x))
		}
		if got := cells[i+1][power]; got != want {
			t.Errorf("record %d: power %q, row %q", i, got, want)
		}
		if failed := at(row, "problem") != nil; failed != (cells[i+1][len(cells[0])-1] != "") {
			t.Errorf("record %d: %q", i, cells[i+1])
		}
	}
	var head jsonObject
	if err := json.Unmarshal([]byte(w.Header().Get(headHeader)), &head); err != nil || at(head, "basis", "refrigerant") != "R290" || len(at(head, "cautions").([]any)) < 2 {
		t.Errorf("%v %v", head, err)
	}
}

// A gas cooler's water enters at one temperature and leaves at those of the grid; a speed is told only where it is asked.
func TestRatingsOfHotWater(t *testing.T) {
	var resp jsonObject
	body := gridOf(t, "harrow-25-hot-water", `"source_temperatures": [7], "sink_temperatures": [60, 70]`)
	if err := json.Unmarshal(table(t, body, mediaJSON).Body.Bytes(), &resp); err != nil {
		t.Fatal(err)
	}
	for i, want := range []float64{60, 70} {
		row := at(resp, "rows", i)
		if x, ok := at(row, "sink_outlet_temperature").(float64); !ok || math.Abs(x-want) > 1e-9 || at(row, "sink_inlet_temperature") != 10. || at(row, "condensation_temperature") != nil || at(row, "speed") != 50. {
			t.Errorf("%v", row)
		}
	}
}

func TestRatingsRefused(t *testing.T) {
	good := gridOf(t, "harrow-60-brine", `"source_temperatures": [0], "sink_temperatures": [45]`)
	for _, tt := range []struct {
		name, body, kind, pointer, code string
	}{
		{"no sources", strings.Replace(good, `[0]`, `[]`, 1), "invalid-request", "#/source_temperatures", "too_few"},
		{"no sinks", strings.Replace(good, `, "sink_temperatures": [45]`, ``, 1), "invalid-request", "#/sink_temperatures", "missing"},
		{"temperature as text", strings.Replace(good, `[45]`, `["45"]`, 1), "invalid-request", "#/sink_temperatures/0", "wrong_type"},
		{"below absolute zero", strings.Replace(good, `[45]`, `[45, -300]`, 1), "impossible-machine", "#/sink_temperatures/1", "out_of_bounds"},
		{"inlet twice", strings.Replace(good, `"temperature_change": 3`, `"inlet_temperature": 3`, 1), "impossible-machine", "#/source/inlet_temperature", "surplus"},
		{"reference", strings.Replace(good, `[45]`, `[45], "sink_reference": "middle"`, 1), "invalid-request", "#/sink_reference", "not_allowed"},
		{"machine", strings.Replace(good, `"ua"`, `"uA"`, 1), "invalid-request", "#/machine/evaporator/uA", "unknown_member"},
		{"swept volume", strings.Replace(good, `"swept_volume"`, `"speed_x"`, 1), "invalid-request", "#/machine/compressor/speed_x", "unknown_member"},
		{"no machine", `{"source_temperatures": [1], "sink_temperatures": [2]}`, "invalid-request", "#/machine", "missing"},
		{"too many rows", strings.Replace(good, `[0]`, "["+strings.Repeat("0,", DefaultMaxPoints)+"0]", 1), "invalid-request", "#/source_temperatures", "too_many"},
	} {
		wantFault(t, tt.name, answer(t, "POST", "/v1/ratings", tt.body, 422), tt.kind, tt.pointer, tt.code)
	}
	r := newRequest("/v1/ratings", good)
	r.Header.Set("Accept", "image/png")
	if w := ask(t, testHandler(t), r); w.Code != http.StatusNotAcceptable {
		t.Errorf("%d %s", w.Code, w.Body)
	}
}

// hugeGrid has more rows than anybody waits for.
func hugeGrid(t *testing.T) string {
	t.Helper()
	var sources []string
	for i := range 2000 {
		sources = append(sources, fmt.Sprint(-5+float64(i)/200))
	}
	return gridOf(t, "harrow-8", `"source_temperatures": [`+strings.Join(sources, ",")+`], "sink_temperatures": [35, 40, 45, 50]`)
}

// The first rows arrive while the others are still unknown, and nothing is computed for a client that has gone.
func TestRatingsStream(t *testing.T) {
	a := newAPI(t, nil)
	server := httptest.NewServer(a.Handler())
	ctx, cancel := context.WithCancel(t.Context())
	r, err := http.NewRequestWithContext(ctx, http.MethodPost, server.URL+"/v1/ratings", strings.NewReader(hugeGrid(t)))
	if err != nil {
		t.Fatal(err)
	}
	r.Header.Set("Content-Type", mediaJSON)
	r.Header.Set("Accept", mediaLines)
	w, err := server.Client().Do(r)
	if err != nil {
		t.Fatal(err)
	}
	defer w.Body.Close()
	in := bufio.NewReader(w.Body)
	for range 3 {
		if line, err := in.ReadString('\n'); err != nil || !strings.Contains(line, "heating_capacity") {
			t.Fatalf("%q %v", line, err)
		}
	}
	cancel()
	_, _ = io.Copy(io.Discard, in)
	server.Close() // waits for the handler
	computed := 0.
	families, err := a.registry.Gather()
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range families {
		if f.GetName() == "dewmark_calculations_total" {
			for _, m := range f.GetMetric() {
				computed += m.GetCounter().GetValue()
			}
		}
	}
	if !(computed >= 3 && computed < 4000) {
		t.Errorf("%v rows computed for a client who left after 3", computed)
	}
}

// A long table takes no more memory than a short one.
func TestRatingsMemory(t *testing.T) {
	peak := func(n int) uint64 {
		runtime.GC()
		r := newRequest("/v1/ratings", gridOf(t, "harrow-8", `"source_temperatures": [`+strings.TrimSuffix(strings.Repeat("0,", n), ",")+`], "sink_temperatures": [45]`))
		r.Header.Set("Accept", mediaLines)
		s := &sink{header: http.Header{}}
		testHandler(t).ServeHTTP(s, r)
		if s.lines != n {
			t.Fatalf("%d lines, want %d", s.lines, n)
		}
		return s.peak
	}
	short := peak(50)
	if long := peak(1500); long > short+16<<20 {
		t.Errorf("heap of %d MB for a short table, %d MB for a long one", short>>20, long>>20)
	}
}
