package helmholtz_test

import (
	"math"
	"strings"
	"testing"

	"dewmark/props/helmholtz"
	"dewmark/props/internal/printed"
)

// TestCheckPoints computes the check points that papers print for their equations, to every printed digit. Sources
// stand in testdata/eos_check_points.csv.
func TestCheckPoints(t *testing.T) {
	done := printed.Tally{}
	for _, row := range printed.Table(t, "eos_check_points.csv") {
		s := equation(t, row["fluid"])
		T := row.Input(t, "input_T_K")
		var rho float64
		switch row["kind"] {
		case "temperature and density given":
			if text := row["input_rho_mol_dm3"]; text != "0 (ideal gas)" {
				rho = 1e3 * row.Input(t, "input_rho_mol_dm3")
			}
		case "saturated vapour at the dew pressure":
			b := pseudoPure(t, row["fluid"])
			p := b.pressure(b.dew, T)
			rho = b.density(t, T, p, p/(b.eq.R*T))
		default:
			t.Fatalf("%s: unknown kind %q", row["id"], row["kind"])
		}
		f := s.at(T, rho)
		cells := 0
		for column, got := range map[string]float64{
			"p_MPa": f.p / 1e6, "rho_mol_dm3": rho / 1e3, "cv_J_molK": f.cv, "cp_J_molK": f.cp, "w_m_s": f.w,
			"h_kJ_mol": f.h / 1e3, "s_J_molK": f.s, // from the datum of the coefficients
		} {
			want, ok := row.Value(t, column)
			if !ok {
				continue
			}
			cells++
			if !want.Holds(got, 0) {
				t.Errorf("%s (%s): %s = %.10g, printed %g", row["id"], row["source"], column, got, want.V)
			}
		}
		done.Row(row["equation"], cells)
	}
	done.Require(t, printed.Tally{
		"same equation as the coefficient file":  {Rows: 25, Cells: 120},
		"pseudo-pure equation of the same paper": {Rows: 9, Cells: 36},
	})
}

// TestWaterTable6 computes the Helmholtz derivatives of IAPWS R6-95(2018), Table 6, to every printed digit.
func TestWaterTable6(t *testing.T) {
	done := printed.Tally{}
	for _, row := range printed.Table(t, "iapws95_table6.csv") {
		s := equation(t, row["fluid"])
		rho := row.Input(t, "input_rho_kg_m3") / s.MolarMass
		var iso helmholtz.Isotherm
		iso.Set(s.eq, row.Input(t, "input_T_K"))
		delta := rho / s.eq.RhoRed
		part, derivative, _ := strings.Cut(row["quantity"], "_")
		a := iso.Residual(rho)
		if part == "phi0" {
			a = iso.Ideal
			a.A += math.Log(delta)
			a.D, a.DD = 1, -1
		}
		got := map[string]float64{
			"": a.A, "delta": a.D / delta, "deltadelta": a.DD / (delta * delta),
			"tau": a.T / iso.Tau, "tautau": a.TT / (iso.Tau * iso.Tau), "deltatau": a.DT / (delta * iso.Tau),
		}[derivative]
		want, _ := row.Value(t, "value")
		limit := 0.0
		if row["value"] == "0" {
			want.Half = 0 // exactly
		}
		if !want.Holds(got, limit) {
			t.Errorf("%s (%s): %s = %.12g, printed %s", row["id"], row["source"], row["quantity"], got, row["value"])
		}
		done.Row(row["verdict"], 1)
	}
	done.Require(t, printed.Tally{"agrees within rounding": {Rows: 16, Cells: 16}})
}
