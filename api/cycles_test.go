package api

import (
	"encoding/csv"
	"encoding/json"
	"fmt"
	"math"
	"os"
	"reflect"
	"strconv"
	"strings"
	"testing"

	"dewmark/service/cycle"
)

// Cases A to D of testdata/worked_cycles.csv: worked cycles, computed with the equations that the file names, to 1e-5.
func TestCyclesAgainstWorkedCases(t *testing.T) {
	file, err := os.Open("../testdata/worked_cycles.csv")
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	r := csv.NewReader(file)
	r.FieldsPerRecord = -1
	rows, err := r.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	cases, inputs := map[string][][]string{}, map[string]map[string]string{}
	for _, row := range rows[1:] {
		name := row[0]
		if !strings.ContainsAny(name[:1], "ABCD") {
			continue
		}
		if row[1] == "input" {
			if inputs[name] == nil {
				inputs[name] = map[string]string{}
			}
			inputs[name][row[2]] = row[9]
			continue
		}
		cases[name] = append(cases[name], row)
	}
	if len(cases) != 4 {
		t.Fatalf("%d cases", len(cases))
	}
	for name, want := range cases {
		in := inputs[name]
		body := fmt.Sprintf(`{"refrigerant": %q, "units": {"pressure": "bar"}, "evaporation": {"temperature": %s, "superheat": %s}, "condensation": {"temperature": %s, "subcooling": %s},
			"compressor": {"isentropic_efficiency": %s, "heat_loss_fraction": %s}, "ambient_temperature": %s, "source_temperature": %s, "sink_temperature": %s}`,
			in["refrigerant"], in["t_evap"], in["superheat"], in["t_cond"], in["subcooling"], in["eta_is"], in["heat_loss_fraction"], in["T0"], in["T_source"], in["T_sink"])
		resp := answer(t, "POST", "/v1/cycles", body, 200)
		states, components := byName(at(resp, "states"), "label"), byName(at(resp, "components"), "name")
		for _, row := range want {
			if row[1] == "state" {
				label, _, _ := strings.Cut(row[2], " ")
				for column, member := range map[int]string{3: "temperature", 4: "pressure", 5: "enthalpy", 6: "entropy", 7: "density", 8: "quality"} {
					if row[column] != "" {
						wantPrinted(t, name+" "+label+" "+member, at(states[label], member), row[column])
					}
				}
				continue
			}
			performance := at(resp, "performance")
			var got any
			switch row[2] { // per kg/s, as no size is given
			case "w":
				got = at(performance, "compressor_power")
			case "q_evap":
				got = at(performance, "cooling_capacity")
			case "q_cond":
				got = at(performance, "heating_capacity")
			case "COP_cooling":
				got = at(performance, "cop_cooling")
			case "COP_heating":
				got = at(performance, "cop_heating")
			case "volumetric_cooling_capacity":
				got = at(performance, "volumetric_cooling_capacity")
			case "I_compressor":
				got = at(components["compressor"], "exergy_destruction")
			case "I_condenser":
				got = at(components["condenser"], "exergy_destruction")
			case "I_valve":
				got = at(components["expansion_valve"], "exergy_destruction")
			case "I_evaporator":
				got = at(components["evaporator"], "exergy_destruction")
			case "COP_Carnot_heating":
				got = at(performance, "carnot_cop_heating")
			case "second_law_efficiency_heating":
				got = at(performance, "second_law_efficiency")
			default: // a residual
				continue
			}
			wantPrinted(t, name+" "+row[2], got, row[9])
		}
		if residual, _ := at(resp, "closure", "energy_residual_fraction").(float64); !(math.Abs(residual) <= 1e-9) {
			t.Errorf("%s: the first law misses %v", name, residual)
		}
	}
}

// byName indexes the objects of a list.
func byName(list any, name string) map[string]any {
	index := map[string]any{}
	for _, v := range list.([]any) {
		index[fmt.Sprint(at(v, name))] = v
	}
	return index
}

