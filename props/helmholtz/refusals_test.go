package helmholtz_test

import (
	"math"
	"strings"
	"testing"

	"dewmark/props/helmholtz"
)

// sound returns coefficients that New accepts, for tests to damage.
func sound() helmholtz.Coefficients {
	return helmholtz.Coefficients{
		GasConstant: 8.3, ReducingTemperature: 370, ReducingDensity: 5000,
		Ideal: helmholtz.Ideal{LnTau: 3, TauPowers: [][2]float64{{1, -0.5}}, PlanckEinstein: [][2]float64{{1, 2}}},
		Residual: helmholtz.Residual{
			Polynomial:        [][]float64{{0.1, 0.5, 1}},
			Exponential:       [][]float64{{0.1, 1, 2, 1}, {0.1, 1, 2, 1, 1.2}},
			DoubleExponential: [][]float64{{0.1, 1, 2, 2, 3}},
			Gaussian:          [][]float64{{0.1, 1, 2, 10, 20, 1.1, 0.9}},
			Associating:       [][]float64{{0.1, 1, 2, 8, 0.4, 1.1, 0.7, 1.2}},
			NonAnalytic:       [][]float64{{-0.1, 3.5, 0.85, 0.3, 0.32, 0.2, 28, 700}},
		},
	}
}

func TestNewRefusesBadCoefficients(t *testing.T) {
	if _, err := helmholtz.New(sound()); err != nil {
		t.Fatalf("sound coefficients: %v", err)
	}
	nan, inf := math.NaN(), math.Inf(1)
	for _, tt := range []struct {
		name   string
		damage func(c *helmholtz.Coefficients)
		words  string // that the message must hold
	}{
		{"no gas constant", func(c *helmholtz.Coefficients) { c.GasConstant = 0 }, "gas constant"},
		{"negative reducing temperature", func(c *helmholtz.Coefficients) { c.ReducingTemperature = -1 }, "reducing"},
		{"NaN reducing density", func(c *helmholtz.Coefficients) { c.ReducingDensity = nan }, "reducing"},
		{"infinite reducing temperature", func(c *helmholtz.Coefficients) { c.ReducingTemperature = inf }, "reducing"},
		{"short polynomial", func(c *helmholtz.Coefficients) { c.Residual.Polynomial[0] = []float64{1, 2} }, "polynomial row 0 has 2"},
		{"long polynomial", func(c *helmholtz.Coefficients) { c.Residual.Polynomial[0] = []float64{1, 2, 3, 4} }, "polynomial row 0 has 4"},
		{"empty row", func(c *helmholtz.Coefficients) { c.Residual.Polynomial[0] = nil }, "polynomial row 0 has 0"},
		{"short exponential", func(c *helmholtz.Coefficients) { c.Residual.Exponential[1] = []float64{1, 2, 3} }, "exponential row 1 has 3"},
		{"long exponential", func(c *helmholtz.Coefficients) { c.Residual.Exponential[1] = make([]float64, 6) }, "exponential row 1 has 6"},
		{"short double exponential", func(c *helmholtz.Coefficients) { c.Residual.DoubleExponential[0] = make([]float64, 4) }, "double_exponential row 0 has 4"},
		{"short Gaussian", func(c *helmholtz.Coefficients) { c.Residual.Gaussian[0] = make([]float64, 6) }, "gaussian row 0 has 6"},
		{"short associating", func(c *helmholtz.Coefficients) { c.Residual.Associating[0] = make([]float64, 7) }, "associating row 0 has 7"},
		{"short non-analytic", func(c *helmholtz.Coefficients) { c.Residual.NonAnalytic[0] = make([]float64, 7) }, "nonanalytic row 0 has 7"},
		{"NaN coefficient", func(c *helmholtz.Coefficients) { c.Residual.Gaussian[0][3] = nan }, "gaussian row 0 is not finite"},
		{"infinite exponent", func(c *helmholtz.Coefficients) { c.Residual.Polynomial[0][1] = inf }, "polynomial row 0 is not finite"},
		{"NaN in a non-analytic term", func(c *helmholtz.Coefficients) { c.Residual.NonAnalytic[0][7] = nan }, "nonanalytic row 0 is not finite"},
		{"negative power of delta", func(c *helmholtz.Coefficients) { c.Residual.Polynomial[0][2] = -1 }, "exponent of delta -1"},
		{"huge power of delta", func(c *helmholtz.Coefficients) { c.Residual.Gaussian[0][2] = 1e6 }, "exponent of delta 1e+06"},
		{"fractional exponent in an exponential", func(c *helmholtz.Coefficients) { c.Residual.Exponential[0][3] = 1.5 }, "1.5 in an exponential"},
		{"negative exponent in an exponential", func(c *helmholtz.Coefficients) { c.Residual.Exponential[0][3] = -1 }, "-1 in an exponential"},
		{"huge exponent in an exponential", func(c *helmholtz.Coefficients) { c.Residual.DoubleExponential[0][3] = 1e9 }, "1e+09 in an exponential"},
		{"NaN in the ideal part", func(c *helmholtz.Coefficients) { c.Ideal.Constant = nan }, "ideal"},
		{"infinity in the ideal part", func(c *helmholtz.Coefficients) { c.Ideal.PlanckEinstein[0][1] = inf }, "ideal"},
		{"NaN power in the ideal part", func(c *helmholtz.Coefficients) { c.Ideal.TauPowers[0][0] = nan }, "ideal"},
		{"negative theta", func(c *helmholtz.Coefficients) { c.Ideal.PlanckEinstein[0][1] = -2 }, "theta -2"},
		{"too many terms", func(c *helmholtz.Coefficients) {
			for i := range 200 {
				c.Residual.Polynomial = append(c.Residual.Polynomial, []float64{1, 0.01 * float64(i), 1 + 0.01*float64(i)})
			}
		}, "at most"},
	} {
		c := sound()
		tt.damage(&c)
		eq, err := helmholtz.New(c)
		if err == nil || eq != nil {
			t.Errorf("%s: New returned %v, %v; want an error", tt.name, eq != nil, err)
			continue
		}
		if !strings.Contains(err.Error(), tt.words) {
			t.Errorf("%s: error %q does not say %q", tt.name, err, tt.words)
		}
	}
}
