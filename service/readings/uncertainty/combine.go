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
// Aitken, Proc. R. Soc. Edinb. 55 (1936) 42), as far as that leaves no weight negative. Estimates that are not known, or
// whose variance is no finite number, count nothing.
func (in *Inputs) Combine(estimates []Linear) Combination {
	k := Combination{Weights: make([]float64, len(estimates))}
	var known []Linear
	var places []int
	best, least := -1, math.Inf(1)
	for i, y := range estimates {
		if !y.Known() {
			continue
		}
		if variance := in.Covariance(y, y); variance <= math.MaxFloat64 {
			if variance < least {
				best, least = len(known), variance
			}
			known, places = append(known, y), append(places, i)
		}
	}
	switch {
	case best < 0:
		return k
	case len(known) == 1 || least == 0:
		k.Weights[places[best]] = 1
		return k
	}
	m := mix{v: in.covariances(known), w: make([]float64, len(known)), kept: append(make([]int, 0, len(known)), best)}
	m.w[best] = 1
	m.improve()
	k.ChiSquared, k.Degrees = m.agreement(known)
	for j, i := range places {
		k.Weights[i] = m.w[j]
	}
	return k
}

// covariances returns the covariance matrix of results.
func (in *Inputs) covariances(y []Linear) [][]float64 {
	n := len(y)
	v, room := make([][]float64, n), make([]float64, n*n)
	for i := range v {
		v[i] = room[i*n : (i+1)*n]
		for j := range i + 1 {
			v[i][j] = in.Covariance(y[i], y[j])
			v[j][i] = v[i][j]
		}
	}
	return v
}

// mix is a weighted mean of estimates on its way to the least variance.
type mix struct {
	v    [][]float64 // covariance matrix
	w    []float64   // weights
	kept []int       // estimates whose weight is not 0
}

// improve is an active set method for a quadratic with bounds, as in C. L. Lawson and R. J. Hanson, Solving Least Squares
// Problems (1974), chapter 23: it takes in the estimate that promises most, and leaves out those whose weight falls to zero.
func (m *mix) improve() {
	for range 4 * len(m.w) { // each estimate comes in about once
		next := m.promising()
		if next < 0 {
			return
		}
		m.kept = append(m.kept, next)
		for {
			var f factor
			if !f.build(m.v, m.kept) {
				m.kept = m.kept[:len(m.kept)-1] // the new one depends on the others
				return
			}
			target := f.weights()
			step, out := 1.0, -1
			for j, i := range m.kept {
				if w := m.w[i]; target[j] <= 0 && w/(w-target[j]) < step {
					step, out = w/(w-target[j]), j
				}
			}
			for j, i := range m.kept {
				m.w[i] += step * (target[j] - m.w[i])
			}
			if out < 0 {
				break
			}
			m.w[m.kept[out]] = 0
			m.kept = slices.Delete(m.kept, out, out+1)
		}
	}
}

// promising returns the estimate outside the mean that would lower its variance fastest, or -1.
func (m *mix) promising() int {
	lean := func(i int) (sum float64) { // covariance of estimate i with the mean
		for _, j := range m.kept {
			sum += m.v[i][j] * m.w[j]
		}
		return sum
	}
	var variance float64
	for _, i := range m.kept {
		variance += m.w[i] * lean(i)
	}
	next, least := -1, variance*(1-dependent)
	for i := range m.w {
		if l := lean(i); l < least && !slices.Contains(m.kept, i) {
			next, least = i, l
		}
	}
	return next
}

// agreement returns the sum of squares by which the estimates in the mean miss it, and its degrees of freedom.
func (m *mix) agreement(y []Linear) (chi float64, degrees int) {
	var f factor
	if !f.build(m.v, m.kept) {
		return 0, 0
	}
	var mean float64
	for _, i := range m.kept {
		mean += m.w[i] * y[i].Value
	}
	off := make([]float64, len(m.kept))
	for j, i := range m.kept {
		off[j] = y[i].Value - mean
	}
	for j, x := range f.solve(off) {
		chi += off[j] * x
	}
	return chi, len(m.kept) - 1
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
