package props_test

import (
	"math"
	"testing"

	"dewmark/props"
	"dewmark/props/internal/printed"
)

// TestSaturationTable compares every row of testdata/saturation.csv; each names its source.
func TestSaturationTable(t *testing.T) {
	done := printed.Tally{}
	for _, row := range printed.Table(t, "saturation.csv") {
		if row["fluid"] == "R410A" {
			done.Row("pseudo-pure blend, compared in props/helmholtz", 0)
			continue
		}
		r, h0, s0 := zero(t, row)
		l, v, err := saturated(t, r, row)
		if err != nil {
			t.Errorf("%s: %v", row["id"], err)
			continue
		}
		// By pressure, a limit in pressure becomes one in temperature along the curve.
		slope := v.DPDT
		if two, err := r.TemperatureQuality(l.T, 0.5); err == nil {
			slope = two.DPDT
		}
		boiling := quantity{pressures.other * v.P / slope, pressures.textbook * v.P / slope}
		compare(t, row, []cell{
			{"p_kPa", v.P / 1e3, 1e3, pressures, true},
			{"t_C", l.T - 273.15, 1, boiling, false},
			{"rho_liq_kg_m3", l.Rho, 1, liquidDensities, true},
			{"rho_vap_kg_m3", v.Rho, 1, vapourDensities, true},
			{"v_liq_m3_kg", l.V(), 1, liquidDensities, true},
			{"v_vap_m3_kg", v.V(), 1, vapourDensities, true},
			{"h_liq_kJ_kg", (l.H - h0) / 1e3, 1e3, enthalpies, false},
			{"h_vap_kJ_kg", (v.H - h0) / 1e3, 1e3, enthalpies, false},
			{"h_fg_kJ_kg", (v.H - l.H) / 1e3, 1e3, enthalpies, false},
			{"s_liq_kJ_kgK", (l.S - s0) / 1e3, 1e3, entropies, false},
			{"s_vap_kJ_kgK", (v.S - s0) / 1e3, 1e3, entropies, false},
			{"s_fg_kJ_kgK", (v.S - l.S) / 1e3, 1e3, entropies, false},
			{"cv_liq_kJ_kgK", l.Cv / 1e3, 1e3, heatCapacities, true},
			{"cv_vap_kJ_kgK", v.Cv / 1e3, 1e3, heatCapacities, true},
			{"cp_liq_kJ_kgK", l.Cp / 1e3, 1e3, heatCapacities, true},
			{"cp_vap_kJ_kgK", v.Cp / 1e3, 1e3, heatCapacities, true},
			{"w_liq_m_s", l.W, 1, soundSpeeds, true},
			{"w_vap_m_s", v.W, 1, soundSpeeds, true},
		}, done)
	}
	done.Require(t, printed.Tally{
		"agrees within rounding; another equation of state":                                                    {Rows: 1, Cells: 6},
		"agrees within rounding; same equation as the coefficient file":                                        {Rows: 33, Cells: 395},
		"agrees within rounding; same equation as the coefficient file (remembered table)":                     {Rows: 24, Cells: 89},
		"agrees within the uncertainty of two different equations; another equation of state":                  {Rows: 9, Cells: 62},
		"agrees within the uncertainty of two different equations; textbook table, other or unstated equation": {Rows: 32, Cells: 171},
		"flagged; another equation of state":                                                                   {Rows: 2, Cells: 9},
		"flagged cell, not compared":                                                                           {Rows: 9, Cells: 9},
		"pseudo-pure blend, compared in props/helmholtz":                                                       {Rows: 3, Cells: 0},
	})
}

func saturated(t *testing.T, r *props.Pure, row printed.Row) (l, v props.State, err error) {
	t.Helper()
	var errV error
	switch row["given"] {
	case "T":
		T := row.Input(t, "input_T_K")
		l, err = r.BubblePoint(T)
		v, errV = r.DewPoint(T)
	case "p":
		p := row.Input(t, "input_p_kPa") * 1e3
		l, err = r.BubblePointAtPressure(p)
		v, errV = r.DewPointAtPressure(p)
	default:
		t.Fatalf("%s gives %q", row["id"], row["given"])
	}
	if err == nil {
		err = errV
	}
	if err == nil && (math.IsNaN(l.H) || math.IsNaN(v.H)) {
		t.Errorf("%s: not a number without an error", row["id"])
	}
	return l, v, err
}
