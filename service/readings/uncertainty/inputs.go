package uncertainty

import (
	"math"

	"gonum.org/v1/gonum/mat"
)

// Distribution is what an input is drawn from.
type Distribution uint8

// The distributions. An input with finite degrees of freedom is drawn from a scaled and shifted t-distribution with them
// (JCGM 101, 6.4.9) whatever its own distribution.
const (
	Normal      Distribution = iota
	Rectangular              // limits that are known, and nothing else (JCGM 101, 6.4.2)
)

// Input is an uncertain number that a calculation starts from.
type Input struct {
	Name     string
	Value    float64
	Standard float64 // standard uncertainty, in the unit of the value; above 0
	// DegreesOfFreedom of the standard uncertainty; 0 means infinite.
	DegreesOfFreedom float64
	Distribution     Distribution
	Assumed          bool // the uncertainty is a default
}

// Correlation is the correlation coefficient of two inputs, by their indices.
type Correlation struct {
	A, B        int
	Coefficient float64
}

// Inputs are the inputs of a calculation and their correlations. The zero value is empty.
type Inputs struct {
	List []Input
	// Correlations holds pairs of different inputs, each at most once. Those of one input with the others must be possible
	// together, see [Inputs.Possible].
	Correlations []Correlation
}

// Possible reports whether inputs can have these correlations: their matrix has no negative eigenvalue beyond rounding.
func (in *Inputs) Possible() bool {
	if len(in.Correlations) == 0 {
		return true
	}
	_, ok := in.spread()
	return ok
}

// spread returns a matrix G with G Gᵀ the correlation matrix of the inputs. It goes by eigenvalues, because full
// correlation leaves a matrix that is only semidefinite.
func (in *Inputs) spread() (*mat.Dense, bool) {
	const rounding = 1e-9 // coefficients come with few digits; a true contradiction is far larger
	n := len(in.List)
	r := mat.NewSymDense(n, nil)
	for i := range n {
		r.SetSym(i, i, 1)
	}
	for _, k := range in.Correlations {
		r.SetSym(k.A, k.B, k.Coefficient)
	}
	var e mat.EigenSym
	if !e.Factorize(r, true) {
		return nil, false
	}
	var g mat.Dense
	e.VectorsTo(&g)
	for j, v := range e.Values(nil) {
		if !(v >= -rounding*float64(n)) {
			return nil, false
		}
		root := math.Sqrt(math.Max(0, v))
		for i := range n {
			g.Set(i, j, root*g.At(i, j))
		}
	}
	return &g, true
}

// Covariance returns the covariance of two results to first order (JCGM 100, eq F.2 and 5.2.2).
func (in *Inputs) Covariance(y, z Linear) float64 {
	if y.slopes == nil || z.slopes == nil {
		return 0
	}
	var v float64
	for i := range in.List {
		u := in.List[i].Standard
		v += y.slopes[i] * z.slopes[i] * u * u
	}
	for _, k := range in.Correlations {
		v += k.Coefficient * in.List[k.A].Standard * in.List[k.B].Standard *
			(y.slopes[k.A]*z.slopes[k.B] + y.slopes[k.B]*z.slopes[k.A])
	}
	return v
}

// Standard returns the combined standard uncertainty of a result to first order (JCGM 100, eq 13).
func (in *Inputs) Standard(y Linear) float64 {
	// Correlations can leave a trace below zero where everything cancels.
	return math.Sqrt(math.Max(0, in.Covariance(y, y)))
}
