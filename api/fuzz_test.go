package api

import (
	"encoding/json"
	"strings"
	"testing"
)

// FuzzCalculations sends whatever it likes to the calculating endpoints: an answer is JSON, and never a 500.
func FuzzCalculations(f *testing.F) {
	paths := []string{"/v1/states", "/v1/saturation", "/v1/cycles"}
	for i, bodies := range [][]string{
		{
			`{"refrigerant":"R290","points":[{"temperature":5,"pressure":400},{"pressure":1500,"enthalpy":620},{"temperature":40,"quality":0},{"density":8,"entropy":2}]}`,
			`{"refrigerant":"R744","extrapolate":true,"units":{"system":"IP","pressure":"psi(g)"},"site":{"altitude":1500},"points":[{"enthalpy":120,"entropy":0.3},{"temperature":1e-300,"specific_volume":1e300}]}`,
			`{"refrigerant":"R455A","points":[{"temperature":0,"pressure":700},{"temperature":83.5,"quality":0.98},{"enthalpy":250,"density":100},{"entropy":1.5,"internal_energy":300}],"properties":["vapour_composition","density_by_pressure"]}`,
			`{"refrigerant":{"mole_fractions":{"R744":0.2,"R1234yf":0.8}},"accept_estimates":true,"extrapolate":true,"points":[{"enthalpy":420,"pressure":900},{"quality":0.5,"entropy":1.4}]}`,
		},
		{
			`{"refrigerant":"R134a","range":{"of":"temperature","from":-40,"to":60,"step":25},"properties":["density","viscosity"]}`,
			`{"refrigerant":"R718","pressures":[100,1e-5,22064,1e9]}`,
			`{"refrigerant":"R448A","range":{"of":"pressure","from":0.3,"to":4600,"step":900}}`,
		},
		{
			`{"refrigerant":"R290","evaporation":{"temperature":-7,"superheat":5},"condensation":{"temperature":50,"subcooling":3},"size":{"heating":8},"source_temperature":-2,"sink_temperature":45}`,
			`{"refrigerant":"R134a","evaporation":{"pressure":350,"outlet_quality":0.9},"condensation":{"pressure":1020},"compressor":{"discharge_temperature":62},"suction_line":{"pressure_drop":5,"temperature_rise":2}}`,
			`{"refrigerant":"R407C","evaporation":{"temperature":-7,"reference":"mean"},"condensation":{"temperature":50,"reference":"mean"},"liquid_line":{"temperature_drop_equivalent":1},"evaporator":{"pressure_drop":20}}`,
			`{"refrigerant":"R744","layout":"transcritical","with":["suction_exchanger"],"evaporation":{"temperature":0},"gas_cooler":{"outlet_temperature":35,"optimise":"cop"},"internal_exchanger":{"effectiveness":0.5}}`,
			`{"refrigerant":"R744","layout":"ejector","evaporation":{"temperature":0},"gas_cooler":{"outlet_temperature":35,"pressure":9000}}`,
			`{"refrigerant":"R744","layout":"cascade","evaporation":{"temperature":-40},"condensation":{"temperature":35},"cascade":{"upper":["R717"]}}`,
			`{"refrigerant":"R717","layout":"two_stage_flash","evaporation":{"temperature":-30},"condensation":{"temperature":35},"intermediate":{"optimise":"cop"}}`,
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
		if w.Code >= 500 || !json.Valid(w.Body.Bytes()) || strings.Contains(w.Body.String(), `"about:blank"`) {
			t.Fatalf("%s %s: %d %.1000s", path, body, w.Code, w.Body)
		}
	})
}
