package api

import (
	"bytes"
	"encoding/json"
	"fmt"
	"math"
	"net/http"
	"strings"
	"testing"
)

// object is any JSON object.
type jsonObject = map[string]any

// answer sends body to path, wants status, and returns the response.
func answer(t *testing.T, method, path, body string, status int) jsonObject {
	t.Helper()
	w := do(t, testHandler(t), method, path, body)
	if w.Code != status {
		t.Fatalf("%s %s: status %d, want %d: %.1000s", method, path, w.Code, status, w.Body)
	}
	var v jsonObject
	if err := json.Unmarshal(w.Body.Bytes(), &v); err != nil {
		t.Fatal(err)
	}
	return v
}

// at follows names and indices into v; it returns nil where they lead nowhere.
func at(v any, path ...any) any {
	for _, step := range path {
		switch step := step.(type) {
		case string:
			object, _ := v.(jsonObject)
			v = object[step]
		case int:
			list, _ := v.([]any)
			if step >= len(list) {
				return nil
			}
			v = list[step]
		}
	}
	return v
}

// wantNumbers compares members with values and their tolerances.
func wantNumbers(t *testing.T, where string, v any, want map[string][2]float64) {
	t.Helper()
	for name, w := range want {
		got, ok := at(v, name).(float64)
		if !ok || !(math.Abs(got-w[0]) <= w[1]) {
			t.Errorf("%s: %s is %v, want %v ± %v", where, name, at(v, name), w[0], w[1])
		}
	}
}

// Values of tables that others printed, through the units of both systems; tolerances are half the last digit, or that
// converted.
func TestStatesAgainstTables(t *testing.T) {
	for _, tt := range []struct {
		source, body string
		want         map[string][2]float64
	}{
		{
			"Tillner-Roth and Baehr, J. Phys. Chem. Ref. Data 23 (1994) 657, tables 8-9, at 310 K and 1 MPa",
			`{"refrigerant": "R134a", "units": {"temperature": "K", "pressure": "MPa"}, "points": [{"temperature": 310, "pressure": 1}]}`,
			map[string][2]float64{
				"density": {1160.4, 0.05}, "enthalpy": {251.72, 0.005}, "entropy": {1.1755, 0.00005},
				"isochoric_heat_capacity": {0.9288, 0.00005}, "isobaric_heat_capacity": {1.4795, 0.00005}, "speed_of_sound": {452.15, 0.005},
			},
		},
		{
			"the same in inch-pound units: 98.33 °F, 145.0377 psi; the heat capacity by 4186.8 J/(kg K) a Btu/(lb °F)",
			`{"refrigerant": "R134a", "units": {"system": "IP"}, "points": [{"temperature": 98.33, "pressure": 145.0377377}]}`,
			map[string][2]float64{
				"density": {1160.4 / 16.018463373960138, 0.05 / 16}, "enthalpy": {251.72 / 2.326, 0.005 / 2.3},
				"isobaric_heat_capacity": {1.4795 / 4.1868, 0.00005 / 4}, "speed_of_sound": {452.15 / 0.3048, 0.005 / 0.3},
			},
		},
		{
			"Cengel and Boles, 7th ed., table A-13, at 50 °C and 1.00 MPa, h and s zero at -40 °C",
			`{"refrigerant": "R134a", "datum": "ASHRAE", "units": {"pressure": "MPa"}, "points": [{"temperature": 50, "pressure": 1}]}`,
			map[string][2]float64{"specific_volume": {0.021796, 0.0000005}, "enthalpy": {282.74, 0.005}},
		},
	} {
		states := at(answer(t, "POST", "/v1/states", tt.body, 200), "states", 0)
		wantNumbers(t, tt.source, states, tt.want)
	}
}

