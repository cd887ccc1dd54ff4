package helmholtz_test

import (
	"math"
	"math/big"
	"math/rand/v2"
	"slices"
	"testing"

	"dewmark/props/helmholtz"
	"dewmark/props/internal/precise"
)

// members returns the members of an Alpha in the order in which precise.Alpha.Each names them.
func members(a helmholtz.Alpha) [6]float64 { return [6]float64{a.A, a.D, a.T, a.DD, a.DT, a.TT} }

// TestResidualAgainstPrecise compares every member of the residual part, on an isotherm and of a single
// state, with an evaluation in fifty digits. The limit is relative to the sum of the absolute terms: where terms cancel, no
// summation in double precision can do better.
func TestResidualAgainstPrecise(t *testing.T) {
	const limit = 1e-11 // reached by DD in a thin gas, where a Gaussian term with d = 1 loses digits that 1 + 2 D + DD never sees
	states := 200
	if testing.Short() {
		states = 10
	}
	for _, s := range withBlends(t) {
		t.Run(s.ID, func(t *testing.T) {
			t.Parallel()
			rng := s.seed()
			worst := 0.0
			for range states {
				T, rho := s.random(rng)
				var iso helmholtz.Isotherm
				iso.Set(s.eq, T)
				got := members(iso.Residual(rho))
				sum, size := s.exact.Residual(precise.Number(T), precise.Number(rho))
				want, scale := exactMembers(sum), exactMembers(size)
				var ideal, residual helmholtz.Alpha
				s.eq.At(T, rho, &ideal, &residual)
				if ideal != iso.Ideal {
					t.Errorf("ideal part at %g K: %+v, on an isotherm %+v", T, ideal, iso.Ideal)
				}
				single := members(residual)
				for i, name := range names {
					if off := math.Abs(single[i]-want[i]) / scale[i]; !(off <= limit) {
						t.Errorf("%s at %.17g K, %.17g mol/m3 = %.17g as a single state, want %.17g: off by %.1e", name, T, rho, single[i], want[i], off)
					}
					off := math.Abs(got[i]-want[i]) / scale[i]
					worst = math.Max(worst, off)
					if !(off <= limit) {
						t.Errorf("%s at %.17g K, %.17g mol/m3 = %.17g, want %.17g: off by %.1e of the sum of absolute terms %g",
							name, T, rho, got[i], want[i], off, scale[i])
					}
				}
			}
			t.Logf("largest deviation %.1e", worst)
		})
	}
}

var names = [6]string{"A", "D", "T", "DD", "DT", "TT"}

func exactMembers(a precise.Alpha) (out [6]float64) {
	i := 0
	a.Each(func(name string, v *big.Float) {
		if name != names[i] {
			panic("order of members")
		}
		out[i] = precise.Float(v)
		i++
	})
	return out
}

// withBlends returns all refrigerants and the pseudo-pure equations.
func withBlends(t *testing.T) []*subject {
	t.Helper()
	all := equations(t)
	for _, id := range []string{"R404A", "R407C", "R410A", "R507A"} {
		all = append(slices.Clip(all), pseudoPure(t, id).subject)
	}
	return all
}

func TestIdealAgainstPrecise(t *testing.T) {
	const limit = 1e-12 // terms of the ideal part cancel by a factor of a hundred at most
	for _, s := range withBlends(t) {
		v := s.Validity
		for i := range 21 {
			T := v.TemperatureMin + (v.TemperatureMax-v.TemperatureMin)*float64(i)/20
			var iso helmholtz.Isotherm
			iso.Set(s.eq, T)
			got, want := members(iso.Ideal), exactMembers(s.exact.Ideal(precise.Number(T)))
			for i, name := range names {
				if off := math.Abs(got[i] - want[i]); !(off <= limit*math.Max(1, math.Abs(want[i]))) {
					t.Errorf("%s: ideal %s at %g K = %.17g, want %.17g", s.ID, name, T, got[i], want[i])
				}
			}
		}
	}
}

