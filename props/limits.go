package props

import (
	"errors"
	"math"
)

// What sets a limit, as [RangeError] names it.
const (
	LimitValidity   = "validity of the equation of state"
	LimitMelting    = "melting pressure; the refrigerant is solid beyond it"
	LimitDensity    = "highest density of the equation of state; beyond it the refrigerant may be solid"
	LimitSaturation = "saturation curve, from the lowest temperature of the equation to its critical point"
	LimitAttainable = "attainable with the other given property"
	LimitPhysical   = "physically possible"
)

// checkTemperature returns a RangeError unless T lies in the range the view answers.
func (r *Pure) checkTemperature(T float64) error {
	l := r.reach()
	if !(l.TemperatureMin <= T && T <= l.TemperatureMax) {
		return &RangeError{Refrigerant: r.rec.ID, Property: Temperature, Value: T, Min: l.TemperatureMin, Max: l.TemperatureMax, Limit: LimitValidity}
	}
	return nil
}

// checkPressure returns a RangeError unless p is positive and in the range the view answers.
func (r *Pure) checkPressure(p float64) error {
	l := r.reach()
	if !(vacuum <= p && p <= l.PressureMax) {
		return &RangeError{Refrigerant: r.rec.ID, Property: Pressure, Value: p, Min: 0, Max: l.PressureMax, Limit: LimitValidity}
	}
	return nil
}

// vacuum is what pressures in Pa and densities in kg/m3 must reach to count as positive: far from where numbers run out
// of digits.
const vacuum = 1e-290

// checkDensity returns a RangeError unless rho is positive and in the range the view answers.
func (r *Pure) checkDensity(rho float64) error {
	l := r.reach()
	if !(vacuum <= rho && rho <= l.DensityMax) {
		return &RangeError{Refrigerant: r.rec.ID, Property: Density, Value: rho, Min: 0, Max: l.DensityMax, Limit: LimitDensity}
	}
	return nil
}

// checkFluid returns a RangeError when a single-phase state is denser than the equation allows or on the solid side of
// the melting curve.
func (r *Pure) checkFluid(T, p, rho float64) error {
	if err := r.checkDensity(rho); err != nil {
		return err
	}
	if pm := r.meltingPressure(T); p > pm {
		return &RangeError{Refrigerant: r.rec.ID, Property: Pressure, Value: p, Min: 0, Max: pm, Limit: LimitMelting}
	}
	return nil
}

// check returns a RangeError unless a single-phase state that a solver found lies in the range the view answers. Limits
// count as reached within rounding.
func (r *Pure) check(s *State) error {
	const slack = 1e-10
	l := r.reach()
	T, p := s.T, s.P
	if T < l.TemperatureMin && T > l.TemperatureMin*(1-slack) {
		T = l.TemperatureMin
	}
	if T > l.TemperatureMax && T < l.TemperatureMax*(1+slack) {
		T = l.TemperatureMax
	}
	err := r.checkTemperature(T)
	if err == nil {
		err = r.checkPressure(p / (1 + slack))
	}
	if err == nil {
		err = r.checkFluid(T, p/(1+slack), s.Rho/(1+slack))
	}
	if e, ok := errors.AsType[*RangeError](err); ok {
		e.Value = e.Property.Of(s) // as it is, without the slack
	}
	return err
}

// Extrapolated reports whether s lies outside the validity of the equation.
func (r *Pure) Extrapolated(s State) bool {
	if r.extrapolate {
		plain := *r
		plain.extrapolate = false
		r = &plain
	}
	return s.Phase != TwoPhase && r.check(&s) != nil
}

// meltingPressure returns the pressure above which the refrigerant is solid at temperature T, or +Inf where no melting
// curve is known; there the density limit of the equation stands in for it.
func (r *Pure) meltingPressure(T float64) float64 {
	switch r.rec.ID {
	case "R718":
		return waterMeltingPressure(T)
	case "R744":
		// Span and Wagner, J. Phys. Chem. Ref. Data 25 (1996) 1509, eq 3.10 (coefficients from memory).
		t := T/216.592 - 1
		return 0.51795e6 * (1 + 1955.5390*t + 2055.4593*t*t)
	}
	return math.Inf(1)
}

// waterMeltingPressure returns the pressure in Pa at which liquid water at T >= 273.16 K freezes to ice V, VI or VII:
// IAPWS R14-08(2011), eqs 3 to 5 (coefficients from memory; they give the check values of its section 5).
func waterMeltingPressure(T float64) float64 {
	switch {
	case T < 273.31:
		return 350.1e6 * (1 - 1.18721*(1-math.Pow(T/256.164, 8)))
	case T < 355:
		return 632.4e6 * (1 - 1.07476*(1-math.Pow(T/273.31, 4.6)))
	case T < 715:
		t := T / 355
		return 2216e6 * math.Exp(0.173683e1*(1-1/t)-0.544606e-1*(1-math.Pow(t, 5))+0.806106e-7*(1-math.Pow(t, 22)))
	}
	return math.Inf(1)
}