// The given numbers come back as they were written; converted there and back, the last digit would change.
func TestGivenNumbersAreEchoed(t *testing.T) {
	for _, tt := range []struct{ units, point string }{
		{`{}`, `"temperature": 5, "pressure": 400`},
		{`{}`, `"temperature": -0.1, "pressure": 101.32500000000001`},
		{`{"system": "IP"}`, `"temperature": 40.1, "pressure": 33.3`},
		{`{"pressure": "bar(g)"}`, `"temperature": 5.3, "pressure": 2.7`},
		{`{"pressure": "psi(g)", "enthalpy": "[Btu_IT]/[lb_av]"}`, `"pressure": 30.03, "enthalpy": 260.7`},
		{`{"density": "[lb_av]/[ft_i]3"}`, `"temperature": 20.7, "density": 0.7001`},
		{`{"specific_volume": "L/kg"}`, `"temperature": 20.7, "specific_volume": 71.3`},
		{`{"entropy": "[Btu_IT]/([lb_av].[degR])"}`, `"pressure": 777.7, "entropy": 0.61`},
		{`{}`, `"temperature": 0.3, "quality": 0.30000000000000004`},
	} {
		body := fmt.Sprintf(`{"refrigerant": "R290", "units": %s, "site": {"altitude": 333}, "points": [{%s}]}`, tt.units, tt.point)
		state := at(answer(t, "POST", "/v1/states", body, 200), "states", 0)
		var given jsonObject
		if err := json.Unmarshal([]byte("{"+tt.point+"}"), &given); err != nil {
			t.Fatal(err)
		}
		for name, number := range given {
			if got := at(state, name); got != number {
				t.Errorf("%s %s: %s is %v", tt.units, tt.point, name, got)
			}
		}
	}
}

// What does not exist in a phase is null, and only that.
func TestStateNulls(t *testing.T) {
	always := []string{"temperature", "pressure", "density", "specific_volume", "enthalpy", "entropy", "internal_energy", "compressibility_factor"}
	single := []string{
		"isobaric_heat_capacity", "isochoric_heat_capacity", "speed_of_sound", "isentropic_exponent",
		"joule_thomson_coefficient", "isothermal_compressibility", "volume_expansivity",
	}
	around := []string{"dew_temperature", "bubble_temperature"}
	for _, tt := range []struct {
		point, phase string
		have         [][]string
		also, lack   []string
	}{
		{`"temperature": 20, "pressure": 400`, "vapour", [][]string{always, single, around}, []string{"superheat"}, []string{"quality", "subcooling"}},
		{`"temperature": 20, "pressure": 2000`, "liquid", [][]string{always, single, around}, []string{"subcooling"}, []string{"quality", "superheat"}},
		{`"temperature": 20, "pressure": 9000`, "liquid", [][]string{always, single}, nil, []string{"quality", "superheat", "subcooling", "dew_temperature", "bubble_temperature"}},
		{`"temperature": 20, "quality": 0.4`, "two_phase", [][]string{always, around}, []string{"quality"}, append([]string{"superheat", "subcooling"}, single...)},
		{`"temperature": 20, "quality": 1`, "vapour", [][]string{always, single, around}, []string{"quality", "superheat"}, []string{"subcooling"}},
		{`"temperature": 20, "quality": 0`, "liquid", [][]string{always, single, around}, []string{"quality", "subcooling"}, []string{"superheat"}},
		{`"temperature": 150, "pressure": 9000`, "supercritical", [][]string{always, single}, nil, []string{"quality", "superheat", "subcooling", "dew_temperature"}},
		{`"temperature": 150, "pressure": 900`, "vapour", [][]string{always, single, around}, []string{"superheat"}, []string{"quality", "subcooling"}},
	} {
		state := at(answer(t, "POST", "/v1/states", `{"refrigerant": "R290", "points": [{`+tt.point+`}]}`, 200), "states", 0)
		if at(state, "phase") != tt.phase {
			t.Errorf("%s: phase %v, want %s", tt.point, at(state, "phase"), tt.phase)
		}
		for _, names := range append(tt.have, tt.also) {
			for _, name := range names {
				if _, ok := at(state, name).(float64); !ok {
					t.Errorf("%s: %s is %v", tt.point, name, at(state, name))
				}
			}
		}
		for _, name := range tt.lack {
			if v, there := state.(jsonObject)[name]; !there || v != nil {
				t.Errorf("%s: %s is %v, there %v", tt.point, name, v, there)
			}
		}
	}
}

// On the edge of the dome superheat and subcooling are nothing, not almost nothing.
func TestSaturatedStates(t *testing.T) {
	for _, pair := range []string{`"temperature": 31.7`, `"pressure": 1234.5`} {
		resp := answer(t, "POST", "/v1/states", `{"refrigerant": "R32", "points": [{`+pair+`, "quality": 0}, {`+pair+`, "quality": 1}]}`, 200)
		liquid, vapour := at(resp, "states", 0), at(resp, "states", 1)
		if at(liquid, "subcooling") != 0. || at(vapour, "superheat") != 0. || at(liquid, "temperature") != at(liquid, "bubble_temperature") {
			t.Errorf("%s: %v, %v", pair, liquid, vapour)
		}
	}
}

