package props

import (
	"math"
	"testing"
)

// IAPWS R14-08(2011), section 5: check values for ice VI and ice VII (from memory). The one for ice V lies below 0 °C,
// where this package has no state.
func TestWaterMeltingPressure(t *testing.T) {
	for _, tt := range []struct{ T, want float64 }{ // K, Pa
		{320, 1356.76e6}, {550, 6308.71e6},
	} {
		if got := waterMeltingPressure(tt.T); !(math.Abs(got-tt.want) <= 0.005e6) {
			t.Errorf("water melts at %g K under %.6g Pa, want %.6g", tt.T, got, tt.want)
		}
	}
	// The curves of two ices meet where one turns into the other, to the digits that their coefficients have.
	for _, T := range []float64{273.31, 355} {
		below, above := waterMeltingPressure(T*(1-1e-12)), waterMeltingPressure(T)
		if !(math.Abs(above/below-1) < 1e-4) {
			t.Errorf("at %g K the curves of two ices give %.6g and %.6g Pa", T, below, above)
		}
	}
}

// Span and Wagner, J. Phys. Chem. Ref. Data 25 (1996) 1509: triple point at 216.592 K, 0.51795 MPa; the tables run along
// the melting curve at 226.679 K, 50 MPa and 327.673 K, 800 MPa (in testdata/single_phase.csv, temperatures rounded).
func TestCarbonDioxideMeltingPressure(t *testing.T) {
	r := &Pure{fluid: &fluid{}}
	r.rec.ID = "R744"
	for _, tt := range []struct{ T, want, half float64 }{ // K, Pa, what half a millikelvin is worth
		{216.592, 0.51795e6, 0}, {226.679, 50e6, 2.6e3}, {327.673, 800e6, 4.6e3},
	} {
		if got := r.meltingPressure(tt.T); !(math.Abs(got-tt.want) <= tt.half) {
			t.Errorf("carbon dioxide melts at %g K under %.8g Pa, want %.8g", tt.T, got, tt.want)
		}
	}
}

func TestMeltingPressureRises(t *testing.T) {
	for _, tt := range []struct {
		id       string
		from, to float64 // K
	}{{"R718", 273.16, 714}, {"R744", 216.592, 1100}} {
		r := &Pure{fluid: &fluid{}}
		r.rec.ID = tt.id
		last := 0.0
		for T := tt.from; T < tt.to; T += 0.5 {
			p := r.meltingPressure(T)
			if !(p > last) {
				t.Errorf("%s: melting pressure %g Pa at %g K after %g", tt.id, p, T, last)
			}
			last = p
		}
	}
}
