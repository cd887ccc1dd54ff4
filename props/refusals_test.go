package props_test

import (
	"errors"
	"math"
	"strings"
	"testing"

	"dewmark/props"
)

func given(p props.Property, v float64) props.Given { return props.Given{Property: p, Value: v} }

// TestRefusedRanges goes through questions that have no answer. Each error must name the property, the limit that was
// broken and what is allowed.
func TestRefusedRanges(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(1)
	const T, p, x = props.Temperature, props.Pressure, props.Quality
	r134a := refrigerant(t, "R134a").Limits()
	critical := refrigerant(t, "R134a").Critical()
	_, lowest := refrigerant(t, "R134a").SaturationLimits()
	for _, tt := range []struct {
		name     string
		id       string
		a, b     props.Given
		property props.Property
		min, max float64
		limit    string
	}{
		{"no temperature", "R134a", given(T, nan), given(p, 1e5), T, r134a.TemperatureMin, r134a.TemperatureMax, props.LimitValidity},
		{"infinite temperature", "R134a", given(T, inf), given(p, 1e5), T, r134a.TemperatureMin, r134a.TemperatureMax, props.LimitValidity},
		{"negative temperature", "R134a", given(T, -5), given(p, 1e5), T, r134a.TemperatureMin, r134a.TemperatureMax, props.LimitValidity},
		{"temperature zero", "R134a", given(T, 0), given(p, 1e5), T, r134a.TemperatureMin, r134a.TemperatureMax, props.LimitValidity},
		{"below the triple point", "R134a", given(T, 169.8), given(p, 1e5), T, 169.85, 455, props.LimitValidity},
		{"too hot", "R134a", given(T, 455.1), given(p, 1e5), T, 169.85, 455, props.LimitValidity},
		{"no pressure", "R134a", given(T, 300), given(p, nan), p, 0, 70e6, props.LimitValidity},
		{"pressure zero", "R134a", given(T, 300), given(p, 0), p, 0, 70e6, props.LimitValidity},
		{"negative pressure", "R134a", given(T, 300), given(p, -1e5), p, 0, 70e6, props.LimitValidity},
		{"pressure too high", "R134a", given(T, 300), given(p, 70.1e6), p, 0, 70e6, props.LimitValidity},
		{"infinite pressure", "R134a", given(T, 300), given(p, inf), p, 0, 70e6, props.LimitValidity},
		{"density zero", "R134a", given(T, 300), given(props.Density, 0), props.Density, 0, r134a.DensityMax, props.LimitDensity},
		{"negative density", "R134a", given(T, 300), given(props.Density, -1), props.Density, 0, r134a.DensityMax, props.LimitDensity},
		{"no density", "R134a", given(T, 300), given(props.Density, nan), props.Density, 0, r134a.DensityMax, props.LimitDensity},
		{"density too high", "R134a", given(T, 300), given(props.Density, 1700), props.Density, 0, r134a.DensityMax, props.LimitDensity},
		{"quality above one", "R134a", given(T, 300), given(x, 1.1), x, 0, 1, props.LimitPhysical},
		{"negative quality", "R134a", given(p, 1e5), given(x, -0.1), x, 0, 1, props.LimitPhysical},
		{"no quality", "R134a", given(T, 300), given(x, nan), x, 0, 1, props.LimitPhysical},
		{"quality above the critical temperature", "R134a", given(T, 380), given(x, 0.5), T, 169.85, critical.T, props.LimitSaturation},
		{"quality below the triple point", "R134a", given(T, 160), given(x, 0.5), T, 169.85, critical.T, props.LimitSaturation},
		{"quality above the critical pressure", "R134a", given(p, 5e6), given(x, 0.5), p, lowest, critical.P, props.LimitSaturation},
		{"quality below the triple pressure", "R134a", given(p, 100), given(x, 0.5), p, lowest, critical.P, props.LimitSaturation},
		{"no enthalpy", "R134a", given(p, 1e5), given(props.Enthalpy, nan), props.Enthalpy, -inf, inf, props.LimitPhysical},
		{"infinite entropy", "R134a", given(p, 1e5), given(props.Entropy, inf), props.Entropy, -inf, inf, props.LimitPhysical},
		// The melting curves that the tables of the two refrigerants give: ice VI at 300 K, dry ice at 220 K.
		{"ice", "R718", given(T, 300), given(p, 1e9), p, 0, meltingPressure(t, refrigerant(t, "R718"), 300), props.LimitMelting},
		{"dry ice", "R744", given(T, 220), given(p, 100e6), p, 0, meltingPressure(t, refrigerant(t, "R744"), 220), props.LimitMelting},
	} {
		_, err := refrigerant(t, tt.id).States(tt.a, tt.b)
		e, ok := errors.AsType[*props.RangeError](err)
		if !ok {
			t.Errorf("%s: %T %v, want a RangeError", tt.name, err, err)
			continue
		}
		value := tt.a.Value
		if tt.property == tt.b.Property {
			value = tt.b.Value
		}
		want := props.RangeError{Refrigerant: tt.id, Property: tt.property, Value: value, Min: tt.min, Max: tt.max, Limit: tt.limit}
		got := *e
		if math.IsNaN(got.Value) && math.IsNaN(want.Value) {
			got.Value, want.Value = 0, 0
		}
		if got != want {
			t.Errorf("%s: %+v, want %+v", tt.name, got, want)
		}
		for _, word := range []string{tt.id, tt.property.String(), tt.limit} {
			if !strings.Contains(err.Error(), word) {
				t.Errorf("%s: message %q does not say %q", tt.name, err, word)
			}
		}
	}
}

