package precise

import (
	"go/parser"
	"go/token"
	"io/fs"
	"math"
	"math/big"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"dewmark/props/helmholtz"
)

// digits returns how many decimal digits of got agree with want.
func digits(got, want *big.Float) float64 {
	d := sub(got, want)
	if d.Sign() == 0 {
		return math.Inf(1)
	}
	return -math.Log10(math.Abs(Float(quo(d, want))))
}

func parse(t *testing.T, s string) *big.Float {
	t.Helper()
	x, _, err := big.ParseFloat(s, 10, bits, big.ToNearestEven)
	if err != nil {
		t.Fatal(err)
	}
	return x
}

// The constants are in every table of constants, here from memory.
func TestConstants(t *testing.T) {
	const e = "2.71828182845904523536028747135266249775724709369995957496697"
	for _, tt := range []struct {
		name string
		got  *big.Float
		want string
	}{
		{"ln 2", ln2, "0.693147180559945309417232121458176568075500134360255254120680"},
		{"ln 10", log(Number(10)), "2.30258509299404568401799145468436420760110148862877297603333"},
		{"e", exp(Number(1)), e},
		{"ln e", log(parse(t, e)), "1"},
		{"root of 2", powerOf(Number(2), 0.5), "1.41421356237309504880168872420969807856967187537694807317668"},
		{"2^10", powerOf(Number(2), 10), "1024"},
	} {
		if n := digits(tt.got, parse(t, tt.want)); !(n > 49) {
			t.Errorf("%s = %.60g, want %s: %.1f digits", tt.name, tt.got, tt.want, n)
		}
	}
}

func powerOf(x *big.Float, y float64) *big.Float {
	j := constant(0)
	j.v = x
	return j.power(y).v
}

func TestFunctionalEquations(t *testing.T) {
	for _, x := range []float64{-1234.5, -30.25, -0.7, -1e-9, 1e-12, 0.3, 1, 17, 699.5} {
		a, b := Number(x), Number(0.1)
		if n := digits(mul(exp(a), exp(b)), exp(add(a, b))); !(n > 48) {
			t.Errorf("e^%g e^0.1 is e^(%g+0.1) to %.1f digits", x, x, n)
		}
		if n := digits(log(exp(a)), a); x != 0 && !(n > 40) {
			t.Errorf("ln e^%g: %.1f digits", x, n)
		}
	}
	for _, x := range []float64{0.37, 0.9999, 1.0001, 1.3, 250} {
		if n := digits(mul(powerOf(Number(x), 0.25), powerOf(Number(x), 1.75)), mul(Number(x), Number(x))); !(n > 40) {
			t.Errorf("%g^0.25 %g^1.75: %.1f digits", x, x, n)
		}
	}
}

// every holds one term of each kind, with exponents of every kind that occurs; the numbers are made up.
var every = helmholtz.Coefficients{
	GasConstant: 8, ReducingTemperature: 300, ReducingDensity: 5000,
	Ideal: helmholtz.Ideal{
		Constant: 1, Tau: 2, LnTau: 3, TauLnTau: 0.5,
		TauPowers: [][2]float64{{-0.3, -0.75}, {0.2, 2}}, PlanckEinstein: [][2]float64{{1.5, 2.25}},
	},
	Residual: helmholtz.Residual{
		Polynomial:        [][]float64{{0.7, -0.5, 2}, {0.4, 0.23, 1}},
		Exponential:       [][]float64{{-0.3, 1.5, 4, 2}, {0.2, 3, 2.5, 1, 1.3}},
		DoubleExponential: [][]float64{{0.6, 1.25, 2, 2, 3}},
		Gaussian:          [][]float64{{-1.1, 2, 3, 15, 20, 1.1, 0.9}},
		Associating:       [][]float64{{0.4, 1.2, 4, 8, 0.44, 1.1, 0.7, 1.2}},
		NonAnalytic:       [][]float64{{-0.15, 3.5, 0.85, 0.3, 0.32, 0.2, 28, 700}},
	},
}

// TestDerivatives holds the jets against central differences, which in these digits tell a slip from truncation.
func TestDerivatives(t *testing.T) {
	e := New(every)
	T, rho := Number(310), Number(4200)
	tau, delta := quo(Number(300), T), quo(rho, Number(5000))
	h := Number(1e-14)
	at := func(i, j float64) Alpha { // moved by i h in tau and j h in delta
		r, _ := e.Residual(quo(Number(300), add(tau, mul(Number(i), h))), mul(Number(5000), add(delta, mul(Number(j), h))))
		return r
	}
	difference := func(up, down *big.Float) *big.Float { return quo(sub(up, down), add(h, h)) }
	a := at(0, 0)
	d := difference(at(0, 1).A, at(0, -1).A)
	s := difference(at(1, 0).A, at(-1, 0).A)
	second := func(up, mid, down *big.Float) *big.Float { return quo(sub(add(up, down), add(mid, mid)), mul(h, h)) }
	for _, tt := range []struct {
		name      string
		got, want *big.Float
	}{
		{"D", a.D, mul(delta, d)},
		{"T", a.T, mul(tau, s)},
		{"DD", a.DD, mul(mul(delta, delta), second(at(0, 1).A, a.A, at(0, -1).A))},
		{"TT", a.TT, mul(mul(tau, tau), second(at(1, 0).A, a.A, at(-1, 0).A))},
		{"DT", a.DT, mul(mul(tau, delta), quo(sub(add(at(1, 1).A, at(-1, -1).A), add(at(1, -1).A, at(-1, 1).A)), mul(Number(4), mul(h, h))))},
	} {
		if n := digits(tt.got, tt.want); !(n > 18) {
			t.Errorf("%s = %.30g, differences give %.30g: %.1f digits", tt.name, tt.got, tt.want, n)
		}
	}
	ideal := func(i float64) Alpha { return e.Ideal(quo(Number(300), add(tau, mul(Number(i), h)))) }
	b := ideal(0)
	if n := digits(b.T, mul(tau, difference(ideal(1).A, ideal(-1).A))); !(n > 18) {
		t.Errorf("ideal T: %.1f digits", n)
	}
	if n := digits(b.TT, mul(mul(tau, tau), second(ideal(1).A, b.A, ideal(-1).A))); !(n > 18) {
		t.Errorf("ideal TT: %.1f digits", n)
	}
}

// TestOnlyTestsImport keeps the packages made for tests out of the program.
func TestOnlyTestsImport(t *testing.T) {
	own := []string{`"dewmark/props/internal/precise"`, `"dewmark/props/internal/printed"`}
	root := filepath.Join("..", "..", "..")
	files := 0
	err := filepath.WalkDir(root, func(path string, entry fs.DirEntry, err error) error {
		if err != nil || entry.IsDir() || !strings.HasSuffix(path, ".go") || strings.HasSuffix(path, "_test.go") {
			return err
		}
		files++
		f, err := parser.ParseFile(token.NewFileSet(), path, nil, parser.ImportsOnly)
		if err != nil {
			return err
		}
		for _, i := range f.Imports {
			if slices.Contains(own, i.Path.Value) {
				t.Errorf("%s imports %s", path, i.Path.Value)
			}
		}
		return nil
	})
	if err != nil || files < 20 {
		t.Errorf("%d files seen, %v", files, err)
	}
}
