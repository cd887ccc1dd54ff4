package transport

import (
	"encoding/json"
	"math"
	"strings"
	"testing"
)

// Records that are not what they say are refused with an error that names the place.
func TestMalformedRecords(t *testing.T) {
	replace := func(n, old, by string) json.RawMessage {
		in := string(refrigerants()[n].record.Transport)
		if !strings.Contains(in, old) {
			t.Fatalf("%s has no %q", n, old)
		}
		return json.RawMessage(strings.Replace(in, old, by, 1))
	}
	references := []*Model{refrigerants()["R134a"].Model, refrigerants()["R290"].Model}
	for _, tt := range []struct {
		n          string
		records    json.RawMessage
		references []*Model
		want       string
	}{
		{"R32", json.RawMessage(`{}`), references, "no records of viscosity"},
		{"R32", json.RawMessage(`[`), references, "R32"},
		{"R32", replace("R32", `"surface_tension"`, `"surface_tensions"`), references, "unknown field"},
		{"R32", replace("R32", `"kind": "viscosity_sum"`, `"kind": "viscosity_product"`), references, `viscosity record 0: unknown kind "viscosity_product"`},
		{"R32", replace("R32", `"kind": "viscosity_sum"`, `"kind": 7`), references, "viscosity record 0"},
		{"R32", replace("R32", `"kind": "rational"`, `"kind": "power"`), references, "no coefficients"},
		{"R32", replace("R32", `"kind": "poly"`, `"kind": "polly"`), references, `unknown kind "polly"`},
		{"R32", replace("R32", `[1.24655, -0.5, 0.666666666667]`, `[1.24655, -0.5]`), references, "row 0 has 2 numbers, want 3"},
		{"R32", replace("R32", `[1.24655, -0.5, 0.666666666667]`, `[1.24655, -0.5, -1]`), references, "negative exponent"},
		{"R32", replace("R32", `"set": "yang_2022"`, `"set": "yang_1922"`), references, `unknown set "yang_1922"`},
		{"R32", replace("R32", `"xi": 1.1175`, `"xi": -1`), references, "xi must be positive"},
		{"R32", replace("R32", `"xi": 1.1175,`, ``), references, "want either n or xi"},
		{"R32", replace("R32", `"n": [0.015284, 0.220607, -0.095156]`, `"n": [1, 2]`), references, "n has 2 numbers, want 3"},
		{"R32", replace("R32", `"sigma_nm": 0.41`, `"sigma_nm": 0`), references, "sigma_nm must be positive"},
		{"R32", replace("R32", `"rank": 1`, `"rank": 0`), references, "rank and source"},
		{"R32", replace("R32", `"temperature_min": 136.34`, `"temperature_min": 900`), references, "range"},
		{"R32", replace("R32", `"T_ref": 526.8825`, `"T_ref": 300`), references, "T_ref"},
		{"R32", replace("R32", `"T_c": 351.255`, `"T_c": 451.255`), references, "T_c 451.255 K"},
		{"R32", replace("R32", `"use_in_mixtures": true`, `"use_in_mixtures": false`), references, "use_in_mixtures"},
		{"R32", refrigerants()["R32"].record.Transport, nil, "R290 is not among those given"},
		{"R22", replace("R22", `"reference_rank": 1`, `"reference_rank": 9`), references, "R134a has no viscosity_sum of rank 9"},
		{"R23", replace("R23", `"unit": "uPa s"`, `"unit": "cP"`), references, "unit must be uPa s"},
		{"R718", replace("R718", `[5, 6, -0.000593264]`, `[6, 6, -0.000593264]`), references, "H1"},
		{"R601", replace("R601", `"boiling_temperature": 309.21`, `"boiling_temperature": 30`), references, "boiling_temperature"},
	} {
		_, err := New(refrigerants()[tt.n].fluid, tt.records, tt.references...)
		if err == nil || !strings.Contains(err.Error(), tt.want) || !strings.Contains(err.Error(), tt.n) {
			t.Errorf("%s: %v, want %q", tt.n, err, tt.want)
		}
	}
}

// Every refrigerant has the three properties, each record a source and a sensible uncertainty.
func TestEveryRecord(t *testing.T) {
	for _, n := range names() {
		for p := Viscosity; p <= SurfaceTension; p++ {
			records := refrigerants()[n].Records(p)
			if len(records) == 0 {
				t.Errorf("%s has no record of %s", n, p)
			}
			for i, r := range records {
				if r.Property != p || r.Source == "" || r.Verification == "" || r.Uncertainty.Basis == "" ||
					!(r.Uncertainty.Liquid > 0 && r.Uncertainty.Liquid <= 0.3 && r.Uncertainty.Gas > 0 && r.Uncertainty.Gas <= 0.3) {
					t.Errorf("%s %s record %d is incomplete: %+v", n, p, i, *r)
				}
				if i > 0 && r.Rank < records[i-1].Rank {
					t.Errorf("%s %s: records are not in order of rank", n, p)
				}
			}
		}
	}
}

