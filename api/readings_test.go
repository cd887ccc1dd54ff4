package api

import (
	"encoding/json"
	"fmt"
	"math"
	"net/http"
	"net/http/httptest"
	"os"
	"reflect"
	"slices"
	"strings"
	"testing"

	"dewmark/service/readings"
)

const (
	gauges = `"suction_pressure": 1.9, "suction_temperature": 5, "discharge_pressure": 10.2, "discharge_temperature": 71, "liquid_temperature": 38, "compressor_power": 2.4,
		"sink": {"fluid": "water", "volume_flow": 1.45, "inlet_temperature": 34.2, "outlet_temperature": 39.4},
		"source": {"fluid": "ethylene_glycol", "mass_fraction": 0.25, "inlet_temperature": 3, "outlet_temperature": 0}`
	gaugeHead = `"refrigerant": "R134a", "site": {"altitude": 450}, "units": {"pressure": "bar(g)"}`
)

func readingsOf(t *testing.T, head, samples string, status int) jsonObject {
	t.Helper()
	return answer(t, "POST", "/v1/readings", "{"+head+`, "samples": [`+samples+"]}", status)
}

// Every reading that the evaluation knows has its member, in samples and in uncertainties.
func TestEveryReadingHasAMember(t *testing.T) {
	var s sample
	var u uncertainties
	fill := func(v reflect.Value) {
		for _, f := range v.Fields() {
			f.Set(reflect.New(f.Type().Elem()))
		}
	}
	for _, part := range []any{&s.perReading, &s.Sink.perStream, &s.Source.perStream, &u.perReading, &u.Sink, &u.Source} {
		fill(reflect.ValueOf(part).Elem())
	}
	var got []readings.Reading
	each(&s.perReading, &s.Sink.perStream, &s.Source.perStream, func(r readings.Reading, _ *float64) { got = append(got, r) })
	if !slices.Equal(got, readings.Readings()) {
		t.Errorf("%v, want %v", got, readings.Readings())
	}
	n := 0
	each(&u.perReading, &u.Sink, &u.Source, func(readings.Reading, *uncertaintyRequest) { n++ })
	if n != len(got) {
		t.Errorf("%d uncertainties", n)
	}
	for _, r := range got {
		value := 0.5
		path := strings.Split(r.String(), ".")
		var sent any = value
		for _, name := range slices.Backward(path) {
			sent = jsonObject{name: sent}
		}
		text, err := json.Marshal(sent)
		if err != nil {
			t.Fatal(err)
		}
		var one sample
		if err := decodeJSON(text, &one); err != nil {
			t.Fatalf("%s: %v", r, err)
		}
		var arrived []readings.Reading
		each(&one.perReading, &one.Sink.perStream, &one.Source.perStream, func(r readings.Reading, _ *float64) { arrived = append(arrived, r) })
		if !slices.Equal(arrived, []readings.Reading{r}) {
			t.Errorf("%s arrives as %v", r, arrived)
		}
	}
}

// A cycle read without errors gives its capacities, power and efficiency back, through the wire both ways.
func TestReadingsOfASolvedCycle(t *testing.T) {
	for _, c := range []struct{ refrigerant, condensation string }{{"R290", "50"}, {"R454B", "45"}} {
		solved := answer(t, "POST", "/v1/cycles", `{"refrigerant": "`+c.refrigerant+`", "evaporation": {"temperature": -7, "superheat": 9}, "condensation": {"temperature": `+c.condensation+`, "subcooling": 6},
			"compressor": {"isentropic_efficiency": 0.68, "volumetric_efficiency": 0.9, "heat_loss_fraction": 0.05}, "size": {"heating": 8}, "ambient_temperature": 10}`, 200)
		states := byName(at(solved, "states"), "label")
		at1, at2, at4 := states["1"], states["2"], states["4"]
		got := at(readingsOf(t, `"refrigerant": "`+c.refrigerant+`"`, fmt.Sprintf(`{"suction_pressure": %v, "suction_temperature": %v, "discharge_pressure": %v, "discharge_temperature": %v, "liquid_temperature": %v,
			"compressor_power": %v, "heat_loss_fraction": 0.05}`, at(at1, "pressure"), at(at1, "temperature"), at(at2, "pressure"), at(at2, "temperature"), at(at4, "temperature"), at(solved, "performance", "compressor_power")), 200), "results", 0)
		for _, figure := range []string{"heating_capacity", "cooling_capacity", "compressor_power", "cop_heating", "isentropic_efficiency", "mass_flow", "pressure_ratio"} {
			want := at(solved, "performance", figure).(float64)
			if x, ok := at(got, figure, "value").(float64); !ok || !(math.Abs(x/want-1) <= 1e-8) {
				t.Errorf("%s %s: %v, the cycle has %v", c.refrigerant, figure, at(got, figure, "value"), want)
			}
		}
		for figure, want := range map[string]float64{"superheat": 9, "subcooling": 6, "evaporation_temperature": -7} {
			if x, ok := at(got, figure, "value").(float64); !ok || !(math.Abs(x-want) <= 1e-7) {
				t.Errorf("%s %s: %v, the cycle has %v", c.refrigerant, figure, at(got, figure, "value"), want)
			}
		}
	}
}

