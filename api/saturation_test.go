package api

import (
	"encoding/csv"
	"encoding/json"
	"fmt"
	"math"
	"net/http/httptest"
	"strconv"
	"strings"
	"testing"
)

// Rows of published tables; tolerances are half the last digit.
func TestSaturationAgainstTables(t *testing.T) {
	// ASHRAE Handbook of Fundamentals, chapter 30, R-134a at 50 °C, from memory.
	row := at(answer(t, "POST", "/v1/saturation", `{"refrigerant": "R134a", "temperatures": [50]}`, 200), "rows", 0)
	wantNumbers(t, "R134a at 50 °C", row, map[string][2]float64{"temperature": {50, 0}, "pressure": {1317.9, 0.05}, "glide": {0, 0}, "latent_heat": {423.44 - 271.62, 0.01}})
	wantNumbers(t, "bubble", at(row, "bubble"), map[string][2]float64{"density": {1102.3, 0.05}, "enthalpy": {271.62, 0.005}, "entropy": {1.2375, 0.00005}})
	wantNumbers(t, "dew", at(row, "dew"), map[string][2]float64{"specific_volume": {0.01509, 0.000005}, "enthalpy": {423.44, 0.005}, "entropy": {1.7072, 0.00005}})
}

// The three ways of asking give the same rows.
func TestSaturationThreeWays(t *testing.T) {
	byList := answer(t, "POST", "/v1/saturation", `{"refrigerant": "R290", "temperatures": [-40, -39.9, -39.8, -39.7]}`, 200)
	byRange := answer(t, "POST", "/v1/saturation", `{"refrigerant": "R290", "range": {"of": "temperature", "from": -40, "to": -39.7, "step": 0.1}}`, 200)
	if fmt.Sprint(byList) != fmt.Sprint(byRange) {
		t.Errorf("by list %v\nby range %v", byList, byRange)
	}
	for i, row := range at(byList, "rows").([]any) {
		p := at(row, "pressure")
		back := at(answer(t, "POST", "/v1/saturation", fmt.Sprintf(`{"refrigerant": "R290", "pressures": [%v]}`, p), 200), "rows", 0)
		if at(back, "pressure") != p || at(back, "bubble", "pressure") != p {
			t.Errorf("row %d: the pressure %v comes back as %v", i, p, at(back, "pressure"))
		}
		temperature, _ := at(row, "temperature").(float64)
		wantNumbers(t, "by pressure", back, map[string][2]float64{"temperature": {temperature, 1e-9}, "dew_temperature": {temperature, 1e-9}})
	}
}

func TestSaturationRange(t *testing.T) {
	for _, tt := range []struct {
		bounds string
		first  float64
		last   float64
		rows   int
	}{
		{`"of": "temperature", "from": -40, "to": 60, "step": 5`, -40, 60, 21},
		{`"of": "temperature", "from": -40, "to": 61, "step": 5`, -40, 60, 21},
		{`"of": "temperature", "from": 10, "to": 10, "step": 5`, 10, 10, 1},
		{`"of": "temperature", "from": 10, "to": 12, "step": 5`, 10, 10, 1},
		{`"of": "pressure", "from": 100, "to": 101, "step": 0.1`, 100, 101, 11},
		{`"of": "temperature", "from": -10, "to": 10, "step": 0.002`, -10, 10, 10001 - 1},
	} {
		if tt.rows == 10000 {
			tt.bounds = `"of": "temperature", "from": -10, "to": 9.998, "step": 0.002`
			tt.last = 9.998
		}
		w := serve(testHandler(t), newRequest("/v1/saturation", `{"refrigerant": "R290", "properties": ["density"], "range": {`+tt.bounds+`}}`))
		var v jsonObject
		if err := json.Unmarshal(w.Body.Bytes(), &v); err != nil {
			t.Fatal(err)
		}
		rows, _ := at(v, "rows").([]any)
		name := "temperature"
		if strings.Contains(tt.bounds, "pressure") {
			name = "pressure"
		}
		if len(rows) != tt.rows || at(rows[0], name) != tt.first || at(rows[len(rows)-1], name) != tt.last {
			t.Errorf("%s: %d rows, %v to %v", tt.bounds, len(rows), at(rows[0], name), at(rows[len(rows)-1], name))
		}
	}
}

