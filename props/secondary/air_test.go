package secondary

import (
	"errors"
	"math"
	"testing"

	"dewmark/props"
)

// 20 °C, 50 %, 101325 Pa, printed to five digits (independent evaluation of the relations of ASHRAE Handbook Fundamentals).
func TestAirCheckPoint(t *testing.T) {
	a, err := AirByRelativeHumidity(101325, 293.15, 0.5)
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct {
		name            string
		got, want, half float64
	}{
		{"humidity ratio", a.W, 0.0072617, 5e-8},
		{"enthalpy", a.Enthalpy() / 1e3, 38.552, 5e-4},
		{"wet bulb", a.WetBulb() - 273.15, 13.78, 5e-3},
		{"volume", a.Volume(), 0.84016, 5e-6},
	} {
		if !(math.Abs(c.got-c.want) <= c.half) {
			t.Errorf("%s: %.8g, want %g", c.name, c.got, c.want)
		}
	}
}

// The psychrometric saturation pressures agree with the equation of state of water within the 0.02 % that their
// verification states, plus its rounding.
func TestVapourPressureAgainstWater(t *testing.T) {
	r, err := catalogue().Pure("R718", props.DefaultDatum)
	if err != nil {
		t.Fatal(err)
	}
	for T := 273.16; T <= 373.15; T += 2.5 {
		want, err := r.SaturationPressure(T)
		if err != nil {
			t.Fatal(err)
		}
		got, err := VapourPressure(T)
		if err != nil || !(math.Abs(got/want-1) <= 2.5e-4) {
			t.Errorf("%g K: %g Pa, %v; equation of state %g", T, got, err, want)
		}
	}
}

// IAPWS R14-08(2011), sublimation pressure of ice at 230 K: 8.94735 Pa (check value of the release, from memory).
func TestVapourPressureOverIce(t *testing.T) {
	got, err := VapourPressure(230)
	if err != nil || !(math.Abs(got/8.94735-1) <= 5e-4) {
		t.Errorf("230 K: %g Pa, %v", got, err)
	}
}

func TestSaturationSlopes(t *testing.T) {
	const d = 1e-3
	for T := 180.0; T < 470; T += 7.3 {
		_, slope := saturated(T)
		high, _ := saturated(T + d)
		low, _ := saturated(T - d)
		if !(math.Abs((high-low)/(2*d)/slope-1) <= 1e-6) {
			t.Errorf("slope of the saturation pressure at %g K: %g, difference %g", T, slope, (high-low)/(2*d))
		}
		if T > 360 {
			continue
		}
		_, s, _ := Saturation(101325, T)
		up, _, _ := Saturation(101325, T+d)
		down, _, _ := Saturation(101325, T-d)
		if !(math.Abs((up-down)/(2*d)/s-1) <= 1e-6) {
			t.Errorf("slope of the saturated enthalpy at %g K: %g, difference %g", T, s, (up-down)/(2*d))
		}
	}
}

// Every way to describe moist air leads back to the same air, at sea level and on a mountain.
func TestAirRoundTrips(t *testing.T) {
	for _, p := range []float64{101325, 70e3} {
		for _, T := range []float64{233.15, 258.15, 271, 273.15, 273.2, 275, 283.15, 300, 318.15} {
			for _, phi := range []float64{0.02, 0.3, 0.5, 0.87, 0.999, 1} {
				a, err := AirByRelativeHumidity(p, T, phi)
				if err != nil {
					t.Fatal(err)
				}
				if got := a.RelativeHumidity(); !(math.Abs(got-phi) <= 1e-12) {
					t.Errorf("%g Pa %g K: relative humidity %g comes back as %g", p, T, phi, got)
				}
				dew, bulb := a.DewPoint(), a.WetBulb()
				if !(dew <= bulb+1e-9 && bulb <= T+1e-9) {
					t.Errorf("%g Pa %g K %g: dew point %g, wet bulb %g", p, T, phi, dew, bulb)
				}
				b, err := AirByDewPoint(p, T, dew)
				// At the triple point the two branches of the saturation pressure leave a step of 3e-6.
				if err != nil || !(math.Abs(b.W-a.W) <= 1e-5*a.W) {
					t.Errorf("%g Pa %g K %g: by dew point %g, %v; want %g", p, T, phi, b.W, err, a.W)
				}
				c, err := AirByWetBulb(p, T, bulb)
				if err != nil || !(math.Abs(c.W-a.W) <= 1e-11) {
					t.Errorf("%g Pa %g K %g: by wet bulb %g %g, %v; want %g", p, T, phi, bulb, c.W, err, a.W)
				}
				e, err := AirByHumidityRatio(p, T, a.W)
				if err != nil || e != a {
					t.Errorf("%g Pa %g K %g: by humidity ratio %v, %v", p, T, phi, e, err)
				}
			}
		}
	}
}