// A gauge at a height reads what an absolute transmitter reads less the air: the same machine, and an uncertain air
// besides. A sealed gauge counts from the standard atmosphere.
func TestReadingsOfGauges(t *testing.T) {
	const air = 0.9603457987561634 // bar at 450 m, ISO 2533, as in the tests of units
	gauge := at(readingsOf(t, gaugeHead, "{"+gauges+"}", 200), "results", 0)
	absolute := at(readingsOf(t, `"refrigerant": "R134a", "units": {"pressure": "bar"}`,
		"{"+strings.NewReplacer(`: 1.9`, fmt.Sprintf(": %v", 1.9+air), `: 10.2`, fmt.Sprintf(": %v", 10.2+air)).Replace(gauges)+"}", 200), "results", 0)
	sealed := at(readingsOf(t, strings.Replace(gaugeHead, `450`, `450, "sealed": ["suction_pressure", "discharge_pressure"]`, 1),
		"{"+strings.NewReplacer(`: 1.9`, fmt.Sprintf(": %v", 1.9+air-1.01325), `: 10.2`, fmt.Sprintf(": %v", 10.2+air-1.01325)).Replace(gauges)+"}", 200), "results", 0)
	for _, figure := range []string{"superheat", "subcooling", "evaporation_temperature", "cop_heating", "pressure_ratio"} {
		a, b, c := at(gauge, figure, "value").(float64), at(absolute, figure, "value").(float64), at(sealed, figure, "value").(float64)
		// The weights of the routes depend a little on the uncertainty of the air.
		if tolerance := 2e-3 * math.Abs(a); !(math.Abs(a-b) <= tolerance) || !(math.Abs(a-c) <= tolerance) {
			t.Errorf("%s: gauge %v, absolute %v, sealed %v", figure, a, b, c)
		}
	}
	if a, b := at(gauge, "evaporation_temperature", "standard_uncertainty").(float64), at(absolute, "evaporation_temperature", "standard_uncertainty").(float64); !(a > b) {
		t.Errorf("uncertainty %v with a gauge, %v without", a, b)
	}
}

// The same machine read in both systems of units is the same machine, with the same uncertainties.
func TestReadingsInBothSystems(t *testing.T) {
	si := at(readingsOf(t, `"refrigerant": "R134a", "uncertainties": {"suction_pressure": {"standard": 2}, "liquid_temperature": {"limit": 0.9}}`, `{"suction_pressure": 286, "suction_temperature": 5, "discharge_pressure": 1116,
		"discharge_temperature": 71, "liquid_temperature": 38, "compressor_power": 2.4}`, 200), "results", 0)
	ip := at(readingsOf(t, `"refrigerant": "R134a", "units": {"system": "IP"}, "uncertainties": {"suction_pressure": {"standard": 0.2900754754604376}, "liquid_temperature": {"limit": 1.62}}`,
		`{"suction_pressure": 41.48079299, "suction_temperature": 41, "discharge_pressure": 161.86211531, "discharge_temperature": 159.8, "liquid_temperature": 100.4, "compressor_power": 3.21845302}`, 200), "results", 0)
	for figure, scale := range map[string]float64{"superheat": 5. / 9, "heating_capacity": 0.00029307107017222222, "compressor_power": 0.74569987158227022, "cop_heating": 1, "mass_flow": 0.45359237 / 3600} {
		for _, member := range []string{"value", "standard_uncertainty", "expanded_uncertainty"} {
			a, b := at(si, figure, member).(float64), at(ip, figure, member).(float64)*scale
			if !(math.Abs(a-b) <= 1e-7*math.Max(1, math.Abs(a))) {
				t.Errorf("%s %s: %v in SI, %v in IP", figure, member, a, b)
			}
		}
	}
	if a, b := at(si, "evaporation_temperature", "value").(float64), (at(ip, "evaporation_temperature", "value").(float64)-32)/1.8; !(math.Abs(a-b) < 1e-7) {
		t.Errorf("%v and %v", a, b)
	}
}

