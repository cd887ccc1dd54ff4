package secondary

import "math"

// Constants of the psychrometric relations (ASHRAE Handbook Fundamentals, chapter Psychrometrics; from memory). Those of
// energy are J/(kg K) and J/kg.
const (
	massRatio    = 0.621945 // molar mass of water over that of dry air
	dryGas       = 287.042  // gas constant of dry air, J/(kg K)
	dryCapacity  = 1006.0
	steamHeat    = 2501e3 // evaporation at 0 °C
	steam        = 1860.0
	liquidWater  = 4186.0
	icing        = 2830e3  // sublimation at 0 °C, in the wet-bulb equation over ice
	iceCapacity  = 2100.0  // likewise
	waterInBulb  = 2326.0  // slope of the heat of evaporation in the wet-bulb equation
	iceInBulb    = 240.0   // likewise over ice
	fusion       = 333.4e3 // melting at 0 °C
	pressureMin  = 1e3     // Pa
	pressureMax  = 1e6     // Pa; the ideal-gas relations lose their per mille far below
	bulbInterval = 1e-11   // K, width of the last bracket of a wet-bulb temperature, near rounding
)

// Air is moist air in one state. The zero value is none; make it by one of the functions that begin with Air.
type Air struct {
	T float64 // dry-bulb temperature, K
	P float64 // pressure, Pa
	W float64 // humidity ratio, kg water per kg dry air
}

func checkAir(p, T float64) error {
	if !(pressureMin <= p && p <= pressureMax) {
		return &RangeError{"moist air", Pressure, p, pressureMin, pressureMax, "validity of the psychrometric relations"}
	}
	return checkVapour(Temperature, T)
}

// AirByRelativeHumidity returns moist air at pressure p in Pa and dry-bulb temperature T in K with relative humidity phi,
// 0 to 1, over ice below 0 °C. It returns a [*RangeError]; the other constructors likewise.
func AirByRelativeHumidity(p, T, phi float64) (Air, error) {
	if err := checkAir(p, T); err != nil {
		return Air{}, err
	}
	if !(0 <= phi && phi <= 1) {
		return Air{}, &RangeError{"moist air", RelativeHumidity, phi, 0, 1, "dry to saturated"}
	}
	ps, _ := saturated(T)
	if !(phi*ps < p) {
		return Air{}, &RangeError{"moist air", RelativeHumidity, phi, 0, p / ps, "vapour pressure below the total pressure"}
	}
	return Air{T, p, massRatio * phi * ps / (p - phi*ps)}, nil
}

// AirByHumidityRatio returns moist air with humidity ratio W in kg water per kg dry air.
func AirByHumidityRatio(p, T, W float64) (Air, error) {
	if err := checkAir(p, T); err != nil {
		return Air{}, err
	}
	if most := saturatedRatio(p, T); !(0 <= W && W <= most) {
		return Air{}, &RangeError{"moist air", HumidityRatio, W, 0, most, "dry to saturated"}
	}
	return Air{T, p, W}, nil
}

// AirByDewPoint returns moist air with its dew point, or frost point, in K.
func AirByDewPoint(p, T, dewPoint float64) (Air, error) {
	if err := checkAir(p, T); err != nil {
		return Air{}, err
	}
	if !(vapourMin <= dewPoint && dewPoint <= T) {
		return Air{}, &RangeError{"moist air", DewPoint, dewPoint, vapourMin, T, "at most the dry-bulb temperature"}
	}
	return AirByHumidityRatio(p, T, saturatedRatio(p, dewPoint))
}

// AirByWetBulb returns moist air with its thermodynamic wet-bulb temperature in K, over ice below 0 °C.
func AirByWetBulb(p, T, wetBulb float64) (Air, error) {
	if err := checkAir(p, T); err != nil {
		return Air{}, err
	}
	least := Air{T: T, P: p}.WetBulb()
	if !(least <= wetBulb && wetBulb <= T) {
		return Air{}, &RangeError{"moist air", WetBulb, wetBulb, least, T, "dry to saturated"}
	}
	W := bulbRatio(p, T, wetBulb, wetBulb >= zeroCelsius)
	return Air{T, p, math.Max(0, math.Min(W, saturatedRatio(p, T)))}, nil
}

// SaturatedAir returns saturated air at pressure p in Pa and temperature T in K.
func SaturatedAir(p, T float64) (Air, error) { return AirByRelativeHumidity(p, T, 1) }