// TestDerivativesAgainstDifferences compares each derivative with a central difference of the member below it. The
// difference is taken over two steps, h and 2h, and extrapolated; how far the two differ bounds what it is worth.
func TestDerivativesAgainstDifferences(t *testing.T) {
	const h = 2e-4
	states := 200
	if testing.Short() {
		states = 40
	}
	for _, s := range withBlends(t) {
		rng := s.seed()
		sharp, total := 0, 0
		for range states {
			T, rho := s.random(rng)
			at := func(i, j float64) helmholtz.Alpha { // tau and delta changed by factors 1 + i h, 1 + j h
				var iso helmholtz.Isotherm
				iso.Set(s.eq, T/(1+i*h))
				return iso.Residual(rho * (1 + j*h))
			}
			a := at(0, 0)
			tau := [4]helmholtz.Alpha{at(-2, 0), at(-1, 0), at(1, 0), at(2, 0)}
			delta := [4]helmholtz.Alpha{at(0, -2), at(0, -1), at(0, 1), at(0, 2)}
			for _, c := range []struct {
				name  string
				got   float64
				below func(a helmholtz.Alpha) float64
				along [4]helmholtz.Alpha
			}{
				{"D", a.D, func(a helmholtz.Alpha) float64 { return a.A }, delta},
				{"T", a.T, func(a helmholtz.Alpha) float64 { return a.A }, tau},
				// A reduced derivative of a reduced derivative contains the latter once more.
				{"DD", a.DD + a.D, func(a helmholtz.Alpha) float64 { return a.D }, delta},
				{"DT", a.DT, func(a helmholtz.Alpha) float64 { return a.D }, tau},
				{"DT", a.DT, func(a helmholtz.Alpha) float64 { return a.T }, delta},
				{"TT", a.TT + a.T, func(a helmholtz.Alpha) float64 { return a.T }, tau},
			} {
				var f [4]float64
				size := 0.0
				for i, x := range c.along {
					f[i] = c.below(x)
					size = math.Max(size, math.Abs(f[i]))
				}
				near, far := (f[2]-f[1])/(2*h), (f[3]-f[0])/(4*h)
				want := near + (near-far)/3
				limit := math.Abs(near-far)/10 + 1e-9*(1+size)
				total++
				if limit < 1e-4*math.Abs(c.got) {
					sharp++
				}
				if !(math.Abs(c.got-want) <= limit) {
					t.Errorf("%s: %s at %.17g K, %.17g mol/m3 = %.12g, differences give %.12g within %.1e", s.ID, c.name, T, rho, c.got, want, limit)
				}
			}
		}
		if sharp < total*8/10 {
			t.Errorf("%s: only %d of %d differences are sharp enough to tell", s.ID, sharp, total)
		}
	}
}

// TestThirdDensity compares the third density derivative with a difference of the second in fifty digits. Equations
// with non-analytic terms are left out, as they are in the function.
func TestThirdDensity(t *testing.T) {
	states := 12
	if testing.Short() {
		states = 4
	}
	for _, s := range equations(t) {
		if s.eq.HasPeaks() {
			continue
		}
		rng := s.seed()
		for range states {
			T, rho := s.random(rng)
			var iso helmholtz.Isotherm
			iso.Set(s.eq, T)
			const h = 0x1p-40
			second := func(factor float64) *big.Float { // d2 alpha/d delta2 times a constant
				x := precise.Number(rho)
				x.Mul(x, precise.Number(factor))
				r, _ := s.exact.Residual(precise.Number(T), x)
				return x.Quo(r.DD, x.Mul(x, x))
			}
			d := second(1 + h)
			d.Sub(d, second(1-h))
			_, size := s.exact.Residual(precise.Number(T), precise.Number(rho))
			want := precise.Float(d) * rho * rho / ((1 + h) - (1 - h))
			got := iso.ThirdDensity(rho)
			if !(math.Abs(got-want) <= 1e-11*(math.Abs(want)+20*precise.Float(size.DD))) {
				t.Errorf("%s at %.17g K, %.17g mol/m3: %.15g, want %.15g", s.ID, T, rho, got, want)
			}
		}
	}
}

// TestDensityIsPartOfResidual compares the shortcut for density solvers with the full evaluation.
func TestDensityIsPartOfResidual(t *testing.T) {
	for _, s := range withBlends(t) {
		rng := s.seed()
		for range 20 {
			T, rho := s.random(rng)
			var iso helmholtz.Isotherm
			iso.Set(s.eq, T)
			d, dd := iso.Density(rho)
			r := iso.Residual(rho)
			if scale := 1e-14 * (1 + math.Abs(r.D) + math.Abs(r.DD)); !(math.Abs(d-r.D) <= scale && math.Abs(dd-r.DD) <= scale) {
				t.Errorf("%s at %g K, %g mol/m3: D %.17g, DD %.17g; want %.17g, %.17g", s.ID, T, rho, d, dd, r.D, r.DD)
			}
		}
	}
}

