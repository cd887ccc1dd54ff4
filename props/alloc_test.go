package props_test

import (
	"math"
	"testing"

	"dewmark/props"
)

// operations are the calls whose cost a caller in a loop counts on, around a vapour and its neighbours that every
// refrigerant has.
func operations(t testing.TB, r *props.Pure) map[string]func() (props.State, error) {
	t.Helper()
	c := r.Critical()
	T := 0.85 * c.T
	v, err := r.DewPoint(T)
	if err != nil {
		t.Fatal(err)
	}
	s, err := r.TemperaturePressure(T+10, 0.7*v.P)
	if err != nil {
		t.Fatal(err)
	}
	return map[string]func() (props.State, error){
		"TemperaturePressure":   func() (props.State, error) { return r.TemperaturePressure(s.T, s.P) },
		"TemperatureDensity":    func() (props.State, error) { return r.TemperatureDensity(s.T, s.Rho) },
		"PressureEnthalpy":      func() (props.State, error) { return r.PressureEnthalpy(s.P, s.H) },
		"PressureEntropy":       func() (props.State, error) { return r.PressureEntropy(s.P, s.S) },
		"DewPoint":              func() (props.State, error) { return r.DewPoint(T) },
		"BubblePoint":           func() (props.State, error) { return r.BubblePoint(T) },
		"BubblePointAtPressure": func() (props.State, error) { return r.BubblePointAtPressure(v.P) },
		"DewPointAtPressure":    func() (props.State, error) { return r.DewPointAtPressure(v.P) },
		"liquid":                func() (props.State, error) { return r.TemperaturePressure(T-10, 1.2*v.P) },
		"two-phase":             func() (props.State, error) { return r.PressureEnthalpy(v.P, v.H-1e3) },
		"supercritical": func() (props.State, error) {
			return r.TemperaturePressure(math.Min(1.03*c.T, r.Limits().TemperatureMax), 1.1*c.P)
		},
	}
}

func TestNoAllocation(t *testing.T) {
	for _, id := range catalogue(t).PureDesignations() {
		for name, f := range operations(t, refrigerant(t, id)) {
			n := testing.AllocsPerRun(10, func() {
				s, err := f()
				if err != nil || math.IsNaN(s.H) {
					t.Errorf("%s, %s: %v", id, name, err)
				}
			})
			if n != 0 {
				t.Errorf("%s, %s: %g allocations", id, name, n)
			}
		}
	}
}
