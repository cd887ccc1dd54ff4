package uncertainty

import (
	"math"
	"math/rand/v2"
	"testing"
)

// independent returns inputs with standard uncertainties u, and a number for each.
func independent(values, u []float64) (*Inputs, *Calculus, []Linear) {
	in, c := &Inputs{}, &Calculus{}
	for i := range u {
		in.List = append(in.List, Input{Value: values[i], Standard: u[i]})
	}
	c.Reset(len(u))
	var y []Linear
	for i := range u {
		y = append(y, c.Input(i, values[i]))
	}
	return in, c, y
}

// Independent estimates are weighted by inverse variance, and the disagreement of two is (a - b)²/(u_a² + u_b²).
func TestInverseVariance(t *testing.T) {
	in, c, y := independent([]float64{10, 11, 12.5}, []float64{0.5, 1, 2})
	k := in.Combine(y)
	for i, want := range []float64{16. / 21, 4. / 21, 1. / 21} {
		if !(math.Abs(k.Weights[i]-want) < 1e-14) {
			t.Errorf("weight %d is %g, by inverse variance %g", i, k.Weights[i], want)
		}
	}
	mean := c.Weighted(y, k.Weights)
	if want := 1 / math.Sqrt(4+1+0.25); !(math.Abs(in.Standard(mean)-want) < 1e-14) {
		t.Errorf("u of the mean %g, want %g", in.Standard(mean), want)
	}
	var chi float64
	for i, x := range y {
		d := (x.Value - mean.Value) / in.List[i].Standard
		chi += d * d
	}
	if !(math.Abs(k.ChiSquared-chi) < 1e-12) || k.Degrees != 2 || !k.Consistent() {
		t.Errorf("chi squared %g of %d degrees, want %g", k.ChiSquared, k.Degrees, chi)
	}
	in, c, y = independent([]float64{10, 13}, []float64{0.6, 0.8})
	d := in.Disagreements(c, y)
	if len(d) != 1 || !(math.Abs(d[0].Ratio-9) < 1e-12) {
		t.Errorf("disagreements %v, want one of ratio 9", d)
	}
	if k := in.Combine(y); k.Consistent() {
		t.Error("estimates three standard uncertainties apart are consistent")
	}
}

// An estimate that only adds noise to a better one gets no weight; two that are the same count once.
func TestDependentEstimates(t *testing.T) {
	in, c, x := independent([]float64{10, 0}, []float64{1, 0.7})
	noisy := c.Sum(x[0], x[1])
	worse := c.Sum(c.Scaled(x[0], 3), Constant(-20)) // would get a negative weight
	for _, y := range [][]Linear{{x[0], noisy}, {noisy, x[0], x[0]}, {x[0], worse}, {Unknown, x[0], worse, noisy}} {
		k := in.Combine(y)
		var sum float64
		for _, w := range k.Weights {
			sum += w
			if w < 0 {
				t.Errorf("weights %v", k.Weights)
			}
		}
		if mean := c.Weighted(y, k.Weights); !(math.Abs(sum-1) < 1e-12) || !(math.Abs(in.Standard(mean)-1) < 1e-12) {
			t.Errorf("weights %v, u = %g", k.Weights, in.Standard(mean))
		}
	}
	if k := in.Combine([]Linear{Unknown}); k.Weights[0] != 0 {
		t.Error("an unknown estimate has a weight")
	}
}

// The combination is never less certain than its best estimate, and no small change of its weights makes it better.
func TestLeastVariance(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	for range 2000 {
		n, m := 2+rng.IntN(5), 2+rng.IntN(6)
		in, c := &Inputs{}, &Calculus{}
		for range n {
			in.List = append(in.List, Input{Standard: math.Exp(rng.NormFloat64())})
		}
		c.Reset(n)
		var y []Linear
		best := math.Inf(1)
		for range m {
			sum := Constant(5)
			for i := range n {
				sum = c.Sum(sum, c.Scaled(c.Input(i, 0), rng.NormFloat64()))
			}
			y = append(y, sum)
			best = math.Min(best, in.Standard(sum))
		}
		k := in.Combine(y)
		u := in.Standard(c.Weighted(y, k.Weights))
		if !(u <= best*(1+1e-9)) {
			t.Fatalf("combined %g, the best alone %g", u, best)
		}
		const step = 1e-3
		for i := range y {
			for j := range y {
				w := append([]float64(nil), k.Weights...)
				if w[j] > step && i != j && w[i] > 0 {
					w[i], w[j] = w[i]+step, w[j]-step
					if other := in.Standard(c.Weighted(y, w)); other < u*(1-1e-9) {
						t.Fatalf("weights %v have u = %g, %v have %g", k.Weights, u, w, other)
					}
				}
			}
		}
	}
}

// Squares of normal deviations, correlated or not, exceed their limit as often as said.
func TestChiSquared(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 4))
	in, c, x := independent(make([]float64, 3), []float64{1, 2, 0.5})
	own := []float64{0.5, 0.1, 1, 0.2}
	const n = 20000
	beyond := 0
	for range n {
		e := [3]float64{rng.NormFloat64(), 2 * rng.NormFloat64(), 0.5 * rng.NormFloat64()}
		of := func(a, b, d, noise float64) Linear {
			y := c.Sum(c.Sum(c.Scaled(x[0], a), c.Scaled(x[1], b)), c.Scaled(x[2], d))
			return c.Shifted(y, a*e[0]+b*e[1]+d*e[2]+noise*rng.NormFloat64())
		}
		chi, degrees := in.ChiSquared([]Linear{of(1, 0, 0, own[0]), of(1, -1, 0, own[1]), of(2, 1, 1, own[2]), of(0, 1, 3, own[3])}, own)
		if chi > ChiSquaredLimit(degrees, 0.05) {
			beyond++
		}
		c.Reset(3)
		for i := range x {
			x[i] = c.Input(i, 0)
		}
	}
	// The standard deviation of the share is 0.0015.
	if share := float64(beyond) / n; !(math.Abs(share-0.05) < 0.006) {
		t.Errorf("%.4f beyond the limit, want 0.05", share)
	}
}
