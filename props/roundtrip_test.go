package props_test

import (
	"errors"
	"math"
	"math/rand/v2"
	"os"
	"strconv"
	"testing"

	"dewmark/props"
)

// allPairs lists the 21 pairs of the seven properties.
func allPairs() [][2]props.Property {
	var out [][2]props.Property
	for a := props.Temperature; a <= props.Quality; a++ {
		for b := a + 1; b <= props.Quality; b++ {
			out = append(out, [2]props.Property{a, b})
		}
	}
	return out
}

func value(s props.State, p props.Property) float64 {
	switch p {
	case props.Temperature:
		return s.T
	case props.Pressure:
		return s.P
	case props.Density:
		return s.Rho
	case props.Enthalpy:
		return s.H
	case props.Entropy:
		return s.S
	case props.InternalEnergy:
		return s.U
	default:
		return s.Quality
	}
}

// sample returns a random state of r: half of them anywhere in temperature and density, a fifth inside the dome, the
// rest near the saturation line and near the critical point. It reports false when the draw lies outside validity.
func sample(r *props.Pure, rng *rand.Rand) (props.State, bool) {
	l, c := r.Limits(), r.Critical()
	between := func(a, b float64) float64 { return a + (b-a)*rng.Float64() }
	var s props.State
	var err error
	switch k := rng.IntN(10); {
	case k < 5:
		T := between(l.TemperatureMin, l.TemperatureMax)
		rho := c.Rho * math.Exp(between(math.Log(1e-4), math.Log(l.DensityMax/c.Rho)))
		s, err = r.TemperatureDensity(T, rho)
	case k < 7:
		s, err = r.TemperatureQuality(between(l.TemperatureMin, c.T), rng.Float64())
	case k < 9:
		T := between(l.TemperatureMin, c.T)
		if s, err = r.TemperatureQuality(T, float64(rng.IntN(2))); err == nil {
			away := 1 + math.Exp(between(math.Log(1e-6), math.Log(0.1)))
			if s.Quality == 1 {
				away = 1 / away
			}
			s, err = r.TemperatureDensity(T, s.Rho*away)
		}
	default:
		s, err = r.TemperatureDensity(c.T*between(0.97, 1.06), c.Rho*between(0.5, 1.6))
	}
	return s, err == nil
}

// TestRoundTrips recovers states from every pair of their properties. A state counts as recovered when it is among the
// solutions within 1e-8 in temperature and 1e-7 in density. Where a pair is ill-conditioned, the tolerance is what a
// change of the given values by a few units in the last place does to the state; the test measures that by solving
// again with the values changed by 4e-15 of their scale.
func TestRoundTrips(t *testing.T) {
	perRefrigerant := 12 // times 21 pairs times 46 refrigerants
	if !testing.Short() {
		perRefrigerant = 210
	}
	if n, err := strconv.Atoi(os.Getenv("DEWMARK_TEST_STATES")); err == nil {
		perRefrigerant = n
	}
	pairs := allPairs()
	for _, id := range catalogue(t).PureDesignations() {
		t.Run(id, func(t *testing.T) {
			t.Parallel()
			r := refrigerant(t, id)
			rng := rand.New(rand.NewPCG(1, uint64(len(id))*1000+uint64(id[len(id)-1])))
			tried, refused := 0, 0
			for tried < perRefrigerant*len(pairs) {
				s, ok := sample(r, rng)
				if !ok {
					continue
				}
				for _, pair := range pairs {
					a, b := props.Given{Property: pair[0], Value: value(s, pair[0])}, props.Given{Property: pair[1], Value: value(s, pair[1])}
					if math.IsNaN(a.Value) || math.IsNaN(b.Value) {
						continue // quality of a single phase
					}
					if s.Phase == props.TwoPhase && pair == [2]props.Property{props.Temperature, props.Pressure} {
						continue // does not fix a two-phase state
					}
					tried++
					if weak := recovered(t, r, s, a, b); weak {
						refused++
					}
				}
			}
			if refused > tried/20 {
				t.Errorf("%d of %d states refused as ill-conditioned", refused, tried)
			}
		})
	}
}

