package props_test

import (
	"errors"
	"math"
	"testing"

	"dewmark/props"
)

// TestDensityAlongIsotherms raises the pressure along isotherms from vacuum to the limit. Density must rise all the way,
// jump over the dome and never stop inside it, where several equations have a false root that looks stable (those of
// R143a, R32, R23, R170, R600a, R718 and R744 among them).
func TestDensityAlongIsotherms(t *testing.T) {
	nT, nP := 24, 60
	if testing.Short() {
		nT, nP = 8, 30
	}
	for _, id := range catalogue(t).PureDesignations() {
		r := refrigerant(t, id)
		l, c := r.Limits(), r.Critical()
		for i := range nT {
			T := l.TemperatureMin + (math.Min(1.3*c.T, l.TemperatureMax)-l.TemperatureMin)*float64(i)/float64(nT-1)
			pressures := spread(1, l.PressureMax, nP)
			var dome [2]props.State
			ps := math.Inf(1)
			if T < c.T {
				dome = [2]props.State{mustState(t)(r.BubblePoint(T)), mustState(t)(r.DewPoint(T))}
				ps = dome[0].P
				pressures = append(append(spread(1e-3*ps, ps*(1-1e-9), nP), ps*(1+1e-9)), spread(ps*(1+1e-8), l.PressureMax, nP)...)
			}
			last := 0.0
			for _, p := range pressures {
				s, err := r.TemperaturePressure(T, p)
				if e, ok := errors.AsType[*props.RangeError](err); ok && (e.Limit == props.LimitMelting || e.Limit == props.LimitDensity) {
					break
				}
				if err != nil {
					t.Errorf("%s at %g K, %g Pa: %v", id, T, p, err)
					continue
				}
				if !(s.Rho >= last*(1-1e-12)) { // over so small steps of pressure a cold liquid shows rounding only
					t.Errorf("%s at %g K: density falls from %.15g to %.15g kg/m3 at %g Pa", id, T, last, s.Rho, p)
				}
				if liquid := p > ps; T < c.T && (liquid != (s.Phase == props.Liquid) || liquid && s.Rho < dome[0].Rho*(1-1e-9) || !liquid && s.Rho > dome[1].Rho*(1+1e-9)) {
					t.Errorf("%s at %g K: %s of %g kg/m3 at %g Pa, saturation at %g Pa, %g and %g kg/m3", id, T, s.Phase, s.Rho, p, ps, dome[1].Rho, dome[0].Rho)
				}
				last = s.Rho
			}
		}
	}
}

// spread returns n values from a to b in even ratios.
func spread(a, b float64, n int) []float64 {
	out := make([]float64, n)
	for i := range out {
		out[i] = math.Min(b, a*math.Pow(b/a, float64(i)/float64(n-1)))
	}
	return out
}

// TestIsobars raises enthalpy along isobars through all phases: temperature, entropy and volume must not fall, nor jump at
// the edges of the dome. Only cold water shrinks when it is heated.
func TestIsobars(t *testing.T) {
	n := 200
	if testing.Short() {
		n = 60
	}
	for _, id := range catalogue(t).PureDesignations() {
		r := refrigerant(t, id)
		l, c := r.Limits(), r.Critical()
		for _, p := range []float64{0.01 * c.P, 0.3 * c.P, 0.9 * c.P, 0.999 * c.P, 1.001 * c.P, 0.99 * math.Min(2*c.P, l.PressureMax)} {
			low, err := r.TemperaturePressure(l.TemperatureMin, p)
			for T := l.TemperatureMin; err != nil && T < c.T; T *= 1.01 { // many liquids are too dense for their equation there
				low, err = r.TemperaturePressure(T, p)
			}
			if err != nil {
				t.Errorf("%s at %g Pa: %v", id, p, err)
				continue
			}
			high := mustState(t)(r.TemperaturePressure(l.TemperatureMax, p))
			last := low
			for i := range n {
				h := low.H + (high.H-low.H)*float64(i+1)/float64(n+1)
				s, err := r.PressureEnthalpy(p, h)
				if err != nil {
					t.Errorf("%s at %g Pa, %g J/kg: %v", id, p, h, err)
					continue
				}
				if !(s.T >= last.T*(1-1e-13) && s.S > last.S) || s.V() < last.V()*(1-1e-12) && !(id == "R718" && last.T < 278) {
					t.Errorf("%s at %g Pa: from %s to %s at %g J/kg", id, p, where(last), where(s), h)
				}
				// ds = dh/T along an isobar, with T between those of both ends.
				if ds, dh := s.S-last.S, s.H-last.H; !(ds <= dh/last.T*(1+1e-9) && ds >= dh/s.T*(1-1e-9)) {
					t.Errorf("%s at %g Pa: entropy rises by %g over %g J/kg between %g and %g K", id, p, ds, dh, last.T, s.T)
				}
				last = s
			}
		}
	}
}