// saturatedRatio returns the humidity ratio at saturation, infinite where water boils.
func saturatedRatio(p, T float64) float64 {
	ps, _ := saturated(T)
	if ps >= p {
		return math.Inf(1)
	}
	return massRatio * ps / (p - ps)
}

// bulbRatio returns the humidity ratio at a wet-bulb temperature over water, or over ice.
func bulbRatio(p, T, wetBulb float64, water bool) float64 {
	t, b := T-zeroCelsius, wetBulb-zeroCelsius
	Ws := saturatedRatio(p, wetBulb)
	if water {
		return ((steamHeat-waterInBulb*b)*Ws - dryCapacity*(t-b)) / (steamHeat + steam*t - liquidWater*b)
	}
	return ((icing-iceInBulb*b)*Ws - dryCapacity*(t-b)) / (icing + steam*t - iceCapacity*b)
}

// VapourPressure returns the partial pressure of water vapour in Pa.
func (a Air) VapourPressure() float64 { return a.P * a.W / (massRatio + a.W) }

// RelativeHumidity returns the vapour pressure over that at saturation, over ice below 0 °C.
func (a Air) RelativeHumidity() float64 {
	ps, _ := saturated(a.T)
	return a.VapourPressure() / ps
}

// Enthalpy returns the enthalpy in J per kg of dry air.
func (a Air) Enthalpy() float64 { return airEnthalpy(a.T, a.W) }

func airEnthalpy(T, W float64) float64 {
	t := T - zeroCelsius
	return dryCapacity*t + W*(steamHeat+steam*t)
}

// HeatCapacity returns the isobaric heat capacity in J/K per kg of dry air.
func (a Air) HeatCapacity() float64 { return dryCapacity + steam*a.W }

// Volume returns the volume in m3 per kg of dry air.
func (a Air) Volume() float64 { return dryGas * a.T * (1 + a.W/massRatio) / a.P }

// Density returns the density of the moist air in kg/m3.
func (a Air) Density() float64 { return (1 + a.W) / a.Volume() }

// DewPoint returns the temperature in K at which the air is saturated, the frost point below 0 °C. It is -100 °C for air
// that is drier than that.
func (a Air) DewPoint() float64 {
	least, _ := saturated(vapourMin)
	if p := a.VapourPressure(); p > least {
		return math.Min(saturationTemperature(p), a.T)
	}
	return vapourMin
}

// WetBulb returns the thermodynamic wet-bulb temperature in K. Just around 0 °C air can have one over water and another
// over ice: then it is the one over water.
func (a Air) WetBulb() float64 {
	low, high := vapourMin, a.T
	water := high >= zeroCelsius && a.W >= bulbRatio(a.P, a.T, zeroCelsius, true)
	if water {
		low = zeroCelsius
	} else {
		high = math.Min(high, zeroCelsius)
	}
	for high-low > bulbInterval {
		middle := (low + high) / 2
		if middle == low || middle == high {
			break
		}
		if bulbRatio(a.P, a.T, middle, water) > a.W {
			high = middle
		} else {
			low = middle
		}
	}
	return (low + high) / 2
}

// Heated returns the air after heat q in J per kg of dry air was added or taken away without condensation.
func (a Air) Heated(q float64) Air {
	a.T += q / a.HeatCapacity()
	return a
}

// CondensateEnthalpy returns the enthalpy in J/kg of what moist air leaves on a surface at temperature T in K: liquid water,
// or ice below 0 °C.
func CondensateEnthalpy(T float64) float64 {
	t := T - zeroCelsius
	if t < 0 {
		return iceCapacity*t - fusion
	}
	return liquidWater * t
}

// Saturation returns the enthalpy of saturated air in J per kg of dry air at pressure p in Pa and temperature T in K, its
// slope in J/(kg K), and the humidity ratio. Outside the range of the saturation pressure, or where water boils, they are
// not finite.
func Saturation(p, T float64) (h, slope, W float64) {
	if !(vapourMin <= T && T <= vapourMax) {
		return math.NaN(), math.NaN(), math.NaN()
	}
	ps, dps := saturated(T)
	if ps >= p {
		return math.Inf(1), math.Inf(1), math.Inf(1)
	}
	W = massRatio * ps / (p - ps)
	dW := massRatio * p * dps / ((p - ps) * (p - ps))
	return airEnthalpy(T, W), dryCapacity + steam*W + dW*(steamHeat+steam*(T-zeroCelsius)), W
}
