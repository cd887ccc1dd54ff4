package secondary

import (
	"math"
	"sync"

	"dewmark/props/data"
)

// The range of the saturation pressure of water vapour, K, and the triple point, below which it is that over ice.
const (
	vapourMin   = 173.15
	vapourMax   = 473.15
	triplePoint = 273.16
)

// vapour decodes the embedded coefficients once. They are covered by a test, so that failure can only mean a damaged file.
var vapour = sync.OnceValue(func() *data.MoistAir {
	a, err := data.LoadMoistAir()
	if err != nil {
		panic("secondary: " + err.Error())
	}
	return a
})

// VapourPressure returns the saturation pressure of water vapour in Pa at temperature T in K, over ice below the triple
// point. It returns a [*RangeError] outside -100 to 200 °C.
func VapourPressure(T float64) (float64, error) {
	if err := checkVapour(Temperature, T); err != nil {
		return 0, err
	}
	p, _ := saturated(T)
	return p, nil
}

func checkVapour(q Quantity, T float64) error {
	if !(vapourMin <= T && T <= vapourMax) {
		return &RangeError{"moist air", q, T, vapourMin, vapourMax, "validity of the saturation pressure"}
	}
	return nil
}

// saturated returns the saturation pressure in Pa and its slope in Pa/K.
func saturated(T float64) (p, slope float64) {
	a := vapour()
	var lnp, d float64
	if T < triplePoint {
		c := &a.Ice
		lnp = c[0]/T + c[1] + T*(c[2]+T*(c[3]+T*(c[4]+T*c[5]))) + c[6]*math.Log(T)
		d = -c[0]/(T*T) + c[2] + T*(2*c[3]+T*(3*c[4]+T*4*c[5])) + c[6]/T
	} else {
		c := &a.Water
		lnp = c[0]/T + c[1] + T*(c[2]+T*(c[3]+T*c[4])) + c[5]*math.Log(T)
		d = -c[0]/(T*T) + c[2] + T*(2*c[3]+T*3*c[4]) + c[5]/T
	}
	p = math.Exp(lnp)
	return p, p * d
}

// saturationTemperature returns the temperature in K at which the saturation pressure is p. Between the pressures that
// the two branches have at the triple point it returns the triple point.
func saturationTemperature(p float64) float64 {
	low, high := vapourMin, vapourMax
	x := math.Log(p)
	T := 273.15 * (1 + (x-math.Log(611.2))/20) // slope of ln p at 0 °C: 20 per 273 K
	for range 60 {
		if !(low < T && T < high) {
			T = (low + high) / 2
		}
		q, slope := saturated(T)
		f := math.Log(q) - x
		if f > 0 {
			high = T
		} else {
			low = T
		}
		dT := -f * q / slope
		T += dT
		if math.Abs(dT) <= 1e-13*T || high-low <= 1e-13*T {
			break
		}
	}
	return math.Max(low, math.Min(T, high))
}
