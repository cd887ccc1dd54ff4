package props_test

import (
	"errors"
	"math"
	"testing"

	"dewmark/props"
)

// TestExtrapolate asks beyond the range of each equation: refused at first, answered by the view that extrapolates, and
// marked as such, up to the limits that its documentation names.
func TestExtrapolate(t *testing.T) {
	for _, id := range catalogue(t).PureDesignations() {
		plain := refrigerant(t, id)
		wide := plain.Extrapolate()
		l, c := plain.Limits(), plain.Critical()
		hot, p := 1.2*l.TemperatureMax, 0.5*c.P
		_, err := plain.TemperaturePressure(hot, p)
		if e, ok := errors.AsType[*props.RangeError](err); !ok || e.Property != props.Temperature || e.Max != l.TemperatureMax {
			t.Errorf("%s at %g K: %v", id, hot, err)
		}
		s := mustState(t)(wide.TemperaturePressure(hot, p))
		if !wide.Extrapolated(s) || !plain.Extrapolated(s) || odd(s) != "" {
			t.Errorf("%s: %+v counts as inside the range, or is odd: %q", id, s, odd(s))
		}
		// Inside the range both views give the same, and it is not marked.
		T := math.Min(c.T, l.TemperatureMax)
		a, b := mustState(t)(plain.TemperaturePressure(T, p)), mustState(t)(wide.TemperaturePressure(T, p))
		if !near(a.Rho, b.Rho, 1e-14, 0) || !near(a.H, b.H, 1e-13, 1e5) || wide.Extrapolated(b) {
			t.Errorf("%s inside the range: %+v and %+v", id, a, b)
		}
		if two := mustState(t)(wide.TemperatureQuality(0.9*c.T, 0.5)); wide.Extrapolated(two) {
			t.Errorf("%s: a two-phase state counts as extrapolated", id)
		}
		if plain.Limits() != wide.Limits() {
			t.Errorf("%s: limits %+v of the wider view, want those of the equation", id, wide.Limits())
		}
		for _, tt := range []struct {
			a, b     props.Given
			property props.Property
			max      float64
		}{
			{given(props.Temperature, 1.51*l.TemperatureMax), given(props.Pressure, p), props.Temperature, 1.5 * l.TemperatureMax},
			{given(props.Temperature, T), given(props.Pressure, 2.01*l.PressureMax), props.Pressure, 2 * l.PressureMax},
			{given(props.Temperature, T), given(props.Density, 1.16*l.DensityMax), props.Density, 1.15 * l.DensityMax},
		} {
			_, err := wide.States(tt.a, tt.b)
			if e, ok := errors.AsType[*props.RangeError](err); !ok || e.Property != tt.property || !near(e.Max, tt.max, 1e-12, 0) {
				t.Errorf("%s, %s %g: %v, want a limit of %g", id, tt.property, tt.a.Value, err, tt.max)
			}
		}
	}
}

// TestPoints compares what a refrigerant says about its own landmarks.
func TestPoints(t *testing.T) {
	for _, id := range catalogue(t).PureDesignations() {
		r := refrigerant(t, id)
		l, c := r.Limits(), r.Critical()
		T, p := r.SaturationLimits()
		if got, err := r.SaturationPressure(T); err != nil || got != p {
			t.Errorf("%s: saturation begins at %g Pa, %g (%v) at its lowest temperature", id, p, got, err)
		}
		if got, err := r.SaturationTemperature(c.P); err != nil || !near(got, c.T, 1e-12, 0) {
			t.Errorf("%s: boils at %.15g K (%v) under its critical pressure, want %.15g", id, got, err, c.T)
		}
		if !(l.TemperatureMin <= T && T < c.T && c.T <= l.TemperatureMax && c.P < l.PressureMax && c.Rho < l.DensityMax) {
			t.Errorf("%s: limits %+v, critical point %+v, saturation from %g K", id, l, c, T)
		}
		boiling := r.NormalBoilingPoint()
		if math.IsNaN(boiling) != (p > props.StandardAtmosphere) {
			t.Errorf("%s: normal boiling point %g K", id, boiling)
		}
		if s, err := r.BubblePointAtPressure(props.StandardAtmosphere); err == nil && !near(s.T, boiling, 1e-14, 0) {
			t.Errorf("%s: boils at %.15g and at %.15g K", id, boiling, s.T)
		}
	}
}
