// Package printed reads the check tables in testdata. Their numbers keep the digits of their sources, so that the last
// digit of a number says how far it may be off. Tests alone use it.
package printed

import (
	"encoding/csv"
	"maps"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"
)

// File returns the path of a file in testdata, which stands beside go.mod.
func File(t testing.TB, name ...string) string {
	t.Helper()
	dir, err := os.Getwd()
	for err == nil {
		if _, missing := os.Stat(filepath.Join(dir, "go.mod")); missing == nil {
			return filepath.Join(append([]string{dir, "testdata"}, name...)...)
		}
		if dir == filepath.Dir(dir) {
			break
		}
		dir = filepath.Dir(dir)
	}
	t.Fatal("no go.mod above the working directory", err)
	return ""
}

// Row is a line of a table: cells by the name of their column.
type Row map[string]string

// Table reads a table of testdata.
func Table(t testing.TB, name string) []Row {
	t.Helper()
	f, err := os.Open(File(t, name))
	if err != nil {
		t.Fatal(err)
	}
	defer func() { _ = f.Close() }()
	lines, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	var rows []Row
	for _, line := range lines[1:] {
		r := Row{}
		for i, cell := range line {
			r[lines[0][i]] = cell
		}
		rows = append(rows, r)
	}
	return rows
}

// Value is a printed number.
type Value struct {
	V    float64
	Half float64 // half a unit of its last digit
}

// Value returns the number in a column and reports whether there is one.
func (r Row) Value(t testing.TB, column string) (Value, bool) {
	t.Helper()
	text, ok := r[column]
	if !ok {
		t.Fatalf("no column %q", column)
	}
	if text == "" {
		return Value{}, false
	}
	v, err := Parse(text)
	if err != nil {
		t.Fatalf("%s, %s: %v", r["id"], column, err)
	}
	return v, true
}

// Input returns the number in a column, which must be there and counts as exact.
func (r Row) Input(t testing.TB, column string) float64 {
	t.Helper()
	v, ok := r.Value(t, column)
	if !ok {
		t.Fatalf("%s has no %s", r["id"], column)
	}
	return v.V
}

// Parse reads a number and the place of its last digit.
func Parse(text string) (Value, error) {
	v, err := strconv.ParseFloat(text, 64)
	if err != nil {
		return Value{}, err
	}
	mantissa, exponent, _ := strings.Cut(strings.ToLower(text), "e")
	place := 0
	if exponent != "" {
		if place, err = strconv.Atoi(exponent); err != nil {
			return Value{}, err
		}
	}
	if _, decimals, ok := strings.Cut(mantissa, "."); ok {
		place -= len(decimals)
	}
	return Value{V: v, Half: 0.5 * math.Pow10(place)}, nil
}

// Holds reports whether got is the printed number within the larger of limit and its rounding.
func (v Value) Holds(got, limit float64) bool {
	return math.Abs(got-v.V) <= math.Max(limit, v.Half*(1+1e-9))
}

// Tally counts what a test compared, by the verdict on the row.
type Tally map[string]Count

// Count is a number of rows and of the cells in them.
type Count struct{ Rows, Cells int }

// Row counts a row of a verdict with so many cells.
func (c Tally) Row(verdict string, cells int) {
	n := c[verdict]
	c[verdict] = Count{n.Rows + 1, n.Cells + cells}
}

// Require logs the counts and fails when one of them is smaller than it was when the test was written: rows must not
// drop out unseen.
func (c Tally) Require(t testing.TB, least Tally) {
	t.Helper()
	for _, verdict := range slices.Sorted(maps.Keys(c)) {
		t.Logf("%s: %d rows, %d cells", verdict, c[verdict].Rows, c[verdict].Cells)
	}
	for _, verdict := range slices.Sorted(maps.Keys(least)) {
		if c[verdict].Rows < least[verdict].Rows || c[verdict].Cells < least[verdict].Cells {
			t.Errorf("%q: compared %+v, want at least %+v", verdict, c[verdict], least[verdict])
		}
	}
}
