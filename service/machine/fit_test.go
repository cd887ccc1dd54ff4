package machine

import (
	"errors"
	"math"
	"math/rand/v2"
	"slices"
	"testing"
)

// ratedGrid returns points of two polynomials in °C, kg/h and W on a grid of dew temperatures.
func ratedGrid(flow, power coefficients, S, D []float64) (points []RatedPoint) {
	for _, s := range S {
		for _, d := range D {
			m, _, _ := flow.at(s, d)
			w, _, _ := power.at(s, d)
			points = append(points, RatedPoint{Evaporation: s + 273.15, Condensation: d + 273.15, MassFlow: m / 3600, Power: w})
		}
	}
	return points
}

var (
	fitS     = []float64{-25, -20, -15, -10, -5, 0, 5, 10}
	fitD     = []float64{25, 32, 40, 47, 55, 62}
	fitUnits = MapUnits{MassFlow: 1.0 / 3600}
)

// ten returns the polynomial of ten coefficients.
func ten(given []float64) (c coefficients) {
	copy(c[:], given)
	return c
}

func demoPolynomials(t *testing.T) (flow, power coefficients) {
	t.Helper()
	m := demo(t, "harrow-8").Compressor.Maps[1]
	return ten(m.MassFlow), ten(m.Power)
}

// Points of a polynomial give the polynomial back.
func TestFitRecoversCoefficients(t *testing.T) {
	flow, power := demoPolynomials(t)
	f, err := FitMap(ratedGrid(flow, power, fitS, fitD), fitUnits, false)
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct {
		q    *QuantityFit
		want coefficients
		unit float64
	}{{&f.MassFlow, flow, 1.0 / 3600}, {&f.Power, power, 1}} {
		if c.q.Rank != terms || len(c.q.Coefficients) != terms || !(c.q.LargestShare <= 1e-12) || !(c.q.PredictionSquare <= 1e-9*c.unit) {
			t.Errorf("fit %+v", c.q)
		}
		for i, got := range c.q.Coefficients {
			// The terms are compared by what they are worth at the corner of the data.
			size := math.Pow(25, float64(powers[i][0])) * math.Pow(62, float64(powers[i][1]))
			if !(math.Abs(got-c.want[i])*size <= 1e-8) {
				t.Errorf("c%d: %.12g, want %.12g", i+1, got, c.want[i])
			}
		}
	}
	if len(f.Cautions) > 0 {
		t.Errorf("cautions %v", f.Cautions)
	}
}

// With noise the residuals are of its size, and leaving a point out shows a little more.
func TestFitOfNoisyPoints(t *testing.T) {
	flow, power := demoPolynomials(t)
	points := ratedGrid(flow, power, fitS, fitD)
	r := rand.New(rand.NewPCG(5, 5))
	const noise = 2.0 // W
	for i := range points {
		points[i].Power += noise * r.NormFloat64()
	}
	f, err := FitMap(points, fitUnits, false)
	if err != nil {
		t.Fatal(err)
	}
	q := &f.Power
	// 48 points less 10 terms: the expected root mean square is sqrt(38/48) of the noise, here within three standard errors.
	want := noise * math.Sqrt(38.0/48)
	if !(math.Abs(q.RootMeanSquare-want) <= 3*want/math.Sqrt(2*38)) || !(q.PredictionSquare > q.RootMeanSquare) {
		t.Errorf("residuals %g W, without each point %g W; noise %g W", q.RootMeanSquare, q.PredictionSquare, noise)
	}
	var sum float64
	polynomial := ten(q.Coefficients)
	for i, v := range q.Residuals {
		fitted, _, _ := polynomial.at(points[i].Evaporation-273.15, points[i].Condensation-273.15)
		if !(math.Abs(points[i].Power-fitted-v) <= 1e-6) {
			t.Errorf("residual %d: %g W, the polynomial leaves %g", i, v, points[i].Power-fitted)
		}
		sum += v * v
	}
	if got := math.Sqrt(sum / 48); !(math.Abs(got/q.RootMeanSquare-1) <= 1e-12) {
		t.Errorf("root mean square %g, of the residuals %g", q.RootMeanSquare, got)
	}
}

