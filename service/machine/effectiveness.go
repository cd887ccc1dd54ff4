package machine

import "math"

// nearlyEqual is the relative difference of two temperature differences below which their logarithmic mean comes from its
// series: the quotient would lose its digits to cancellation.
const nearlyEqual = 1e-4

// logMean returns the logarithmic mean of two temperature differences, and NaN unless both are positive: streams that
// cross have none.
func logMean(a, b float64) float64 {
	if !(a > 0 && b > 0) {
		return math.NaN()
	}
	d := a - b
	if math.Abs(d) < nearlyEqual*b {
		mean := (a + b) / 2
		return mean * (1 - d*d/(mean*mean)/12)
	}
	return d / math.Log(a/b)
}

// effectiveness returns the heat that two streams exchange over the most they could, at NTU = UA/Cmin and the ratio of the
// smaller to the larger capacity flow (Kays and London, Compact Heat Exchangers). streamIsMax says that the secondary
// stream has the larger one.
func effectiveness(a Arrangement, ntu, ratio float64, streamIsMax bool) float64 {
	if ratio < tinyRatio {
		return -math.Expm1(-ntu)
	}
	switch {
	case a == ParallelFlow:
		return -math.Expm1(-ntu*(1+ratio)) / (1 + ratio)
	case a == CrossflowUnmixed: // approximately
		return -math.Expm1(math.Pow(ntu, 0.22) / ratio * math.Expm1(-ratio*math.Pow(ntu, 0.78)))
	case a == CrossflowStreamMixed && streamIsMax, a == CrossflowStreamUnmixed && !streamIsMax: // larger stream mixed
		return -math.Expm1(ratio*math.Expm1(-ntu)) / ratio
	case a == CrossflowStreamMixed, a == CrossflowStreamUnmixed: // smaller stream mixed
		return -math.Expm1(math.Expm1(-ratio*ntu) / ratio)
	}
	if 1-ratio < tinyRatio {
		return ntu / (1 + ntu)
	}
	x := math.Exp(-ntu * (1 - ratio))
	return (1 - x) / (1 - ratio*x)
}

// shortfall returns 1 less the effectiveness, to full precision where that is close to 1 in the arrangements that reach it.
func shortfall(a Arrangement, ntu, ratio float64, streamIsMax bool) float64 {
	switch {
	case ratio < tinyRatio:
		return math.Exp(-ntu)
	case a == CrossflowUnmixed:
		return math.Exp(math.Pow(ntu, 0.22) / ratio * math.Expm1(-ratio*math.Pow(ntu, 0.78)))
	}
	return 1 - effectiveness(a, ntu, ratio, streamIsMax)
}

// tinyRatio is where a ratio of capacity flows counts as 0 or as 1: the formulas lose their digits there.
const tinyRatio = 1e-9
