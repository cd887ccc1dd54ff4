package blend_test

import (
	"errors"
	"math"
	"strings"
	"sync"
	"testing"

	"dewmark/props/blend"
	"dewmark/props/data"
)

func byMass(shares ...blend.Share) blend.Composition { return blend.Composition{Shares: shares} }

// A free composition equals the listed blend of the same composition, by mass and by mole and in any order of components.
func TestFreeComposition(t *testing.T) {
	l := library(t)
	for _, name := range []string{"R454B", "R407C", "R455A", "R404A"} {
		listed := get(t, l, name)
		n := len(listed.Components())
		mass, mole := blend.Composition{Basis: blend.ByMass}, blend.Composition{Basis: blend.ByMole}
		for i := range n {
			j := n - 1 - i // turned round
			mass.Shares = append(mass.Shares, blend.Share{Designation: listed.Components()[j], Fraction: listed.MassFractions()[j]})
			mole.Shares = append(mole.Shares, blend.Share{Designation: listed.Components()[j], Fraction: listed.MoleFractions()[j]})
		}
		want, err := listed.PressureEnthalpy(8e5, 300e3)
		if err != nil {
			t.Fatal(err)
		}
		for _, c := range []blend.Composition{mass, mole} {
			b, err := l.Mixture(c, blend.DefaultDatum, false)
			if err != nil {
				t.Errorf("%s: %v", name, err)
				continue
			}
			got, err := b.PressureEnthalpy(8e5, 300e3)
			if err != nil || !(math.Abs(got.T/want.T-1) < 1e-10 && math.Abs(got.Rho/want.Rho-1) < 1e-8 && math.Abs(got.S-want.S) < 1e-6) {
				t.Errorf("%s: %g K, %g kg/m3, %g J/(kg K), %v; as listed %g, %g, %g", b.Designation(), got.T, got.Rho, got.S, err, want.T, want.Rho, want.S)
			}
			if b.Listed() != nil {
				t.Errorf("%s counts as listed", b.Designation())
			}
		}
	}
}

func TestCompositionRefused(t *testing.T) {
	l := library(t)
	many := blend.Composition{}
	for _, r := range []string{"R32", "R125", "R134a", "R143a", "R152a", "R1234yf", "R1234ze(E)", "R744", "R290", "R600", "R600a"} {
		many.Shares = append(many.Shares, blend.Share{Designation: r, Fraction: 1.0 / 11})
	}
	for _, tt := range []struct {
		c     blend.Composition
		index int
		want  string
	}{
		{byMass(), -1, "0 components"},
		{byMass(blend.Share{Designation: "R32", Fraction: 1}), -1, "1 components"},
		{many, -1, "11 components"},
		{byMass(blend.Share{Designation: "R32", Fraction: 0.5}, blend.Share{Designation: "R9999", Fraction: 0.5}), 1, "unknown"},
		{byMass(blend.Share{Designation: "R32", Fraction: 0.5}, blend.Share{Designation: "R32", Fraction: 0.5}), 1, "twice"},
		{byMass(blend.Share{Designation: "R32", Fraction: 0.5}, blend.Share{Designation: "R125", Fraction: 0.4}), -1, "0.9"},
		{byMass(blend.Share{Designation: "R32", Fraction: 1.1}, blend.Share{Designation: "R125", Fraction: -0.1}), 0, "1.1"},
		{byMass(blend.Share{Designation: "R32", Fraction: 0.999}, blend.Share{Designation: "R125", Fraction: 0}), 1, "fraction 0"},
		{byMass(blend.Share{Designation: "R32", Fraction: math.NaN()}, blend.Share{Designation: "R125", Fraction: 0.5}), 0, "NaN"},
		{blend.Composition{Basis: 7, Shares: []blend.Share{{Designation: "R32", Fraction: 0.5}, {Designation: "R125", Fraction: 0.5}}}, -1, "basis"},
	} {
		_, err := l.Mixture(tt.c, blend.DefaultDatum, false)
		e, ok := errors.AsType[*blend.CompositionError](err)
		if !ok || e.Index != tt.index || !strings.Contains(e.Error(), tt.want) {
			t.Errorf("%v: error %v, want one about component %d that holds %q", tt.c, err, tt.index, tt.want)
		}
	}
	thirds := byMass(blend.Share{Designation: "R32", Fraction: 0.333}, blend.Share{Designation: "R125", Fraction: 0.333}, blend.Share{Designation: "R134a", Fraction: 0.333})
	if _, err := l.Mixture(thirds, blend.DefaultDatum, false); err != nil {
		t.Errorf("percentages rounded to one place: %v", err)
	}
	if _, err := l.Blend("R999Z", blend.DefaultDatum); err == nil || !strings.Contains(err.Error(), "R999Z") {
		t.Errorf("an unknown designation: %v", err)
	}
}

