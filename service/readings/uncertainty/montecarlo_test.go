package uncertainty

import (
	"context"
	"errors"
	"math"
	"reflect"
	"testing"
)

// additive adds all inputs.
func additive(x, y []float64) int {
	y[0] = 0
	for _, v := range x {
		y[0] += v
	}
	return 0
}

func estimateSum(in *Inputs, p Coverage) Estimate {
	var c Calculus
	c.Reset(len(in.List))
	y := Constant(0)
	for i := range in.List {
		y = c.Sum(y, c.Input(i, in.List[i].Value))
	}
	e, _ := in.Estimate(y, p, nil)
	return e
}

// JCGM 101:2008, 9.2: the sum of four inputs of mean 0 and standard deviation 1. With normal ones the 95 % interval is
// ±3.92; with rectangular ones ±2√3(2 - (3/5)^¼) = ±3.88, which confirms the law of propagation; with one of them ten times
// as wide ±17.0 against the law's ±19.7 or so, which refutes it (values from memory, the second by its formula).
func TestAdditiveModel(t *testing.T) {
	rectangular := []Input{
		{Standard: 1, Distribution: Rectangular},
		{Standard: 1, Distribution: Rectangular},
		{Standard: 1, Distribution: Rectangular},
		{Standard: 1, Distribution: Rectangular},
	}
	wide := append([]Input(nil), rectangular...)
	wide[3].Standard = 10
	for _, row := range []struct {
		name    string
		list    []Input
		high    float64
		verdict Verdict
	}{
		{"normal", []Input{{Standard: 1}, {Standard: 1}, {Standard: 1}, {Standard: 1}}, 3.92, Confirmed},
		{"rectangular", rectangular, 2 * math.Sqrt(3) * (2 - math.Pow(0.6, 0.25)), Confirmed},
		{"one wide", wide, 17.0, Refuted},
	} {
		in := Inputs{List: row.list}
		p, err := in.Propagate(t.Context(), Draws{Seed: 1, Count: 500_000, Coverage: 0.95}, 1, 1, additive)
		if err != nil {
			t.Fatal(err)
		}
		d := &p.Results[0]
		slack := 4*d.HighNumerical + 0.005*math.Min(row.high, 10)/10 + 0.005
		if !(math.Abs(d.High-row.high) < slack) || !(math.Abs(d.Low+row.high) < slack) {
			t.Errorf("%s: interval %.3f to %.3f, published ±%.3f", row.name, d.Low, d.High, row.high)
		}
		e := estimateSum(&in, 0.95)
		if v := Validate(&e, d, 2); v.Verdict != row.verdict {
			t.Errorf("%s: %+v, published %s", row.name, v, row.verdict)
		}
		if !(d.ShortHigh-d.ShortLow <= d.High-d.Low+1e-12) {
			t.Errorf("%s: the shortest interval is the longer one", row.name)
		}
	}
}

// JCGM 101:2008, 7.9.2, examples of a numerical tolerance (from memory).
func TestTolerance(t *testing.T) {
	for _, row := range []struct {
		u      float64
		digits int
		want   float64
	}{
		{0.00035, 2, 0.000005},
		{0.00035, 1, 0.00005},
		{2, 1, 0.5},
		{0.0996, 2, 0.005}, // written 0.10
		{99.4, 2, 0.5},
	} {
		if got := Tolerance(row.u, row.digits); !(math.Abs(got/row.want-1) < 1e-12) {
			t.Errorf("u = %g to %d digits: %g, want %g", row.u, row.digits, got, row.want)
		}
	}
	if Tolerance(0, 2) != 0 {
		t.Error("a certain result has a tolerance")
	}
}

// An input with few degrees of freedom is drawn from a t-distribution, of variance ν/(ν-2).
func TestFewDegreesOfFreedom(t *testing.T) {
	in := Inputs{List: []Input{{Value: 3, Standard: 2, DegreesOfFreedom: 12}}}
	p, err := in.Propagate(t.Context(), Draws{Seed: 5, Count: 400_000, Coverage: 0.95}, 1, 1, additive)
	if err != nil {
		t.Fatal(err)
	}
	d := p.Results[0]
	if want := 2 * math.Sqrt(12./10); !(math.Abs(d.Standard-want) < 5*d.StandardNumerical) {
		t.Errorf("standard deviation %.4f, want %.4f", d.Standard, want)
	}
	e := estimateSum(&in, 0.95)
	if v := Validate(&e, &d, 2); v.Verdict == Refuted {
		t.Errorf("the law of propagation with Student's factor is refuted: %+v", v)
	}
}

