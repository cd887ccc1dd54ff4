package blend_test

import (
	"errors"
	"math"
	"math/rand/v2"
	"os"
	"strconv"
	"testing"

	"dewmark/props/blend"
)

// allPairs lists the 21 pairs of the seven properties.
func allPairs() [][2]blend.Property {
	var out [][2]blend.Property
	for a := blend.Temperature; a <= blend.Quality; a++ {
		for b := a + 1; b <= blend.Quality; b++ {
			out = append(out, [2]blend.Property{a, b})
		}
	}
	return out
}

func value(s *blend.State, p blend.Property) float64 {
	switch p {
	case blend.Temperature:
		return s.T
	case blend.Pressure:
		return s.P
	case blend.Density:
		return s.Rho
	case blend.Enthalpy:
		return s.H
	case blend.Entropy:
		return s.S
	case blend.InternalEnergy:
		return s.U
	}
	return s.Quality
}

// sample returns a random state of b between -60 °C and 0.98 of the critical temperature, for the single phase up to the
// highest temperature: half of them anywhere in temperature and density, a third inside the envelope, the rest near its
// edge. It reports false when the draw lies outside the limits.
func sample(b *blend.Blend, rng *rand.Rand) (blend.State, bool) {
	l, c := b.Limits(), b.Critical()
	between := func(lo, hi float64) float64 { return lo + (hi-lo)*rng.Float64() }
	const cold = 213.15
	var s blend.State
	var err error
	switch k := rng.IntN(10); {
	case k < 5:
		T := between(cold, l.TemperatureMax)
		s, err = b.TemperatureDensity(T, c.Rho*math.Exp(between(math.Log(1e-4), math.Log(l.DensityMax/c.Rho))))
	case k < 8:
		s, err = b.TemperatureQuality(between(cold, 0.98*c.T), rng.Float64())
	default:
		T := between(cold, 0.98*c.T)
		if s, err = b.TemperatureQuality(T, float64(rng.IntN(2))); err == nil {
			away := 1 + math.Exp(between(math.Log(1e-6), math.Log(0.1)))
			if rng.IntN(2) == 0 {
				away = 1 / away
			}
			s, err = b.TemperatureDensity(T, s.Rho*away)
		}
	}
	return s, err == nil
}

// TestRoundTrips recovers states from every pair of their properties. A state counts as recovered when it is among the
// solutions within 1e-8 in temperature and 1e-7 in density. Where a pair is ill-conditioned, the tolerance is what a change
// of the given values by a few units in the last place does to the state, which the test measures.
func TestRoundTrips(t *testing.T) {
	perBlend := 8 // states, times 21 pairs times 38 blends
	if !testing.Short() {
		perBlend = 60
	}
	if n, err := strconv.Atoi(os.Getenv("DEWMARK_TEST_STATES")); err == nil {
		perBlend = n
	}
	l := library(t)
	for _, listed := range l.Listed() {
		t.Run(listed.Designation, func(t *testing.T) {
			t.Parallel()
			b := get(t, l, listed.Designation)
			rng := rand.New(rand.NewPCG(2, uint64(perBlend)))
			tried, weak := 0, 0
			for range perBlend {
				s, ok := sample(b, rng)
				for !ok {
					s, ok = sample(b, rng)
				}
				for _, pair := range allPairs() {
					x, y := blend.Given{Property: pair[0], Value: value(&s, pair[0])}, blend.Given{Property: pair[1], Value: value(&s, pair[1])}
					if math.IsNaN(x.Value) || math.IsNaN(y.Value) {
						continue // quality of a single phase
					}
					tried++
					if recovered(t, b, &s, x, y) {
						weak++
					}
				}
			}
			if weak > tried/20 {
				t.Errorf("%d of %d states refused as ill-conditioned", weak, tried)
			}
		})
	}
}

// recovered checks one state and pair and reports whether the solver refused the pair as too weak there.
func recovered(t *testing.T, b *blend.Blend, s *blend.State, x, y blend.Given) bool {
	t.Helper()
	states, err := b.States(x, y)
	if _, ok := errors.AsType[*blend.ConditionError](err); ok {
		return true
	}
	if err != nil {
		t.Errorf("%v %.17g, %v %.17g of %s state at %.17g K, %.17g kg/m3, %g Pa, quality %g: %v", x.Property, x.Value, y.Property, y.Value, s.Phase, s.T, s.Rho, s.P, s.Quality, err)
		return false
	}
	dT, dRho := miss(states, s)
	if dT <= 1e-8 && dRho <= 1e-7 {
		return false
	}
	var spreadT, spreadRho float64
	for _, e := range [][2]float64{{4e-15, 0}, {-4e-15, 0}, {0, 4e-15}, {0, -4e-15}} {
		p, q := x, y
		p.Value += e[0] * scale(x)
		q.Value += e[1] * scale(y)
		if moved, err := b.States(p, q); err == nil {
			mT, mRho := miss(moved, s)
			spreadT, spreadRho = math.Max(spreadT, mT), math.Max(spreadRho, mRho)
		}
	}
	if !(dT <= 1e-8+4*spreadT && dRho <= 1e-7+4*spreadRho) {
		t.Errorf("%v %.17g, %v %.17g of %s state at %.17g K, %.17g kg/m3, %g Pa, quality %g: off by %.1e in T, %.1e in density (spread %.1e, %.1e), %d solutions",
			x.Property, x.Value, y.Property, y.Value, s.Phase, s.T, s.Rho, s.P, s.Quality, dT, dRho, spreadT, spreadRho, len(states))
	}
	return false
}

