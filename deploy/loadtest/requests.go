package main

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"io"
	"net/http"
	"strings"
)

// question is a request to measure with.
type question struct {
	name string
	path string
	body string
}

var (
	oneState = question{"one state", "/v1/states", `{"refrigerant": "R290", "points": [{"temperature": 5, "pressure": 400}]}`}
	oneCycle = question{"one single-stage cycle", "/v1/cycles", `{"refrigerant": "R290", "layout": "single_stage", "purpose": "heating",
 "evaporation": {"temperature": -7, "superheat": 5}, "condensation": {"temperature": 50, "subcooling": 3},
 "compressor": {"isentropic_efficiency": 0.68, "volumetric_efficiency": 0.92}, "size": {"heating": 8},
 "source_temperature": -2, "sink_temperature": 45, "ambient_temperature": -2}`}
	bestCycle = question{"one transcritical cycle at its best high pressure", "/v1/cycles", `{"refrigerant": "R744", "layout": "transcritical",
 "with": ["suction_exchanger"], "units": {"system": "SI", "pressure": "bar"}, "evaporation": {"temperature": 0, "superheat": 5},
 "gas_cooler": {"outlet_temperature": 35, "optimise": "cop"}, "internal_exchanger": {"effectiveness": 0.5},
 "compressor": {"isentropic_efficiency": 0.7}}`}
	blendState = question{"one state of R454B from pressure and enthalpy", "/v1/states", `{"refrigerant": "R454B", "points": [{"pressure": 1000, "enthalpy": 300}]}`}
	blendCycle = question{"one single-stage cycle with R454B", "/v1/cycles", strings.Replace(oneCycle.body, "R290", "R454B", 1)}
	// An invented heat pump.
	rating = question{"a rating table of 35 operating points", "/v1/ratings", `{"machine": {"name": "Harrow 8", "refrigerant": "R290", "layout": "single_stage",
 "purpose": "heating", "superheat": 5, "subcooling": 3, "compressor": {"speed": 60, "swept_volume": 3.6e-05, "heat_loss_fraction": 0.04, "drive_efficiency": 0.96,
  "maps": [{"kind": "ten_coefficient", "speed": 60, "suction_superheat": 10, "units": {"temperature": "Cel", "mass_flow": "kg/h", "power": "W"},
   "mass_flow": [74.1801, 2.21584, -0.0416776, 0.0252953, 5.28339e-05, -0.000473326, 0.000135638, -2.37811e-06, 7.91721e-07, -2.55129e-06],
   "power": [88.289, -39.0964, 43.5747, -1.0959, 1.4989, -0.318829, -0.00911852, 0.0164931, -0.00923768, 0.00195442]}]},
 "evaporator": {"ua": 1150, "arrangement": "crossflow", "superheat_ratio": 0.3, "secondary_share": 0.7},
 "condenser": {"ua": 2200, "arrangement": "counterflow", "desuperheat_ratio": 0.35, "subcooling_ratio": 0.4}},
 "source": {"fluid": "moist_air", "relative_humidity": 0.85, "volume_flow": 3400}, "sink": {"fluid": "water", "temperature_change": 5},
 "source_temperatures": [-10, -7, -2, 2, 7, 10, 12], "sink_temperatures": [30, 35, 40, 45, 50]}`}
	table = question{"a saturation table of 101 rows", "/v1/saturation", `{"refrigerant": "R290", "range": {"of": "temperature", "from": -40, "to": 60, "step": 1}}`}
)

// batch is a request for n states of the vapour.
func batch(n int) question {
	var b strings.Builder
	b.WriteString(`{"refrigerant": "R134a", "points": [`)
	for i := range n {
		if i > 0 {
			b.WriteString(", ")
		}
		fmt.Fprintf(&b, `{"temperature": %g, "pressure": %d}`, 20+float64(i%500)/10, 150+i%300)
	}
	b.WriteString("]}")
	return question{fmt.Sprintf("a batch of %d states", n), "/v1/states", b.String()}
}

// ask sends a question once and returns the answer, which must be a 200.
func ask(ctx context.Context, client *http.Client, address string, q *question) ([]byte, error) {
	r, err := http.NewRequestWithContext(ctx, http.MethodPost, "http://"+address+q.path, strings.NewReader(q.body))
	if err != nil {
		return nil, err
	}
	r.Header.Set("Content-Type", "application/json")
	answer, err := client.Do(r)
	if err != nil {
		return nil, err
	}
	defer answer.Body.Close()
	body, err := io.ReadAll(answer.Body)
	if err != nil {
		return nil, err
	}
	if answer.StatusCode != http.StatusOK {
		return nil, fmt.Errorf("%s: %s %.300s", q.name, answer.Status, bytes.TrimSpace(body))
	}
	if !bytes.HasPrefix(body, []byte(`{"refrigerant":`)) || !bytes.HasSuffix(body, []byte("}")) && !bytes.HasSuffix(body, []byte("}\n")) {
		return nil, errors.New(q.name + ": the answer is not whole")
	}
	return body, nil
}
