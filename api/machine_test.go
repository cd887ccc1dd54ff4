package api

import (
	"encoding/json"
	"fmt"
	"maps"
	"math"
	"os"
	"strings"
	"testing"

	"dewmark/service/machine"
)

// invented returns a machine of the demonstration as JSON.
func invented(t testing.TB, name string) string {
	t.Helper()
	text, err := os.ReadFile("../testdata/machines/" + name + ".json")
	if err != nil {
		t.Fatal(err)
	}
	return string(text)
}

// changed returns JSON with some members set, at paths such as "compressor.speed"; null takes one away.
func changed(t testing.TB, text string, members map[string]any) string {
	t.Helper()
	var object jsonObject
	if err := json.Unmarshal([]byte(text), &object); err != nil {
		t.Fatal(err)
	}
	for path, value := range members {
		inner := object
		names := strings.Split(path, ".")
		for _, name := range names[:len(names)-1] {
			next, ok := inner[name].(jsonObject)
			if !ok {
				next = jsonObject{}
				inner[name] = next
			}
			inner = next
		}
		inner[names[len(names)-1]] = value
	}
	b, err := json.Marshal(object)
	if err != nil {
		t.Fatal(err)
	}
	return string(b)
}

const (
	winterAir = `{"fluid": "moist_air", "inlet_temperature": -7, "relative_humidity": 0.87, "volume_flow": 3400}`
	warmWater = `{"fluid": "water", "inlet_temperature": 30, "outlet_temperature": 35}`
	coldBrine = `{"fluid": "propylene_glycol", "mass_fraction": 0.3, "inlet_temperature": 0, "outlet_temperature": -3}`
	hotWater  = `{"fluid": "water", "inlet_temperature": 40, "outlet_temperature": 45}`
)

// pointsOf sends conditions for a machine.
func pointsOf(t *testing.T, m, head, conditions string, status int) jsonObject {
	t.Helper()
	return answer(t, "POST", "/v1/operating-points", `{"machine": `+m+head+`, "conditions": [`+conditions+`]}`, status)
}