// Points that do not carry ten terms are fitted as far as they go, with a caution; between them the fit holds.
func TestFitCautionsMissingTerms(t *testing.T) {
	flow, power := demoPolynomials(t)
	for _, c := range []struct {
		name string
		S, D []float64
		rank int
	}{
		{"three evaporations", fitS[1:4], fitD, 9},
		{"two condensations", fitS, fitD[:2], 7},
		{"one condensation", fitS, fitD[2:3], 4},
		{"three by two", fitS[:3], fitD[:2], 6},
	} {
		points := ratedGrid(flow, power, c.S, c.D)
		f, err := FitMap(points, fitUnits, false)
		if err != nil {
			t.Fatal(err)
		}
		if f.MassFlow.Rank != c.rank || !slices.ContainsFunc(f.Cautions, func(k Caution) bool { return k.Code == RankDeficient }) {
			t.Errorf("%s: rank %d, want %d, cautions %v", c.name, f.MassFlow.Rank, c.rank, f.Cautions)
		}
		if !(f.MassFlow.LargestShare <= 0.01) {
			t.Errorf("%s: misses its own points by %g", c.name, f.MassFlow.LargestShare)
		}
	}
	if f, err := FitMap(ratedGrid(flow, power, fitS[:4], fitD[:4])[:10], fitUnits, false); err != nil || len(f.Cautions) != 1 || f.MassFlow.Rank > terms {
		t.Errorf("ten points: %+v, %v", f, err)
	}
}

// A transcritical map counts by discharge pressure, in the unit of the data sheet.
func TestFitByPressure(t *testing.T) {
	var points []RatedPoint
	for s := -15.0; s <= 10; s += 5 {
		for bar := 75.0; bar <= 130; bar += 11 {
			points = append(points, RatedPoint{Evaporation: s + 273.15, DischargePressure: bar * 1e5, MassFlow: (100 + 3*s - 0.2*bar + 0.01*s*bar) / 3600, Power: 1000 + 20*bar - 0.1*s*bar})
		}
	}
	f, err := FitMap(points, MapUnits{MassFlow: 1.0 / 3600, Pressure: 1e5}, true)
	if err != nil {
		t.Fatal(err)
	}
	for i, want := range []float64{100, 3, -0.2, 0, 0.01, 0, 0, 0, 0, 0} {
		if got := f.MassFlow.Coefficients[i]; !(math.Abs(got-want) <= 1e-6*math.Max(1, math.Abs(want))) {
			t.Errorf("c%d: %g, want %g", i+1, got, want)
		}
	}
}

func TestFitRefusals(t *testing.T) {
	good := RatedPoint{Evaporation: 263, Condensation: 313, MassFlow: 0.01, Power: 1000}
	for name, points := range map[string][]RatedPoint{
		"two points":    {good, good},
		"no flow":       {good, good, {Evaporation: 263, Condensation: 313, Power: 1000}},
		"not a number":  {good, good, {Evaporation: math.NaN(), Condensation: 313, MassFlow: 0.01, Power: 1000}},
		"negative":      {good, good, {Evaporation: 263, Condensation: 313, MassFlow: 0.01, Power: -1}},
		"no pressure":   nil,
		"absolute zero": {good, good, {Evaporation: 0, Condensation: 313, MassFlow: 0.01, Power: 1000}},
	} {
		_, err := FitMap(points, fitUnits, false)
		if _, ok := errors.AsType[*RefusedError](err); !ok {
			t.Errorf("%s: %v", name, err)
		}
	}
	if f, err := FitMap([]RatedPoint{good, good, good}, fitUnits, false); err != nil || f.MassFlow.Rank != 1 || !(f.MassFlow.LargestShare <= 1e-12) {
		t.Errorf("one point three times: %+v, %v", f, err)
	}
}