// TestAnyExponents evaluates equations with made-up terms of every kind, whose exponents of tau are what the plan of
// powers has to cope with: whole, halves, quarters and others, negative, beyond 64, and sums of each other.
func TestAnyExponents(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 7))
	exponent := func() float64 {
		switch x := math.Round(rng.Float64()*40) - 10; rng.IntN(4) {
		case 0:
			return x
		case 1:
			return x / 4
		case 2:
			return x / 100
		default:
			return x * 7 / 3
		}
	}
	for range 60 {
		var c helmholtz.Coefficients
		c.GasConstant, c.ReducingTemperature, c.ReducingDensity = 8.3, 370, 5000
		c.Ideal = helmholtz.Ideal{Constant: 1, Tau: -2, LnTau: 3, TauLnTau: 0.1, TauPowers: [][2]float64{{0.3, exponent()}, {-0.2, exponent()}}}
		n := func() float64 { return 2*rng.Float64() - 1 }
		for range 5 {
			d, l := float64(rng.IntN(6)), float64(1+rng.IntN(4))
			r := &c.Residual
			r.Polynomial = append(r.Polynomial, []float64{n(), exponent(), d})
			r.Exponential = append(r.Exponential, []float64{n(), exponent(), d, l}, []float64{n(), exponent(), d, l, 0.5 + rng.Float64()})
			r.DoubleExponential = append(r.DoubleExponential, []float64{n(), exponent(), d, l, float64(1 + rng.IntN(4))})
			r.Gaussian = append(r.Gaussian, []float64{n(), exponent(), d, 10 * rng.Float64(), 50 * rng.Float64(), 1.1, 0.8})
			r.Associating = append(r.Associating, []float64{n(), exponent(), d, 8, 0.5, 1.2, 0.8, 1.2})
		}
		c.Residual.Polynomial = append(c.Residual.Polynomial, []float64{n(), 0, 2.5}, []float64{n(), 1, 0.75})
		c.Residual.NonAnalytic = [][]float64{{n(), 3.5, 0.85, 0.3, 0.32, 0.2, 28, 700}}
		eq, err := helmholtz.New(c)
		if err != nil {
			t.Fatal(err)
		}
		exact := precise.New(c)
		for range 3 {
			T, rho := 200+400*rng.Float64(), 15000*rng.Float64()
			var iso helmholtz.Isotherm
			iso.Set(eq, T)
			sum, size := exact.Residual(precise.Number(T), precise.Number(rho))
			got, want, scale := members(iso.Residual(rho)), exactMembers(sum), exactMembers(size)
			ideal, wantIdeal := members(iso.Ideal), exactMembers(exact.Ideal(precise.Number(T)))
			var singleIdeal, single helmholtz.Alpha
			eq.At(T, rho, &singleIdeal, &single)
			if singleIdeal != iso.Ideal {
				t.Errorf("ideal part at %g K: %+v, on an isotherm %+v of %+v", T, singleIdeal, iso.Ideal, c.Ideal)
			}
			for i, name := range names {
				if at := members(single)[i]; !(math.Abs(at-want[i]) <= 1e-12*scale[i]) {
					t.Errorf("%s at %g K, %g mol/m3 = %.17g as a single state, want %.17g of %+v", name, T, rho, at, want[i], c.Residual)
				}
				if !(math.Abs(got[i]-want[i]) <= 1e-12*scale[i]) {
					t.Errorf("residual %s at %g K, %g mol/m3 = %.17g, want %.17g of %+v", name, T, rho, got[i], want[i], c.Residual)
				}
				if !(math.Abs(ideal[i]-wantIdeal[i]) <= 1e-12*(1+math.Abs(wantIdeal[i]))) {
					t.Errorf("ideal %s at %g K = %.17g, want %.17g of %+v", name, T, ideal[i], wantIdeal[i], c.Ideal)
				}
			}
		}
	}
}