// The wire changes nothing: the answer has the numbers of the solver, each in its unit.
func TestOperatingPointIsTheSolvers(t *testing.T) {
	for name, condition := range map[string]string{
		"harrow-8":            `{"source": ` + winterAir + `, "sink": ` + warmWater + `, "speed": 60}`,
		"harrow-60-brine":     `{"source": ` + coldBrine + `, "sink": ` + hotWater + `}`,
		"harrow-25-hot-water": `{"source": {"fluid": "moist_air", "inlet_temperature": 7, "relative_humidity": 0.87, "volume_flow": 9000}, "sink": {"fluid": "water", "inlet_temperature": 10, "outlet_temperature": 65}}`,
	} {
		a := testAPI(t)
		var req operatingPointsRequest
		body := `{"machine": ` + invented(t, name) + `, "conditions": [` + condition + `]}`
		if err := a.read([]byte(body), &req); err != nil {
			t.Fatal(err)
		}
		j, m, err := a.beginMachine(&req.machineHead)
		if err != nil {
			t.Fatal(err)
		}
		var c choices
		k := req.Conditions[0].si(a.fluids(j.units), &c, "#")
		want, err := machine.Solve(t.Context(), m, &k)
		if err != nil || c != nil {
			t.Fatal(err, c)
		}
		got := at(answer(t, "POST", "/v1/operating-points", body, 200), "operating_points", 0)
		for _, x := range []struct {
			path []any
			si   float64
			unit float64
			zero float64
		}{
			{[]any{"system", "power"}, want.System.Power, 1e3, 0},
			{[]any{"system", "heating_capacity"}, want.System.HeatingCapacity, 1e3, 0},
			{[]any{"system", "cooling_capacity"}, want.System.CoolingCapacity, 1e3, 0},
			{[]any{"system", "cop_heating"}, want.System.COPHeating, 1, 0},
			{[]any{"system", "sink_power"}, want.System.SinkPower, 1e3, 0},
			{[]any{"performance", "heating_capacity"}, want.Cycle.Performance.HeatingCapacity, 1e3, 0},
			{[]any{"evaporation_temperature"}, want.EvaporationTemperature, 1, 273.15},
			{[]any{"discharge_pressure"}, want.DischargePressure, 1e3, 0},
			{[]any{"speed"}, want.Speed, 1, 0},
			{[]any{"envelope", "margin"}, want.Envelope.Margin, 1, 0},
			{[]any{"source_temperature"}, want.SourceTemperature, 1, 273.15},
			{[]any{"evaporator", "duty"}, want.Evaporator.Duty, 1e3, 0},
			{[]any{"evaporator", "ua"}, want.Evaporator.UA, 1, 0},
			{[]any{"evaporator", "pinch"}, want.Evaporator.Pinch, 1, 0},
			{[]any{"evaporator", "secondary", "outlet_temperature"}, want.Evaporator.Secondary.OutletTemperature, 1, 273.15},
			{[]any{"evaporator", "secondary", "volume_flow"}, want.Evaporator.Secondary.VolumeFlow, 1. / 3600, 0},
			{[]any{"condenser", "secondary", "mass_flow"}, want.Condenser.Secondary.MassFlow, 1, 0},
			{[]any{"condenser", "zones", 0, "lmtd"}, want.Condenser.Zones[0].LMTD, 1, 0},
			{[]any{"condenser", "zones", 0, "secondary_outlet"}, want.Condenser.Zones[0].SecondaryOutlet, 1, 273.15},
		} {
			if math.IsNaN(x.si) {
				if at(got, x.path...) != nil {
					t.Errorf("%s %v: %v, want null", name, x.path, at(got, x.path...))
				}
				continue
			}
			v, ok := at(got, x.path...).(float64)
			if back := v*x.unit + x.zero; !ok || !(math.Abs(back-x.si) <= 1e-11*math.Max(1, math.Abs(x.si))) {
				t.Errorf("%s %v: %v is %v, want %v", name, x.path, at(got, x.path...), back, x.si)
			}
		}
		if n := len(at(got, "cautions").([]any)); n != len(want.Cautions) {
			t.Errorf("%s: %d cautions, want %d", name, n, len(want.Cautions))
		}
		if within := at(got, "within_envelope"); within != want.WithinEnvelope() {
			t.Errorf("%s: within the envelope: %v", name, within)
		}
	}
}

// toInchPound converts the numbers of a machine and its conditions by the names of their members, with factors of its own.
// Maps speak units of their own and are left alone.
func toInchPound(v any, name string) any {
	switch v := v.(type) {
	case jsonObject:
		for member := range v {
			if member != "maps" {
				v[member] = toInchPound(v[member], member)
			}
		}
	case []any:
		for i := range v {
			v[i] = toInchPound(v[i], name)
		}
	case float64:
		switch name {
		case "inlet_temperature", "outlet_temperature", "discharge_temperature", "vertices", "ambient_temperature":
			return v*1.8 + 32
		case "superheat", "subcooling":
			return v * 1.8
		case "ua":
			return v / 0.52752792631
		case "swept_volume":
			return v / 16.387064e-6
		case "volume_flow", "reference_flow":
			return v / 0.028316846592 / 60
		case "high_pressure", "pressure_rise":
			return v / 6.894757293168361
		case "heating":
			return v / 0.00029307107017222222
		case "power", "control":
			return v / 0.74569987158227022
		}
	}
	return v
}