// Correlated inputs are drawn with their correlation, the others keep their distribution.
func TestCorrelatedDraws(t *testing.T) {
	in := Inputs{
		List:         []Input{{Standard: 2}, {Standard: 3}, {Standard: 1, Distribution: Rectangular}},
		Correlations: []Correlation{{0, 1, -0.7}},
	}
	p, err := in.Propagate(t.Context(), Draws{Seed: 6, Count: 200_000, Coverage: 0.95}, 3, 1, func(x, y []float64) int {
		y[0], y[1], y[2] = x[0]+x[1], x[2], x[0]*x[1]
		return 0
	})
	if err != nil {
		t.Fatal(err)
	}
	sum, flat, product := p.Results[0], p.Results[1], p.Results[2]
	if want := math.Sqrt(4 + 9 - 2*0.7*6); !(math.Abs(sum.Standard-want) < 5*sum.StandardNumerical) {
		t.Errorf("standard deviation of the sum %.4f, want %.4f", sum.Standard, want)
	}
	if !(flat.High < math.Sqrt(3)) || !(math.Abs(flat.High-0.95*math.Sqrt(3)) < 0.01) {
		t.Errorf("the rectangular input reaches %.4f, want %.4f", flat.High, 0.95*math.Sqrt(3))
	}
	if want := -0.7 * 6; !(math.Abs(product.Mean-want) < 5*product.MeanNumerical) {
		t.Errorf("covariance %.4f, want %.4f", product.Mean, want)
	}
	in.Correlations = append(in.Correlations, Correlation{1, 2, 0.9})
	if _, err := in.Propagate(t.Context(), Draws{Coverage: 0.95}, 1, 1, additive); err == nil {
		t.Error("impossible correlations are drawn")
	}
}

// Draws without a result are counted by their kind and nothing else; unknown results stay unknown.
func TestFailures(t *testing.T) {
	in := Inputs{List: []Input{{Standard: 1}}}
	p, err := in.Propagate(t.Context(), Draws{Seed: 7, Count: 50_000, Coverage: 0.95}, 2, 3, func(x, y []float64) int {
		y[0], y[1] = x[0], math.NaN()
		switch {
		case x[0] > 1:
			return 2
		case x[0] < -2:
			return 1
		}
		return 0
	})
	if err != nil {
		t.Fatal(err)
	}
	if p.Failed != p.Failures[1]+p.Failures[2] || !(math.Abs(float64(p.Failures[2])/50_000-0.1587) < 0.007) || !(math.Abs(float64(p.Failures[1])/50_000-0.0228) < 0.003) {
		t.Errorf("failures %v of %d", p.Failures, p.Draws)
	}
	if d := p.Results[0]; !(d.High <= 1) || !(d.Low >= -2) || !math.IsNaN(p.Results[1].Mean) {
		t.Errorf("results %+v", p.Results)
	}
	all, err := in.Propagate(t.Context(), Draws{Count: 1000, Coverage: 0.95}, 1, 2, func(_, _ []float64) int { return 1 })
	if err != nil || all.Failed != 1000 || !math.IsNaN(all.Results[0].Mean) || all.Stable {
		t.Errorf("only failures: %+v, %v", all, err)
	}
}

// Draws stop when the figures have their digits, and sooner for fewer digits; one seed gives one answer.
func TestAdaptiveStop(t *testing.T) {
	in := Inputs{List: []Input{{Value: 5, Standard: 1.4}}}
	run := func(d Draws) *Propagation {
		t.Helper()
		d.Coverage = 0.95
		p, err := in.Propagate(t.Context(), d, 1, 1, additive)
		if err != nil {
			t.Fatal(err)
		}
		return p
	}
	rough, fine := run(Draws{Seed: 3, Digits: 1}), run(Draws{Seed: 3, Digits: 2})
	if !rough.Stable || !fine.Stable || rough.Draws > fine.Draws || fine.Draws == DefaultMost {
		t.Errorf("%d draws for one digit, %d for two", rough.Draws, fine.Draws)
	}
	if d := fine.Results[0]; !(2*d.HighNumerical <= Tolerance(1.4, 2)) || !(math.Abs(d.High-5-1.959964*1.4) < Tolerance(1.4, 2)) {
		t.Errorf("after %d draws the interval ends at %.4f ± %.4f", fine.Draws, d.High, d.HighNumerical)
	}
	if again := run(Draws{Seed: 3, Digits: 2}); !reflect.DeepEqual(again, fine) {
		t.Error("the same seed gives another answer")
	}
	if other := run(Draws{Seed: 4, Digits: 2}); other.Results[0].Mean == fine.Results[0].Mean {
		t.Error("another seed gives the same answer")
	}
	if few := run(Draws{Seed: 3, Most: 3000}); few.Draws != 3000 || few.Stable {
		t.Errorf("at most 3000 draws: %d, stable %v", few.Draws, few.Stable)
	}
}

func TestDrawsEndWithContext(t *testing.T) {
	cause := errors.New("enough")
	ctx, cancel := context.WithCancelCause(t.Context())
	in := Inputs{List: []Input{{Standard: 1}}}
	n := 0
	_, err := in.Propagate(ctx, Draws{Count: 1_000_000, Coverage: 0.95}, 1, 1, func(_, y []float64) int {
		if n++; n == 100 {
			cancel(cause)
		}
		y[0] = 1
		return 0
	})
	if !errors.Is(err, cause) || n > 20_000 {
		t.Errorf("%v after %d draws", err, n)
	}
}
