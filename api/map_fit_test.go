package api

import (
	"encoding/json"
	"fmt"
	"math"
	"strings"
	"testing"
)

// mapped evaluates a map.
func mapped(c []any, S, D float64) float64 {
	x := func(i int) float64 { return c[i-1].(float64) }
	return x(1) + x(2)*S + x(3)*D + x(4)*S*S + x(5)*S*D + x(6)*D*D + x(7)*S*S*S + x(8)*D*S*S + x(9)*S*D*D + x(10)*D*D*D
}

// testStand returns points of the middle map of the demonstration, in the units of the wire.
func testStand(t testing.TB) (sheet jsonObject, points string) {
	t.Helper()
	var m jsonObject
	if err := json.Unmarshal([]byte(invented(t, "harrow-8")), &m); err != nil {
		t.Fatal(err)
	}
	sheet = at(m, "compressor", "maps", 1).(jsonObject)
	var list []string
	for _, S := range []float64{-20, -10, 0, 10} {
		for _, D := range []float64{25, 35, 45, 55} {
			list = append(list, fmt.Sprintf(`{"evaporation_temperature": %v, "condensation_temperature": %v, "mass_flow": %v, "power": %v}`,
				S, D, mapped(sheet["mass_flow"].([]any), S, D)/3600, mapped(sheet["power"].([]any), S, D)/1000))
		}
	}
	return sheet, strings.Join(list, ",")
}

func fitBody(units string) string {
	_, points := testStand(&testing.T{})
	return `{"map_units": ` + units + `, "suction_superheat": 10, "speed": 60, "points": [` + points + `]}`
}

// Points that a map made give the map back, in whatever units it is wanted, and a machine takes it as it is.
func TestFitGivesMapBack(t *testing.T) {
	sheet, points := testStand(t)
	resp := answer(t, "POST", "/v1/compressor-maps/fit", `{"map_units": {"temperature": "Cel", "mass_flow": "kg/h", "power": "W"}, "suction_superheat": 10, "speed": 60,
		"envelope": [[-25, 18], [-25, 45], [-15, 60], [-5, 66], [12, 66], [18, 60], [18, 30], [8, 18]], "points": [`+points+`]}`, 200)
	for _, quantity := range []string{"mass_flow", "power"} {
		for _, S := range []float64{-17, 3, 9} {
			for _, D := range []float64{28, 52} {
				want, got := mapped(sheet[quantity].([]any), S, D), mapped(at(resp, "map", quantity).([]any), S, D)
				if !(math.Abs(got/want-1) <= 1e-9) {
					t.Errorf("%s at %v and %v: %v, want %v", quantity, S, D, got, want)
				}
			}
		}
		if at(resp, quantity, "terms") != 10. || !(at(resp, quantity, "largest_fraction").(float64) < 1e-9) {
			t.Errorf("%v", at(resp, quantity))
		}
	}
	text, err := json.Marshal(at(resp, "map"))
	if err != nil {
		t.Fatal(err)
	}
	condition := `{"source": ` + winterAir + `, "sink": ` + warmWater + `}`
	fitted := pointsOf(t, changed(t, invented(t, "harrow-8"), map[string]any{"compressor.maps": nil, "compressor.map": json.RawMessage(text)}), "", condition, 200)
	original := pointsOf(t, invented(t, "harrow-8"), "", condition, 200)
	path := []any{"operating_points", 0, "system", "cop_heating"}
	if a, b := at(fitted, path...).(float64), at(original, path...).(float64); !(math.Abs(a/b-1) < 1e-8) {
		t.Errorf("COP %v with the fitted map, %v with the original", a, b)
	}

	ip := answer(t, "POST", "/v1/compressor-maps/fit", `{"map_units": {"temperature": "[degF]", "mass_flow": "[lb_av]/h", "power": "kW"}, "suction_superheat": 10, "envelope": [[-20, 30], [0, 50], [0, 30]], "points": [`+points+`]}`, 200)
	got := mapped(at(ip, "map", "mass_flow").([]any), -10*1.8+32, 45*1.8+32)
	if want := mapped(sheet["mass_flow"].([]any), -10, 45) / 0.45359237; !(math.Abs(got/want-1) <= 1e-9) {
		t.Errorf("%v lb/h, want %v", got, want)
	}
	if at(ip, "map", "suction_superheat") != 18. || at(ip, "map", "envelope", 0, 0) != -4. || at(ip, "map", "envelope", 0, 1) != 86. {
		t.Errorf("%v", at(ip, "map"))
	}
}