// Unverified parameters are refused unless accepted; assumed ones are used with a caution.
func TestPairProvenance(t *testing.T) {
	l := library(t)
	unverified := byMass(blend.Share{Designation: "R152a", Fraction: 0.4}, blend.Share{Designation: "R134a", Fraction: 0.6})
	_, err := l.Mixture(unverified, blend.DefaultDatum, false)
	if e, ok := errors.AsType[*blend.UnverifiedPairError](err); !ok || len(e.Pairs) != 1 || e.Pairs[0].Status != data.Unverified {
		t.Errorf("R152a/R134a: %v", err)
	}
	b, err := l.Mixture(unverified, blend.DefaultDatum, true)
	if err != nil {
		t.Fatal(err)
	}
	if c := b.Cautions(); len(c) != 1 || c[0].Code != "pair_unverified" {
		t.Errorf("R152a/R134a, accepted: cautions %v", c)
	}
	// The order asked for is kept.
	if p := b.Pairs(); len(p) != 1 || p[0].Components != [2]string{"R152a", "R134a"} || p[0].Source == "" || p[0].Provenance == "" {
		t.Errorf("R152a/R134a: pairs %v", p)
	}

	b, err = l.Mixture(byMass(blend.Share{Designation: "R717", Fraction: 0.6}, blend.Share{Designation: "RE170", Fraction: 0.4}), blend.DefaultDatum, false)
	if err != nil {
		t.Fatal(err)
	}
	if c := b.Cautions(); len(c) != 1 || c[0].Code != "pair_assumed" || !strings.Contains(c[0].Detail, "R717/RE170") {
		t.Errorf("R717/RE170: cautions %v", c)
	}
	if p := b.Pairs()[0]; p.Status != data.Assumed || !strings.Contains(p.Source, "Lorentz-Berthelot") {
		t.Errorf("R717/RE170: %+v", p)
	}
	for _, tt := range []struct {
		designation string
		cautions    int
	}{{"R410A", 0}, {"R454B", 0}, {"R455A", 1}, {"R427A", 1}, {"R463A", 3}, {"R448A", 1}} {
		if got := get(t, l, tt.designation).Cautions(); len(got) != tt.cautions {
			t.Errorf("%s: cautions %v, want %d", tt.designation, got, tt.cautions)
		}
	}
}

// The two forms of the reducing functions: a Lemmon-Jacobsen pair is a Kunz-Wagner pair with the gammas that the data file
// states for it, and exchanging the components of a Kunz-Wagner pair turns beta into its reciprocal (TestFreeComposition).
func TestKunzWagnerEquivalents(t *testing.T) {
	pairs, err := data.LoadPairs()
	if err != nil {
		t.Fatal(err)
	}
	records, err := data.Load()
	if err != nil {
		t.Fatal(err)
	}
	byID := map[string]data.Record{}
	for _, r := range records {
		byID[r.ID] = r
	}
	n := 0
	for _, p := range pairs.Pairs {
		e := p.KunzWagnerEquivalent
		if e == nil {
			continue
		}
		n++
		a, b := byID[p.Components[0]].Reducing, byID[p.Components[1]].Reducing
		gammaT := (a.Temperature + b.Temperature + p.Reducing.ExcessTemperature) / (2 * math.Sqrt(a.Temperature*b.Temperature))
		mean := math.Pow(math.Cbrt(1/a.Density)+math.Cbrt(1/b.Density), 3) / 8
		gammaV := (1/a.Density + 1/b.Density + p.Reducing.ExcessVolume) / (2 * mean)
		if !(math.Abs(gammaT-e.GammaTemperature) < 1e-9 && math.Abs(gammaV-e.GammaVolume) < 1e-9) {
			t.Errorf("%v: gammas %.10f and %.10f, want %.10f and %.10f", p.Components, gammaT, gammaV, e.GammaTemperature, e.GammaVolume)
		}
	}
	if n == 0 {
		t.Error("no pair states its equivalent")
	}
}