// The same machine in both systems of units settles in the same place. The maps stay as their data sheet has them.
func TestMachinesInBothSystems(t *testing.T) {
	for name, condition := range map[string]string{
		"harrow-8":        `{"source": ` + winterAir + `, "sink": ` + warmWater + `, "demand": {"heating": 6}}`,
		"harrow-60-brine": `{"source": ` + coldBrine + `, "sink": ` + hotWater + `}`,
	} {
		body := `{"machine": ` + invented(t, name) + `, "conditions": [` + condition + `]}`
		si := at(answer(t, "POST", "/v1/operating-points", body, 200), "operating_points", 0)
		var request jsonObject
		if err := json.Unmarshal([]byte(body), &request); err != nil {
			t.Fatal(err)
		}
		toInchPound(request, "")
		request["units"] = jsonObject{"system": "IP"}
		text, err := json.Marshal(request)
		if err != nil {
			t.Fatal(err)
		}
		ip := at(answer(t, "POST", "/v1/operating-points", string(text), 200), "operating_points", 0)
		for _, c := range []struct {
			path          []any
			scale, offset float64 // SI = (IP - offset) * scale
		}{
			{[]any{"system", "cop_heating"}, 1, 0},
			{[]any{"system", "power"}, 0.74569987158227022, 0},
			{[]any{"system", "heating_capacity"}, 0.00029307107017222222, 0},
			{[]any{"evaporation_temperature"}, 5. / 9, 32},
			{[]any{"evaporator", "ua"}, 0.52752792631, 0},
			{[]any{"evaporator", "pinch"}, 5. / 9, 0},
			{[]any{"condenser", "secondary", "mass_flow"}, 0.45359237 / 3600, 0},
			{[]any{"envelope", "margin"}, 5. / 9, 0},
			{[]any{"speed"}, 1, 0},
		} {
			want, okSI := at(si, c.path...).(float64)
			got, okIP := at(ip, c.path...).(float64)
			if back := (got - c.offset) * c.scale; !okSI || !okIP || !(math.Abs(back-want) <= 2e-8*math.Max(1, math.Abs(want))) {
				t.Errorf("%s: %v is %v in inch-pound units, SI %v", name, c.path, got, want)
			}
		}
	}
}

// A map in other units of its own is the same map: a data sheet in °F, lb/h and kW for one in °C, kg/h and W. The
// polynomial is expanded here, S and D being linear in the readings of the other scale.
func TestMapUnits(t *testing.T) {
	text := invented(t, "harrow-8")
	var m jsonObject
	if err := json.Unmarshal([]byte(text), &m); err != nil {
		t.Fatal(err)
	}
	for _, v := range at(m, "compressor", "maps").([]any) {
		sheet := v.(jsonObject)
		sheet["mass_flow"] = inFahrenheit(sheet["mass_flow"].([]any), 1/0.45359237)
		sheet["power"] = inFahrenheit(sheet["power"].([]any), 1e-3)
		sheet["units"] = jsonObject{"temperature": "[degF]", "mass_flow": "[lb_av]/h", "power": "kW"}
		sheet["suction_superheat"] = sheet["suction_superheat"].(float64) * 1.8
		for _, corner := range sheet["envelope"].([]any) {
			pair := corner.([]any)
			pair[0], pair[1] = pair[0].(float64)*1.8+32, pair[1].(float64)*1.8+32
		}
	}
	b, err := json.Marshal(m)
	if err != nil {
		t.Fatal(err)
	}
	condition := `{"source": ` + winterAir + `, "sink": ` + warmWater + `}`
	want, got := pointsOf(t, text, "", condition, 200), pointsOf(t, string(b), "", condition, 200)
	for _, path := range [][]any{{"system", "power"}, {"system", "heating_capacity"}, {"envelope", "margin"}, {"performance", "mass_flow"}} {
		path = append([]any{"operating_points", 0}, path...)
		x, y := at(want, path...).(float64), at(got, path...).(float64)
		if !(math.Abs(x-y) <= 1e-9*math.Abs(x)) {
			t.Errorf("%v: %v, in °F %v", path, x, y)
		}
	}
}

