package uncertainty

import (
	"math"

	"gonum.org/v1/gonum/stat/distuv"
)

// Coverage is the probability that an interval holds the true value.
type Coverage float64

// TwoStandard is the coverage of two standard deviations on both sides of a normal distribution, about 95 %.
const TwoStandard Coverage = 0.9544997361036416

// Factor returns the coverage factor for a result with so many effective degrees of freedom, 0 or infinity for
// unlimited: the quantile of Student's t-distribution (JCGM 100, G.3 and G.4). Degrees of freedom are truncated to an
// integer, and count as 1 below that.
func (p Coverage) Factor(degrees float64) float64 {
	upper := (1 + float64(p)) / 2
	if degrees == 0 || degrees > normalFrom {
		if p == TwoStandard {
			return 2
		}
		return distuv.UnitNormal.Quantile(upper)
	}
	return distuv.StudentsT{Sigma: 1, Nu: math.Max(1, math.Floor(degrees))}.Quantile(upper)
}

// normalFrom is where Student's t-distribution has become the normal one to five digits.
const normalFrom = 1e5
