package blend_test

import (
	"errors"
	"math"
	"math/rand/v2"
	"testing"

	"dewmark/props"
	"dewmark/props/blend"
)

// A mixture with a mole fraction of 0.999999 of one component behaves as that component to 1e-5.
func TestPureLimit(t *testing.T) {
	l := library(t)
	catalogue, err := props.NewCatalogue()
	if err != nil {
		t.Fatal(err)
	}
	for _, pair := range [][2]string{{"R32", "R125"}, {"R125", "R32"}, {"R1234yf", "R32"}, {"R290", "R600a"}, {"R134a", "R1234ze(E)"}, {"R1234ze(E)", "R227ea"}, {"R600a", "R744"}} {
		pure, err := catalogue.Pure(pair[0], props.DefaultDatum)
		if err != nil {
			t.Fatal(err)
		}
		b, err := l.Mixture(blend.Composition{Basis: blend.ByMole, Shares: []blend.Share{{Designation: pair[0], Fraction: 0.999999}, {Designation: pair[1], Fraction: 1e-6}}}, blend.DefaultDatum, false)
		if err != nil {
			t.Errorf("%s with a trace of %s: %v", pair[0], pair[1], err)
			continue
		}
		near := func(what string, got, want, scale float64) {
			t.Helper()
			if !(math.Abs(got-want) <= 1e-5*scale) {
				t.Errorf("%s with a trace of %s: %s %.9g, pure %.9g", pair[0], pair[1], what, got, want)
			}
		}
		for _, T := range []float64{240, 273.15, 310} {
			for _, side := range []struct {
				name  string
				blend func(float64) (blend.State, error)
				pure  func(float64) (props.State, error)
			}{{"bubble", b.BubblePoint, pure.BubblePoint}, {"dew", b.DewPoint, pure.DewPoint}} {
				got, err := side.blend(T)
				if err != nil {
					t.Fatal(err)
				}
				want, err := side.pure(T)
				if err != nil {
					t.Fatal(err)
				}
				// A trace that is much more volatile than the solvent adds its share of the vapour to the bubble pressure;
				// likewise for the liquid of a dew point. The mole fraction is below twice the mass fraction in these pairs.
				share := math.Max(got.VapourComposition[1], got.LiquidComposition[1])
				compare(side.name, got, want, 1+2*share/1e-5, near)
			}
			for _, p := range []float64{50e3, 8e6} {
				got, err := b.TemperaturePressure(T, p)
				if err != nil {
					t.Fatal(err)
				}
				want, err := pure.TemperaturePressure(T, p)
				if err != nil {
					t.Fatal(err)
				}
				compare("single phase", got, want, 1, near)
			}
		}
	}
}

func compare(where string, got blend.State, want props.State, loose float64, near func(what string, got, want, scale float64)) {
	near(where+" p", got.P, want.P, loose*want.P)
	near(where+" rho", got.Rho, want.Rho, loose*want.Rho)
	near(where+" h", got.H, want.H, 2e5)
	near(where+" s", got.S, want.S, 1e3)
	near(where+" u", got.U, want.U, 2e5)
	near(where+" cp", got.Cp, want.Cp, want.Cp)
	near(where+" cv", got.Cv, want.Cv, want.Cv)
	near(where+" w", got.W, want.W, want.W)
	near(where+" dp/drho", got.DPDRho, want.DPDRho, want.DPDRho)
	near(where+" dp/dT", got.DPDT, want.DPDT, want.DPDT)
	near(where+" Z", got.Z, want.Z, loose*want.Z)
}

// The derivatives that a state carries, and thermodynamic identities, against differences of other states: cp and w from
// enthalpy and from the isentrope, (dp/dT) and (dp/d rho) directly, and dh = T ds + v dp. In two phases the same holds for
// (dp/dT) at constant density and for dh = T ds + v dp.
func TestStateDerivatives(t *testing.T) {
	l := library(t)
	rng := rand.New(rand.NewPCG(5, 6))
	for _, name := range []string{"R407C", "R454B", "R448A", "R455A", "R441A", "R515B"} {
		b := get(t, l, name)
		for range 30 {
			s, ok := sample(b, rng)
			if !ok || s.Quality == 0 || s.Quality == 1 {
				continue
			}
			const step = 1e-4
			around := func(f func(e float64) (blend.State, error), of func(*blend.State) float64) float64 {
				up, err1 := f(step)
				down, err2 := f(-step)
				if err := errors.Join(err1, err2); err != nil || up.Phase != s.Phase || down.Phase != s.Phase {
					return math.NaN() // over the edge
				}
				return (of(&up) - of(&down)) / (2 * step)
			}
			check := func(what string, got, difference, scale float64) {
				t.Helper()
				if !math.IsNaN(difference) && !(math.Abs(got-difference) <= 1e-5*scale) {
					t.Errorf("%s, %s at %g K, %g kg/m3, quality %g: %s %.9g, from differences %.9g", name, s.Phase, s.T, s.Rho, s.Quality, what, got, difference)
				}
			}
			pressure := func(s *blend.State) float64 { return s.P }
			enthalpy := func(s *blend.State) float64 { return s.H }
			entropy := func(s *blend.State) float64 { return s.S }
			inT := func(e float64) (blend.State, error) { return b.TemperatureDensity(s.T*(1+e), s.Rho) }
			dpdT := around(inT, pressure) / s.T
			check("dp/dT", s.DPDT, dpdT, s.DPDT+s.P/s.T)
			// dh = T ds + v dp along the isochore, by the same differences.
			check("dh", around(inT, enthalpy)/s.T, s.T*around(inT, entropy)/s.T+dpdT/s.Rho, math.Abs(dpdT/s.Rho)+1e3)
			if s.Phase == blend.TwoPhase {
				continue
			}
			inRho := func(e float64) (blend.State, error) { return b.TemperatureDensity(s.T, s.Rho*(1+e)) }
			check("dp/drho", s.DPDRho, around(inRho, pressure)/s.Rho, s.DPDRho)
			isobar := func(e float64) (blend.State, error) { return b.TemperaturePressure(s.T*(1+e), s.P) }
			check("cp", s.Cp, around(isobar, enthalpy)/s.T, 10*s.Cp)
			isentrope := func(e float64) (blend.State, error) { return b.PressureEntropy(s.P*(1+e), s.S) }
			check("1/w^2", 1/(s.W*s.W), around(isentrope, func(s *blend.State) float64 { return s.Rho })/s.P, 10/(s.W*s.W))
			check("h", s.H, s.U+s.P/s.Rho, s.P/s.Rho)
			check("Z", s.Z, s.P*b.MolarMass()/(s.Rho*8.31447*s.T), s.Z)
		}
	}
}