// Too close to saturation the quality is unknown, and no enthalpy is invented.
func TestReadingsNearSaturation(t *testing.T) {
	got := at(readingsOf(t, gaugeHead, "{"+strings.Replace(gauges, `"suction_temperature": 5`, `"suction_temperature": -0.2`, 1)+"}", 200), "results", 0)
	state := at(got, "states", 0)
	if at(state, "label") != "1" || at(state, "phase") != nil || at(state, "enthalpy") != nil || at(state, "temperature") != -0.2 || at(state, "pressure") != 1.9 {
		t.Errorf("%v", state)
	}
	if !strings.Contains(fmt.Sprint(at(got, "cautions")), "quality_unknown") || at(got, "isentropic_efficiency") != nil || at(got, "superheat", "value") == nil {
		t.Errorf("%v", got)
	}
}

// Points under the names of a standard are the readings that they stand for.
func TestReadingsByStandardNames(t *testing.T) {
	own := at(readingsOf(t, `"refrigerant": "R290"`, `{"suction_pressure": 320, "suction_temperature": -6, "discharge_pressure": 1225, "discharge_temperature": 58, "liquid_temperature": 31, "compressor_power": 1.25,
		"sink": {"fluid": "water", "inlet_temperature": 30, "outlet_temperature": 35, "volume_flow": 0.87}}`, 200), "results", 0)
	for head, points := range map[string]string{
		"haystack": `{"suction refrig pressure sensor": 320, "refrig-suction-temp": -6, "discharge refrig pressure": 1225, "discharge refrig temp": 58, "liquid refrig temp point": 31, "compressor elec active power sensor": 1.25,
			"hot water entering temp": 30, "leaving hot water temp sensor point": 35, "hot water flow sensor": 0.87}`,
		"brick": `{"suction_pressure": 320, "suction_temperature": -6, "discharge_pressure": 1225, "discharge_temperature": 58, "liquid_temperature": 31, "brick:Electric_Power_Sensor": 1.25,
			"Hot_Water_Return_Temperature_Sensor": 30, "Hot_Water_Supply_Temperature_Sensor": 35, "Hot_Water_Flow_Sensor": 0.87}`,
	} {
		got := at(readingsOf(t, `"refrigerant": "R290", "sink": {"fluid": "water"}, "naming": "`+head+`"`, `{"points": `+points+`}`, 200), "results", 0)
		if fmt.Sprint(got) != fmt.Sprint(own) {
			t.Errorf("%s: %v\nwant %v", head, got, own)
		}
	}
	for _, name := range append(slices.Collect(keysOf(brickPoints)), slices.Collect(keysOf(haystackPoints))...) {
		n := namings[0]
		if _, is := brickPoints[name]; is {
			n = namings[1]
		}
		if r, ok := n.reading(name); !ok || r.String() == "" {
			t.Errorf("%s: %v", name, r)
		}
	}
}

func keysOf(m map[string]readings.Reading) func(func(string) bool) {
	return func(yield func(string) bool) {
		for name := range m {
			if !yield(name) {
				return
			}
		}
	}
}

