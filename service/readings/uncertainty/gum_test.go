package uncertainty

import (
	"encoding/csv"
	"math"
	"os"
	"strconv"
	"strings"
	"testing"
)

// testdata/jcgm100_table_g2.csv, to half a unit of its last digit.
func TestFactorTableG2(t *testing.T) {
	f, err := os.Open("testdata/jcgm100_table_g2.csv")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	r := csv.NewReader(f)
	r.Comment = '#'
	rows, err := r.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	for _, row := range rows[1:] {
		nu, err := strconv.ParseFloat(row[0], 64)
		if err != nil {
			t.Fatal(err)
		}
		for i, p := range []Coverage{TwoStandard, 0.95, 0.99} {
			want, err := strconv.ParseFloat(row[i+1], 64)
			if err != nil {
				t.Fatal(err)
			}
			digits := len(row[i+1]) - strings.Index(row[i+1], ".") - 1
			if got := p.Factor(nu); !(math.Abs(got-want) <= 0.5*math.Pow(10, -float64(digits))) {
				t.Errorf("%.4g at %g degrees of freedom: %.5f, the table has %s", float64(p), nu, got, row[i+1])
			}
		}
	}
	if got := TwoStandard.Factor(0); got != 2 {
		t.Errorf("factor of two standard deviations: %.17g", got)
	}
	if a, b := Coverage(0.95).Factor(16.7), Coverage(0.95).Factor(16); a != b {
		t.Errorf("16.7 degrees of freedom give %g, 16 give %g: they are truncated (JCGM 100, G.4.1)", a, b)
	}
}

// JCGM 100:2008, H.1, calibration of an end gauge: components in nm with their degrees of freedom; u_c = 32 nm, 16 effective
// degrees of freedom, U99 = 93 nm (from memory).
func TestEndGaugeH1(t *testing.T) {
	in := Inputs{List: []Input{
		{Name: "standard", Standard: 25, DegreesOfFreedom: 18},
		{Name: "difference", Standard: 9.7, DegreesOfFreedom: 25.6},
		{Name: "expansion", Standard: 2.9, DegreesOfFreedom: 50},
		{Name: "temperature", Standard: 16.6, DegreesOfFreedom: 2},
	}}
	var c Calculus
	c.Reset(len(in.List))
	y := c.Input(0, 50_000_838)
	for i := 1; i < 4; i++ {
		y = c.Sum(y, c.Input(i, 0))
	}
	e, _ := in.Estimate(y, 0.99, nil)
	if math.Round(e.Standard) != 32 || math.Floor(e.DegreesOfFreedom) != 16 || math.Round(e.Expanded) != 93 {
		t.Errorf("u = %.2f nm with %.2f degrees of freedom, U99 = %.2f nm; the guide has 32, 16, 93", e.Standard, e.DegreesOfFreedom, e.Expanded)
	}
	var sum float64
	for i, s := range e.Budget {
		sum += s.Share
		if i > 0 && s.Share > e.Budget[i-1].Share {
			t.Errorf("the budget is not in order: %v", e.Budget)
		}
	}
	if math.Abs(sum-1) > 1e-12 || e.Budget[0].Input != "standard" {
		t.Errorf("shares add up to %g, the first is %q", sum, e.Budget[0].Input)
	}
}