// TestBadNumbers puts numbers that cannot be, or hardly can, into every pair. Whatever comes back is a state or a typed
// error that makes sense by itself.
func TestBadNumbers(t *testing.T) {
	bad := []float64{math.NaN(), math.Inf(1), math.Inf(-1), -1, 0, 1e-320, 1e-30, 1e30, 1e308, -1e308}
	for _, id := range []string{"R134a", "R718", "R744", "R22"} {
		r := refrigerant(t, id)
		good, err := r.TemperatureQuality(0.8*r.Critical().T, 0.5)
		if err != nil {
			t.Fatal(err)
		}
		for _, pair := range allPairs() {
			for side := range 2 {
				for _, x := range bad {
					v := [2]float64{value(good, pair[0]), value(good, pair[1])}
					v[side] = x
					a, b := given(pair[0], v[0]), given(pair[1], v[1])
					states, err := r.States(a, b)
					checkAnswer(t, r, a, b, states, err)
					if err == nil && (math.IsNaN(x) || math.IsInf(x, 0)) {
						t.Errorf("%s: %v and %v give %v", id, a, b, states)
					}
				}
			}
		}
	}
}

// TestUnattainable asks for pairs of which each value is possible by itself.
func TestUnattainable(t *testing.T) {
	for _, id := range []string{"R134a", "R290", "R717", "R718", "R744"} {
		r := refrigerant(t, id)
		c := r.Critical()
		cold, err := r.TemperatureDensity(0.75*c.T, 1e-3*c.Rho)
		if err != nil {
			t.Fatal(err)
		}
		hot, err := r.TemperatureDensity(r.Limits().TemperatureMax, 0.5*c.Rho)
		if err != nil {
			t.Fatal(err)
		}
		for _, pair := range allPairs() {
			if pair[1] == props.Quality {
				continue
			}
			a, b := given(pair[0], value(cold, pair[0])), given(pair[1], value(hot, pair[1]))
			states, err := r.States(a, b)
			checkAnswer(t, r, a, b, states, err)
			a, b = given(pair[0], value(hot, pair[0])), given(pair[1], value(cold, pair[1]))
			states, err = r.States(a, b)
			checkAnswer(t, r, a, b, states, err)
		}
	}
}

// checkAnswer fails the test when an answer of States is not one: no state and no error, both, a state with a number
// that does not exist, an error of an unknown type or one that contradicts itself.
func checkAnswer(t testing.TB, r *props.Pure, a, b props.Given, states []props.State, err error) {
	t.Helper()
	fail := func(format string, args ...any) {
		t.Helper()
		t.Errorf("%s, %s %.17g and %s %.17g: "+format, append([]any{r.Designation(), a.Property, a.Value, b.Property, b.Value}, args...)...)
	}
	if (err == nil) != (len(states) > 0) {
		fail("%d states and error %v", len(states), err)
	}
	for _, s := range states {
		if why := odd(s); why != "" {
			fail("%s: %+v", why, s)
		}
		if value(s, a.Property) != a.Value || value(s, b.Property) != b.Value {
			fail("given values are not those of %+v", s)
		}
	}
	if err == nil {
		return
	}
	switch e := err.(type) { //nolint:errorlint // the outermost error is meant: nothing wraps these
	case *props.RangeError:
		if e.Refrigerant != r.Designation() || e.Limit == "" || !(e.Min < e.Max) ||
			e.Min <= e.Value && e.Value <= e.Max && math.Abs(e.Value) > 1e-290 && !math.IsInf(e.Value, 0) { // zero and the infinities end open intervals
			fail("error contradicts itself: %v", err)
		}
		for _, g := range []props.Given{a, b} {
			if e.Property == g.Property && e.Value != g.Value && !(math.IsNaN(e.Value) && math.IsNaN(g.Value)) {
				fail("error speaks of %g: %v", e.Value, err)
			}
		}
	case *props.NoSolutionError:
		if len(e.Solutions) > 0 {
			fail("no solution, but %v", e.Solutions)
		}
	case *props.ConditionError:
		if !(e.Uncertainty > 0) {
			fail("%v", err)
		}
	default:
		fail("%T: %v", err, err)
	}
	if text := err.Error(); strings.Contains(text, "  ") || strings.Contains(text, "NaN") && !math.IsNaN(a.Value) && !math.IsNaN(b.Value) {
		fail("message %q", text)
	}
}

