package helmholtz_test

import (
	"math"
	"strings"
	"testing"

	"dewmark/props/internal/printed"
)

// pressure evaluates a bubble or dew pressure of Lemmon (2003), eq 5: Pa at T in K.
func (b *blend) pressure(terms [][2]float64, T float64) float64 {
	x := 1 - T/b.Critical.Temperature
	sum := 0.0
	for _, k := range terms {
		sum += k[0] * math.Pow(x, k[1])
	}
	return b.Critical.Pressure * math.Exp(sum*b.Critical.Temperature/T)
}

// liquid returns bubble-point liquid, vapour dew-point vapour, both at T in K.
func (b *blend) liquid(t *testing.T, T float64) (fluid, float64) {
	rho := b.density(t, T, b.pressure(b.bubble, T), 0.9*b.Validity.DensityMax)
	return b.at(T, rho), rho * b.MolarMass
}

func (b *blend) vapour(t *testing.T, T float64) (fluid, float64) {
	p := b.pressure(b.dew, T)
	rho := b.density(t, T, p, p/(b.eq.R*T))
	return b.at(T, rho), rho * b.MolarMass
}

// TestBlendBoilingPoints finds the bubble and dew temperatures at 101.325 kPa to their printed digits. The rows of pure
// refrigerants are checked in package props.
func TestBlendBoilingPoints(t *testing.T) {
	done := printed.Tally{}
	for _, row := range printed.Table(t, "fixed_points.csv") {
		kind, _, _ := strings.Cut(row["quantity"], " point at 101.325 kPa")
		if kind != "bubble" && kind != "dew" {
			continue
		}
		b := pseudoPure(t, row["fluid"])
		terms := b.bubble
		if kind == "dew" {
			terms = b.dew
		}
		want, _ := row.Value(t, "value")
		// Pressure rises with temperature, so that the printed interval must hold the boiling point.
		low, high := b.pressure(terms, want.V-want.Half+273.15), b.pressure(terms, want.V+want.Half+273.15)
		if !(low <= 101325 && 101325 <= high) {
			t.Errorf("%s: %s point of %s at %g C has %.0f to %.0f Pa", row["id"], kind, row["fluid"], want.V, low, high)
		}
		done.Row(row["verdict"], 1)
	}
	done.Require(t, printed.Tally{"agrees within rounding": {Rows: 4, Cells: 4}})
}

// TestBlendSaturation compares the rows of R410A in the saturation table, a textbook's with one pressure for both phases, with
// the pseudo-pure equation, within the limits for textbook tables (testdata/README.md).
func TestBlendSaturation(t *testing.T) {
	done := printed.Tally{}
	for _, row := range printed.Table(t, "saturation.csv") {
		if row["fluid"] != "R410A" {
			continue
		}
		if !strings.HasPrefix(row["datum"], "ASHRAE") || !strings.HasPrefix(row["equation"], "textbook") {
			t.Fatalf("%s: datum %q, equation %q", row["id"], row["datum"], row["equation"])
		}
		b := pseudoPure(t, row["fluid"])
		zero, _ := b.liquid(t, 233.15)
		T := row.Input(t, "input_T_K")
		l, rhoL := b.liquid(t, T)
		v, rhoV := b.vapour(t, T)
		cells := 0
		for _, c := range []struct {
			column     string
			got, limit float64 // limit relative where the value has a scale of its own
			relative   bool
		}{
			{"p_kPa", l.p / 1e3, 0.008, true},
			{"v_liq_m3_kg", 1 / rhoL, 0.003, true},
			{"v_vap_m3_kg", 1 / rhoV, 0.008, true},
			{"h_liq_kJ_kg", (l.h - zero.h) / b.MolarMass / 1e3, 3.4, false},
			{"h_vap_kJ_kg", (v.h - zero.h) / b.MolarMass / 1e3, 3.4, false},
			{"s_liq_kJ_kgK", (l.s - zero.s) / b.MolarMass / 1e3, 0.0135, false},
			{"s_vap_kJ_kgK", (v.s - zero.s) / b.MolarMass / 1e3, 0.0135, false},
		} {
			want, ok := row.Value(t, c.column)
			if !ok {
				continue
			}
			cells++
			limit := c.limit
			if c.relative {
				limit *= c.got
			}
			if !want.Holds(c.got, limit) {
				t.Errorf("%s: %s = %.6g, printed %g", row["id"], c.column, c.got, want.V)
			}
		}
		done.Row(row["verdict"], cells)
	}
	done.Require(t, printed.Tally{"agrees within the uncertainty of two different equations": {Rows: 3, Cells: 13}})
}
