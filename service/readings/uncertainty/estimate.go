package uncertainty

import (
	"cmp"
	"math"
	"slices"
)

// Estimate is a result with its uncertainty to first order. A result that is not known is NaN throughout.
type Estimate struct {
	Value            float64
	Standard         float64 // combined standard uncertainty
	Expanded         float64 // CoverageFactor times Standard
	CoverageFactor   float64
	DegreesOfFreedom float64 // effective; infinite where all inputs' are
	Budget           []Share // nil without inputs; the largest share first
}

// NoEstimate is the estimate of what is not known.
var NoEstimate = Estimate{math.NaN(), math.NaN(), math.NaN(), math.NaN(), math.NaN(), nil}

// Known reports whether there is a result.
func (e *Estimate) Known() bool { return !math.IsNaN(e.Value) }

// Share is what one input adds to the uncertainty of a result.
type Share struct {
	Input       string
	Sensitivity float64 // partial derivative of the result by the input, SI
	Standard    float64 // of the input, SI
	// Share is the part of the variance: (c u)² / u_c², and half of what the correlations with other inputs add, which may
	// leave it below zero. Shares add up to 1.
	Share   float64
	Assumed bool // the input's uncertainty is a default
}

// Estimate returns a result with its uncertainty at a coverage, or NoEstimate when either is no finite number. The budget
// is appended to room, and the rest of room returned.
func (in *Inputs) Estimate(y Linear, p Coverage, room []Share) (Estimate, []Share) {
	if !y.Known() {
		return NoEstimate, room
	}
	e := Estimate{Value: y.Value, Standard: in.Standard(y), DegreesOfFreedom: math.Inf(1)}
	if math.IsInf(y.Value, 0) || !(e.Standard <= math.MaxFloat64) {
		return NoEstimate, room
	}
	if e.Standard == 0 {
		e.CoverageFactor = p.Factor(0)
		e.Expanded = e.CoverageFactor * e.Standard
		return e, room
	}
	variance := e.Standard * e.Standard
	e.Budget, room = in.budget(y, variance, room)
	e.DegreesOfFreedom = in.degrees(y, variance)
	e.CoverageFactor = p.Factor(e.DegreesOfFreedom)
	e.Expanded = e.CoverageFactor * e.Standard
	return e, room
}

// budget returns the shares of a variance, the largest first.
func (in *Inputs) budget(y Linear, variance float64, room []Share) (budget, rest []Share) {
	type part struct {
		share float64
		i     int
	}
	parts := make([]part, 0, 48) // sorting these moves no names; more inputs than most samples have
	for i := range in.List {
		if c := y.slopes[i]; c != 0 {
			parts = append(parts, part{c * in.List[i].Standard * in.leaning(y, i) / variance, i})
		}
	}
	slices.SortStableFunc(parts, func(a, b part) int { return cmp.Compare(b.share, a.share) })
	from := len(room)
	for _, k := range parts {
		x := &in.List[k.i]
		room = append(room, Share{x.Name, y.slopes[k.i], x.Standard, k.share, x.Assumed})
	}
	return room[from:len(room):len(room)], room
}

// leaning returns the covariance of a result with input i over the input's standard uncertainty.
func (in *Inputs) leaning(y Linear, i int) float64 {
	v := y.slopes[i] * in.List[i].Standard
	for _, k := range in.Correlations {
		switch i {
		case k.A:
			v += k.Coefficient * y.slopes[k.B] * in.List[k.B].Standard
		case k.B:
			v += k.Coefficient * y.slopes[k.A] * in.List[k.A].Standard
		}
	}
	return v
}

// degrees returns the effective degrees of freedom by the formula of Welch and Satterthwaite (JCGM 100, eq G.2b). It
// holds for independent inputs: where two that are correlated have finite ones, the result has at most the fewer.
func (in *Inputs) degrees(y Linear, variance float64) float64 {
	var sum float64
	for i := range in.List {
		if x := &in.List[i]; x.DegreesOfFreedom > 0 {
			part := y.slopes[i] * x.Standard
			sum += part * part * part * part / x.DegreesOfFreedom
		}
	}
	if sum == 0 {
		return math.Inf(1)
	}
	nu := variance * variance / sum
	for _, k := range in.Correlations {
		a, b := in.List[k.A].DegreesOfFreedom, in.List[k.B].DegreesOfFreedom
		if a > 0 && b > 0 && y.slopes[k.A] != 0 && y.slopes[k.B] != 0 {
			nu = math.Min(nu, math.Min(a, b))
		}
	}
	return nu
}
