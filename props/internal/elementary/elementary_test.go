package elementary

import (
	"math"
	"math/rand/v2"
	"testing"
)

// The standard library is the reference: its exp and log are within one unit in the last place.
func TestElementary(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	var worstExp, worstLog float64
	for range 2_000_000 {
		x := 40 * rng.NormFloat64()
		worstExp = math.Max(worstExp, math.Abs(Exp(x)/math.Exp(x)-1))
		y := math.Exp(x)
		if rng.IntN(2) == 0 {
			y = 1 + 0.5*rng.NormFloat64()*math.Exp(-20*rng.Float64())
		}
		if !(y > 0) {
			continue
		}
		worstLog = math.Max(worstLog, math.Abs(Log(y)-math.Log(y))/math.Max(1, math.Abs(math.Log(y))))
	}
	t.Logf("largest deviation: exp %.1e relative, log %.1e", worstExp, worstLog)
	if !(worstExp < 4.5e-16) { // two units in the last place
		t.Errorf("exp off by %.1e", worstExp)
	}
	if !(worstLog < 4.5e-16) {
		t.Errorf("log off by %.1e", worstLog)
	}
	for _, x := range []float64{0, math.Copysign(0, -1), 699.9, -699.9, 701, -701, -1e300, 1e300, math.Inf(1), math.Inf(-1)} {
		if got, want := Exp(x), math.Exp(x); math.Abs(got-want) > 4.5e-16*want && want > 1e-300 {
			t.Errorf("Exp(%g) = %g, want %g", x, got, want)
		}
	}
	for _, x := range []float64{0, 1, 5e-324, 1e-310, math.MaxFloat64, math.Inf(1)} {
		if got, want := Log(x), math.Log(x); got != want && math.Abs(got-want) > 4.5e-16*math.Abs(want) {
			t.Errorf("Log(%g) = %g, want %g", x, got, want)
		}
	}
	if !math.IsNaN(Exp(math.NaN())) || !math.IsNaN(Log(math.NaN())) || !math.IsNaN(Log(-1)) {
		t.Error("not a number must stay so")
	}
}

func BenchmarkElementary(b *testing.B) {
	for _, f := range []struct {
		name string
		f    func(float64) float64
	}{{"Exp", Exp}, {"math.Exp", math.Exp}, {"Log", Log}, {"math.Log", math.Log}} {
		b.Run(f.name, func(b *testing.B) {
			x, sum := 0.3, 0.0
			for b.Loop() {
				sum += f.f(x)
				x += 1e-9
			}
			_ = sum
		})
	}
}