// recovered checks one state and pair and reports whether the solver refused the pair as too weak there.
func recovered(t *testing.T, r *props.Pure, s props.State, a, b props.Given) bool {
	t.Helper()
	states, err := r.States(a, b)
	if _, ok := errors.AsType[*props.ConditionError](err); ok {
		return true
	}
	if err != nil {
		t.Errorf("%v %.17g, %v %.17g of %s state at %.17g K, %.17g kg/m3, %g Pa: %v", a.Property, a.Value, b.Property, b.Value, s.Phase, s.T, s.Rho, s.P, err)
		return false
	}
	dT, dRho := miss(states, s)
	if dT <= 1e-8 && dRho <= 1e-7 {
		return false
	}
	// How far does rounding of the given values move the state?
	var spreadT, spreadRho float64
	for _, e := range [][2]float64{{4e-15, 0}, {-4e-15, 0}, {0, 4e-15}, {0, -4e-15}} {
		x, y := a, b
		x.Value += e[0] * scale(a)
		y.Value += e[1] * scale(b)
		if moved, err := r.States(x, y); err == nil {
			mT, mRho := miss(moved, s)
			spreadT, spreadRho = math.Max(spreadT, mT), math.Max(spreadRho, mRho)
		}
	}
	if !(dT <= 1e-8+4*spreadT && dRho <= 1e-7+4*spreadRho) {
		t.Errorf("%v %.17g, %v %.17g of %s state at %.17g K, %.17g kg/m3, %g Pa, x %g: off by %.1e in T, %.1e in density (spread %.1e, %.1e), %d solutions",
			a.Property, a.Value, b.Property, b.Value, s.Phase, s.T, s.Rho, s.P, s.Quality, dT, dRho, spreadT, spreadRho, len(states))
	}
	return false
}

// scale is the size of the numbers from which a property is summed.
func scale(g props.Given) float64 {
	switch g.Property {
	case props.Enthalpy, props.InternalEnergy:
		return math.Abs(g.Value) + 1e5
	case props.Entropy:
		return math.Abs(g.Value) + 1e3
	case props.Quality:
		return 1
	}
	return math.Abs(g.Value)
}

// miss returns the relative distance from s of the solution nearest to it.
func miss(states []props.State, s props.State) (dT, dRho float64) {
	dT, dRho = math.Inf(1), math.Inf(1)
	for _, c := range states {
		if eT, eRho := math.Abs(c.T/s.T-1), math.Abs(c.Rho/s.Rho-1); eT+eRho < dT+dRho {
			dT, dRho = eT, eRho
		}
	}
	return dT, dRho
}

// A liquid or vapour beside its saturation line is found from temperature and entropy or energy, and a state at an end of the
// range of temperatures from its density: rounding leaves no gap between the searches and the states.
func TestNoGapsAtEdges(t *testing.T) {
	for _, id := range catalogue(t).PureDesignations() {
		r := refrigerant(t, id)
		lo, _ := r.SaturationLimits()
		for i := range 24 {
			T := lo + (r.Critical().T-lo)*(float64(i)+0.3)/25
			p, err := r.SaturationPressure(T)
			if err != nil {
				t.Fatal(err)
			}
			for _, away := range []float64{1 + 1e-7, 1 - 1e-7} {
				s, err := r.TemperaturePressure(T, p*away)
				if err != nil {
					continue // solid, or on the line itself
				}
				for _, y := range []props.Property{props.Entropy, props.InternalEnergy} {
					_, err := r.States(props.Given{Property: props.Temperature, Value: T}, props.Given{Property: y, Value: value(s, y)})
					if _, none := errors.AsType[*props.NoSolutionError](err); none {
						t.Errorf("%s at %.17g K and %g times the vapour pressure: %v", id, T, away, err)
					}
				}
			}
		}
		for i := range 24 {
			s, err := r.BubblePoint(lo + (r.Critical().T-lo)*(float64(i)+0.3)/25)
			if err != nil {
				t.Fatal(err)
			}
			_, err = r.States(props.Given{Property: props.Temperature, Value: s.T}, props.Given{Property: props.Enthalpy, Value: s.H})
			if e, out := errors.AsType[*props.RangeError](err); out {
				t.Errorf("%s boiling at %.17g K: %v", id, s.T, e)
			}
		}
		for _, T := range []float64{r.Limits().TemperatureMin, r.Limits().TemperatureMax} {
			for i := range 20 {
				s, err := r.TemperatureDensity(T, r.Critical().Rho*math.Exp(-7+0.35*float64(i)))
				if err != nil || s.Phase == props.TwoPhase {
					continue
				}
				if _, err := r.States(props.Given{Property: props.Density, Value: s.Rho}, props.Given{Property: props.Entropy, Value: s.S}); err != nil {
					t.Errorf("%s at %g K, %.17g kg/m3: %v", id, T, s.Rho, err)
				}
			}
		}
	}
}
