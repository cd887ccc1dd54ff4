package cycle

import (
	"errors"
	"math"
	"testing"
)

func TestRoot(t *testing.T) {
	for _, k := range []struct {
		name string
		a, b float64
		f    func(x float64) float64
		want float64
	}{
		{"line", -3, 8, func(x float64) float64 { return 2*x - 5 }, 2.5},
		{"cosine", 0, 3, math.Cos, math.Pi / 2},
		{"flat cubic", -1, 4, func(x float64) float64 { return (x - 1) * (x - 1) * (x - 1) }, 1},
		{"jump", 1, 7, func(x float64) float64 { return math.Copysign(1, x-math.E) }, math.E},
		{"falling exponential", 0, 50, func(x float64) float64 { return math.Exp(-x) - 1e-9 }, 9 * math.Ln10},
	} {
		calls := 0
		got, err := root(k.a, k.f(k.a), k.b, k.f(k.b), func(x float64) float64 { calls++; return k.f(x) })
		tolerance := 1e-12
		if k.name == "flat cubic" {
			tolerance = 1e-5 // f is below rounding around its root
		}
		if err != nil || !(math.Abs(got-k.want) <= tolerance*k.want) || calls > 2*rootSteps/3 {
			t.Errorf("%s: %.15g after %d calls, %v; want %.15g", k.name, got, calls, err, k.want)
		}
	}
	_, err := root(1, 1, 2, 4, func(x float64) float64 { return x * x })
	if e, ok := errors.AsType[*BracketError](err); !ok || e.FB != 4 {
		t.Errorf("without a change of sign: %v", err)
	}
	if _, err := root(1, math.NaN(), 2, 4, func(x float64) float64 { return x }); err == nil {
		t.Error("a bracket that ends in NaN is taken")
	}
}

func TestMaximum(t *testing.T) {
	for _, k := range []struct {
		name string
		f    func(x float64) float64
		want float64
		end  bool
	}{
		{"parabola", func(x float64) float64 { return 3 - (x-0.7)*(x-0.7) }, 0.7, false},
		{"skew", func(x float64) float64 { return x * math.Exp(-3*x) }, 1.0 / 3, false},
		{"kink", func(x float64) float64 { return -math.Abs(x - 0.618) }, 0.618, false},
		{"two hills", func(x float64) float64 {
			return math.Exp(-100*(x-0.2)*(x-0.2)) + 1.1*math.Exp(-100*(x-1.5)*(x-1.5))
		}, 1.5, false},
		{"rising", func(x float64) float64 { return x }, 2, true},
		{"falling", func(x float64) float64 { return -x }, 0, true},
		{"impossible at first", func(x float64) float64 {
			if x < 0.9 {
				return math.Inf(-1)
			}
			return -(x - 1.2) * (x - 1.2)
		}, 1.2, false},
	} {
		x, fx, end := maximum(0, 2, k.f)
		// A parabola is flat to rounding over 1e-8 around its top; the tolerance of the search is wider.
		if !(math.Abs(x-k.want) <= 2*searchTolerance) || fx != k.f(x) || end != k.end {
			t.Errorf("%s: %.9g (end %t), want %.9g (end %t)", k.name, x, end, k.want, k.end)
		}
	}
}

// TestEveryPlaceAndPartHasAName: a constant without its row in the table would show as an empty label.
func TestEveryPlaceAndPartHasAName(t *testing.T) {
	for p, n := range plainPlaces {
		if n.label == "" || n.words == "" {
			t.Errorf("place %d has no name", p)
		}
	}
	for p, n := range plainParts {
		if n == "" {
			t.Errorf("part %d has no name", p)
		}
	}
}