// One bad point does not spoil the others, and each problem points into its place.
func TestBatchKeepsGoing(t *testing.T) {
	resp := answer(t, "POST", "/v1/states", `{"refrigerant": "R290", "points": [
		{"id": "good", "temperature": 5, "pressure": 400},
		{"id": "none"},
		{"id": "one", "temperature": 5},
		{"id": "three", "temperature": 5, "pressure": 400, "density": 8},
		{"id": "same twice", "density": 8, "specific_volume": 0.1},
		{"id": "hot", "temperature": 5000, "pressure": 400},
		{"id": "phase", "temperature": 5, "pressure": 400, "phase": "gas"},
		{"id": "wrong phase", "temperature": 5, "pressure": 400, "phase": "liquid"},
		{"id": "wet", "temperature": 5, "quality": 1.5},
		{"id": "huge", "temperature": 5, "pressure": 1e308},
		{"id": "volume", "temperature": 5, "specific_volume": 0},
		{"id": "good too", "temperature": -20, "quality": 0.5}
	]}`, 200)
	if at(resp, "failed") != 10. {
		t.Errorf("failed is %v, want 10", at(resp, "failed"))
	}
	for i, want := range []struct{ kind, pointer, code, says string }{
		{},
		{"invalid-request", "#/points/1", "missing", "has none"},
		{"invalid-request", "#/points/2", "missing", "only temperature"},
		{"invalid-request", "#/points/3/temperature", "surplus", "temperature, pressure, density"},
		{"invalid-request", "#/points/4/specific_volume", "surplus", "one property"},
		{"out-of-range", "#/points/5/temperature", "above_maximum", "temperature 5000 Cel is above what R290 allows, -187.625 Cel to 376.85 Cel"},
		{"invalid-request", "#/points/6/phase", "not_allowed", "liquid, vapour, two_phase, supercritical"},
		{"no-such-state", "#/points/7/phase", "no_such_state", "allowed here: vapour"},
		{"out-of-range", "#/points/8/quality", "above_maximum", "quality 1.5 is above what R290 allows, 0 to 1"},
		{"invalid-request", "#/points/9/pressure", "out_of_range", "pressure 1e+308"},
		{"invalid-request", "#/points/10/specific_volume", "out_of_range", "specific_volume 0"},
		{},
	} {
		item := at(resp, "states", i)
		problem := at(item, "problem")
		if want.kind == "" {
			if problem != nil || at(item, "id") == nil || at(item, "density") == nil {
				t.Errorf("point %d: %v", i, item)
			}
			continue
		}
		e := at(problem, "errors", 0)
		if at(problem, "type") != "/problems/"+want.kind || at(problem, "status") != 422. || at(e, "pointer") != want.pointer || at(e, "code") != want.code ||
			!strings.Contains(fmt.Sprint(at(e, "detail")), want.says) {
			t.Errorf("point %d: %v", i, item)
		}
		if at(item, "id") == nil || at(item, "density") != nil {
			t.Errorf("point %d: %v", i, item)
		}
	}
}

// A thin gas has almost one enthalpy at a temperature, whatever its pressure.
func TestUncertainState(t *testing.T) {
	thin := at(answer(t, "POST", "/v1/states", `{"refrigerant": "R290", "points": [{"temperature": 100, "pressure": 1e-4}]}`, 200), "states", 0)
	problem := at(answer(t, "POST", "/v1/states", fmt.Sprintf(`{"refrigerant": "R290", "points": [{"temperature": 100, "enthalpy": %v}]}`, at(thin, "enthalpy")), 200), "states", 0, "problem")
	if at(problem, "type") != "/problems/uncertain-state" || len(at(problem, "errors").([]any)) != 2 || !strings.Contains(fmt.Sprint(at(problem, "detail")), "density") {
		t.Errorf("%v", problem)
	}
}