// Global warming potentials of the blends that the data file states are the mass-weighted sums of the components, rounded
// to 0.1.
func TestClassification(t *testing.T) {
	l := library(t)
	for _, listed := range l.Listed() {
		b := get(t, l, listed.Designation)
		free := blend.Composition{}
		for _, c := range listed.Components {
			free.Shares = append(free.Shares, blend.Share{Designation: c.Designation, Fraction: c.MassFraction})
		}
		m, err := l.Mixture(free, blend.DefaultDatum, true)
		if err != nil {
			t.Fatal(err)
		}
		c, sum := b.Classification(), m.Classification()
		if c.SafetyClass == nil || sum.SafetyClass != nil {
			t.Errorf("%s: safety class %v, of the free composition %v", listed.Designation, c.SafetyClass, sum.SafetyClass)
		}
		stated := listed.Classification.GWP100
		for i, v := range [][2]*float64{{stated.AR4, sum.GWP100.AR4}, {stated.AR5, sum.GWP100.AR5}, {stated.AR6, sum.GWP100.AR6}} {
			if v[0] != nil && (v[1] == nil || !(math.Abs(*v[0]-*v[1]) <= 0.0501)) {
				t.Errorf("%s: report %d: stated and summed GWP differ", listed.Designation, i+4)
			}
		}
		if c.GWP100.AR4 == nil || sum.GWP100.AR4 == nil {
			t.Errorf("%s: no GWP", listed.Designation)
		}
	}
}

func TestDatums(t *testing.T) {
	l := library(t)
	for _, tt := range []struct {
		datum blend.Datum
		at    func(*blend.Blend) (blend.State, error)
		h, s  float64
	}{
		{blend.IIR, func(b *blend.Blend) (blend.State, error) { return b.BubblePoint(273.15) }, 200e3, 1e3},
		{blend.ASHRAE, func(b *blend.Blend) (blend.State, error) { return b.BubblePoint(233.15) }, 0, 0},
		{blend.NBP, func(b *blend.Blend) (blend.State, error) { return b.BubblePointAtPressure(101325) }, 0, 0},
	} {
		for _, name := range []string{"R407C", "R454B", "R455A"} {
			b, err := l.Blend(name, tt.datum)
			if err != nil {
				t.Fatal(err)
			}
			s, err := tt.at(b)
			if err != nil || !(math.Abs(s.H-tt.h) < 1e-6 && math.Abs(s.S-tt.s) < 1e-9) || b.Datum() != tt.datum {
				t.Errorf("%s, %s: h %g, s %g, %v", name, tt.datum, s.H, s.S, err)
			}
		}
	}
	cold := byMass(blend.Share{Designation: "R744", Fraction: 0.02}, blend.Share{Designation: "R1150", Fraction: 0.98})
	b, err := l.Mixture(cold, blend.DefaultDatum, false)
	if err != nil {
		t.Fatal(err)
	}
	if _, err := b.WithDatum(blend.ASHRAE); err != nil {
		t.Error(err)
	}
	if _, err := l.Mixture(byMass(blend.Share{Designation: "R718", Fraction: 0.9}, blend.Share{Designation: "R717", Fraction: 0.1}), blend.ASHRAE, false); err == nil {
		t.Error("a blend of water has a datum at -40 °C")
	} else if _, ok := errors.AsType[*blend.DatumError](err); !ok {
		t.Errorf("a blend of water: %v", err)
	}
}

// Questions without an answer name the property, the value and the limit; nothing panics.
func TestRefusals(t *testing.T) {
	l := library(t)
	b := get(t, l, "R407C")
	nan, inf := math.NaN(), math.Inf(1)
	for _, v := range []float64{nan, inf, -inf, 0, -1, 1e-300, 1e300, 250} {
		for _, w := range []float64{nan, 0, -1, 1e300, 250, 1e6, 0.5} {
			for p := blend.Property(0); p <= 9; p++ {
				for q := blend.Property(0); q <= 9; q++ {
					states, err := b.States(blend.Given{Property: p, Value: v}, blend.Given{Property: q, Value: w})
					if err != nil {
						if !typed(err) {
							t.Errorf("%d %g, %d %g: untyped error %v", p, v, q, w, err)
						}
						_ = err.Error()
						continue
					}
					for _, s := range states {
						if math.IsNaN(s.T) || math.IsNaN(s.P) || math.IsNaN(s.Rho) || math.IsNaN(s.H) || math.IsNaN(s.S) {
							t.Errorf("%d %g, %d %g: state %+v without an error", p, v, q, w, s)
						}
					}
				}
			}
		}
	}
	limits := b.Limits()
	_, err := b.TemperaturePressure(limits.TemperatureMax+1, 1e5)
	if e, ok := errors.AsType[*blend.RangeError](err); !ok || e.Property != blend.Temperature || e.Max != limits.TemperatureMax || e.Refrigerant != "R407C" {
		t.Errorf("above the highest temperature: %v", err)
	}
	s, err := b.Extrapolate().TemperaturePressure(limits.TemperatureMax+1, 1e5)
	if err != nil || !b.Extrapolated(s) {
		t.Errorf("above the highest temperature, extrapolated: %v", err)
	}
	_, err = b.DewPoint(b.Cricondentherm().T + 1)
	if e, ok := errors.AsType[*blend.RangeError](err); !ok || e.Property != blend.Temperature {
		t.Errorf("dew point above the envelope: %v", err)
	}
	_, err = b.PressureEnthalpy(1e6, 1e7)
	if e, ok := errors.AsType[*blend.RangeError](err); !ok || e.Property != blend.Enthalpy || !(e.Max > 4e5 && e.Max < 1e6) {
		t.Errorf("enthalpy out of reach: %v", err)
	}
	if _, err := b.State(blend.Given{Property: blend.Pressure, Value: 1e6}, blend.Given{Property: blend.Enthalpy, Value: 500e3}, blend.Liquid); err == nil {
		t.Error("hot gas found as a liquid")
	} else if _, ok := errors.AsType[*blend.NoSolutionError](err); !ok {
		t.Errorf("hot gas as a liquid: %v", err)
	}
	g := blend.Given{Property: blend.Temperature, Value: 300}
	if _, err := b.States(g, g); err == nil {
		t.Error("temperature twice fixes a state")
	}
}

