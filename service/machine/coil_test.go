package machine

import (
	"math"
	"testing"

	"dewmark/props/secondary"
)

// integrated walks along a coil of even refrigerant temperature in many small steps, each with its own surface: heat from
// the air by its temperature and moisture by its humidity ratio (Lewis number 1), passed on through the inner resistance.
// It is what the models of whole coils approximate.
func integrated(k *strip, ua float64) (heat float64, out airState) {
	const steps = 2000
	outer, inner := ua/k.share, math.Inf(1)
	if k.share < 1 {
		inner = ua / (1 - k.share)
	}
	T, W := k.air.T, k.air.W
	for range steps {
		cp := moistCapacity(W)
		// Find the surface temperature by bisection: what arrives from the air passes to the refrigerant.
		arrives := func(s float64) (dry, wet float64) {
			_, _, Ws := secondary.Saturation(k.pressure, s)
			dry = outer / steps * (T - s)
			if W > Ws {
				wet = outer / steps / cp * (W - Ws)
			}
			return dry, wet
		}
		low, high := k.T1, T
		for range 45 {
			s := (low + high) / 2
			dry, wet := arrives(s)
			if total := dry + wet*latent(s); total > inner/steps*(s-k.T1) {
				low = s
			} else {
				high = s
			}
		}
		dry, wet := arrives((low + high) / 2)
		heat += dry + wet*latent((low+high)/2)
		T -= dry / (k.flow * cp)
		W -= wet / k.flow
	}
	return heat, airState{T, W, 0}
}

// latent is the heat that a kilogram of vapour gives off on a surface, J/kg.
func latent(T float64) float64 {
	return 2501e3 + 1860*(T-zeroCelsius) - secondary.CondensateEnthalpy(T)
}

func stripOf(t *testing.T, T, phi, refrigerant, share float64) strip {
	t.Helper()
	a, err := secondary.AirByRelativeHumidity(101325, T, phi)
	if err != nil {
		t.Fatal(err)
	}
	return strip{pressure: a.P, air: airState{a.T, a.W, a.Enthalpy()}, flow: 1.2, T1: refrigerant, T2: refrigerant, share: share}
}

// The wet coil agrees with the integration within the few per cent that one mean slope of the saturation line and the
// neglect of the condensate's enthalpy leave; frost makes the latter larger.
func TestWetCoilAgainstIntegration(t *testing.T) {
	for _, c := range []struct {
		name                   string
		T, phi, evaporation    float64
		share, ua              float64
		within, moistureWithin float64
	}{
		{"chilled air", 300.15, 0.55, 280.15, 0.7, 2000, 0.02, 0.10},
		{"muggy air", 303.15, 0.85, 283.15, 0.8, 1500, 0.02, 0.10},
		{"all resistance in the air", 300.15, 0.6, 281.15, 1, 1500, 0.02, 0.10},
		{"heat pump at 7 °C", 280.15, 0.87, 274.15, 0.7, 1500, 0.02, 0.10},
		{"frost at 2 °C", 275.15, 0.85, 268.15, 0.7, 1500, 0.06, 0.15},
		{"frost at -7 °C", 266.15, 0.87, 259.15, 0.7, 1500, 0.06, 0.15},
	} {
		k := stripOf(t, c.T, c.phi, c.evaporation, c.share)
		want, air := integrated(&k, c.ua)
		got := k.wetHeat(c.ua)
		if !(math.Abs(got/want-1) <= c.within) {
			t.Errorf("%s: %.0f W, integrated %.0f W", c.name, got, want)
		}
		k.heat = got
		needed, surface := k.wet()
		if !(math.Abs(needed/c.ua-1) <= 1e-9) {
			t.Errorf("%s: %g W/K passes the heat of %g W/K", c.name, needed, c.ua)
		}
		out := k.leave(c.ua, true, surface)
		if shed, all := k.air.W-out.air.W, k.air.W-air.W; !out.wet || !(math.Abs(shed/all-1) <= c.moistureWithin) {
			t.Errorf("%s: sheds %g kg/kg, integrated %g", c.name, shed, all)
		}
		// The air's balance closes: enthalpy and what the condensate takes along.
		balance := k.flow * (k.air.h - out.air.h - (k.air.W-out.air.W)*secondary.CondensateEnthalpy(surface))
		if !(math.Abs(balance/got-1) <= 1e-12) {
			t.Errorf("%s: the air gives off %g W of %g W", c.name, balance, got)
		}
		if T := dryBulb(out.air.h, out.air.W); !(math.Abs(T-out.air.T) <= 1e-9) {
			t.Errorf("%s: air leaves at %g K, its enthalpy means %g K", c.name, out.air.T, T)
		}
	}
}

// A surface above the dew point stays dry, and the dry formula is the logarithmic mean.
func TestDryCoil(t *testing.T) {
	k := stripOf(t, 293.15, 0.2, 280.15, 0.7) // dew point -3 °C
	k.heat = 8000
	C := k.capacity()
	want := -C * math.Log(1-k.heat/(C*(k.air.T-k.T1)))
	if got := k.dry(Counterflow, k.air.T-k.T2); !(math.Abs(got/want-1) <= 1e-12) {
		t.Errorf("dry conductance %g, want %g", got, want)
	}
	if wet, _ := k.wet(); wet < want {
		t.Errorf("a dry surface would pass more when wet: %g W/K instead of %g", wet, want)
	}
	if out := k.leave(want, true, 281); out.wet || out.air.W != k.air.W {
		t.Errorf("air sheds water on a surface above its dew point: %+v", out)
	}
	k.heat = C * (k.air.T - k.T1) * 1.01
	if got := k.dry(Counterflow, k.air.T-k.T2); !math.IsInf(got, 1) {
		t.Errorf("more heat than the air has takes %g W/K", got)
	}
}

// Nearly saturated air mixes with the cold surface's into fog, which rains out.
func TestFog(t *testing.T) {
	k := stripOf(t, 303.15, 1, 275.15, 0.7)
	k.heat = k.wetHeat(1500)
	_, surface := k.wet()
	out := k.leave(1500, true, surface)
	_, _, W := secondary.Saturation(k.pressure, out.air.T)
	if !(out.air.W <= W*(1+1e-9)) {
		t.Errorf("air leaves supersaturated: %g of %g kg/kg", out.air.W, W)
	}
}
