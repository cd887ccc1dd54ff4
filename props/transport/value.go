package transport

import (
	"fmt"
	"math"
)

// Value is a transport property with what is known about how good it is.
type Value struct {
	Value       float64 // Pa s, W/(m K) or N/m
	Uncertainty float64 // relative standard uncertainty
	Record      *Record // where it comes from; the caller must not modify it
	T, P        float64 // the state, K and Pa; P is zero for a surface tension

	reservations reservation
}

// Code says what kind of reservation a caution makes.
type Code string

// The codes.
const (
	OutsideRange Code = "transport_outside_range" // the state is outside the range of the record
	Substituted  Code = "transport_substituted"   // the recommended record is not usable here; entropy scaling stands in
	Estimated    Code = "transport_estimated"     // nobody has published a correlation for this refrigerant
	Doubtful     Code = "transport_doubtful"      // published models contradict each other
	NearCritical Code = "transport_near_critical" // a critical enhancement is limited or left out
)

// Caution is a reservation about a value. Where a limit is concerned, Quantity, Value, Min and Max tell it in SI units.
type Caution struct {
	Code            Code
	Property        Property
	Text            string
	Quantity        string  // temperature or pressure; empty when no limit is concerned
	Value, Min, Max float64 // K or Pa; an open side is infinite
}

func (c Caution) String() string {
	if c.Quantity == "" {
		return c.Text
	}
	return fmt.Sprintf("%s: %s %g, range %g to %g", c.Text, c.Quantity, c.Value, c.Min, c.Max)
}

// reservation is a set of reservations that depend on the state.
type reservation uint8

const (
	beyondTemperature reservation = 1 << iota
	beyondPressure
	beyondReference
	beyondEntropy
	substituted
	nearCritical
)

// extrapolate adds reservations about the range.
func (v *Value) extrapolate(r reservation) {
	if r != 0 {
		v.reservations |= r
		v.Uncertainty = max(v.Uncertainty, extrapolated)
	}
}

// continuedUncertainty is the spread of continued fits against the recommended records of the refrigerants concerned.
const continuedUncertainty = 0.3

// continued marks a value by entropy scaling beyond the end of its fit.
func (v *Value) continued() {
	v.reservations |= beyondEntropy
	v.Uncertainty = max(v.Uncertainty, continuedUncertainty)
}

// Cautions returns the reservations about v, none when it is as good as its record says.
func (v Value) Cautions() []Caution {
	if v.Record == nil {
		return nil
	}
	r, name := v.Record, v.Record.Property
	out := append([]Caution(nil), r.standing...)
	limit := func(quantity string, value, low, high float64) {
		out = append(out, Caution{
			OutsideRange, name, fmt.Sprintf("%s is extrapolated beyond the range of its source", name),
			quantity, value, low, high,
		})
	}
	if v.reservations&beyondTemperature != 0 {
		limit("temperature", v.T, r.Range.TemperatureMin, r.Range.TemperatureMax)
	}
	if v.reservations&beyondPressure != 0 {
		limit("pressure", v.P, math.Inf(-1), r.Range.PressureMax)
	}
	remark := func(bit reservation, code Code, format string, args ...any) {
		if v.reservations&bit != 0 {
			out = append(out, Caution{Code: code, Property: name, Text: fmt.Sprintf(format, args...)})
		}
	}
	remark(beyondReference, OutsideRange, "%s by corresponding states with a state of the reference fluid that is outside its range", name)
	remark(beyondEntropy, OutsideRange, "%s by entropy scaling beyond the residual entropy where its fit is sound", name)
	remark(substituted, Substituted, "%s by %s, since the recommended correlation has a pole or is meaningless at this state", name, r.Method)
	remark(nearCritical, NearCritical, "%s so near the critical point that its enhancement is limited or left out", name)
	return out
}