// What transport data warn of themselves reaches the caller.
func TestCautions(t *testing.T) {
	all := refrigerants()
	codes := func(v Value, err error) string {
		if err != nil {
			t.Fatal(err)
		}
		var out []string
		for _, c := range v.Cautions() {
			if c.String() == "" || c.Property == 0 {
				t.Errorf("empty caution %+v", c)
			}
			out = append(out, string(c.Code))
		}
		return strings.Join(out, " ")
	}
	saturated := func(n string, T float64) State {
		r := all[n]
		_, liquid, _ := r.curve.At(T)
		return r.State(T, liquid)
	}
	for _, tt := range []struct {
		name string
		v    func() (Value, error)
		want string
	}{
		{"in range", func() (Value, error) { return all["R134a"].Viscosity(saturated("R134a", 300)) }, ""},
		{"pole of R152a", func() (Value, error) { return all["R152a"].Viscosity(saturated("R152a", 230)) }, "transport_substituted"},
		{"below its range", func() (Value, error) { return all["R1234yf"].ThermalConductivity(saturated("R1234yf", 235)) }, "transport_outside_range"},
		{"above its pressure", func() (Value, error) {
			return all["R1234yf"].Viscosity(all["R1234yf"].State(300, 1300/0.1140416))
		}, "transport_outside_range"},
		{"reference fluid out of range", func() (Value, error) { return all["R22"].Viscosity(saturated("R22", 150)) }, "transport_outside_range"},
		{"no correlation", func() (Value, error) { return all["R1130(E)"].Viscosity(saturated("R1130(E)", 300)) }, "transport_estimated"},
		{"contradictory", func() (Value, error) { return all["R116"].Viscosity(saturated("R116", 250)) }, "transport_doubtful"},
		{"contradictory tension", func() (Value, error) { return all["R41"].SurfaceTension(250, 317.28) }, "transport_doubtful"},
		{"enhancement limited", func() (Value, error) {
			return all["R134a"].ThermalConductivity(all["R134a"].State(374.22, 5017))
		}, "transport_near_critical"},
		{"enhancement of viscosity left out", func() (Value, error) {
			return all["R1150"].Viscosity(all["R1150"].State(284, 7600))
		}, "transport_near_critical"},
		{"record without enhancement", func() (Value, error) {
			return all["R123"].ThermalConductivity(all["R123"].State(458, 3600))
		}, "transport_outside_range transport_near_critical"},
	} {
		if got := codes(tt.v()); got != tt.want {
			t.Errorf("%s: cautions %q, want %q", tt.name, got, tt.want)
		}
	}
	if c := (Value{}).Cautions(); c != nil {
		t.Errorf("no value has cautions %v", c)
	}
}

// The tension vanishes at the critical temperature of the equation of state, and far below it a record is used as it is.
func TestSurfaceTensionMeetsTheCriticalPoint(t *testing.T) {
	for _, n := range names() {
		r := refrigerants()[n]
		k := &r.tension[0]
		if got, want := k.at(0.8*r.curve.TCritical, r.curve.TCritical), k.model.tension(0.8*r.curve.TCritical); got != want {
			t.Errorf("%s: %g at 0.8 Tc, record %g", n, got, want)
		}
		near, err := r.SurfaceTension(r.curve.TCritical*(1-1e-6), r.curve.TCritical)
		if err != nil || !(near.Value >= 0 && near.Value < 1e-5) {
			t.Errorf("%s: %g N/m just below the critical temperature, %v", n, near.Value, err)
		}
	}
}

// Derivatives of the equation of state stand behind a point; cp, cv and the slope of the isotherm are those of a finite
// difference.
func TestPoint(t *testing.T) {
	r := refrigerants()["R290"]
	T, rho := 320.0, 9500.0
	p, ok := newPoint(r.State(T, rho), r.fluid.MolarMass)
	if !ok {
		t.Fatal("no point")
	}
	h := 1e-4
	pressure := func(T, rho float64) float64 {
		q, _ := newPoint(r.State(T, rho), r.fluid.MolarMass)
		return q.p
	}
	slope := (pressure(T, rho*(1+h)) - pressure(T, rho*(1-h))) / (2 * h * rho)
	if math.Abs(p.slope/slope-1) > 1e-6 {
		t.Errorf("slope %g, finite difference %g", p.slope, slope)
	}
	dpdT := (pressure(T*(1+h), rho) - pressure(T*(1-h), rho)) / (2 * h * T)
	cp := p.cv + T*dpdT*dpdT/(rho*rho*slope)
	if math.Abs(p.heatCapacity(1/p.slope)/cp-1) > 1e-6 {
		t.Errorf("cp %g, finite difference %g", p.heatCapacity(1/p.slope), cp)
	}
}