// inFahrenheit expands the polynomial of a map whose S and D are in °C, multiplied by factor, in S and D in °F.
func inFahrenheit(list []any, factor float64) []any {
	powers := [10][2]int{{0, 0}, {1, 0}, {0, 1}, {2, 0}, {1, 1}, {0, 2}, {3, 0}, {2, 1}, {1, 2}, {0, 3}}
	choose := [4][4]float64{{1}, {1, 1}, {1, 2, 1}, {1, 3, 3, 1}}
	out := make([]float64, 10)
	for j, p := range powers {
		c := list[j].(float64) * factor * math.Pow(5./9, float64(p[0]+p[1]))
		for k, q := range powers {
			if q[0] <= p[0] && q[1] <= p[1] {
				out[k] += c * choose[p[0]][q[0]] * choose[p[1]][q[1]] * math.Pow(-32, float64(p[0]-q[0]+p[1]-q[1]))
			}
		}
	}
	result := make([]any, 10)
	for i, x := range out {
		result[i] = x
	}
	return result
}

// What cannot be is refused with a pointer to the member of the request, whatever the solver calls it.
func TestMachinesRefused(t *testing.T) {
	condition := `{"source": ` + winterAir + `, "sink": ` + warmWater + `}`
	one := `{"kind": "ten_coefficient", "mass_flow": [74,2.2,-0.04,0.025,0,0,0,0,0,0], "power": [88,-39,43,-1,1.5,-0.3,0,0,0,0], "units": {"temperature": "Cel", "mass_flow": "kg/h", "power": "W"}}`
	nine := strings.Replace(strings.TrimSuffix(one, "}"), "[74,", "[", 1) + `, "suction_superheat": 10}`
	for _, tt := range []struct {
		name    string
		machine map[string]any
		raw     string // conditions
		kind    string
		pointer string
		code    string
	}{
		{"unknown refrigerant", map[string]any{"refrigerant": "R29"}, "", "unknown-refrigerant", "#/machine/refrigerant", "unknown_refrigerant"},
		{"mixture that adds up to less", map[string]any{"refrigerant": jsonObject{"mass_fractions": jsonObject{"R32": 0.3, "R1234yf": 0.4}}}, "", "invalid-request", "#/machine/refrigerant/mass_fractions", "composition"},
		{"unknown layout", map[string]any{"layout": "single"}, "", "invalid-request", "#/machine/layout", "not_allowed"},
		{"cascade", map[string]any{"layout": "cascade"}, "", "impossible-machine", "#/machine/layout", "not_allowed"},
		{"unknown member", map[string]any{"compressor.swept": 1}, "", "invalid-request", "#/machine/compressor/swept", "unknown_member"},
		{"map and maps", map[string]any{"compressor.map": json.RawMessage(one)}, "", "invalid-request", "#/machine/compressor/map", "surplus"},
		{"map without superheat", map[string]any{"compressor.map": json.RawMessage(one), "compressor.maps": nil}, "", "impossible-machine", "#/machine/compressor/map", "missing"},
		{"map of nine", map[string]any{"compressor.map": json.RawMessage(nine), "compressor.maps": nil}, "", "impossible-machine", "#/machine/compressor/map/mass_flow", "out_of_bounds"},
		{"map without units", map[string]any{"compressor.map": json.RawMessage(strings.Replace(one, `"mass_flow": "kg/h", `, "", 1)), "compressor.maps": nil}, "", "invalid-request", "#/machine/compressor/map/units/mass_flow", "missing"},
		{"map in gauge units", map[string]any{"compressor.map": json.RawMessage(strings.Replace(one, `"kg/h"`, `"kg/h", "pressure": "bar(g)"`, 1)), "compressor.maps": nil}, "", "invalid-request", "#/machine/compressor/map/units/pressure", "unknown_unit"},
		{"kind of map", map[string]any{"compressor.map": json.RawMessage(strings.Replace(one, `"ten_`, `"twenty_`, 1)), "compressor.maps": nil}, "", "invalid-request", "#/machine/compressor/map/kind", "not_allowed"},
		{"corner of three", map[string]any{"compressor.envelopes": []any{jsonObject{"vertices": []any{[]any{1, 2, 3}}}}}, "", "invalid-request", "#/machine/compressor/envelopes/0/vertices/0", "invalid"},
		{"laws and maps", map[string]any{"compressor.isentropic_efficiency": []any{0.7}, "compressor.volumetric_efficiency": []any{0.9}}, "", "impossible-machine", "#/machine/compressor/maps", "surplus"},
		{"half a slice", map[string]any{"evaporator.slices": 2.5}, "", "invalid-request", "#/machine/evaporator/slices", "invalid"},
		{"ua and pinch", map[string]any{"evaporator.pinch": 2}, "", "impossible-machine", "#/machine/evaporator", "surplus"},
		{"negative ua", map[string]any{"condenser.ua": -1}, "", "impossible-machine", "#/machine/condenser/ua", "out_of_bounds"},
		{"arrangement", map[string]any{"condenser.arrangement": "spiral"}, "", "invalid-request", "#/machine/condenser/arrangement", "not_allowed"},
		{"fan without efficiency", map[string]any{"auxiliaries.source": jsonObject{"pressure_rise": 1}}, "", "impossible-machine", "#/machine/auxiliaries/source/efficiency", "missing"},
		{"no conditions", nil, " ", "invalid-request", "#/conditions", "too_few"},
	} {
		conditions := condition
		if tt.raw != "" {
			conditions = tt.raw
		}
		resp := pointsOf(t, changed(t, invented(t, "harrow-8"), tt.machine), "", conditions, 422)
		wantFault(t, tt.name, resp, tt.kind, tt.pointer, tt.code)
	}
	for _, tt := range []struct{ name, condition, kind, pointer, code string }{
		{"no fluid", `{"source": ` + winterAir + `, "sink": {"inlet_temperature": 30}}`, "invalid-request", "#/conditions/1/sink/fluid", "missing"},
		{"unknown fluid", `{"source": ` + winterAir + `, "sink": {"fluid": "milk"}}`, "invalid-request", "#/conditions/1/sink/fluid", "not_allowed"},
		{"brine without fraction", `{"source": {"fluid": "ethylene_glycol", "inlet_temperature": 0, "outlet_temperature": -3}, "sink": ` + warmWater + `}`, "invalid-request", "#/conditions/1/source/mass_fraction", "missing"},
		{"brine of too much", `{"source": {"fluid": "ethylene_glycol", "mass_fraction": 0.9, "inlet_temperature": 0, "outlet_temperature": -3}, "sink": ` + warmWater + `}`, "invalid-request", "#/conditions/1/source/mass_fraction", "out_of_range"},
		{"water with a fraction", `{"source": ` + winterAir + `, "sink": {"fluid": "water", "mass_fraction": 0.1}}`, "invalid-request", "#/conditions/1/sink/mass_fraction", "surplus"},
		{"table without rows", `{"source": ` + winterAir + `, "sink": {"fluid": "table", "table": {"rows": [{"temperature": 1, "density": 1000}]}}}`, "invalid-request", "#/conditions/1/sink/table/rows/0/heat_capacity", "missing"},
		{"table that descends", `{"source": ` + winterAir + `, "sink": {"fluid": "table", "table": {"rows": [{"temperature": 50, "density": 1000, "heat_capacity": 4}, {"temperature": 1, "density": 1000, "heat_capacity": 4}]}}}`, "invalid-request", "#/conditions/1/sink/table/rows/1", "invalid"},
		{"three of a stream", `{"source": ` + winterAir + `, "sink": {"fluid": "water", "inlet_temperature": 30, "outlet_temperature": 35, "mass_flow": 1}}`, "impossible-machine", "#/conditions/1/sink", "surplus"},
		{"humid water", `{"source": ` + winterAir + `, "sink": {"fluid": "water", "inlet_temperature": 30, "outlet_temperature": 35, "relative_humidity": 0.5}}`, "impossible-machine", "#/conditions/1/sink/relative_humidity", "surplus"},
		{"too fast", `{"source": ` + winterAir + `, "sink": ` + warmWater + `, "speed": 400}`, "impossible-machine", "#/conditions/1/speed", "out_of_bounds"},
		{"speed and demand", `{"source": ` + winterAir + `, "sink": ` + warmWater + `, "speed": 60, "demand": {"heating": 5}}`, "impossible-machine", "#/conditions/1", "surplus"},
		{"too hot for the map", `{"source": ` + winterAir + `, "sink": {"fluid": "water", "inlet_temperature": 75, "outlet_temperature": 80}}`, "no-operating-point", "#/machine/compressor/maps/0/envelope", "envelope_left"},
	} {
		resp := pointsOf(t, invented(t, "harrow-8"), "", condition+","+tt.condition, 200)
		if at(resp, "failed") != 1. || at(resp, "operating_points", 0, "system", "power") == nil {
			t.Errorf("%s: the good one was spoilt: %.500v", tt.name, resp)
		}
		wantFault(t, tt.name, at(resp, "operating_points", 1, "problem"), tt.kind, tt.pointer, tt.code)
	}
}

