package uncertainty

import (
	"cmp"
	"math"
	"slices"

	"gonum.org/v1/gonum/stat/distuv"
)

// Combination is the best of several estimates of one quantity.
type Combination struct {
	Weights []float64 // of the estimates, in their order; 0 for one that adds nothing
	// ChiSquared is the sum of squares by which the weighted estimates miss their mean, in units of their uncertainty, and
	// Degrees how many it has; both are 0 for one estimate.
	ChiSquared float64
	Degrees    int
}

// Consistent reports whether the estimates differ by no more than chance explains in 95 of 100 cases.
func (k *Combination) Consistent() bool {
	return k.Degrees == 0 || k.ChiSquared <= distuv.ChiSquared{K: float64(k.Degrees)}.Quantile(0.95)
}

// dependent is the part of its variance that an estimate must have for itself, beside better ones, to count as another.
const dependent = 1e-9

// Combine returns the weights of least variance that are not negative and add up to 1. For independent estimates they are
// those by inverse variance; estimates that share inputs are weighted by the inverse of their covariance matrix (A. C.
// Aitken, Proc. R. Soc. Edinb. 55 (1936) 42), and one that would get a negative weight is left out. Estimates that are not
// known count nothing.
func (in *Inputs) Combine(estimates []Linear) Combination {
	k := Combination{Weights: make([]float64, len(estimates))}
	var order []int
	variance := make([]float64, len(estimates))
	for i, y := range estimates {
		if y.Known() {
			order = append(order, i)
			variance[i] = in.Covariance(y, y)
		}
	}
	if len(order) == 0 {
		return k
	}
	slices.SortStableFunc(order, func(a, b int) int { return cmp.Compare(variance[a], variance[b]) })
	if len(order) == 1 || !(variance[order[0]] > 0) {
		k.Weights[order[0]] = 1
		return k
	}
	for {
		var f factor
		kept := order[:0:0]
		for _, i := range order {
			if f.add(in, estimates, kept, i, variance[i]) {
				kept = append(kept, i)
			}
		}
		w, chi := f.weights(estimates, kept)
		worst := -1
		for j := range kept {
			if w[j] < 0 && (worst < 0 || w[j] < w[worst]) {
				worst = j
			}
		}
		if worst < 0 {
			for j, i := range kept {
				k.Weights[i] = w[j]
			}
			k.ChiSquared, k.Degrees = chi, len(kept)-1
			return k
		}
		order = slices.Delete(kept, worst, worst+1)
	}
}

// factor is the Cholesky factor of the covariance matrix of the estimates that were added.
type factor [][]float64

// add appends estimate i to those kept and reports whether it has a part of its own.
func (f *factor) add(in *Inputs, estimates []Linear, kept []int, i int, variance float64) bool {
	row := make([]float64, len(kept)+1)
	own := variance
	for j, other := range kept {
		v := in.Covariance(estimates[i], estimates[other])
		for m := range j {
			v -= row[m] * (*f)[j][m]
		}
		row[j] = v / (*f)[j][j]
		own -= row[j] * row[j]
	}
	if !(own > dependent*variance) {
		return false
	}
	row[len(kept)] = math.Sqrt(own)
	*f = append(*f, row)
	return true
}

// solve returns the solution x of L Lᵀ x = b.
func (f factor) solve(b []float64) []float64 {
	x := slices.Clone(b)
	for i := range x {
		for j := range i {
			x[i] -= f[i][j] * x[j]
		}
		x[i] /= f[i][i]
	}
	for i := len(x) - 1; i >= 0; i-- {
		for j := i + 1; j < len(x); j++ {
			x[i] -= f[j][i] * x[j]
		}
		x[i] /= f[i][i]
	}
	return x
}

// weights returns the weights of least variance and how well the estimates agree.
func (f factor) weights(estimates []Linear, kept []int) (w []float64, chi float64) {
	ones := make([]float64, len(kept))
	for j := range ones {
		ones[j] = 1
	}
	w = f.solve(ones)
	var sum float64
	for _, v := range w {
		sum += v
	}
	var mean float64
	for j, i := range kept {
		w[j] /= sum
		mean += w[j] * estimates[i].Value
	}
	off := make([]float64, len(kept))
	for j, i := range kept {
		off[j] = estimates[i].Value - mean
	}
	for j, v := range f.solve(off) {
		chi += off[j] * v
	}
	return w, chi
}

// Weighted returns the weighted sum of estimates.
func (c *Calculus) Weighted(estimates []Linear, weights []float64) Linear {
	sum, first := Unknown, true
	for i, w := range weights {
		switch {
		case w == 0:
		case first:
			sum, first = c.Scaled(estimates[i], w), false
		default:
			sum = c.Sum(sum, c.Scaled(estimates[i], w))
		}
	}
	return sum
}

// Disagreement is a pair of estimates that lie too far apart.
type Disagreement struct {
	A, B int
	// Ratio is (a - b)² over the variance of a - b, which for independent estimates is the sum of their variances.
	Ratio float64
}

// Disagreements returns the pairs of estimates whose difference exceeds twice its standard uncertainty, the worst first.
func (in *Inputs) Disagreements(c *Calculus, estimates []Linear) []Disagreement {
	const limit = 4.0
	var out []Disagreement
	for a := range estimates {
		for b := a + 1; b < len(estimates); b++ {
			if !estimates[a].Known() || !estimates[b].Known() {
				continue
			}
			d := c.Difference(estimates[a], estimates[b])
			variance := in.Covariance(d, d)
			// Where both have the same uncertainty throughout, rounding is left of the difference.
			if floor := dependent * (in.Covariance(estimates[a], estimates[a]) + in.Covariance(estimates[b], estimates[b])); variance < floor {
				variance = floor
			}
			if ratio := d.Value * d.Value / variance; ratio > limit {
				out = append(out, Disagreement{a, b, ratio})
			}
		}
	}
	slices.SortStableFunc(out, func(x, y Disagreement) int { return cmp.Compare(y.Ratio, x.Ratio) })
	return out
}

// ChiSquared returns the sum of squares of deviations from zero in units of their joint uncertainty, and how many
// independent ones there are. Each has a standard uncertainty of its own beside what the inputs give it.
func (in *Inputs) ChiSquared(deviations []Linear, own []float64) (chi float64, degrees int) {
	var f factor
	var kept []int
	for i, d := range deviations {
		if f.add(in, deviations, kept, i, in.Covariance(d, d)+own[i]*own[i]) {
			kept = append(kept, i)
		}
	}
	off := make([]float64, len(kept))
	for j, i := range kept {
		off[j] = deviations[i].Value
	}
	for j, v := range f.solve(off) {
		chi += off[j] * v
	}
	return chi, len(kept)
}

// ChiSquaredLimit returns what chance exceeds with a probability.
func ChiSquaredLimit(degrees int, probability float64) float64 {
	if degrees == 0 {
		return 0
	}
	return distuv.ChiSquared{K: float64(degrees)}.Quantile(1 - probability)
}