// odd says what is wrong with a state by itself.
func odd(s props.State) string {
	for _, y := range []float64{s.T, s.P, s.Rho, s.H, s.S, s.U, s.Z} {
		if math.IsNaN(y) || math.IsInf(y, 0) {
			return "not a number"
		}
	}
	twoPhase := s.Phase == props.TwoPhase
	for _, y := range []float64{s.Cp, s.Cv, s.W, s.DPDRho} {
		if math.IsNaN(y) != twoPhase && !(s.T > 0 && math.IsInf(y, 1)) {
			return "missing or surplus derivative"
		}
	}
	switch {
	case !(s.T > 0 && s.P > 0 && s.Rho > 0):
		return "temperature, pressure or density not positive"
	case s.Phase < props.Liquid || s.Phase > props.Supercritical:
		return "no phase"
	case twoPhase && !(0 < s.Quality && s.Quality < 1):
		return "two-phase without a quality"
	case !twoPhase && !math.IsNaN(s.Quality) && s.Quality != 0 && s.Quality != 1:
		return "quality in a single phase"
	}
	return ""
}

func TestDependentPairs(t *testing.T) {
	r := refrigerant(t, "R290")
	for p := props.Temperature; p <= props.Quality; p++ {
		_, err := r.States(given(p, 300), given(p, 310))
		e, ok := errors.AsType[*props.DependentPairError](err)
		if !ok || e.Pair != [2]props.Property{p, p} || !strings.Contains(err.Error(), p.String()) {
			t.Errorf("%s twice: %T %v", p, err, err)
		}
	}
	for _, p := range []props.Property{0, props.Quality + 1, 255} {
		_, err := r.States(given(p, 300), given(props.Temperature, 310))
		if _, ok := errors.AsType[*props.DependentPairError](err); !ok || err.Error() == "" {
			t.Errorf("property %d: %T %v", uint8(p), err, err)
		}
	}
}

func TestAmbiguousAndMissingPhase(t *testing.T) {
	r := refrigerant(t, "R290")
	p, err := r.SaturationPressure(280)
	if err != nil {
		t.Fatal(err)
	}
	T, P := given(props.Temperature, 280), given(props.Pressure, p)
	_, err = r.State(T, P, props.AnyPhase)
	e, ok := errors.AsType[*props.AmbiguousError](err)
	if !ok || e.Refrigerant != "R290" || len(e.Solutions) != 2 || e.Solutions[0].Phase != props.Liquid || e.Solutions[1].Phase != props.Vapour {
		t.Errorf("saturation by temperature and pressure: %T %v", err, err)
	}
	for _, phase := range []props.Phase{props.Liquid, props.Vapour} {
		if s, err := r.State(T, P, phase); err != nil || s.Phase != phase {
			t.Errorf("saturated %s: %+v, %v", phase, s, err)
		}
	}
	_, err = r.State(T, given(props.Pressure, 2*p), props.Vapour)
	missing, ok := errors.AsType[*props.NoSolutionError](err)
	if !ok || missing.Phase != props.Vapour || len(missing.Solutions) != 1 || missing.Solutions[0].Phase != props.Liquid || !strings.Contains(err.Error(), "vapour") {
		t.Errorf("vapour of a subcooled liquid: %T %v", err, err)
	}
	if _, err := r.TemperaturePressure(280, p); err == nil {
		t.Error("a phase was picked on the saturation line")
	}
}

// TestThinGas: a gas thinner than any search goes is refused as uncertain, not overlooked because a compressed state has
// the same enthalpy.
func TestThinGas(t *testing.T) {
	r := refrigerant(t, "R290")
	for _, p := range []float64{1e-6, 1e-3} {
		s, err := r.TemperaturePressure(373.15, p)
		if err != nil {
			t.Fatal(err)
		}
		for _, g := range []props.Given{{Property: props.Enthalpy, Value: s.H}, {Property: props.InternalEnergy, Value: s.U}} {
			states, err := r.States(props.Given{Property: props.Temperature, Value: s.T}, g)
			if _, ok := errors.AsType[*props.ConditionError](err); !ok {
				t.Errorf("%g Pa, %v: %d states, %v", p, g.Property, len(states), err)
			}
		}
	}
}