// The limits that the catalogue states can be asked for, in any unit.
func TestLimitsAreWithin(t *testing.T) {
	for _, units := range []string{`{}`, `{"system": "IP"}`, `{"temperature": "K"}`, `{"temperature": "[degR]"}`} {
		query := map[string]string{`{}`: "", `{"system": "IP"}`: "?system=IP", `{"temperature": "K"}`: "?units.temperature=K", `{"temperature": "[degR]"}`: "?units.temperature=[degR]"}[units]
		for _, row := range at(answer(t, "GET", "/v1/refrigerants"+query, "", 200), "refrigerants").([]any) {
			body := fmt.Sprintf(`{"refrigerant": %q, "units": %s, "points": [{"temperature": %v, "quality": 1}, {"temperature": %v, "pressure": 10}]}`,
				at(row, "designation"), units, at(row, "temperature_min"), at(row, "temperature_max"))
			if w := serve(testHandler(t), newRequest("/v1/states", body)); !strings.Contains(w.Body.String(), `"failed":0,`) {
				t.Errorf("%s: %.2000s", body, w.Body)
			}
		}
	}
}

// Problems speak the units of the request.
func TestProblemsSpeakTheCallersUnits(t *testing.T) {
	for _, tt := range []struct{ units, point, says string }{
		{`{}`, `"temperature": -300, "pressure": 400`, "temperature -300 Cel is below what R290 allows, -187.625 Cel to 376.85 Cel"},
		{`{"system": "IP"}`, `"temperature": 1000, "pressure": 100`, "temperature 1000 [degF] is above what R290 allows, -305.725 [degF] to 710.33 [degF]"},
		{`{"temperature": "K"}`, `"temperature": 20, "pressure": 400`, "temperature 20 K is below what R290 allows, 85.525 K to 650 K"},
		{`{"pressure": "bar"}`, `"temperature": 20, "pressure": 20000`, "pressure 20000 bar is above what R290 allows, 0 bar to 10000 bar"},
		{`{"pressure": "kPa(g)"}`, `"temperature": 20, "pressure": -150`, "pressure -150 kPa(g) is below what R290 allows, -100 kPa(g) to 999900 kPa(g)"},
		{`{"specific_volume": "L/kg"}`, `"temperature": 20, "specific_volume": 0.5`, "specific_volume 0.5 L/kg is below what R290 allows, "},
	} {
		body := fmt.Sprintf(`{"refrigerant": "R290", "units": %s, "site": {"ambient_pressure": %s}, "points": [{%s}]}`, tt.units,
			map[bool]string{true: "1", false: "100"}[strings.Contains(tt.units, "bar")], tt.point)
		if strings.Contains(tt.units, "IP") {
			body = strings.Replace(body, `"site": {"ambient_pressure": 100}, `, "", 1)
		}
		problem := at(answer(t, "POST", "/v1/states", body, 200), "states", 0, "problem")
		if got := fmt.Sprint(at(problem, "detail")); !strings.HasPrefix(got, tt.says) {
			t.Errorf("%s: %s", tt.point, got)
		}
	}
}

// A pair with several solutions lists them all and picks none; the phase chooses.
func TestSeveralSolutions(t *testing.T) {
	const head = `{"refrigerant": "R290", "points": [{"temperature": 20, "enthalpy": 252.5`
	problem := at(answer(t, "POST", "/v1/states", head+`}]}`, 200), "states", 0, "problem")
	if at(problem, "type") != "/problems/ambiguous-state" || at(problem, "errors", 0, "pointer") != "#/points/0/phase" {
		t.Fatalf("%v", problem)
	}
	solutions, _ := at(problem, "solutions").([]any)
	if len(solutions) < 2 {
		t.Fatalf("%d solutions", len(solutions))
	}
	seen := map[any]int{}
	for _, s := range solutions {
		seen[at(s, "phase")]++
		wantNumbers(t, "solution", s, map[string][2]float64{"temperature": {20, 1e-9}, "enthalpy": {252.5, 1e-9}})
	}
	for phase, count := range seen {
		if count != 1 {
			continue
		}
		item := at(answer(t, "POST", "/v1/states", fmt.Sprintf(`%s, "phase": %q}]}`, head, phase), 200), "states", 0)
		if at(item, "phase") != phase {
			t.Errorf("asked for %v: %v", phase, item)
		}
	}
}