// Points on one line cannot carry ten terms, and the answer says so.
func TestFitSaysWhatPointsCarry(t *testing.T) {
	resp := answer(t, "POST", "/v1/compressor-maps/fit", `{"map_units": {"temperature": "Cel", "mass_flow": "kg/h", "power": "W"}, "points": [
		{"evaporation_temperature": -10, "condensation_temperature": 40, "mass_flow": 0.01, "power": 1}, {"evaporation_temperature": 0, "condensation_temperature": 40, "mass_flow": 0.014, "power": 1.1},
		{"evaporation_temperature": 10, "condensation_temperature": 40, "mass_flow": 0.02, "power": 1.15}]}`, 200)
	if at(resp, "mass_flow", "terms") != 3. || at(resp, "cautions", 0, "code") != "rank_deficient" || at(resp, "mass_flow", "prediction_deviation") != nil {
		t.Errorf("%v", resp)
	}
}

// A map over pressures takes pressures, of a gauge too.
func TestFitOverPressures(t *testing.T) {
	var list []string
	for _, S := range []float64{-20, -10, 0, 10} {
		for _, p := range []float64{80, 90, 100, 110} { // bar
			list = append(list, fmt.Sprintf(`{"evaporation_temperature": %v, "discharge_pressure": %v, "mass_flow": %v, "power": %v}`, S, p-1.01325, 0.1+0.002*S-0.0002*p, 3+0.05*p+0.01*S))
		}
	}
	resp := answer(t, "POST", "/v1/compressor-maps/fit", `{"units": {"pressure": "bar(g)"}, "site": {"altitude": 0}, "pressure_axis": true, "return_gas_temperature": 5,
		"map_units": {"temperature": "Cel", "mass_flow": "kg/s", "power": "kW", "pressure": "bar"}, "points": [`+strings.Join(list, ",")+`]}`, 200)
	if got := mapped(at(resp, "map", "power").([]any), -5, 95); !(math.Abs(got-(3+0.05*95-0.05)) < 1e-9) || at(resp, "map", "return_gas_temperature") != 5. {
		t.Errorf("%v", resp)
	}
}

func TestFitRefused(t *testing.T) {
	const units = `{"temperature": "Cel", "mass_flow": "kg/h", "power": "W"}`
	point := `{"evaporation_temperature": -10, "condensation_temperature": 40, "mass_flow": 0.01, "power": 1}`
	three := point + "," + point + "," + point
	for _, tt := range []struct{ name, body, pointer, code string }{
		{"no units", `{"points": [` + three + `]}`, "#/map_units/temperature", "missing"},
		{"unknown unit", `{"map_units": {"temperature": "C", "mass_flow": "kg/h", "power": "W"}, "points": [` + three + `]}`, "#/map_units/temperature", "unknown_unit"},
		{"two points", `{"map_units": ` + units + `, "points": [` + point + "," + point + `]}`, "#/points", "too_few"},
		{"no flow", `{"map_units": ` + units + `, "points": [` + three + `, {"evaporation_temperature": -10, "condensation_temperature": 40, "power": 1}]}`, "#/points/3/mass_flow", "missing"},
		{"negative power", `{"map_units": ` + units + `, "points": [` + three + `, {"evaporation_temperature": -10, "condensation_temperature": 40, "mass_flow": 1, "power": -1}]}`, "#/points/3/power", "out_of_bounds"},
		{"pressure without axis", `{"map_units": ` + units + `, "points": [{"evaporation_temperature": -10, "condensation_temperature": 40, "discharge_pressure": 1, "mass_flow": 1, "power": 1},` + three + `]}`, "#/points/0/discharge_pressure", "surplus"},
		{"axis without pressure", `{"pressure_axis": true, "map_units": {"temperature": "Cel", "mass_flow": "kg/h", "power": "W", "pressure": "bar"}, "points": [` + three + `]}`, "#/points/0/discharge_pressure", "missing"},
		{"two suction states", `{"suction_superheat": 5, "return_gas_temperature": 20, "map_units": ` + units + `, "points": [` + three + `]}`, "#/return_gas_temperature", "surplus"},
		{"capacity", `{"map_units": {"temperature": "Cel", "mass_flow": "kg/h", "power": "W", "capacity": "W"}, "points": [` + three + `]}`, "#/map_units/capacity", "surplus"},
	} {
		wantFault(t, tt.name, answer(t, "POST", "/v1/compressor-maps/fit", tt.body, 422), "invalid-request", tt.pointer, tt.code)
	}
}