// wantFault compares the first fault of a problem.
func wantFault(t *testing.T, name string, problem any, kind, pointer, code string) {
	t.Helper()
	if at(problem, "type") != "/problems/"+kind || at(problem, "errors", 0, "pointer") != pointer || at(problem, "errors", 0, "code") != code {
		t.Errorf("%s: want %s %s %s, got %v", name, kind, pointer, code, problem)
	}
}

// A freezing brine is refused in the caller's units.
func TestOperatingPointsSpeakUnits(t *testing.T) {
	resp := pointsOf(t, changed(t, invented(t, "harrow-60-brine"), map[string]any{"compressor.envelopes": nil, "limits": nil}), `, "units": {"temperature": "K"}`,
		`{"source": {"fluid": "ethylene_glycol", "mass_fraction": 0.1, "inlet_temperature": 270, "outlet_temperature": 266}, "sink": {"fluid": "water", "inlet_temperature": 313.15, "outlet_temperature": 318.15}}`, 200)
	detail := fmt.Sprint(at(resp, "operating_points", 0, "problem", "detail"))
	if !strings.Contains(detail, " K") || strings.Contains(detail, "Cel") || at(resp, "operating_points", 0, "problem", "errors", 0, "code") != "freezing" {
		t.Errorf("%v", resp)
	}
}

