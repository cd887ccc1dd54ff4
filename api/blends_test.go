package api

import (
	"fmt"
	"math"
	"strings"
	"testing"
)

// Rows by pressure and by temperature agree with each other, and CSV with JSON.
func TestSaturationOfBlends(t *testing.T) {
	const body = `{"refrigerant": "R407C", "units": {"temperature": "K"}, "pressures": [101.325, 500, 2000], "properties": ["temperature", "pressure", "enthalpy", "liquid_composition", "vapour_composition"]}`
	rows := at(answer(t, "POST", "/v1/saturation", body, 200), "rows").([]any)
	for i, row := range rows {
		bubble, dew := at(row, "bubble_temperature").(float64), at(row, "dew_temperature").(float64)
		if at(row, "bubble", "temperature") != bubble || at(row, "dew", "temperature") != dew || at(row, "temperature") != dew {
			t.Errorf("row %d: %v", i, row)
		}
		if glide := at(row, "glide").(float64); !(glide > 4 && glide < 8) || math.Abs(glide-(dew-bubble)) > 1e-9 {
			t.Errorf("row %d: glide %g", i, glide)
		}
		if h := at(row, "latent_heat").(float64); math.Abs(h-(at(row, "dew", "enthalpy").(float64)-at(row, "bubble", "enthalpy").(float64))) > 1e-9 {
			t.Errorf("row %d: latent heat %g", i, h)
		}
		// R32 and R125 boil before R134a: the first vapour has more of them, the last liquid less.
		if first, last := at(row, "bubble", "vapour_composition", "R32").(float64), at(row, "dew", "liquid_composition", "R32").(float64); !(first > 0.3 && last < 0.18) {
			t.Errorf("row %d: first vapour %g, last liquid %g of R32", i, first, last)
		}
		if w := at(row, "bubble", "liquid_composition", "R32").(float64); math.Abs(w-0.23) > 1e-9 {
			t.Errorf("row %d: %g of R32 in the liquid that begins to boil", i, w)
		}
		// By temperature: the states share it, the row belongs to the dew pressure.
		by := at(answer(t, "POST", "/v1/saturation", fmt.Sprintf(`{"refrigerant": "R407C", "units": {"temperature": "K"}, "temperatures": [%v]}`, dew), 200), "rows", 0)
		if got := at(by, "pressure").(float64); math.Abs(got/at(row, "pressure").(float64)-1) > 1e-9 {
			t.Errorf("row %d: dew pressure %g", i, got)
		}
		if math.Abs(at(by, "bubble_temperature").(float64)-bubble) > 1e-7 || math.Abs(at(by, "glide").(float64)-(dew-bubble)) > 1e-7 {
			t.Errorf("row %d by temperature: %v", i, by)
		}
		if at(by, "bubble", "temperature") != dew || !(at(by, "bubble", "pressure").(float64) > 1.1*at(by, "dew", "pressure").(float64)) {
			t.Errorf("row %d by temperature: %v", i, by)
		}
	}
	// ASHRAE 34 prints normal bubble and dew points of -43.8 and -36.7 °C; the model of the standard is an older one.
	if T := at(rows[0], "bubble_temperature").(float64); math.Abs(T-229.35) > 0.25 {
		t.Errorf("normal bubble point %g K", T)
	}
	if T := at(rows[0], "dew_temperature").(float64); math.Abs(T-236.45) > 0.15 {
		t.Errorf("normal dew point %g K", T)
	}

	records, _ := csvOf(t, body)
	header := strings.Join(records[0], "|")
	if !strings.Contains(header, "bubble_vapour_composition R32|bubble_vapour_composition R125|bubble_vapour_composition R134a|dew_pressure (kPa)") ||
		!strings.Contains(header, "dew_liquid_composition R134a|problem") {
		t.Errorf("header %s", header)
	}
	seen := map[string]bool{}
	for i, name := range records[0] {
		if seen[name] {
			t.Errorf("column %s stands there twice", name)
		}
		seen[name] = true
		for j, row := range rows {
			component, ok := strings.CutPrefix(name, "dew_liquid_composition ")
			if ok && records[j+1][i] != fmt.Sprint(at(row, "dew", "liquid_composition", component)) {
				t.Errorf("%s of row %d is %s", name, j, records[j+1][i])
			}
		}
	}
}