// A row that cannot be does not spoil the others.
func TestSaturationKeepsGoing(t *testing.T) {
	resp := answer(t, "POST", "/v1/saturation", `{"refrigerant": "R744", "units": {"pressure": "bar"}, "temperatures": [-300, -20, 31, 40]}`, 200)
	if at(resp, "failed") != 3. || at(resp, "rows", 1, "dew", "density") == nil {
		t.Errorf("%v", resp)
	}
	for i, want := range map[int]string{
		0: "temperature -300 Cel is below what R744 allows, -56.558 Cel to 30.978",
		2: "temperature 31 Cel is above what R744 allows", 3: "temperature 40 Cel is above what R744 allows",
	} {
		problem := at(resp, "rows", i, "problem")
		if at(resp, "rows", i, "temperature") == nil || at(problem, "errors", 0, "pointer") != fmt.Sprintf("#/temperatures/%d", i) || !strings.HasPrefix(fmt.Sprint(at(problem, "detail")), want) {
			t.Errorf("row %d: %v", i, at(resp, "rows", i))
		}
	}
}

// csvOf asks for a table.
func csvOf(t *testing.T, body string) ([][]string, *httptest.ResponseRecorder) {
	t.Helper()
	r := newRequest("/v1/saturation", body)
	r.Header.Set("Accept", "text/csv, application/json;q=0.5")
	w := ask(t, testHandler(t), r.WithContext(t.Context()))
	if w.Code != 200 || !strings.HasPrefix(w.Header().Get("Content-Type"), "text/csv") {
		t.Fatalf("%d %s: %s", w.Code, w.Header().Get("Content-Type"), w.Body)
	}
	if strings.Count(w.Body.String(), "\n") != strings.Count(w.Body.String(), "\r\n") {
		t.Error("RFC 4180 wants CRLF")
	}
	records, err := csv.NewReader(w.Body).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	return records, w
}

// The table says what JSON says, with the units in its header.
func TestSaturationTable(t *testing.T) {
	const body = `{"refrigerant": "R32", "units": {"system": "IP", "pressure": "psi(g)"}, "site": {"altitude": 1500}, "range": {"of": "temperature", "from": 0, "to": 200, "step": 50}, "properties": ["density", "quality", "enthalpy"]}`
	records, w := csvOf(t, body)
	want := []string{
		"refrigerant", "datum", "temperature ([degF])", "pressure (psi(g))", "bubble_temperature ([degF])", "dew_temperature ([degF])", "glide ([degR])",
		"latent_heat ([Btu_IT]/[lb_av])", "bubble_density ([lb_av]/[ft_i]3)", "bubble_enthalpy ([Btu_IT]/[lb_av])", "bubble_quality",
		"dew_density ([lb_av]/[ft_i]3)", "dew_enthalpy ([Btu_IT]/[lb_av])", "dew_quality", "problem",
	}
	if fmt.Sprint(records[0]) != fmt.Sprint(want) {
		t.Errorf("header %q", records[0])
	}
	resp := answer(t, "POST", "/v1/saturation", body, 200)
	if len(records) != 6 {
		t.Fatalf("%d records", len(records))
	}
	for i, record := range records[1:] {
		row := at(resp, "rows", i)
		if problem := at(row, "problem", "detail"); problem != nil {
			if record[len(record)-1] != problem || record[2] == "" || record[8] != "" {
				t.Errorf("row %d: %q", i, record)
			}
			continue
		}
		for column, v := range map[int]any{
			2: at(row, "temperature"), 3: at(row, "pressure"), 7: at(row, "latent_heat"), 8: at(row, "bubble", "density"), 10: at(row, "bubble", "quality"),
			12: at(row, "dew", "enthalpy"),
		} {
			x, err := strconv.ParseFloat(record[column], 64)
			if err != nil || x != v {
				t.Errorf("row %d, %s: %s, JSON has %v", i, records[0][column], record[column], v)
			}
		}
		if record[0] != "R32" || record[1] != "IIR" {
			t.Errorf("row %d: %q", i, record)
		}
	}
	var head jsonObject
	if err := json.Unmarshal([]byte(w.Header().Get(headHeader)), &head); err != nil || at(head, "units", "pressure") != "psi(g)" || at(head, "site", "altitude") != 1500. {
		t.Errorf("head %v, %v", head, err)
	}
	pressure, err := strconv.ParseFloat(records[1][3], 64)
	absolute, _ := at(answer(t, "POST", "/v1/saturation", `{"refrigerant": "R32", "units": {"system": "IP"}, "temperatures": [0]}`, 200), "rows", 0, "pressure").(float64)
	// 1500 ft of the standard atmosphere are 13.917 psi below the absolute pressure.
	if ambient := standardAtmosphere(1500*0.3048) / psi; err != nil || !(math.Abs(absolute-pressure-ambient) < 1e-9) {
		t.Errorf("gauge %v, absolute %v, ambient %v", pressure, absolute, ambient)
	}
}
