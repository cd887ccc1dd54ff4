package readings

import (
	"math"
	"time"
)

// tally accumulates a figure in constant memory: mean, scatter, extremes, a straight line over time (Welford's updates).
type tally struct {
	n                int
	mean, squares    float64 // of the values; sum of squared departures
	low, high        float64
	variances        float64 // sum of squared standard uncertainties
	meanT            float64 // s after the first
	squaresT, shared float64 // of times; of times and values
	first            time.Time
}

func (y *tally) add(at time.Time, value, standard float64) {
	if y.n == 0 {
		y.first, y.low, y.high = at, value, value
	}
	y.n++
	n := float64(y.n)
	t := at.Sub(y.first).Seconds()
	dT, d := t-y.meanT, value-y.mean
	y.meanT += dT / n
	y.mean += d / n
	y.squares += d * (value - y.mean)
	y.squaresT += dT * (t - y.meanT)
	y.shared += dT * (value - y.mean)
	y.low, y.high = math.Min(y.low, value), math.Max(y.high, value)
	y.variances += standard * standard
}

// deviation returns the standard deviation of the values.
func (y *tally) deviation() float64 {
	if y.n < 2 {
		return math.NaN()
	}
	return math.Sqrt(y.squares / float64(y.n-1))
}

// scatter returns the standard uncertainty of the mean by the scatter of the values alone; 0 for one value.
func (y *tally) scatter() float64 {
	if y.n < 2 {
		return 0
	}
	return y.deviation() / math.Sqrt(float64(y.n))
}

// standard returns the standard uncertainty of the mean. What makes readings uncertain is taken as common to all samples.
func (y *tally) standard() float64 {
	return math.Hypot(math.Sqrt(y.variances/float64(y.n)), y.scatter())
}

// trend returns the slope of the straight line of least squares and its standard uncertainty, per second.
func (y *tally) trend() (slope, standard float64) {
	if y.n < 3 || !(y.squaresT > 0) {
		return math.NaN(), math.NaN()
	}
	slope = y.shared / y.squaresT
	rest := math.Max(0, y.squares-slope*y.shared)
	return slope, math.Sqrt(rest / float64(y.n-2) / y.squaresT)
}

func (y *tally) asMean(f Figure) Mean {
	slope, u := y.trend()
	return Mean{
		Figure: f, Count: y.n, Mean: y.mean, Deviation: y.deviation(), Low: y.low, High: y.high, Standard: y.standard(), Trend: slope, TrendStandard: u,
	}
}
