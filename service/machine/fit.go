package machine

import (
	"math"

	"gonum.org/v1/gonum/mat"

	"dewmark/service/cycle"
)

// RatedPoint is a measured point of a compressor at one speed and one state of the suction gas.
type RatedPoint struct {
	Evaporation       float64 // dew temperature at suction, K
	Condensation      float64 // dew temperature at discharge, K; not with a pressure axis
	DischargePressure float64 // Pa; with a pressure axis alone
	MassFlow          float64 // kg/s
	Power             float64 // W
}

// MapFit is a map that was fitted to rated points.
type MapFit struct {
	MassFlow QuantityFit
	Power    QuantityFit
	Cautions []Caution
}

// QuantityFit is the least-squares fit of one quantity. Residuals are measured less fitted, in SI.
type QuantityFit struct {
	Coefficients     []float64 // c1 to c10 in the units that were asked for
	Residuals        []float64 // kg/s or W, in the order of the points
	RootMeanSquare   float64   // of the residuals
	LargestShare     float64   // largest residual over the measured value
	Rank             int       // how many of the ten terms the points carry
	PredictionSquare float64   // root mean square of what each point's residual is without it; NaN when a point carries a term alone
}

const (
	// rankShare is the singular value, as a share of the largest, below which a term is not carried by the points: with
	// centred and scaled temperatures those of a good grid lie above 1e-2, and rounding of the data to four digits moves them by 1e-5.
	rankShare = 1e-4
	terms     = 10
	mostRated = 100000
)

// FitMap fits the ten coefficients of mass flow and of power to points, in the units of a data sheet. Where the points do not
// carry ten terms it takes the smallest polynomial that fits as well, in temperatures counted from the middle of the points,
// and cautions. It returns a [*RefusedError] for points that cannot be fitted.
func FitMap(points []RatedPoint, units MapUnits, pressureAxis bool) (*MapFit, error) {
	var c checker
	if len(points) < 3 {
		c.wrong(OutOfBounds, "points", message("three points at least are needed, not %s", plain(float64(len(points)))))
	}
	if len(points) > mostRated {
		c.wrong(OutOfBounds, "points", message("at most %s points can be fitted", plain(mostRated)))
	}
	perFlow, perPower := c.inSI("units.mass_flow", units.MassFlow), c.inSI("units.power", units.Power)
	perPressure := c.inSI("units.pressure", units.Pressure)
	S, D := make([]float64, len(points)), make([]float64, len(points))
	flow, power := make([]float64, len(points)), make([]float64, len(points))
	for i := range points {
		q, field := &points[i], index("points", i)
		S[i] = units.Temperature.Reading(c.value(field+".evaporation_temperature", q.Evaporation, &temperatureBounds))
		if pressureAxis {
			D[i] = c.value(field+".discharge_pressure", q.DischargePressure, &pressureBounds) / perPressure
		} else {
			D[i] = units.Temperature.Reading(c.value(field+".condensation_temperature", q.Condensation, &temperatureBounds))
		}
		flow[i] = c.value(field+".mass_flow", q.MassFlow, &massFlowBounds) / perFlow
		power[i] = c.value(field+".power", q.Power, &bounds{cycle.Power, 0, mostAmount, true, false}) / perPower
	}
	if err := c.err(); err != nil {
		return nil, err
	}
	design, ok := newDesign(S, D)
	if !ok {
		return nil, refused(NoConvergence, "points", nil, "the singular values of the points could not be found")
	}
	out := &MapFit{MassFlow: design.fit(flow, perFlow), Power: design.fit(power, perPower)}
	if design.rank < terms {
		c.caution(RankDeficient, "points", "the points carry %s of the ten terms: the polynomial holds between them, not beside them; four different values at least on each axis, spread over the area, carry all",
			plain(float64(design.rank)))
	} else if len(points) == terms {
		c.caution(RankDeficient, "points", "ten points fix ten terms exactly: the residuals say nothing about the quality of the data")
	}
	out.Cautions = c.cautions
	return out, nil
}