// The README documents every name of both standards, and no other.
func TestReadmePointNames(t *testing.T) {
	text, err := os.ReadFile("../README.md")
	if err != nil {
		t.Fatal(err)
	}
	_, table, found := strings.Cut(string(text), "\n### Points of building-management systems")
	table, _, _ = strings.Cut(table, "\n## ")
	if !found {
		t.Fatal("README.md has no table of points")
	}
	listed := 0
	for row := range strings.SplitSeq(table, "\n") {
		cells := strings.Split(row, "|")
		if len(cells) != 5 || !strings.Contains(cells[1], "`") {
			continue
		}
		reading := strings.Trim(cells[1], " `")
		for i, n := range namings {
			for name := range strings.SplitSeq(cells[2+i], ";") {
				name = strings.Trim(name, " `")
				if name == "" {
					continue
				}
				listed++
				if r, ok := n.reading(name); !ok || r.String() != reading {
					t.Errorf("%s: the README says %s is %s, the service %v", n.name, name, reading, r)
				}
			}
		}
	}
	if want := len(brickPoints) + len(haystackPoints); listed != want {
		t.Errorf("%d names listed, %d known", listed, want)
	}
}

func TestReadingsRefused(t *testing.T) {
	machine := invented(t, "harrow-8")
	for _, tt := range []struct{ name, head, kind, pointer, code string }{
		{"gauge without site", `"refrigerant": "R134a", "units": {"pressure": "bar(g)"}`, "invalid-request", "#/site", "missing"},
		{"sealed without gauges", `"refrigerant": "R134a", "site": {"altitude": 1, "sealed": ["suction_pressure"]}`, "impossible-readings", "#/site/sealed", "surplus"},
		{"sealed temperature", strings.Replace(gaugeHead, "450", `450, "sealed": ["suction_temperature"]`, 1), "impossible-readings", "#/site/sealed", "not_allowed"},
		{"sealed unknown", strings.Replace(gaugeHead, "450", `450, "sealed": ["suction"]`, 1), "invalid-request", "#/site/sealed/0", "not_allowed"},
		{"naming", gaugeHead + `, "naming": "bacnet"`, "invalid-request", "#/naming", "not_allowed"},
		{"part", gaugeHead + `, "include": ["states", "colour"]`, "invalid-request", "#/include/1", "not_allowed"},
		{"property", gaugeHead + `, "properties": ["colour"]`, "invalid-request", "#/properties/0", "not_allowed"},
		{"two uncertainties", gaugeHead + `, "uncertainties": {"suction_pressure": {"standard": 1, "limit": 2}}`, "impossible-readings", "#/uncertainties/suction_pressure", "missing"},
		{"negative uncertainty", gaugeHead + `, "uncertainties": {"sink": {"inlet_temperature": {"standard": -1}}}`, "impossible-readings", "#/uncertainties/sink/inlet_temperature/standard", "out_of_bounds"},
		{"foreign sensor", gaugeHead + `, "uncertainties": {"suction_pressure": {"sensor": "immersed"}}`, "impossible-readings", "#/uncertainties/suction_pressure/sensor", "not_allowed"},
		{"unknown reading", gaugeHead + `, "uncertainties": {"suction": {"standard": 1}}`, "invalid-request", "#/uncertainties/suction", "unknown_member"},
		{"correlation of one", gaugeHead + `, "correlations": [{"between": ["suction_pressure"], "coefficient": 1}]`, "invalid-request", "#/correlations/0/between", "invalid"},
		{"correlation beyond one", gaugeHead + `, "correlations": [{"between": ["suction_pressure", "liquid_pressure"], "coefficient": 2}]`, "impossible-readings", "#/correlations/0/coefficient", "out_of_bounds"},
		{"shared by nobody", gaugeHead + `, "shared_errors": [{"name": "x", "standard": 1}]`, "impossible-readings", "#/shared_errors/0/readings", "missing"},
		{"shared by kinds", gaugeHead + `, "shared_errors": [{"name": "x", "standard": 1, "readings": ["suction_pressure", "suction_temperature"]}]`, "impossible-readings", "#/shared_errors/0/readings", "not_allowed"},
		{"method", gaugeHead + `, "method": "guess"`, "invalid-request", "#/method", "not_allowed"},
		{"draws without a method", gaugeHead + `, "draws": {"count": 10000}`, "invalid-request", "#/draws", "surplus"},
		{"few draws", gaugeHead + `, "method": "monte_carlo", "draws": {"count": 10}`, "impossible-readings", "#/draws/count", "out_of_bounds"},
		{"part of a draw", gaugeHead + `, "method": "monte_carlo", "draws": {"count": 1000.5}`, "invalid-request", "#/draws/count", "invalid"},
		{"no draws", gaugeHead + `, "method": "monte_carlo", "draws": {"count": 0}`, "invalid-request", "#/draws/count", "out_of_range"},
		{"coverage", gaugeHead + `, "coverage": 95`, "impossible-readings", "#/coverage", "out_of_bounds"},
		{"no coverage", gaugeHead + `, "coverage": 0`, "invalid-request", "#/coverage", "out_of_range"},
		{"fluid", gaugeHead + `, "sink": {"fluid": "milk"}`, "invalid-request", "#/sink/fluid", "not_allowed"},
		{"another refrigerant's machine", gaugeHead + `, "machine": ` + machine, "invalid-request", "#/machine/refrigerant", "not_allowed"},
		{"machine that cannot be", `"refrigerant": "R290", "machine": ` + changed(t, machine, map[string]any{"evaporator.ua": -1, "compressor.maps": nil}), "impossible-machine", "#/machine/compressor/swept_volume", ""},
		{"series", gaugeHead + `, "series": {"window_minutes": 0}`, "invalid-request", "#/series/window_minutes", "out_of_range"},
		{"series figure", gaugeHead + `, "series": {"baseline": {"cop": {"value": 3}}}`, "invalid-request", "#/series/baseline/cop", "unknown_member"},
		{"series baseline", gaugeHead + `, "series": {"baseline": {"cop_heating": {"value": 0}}}`, "impossible-readings", "#/series/baseline/cop_heating", "out_of_bounds"},
		{"layout", gaugeHead + `, "layout": "triple"`, "invalid-request", "#/layout", "not_allowed"},
		{"unknown refrigerant", `"refrigerant": "R13a"`, "unknown-refrigerant", "#/refrigerant", "unknown_refrigerant"},
	} {
		resp := readingsOf(t, tt.head, "{"+gauges+"}", 422)
		if tt.code == "" {
			if at(resp, "type") != "/problems/"+tt.kind {
				t.Errorf("%s: %v", tt.name, resp)
			}
			continue
		}
		wantFault(t, tt.name, resp, tt.kind, tt.pointer, tt.code)
	}
	for _, tt := range []struct{ name, sample, kind, pointer, code string }{
		{"nothing read", `{}`, "impossible-readings", "#/samples/1", "missing"},
		{"below absolute zero", `{"suction_temperature": -300}`, "impossible-readings", "#/samples/1/suction_temperature", "out_of_bounds"},
		{"below a vacuum", `{"suction_pressure": -3}`, "impossible-readings", "#/samples/1/suction_pressure", "out_of_bounds"},
		{"flow of what", `{"sink": {"volume_flow": 1}}`, "impossible-readings", "#/samples/1/sink/fluid", "missing"},
		{"two flows", `{"sink": {"fluid": "water", "volume_flow": 1, "mass_flow": 1}}`, "impossible-readings", "#/samples/1/sink/mass_flow", "surplus"},
		{"milk", `{"sink": {"fluid": "milk", "volume_flow": 1}}`, "invalid-request", "#/samples/1/sink/fluid", "not_allowed"},
		{"time", `{"time": "yesterday", "suction_pressure": 2}`, "invalid-request", "#/samples/1/time", "invalid"},
		{"standstill", `{"standstill_hours": -1, "suction_pressure": 2}`, "invalid-request", "#/samples/1/standstill_hours", "out_of_range"},
		{"points without naming", `{"points": {"suction_pressure": 1}}`, "invalid-request", "#/samples/1/points", "surplus"},
	} {
		resp := readingsOf(t, gaugeHead, "{"+gauges+"},"+tt.sample, 200)
		if at(resp, "failed") != 1. || at(resp, "results", 0, "superheat", "value") == nil {
			t.Errorf("%s: the good one was spoilt: %.300v", tt.name, resp)
		}
		wantFault(t, tt.name, at(resp, "results", 1, "problem"), tt.kind, tt.pointer, tt.code)
	}
	for name, pointer := range map[string]string{`"Room_Temperature": 1`: "#/samples/0/points/Room_Temperature", `"Electric_Power_Sensor": 1, "compressor_power": 1`: "#/samples/0/points/compressor_power"} {
		resp := readingsOf(t, gaugeHead+`, "naming": "brick"`, `{"points": {`+name+`}}`, 200)
		if at(resp, "results", 0, "problem", "errors", 0, "pointer") != pointer {
			t.Errorf("%s: %v", name, resp)
		}
	}
	for name, code := range map[string]string{`{"points": []}`: "wrong_type", `{"points": {"suction_pressure": "1"}}`: "wrong_type", `{"points": {"a": 1, "a": 2}}`: "duplicate_member"} {
		if resp := readingsOf(t, gaugeHead+`, "naming": "brick"`, name, 422); at(resp, "errors", 0, "code") != code {
			t.Errorf("%s: %v", name, resp)
		}
	}
}