// JCGM 100:2008, H.2, resistance, reactance and impedance from correlated voltage, current and phase: tables H.3 and H.4
// (from memory).
func TestImpedanceH2(t *testing.T) {
	in := Inputs{
		List: []Input{
			{Name: "V", Value: 4.9990, Standard: 0.0032},
			{Name: "I", Value: 19.6610e-3, Standard: 0.0095e-3},
			{Name: "phi", Value: 1.04446, Standard: 0.00075},
		},
		Correlations: []Correlation{{0, 1, -0.36}, {0, 2, 0.86}, {1, 2, -0.65}},
	}
	if !in.Possible() {
		t.Fatal("the correlations of the example are possible")
	}
	var c Calculus
	c.Reset(3)
	V, I, phi := c.Input(0, in.List[0].Value), c.Input(1, in.List[1].Value), c.Input(2, in.List[2].Value)
	Z := c.Quotient(V, I)
	sin, cos := math.Sincos(phi.Value)
	R := c.Product(Z, c.Of(cos, phi, -sin))
	X := c.Product(Z, c.Of(sin, phi, cos))
	for _, row := range []struct {
		name          string
		y             Linear
		value, u      float64
		dValue, dUnit float64 // half a unit of the last digit printed
	}{
		{"R", R, 127.732, 0.071, 0.0005, 0.0005},
		{"X", X, 219.847, 0.295, 0.0005, 0.0005},
		{"Z", Z, 254.260, 0.236, 0.0005, 0.0005},
	} {
		u := in.Standard(row.y)
		// The inputs are rounded to the digits printed, which moves u by up to 1 %.
		if !(math.Abs(row.y.Value-row.value) < 0.02) || !(math.Abs(u-row.u) < 0.01*row.u+row.dUnit) {
			t.Errorf("%s = %.4f, u = %.4f; the guide has %.3f, %.3f", row.name, row.y.Value, u, row.value, row.u)
		}
	}
	r := in.Covariance(R, X) / in.Standard(R) / in.Standard(X)
	if !(math.Abs(r-(-0.588)) < 0.02) {
		t.Errorf("correlation of R and X %.3f; the guide has -0.588", r)
	}
	e, _ := in.Estimate(X, TwoStandard, nil)
	var sum float64
	for _, s := range e.Budget {
		sum += s.Share
	}
	if math.Abs(sum-1) > 1e-12 {
		t.Errorf("with correlations the shares add up to %g", sum)
	}
}

func TestImpossibleCorrelations(t *testing.T) {
	in := Inputs{List: make([]Input, 3), Correlations: []Correlation{{0, 1, 0.9}, {1, 2, 0.9}, {0, 2, -0.9}}}
	if in.Possible() {
		t.Error("three inputs cannot be correlated by 0.9, 0.9 and -0.9")
	}
	in.Correlations[2].Coefficient = 1
	in.Correlations[0].Coefficient, in.Correlations[1].Coefficient = 1, 1
	if !in.Possible() {
		t.Error("three inputs can be one and the same")
	}
}

// Inputs that are correlated and both have few degrees of freedom do not gain any by it.
func TestCorrelatedDegrees(t *testing.T) {
	in := Inputs{
		List:         []Input{{Standard: 1, DegreesOfFreedom: 5}, {Standard: 1, DegreesOfFreedom: 9}},
		Correlations: []Correlation{{0, 1, 1}},
	}
	var c Calculus
	c.Reset(2)
	e, _ := in.Estimate(c.Sum(c.Input(0, 0), c.Input(1, 0)), 0.95, nil)
	if e.DegreesOfFreedom != 5 || !(math.Abs(e.Standard-2) < 1e-12) {
		t.Errorf("%g degrees of freedom, u = %g", e.DegreesOfFreedom, e.Standard)
	}
}

// Every operation carries the derivative that its values have.
func TestCalculus(t *testing.T) {
	f := func(c *Calculus, x, y Linear) []Linear {
		z := c.Product(c.Sum(x, c.Scaled(y, 3)), c.Quotient(x, y))
		return []Linear{
			z, c.Difference(z, c.Shifted(x, 2)), c.Quotient(c.Complement(y), z),
			c.Weighted([]Linear{x, z, y}, []float64{0.2, 0.5, 0.3}), c.OfTwo(math.Atan2(x.Value, y.Value),
				x, y.Value/(x.Value*x.Value+y.Value*y.Value), y, -x.Value/(x.Value*x.Value+y.Value*y.Value)),
		}
	}
	var c, plain Calculus
	c.Reset(2)
	x, y := 1.7, -0.6
	got := f(&c, c.Input(0, x), c.Input(1, y))
	const h = 1e-5
	at := func(x, y float64) []Linear { return f(&plain, Constant(x), Constant(y)) }
	off := func(slope, difference float64) bool { return !(math.Abs(slope-difference) < 1e-6*(1+math.Abs(slope))) }
	for i, g := range got {
		byX := (at(x+h, y)[i].Value - at(x-h, y)[i].Value) / (2 * h)
		byY := (at(x, y+h)[i].Value - at(x, y-h)[i].Value) / (2 * h)
		if at(x, y)[i].Value != g.Value || off(g.Slope(0), byX) || off(g.Slope(1), byY) {
			t.Errorf("%d: %g with slopes %g and %g; differences give %g and %g", i, g.Value, g.Slope(0), g.Slope(1), byX, byY)
		}
	}
	if u := c.Quotient(Constant(1), Constant(0)); u.Known() {
		t.Error("a quotient by zero is known")
	}
}