// Where the machine stands counts for the air that it breathes.
func TestSitePressureOfAir(t *testing.T) {
	condition := `{"source": ` + winterAir + `, "sink": ` + warmWater + `}`
	low := pointsOf(t, invented(t, "harrow-8"), "", condition, 200)
	high := pointsOf(t, invented(t, "harrow-8"), `, "site": {"altitude": 2000}`, condition, 200)
	given := pointsOf(t, invented(t, "harrow-8"), "", strings.Replace(condition, `"volume_flow"`, `"pressure": 79.495, "volume_flow"`, 1), 200)
	path := []any{"operating_points", 0, "evaporator", "secondary", "mass_flow"}
	a, b, c := at(low, path...).(float64), at(high, path...).(float64), at(given, path...).(float64)
	if want := 79.495 / 101.325; !(math.Abs(b/a/want-1) < 2e-3) || !(math.Abs(b/c-1) < 1e-5) {
		t.Errorf("mass flow of air %v at sea level, %v at 2000 m, %v at its pressure", a, b, c)
	}
}

// Answers do not depend on how many are asked together, and the same request gives the same bytes.
func TestOperatingPointsAreIndependent(t *testing.T) {
	var conditions []string
	for i := range 7 {
		conditions = append(conditions, fmt.Sprintf(`{"id": "%d", "source": {"fluid": "moist_air", "inlet_temperature": %d, "relative_humidity": 0.8, "volume_flow": 3400}, "sink": %s}`, i, i*3-10, warmWater))
	}
	text := invented(t, "harrow-8")
	together := pointsOf(t, text, "", strings.Join(conditions, ","), 200)
	for i, condition := range conditions {
		alone := pointsOf(t, text, "", condition, 200)
		if fmt.Sprint(at(alone, "operating_points", 0)) != fmt.Sprint(at(together, "operating_points", i)) {
			t.Errorf("condition %d differs alone", i)
		}
	}
	body := `{"machine": ` + text + `, "conditions": [` + strings.Join(conditions, ",") + `]}`
	if a, b := do(t, testHandler(t), "POST", "/v1/operating-points", body), do(t, testHandler(t), "POST", "/v1/operating-points", body); a.Body.String() != b.Body.String() {
		t.Error("two answers to one request")
	}
	if many := pointsOf(t, text, "", strings.Repeat(conditions[0]+",", maxConditions)+conditions[0], 422); at(many, "errors", 0, "code") != "too_many" {
		t.Errorf("%v", many)
	}
}

