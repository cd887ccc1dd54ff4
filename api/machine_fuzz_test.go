package api

import (
	"encoding/json"
	"net/http"
	"strings"
	"testing"
)

// FuzzMachines sends whatever it likes to the endpoints of machines and readings: an answer is JSON, and no 500.
func FuzzMachines(f *testing.F) {
	paths := []string{"/v1/operating-points", "/v1/ratings", "/v1/compressor-maps/fit", "/v1/readings"}
	_, points := testStand(f)
	for i, bodies := range [][]string{
		{
			`{"machine": ` + invented(f, "harrow-8") + `, "conditions": [{"source": ` + winterAir + `, "sink": ` + warmWater + `, "demand": {"heating": 6}}]}`,
			`{"machine": ` + invented(f, "harrow-25-hot-water") + `, "units": {"system": "IP"}, "conditions": [{"source": {"fluid": "moist_air", "inlet_temperature": 45, "volume_flow": 5000}, "sink": {"fluid": "water", "inlet_temperature": 50, "outlet_temperature": 150}}]}`,
			`{"machine": {"refrigerant": "R134a", "compressor": {"swept_volume": 1e-4, "speed": 50, "isentropic_efficiency": [0.7], "volumetric_efficiency": [0.95, 0.04, 1.1], "volumetric_law": "clearance"}, "evaporator": {"approach": 5}, "condenser": {"pinch": 2}},
				"conditions": [{"source": {"fluid": "table", "inlet_temperature": 5, "outlet_temperature": 1, "table": {"rows": [{"temperature": -20, "density": 1100, "heat_capacity": 3}, {"temperature": 40, "density": 1050, "heat_capacity": 3.3}]}}, "sink": ` + warmWater + `}]}`,
		},
		{gridOf(f, "harrow-60-brine", `"source_temperatures": [0, 5], "sink_temperatures": [35, 90], "speeds": [50]`)},
		{`{"map_units": {"temperature": "Cel", "mass_flow": "kg/h", "power": "W"}, "suction_superheat": 10, "points": [` + points + `]}`},
		{
			"{" + gaugeHead + `, "samples": [{` + gauges + "}]}",
			"{" + seriesHead(f, `, "series": {"window_minutes": 1}`) + `, "samples": [` + strings.Join(winter(3), ",") + "]}",
			`{"refrigerant": "R290", "method": "monte_carlo", "draws": {"count": 1000}, "naming": "haystack", "samples": [{"points": {"suction refrig pressure": 320, "suction refrig temp": -13}}]}`,
		},
	} {
		for _, body := range bodies {
			f.Add(uint8(i), body)
		}
	}
	h := newAPI(f, nil).Handler()
	f.Fuzz(func(t *testing.T, which uint8, body string) {
		path := paths[int(which)%len(paths)]
		w := serve(h, newRequest(path, body))
		if w.Code >= 500 && w.Code != http.StatusServiceUnavailable || !json.Valid(w.Body.Bytes()) || strings.Contains(w.Body.String(), `"about:blank"`) {
			t.Fatalf("%s %s: %d %.1000s", path, body, w.Code, w.Body)
		}
	})
}