// design is the matrix of the ten terms at the points, in centred and scaled coordinates s = (S - S0)/dS, d = (D - D0)/dD.
type design struct {
	n              int
	S0, dS, D0, dD float64
	rows           *mat.Dense
	svd            mat.SVD
	rank           int
	leverage       []float64
}

// powers are the exponents of S and D in the terms c1 to c10.
var powers = [terms][2]int{{0, 0}, {1, 0}, {0, 1}, {2, 0}, {1, 1}, {0, 2}, {3, 0}, {2, 1}, {1, 2}, {0, 3}}

func newDesign(S, D []float64) (*design, bool) {
	g := &design{n: len(S)}
	g.S0, g.dS = middle(S)
	g.D0, g.dD = middle(D)
	g.rows = mat.NewDense(max(g.n, terms), terms, nil) // rows of zeros where there are fewer points than terms
	for i := range S {
		s, d := (S[i]-g.S0)/g.dS, (D[i]-g.D0)/g.dD
		for j, p := range powers {
			g.rows.Set(i, j, math.Pow(s, float64(p[0]))*math.Pow(d, float64(p[1])))
		}
	}
	if !g.svd.Factorize(g.rows, mat.SVDThin) {
		return nil, false
	}
	values := g.svd.Values(nil)
	for g.rank < terms && values[g.rank] > rankShare*values[0] {
		g.rank++
	}
	var U mat.Dense
	g.svd.UTo(&U)
	g.leverage = make([]float64, g.n)
	for i := range g.leverage {
		for j := range g.rank {
			g.leverage[i] += U.At(i, j) * U.At(i, j)
		}
	}
	return g, true
}

// middle returns the middle and half the width of values, or 1 where they are all the same.
func middle(values []float64) (at, half float64) {
	low, high := math.Inf(1), math.Inf(-1)
	for _, v := range values {
		low, high = math.Min(low, v), math.Max(high, v)
	}
	if half = (high - low) / 2; half == 0 {
		half = 1
	}
	return (low + high) / 2, half
}

// fit fits y, of which one unit is so much in SI.
func (g *design) fit(y []float64, unit float64) QuantityFit {
	rows, _ := g.rows.Dims()
	right := mat.NewDense(rows, 1, nil)
	for i, v := range y {
		right.Set(i, 0, v)
	}
	var x mat.Dense
	g.svd.SolveTo(&x, right, g.rank)
	q := QuantityFit{Rank: g.rank, Residuals: make([]float64, g.n)}
	var sum, prediction float64
	for i, v := range y {
		fitted := 0.0
		for j := range terms {
			fitted += g.rows.At(i, j) * x.At(j, 0)
		}
		r := v - fitted
		q.Residuals[i] = r * unit
		sum += r * r
		q.LargestShare = math.Max(q.LargestShare, math.Abs(r/v))
		const alone = 1e-9 // of leverage below 1: the point carries a term alone
		if rest := 1 - g.leverage[i]; rest > alone {
			prediction += r * r / (rest * rest)
		} else {
			prediction = nan
		}
	}
	q.RootMeanSquare = unit * math.Sqrt(sum/float64(g.n))
	q.PredictionSquare = unit * math.Sqrt(prediction/float64(g.n))
	q.Coefficients = g.expand(&x)
	return q
}

// expand turns coefficients in centred and scaled coordinates into those of S and D.
func (g *design) expand(x *mat.Dense) []float64 {
	out := make([]float64, terms)
	for j, p := range powers {
		scale := x.At(j, 0) / (math.Pow(g.dS, float64(p[0])) * math.Pow(g.dD, float64(p[1])))
		for k, q := range powers { // (S - S0)^p0 (D - D0)^p1 by the binomial theorem
			if q[0] <= p[0] && q[1] <= p[1] {
				out[k] += scale * binomial(p[0], q[0]) * math.Pow(-g.S0, float64(p[0]-q[0])) *
					binomial(p[1], q[1]) * math.Pow(-g.D0, float64(p[1]-q[1]))
			}
		}
	}
	return out
}

// binomial returns n over k for n up to 3.
func binomial(n, k int) float64 {
	return [4][4]float64{{1}, {1, 1}, {1, 2, 1}, {1, 3, 3, 1}}[n][k]
}
