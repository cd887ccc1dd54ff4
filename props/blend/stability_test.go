package blend

import (
	"errors"
	"math"
	"testing"
)

// No listed blend has a second liquid along its envelope, from the lowest temperature in use on.
func TestListedBlendsStable(t *testing.T) {
	l := testLibrary(t)
	for _, listed := range l.Listed() {
		b, err := l.Blend(listed.Designation, DefaultDatum)
		if err != nil {
			t.Fatal(err)
		}
		T, err := b.solver().stableFrom(b.d.min[dense].T, manyPlaces)
		if err != nil || T != b.d.min[dense].T {
			t.Errorf("%s splits further below %g K, %v", listed.Designation, T, err)
		}
	}
}

// A phase inside the envelope is unstable, one outside is stable.
func TestStability(t *testing.T) {
	l := testLibrary(t)
	for _, name := range []string{"R407C", "R454C", "R455A", "R436A", "R441A"} {
		b, err := l.Blend(name, DefaultDatum)
		if err != nil {
			t.Fatal(err)
		}
		for _, T := range []float64{230, 270, 310} {
			bubble, err := b.BubblePoint(T)
			if err != nil {
				t.Fatal(err)
			}
			dew, err := b.DewPoint(T)
			if err != nil {
				t.Fatal(err)
			}
			for _, tt := range []struct {
				what     string
				rho      float64
				unstable bool
			}{
				{"liquid", bubble.Rho * 1.002, false},
				{"metastable liquid", bubble.Rho - 0.1*bubble.P/bubble.DPDRho, true},
				{"metastable vapour", dew.Rho * 1.02, true},
				{"vapour", dew.Rho * 0.98, false},
			} {
				st, err := b.Stability(T, tt.rho)
				if err != nil || (st.Distance < -unstable) != tt.unstable {
					t.Errorf("%s at %g K, %s: distance %g, %v", name, T, tt.what, st.Distance, err)
				}
			}
			// On the edge the trial phase is the incipient one.
			st, err := b.Stability(T, bubble.Rho)
			if err != nil || !(math.Abs(st.Distance) < 1e-8) {
				t.Errorf("%s at %g K on the bubble line: distance %g, %v", name, T, st.Distance, err)
			}
		}
	}
}

// A pair of water with a hydrocarbon, which Lorentz-Berthelot rules can not describe, is refused with a reason, or has an
// envelope that is stable all along.
func TestImmisciblePair(t *testing.T) {
	l := testLibrary(t)
	for _, share := range []float64{0.1, 0.5, 0.9} {
		c := Composition{Basis: ByMole, Shares: []Share{{"R718", share}, {"R600", 1 - share}}}
		b, err := l.Mixture(c, DefaultDatum, false)
		if _, ok := errors.AsType[*EnvelopeError](err); ok {
			t.Log(err)
			continue
		}
		if err != nil {
			t.Error(err)
			continue
		}
		if b.Limits().TemperatureMin < 273 {
			t.Errorf("share %g: computed down to %g K", share, b.Limits().TemperatureMin)
		}
	}
}