// wantPrinted compares a number with a printed one to 1e-5 of it or half its last digit.
func wantPrinted(t *testing.T, what string, got any, printed string) {
	t.Helper()
	want, err := strconv.ParseFloat(printed, 64)
	if err != nil {
		t.Fatal(err)
	}
	_, decimals, _ := strings.Cut(printed, ".")
	half := 0.5 * math.Pow(10, -float64(len(decimals)))
	x, ok := got.(float64)
	if !ok || !(math.Abs(x-want) <= math.Max(half*1.001, 1e-5*math.Abs(want))) {
		if !ok || math.Abs(want) > 1e-8 || math.Abs(x) > 1e-8 {
			t.Errorf("%s is %v, want %s", what, got, printed)
		}
	}
}

// Every member of a request arrives where it belongs. In base units nothing is converted.
func TestCycleRequestArrives(t *testing.T) {
	const body = `{"refrigerant": "R744", "layout": "transcritical", "with": ["suction_exchanger", "ejector"], "purpose": "cooling",
		"units": {"temperature": "K", "temperature_difference": "K", "pressure": "Pa", "pressure_difference": "Pa", "heat_flow": "W", "power": "W", "mass_flow": "kg/s", "volume_flow": "m3/s"},
		"evaporation": {"temperature": 1, "pressure": 2, "reference": "mean", "superheat": 3, "outlet_quality": 4},
		"condensation": {"temperature": 5, "pressure": 6, "reference": "mean", "subcooling": 7},
		"gas_cooler": {"outlet_temperature": 8, "approach": 9, "pressure": 10, "correlation": "sarkar_2004", "optimise": "cop", "pressure_max": 11},
		"compressor": {"isentropic_efficiency": 12, "discharge_temperature": 13, "volumetric_efficiency": 14, "heat_loss_fraction": 15},
		"second_compressor": {"isentropic_efficiency": 16, "discharge_temperature": 17, "volumetric_efficiency": 18, "heat_loss_fraction": 19},
		"evaporator": {"pressure_drop": 20, "temperature_drop_equivalent": 21}, "condenser": {"pressure_drop": 22, "temperature_drop_equivalent": 23},
		"suction_line": {"pressure_drop": 24, "temperature_drop_equivalent": 25, "temperature_rise": 26},
		"discharge_line": {"pressure_drop": 27, "temperature_drop_equivalent": 28, "temperature_drop": 29},
		"liquid_line": {"pressure_drop": 30, "temperature_drop_equivalent": 31, "temperature_change": 32},
		"internal_exchanger": {"effectiveness": 33, "liquid": {"pressure_drop": 34, "temperature_drop_equivalent": 35}, "vapour": {"pressure_drop": 36, "temperature_drop_equivalent": 37}},
		"intermediate": {"pressure": 38, "temperature": 39, "optimise": "cop"},
		"economiser": {"approach": 40, "injection_superheat": 41, "injection_ratio": 42},
		"intercooler": {"kind": "external", "approach": 43, "temperature": 44},
		"cascade": {"upper": ["R717"], "approach": 45, "superheat": 46, "subcooling": 47},
		"ejector": {"motive_efficiency": 48, "suction_efficiency": 49, "diffuser_efficiency": 50, "suction_pressure_drop": 51},
		"size": {"heating": 52, "cooling": 53, "compressor_power": 54, "mass_flow": 55, "swept_volume_flow": 56},
		"source_temperature": 57, "sink_temperature": 58, "ambient_temperature": 59}`
	a := newAPI(t, nil)
	var req cycleRequest
	if err := a.read([]byte(body), &req); err != nil {
		t.Fatal(err)
	}
	j, err := a.begin(&req.calculation)
	if err != nil {
		t.Fatal(err)
	}
	upper, err := a.upperCircuit(&req)
	if err != nil {
		t.Fatal(err)
	}
	got, err := req.si(j, upper)
	if err != nil {
		t.Fatal(err)
	}
	n := 0.
	next := func() *float64 { n++; return new(n) }
	drop := func() cycle.Drop { return cycle.Drop{Pressure: *next(), TemperatureEquivalent: *next()} }
	want := &cycle.Request{
		Refrigerant: j.r, Layout: cycle.Transcritical, With: []cycle.Layout{cycle.SuctionExchanger, cycle.Ejector}, Purpose: cycle.Cooling,
		Evaporation:       cycle.Evaporation{Temperature: next(), Pressure: next(), Reference: cycle.Mean, Superheat: next(), OutletQuality: next()},
		Condensation:      cycle.Condensation{Temperature: next(), Pressure: next(), Reference: cycle.Mean, Subcooling: next()},
		GasCooler:         &cycle.GasCooler{OutletTemperature: next(), Approach: next(), Pressure: next(), Correlation: cycle.Sarkar, Optimise: cycle.OptimiseCOP, PressureMax: next()},
		Compressor:        cycle.Compressor{IsentropicEfficiency: next(), DischargeTemperature: next(), VolumetricEfficiency: next(), HeatLossFraction: next()},
		SecondCompressor:  &cycle.Compressor{IsentropicEfficiency: next(), DischargeTemperature: next(), VolumetricEfficiency: next(), HeatLossFraction: next()},
		Evaporator:        cycle.Exchanger{Drop: drop()},
		Condenser:         cycle.Exchanger{Drop: drop()},
		SuctionLine:       cycle.SuctionLine{Drop: drop(), TemperatureRise: *next()},
		DischargeLine:     cycle.DischargeLine{Drop: drop(), TemperatureDrop: *next()},
		LiquidLine:        cycle.LiquidLine{Drop: drop(), TemperatureChange: *next()},
		InternalExchanger: &cycle.InternalExchanger{Effectiveness: next(), Liquid: drop(), Vapour: drop()},
		Intermediate:      &cycle.Intermediate{Pressure: next(), Temperature: next(), Optimise: cycle.OptimiseCOP},
		Economiser:        &cycle.Economiser{Approach: next(), InjectionSuperheat: next(), InjectionRatio: next()},
		Intercooler:       &cycle.Intercooler{Kind: cycle.ExternalIntercooler, Approach: next(), Temperature: next()},
		Cascade:           &cycle.CascadeCircuit{Upper: []cycle.Refrigerant{upper[0].r}, Approach: next(), Superheat: next(), Subcooling: next()},
		Ejector:           &cycle.EjectorGeometry{MotiveEfficiency: next(), SuctionEfficiency: next(), DiffuserEfficiency: next(), SuctionPressureDrop: next()},
		Size:              &cycle.Size{Heating: next(), Cooling: next(), CompressorPower: next(), MassFlow: next(), SweptVolumeFlow: next()},
		SourceTemperature: next(), SinkTemperature: next(), AmbientTemperature: next(),
	}
	if !reflect.DeepEqual(got, want) {
		t.Errorf("got  %s\nwant %s", show(got), show(want))
	}
}