// Where the dew line goes on below the lowest pressure of the bubble line, the row says so with null.
func TestSaturationBelowTheBubbleLine(t *testing.T) {
	T := at(answer(t, "GET", "/v1/refrigerants/R407C", "", 200), "temperature_min")
	row := at(answer(t, "POST", "/v1/saturation", fmt.Sprintf(`{"refrigerant": "R407C", "temperatures": [%v]}`, T), 200), "rows", 0)
	members := row.(jsonObject)
	for _, name := range []string{"bubble_temperature", "glide", "latent_heat"} {
		if value, ok := members[name]; !ok || value != nil {
			t.Errorf("%s is %v, want null", name, value)
		}
	}
}

// Inside the dome temperature and pressure of a blend fix a state; its phases have compositions that make up the blend, and
// superheat counts from dew, subcooling from bubble.
func TestStatesOfBlends(t *testing.T) {
	for _, name := range []string{"R407C", "R454B", "R455A", "R448A"} {
		row := at(answer(t, "POST", "/v1/saturation", fmt.Sprintf(`{"refrigerant": %q, "pressures": [1000]}`, name), 200), "rows", 0)
		bubble, dew := at(row, "bubble_temperature").(float64), at(row, "dew_temperature").(float64)
		resp := answer(t, "POST", "/v1/states", fmt.Sprintf(`{"refrigerant": %q, "points": [{"temperature": %v, "pressure": 1000},
			{"temperature": %v, "pressure": 1000}, {"temperature": %v, "pressure": 1000}]}`, name, (bubble+dew)/2, bubble-5, dew+5), 200)
		wet, liquid, vapour := at(resp, "states", 0), at(resp, "states", 1), at(resp, "states", 2)
		x, ok := at(wet, "quality").(float64)
		if !ok || at(wet, "phase") != "two_phase" || at(wet, "isobaric_heat_capacity") != nil {
			t.Fatalf("%s: %v", name, wet)
		}
		for _, c := range at(resp, "basis", "composition").([]any) {
			id := fmt.Sprint(at(c, "designation"))
			whole := (1-x)*at(wet, "liquid_composition", id).(float64) + x*at(wet, "vapour_composition", id).(float64)
			if want := at(c, "mass_fraction").(float64); math.Abs(whole-want) > 1e-9 {
				t.Errorf("%s: the phases hold %.12g of %s, want %g", name, whole, id, want)
			}
		}
		if got := at(liquid, "subcooling").(float64); at(liquid, "phase") != "liquid" || math.Abs(got-5) > 1e-6 {
			t.Errorf("%s: subcooling %g", name, got)
		}
		if got := at(vapour, "superheat").(float64); at(vapour, "phase") != "vapour" || math.Abs(got-5) > 1e-6 {
			t.Errorf("%s: superheat %g", name, got)
		}
		if _, ok := vapour.(jsonObject)["vapour_composition"]; ok {
			t.Errorf("%s: a vapour shows compositions of phases", name)
		}
		if at(vapour, "viscosity") == nil || at(resp, "basis", "transport", 0, "method") != "residual_entropy_scaling" {
			t.Errorf("%s: %v", name, resp)
		}
	}
}

