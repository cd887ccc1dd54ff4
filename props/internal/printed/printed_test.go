package printed

import (
	"math"
	"testing"
)

func TestParse(t *testing.T) {
	for _, tt := range []struct {
		text string
		want Value
	}{
		{"51.21", Value{51.21, 0.005}},
		{"-2.30", Value{-2.3, 0.005}},
		{"1001", Value{1001, 0.5}},
		{"753625.00", Value{753625, 0.005}},
		{"0.353658941e4", Value{3536.58941, 5e-6}},
		{"1.2e-3", Value{0.0012, 5e-5}},
	} {
		got, err := Parse(tt.text)
		if err != nil || got.V != tt.want.V || math.Abs(got.Half/tt.want.Half-1) > 1e-12 {
			t.Errorf("Parse(%q) = %v, %v; want %v", tt.text, got, err, tt.want)
		}
	}
	for _, text := range []string{"0 (ideal gas)", "", "1e", "n/a"} {
		if v, err := Parse(text); err == nil {
			t.Errorf("Parse(%q) = %v, want an error", text, v)
		}
	}
}

func TestHolds(t *testing.T) {
	v := Value{51.21, 0.005}
	for _, tt := range []struct {
		got, limit float64
		want       bool
	}{{51.214, 0, true}, {51.2151, 0, false}, {51.25, 0.05, true}, {51.27, 0.05, false}, {math.NaN(), 1, false}} {
		if v.Holds(tt.got, tt.limit) != tt.want {
			t.Errorf("%v holds %g within %g: want %v", v, tt.got, tt.limit, tt.want)
		}
	}
}