// show prints a request with what its pointers lead to.
func show(q *cycle.Request) string {
	c := *q
	c.Refrigerant, c.Cascade.Upper = nil, nil
	text, _ := json.Marshal(c)
	return string(text)
}

// inchPound converts the numbers of a request by the names of their members, with factors of its own.
func inchPound(v any, name string) any {
	switch v := v.(type) {
	case jsonObject:
		for member := range v {
			v[member] = inchPound(v[member], member)
		}
		return v
	case float64:
		switch name {
		case "temperature", "discharge_temperature", "outlet_temperature", "source_temperature", "sink_temperature", "ambient_temperature":
			return v*1.8 + 32
		case "superheat", "subcooling", "temperature_drop_equivalent", "temperature_rise", "temperature_drop", "temperature_change", "approach", "injection_superheat":
			return v * 1.8
		case "pressure", "pressure_drop", "suction_pressure_drop", "pressure_max":
			return v / 6.894757293168361
		case "heating", "cooling":
			return v / 0.00029307107017222222
		case "compressor_power":
			return v / 0.74569987158227022
		case "mass_flow":
			return v / 0.45359237 * 3600
		case "swept_volume_flow":
			return v / 0.028316846592 / 60
		}
	}
	return v
}

// The same machine in both systems of units is the same machine, for every layout and every way of sizing.
func TestCyclesInBothSystems(t *testing.T) {
	for _, body := range []string{
		`"refrigerant": "R290", "evaporation": {"temperature": -7, "superheat": 5}, "condensation": {"temperature": 50, "subcooling": 3}, "size": {"heating": 8},
			"source_temperature": -2, "sink_temperature": 45, "ambient_temperature": -2,
			"evaporator": {"temperature_drop_equivalent": 0.5}, "condenser": {"pressure_drop": 12}, "suction_line": {"temperature_drop_equivalent": 1, "temperature_rise": 2},
			"discharge_line": {"pressure_drop": 15, "temperature_drop": 4}, "liquid_line": {"pressure_drop": 9, "temperature_change": -2}`,
		`"refrigerant": "R134a", "purpose": "cooling", "evaporation": {"pressure": 350, "superheat": 6}, "condensation": {"pressure": 1020, "subcooling": 5},
			"compressor": {"discharge_temperature": 62}, "size": {"swept_volume_flow": 120}, "source_temperature": 12, "sink_temperature": 32`,
		`"refrigerant": "R717", "layout": "two_stage_intercooled", "evaporation": {"temperature": -30}, "condensation": {"temperature": 35},
			"intermediate": {"temperature": -2}, "intercooler": {"kind": "closed", "approach": 4}, "size": {"cooling": 100}`,
		`"refrigerant": "R290", "layout": "economised_subcooler", "evaporation": {"temperature": -15, "superheat": 5}, "condensation": {"temperature": 55},
			"intermediate": {"pressure": 750}, "economiser": {"approach": 4, "injection_superheat": 3}, "size": {"mass_flow": 0.05}`,
		`"refrigerant": "R744", "layout": "ejector", "evaporation": {"temperature": 0}, "gas_cooler": {"outlet_temperature": 35, "pressure": 9000},
			"ejector": {"suction_pressure_drop": 30}, "size": {"compressor_power": 5}`,
		`"refrigerant": "R744", "layout": "transcritical", "with": ["suction_exchanger"], "evaporation": {"temperature": 0, "superheat": 5}, "sink_temperature": 32,
			"gas_cooler": {"approach": 3, "optimise": "cop", "pressure_max": 13000}, "internal_exchanger": {"effectiveness": 0.5, "vapour": {"pressure_drop": 5}}`,
		`"refrigerant": "R744", "layout": "cascade", "evaporation": {"temperature": -40, "superheat": 5}, "condensation": {"temperature": 35},
			"cascade": {"upper": ["R717"], "approach": 5, "superheat": 4, "subcooling": 1}`,
	} {
		var request jsonObject
		if err := json.Unmarshal([]byte("{"+body+"}"), &request); err != nil {
			t.Fatal(err)
		}
		si := answer(t, "POST", "/v1/cycles", "{"+body+"}", 200)
		inchPound(request, "")
		request["units"] = jsonObject{"system": "IP"}
		text, err := json.Marshal(request)
		if err != nil {
			t.Fatal(err)
		}
		ip := answer(t, "POST", "/v1/cycles", string(text), 200)
		optimised := 1.
		if at(si, "optima") != nil {
			optimised = 1e5 // the best pressure is found to a tolerance, where the COP is flat
		}
		for _, c := range []struct {
			path          []any
			scale, offset float64 // SI = (IP - offset) * scale
		}{
			{[]any{"performance", "cop_heating"}, 1, 0},
			{[]any{"performance", "mass_flow"}, 0.45359237 / 3600, 0},
			{[]any{"performance", "heating_capacity"}, 0.00029307107017222222, 0},
			{[]any{"performance", "compressor_power"}, 0.74569987158227022, 0},
			{[]any{"performance", "discharge_temperature"}, 5. / 9, 32},
			{[]any{"performance", "suction_volume_flow"}, 0.028316846592 * 60, 0},
			{[]any{"performance", "volumetric_cooling_capacity"}, 37.2589458, 0}, // kJ/m3 of a Btu/ft3, to 9 digits
			{[]any{"figures", "high_pressure"}, 6.894757293168361, 0},
			{[]any{"ambient_temperature"}, 5. / 9, 32},
			{[]any{"components", 0, "entropy_generation"}, 0.52752792631, 0},
			{[]any{"components", 0, "exergy_destruction"}, 0.74569987158227022, 0},
			{[]any{"states", 3, "enthalpy"}, 2.326, 0},
			{[]any{"states", 3, "entropy"}, 4.1868, 0},
			{[]any{"states", 3, "density"}, 16.018463373960138, 0},
			{[]any{"states", 3, "pressure"}, 6.894757293168361, 0},
			{[]any{"states", 3, "temperature"}, 5. / 9, 32},
		} {
			want, okSI := at(si, c.path...).(float64)
			got, okIP := at(ip, c.path...).(float64)
			if back := (got - c.offset) * c.scale; !okSI || !okIP || !(math.Abs(back-want) <= 5e-9*optimised*math.Max(1, math.Abs(want))) {
				t.Errorf("%s %s: %v is %v in inch-pound units, SI %v", at(si, "refrigerant"), at(si, "layout"), c.path, got, want)
			}
		}
		if a, b := len(at(si, "cautions").([]any)), len(at(ip, "cautions").([]any)); a != b {
			t.Errorf("%s: %d cautions in SI, %d in IP", at(si, "layout"), a, b)
		}
	}
}