// Between the critical temperature and the highest one of the dew line there are two dew points; both are listed, none is
// picked.
func TestRetrogradeStates(t *testing.T) {
	Tc := at(answer(t, "GET", "/v1/refrigerants/R407C", "", 200), "critical_temperature").(float64)
	problem := at(answer(t, "POST", "/v1/states", fmt.Sprintf(`{"refrigerant": "R407C", "points": [{"temperature": %v, "quality": 1}]}`, Tc+0.01), 200), "states", 0, "problem")
	solutions, _ := at(problem, "solutions").([]any)
	if at(problem, "type") != "/problems/ambiguous-state" || len(solutions) != 2 || at(solutions[0], "pressure") == at(solutions[1], "pressure") {
		t.Errorf("%v", problem)
	}
	for _, s := range solutions {
		if at(s, "liquid_composition", "R32") == nil {
			t.Errorf("%v", s)
		}
	}
}

// What a blend rests on goes with every answer, and what is assumed is a caution.
func TestBlendBasis(t *testing.T) {
	resp := answer(t, "POST", "/v1/states", `{"refrigerant": "R455A", "points": [{"temperature": 0, "quality": 1}]}`, 200)
	statuses := map[string]string{}
	for _, p := range at(resp, "basis", "pairs").([]any) {
		statuses[fmt.Sprint(at(p, "components"))] = fmt.Sprint(at(p, "status"))
		if at(p, "source") == "" || at(p, "verification") == "" {
			t.Errorf("%v", p)
		}
	}
	if len(statuses) != 3 || statuses["[R32 R1234yf]"] != "fitted" {
		t.Errorf("%v", statuses)
	}
	assumed := 0
	for _, c := range at(resp, "cautions").([]any) {
		if at(c, "code") == "pair_assumed" {
			assumed++
		}
	}
	if assumed != 1 {
		t.Errorf("cautions %v", at(resp, "cautions"))
	}
}

// Evaporating and condensing temperatures of a blend are dew temperatures, or mean ones on request.
func TestCyclesOnBlends(t *testing.T) {
	for _, refrigerant := range []string{`"R407C"`, `"R454B"`, `{"mass_fractions": {"R32": 0.23, "R125": 0.25, "R134a": 0.52}}`} {
		for _, reference := range []string{"dew", "mean"} {
			resp := answer(t, "POST", "/v1/cycles", fmt.Sprintf(`{"refrigerant": %s, "evaporation": {"temperature": -5, "superheat": 5, "reference": %q},
				"condensation": {"temperature": 45, "subcooling": 3, "reference": %[2]q}, "compressor": {"isentropic_efficiency": 0.7},
				"source_temperature": 3, "sink_temperature": 35}`, refrigerant, reference), 200)
			state := func(label string) any {
				for _, s := range at(resp, "states").([]any) {
					if at(s, "label") == label {
						return s
					}
				}
				t.Fatalf("no state %s in %v", label, resp)
				return nil
			}
			number := func(label, member string) float64 {
				x, ok := at(state(label), member).(float64)
				if !ok {
					t.Fatalf("%s of %s: %v", member, label, state(label))
				}
				return x
			}
			dew, inlet := number("7", "dew_temperature"), number("6", "temperature")
			condensing, bubble := number("4", "dew_temperature"), number("4", "bubble_temperature")
			evaporation, condensation := dew, condensing
			if reference == "mean" {
				evaporation, condensation = (inlet+dew)/2, (bubble+condensing)/2
			}
			if math.Abs(evaporation+5) > 1e-6 || math.Abs(condensation-45) > 1e-6 {
				t.Errorf("%s by %s: evaporation at %.9g, condensation at %.9g", refrigerant, reference, evaporation, condensation)
			}
			if math.Abs(number("7", "superheat")-5) > 1e-6 || math.Abs(number("4", "subcooling")-3) > 1e-6 {
				t.Errorf("%s by %s: superheat %g, subcooling %g", refrigerant, reference, number("7", "superheat"), number("4", "subcooling"))
			}
			if len(at(state("6"), "vapour_composition").(jsonObject)) != len(at(resp, "basis", "composition").([]any)) {
				t.Errorf("%v", state("6"))
			}
			if r := at(resp, "closure", "energy_residual_fraction").(float64); math.Abs(r) > 1e-9 {
				t.Errorf("%s by %s: energy residual %g", refrigerant, reference, r)
			}
		}
	}
}
