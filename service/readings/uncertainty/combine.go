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

// dependent is the part of its variance that an estimate must have for itself, beside others, to count as another.
const dependent = 1e-9

// Combine returns the weights of least variance that are not negative and add up to 1. For independent estimates they are
// those by inverse variance; estimates that share inputs are weighted by the inverse of their covariance matrix (A. C.
// Aitken, Proc. R. Soc. Edinb. 55 (1936) 42), as far as that leaves no weight negative. Estimates that are not known count
// nothing.
func (in *Inputs) Combine(estimates []Linear) Combination {
	k := Combination{Weights: make([]float64, len(estimates))}
	v := in.covariances(estimates)
	best := -1
	for i, y := range estimates {
		if usable(y, v[i][i]) && (best < 0 || v[i][i] < v[best][best]) {
			best = i
		}
	}
	if best < 0 {
		return k
	}
	k.Weights[best] = 1
	kept := []int{best}
	if !(v[best][best] > 0) {
		return k
	}
	// An active set method for a quadratic with bounds, as C. L. Lawson and R. J. Hanson, Solving Least Squares Problems
	// (1974), chapter 23: take in the estimate that promises most, and leave out those whose weight falls to zero.
	for range 4 * len(estimates) {
		next := promising(estimates, v, k.Weights, kept)
		if next < 0 {
			break
		}
		kept = append(kept, next)
		for {
			var f factor
			if !f.build(v, kept) {
				kept = kept[:len(kept)-1] // the new one depends on the others
				break
			}
			target := f.weights()
			step, out := 1.0, -1
			for j, i := range kept {
				if w := k.Weights[i]; target[j] <= 0 && w/(w-target[j]) < step {
					step, out = w/(w-target[j]), j
				}
			}
			for j, i := range kept {
				k.Weights[i] += step * (target[j] - k.Weights[i])
			}
			if out < 0 {
				break
			}
			k.Weights[kept[out]] = 0
			kept = slices.Delete(kept, out, out+1)
		}
	}
	k.agree(estimates, v, kept)
	return k
}

// usable reports whether an estimate is known and its variance a finite number.
func usable(y Linear, variance float64) bool { return y.Known() && variance <= math.MaxFloat64 }

// covariances returns the covariance matrix of the estimates that are known.
func (in *Inputs) covariances(estimates []Linear) [][]float64 {
	v := make([][]float64, len(estimates))
	room := make([]float64, len(estimates)*len(estimates))
	for i := range v {
		v[i] = room[i*len(v) : (i+1)*len(v)]
		for j := range i + 1 {
			if estimates[i].Known() && estimates[j].Known() {
				v[i][j] = in.Covariance(estimates[i], estimates[j])
				v[j][i] = v[i][j]
			}
		}
	}
	return v
}

// promising returns the estimate outside those kept that lowers the variance fastest, or -1.
func promising(estimates []Linear, v [][]float64, w []float64, kept []int) int {
	lean := func(i int) (sum float64) { // covariance of estimate i with the mean
		for _, j := range kept {
			sum += v[i][j] * w[j]
		}
		return sum
	}
	var variance float64
	for _, i := range kept {
		variance += w[i] * lean(i)
	}
	next, least := -1, variance*(1-dependent)
	for i, y := range estimates {
		if usable(y, v[i][i]) && !slices.Contains(kept, i) {
			if l := lean(i); l < least {
				next, least = i, l
			}
		}
	}
	return next
}

// agree finds how well the estimates that have a weight agree.
func (k *Combination) agree(estimates []Linear, v [][]float64, kept []int) {
	var f factor
	if !f.build(v, kept) {
		return
	}
	var mean float64
	for _, i := range kept {
		mean += k.Weights[i] * estimates[i].Value
	}
	off := make([]float64, len(kept))
	for j, i := range kept {
		off[j] = estimates[i].Value - mean
	}
	for j, x := range f.solve(off) {
		k.ChiSquared += off[j] * x
	}
	k.Degrees = len(kept) - 1
}

// factor is the Cholesky factor of a covariance matrix.
type factor [][]float64

// build factors the rows and columns of v that are kept, and reports whether each has a part of its own.
func (f *factor) build(v [][]float64, kept []int) bool {
	for n, i := range kept {
		if !f.add(func(j int) float64 { return v[i][kept[j]] }, n) {
			return false
		}
	}
	return true
}

// add appends row n of a matrix and reports whether it is independent of those before.
func (f *factor) add(at func(j int) float64, n int) bool {
	row := make([]float64, n+1)
	own := at(n)
	for j := range n {
		x := at(j)
		for m := range j {
			x -= row[m] * (*f)[j][m]
		}
		row[j] = x / (*f)[j][j]
		own -= row[j] * row[j]
	}
	if !(own > dependent*at(n)) {
		return false
	}
	row[n] = math.Sqrt(own)
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

// weights returns the weights of least variance, whatever their sign.
func (f factor) weights() []float64 {
	w := make([]float64, len(f))
	for j := range w {
		w[j] = 1
	}
	w = f.solve(w)
	var sum float64
	for _, x := range w {
		sum += x
	}
	for j := range w {
		w[j] /= sum
	}
	return w
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
	v := in.covariances(deviations)
	var f factor
	var kept []int
	var off []float64
	for i, d := range deviations {
		v[i][i] += own[i] * own[i]
		kept = append(kept, i)
		if f.add(func(j int) float64 { return v[i][kept[j]] }, len(kept)-1) {
			off = append(off, d.Value)
		} else {
			kept = kept[:len(kept)-1]
		}
	}
	for j, x := range f.solve(off) {
		chi += off[j] * x
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