// The states of a cascade count from the datum of their own refrigerant, and both are named.
func TestCascadeHasTwoRefrigerants(t *testing.T) {
	resp := answer(t, "POST", "/v1/cycles", `{"refrigerant": "R744", "layout": "cascade", "datum": "IIR", "evaporation": {"temperature": -40}, "condensation": {"temperature": 35}, "cascade": {"upper": ["ammonia"]}}`, 200)
	seen := map[any]bool{}
	for _, s := range at(resp, "states").([]any) {
		name := at(s, "refrigerant")
		seen[name] = true
		// The state as POST /v1/states gives it, from its pressure and enthalpy.
		again := at(answer(t, "POST", "/v1/states", fmt.Sprintf(`{"refrigerant": %q, "points": [{"pressure": %v, "enthalpy": %v}]}`, name, at(s, "pressure"), at(s, "enthalpy")), 200), "states", 0)
		temperature, _ := at(s, "temperature").(float64)
		wantNumbers(t, fmt.Sprintf("%v at %v", name, at(s, "label")), again, map[string][2]float64{"temperature": {temperature, 1e-7}})
	}
	if !seen["R744"] || !seen["R717"] || at(resp, "basis", "refrigerant") != "R744" || at(resp, "upper_basis", "refrigerant") != "R717" {
		t.Errorf("refrigerants %v, basis %v, upper basis %v", seen, at(resp, "basis"), at(resp, "upper_basis"))
	}
	for upper, pointer := range map[string]string{`["R71"]`: "#/cascade/upper/0", `["R717", "R290"]`: "#/cascade/upper", `[]`: "#/cascade/upper", `"R717"`: "#/cascade/upper"} {
		resp := answer(t, "POST", "/v1/cycles", `{"refrigerant": "R744", "layout": "cascade", "evaporation": {"temperature": -40}, "condensation": {"temperature": 35}, "cascade": {"upper": `+upper+`}}`, 422)
		if at(resp, "errors", 0, "pointer") != pointer {
			t.Errorf("%s: %v", upper, resp)
		}
	}
}

