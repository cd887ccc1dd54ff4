package machine

import (
	"math"
	"testing"
)

var arrangements = []Arrangement{Counterflow, ParallelFlow, CrossflowUnmixed, CrossflowStreamMixed, CrossflowStreamUnmixed}

// The closed forms of Kays and London, written out once more, and values that can be checked by hand.
func TestEffectiveness(t *testing.T) {
	for _, c := range []struct {
		name        string
		a           Arrangement
		ntu, ratio  float64
		streamIsMax bool
		want        float64
	}{
		{"phase change", Counterflow, 1, 0, true, 1 - 1/math.E},
		{"balanced counterflow", Counterflow, 3, 1, true, 0.75},
		{"counterflow", Counterflow, 2, 0.5, true, (1 - math.Exp(-1)) / (1 - 0.5*math.Exp(-1))},
		{"parallel", ParallelFlow, 2, 0.5, true, (1 - math.Exp(-3)) / 1.5},
		{"larger stream mixed", CrossflowStreamMixed, 1, 0.5, true, 2 * (1 - math.Exp(-0.5*(1-math.Exp(-1))))},
		{"smaller stream mixed", CrossflowStreamMixed, 1, 0.5, false, 1 - math.Exp(-2*(1-math.Exp(-0.5)))},
		{"smaller stream mixed, the refrigerant's", CrossflowStreamUnmixed, 1, 0.5, true, 1 - math.Exp(-2*(1-math.Exp(-0.5)))},
		// Incropera et al., Fundamentals of Heat and Mass Transfer, chart of both fluids unmixed (from memory): about 0.47 at NTU 1
		// and equal streams. The formula is an approximation; to its own digits it is 0.4685.
		{"both unmixed", CrossflowUnmixed, 1, 1, true, 1 - math.Exp(math.Exp(-1)-1)},
	} {
		if got := effectiveness(c.a, c.ntu, c.ratio, c.streamIsMax); !(math.Abs(got-c.want) <= 1e-12) {
			t.Errorf("%s: %.12g, want %.12g", c.name, got, c.want)
		}
	}
}

// Effectiveness rises with NTU, counterflow is the best arrangement and parallel flow the worst, and all meet where one
// stream does not change.
func TestEffectivenessOrder(t *testing.T) {
	for _, ratio := range []float64{0, 1e-6, 0.1, 0.5, 0.9, 1 - 1e-12, 1} {
		for _, isMax := range []bool{true, false} {
			last := map[Arrangement]float64{}
			for ntu := 0.05; ntu < 6; ntu *= 1.3 {
				best := effectiveness(Counterflow, ntu, ratio, isMax)
				worst := effectiveness(ParallelFlow, ntu, ratio, isMax)
				for _, a := range arrangements {
					e := effectiveness(a, ntu, ratio, isMax)
					within := 1e-12
					if a == CrossflowUnmixed {
						within = 0.05 // the formula is an approximation, poorest at small NTU
					}
					if !(e <= best*(1+within) && e >= worst*(1-within)) {
						t.Errorf("%s at NTU %g, ratio %g: %g outside %g to %g", a, ntu, ratio, e, worst, best)
					}
					if !(e > last[a]) {
						t.Errorf("%s at NTU %g, ratio %g: %g does not rise", a, ntu, ratio, e)
					}
					last[a] = e
					if got := shortfall(a, ntu, ratio, isMax); !(math.Abs(got-(1-e)) <= 1e-12) {
						t.Errorf("%s at NTU %g, ratio %g: shortfall %g, want %g", a, ntu, ratio, got, 1-e)
					}
				}
			}
		}
	}
}

func TestLogMean(t *testing.T) {
	for _, c := range [][3]float64{
		{10, 5, 5 / math.Log(2)},
		{5, 10, 5 / math.Log(2)},
		{7, 7, 7},
		{1, 1 + 1e-9, 1 + 5e-10},
	} {
		if got := logMean(c[0], c[1]); !(math.Abs(got/c[2]-1) <= 1e-12) {
			t.Errorf("mean of %g and %g: %.14g, want %.14g", c[0], c[1], got, c[2])
		}
	}
	// The series takes over without a step.
	for _, share := range []float64{1 - nearlyEqual*(1+1e-6), 1 - nearlyEqual*(1-1e-6)} {
		want := (share - 1) / math.Log(share)
		if got := logMean(share, 1); !(math.Abs(got/want-1) <= 1e-11) {
			t.Errorf("mean of %g and 1: %.15g, want %.15g", share, got, want)
		}
	}
	for _, c := range [][2]float64{{0, 1}, {1, 0}, {-1, 2}, {math.NaN(), 1}} {
		if got := logMean(c[0], c[1]); !math.IsNaN(got) {
			t.Errorf("mean of %v: %g, but the streams cross", c, got)
		}
	}
}

func TestBracketed(t *testing.T) {
	for name, c := range map[string]struct {
		a, b, want float64
		f          func(float64) float64
	}{
		"cubic":       {0, 3, math.Cbrt(5), func(x float64) float64 { return x*x*x - 5 }},
		"exponential": {-20, 20, math.Log(1e-3), func(x float64) float64 { return math.Exp(x) - 1e-3 }},
		"step":        {-1, 2, 0.3, func(x float64) float64 { return math.Copysign(1, x-0.3) }},
		"flat":        {-1, 4, 1, func(x float64) float64 { return math.Pow(x-1, 9) }},
	} {
		got, err := bracketed(c.a, c.b, func(x float64) (float64, error) { return c.f(x), nil })
		within := 1e-12
		if name == "flat" {
			within = 1e-3 // the ninth power of less is below rounding
		}
		if err != nil || !(math.Abs(got-c.want) <= within) {
			t.Errorf("%s: %.15g, %v; want %.15g", name, got, err, c.want)
		}
	}
}
