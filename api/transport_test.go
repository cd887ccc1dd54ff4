package api

import (
	"encoding/json"
	"fmt"
	"strings"
	"testing"
)

// Sotiriadou, Ntonti, Assael, Perkins and Huber, Int. J. Thermophys. 45 (2024) 87, table 8: the viscosity of R1150 at 283 K, to
// the 2e-6 that the molar mass of the paper makes; Assael, Koutian, Huber and Perkins, J. Phys. Chem. Ref. Data 45 (2016)
// 033104, table 5: its thermal conductivity at 300 K and 50 MPa, to half the last digit and what two equations of state make.
func TestTransportAgainstTables(t *testing.T) {
	resp := answer(t, "POST", "/v1/states", `{"refrigerant": "R1150", "units": {"temperature": "K", "pressure": "MPa"}, "properties": ["viscosity", "thermal_conductivity"],
		"points": [{"temperature": 283, "density": 300}, {"temperature": 283, "density": 550}, {"temperature": 300, "pressure": 50}]}`, 200)
	wantNumbers(t, "300 kg/m3", at(resp, "states", 0), map[string][2]float64{"viscosity": {30.934701, 30.9 * 2e-6}})
	wantNumbers(t, "550 kg/m3", at(resp, "states", 1), map[string][2]float64{"viscosity": {126.954762, 127 * 2e-6}})
	wantNumbers(t, "50 MPa", at(resp, "states", 2), map[string][2]float64{"thermal_conductivity": {126.9, 0.13}})
	if at(resp, "basis", "transport", 0, "property") != "viscosity" || !strings.Contains(fmt.Sprint(at(resp, "basis", "transport", 0, "source")), "2024") {
		t.Errorf("basis %v", at(resp, "basis"))
	}
}

// Viscosity and conductivity exist outside the dome and on its edge, surface tension inside it and on its edge.
func TestTransportNulls(t *testing.T) {
	for point, have := range map[string]string{
		`"temperature": 20, "pressure": 400`:   "viscosity thermal_conductivity prandtl_number",
		`"temperature": 20, "pressure": 2000`:  "viscosity thermal_conductivity prandtl_number",
		`"temperature": 150, "pressure": 9000`: "viscosity thermal_conductivity prandtl_number",
		`"temperature": 20, "quality": 0.4`:    "surface_tension",
		`"temperature": 20, "quality": 1`:      "viscosity thermal_conductivity prandtl_number surface_tension",
	} {
		state := at(answer(t, "POST", "/v1/states", `{"refrigerant": "R290", "points": [{`+point+`}]}`, 200), "states", 0)
		for _, name := range []string{"viscosity", "thermal_conductivity", "prandtl_number", "surface_tension"} {
			if _, ok := at(state, name).(float64); ok != strings.Contains(have, name) {
				t.Errorf("%s: %s is %v", point, name, at(state, name))
			}
		}
	}
}

// What is not known well is said once, with how many states it concerns, and in a stream beside its state.
func TestTransportCautions(t *testing.T) {
	const head = `"refrigerant": "R1123", "units": {"system": "IP"}`
	points := []string{`{"temperature": 40, "pressure": 50}`, `{"temperature": -459, "pressure": 50}`, `{"temperature": 60, "pressure": 50}`}
	resp := answer(t, "POST", "/v1/states", "{"+head+`, "points": [`+strings.Join(points, ",")+"]}", 200)
	found := map[any]string{}
	for _, c := range at(resp, "cautions").([]any) {
		found[at(c, "code")] += fmt.Sprint(at(c, "detail"))
	}
	if !strings.Contains(found["transport_estimated"], "(2 of 2 states)") {
		t.Errorf("cautions %v", found)
	}
	got, _ := lines(t, "{"+head+"}\n"+strings.Join(points, "\n"), 200)
	for i, line := range got {
		var v any
		if err := json.Unmarshal([]byte(line), &v); err != nil {
			t.Fatal(err)
		}
		if told := at(v, "cautions", 0, "code") == "transport_estimated"; told != (i != 1) {
			t.Errorf("line %d: %s", i, line)
		}
	}
	resp = answer(t, "POST", "/v1/states", "{"+head+`, "properties": ["density"], "points": [`+points[0]+"]}", 200)
	if len(at(resp, "cautions").([]any)) > 0 || at(resp, "basis", "transport") != nil {
		t.Errorf("without transport properties: %v %v", at(resp, "cautions"), at(resp, "basis"))
	}
}

// Derivatives come for those who name them, in the dome too.
func TestDerivatives(t *testing.T) {
	resp := answer(t, "POST", "/v1/states", `{"refrigerant": "R290", "properties": ["density_by_enthalpy", "density_by_pressure", "fundamental_derivative"],
		"points": [{"temperature": 20, "pressure": 400}, {"temperature": 20, "quality": 0.4}]}`, 200)
	for i, name := range []string{"density_by_enthalpy", "density_by_pressure"} {
		for k := range 2 {
			if _, ok := at(resp, "states", k, name).(float64); !ok {
				t.Errorf("%d: point %d has %s %v", i, k, name, at(resp, "states", k, name))
			}
		}
	}
	// By a difference: density at two enthalpies beside each other.
	beside := answer(t, "POST", "/v1/states", `{"refrigerant": "R290", "points": [{"temperature": 20, "quality": 0.4}]}`, 200)
	h, _ := at(beside, "states", 0, "enthalpy").(float64)
	p, _ := at(beside, "states", 0, "pressure").(float64)
	pair := answer(t, "POST", "/v1/states", fmt.Sprintf(`{"refrigerant": "R290", "points": [{"pressure": %v, "enthalpy": %v}, {"pressure": %v, "enthalpy": %v}]}`, p, h-0.01, p, h+0.01), 200)
	low, _ := at(pair, "states", 0, "density").(float64)
	high, _ := at(pair, "states", 1, "density").(float64)
	slope := (high - low) / 0.02
	wantNumbers(t, "in the dome", at(resp, "states", 1), map[string][2]float64{"density_by_enthalpy": {slope, 1e-5 * -slope}})
	if whole := at(beside, "states", 0).(jsonObject); whole["density_by_enthalpy"] != nil {
		t.Error("derivatives are shown unasked")
	}
}
