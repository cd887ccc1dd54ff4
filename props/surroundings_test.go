package props_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"dewmark/props"
)

// Vapour is never colder than its dew point, liquid never warmer than its bubble point, and what is between has neither
// superheat nor subcooling.
func TestSurroundings(t *testing.T) {
	c, err := props.NewCatalogue()
	if err != nil {
		t.Fatal(err)
	}
	rng := rand.New(rand.NewPCG(4, 4))
	for _, name := range c.Designations() {
		r, err := c.Refrigerant(name, props.DefaultDatum)
		if err != nil {
			t.Fatal(err)
		}
		lowest, highest := r.Limits().TemperatureMin, 1.05*r.Critical().T
		for range 60 {
			T := lowest + (highest-lowest)*rng.Float64()
			p := r.Critical().P * math.Exp(-8*rng.Float64()+0.1)
			s, err := r.TemperaturePressure(T, p)
			if err != nil {
				continue // solid, or at the very edge
			}
			around := props.Surround(r, s)
			switch s.Phase {
			case props.Vapour:
				if around.Superheat < 0 || !math.IsNaN(around.Subcooling) || math.IsNaN(around.Superheat) != math.IsNaN(around.Dew) {
					t.Errorf("%s: vapour at %g K and %g Pa: %+v", name, T, p, around)
				}
			case props.Liquid:
				if around.Subcooling < 0 || !math.IsNaN(around.Superheat) || math.IsNaN(around.Subcooling) != math.IsNaN(around.Bubble) {
					t.Errorf("%s: liquid at %g K and %g Pa: %+v", name, T, p, around)
				}
			default:
				if !math.IsNaN(around.Superheat) || !math.IsNaN(around.Subcooling) {
					t.Errorf("%s: %s at %g K and %g Pa: %+v", name, s.Phase, T, p, around)
				}
			}
		}
		// The edges of the dome exactly.
		for x, want := range []struct{ superheat, subcooling float64 }{{math.NaN(), 0}, {0, math.NaN()}} {
			s, err := r.TemperatureQuality(0.8*r.Critical().T, float64(x))
			if err != nil {
				t.Fatal(err)
			}
			around := props.Surround(r, s)
			same := func(got, want float64) bool { return got == want || math.IsNaN(got) && math.IsNaN(want) }
			if !same(around.Superheat, want.superheat) || !same(around.Subcooling, want.subcooling) {
				t.Errorf("%s: quality %d: %+v", name, x, around)
			}
		}
	}
}