func TestAirIdentities(t *testing.T) {
	a, err := AirByRelativeHumidity(95e3, 290, 0.6)
	if err != nil {
		t.Fatal(err)
	}
	if got, want := a.Density()*a.Volume(), 1+a.W; !(math.Abs(got-want) <= 1e-12) {
		t.Errorf("density times volume: %g, want %g", got, want)
	}
	b := a.Heated(5000)
	if got := b.Enthalpy() - a.Enthalpy(); !(math.Abs(got-5000) <= 1e-6) || b.W != a.W {
		t.Errorf("heating by 5000 J/kg changes the enthalpy by %g", got)
	}
	s, err := SaturatedAir(a.P, a.DewPoint())
	if err != nil || !(math.Abs(s.W-a.W) <= 1e-12) {
		t.Errorf("saturated at the dew point: %g, %v; want %g", s.W, err, a.W)
	}
	h, _, W := Saturation(s.P, s.T)
	if !(math.Abs(h-s.Enthalpy()) <= 1e-6) || W != s.W {
		t.Errorf("saturation: %g %g, want %g %g", h, W, s.Enthalpy(), s.W)
	}
	// Ice holds the heat of fusion less than water.
	if got := CondensateEnthalpy(273.15) - CondensateEnthalpy(273.15-1e-9); !(math.Abs(got-333.4e3) <= 1) {
		t.Errorf("melting takes %g J/kg", got)
	}
}

func TestAirRefusals(t *testing.T) {
	for name, f := range map[string]func() error{
		"pressure too low":       func() error { _, err := AirByRelativeHumidity(500, 290, 0.5); return err },
		"pressure is no number":  func() error { _, err := AirByRelativeHumidity(math.NaN(), 290, 0.5); return err },
		"too hot":                func() error { _, err := AirByRelativeHumidity(1e5, 500, 0.5); return err },
		"humidity above 1":       func() error { _, err := AirByRelativeHumidity(1e5, 290, 1.01); return err },
		"boiling":                func() error { _, err := AirByRelativeHumidity(1e5, 380, 1); return err },
		"supersaturated":         func() error { _, err := AirByHumidityRatio(1e5, 280, 0.02); return err },
		"negative ratio":         func() error { _, err := AirByHumidityRatio(1e5, 280, -0.001); return err },
		"dew point above":        func() error { _, err := AirByDewPoint(1e5, 280, 281); return err },
		"wet bulb above":         func() error { _, err := AirByWetBulb(1e5, 280, 280.1); return err },
		"wet bulb below dry air": func() error { _, err := AirByWetBulb(1e5, 300, 273.15); return err },
		"saturation too cold":    func() error { _, err := VapourPressure(100); return err },
		"saturation no number":   func() error { _, err := SaturatedAir(1e5, math.NaN()); return err },
	} {
		if e, ok := errors.AsType[*RangeError](f()); !ok || e.Error() == "" {
			t.Errorf("%s: %v", name, f())
		}
	}
	if h, _, _ := Saturation(101325, 380); !math.IsInf(h, 1) {
		t.Errorf("saturated enthalpy above boiling: %g", h)
	}
	if h, _, _ := Saturation(101325, 90); !math.IsNaN(h) {
		t.Errorf("saturated enthalpy outside the range: %g", h)
	}
}

func FuzzAir(f *testing.F) {
	f.Add(101325.0, 293.15, 0.5)
	f.Add(70e3, 273.15, 1.0)
	f.Add(1e3, 173.15, 0.0)
	f.Add(1e6, 473.15, 0.6)
	f.Add(math.NaN(), math.Inf(1), -1.0)
	f.Fuzz(func(t *testing.T, p, T, phi float64) {
		a, err := AirByRelativeHumidity(p, T, phi)
		if err != nil {
			return
		}
		for _, v := range []float64{a.W, a.Enthalpy(), a.Volume(), a.Density(), a.DewPoint(), a.WetBulb(), a.RelativeHumidity()} {
			if math.IsNaN(v) || math.IsInf(v, 0) {
				t.Fatalf("%+v: a property is %g", a, v)
			}
		}
		if bulb := a.WetBulb(); bulb > T+1e-9 || bulb < a.DewPoint()-1e-3 {
			t.Fatalf("%+v: wet bulb %g, dew point %g", a, bulb, a.DewPoint())
		}
	})
}
