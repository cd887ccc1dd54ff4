package uncertainty

import (
	"context"
	"math"
	"math/rand/v2"
	"slices"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/stat/distuv"
)

// Draws says how a calculation is repeated with random inputs.
type Draws struct {
	Seed     uint64
	Count    int // exactly so many; 0: until the results are stable, at most Most
	Most     int // 0 means DefaultMost
	Digits   int // significant digits of a standard uncertainty that must be stable, 1 or 2; 0 means 2
	Coverage Coverage
}

// DefaultMost is the most draws, unless a request says otherwise.
const DefaultMost = 200_000

// batch is the number of draws between two looks at the stability: at least 100/(1-p) and 10 000 (JCGM 101, 7.9.4).
const batch = 10_000

// leastBatches is the number of batches that numerical uncertainties come from at least.
const leastBatches = 5

// Drawn is the distribution of one result. Numerical uncertainties are standard deviations of what further draws would
// change.
type Drawn struct {
	Mean     float64
	Standard float64
	// Low and High bound the probabilistically symmetric coverage interval, ShortLow and ShortHigh the shortest one.
	Low, High           float64
	ShortLow, ShortHigh float64
	// Numerical uncertainties of Mean, Standard, Low and High.
	MeanNumerical, StandardNumerical, LowNumerical, HighNumerical float64
}

// Propagation is the result of random draws.
type Propagation struct {
	Results  []Drawn // NaN for what is not known
	Draws    int     // made
	Failures []int   // draws without a result, by the kind that the calculation returned
	Failed   int     // their number; they count in no distribution
	Stable   bool    // every result has its digits
}

// Trial computes results from drawn inputs. It returns 0, or the kind of its failure. A result that it leaves NaN in the
// first draw that succeeds is not known and stays so.
type Trial func(inputs, results []float64) (failure int)

// Propagate draws the inputs, lets trial compute the results and returns their distributions (JCGM 101, clause 7). It
// ends early with the context's error. There are kinds 1 to kinds-1 of failures.
func (in *Inputs) Propagate(ctx context.Context, d Draws, results, kinds int, trial Trial) (*Propagation, error) {
	draw, err := in.sampler(d.Seed)
	if err != nil {
		return nil, err
	}
	digits := d.Digits
	if digits == 0 {
		digits = 2
	}
	most := d.Count
	if most == 0 {
		most = d.Most
	}
	if most == 0 {
		most = DefaultMost
	}
	size := min(batch, (most+leastBatches-1)/leastBatches)
	p := &Propagation{Failures: make([]int, kinds)}
	t := newTally(results, min(most, 2*batch), d.Coverage)
	x, y := make([]float64, len(in.List)), make([]float64, results)
	for p.Draws < most && !p.Stable {
		if err := context.Cause(ctx); err != nil {
			return nil, err
		}
		for range min(size, most-p.Draws) {
			p.Draws++
			draw(x)
			if kind := trial(x, y); kind != 0 {
				p.Failures[kind]++
				p.Failed++
				continue
			}
			t.add(y)
		}
		t.closeBatch()
		p.Stable = t.batches >= 2 && t.stable(digits) && d.Count == 0
	}
	if d.Count != 0 {
		p.Stable = t.stable(digits)
	}
	p.Results = t.drawn()
	return p, nil
}

// sampler returns a function that draws all inputs.
func (in *Inputs) sampler(seed uint64) (func(x []float64), error) {
	const stream = 0x6465776d61726b            // any constant; one seed gives one sequence
	rng := rand.New(rand.NewPCG(seed, stream)) //nolint:gosec // draws must come again with their seed; nothing is secret
	list := in.List
	var students []distuv.StudentsT
	for i := range list {
		students = append(students, distuv.StudentsT{Sigma: 1, Nu: list[i].DegreesOfFreedom, Src: rng})
	}
	one := func(i int) float64 {
		switch {
		case list[i].DegreesOfFreedom > 0:
			return students[i].Rand()
		case list[i].Distribution == Rectangular:
			return math.Sqrt(3) * (2*rng.Float64() - 1)
		}
		return rng.NormFloat64()
	}
	if len(in.Correlations) == 0 {
		return func(x []float64) {
			for i := range list {
				x[i] = list[i].Value + list[i].Standard*one(i)
			}
		}, nil
	}
	g, ok := in.spread()
	if !ok {
		return nil, &CorrelationError{}
	}
	z, w := mat.NewVecDense(len(list), nil), mat.NewVecDense(len(list), nil)
	linked := make([]bool, len(list))
	for _, k := range in.Correlations {
		linked[k.A], linked[k.B] = true, true
	}
	return func(x []float64) {
		// Inputs that are correlated are jointly normal (JCGM 101, 6.4.8); the others keep their own distribution.
		for i := range list {
			z.SetVec(i, rng.NormFloat64())
		}
		w.MulVec(g, z)
		for i := range list {
			v := w.AtVec(i)
			if !linked[i] {
				v = one(i)
			}
			x[i] = list[i].Value + list[i].Standard*v
		}
	}, nil
}