// Cautions speak the caller's units, and the usual one is always among them.
func TestCycleCautions(t *testing.T) {
	codes := func(resp jsonObject) map[any]string {
		found := map[any]string{}
		for _, c := range at(resp, "cautions").([]any) {
			found[at(c, "code")] += fmt.Sprint(at(c, "detail")) + "\n"
		}
		return found
	}
	plain := codes(answer(t, "POST", "/v1/cycles", `{"refrigerant": "R290", "evaporation": {"temperature": -7, "superheat": 5}, "condensation": {"temperature": 50, "subcooling": 3},
		"compressor": {"isentropic_efficiency": 0.7, "volumetric_efficiency": 0.9, "heat_loss_fraction": 0}, "size": {"heating": 8}, "source_temperature": 0, "sink_temperature": 45, "ambient_temperature": 7}`, 200))
	if len(plain) != 1 || !strings.Contains(plain["calculation_aid"], "R290 has safety class A3") || !strings.Contains(plain["calculation_aid"], "local codes") {
		t.Errorf("%v", plain)
	}
	odd := codes(answer(t, "POST", "/v1/cycles", `{"refrigerant": "R717", "units": {"system": "IP"}, "evaporation": {"temperature": -40}, "condensation": {"temperature": 104}}`, 200))
	for code, says := range map[string]string{"assumed": "77 [degF]", "hot_discharge": "284 [degF]", "high_pressure_ratio": "one stage", "below_atmosphere": "[psi]", "per_unit_flow": "per 1"} {
		if !strings.Contains(odd[code], says) {
			t.Errorf("%s: %q lacks %q", code, odd[code], says)
		}
	}
}
