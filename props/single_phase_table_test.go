package props_test

import (
	"errors"
	"slices"
	"strings"
	"testing"

	"dewmark/props"
	"dewmark/props/internal/printed"
)

// TestSinglePhaseTable compares every row of testdata/single_phase.csv; each names its source.
func TestSinglePhaseTable(t *testing.T) {
	rows := printed.Table(t, "single_phase.csv")
	own := fittedZero(t, rows)
	done := printed.Tally{}
	for _, row := range rows {
		s, h0, s0, err := tabulated(t, row)
		if err != nil {
			t.Errorf("%s: %v", row["id"], err)
			continue
		}
		if strings.HasPrefix(row["datum"], "own") {
			h0, s0 = own[row["fluid"]].h, own[row["fluid"]].s
		}
		if phase := s.Phase.String(); row["phase"] != phase {
			t.Errorf("%s is %s, want %s", row["id"], phase, row["phase"])
		}
		densities := vapourDensities
		if s.Phase == props.Liquid {
			densities = liquidDensities
		}
		compare(t, row, []cell{
			{"p_kPa", s.P / 1e3, 1e3, pressures, true},
			{"rho_kg_m3", s.Rho, 1, densities, true},
			{"v_m3_kg", s.V(), 1, densities, true},
			{"h_kJ_kg", (s.H - h0) / 1e3, 1e3, enthalpies, false},
			{"s_kJ_kgK", (s.S - s0) / 1e3, 1e3, entropies, false},
			{"u_kJ_kg", (s.U - h0) / 1e3, 1e3, enthalpies, false},
			{"cv_kJ_kgK", s.Cv / 1e3, 1e3, heatCapacities, true},
			{"cp_kJ_kgK", s.Cp / 1e3, 1e3, heatCapacities, true},
			{"w_m_s", s.W, 1, soundSpeeds, true},
		}, done)
	}
	done.Require(t, printed.Tally{
		"agrees within rounding; another equation of state":                                                    {Rows: 2, Cells: 5},
		"agrees within rounding; same equation as the coefficient file":                                        {Rows: 58, Cells: 313},
		"agrees within rounding; textbook table, other or unstated equation":                                   {Rows: 4, Cells: 7},
		"agrees within the uncertainty of two different equations; another equation of state":                  {Rows: 16, Cells: 49},
		"agrees within the uncertainty of two different equations; textbook table, other or unstated equation": {Rows: 6, Cells: 17},
		"flagged; another equation of state":                                                                   {Rows: 2, Cells: 6},
		"flagged cell, not compared":                                                                           {Rows: 3, Cells: 3},
	})
}

func tabulated(t *testing.T, row printed.Row) (s props.State, h0, s0 float64, err error) {
	t.Helper()
	r, h0, s0 := zero(t, row)
	T := row.Input(t, "input_T_K")
	if row["input_rho_kg_m3"] != "" {
		s, err = r.TemperatureDensity(T, row.Input(t, "input_rho_kg_m3"))
	} else {
		s, err = atPressure(t, r, row)
	}
	return s, h0, s0, err
}

// atPressure returns the state of a row that gives temperature and pressure. Tables go a little beyond the range of
// their equation, and along the melting line, whose temperature they print rounded.
func atPressure(t *testing.T, r *props.Pure, row printed.Row) (props.State, error) {
	t.Helper()
	T, _ := row.Value(t, "input_T_K")
	p := row.Input(t, "input_p_kPa") * 1e3
	if T.V > r.Limits().TemperatureMax {
		r = r.Extrapolate()
	}
	s, err := r.TemperaturePressure(T.V, p)
	e, ok := errors.AsType[*props.RangeError](err)
	if !ok || e.Limit != props.LimitMelting {
		return s, err
	}
	low, high := meltingPressure(t, r, T.V-T.Half), meltingPressure(t, r, T.V+T.Half)
	if !(low <= p && p <= high) {
		t.Errorf("%s: melts between %g and %g Pa at its rounded temperature, printed %g Pa", row["id"], low, high, p)
	}
	// From the melting line itself it is a few kPa to the printed pressure, a step in which the rest is constant.
	s, err = r.TemperaturePressure(T.V, e.Max)
	step := p - s.P
	s.H += step / s.Rho * (1 - s.T*s.Expansivity())
	s.S -= step / s.Rho * s.Expansivity()
	s.Rho += step / s.DPDRho
	s.P = p
	s.U = s.H - s.P/s.Rho
	return s, err
}

func meltingPressure(t *testing.T, r *props.Pure, T float64) float64 {
	t.Helper()
	_, err := r.Extrapolate().TemperaturePressure(T, 1.5*r.Limits().PressureMax)
	e, ok := errors.AsType[*props.RangeError](err)
	if !ok || e.Limit != props.LimitMelting {
		t.Fatalf("%s at %g K and 1.5 times its highest pressure: %v, want it solid", r.Designation(), T, err)
	}
	return e.Max
}

type offset struct{ h, s float64 }

// fittedZero returns, for every refrigerant with rows on a datum of their own, the one constant for enthalpy and the one for
// entropy that fit these rows best: they test differences only. Flagged cells do not take part.
func fittedZero(t *testing.T, rows []printed.Row) map[string]offset {
	t.Helper()
	sum, n := map[string]offset{}, map[string]offset{}
	for _, row := range rows {
		if !strings.HasPrefix(row["datum"], "own") {
			continue
		}
		s, _, _, err := tabulated(t, row)
		if err != nil {
			t.Fatal(err)
		}
		flagged := strings.Fields(row["flagged_columns"])
		a, c := sum[row["fluid"]], n[row["fluid"]]
		if h, ok := row.Value(t, "h_kJ_kg"); ok && !slices.Contains(flagged, "h_kJ_kg") {
			a.h, c.h = a.h+s.H-h.V*1e3, c.h+1
		}
		if v, ok := row.Value(t, "s_kJ_kgK"); ok && !slices.Contains(flagged, "s_kJ_kgK") {
			a.s, c.s = a.s+s.S-v.V*1e3, c.s+1
		}
		sum[row["fluid"]], n[row["fluid"]] = a, c
	}
	for fluid, a := range sum {
		sum[fluid] = offset{a.h / n[fluid].h, a.s / n[fluid].s}
	}
	return sum
}