// scale is the size of the numbers from which a property is summed.
func scale(g blend.Given) float64 {
	switch g.Property {
	case blend.Enthalpy, blend.InternalEnergy:
		return math.Abs(g.Value) + 1e5
	case blend.Entropy:
		return math.Abs(g.Value) + 1e3
	case blend.Quality:
		return 1
	}
	return math.Abs(g.Value)
}

// miss returns the relative distance from s of the solution nearest to it.
func miss(states []blend.State, s *blend.State) (dT, dRho float64) {
	dT, dRho = math.Inf(1), math.Inf(1)
	for _, c := range states {
		if eT, eRho := math.Abs(c.T/s.T-1), math.Abs(c.Rho/s.Rho-1); eT+eRho < dT+dRho {
			dT, dRho = eT, eRho
		}
	}
	return dT, dRho
}

// TestCriticalRegion asks for the same in the rest: from 0.98 to 1.05 of the critical temperature, and colder than -60 °C.
// There a typed error is allowed, if rare, but every state that comes back must have what was asked for.
func TestCriticalRegion(t *testing.T) {
	perBlend := 6
	if !testing.Short() {
		perBlend = 30
	}
	if n, err := strconv.Atoi(os.Getenv("DEWMARK_TEST_STATES")); err == nil {
		perBlend = n
	}
	l := library(t)
	for _, listed := range l.Listed() {
		t.Run(listed.Designation, func(t *testing.T) {
			t.Parallel()
			b := get(t, l, listed.Designation)
			c, limits := b.Critical(), b.Limits()
			rng := rand.New(rand.NewPCG(7, uint64(perBlend)))
			between := func(lo, hi float64) float64 { return lo + (hi-lo)*rng.Float64() }
			tried, refused := 0, 0
			for range perBlend {
				var s blend.State
				err := errors.New("not drawn yet")
				for err != nil {
					if rng.IntN(3) > 0 {
						s, err = b.TemperatureDensity(between(0.98, 1.05)*c.T, c.Rho*math.Exp(between(-1, 0.7)))
					} else {
						s, err = b.TemperatureDensity(between(limits.TemperatureMin, 213), c.Rho*math.Exp(between(-15, math.Log(limits.DensityMax/c.Rho))))
					}
					if _, stuck := errors.AsType[*blend.ConvergenceError](err); stuck {
						tried++
						refused++
					}
				}
				for _, pair := range allPairs() {
					x, y := blend.Given{Property: pair[0], Value: value(&s, pair[0])}, blend.Given{Property: pair[1], Value: value(&s, pair[1])}
					if math.IsNaN(x.Value) || math.IsNaN(y.Value) {
						continue
					}
					tried++
					states, err := b.States(x, y)
					if err != nil {
						refused++
						if !typed(err) {
							t.Errorf("%v %.17g, %v %.17g: untyped error %v", x.Property, x.Value, y.Property, y.Value, err)
						}
						t.Logf("%v %.17g, %v %.17g of %s state at %.17g K, %.17g kg/m3, quality %g: %v", x.Property, x.Value, y.Property, y.Value, s.Phase, s.T, s.Rho, s.Quality, err)
						continue
					}
					for i := range states {
						again, err := b.TemperatureDensity(states[i].T, states[i].Rho)
						if err != nil {
							continue // on the very edge of the limits
						}
						for _, g := range []blend.Given{x, y} {
							// A density wrong by 1e-10 changes the properties of a single phase by that much.
							tolerance := 1e-8*scale(g) + 1e-10*math.Abs(again.DPDRho*again.Rho)
							if again.Phase == blend.TwoPhase {
								tolerance = 1e-6 * scale(g)
							}
							if got := value(&again, g.Property); g.Property != blend.Quality && !(math.Abs(got-g.Value) <= tolerance) {
								t.Errorf("%v %.17g, %v %.17g of %s state at %.17g K, %.17g kg/m3, quality %g: a solution at %.17g K, %.17g kg/m3 has %v %.17g",
									x.Property, x.Value, y.Property, y.Value, s.Phase, s.T, s.Rho, s.Quality, states[i].T, states[i].Rho, g.Property, got)
							}
						}
					}
				}
			}
			if refused > tried/50 {
				t.Errorf("%d of %d refused", refused, tried)
			}
		})
	}
}

// typed reports whether err is one of the error types of the package.
func typed(err error) bool {
	for _, is := range []func() bool{
		func() bool { _, ok := errors.AsType[*blend.RangeError](err); return ok },
		func() bool { _, ok := errors.AsType[*blend.AmbiguousError](err); return ok },
		func() bool { _, ok := errors.AsType[*blend.NoSolutionError](err); return ok },
		func() bool { _, ok := errors.AsType[*blend.ConvergenceError](err); return ok },
		func() bool { _, ok := errors.AsType[*blend.ConditionError](err); return ok },
		func() bool { _, ok := errors.AsType[*blend.DependentPairError](err); return ok },
		func() bool { _, ok := errors.AsType[*blend.DatumError](err); return ok },
		func() bool { _, ok := errors.AsType[*blend.EnvelopeError](err); return ok },
		func() bool { _, ok := errors.AsType[*blend.CompositionError](err); return ok },
		func() bool { _, ok := errors.AsType[*blend.UnverifiedPairError](err); return ok },
	} {
		if is() {
			return true
		}
	}
	return false
}