// CorrelationError reports correlation coefficients that no inputs can have together.
type CorrelationError struct{}

func (*CorrelationError) Error() string {
	return "no inputs can have these correlations together: their matrix has a negative eigenvalue"
}

// tally collects draws.
type tally struct {
	coverage Coverage
	values   [][]float64 // by result
	begin    int         // of the batch
	rows     int
	batches  int
	moments  []batchMoments // by result
	scratch  []float64
}

// batchMoments accumulates what the batches say of mean, standard deviation and both ends of the interval.
type batchMoments [4]spread

// spread is a running mean and sum of squares (Welford).
type spread struct {
	n          int
	mean, sumS float64
}

func (s *spread) add(v float64) {
	s.n++
	d := v - s.mean
	s.mean += d / float64(s.n)
	s.sumS += d * (v - s.mean)
}

// ofMean returns the standard deviation of the mean.
func (s *spread) ofMean() float64 {
	if s.n < 2 {
		return math.NaN()
	}
	return math.Sqrt(s.sumS / float64(s.n-1) / float64(s.n))
}

func newTally(results, room int, p Coverage) *tally {
	t := &tally{coverage: p, values: make([][]float64, results), moments: make([]batchMoments, results)}
	for i := range t.values {
		t.values[i] = make([]float64, 0, room)
	}
	return t
}

func (t *tally) add(y []float64) {
	t.rows++
	for i, v := range y {
		if t.values[i] != nil {
			if math.IsNaN(v) {
				t.values[i] = nil // not known
				continue
			}
			t.values[i] = append(t.values[i], v)
		}
	}
}

// closeBatch takes the figures of the draws since the last batch.
func (t *tally) closeBatch() {
	if t.rows-t.begin < 2 {
		return
	}
	for i, all := range t.values {
		if all == nil {
			continue
		}
		t.scratch = append(t.scratch[:0], all[t.begin:]...)
		slices.Sort(t.scratch)
		mean, sd := meanAndDeviation(t.scratch)
		low, high := symmetric(t.scratch, t.coverage)
		for j, v := range [...]float64{mean, sd, low, high} {
			t.moments[i][j].add(v)
		}
	}
	t.begin = t.rows
	t.batches++
}

// stable reports whether twice the numerical uncertainty of every figure is below the tolerance that the digits of its
// standard uncertainty leave (JCGM 101, 7.9.4).
func (t *tally) stable(digits int) bool {
	if t.batches == 0 {
		return false
	}
	for i := range t.values {
		if t.values[i] == nil {
			continue
		}
		m := &t.moments[i]
		tolerance := Tolerance(m[1].mean, digits)
		for j := range m {
			if s := m[j].ofMean(); !(2*s <= tolerance) && !(m[1].mean == 0) {
				return false
			}
		}
	}
	return true
}

func (t *tally) drawn() []Drawn {
	out := make([]Drawn, len(t.values))
	nan := math.NaN()
	for i, v := range t.values {
		if len(v) < 2 {
			out[i] = Drawn{nan, nan, nan, nan, nan, nan, nan, nan, nan, nan}
			continue
		}
		slices.Sort(v)
		m := &t.moments[i]
		d := &out[i]
		d.Mean, d.Standard = meanAndDeviation(v)
		d.Low, d.High = symmetric(v, t.coverage)
		d.ShortLow, d.ShortHigh = shortest(v, t.coverage)
		d.MeanNumerical, d.StandardNumerical, d.LowNumerical, d.HighNumerical = m[0].ofMean(), m[1].ofMean(), m[2].ofMean(), m[3].ofMean()
	}
	return out
}

// meanAndDeviation returns mean and standard deviation (JCGM 101, eqs 16 and 17).
func meanAndDeviation(v []float64) (mean, sd float64) {
	var s spread
	for _, x := range v {
		s.add(x)
	}
	return s.mean, math.Sqrt(s.sumS / float64(s.n-1))
}

// symmetric returns the ends of the probabilistically symmetric interval of sorted values (JCGM 101, 7.7.2).
func symmetric(sorted []float64, p Coverage) (low, high float64) {
	tail := (1 - float64(p)) / 2
	return quantile(sorted, tail), quantile(sorted, 1-tail)
}

// quantile interpolates between sorted values, the i-th of which stands for probability (i - 1/2)/M (JCGM 101, 7.5).
func quantile(sorted []float64, p float64) float64 {
	at := p*float64(len(sorted)) - 0.5
	i := int(math.Max(0, math.Min(math.Floor(at), float64(len(sorted)-2))))
	share := math.Max(0, math.Min(at-float64(i), 1))
	return sorted[i] + share*(sorted[i+1]-sorted[i])
}

// shortest returns the shortest interval that holds the coverage of sorted values (JCGM 101, 7.7.4).
func shortest(sorted []float64, p Coverage) (low, high float64) {
	q := min(int(float64(p)*float64(len(sorted))+0.5), len(sorted)-1)
	best := 0
	for r := range len(sorted) - q {
		if sorted[r+q]-sorted[r] < sorted[best+q]-sorted[best] {
			best = r
		}
	}
	return sorted[best], sorted[best+q]
}