// The draws of a seed are the draws of a seed, and agree with the first order where it holds.
func TestReadingsByDraws(t *testing.T) {
	head := gaugeHead + `, "method": "monte_carlo", "draws": {"seed": 3, "count": 20000}, "include": ["cautions"]`
	a, b := readingsOf(t, head, "{"+gauges+"}", 200), readingsOf(t, head, "{"+gauges+"}", 200)
	if fmt.Sprint(a) != fmt.Sprint(b) {
		t.Error("two answers to one request")
	}
	other := readingsOf(t, strings.Replace(head, `"seed": 3`, `"seed": 4`, 1), "{"+gauges+"}", 200)
	path := []any{"results", 0, "cop_heating", "drawn", "mean"}
	if at(a, path...) == at(other, path...) {
		t.Error("another seed draws the same")
	}
	figure := at(a, "results", 0, "cop_heating")
	drawn, first := at(figure, "drawn", "standard_uncertainty").(float64), at(figure, "standard_uncertainty").(float64)
	if !(math.Abs(drawn/first-1) < 0.03) || at(a, "results", 0, "draws", "draws") != 20000. || at(a, "results", 0, "states") != nil {
		t.Errorf("%v", figure)
	}
}

// winter is a series of a minute each of the invented propane machine.
func winter(n int) []string {
	lines := make([]string, n)
	for i := range lines {
		wave := 0.02 * math.Sin(float64(i))
		lines[i] = fmt.Sprintf(`{"time": "2026-01-14T%02d:%02d:00Z", "suction_pressure": %.3f, "suction_temperature": %.3f, "discharge_pressure": %.2f, "discharge_temperature": %.3f, "liquid_temperature": %.3f, "compressor_power": %.4f, "speed": 60,
			"sink": {"inlet_temperature": %.3f, "outlet_temperature": %.3f, "volume_flow": 0.873}, "source": {"inlet_temperature": -7, "inlet_humidity": 0.87, "volume_flow": 3400}}`,
			6+i/60, i%60, 319.4+wave, -7.3+wave, 1224.3+wave, 56.2+wave, 32.2+wave, 1.266+wave/100, 30+wave, 35+wave)
		lines[i] = strings.ReplaceAll(lines[i], "\n", " ")
	}
	return lines
}

