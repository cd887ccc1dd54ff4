package roots_test

import (
	"errors"
	"math"
	"slices"
	"testing"

	"dewmark/props/internal/roots"
)

func TestBracketed(t *testing.T) {
	for _, tt := range []struct {
		name string
		f    func(float64) float64
		a, b float64
		want float64
	}{
		{"straight", func(x float64) float64 { return 2*x - 3 }, 0, 10, 1.5},
		{"root at an end", func(x float64) float64 { return x }, 0, 1, 0},
		{"flat on one side", func(x float64) float64 { return math.Exp(20*x) - 2 }, -5, 5, math.Ln2 / 20},
		{"triple root", func(x float64) float64 { return (x - 1) * (x - 1) * (x - 1) }, -3, 4, 1},
		{"kink", func(x float64) float64 { return math.Max(x-2, 1e-3*(x-2)) }, 0, 100, 2},
	} {
		got, err := roots.Bracketed(tt.a, tt.f(tt.a), tt.b, tt.f(tt.b), func(x float64) (float64, error) { return tt.f(x), nil })
		tolerance := 1e-14
		if tt.name == "triple root" {
			tolerance = 1e-5 // the function itself is rounding nearer by
		}
		if err != nil || !(math.Abs(got-tt.want) <= tolerance) {
			t.Errorf("%s: %.17g, %v; want %.17g", tt.name, got, err, tt.want)
		}
	}
	broken := errors.New("broken")
	if _, err := roots.Bracketed(0, -1, 1, 2, func(float64) (float64, error) { return 0, broken }); !errors.Is(err, broken) {
		t.Errorf("an error of the function became %v", err)
	}
}

func TestAll(t *testing.T) {
	grid := make([]float64, 21)
	for i := range grid {
		grid[i] = float64(i) / 2
	}
	for _, slopes := range []bool{true, false} {
		find := func(f, d func(float64) float64) []float64 {
			var out []float64
			roots.All(grid, func(x float64) (float64, float64) {
				if slopes {
					return f(x), d(x)
				}
				return f(x), math.NaN()
			}, func(x float64) { out = append(out, x) })
			slices.Sort(out)
			return out
		}
		near := func(got []float64, want ...float64) bool {
			return slices.EqualFunc(got, want, func(a, b float64) bool { return math.Abs(a-b) < 1e-9 })
		}
		if got := find(math.Sin, math.Cos); !near(got, 0, math.Pi, 2*math.Pi, 3*math.Pi) {
			t.Errorf("slopes %v, sine: %v", slopes, got)
		}
		// Both roots lie between two grid values.
		f := func(x float64) float64 { return (x-4.1)*(x-4.3) + 0 }
		if got := find(f, func(x float64) float64 { return 2*x - 8.4 }); !near(got, 4.1, 4.3) {
			t.Errorf("slopes %v, two close roots: %v", slopes, got)
		}
		if got := find(func(x float64) float64 { return 1 + x*x }, func(x float64) float64 { return 2 * x }); len(got) != 0 {
			t.Errorf("slopes %v, none: %v", slopes, got)
		}
		// Nothing is found where the function does not exist.
		hole := func(x float64) float64 {
			if x > 3.7 && x < 7.2 {
				return math.NaN()
			}
			return math.Sin(x)
		}
		if got := find(hole, math.Cos); !near(got, 0, math.Pi, 3*math.Pi) {
			t.Errorf("slopes %v, hole: %v", slopes, got)
		}
	}
}