func TestSelectedProperties(t *testing.T) {
	resp := answer(t, "POST", "/v1/states", `{"refrigerant": "R290", "properties": ["entropy", "density"], "points": [{"id": "a", "temperature": 5, "pressure": 400}]}`, 200)
	item, _ := at(resp, "states", 0).(jsonObject)
	if len(item) != 4 || item["density"] == nil || item["entropy"] == nil || item["phase"] != "vapour" || item["id"] != "a" {
		t.Errorf("%v", item)
	}
	units, _ := at(resp, "units").(jsonObject)
	if len(units) != 2 || units["density"] != "kg/m3" || units["entropy"] != "kJ/(kg.K)" {
		t.Errorf("units %v", units)
	}
	problem := answer(t, "POST", "/v1/states", `{"refrigerant": "R290", "properties": ["entropy", "exergy"], "points": [{"temperature": 5, "pressure": 400}]}`, 422)
	if at(problem, "errors", 0, "pointer") != "#/properties/1" || !strings.Contains(fmt.Sprint(at(problem, "detail")), "allowed are temperature") {
		t.Errorf("%v", problem)
	}
}

// Water is solid or vapour at 0 °C and below, so that its default datum is that of the triple point, and it is told.
func TestDatums(t *testing.T) {
	for _, tt := range []struct {
		refrigerant, datum, point string
		status                    int
		effective                 string
		enthalpy                  float64
	}{
		{"R290", "", `"temperature": 0, "quality": 0`, 200, "IIR", 200},
		{"R290", "IIR", `"temperature": 0, "quality": 0`, 200, "IIR", 200},
		{"R290", "ASHRAE", `"temperature": -40, "quality": 0`, 200, "ASHRAE", 0},
		{"R290", "NBP", `"pressure": 101.325, "quality": 0`, 200, "NBP", 0},
		{"R718", "", `"temperature": 0.01, "quality": 0`, 200, "triple_point", 0.000611782},
		{"R718", "IIR", `"temperature": 20, "pressure": 100`, 422, "", 0},
		{"R718", "ASHRAE", `"temperature": 20, "pressure": 100`, 422, "", 0},
		{"R290", "iir", `"temperature": 0, "quality": 0`, 422, "", 0},
	} {
		datum := ""
		if tt.datum != "" {
			datum = fmt.Sprintf(`"datum": %q, `, tt.datum)
		}
		resp := answer(t, "POST", "/v1/states", fmt.Sprintf(`{"refrigerant": %q, %s"points": [{%s}]}`, tt.refrigerant, datum, tt.point), tt.status)
		if tt.status != 200 {
			if at(resp, "errors", 0, "pointer") != "#/datum" || !strings.Contains(fmt.Sprint(at(resp, "detail")), "NBP") {
				t.Errorf("%s %s: %v", tt.refrigerant, tt.datum, resp)
			}
			continue
		}
		if at(resp, "datum") != tt.effective || at(resp, "basis", "datum") != tt.effective {
			t.Errorf("%s %s: datum %v", tt.refrigerant, tt.datum, at(resp, "datum"))
		}
		// u' is zero at the triple point of water, so that h' = p/rho': 611.655 Pa over 999.793 kg/m3 (IAPWS-95).
		wantNumbers(t, tt.refrigerant+" "+tt.datum, at(resp, "states", 0), map[string][2]float64{"enthalpy": {tt.enthalpy, 1e-6}})
		if told := at(resp, "cautions", 0, "code") == "datum_not_defined"; told != (tt.refrigerant == "R718") {
			t.Errorf("%s %s: cautions %v", tt.refrigerant, tt.datum, at(resp, "cautions"))
		}
	}
}

// Outside validity the service refuses, unless it may extrapolate, and then it says where it did.
func TestExtrapolation(t *testing.T) {
	const points = `"points": [{"temperature": 20, "pressure": 100}, {"temperature": 250, "pressure": 100}]}`
	resp := answer(t, "POST", "/v1/states", `{"refrigerant": "R134a", `+points, 200)
	if at(resp, "failed") != 1. || at(resp, "states", 1, "problem", "type") != "/problems/out-of-range" || at(resp, "basis", "extrapolated") != false {
		t.Errorf("%v", resp)
	}
	resp = answer(t, "POST", "/v1/states", `{"refrigerant": "R134a", "extrapolate": true, `+points, 200)
	if at(resp, "failed") != 0. || at(resp, "states", 0, "extrapolated") != nil || at(resp, "states", 1, "extrapolated") != true ||
		at(resp, "basis", "extrapolated") != true || at(resp, "cautions", 0, "code") != "extrapolated" {
		t.Errorf("%v", resp)
	}
}