func seriesHead(t testing.TB, more string) string {
	t.Helper()
	return strings.ReplaceAll(strings.Join(strings.Fields(`"refrigerant": "R290", "sink": {"fluid": "water"}, "source": {"fluid": "moist_air"}, "machine": `+invented(t, "harrow-8")+more), " "), "\n", " ")
}

func readingLines(t *testing.T, body string, status int) []string {
	t.Helper()
	r := httptest.NewRequestWithContext(t.Context(), http.MethodPost, "/v1/readings", strings.NewReader(body))
	r.Header.Set("Content-Type", mediaLines)
	w := ask(t, testHandler(t), r)
	if w.Code != status {
		t.Fatalf("status %d: %.500s", w.Code, w.Body)
	}
	return strings.Split(strings.TrimSuffix(w.Body.String(), "\n"), "\n")
}

// A stream answers line for line what a batch with a series answers item for item, and sums up the same.
func TestReadingsStreamIsTheSeries(t *testing.T) {
	const series = `, "series": {"window_minutes": 5, "baseline": {"cop_heating": {"value": 4.4, "standard": 0.02}}}, "include": ["plausibility", "comparison", "indications", "cautions", "states"]`
	samples := winter(12)
	samples[3] = `{"suction_pressure": "high"}`
	lines := readingLines(t, "{"+seriesHead(t, series)+"}\n"+strings.Join(samples, "\n")+"\n", 200)
	samples[3] = `{"suction_temperature": -300}`
	batch := readingsOf(t, seriesHead(t, series), strings.Join(samples, ","), 200)
	if len(lines) != len(samples)+1 {
		t.Fatalf("%d lines", len(lines))
	}
	for i, line := range lines[:len(samples)] {
		var v any
		if err := json.Unmarshal([]byte(line), &v); err != nil {
			t.Fatal(err)
		}
		if i == 3 {
			if at(v, "problem", "errors", 0, "pointer") != "#/samples/3/suction_pressure" {
				t.Errorf("%v", v)
			}
			continue
		}
		if fmt.Sprint(v) != fmt.Sprint(at(batch, "results", i)) {
			t.Errorf("line %d: %s\nbatch: %v", i, line, at(batch, "results", i))
		}
	}
	var last jsonObject
	if err := json.Unmarshal([]byte(lines[len(samples)]), &last); err != nil {
		t.Fatal(err)
	}
	summary := at(last, "summary")
	if fmt.Sprint(summary) != fmt.Sprint(at(batch, "summary")) {
		t.Errorf("%v\nbatch %v", summary, at(batch, "summary"))
	}
	if at(summary, "samples") != 12. || at(summary, "rejections", "refused") != 1. || at(summary, "rejections", "starting") != 4. || at(summary, "steady") != 7. {
		t.Errorf("%v", summary)
	}
	if drift := at(summary, "drifts", "cop_heating"); at(drift, "significant") != true || !(at(drift, "change").(float64) < -0.05) {
		t.Errorf("%v", drift)
	}
	deviation, ok := at(summary, "deviations", "t_evap", "mean").(float64)
	if !ok || !(math.Abs(deviation) < 0.2) {
		t.Errorf("%v", at(summary, "deviations"))
	}
}

