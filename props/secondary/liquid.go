package secondary

import "math"

// zeroCelsius is what enthalpies count from, K.
const zeroCelsius = 273.15

// Liquid is a liquid of fixed composition: water, a brine or one given as a table.
type Liquid struct {
	name         string
	massFraction float64 // of what is dissolved; NaN for a table
	min, max     float64 // K
	limits       [2]string
	freezing     float64 // K; NaN when not known
	density      piecewise
	heatCapacity piecewise
	conductivity piecewise
	lnViscosity  piecewise
	enthalpy     *piecewise // from the first knot
	inverse      piecewise  // temperature by enthalpy, nearly
	shift        float64    // J/kg, so that enthalpy is 0 at zeroCelsius
	ends         [2]end
}

// end is one end of the range, from where enthalpy goes on in a straight line.
type end struct{ T, h, cp float64 }

// LiquidState holds the properties of a liquid at one temperature.
type LiquidState struct {
	T            float64 // K
	Density      float64 // kg/m3
	HeatCapacity float64 // isobaric, J/(kg K)
	Enthalpy     float64 // J/kg above liquid at 273.15 K
	Conductivity float64 // W/(m K)
	Viscosity    float64 // Pa s
	Prandtl      float64 // Prandtl number
}

// inverseTerms is the length of the expansions of the inverse: one step of Newton's method from them is exact to rounding.
const inverseTerms = 10

// finish derives the enthalpy and its inverse from the heat capacity.
func (l *Liquid) finish() *Liquid {
	l.enthalpy = l.heatCapacity.integral()
	l.inverse.knots = []float64{0}
	for i, low := range l.enthalpy.knots[:len(l.enthalpy.knots)-1] {
		high := l.enthalpy.knots[i+1]
		first, last := l.inverse.knots[i], l.enthalpy.at(high)
		c, _ := chebyshev(first, last, inverseTerms, func(h float64) (float64, error) { return l.invert(h, low, high), nil })
		l.inverse.pieces = append(l.inverse.pieces, c)
		l.inverse.knots = append(l.inverse.knots, last)
	}
	for i, T := range [2]float64{l.min, l.max} {
		l.ends[i] = end{T, l.enthalpy.at(T), l.heatCapacity.at(T)}
	}
	l.shift = -l.Enthalpy(zeroCelsius)
	return l
}

// invert returns the temperature between low and high with enthalpy h from the first knot.
func (l *Liquid) invert(h, low, high float64) float64 {
	for high-low > 1e-13*high {
		middle := (low + high) / 2
		if middle == low || middle == high {
			break
		}
		if l.enthalpy.at(middle) > h {
			high = middle
		} else {
			low = middle
		}
	}
	return (low + high) / 2
}

// Name returns the identifier of the liquid, such as "propylene_glycol".
func (l *Liquid) Name() string { return l.name }

// MassFraction returns the mass fraction of what is dissolved, 0 for water and NaN for a liquid given as a table.
func (l *Liquid) MassFraction() float64 { return l.massFraction }

// FreezingPoint returns the temperature in K at which the first ice forms, or NaN when it is not known.
func (l *Liquid) FreezingPoint() float64 { return l.freezing }

// Range returns the temperatures in K between which the properties are valid.
func (l *Liquid) Range() (low, high float64) { return l.min, l.max }

// Check returns a [*RangeError] unless T in K lies within the range.
func (l *Liquid) Check(T float64) error {
	if l.min <= T && T <= l.max {
		return nil
	}
	limit := l.limits[0]
	if T > l.max {
		limit = l.limits[1]
	}
	return &RangeError{l.name, Temperature, T, l.min, l.max, limit}
}

// At returns the properties at temperature T in K, or a [*RangeError].
func (l *Liquid) At(T float64) (LiquidState, error) {
	if err := l.Check(T); err != nil {
		return LiquidState{}, err
	}
	s := LiquidState{
		T: T, Density: l.density.at(T), HeatCapacity: l.heatCapacity.at(T), Enthalpy: l.Enthalpy(T),
		Conductivity: l.conductivity.at(T), Viscosity: math.Exp(l.lnViscosity.at(T)),
	}
	s.Prandtl = s.Viscosity * s.HeatCapacity / s.Conductivity
	return s, nil
}

// Density returns the density in kg/m3 at temperature T in K. Beyond the range it is that at the end of the range, so
// that a solver can look there; [Liquid.Check] tells.
func (l *Liquid) Density(T float64) float64 {
	return l.density.at(math.Max(l.min, math.Min(T, l.max)))
}

// Enthalpy returns the enthalpy in J/kg at temperature T in K. Beyond the range it goes on in a straight line, so that a
// solver can look there; [Liquid.Check] tells.
func (l *Liquid) Enthalpy(T float64) float64 {
	switch {
	case T < l.min:
		e := &l.ends[0]
		return e.h + e.cp*(T-e.T) + l.shift
	case T > l.max:
		e := &l.ends[1]
		return e.h + e.cp*(T-e.T) + l.shift
	}
	return l.enthalpy.at(T) + l.shift
}

// heatCapacityAt continues the heat capacity as [Liquid.Enthalpy] needs it.
func (l *Liquid) heatCapacityAt(T float64) float64 {
	return l.heatCapacity.at(math.Max(l.min, math.Min(T, l.max)))
}

// Temperature returns the temperature in K at enthalpy h in J/kg, the inverse of [Liquid.Enthalpy].
func (l *Liquid) Temperature(h float64) float64 {
	low, high := &l.ends[0], &l.ends[1]
	switch {
	case h <= low.h+l.shift:
		return low.T + (h-l.shift-low.h)/low.cp
	case h >= high.h+l.shift:
		return high.T + (h-l.shift-high.h)/high.cp
	}
	T := l.inverse.at(h - l.shift)
	return T + (h-l.shift-l.enthalpy.at(T))/l.heatCapacity.at(T)
}

// EntropyMean returns the mean temperature in K of the heat that takes the liquid from T1 to T2: the change of enthalpy
// over that of entropy, at constant pressure.
func (l *Liquid) EntropyMean(T1, T2 float64) float64 {
	if T1 == T2 {
		return T1
	}
	// Gauss and Legendre's rule with five points: exact to 1e-11 for a function as smooth as cp/T.
	points := [...][2]float64{
		{0, 128.0 / 225},
		{0.5384693101056831, 0.47862867049936647},
		{-0.5384693101056831, 0.47862867049936647},
		{0.9061798459386640, 0.23692688505618908},
		{-0.9061798459386640, 0.23692688505618908},
	}
	var s, h float64
	for _, p := range points {
		T := (T1+T2)/2 + (T2-T1)/2*p[0]
		c := l.heatCapacityAt(T) * p[1]
		h += c
		s += c / T
	}
	return h / s
}