// Both phases of a two-phase state, weighted with the quality, make up the blend, and its composition is between theirs.
func TestPhaseCompositions(t *testing.T) {
	l := library(t)
	for _, listed := range l.Listed() {
		b := get(t, l, listed.Designation)
		for _, q := range []float64{0, 0.02, 0.5, 0.98, 1} {
			s, err := b.TemperatureQuality(263.15, q)
			if err != nil {
				t.Fatal(err)
			}
			var sumL, sumV float64
			for i, w := range b.MassFractions() {
				x, y := s.LiquidComposition[i], s.VapourComposition[i]
				sumL, sumV = sumL+x, sumV+y
				if got := x + q*(y-x); !(math.Abs(got-w) <= 1e-11) {
					t.Errorf("%s, quality %g: component %d adds up to %.12g instead of %.12g", listed.Designation, q, i, got, w)
				}
			}
			if !(math.Abs(sumL-1) < 1e-11 && math.Abs(sumV-1) < 1e-11) {
				t.Errorf("%s, quality %g: fractions add up to %.12g and %.12g", listed.Designation, q, sumL, sumV)
			}
		}
	}
}

// Fugacity coefficients: one in a thin gas, and, with the compositions of both phases, those that make bubble and incipient
// phase equal: f_i = x_i phi_i p (checked phase by phase in TestEqualFugacities). Their mean in moles gives the residual
// Gibbs energy, which follows from enthalpy and entropy too: sum x_i ln(phi_i) = (g - g_ideal(T, p))/(R T).
func TestFugacityCoefficients(t *testing.T) {
	l := library(t)
	for _, name := range []string{"R407C", "R455A", "R441A"} {
		b := get(t, l, name)
		const T = 300.0
		thin, err := b.FugacityCoefficients(T, 1e-7)
		if err != nil {
			t.Fatal(err)
		}
		for i, phi := range thin {
			if !(math.Abs(phi-1) < 1e-5) { // the gas constants of the components differ by as much
				t.Errorf("%s: coefficient %d of a thin gas is %.9g", name, i, phi)
			}
		}
		const low = 1e-2 // Pa, ideal to 1e-8
		ideal, err := b.TemperaturePressure(T, low)
		if err != nil {
			t.Fatal(err)
		}
		for _, p := range []float64{2e5, 5e6} {
			s, err := b.TemperaturePressure(T, p)
			if err != nil {
				t.Fatal(err)
			}
			phi, err := b.FugacityCoefficients(T, s.Rho)
			if err != nil {
				t.Fatal(err)
			}
			var sum float64
			for i, x := range b.MoleFractions() {
				sum += x * math.Log(phi[i])
			}
			rt := s.P * b.MolarMass() / (s.Rho * s.Z) // R T
			want := ((s.H-T*s.S)-(ideal.H-T*ideal.S))*b.MolarMass()/rt - math.Log(p/low)
			if !(math.Abs(sum-want) < 1e-5) {
				t.Errorf("%s at %g Pa: mean ln(phi) %.9g, from the Gibbs energy %.9g", name, p, sum, want)
			}
		}
		if _, err := b.FugacityCoefficients(T, 1e9); err == nil {
			t.Error("a density out of reach has fugacities")
		}
	}
}

func TestResiduals(t *testing.T) {
	l := library(t)
	bubble, dew, ok := get(t, l, "R454B").Residuals()
	// The residuals stated with the pair R32/R1234yf: +0.02 and +0.09 K.
	if !ok || !(math.Abs(bubble-0.02) < 0.006 && math.Abs(dew-0.09) < 0.006) {
		t.Errorf("R454B: %g and %g K, %v", bubble, dew, ok)
	}
}