// A line is brief unless it is asked for more; what all lines have in common stands in the summary.
func TestReadingsStreamIsBrief(t *testing.T) {
	lines := readingLines(t, "{"+seriesHead(t, "")+"}\n"+strings.Join(winter(2), "\n"), 200)
	if strings.Contains(lines[0], `"states"`) || strings.Contains(lines[0], "assumed") || !strings.Contains(lines[0], `"plausibility"`) {
		t.Errorf("%s", lines[0])
	}
	if !strings.Contains(lines[2], "suction_pressure: no uncertainty given") || strings.Count(lines[2], `"safety"`) != 1 {
		t.Errorf("%s", lines[2])
	}
	for body, status := range map[string]int{"": 400, `{"refrigerant": "R290", "samples": []}`: 422, `{"refrigerant": "R290", "naming": "x"}`: 422, `{"refrigerant": "R290", "series": {"deviation": -1}}`: 422} {
		readingLines(t, body, status)
	}
}

// A long series takes no more memory than a short one.
func TestReadingsStreamMemory(t *testing.T) {
	peak := func(n int) uint64 {
		r := httptest.NewRequest(http.MethodPost, "/v1/readings", &endless{
			head: []byte(`{"refrigerant": "R290", "include": []}` + "\n"),
			line: []byte(`{"suction_pressure": 320, "suction_temperature": -6, "discharge_pressure": 1225, "discharge_temperature": 58, "liquid_temperature": 31, "compressor_power": 1.25}` + "\n"), n: n + 1,
		})
		r.Header.Set("Content-Type", mediaLines)
		s := &sink{header: http.Header{}}
		testHandler(t).ServeHTTP(s, r)
		if s.lines != n+1 {
			t.Fatalf("%d lines, want %d", s.lines, n+1)
		}
		return s.peak
	}
	short := peak(500)
	if long := peak(20_000); long > short+16<<20 {
		t.Errorf("heap of %d MB for a short series, %d MB for a long one", short>>20, long>>20)
	}
}
