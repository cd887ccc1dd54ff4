package props_test

import (
	"strings"
	"testing"

	"dewmark/props/internal/printed"
)

// TestFixedPoints compares the normal boiling points of testdata/fixed_points.csv; each names its source.
func TestFixedPoints(t *testing.T) {
	done := printed.Tally{}
	for _, row := range printed.Table(t, "fixed_points.csv") {
		switch {
		case strings.HasPrefix(row["verdict"], "flagged"):
			done.Row("flagged, not compared", 1)
			continue
		case strings.HasPrefix(row["quantity"], "bubble point"), strings.HasPrefix(row["quantity"], "dew point"):
			done.Row("pseudo-pure blend, compared in props/helmholtz", 0)
			continue
		case row["quantity"] != "normal boiling point at 101.325 kPa" || row["unit"] != "C":
			t.Fatalf("%s: unknown quantity %q in %q", row["id"], row["quantity"], row["unit"])
		}
		want, _ := row.Value(t, "value")
		if got := refrigerant(t, row["fluid"]).NormalBoilingPoint() - 273.15; !want.Holds(got, 0) {
			t.Errorf("%s (%s): %s boils at %.4f °C, printed %g", row["id"], row["source"], row["fluid"], got, want.V)
		}
		done.Row(row["verdict"], 1)
	}
	done.Require(t, printed.Tally{
		"agrees within rounding":                         {Rows: 9, Cells: 9},
		"flagged, not compared":                          {Rows: 1, Cells: 1},
		"pseudo-pure blend, compared in props/helmholtz": {Rows: 4, Cells: 0},
	})
}