// GET gives what POST gives.
func TestSingleStateIsTheSame(t *testing.T) {
	one := answer(t, "GET", "/v1/states?refrigerant=R290&temperature=5&pressure=3.1&units.pressure=bar(g)&site.altitude=450&datum=NBP", "", 200)
	many := answer(t, "POST", "/v1/states", `{"refrigerant": "R290", "datum": "NBP", "units": {"pressure": "bar(g)"}, "site": {"altitude": 450}, "points": [{"temperature": 5, "pressure": 3.1}]}`, 200)
	for name, v := range at(many, "states", 0).(jsonObject) {
		if one[name] != v {
			t.Errorf("%s: %v by GET, %v by POST", name, one[name], v)
		}
	}
	for _, name := range []string{"refrigerant", "datum", "units", "site", "basis", "cautions"} {
		if fmt.Sprint(one[name]) != fmt.Sprint(many[name]) {
			t.Errorf("%s: %v by GET, %v by POST", name, one[name], many[name])
		}
	}
	for _, tt := range []struct {
		query, pointer string
	}{
		{"", "#/refrigerant"},
		{"?refrigerant=R290", "#"},
		{"?refrigerant=R290&temperature=5", "#"},
		{"?refrigerant=R290&temperature=warm&pressure=400", "#/temperature"},
		{"?refrigerant=R290&temperature=5000&pressure=400", "#/temperature"},
		{"?refrigerant=R290&temperature=5&pressure=400&system=US", "#/units/system"},
		{"?refrigerant=R290&temperature=5&pressure=400&phases=liquid", "#/phases"},
		{"?refrigerant=R290&temperature=5&pressure=400&points=1", "#/points"},
	} {
		if resp := answer(t, "GET", "/v1/states"+tt.query, "", 422); at(resp, "errors", 0, "pointer") != tt.pointer {
			t.Errorf("%s: %v", tt.query, resp)
		}
	}
}

// The same request gives the same bytes, however often and beside whatever else.
func TestCalculationsArePure(t *testing.T) {
	h := testHandler(t)
	for path, body := range map[string]string{
		"/v1/states":     `{"refrigerant": "R1234yf", "points": [{"temperature": 5, "pressure": 300}, {"temperature": 5, "pressure": -1}]}`,
		"/v1/saturation": `{"refrigerant": "R1234yf", "range": {"of": "temperature", "from": -20, "to": 40, "step": 5}}`,
		"/v1/cycles":     `{"refrigerant": "R1234yf", "evaporation": {"temperature": 0}, "condensation": {"temperature": 40}}`,
	} {
		first := do(t, h, http.MethodPost, path, body).Body.String()
		done := make(chan string)
		for range 8 {
			go func() {
				r := newRequest(path, body)
				done <- serve(h, r).Body.String()
			}()
		}
		for range 8 {
			if again := <-done; again != first {
				t.Errorf("%s: another answer:\n%s\n%s", path, first, again)
			}
		}
	}
}

// The basis of an answer does not depend on what was asked before it.
func TestBasisIsItsOwn(t *testing.T) {
	shared := newAPI(t, nil)
	for range 2 {
		for _, request := range []string{
			`{"refrigerant": "R290", "points": [{"temperature": 5, "pressure": 400}]}`,
			`{"refrigerant": "R290", "points": [{"temperature": 5, "pressure": 400}], "properties": ["viscosity"]}`,
			`{"refrigerant": "R290", "points": [{"temperature": 5, "pressure": 400}], "properties": ["density"]}`,
			`{"refrigerant": "r-290", "datum": "NBP", "points": [{"temperature": 5, "pressure": 400}]}`,
			`{"refrigerant": "R290", "extrapolate": true, "points": [{"temperature": 380, "pressure": 400}]}`,
			`{"refrigerant": "R600a", "points": [{"temperature": 5, "pressure": 100}]}`,
			`{"refrigerant": "R454B", "points": [{"temperature": 5, "pressure": 400}]}`,
		} {
			basis := func(a *API) (v struct{ Basis json.RawMessage }) {
				if w := do(t, a.Handler(), "POST", "/v1/states", request); json.Unmarshal(w.Body.Bytes(), &v) != nil || v.Basis == nil {
					t.Errorf("%s: %d %s", request, w.Code, w.Body)
				}
				return v
			}
			if got, want := basis(shared), basis(newAPI(t, nil)); !bytes.Equal(got.Basis, want.Basis) {
				t.Errorf("%s: basis %s, alone %s", request, got.Basis, want.Basis)
			}
		}
	}
}