// Calculations are counted by kind and outcome.
func TestMachineMetrics(t *testing.T) {
	a := newAPI(t, nil)
	post := func(path, body string) { serve(a.Handler(), newRequest(path, body)) }
	text := invented(t, "harrow-60-brine")
	post("/v1/operating-points", `{"machine": `+text+`, "conditions": [{"source": `+coldBrine+`, "sink": `+hotWater+`}, {"source": `+coldBrine+`, "sink": `+hotWater+`, "speed": 500}]}`)
	post("/v1/ratings", `{"machine": `+text+`, "source": {"fluid": "propylene_glycol", "mass_fraction": 0.3, "temperature_change": 3}, "sink": {"fluid": "water", "temperature_change": 5}, "source_temperatures": [0, 5], "sink_temperatures": [35]}`)
	post("/v1/compressor-maps/fit", fitBody(`{"temperature": "Cel", "mass_flow": "kg/h", "power": "W"}`))
	got := map[string]float64{}
	families, err := a.registry.Gather()
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range families {
		if f.GetName() != "dewmark_calculations_total" {
			continue
		}
		for _, m := range f.GetMetric() {
			var labels []string
			for _, l := range m.GetLabel() {
				labels = append(labels, l.GetValue())
			}
			got[strings.Join(labels, " ")] = m.GetCounter().GetValue()
		}
	}
	want := map[string]float64{"operating_point ok": 1, "operating_point impossible_machine": 1, "rating ok": 2, "map_fit ok": 1}
	if !maps.Equal(got, want) {
		t.Errorf("%v, want %v", got, want)
	}
}

// What is in a list is held against its bounds as what is not.
func TestBoundsOfItems(t *testing.T) {
	a := testAPI(t)
	for body, pointer := range map[string]string{
		`{"machine": {"refrigerant": "R290", "compressor": {}, "evaporator": {}, "condenser": {}}, "conditions": [{"id": "` + strings.Repeat("x", 129) + `"}]}`:                                  "#/conditions/0/id",
		`{"machine": {"refrigerant": "R290", "compressor": {"maps": [{"kind": "ten_coefficient", "power": [1,2,3,4,5,6,7,8,9,10,11]}]}, "evaporator": {}, "condenser": {}}, "conditions": [{}]}`: "#/machine/compressor/maps/0/power",
		`{"machine": {"refrigerant": "R290", "compressor": {"envelopes": [{"source": "` + strings.Repeat("x", 257) + `"}]}, "evaporator": {}, "condenser": {}}, "conditions": [{}]}`:             "#/machine/compressor/envelopes/0/source",
	} {
		answer := do(t, a.Handler(), "POST", "/v1/operating-points", body)
		if answer.Code != 422 || !strings.Contains(answer.Body.String(), `"`+pointer+`"`) {
			t.Errorf("%s: %d %s", pointer, answer.Code, answer.Body)
		}
	}
}