// Free compositions far from the listed ones: wide-boiling, with pairs that have no parameters, traces, many components.
// Bubble, dew and interior states must agree with each other by way of different flashes.
func TestFreeCompositionsAgree(t *testing.T) {
	l := library(t)
	share := func(id string, f float64) blend.Share { return blend.Share{Designation: id, Fraction: f} }
	for _, shares := range [][]blend.Share{
		{share("R32", 0.6), share("R1234yf", 0.4)},
		{share("R744", 0.3), share("R290", 0.7)},
		{share("R744", 0.5), share("R600a", 0.5)},
		{share("R744", 0.1), share("R601", 0.9)},
		{share("R170", 0.2), share("R600", 0.8)},
		{share("R1150", 0.1), share("R601a", 0.9)},
		{share("R717", 0.7), share("RE170", 0.3)},
		{share("R290", 1-1e-6), share("R600", 1e-6)},
		{share("R1132(E)", 0.23), share("R1234yf", 0.77)},
		{share("R32", 0.3), share("R125", 0.1), share("R134a", 0.1), share("R1234yf", 0.2), share("R1234ze(E)", 0.1), share("R744", 0.05), share("R290", 0.1), share("R227ea", 0.05)},
	} {
		b, err := l.Mixture(blend.Composition{Basis: blend.ByMole, Shares: shares}, blend.DefaultDatum, false)
		if err != nil {
			t.Errorf("%v: %v", shares, err)
			continue
		}
		c := b.Critical()
		for _, r := range []float64{0.6, 0.75, 0.9, 0.97} {
			T := math.Max(r*c.T, b.Limits().TemperatureMin)
			dew, err := b.DewPoint(T)
			if err != nil {
				t.Errorf("%s, dew at %g K: %v", b.Designation(), T, err)
				continue
			}
			bubble, err := b.BubblePoint(T)
			if err != nil || !(bubble.P > dew.P*(1-1e-9)) {
				t.Errorf("%s, bubble at %g K: %g Pa, dew %g Pa, %v", b.Designation(), T, bubble.P, dew.P, err)
				continue
			}
			for _, q := range []float64{1e-6, 0.3, 0.7, 1 - 1e-6} {
				s, err := b.TemperatureQuality(T, q)
				if err != nil {
					t.Errorf("%s, quality %g at %g K: %v", b.Designation(), q, T, err)
					continue
				}
				for _, pair := range [][2]blend.Property{
					{blend.Pressure, blend.Enthalpy},
					{blend.Pressure, blend.Entropy},
					{blend.Enthalpy, blend.Entropy},
					{blend.Temperature, blend.Density},
					{blend.Density, blend.InternalEnergy},
				} {
					x, y := blend.Given{Property: pair[0], Value: value(&s, pair[0])}, blend.Given{Property: pair[1], Value: value(&s, pair[1])}
					recovered(t, b, &s, x, y)
				}
			}
		}
	}
}

// Views and solvers are shared by goroutines.
func TestConcurrentUse(t *testing.T) {
	l := library(t)
	want, err := get(t, l, "R449A").PressureEnthalpy(1e6, 300e3)
	if err != nil {
		t.Fatal(err)
	}
	var wg sync.WaitGroup
	for range 8 {
		wg.Go(func() {
			for _, datum := range []blend.Datum{blend.IIR, blend.ASHRAE} {
				b, err := l.Blend("R449A", datum)
				if err != nil {
					t.Error(err)
					return
				}
				for range 20 {
					s, err := b.PressureEnthalpy(1e6, 300e3)
					if err != nil || datum == blend.IIR && (s.T != want.T || s.Rho != want.Rho) {
						t.Errorf("%g K, %v; alone %g K", s.T, err, want.T)
					}
					if _, err := b.DewPoint(300); err != nil {
						t.Error(err)
					}
				}
			}
		})
	}
	wg.Wait()
}
