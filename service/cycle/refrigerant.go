package cycle

import (
	"errors"
	"math"

	"dewmark/props"
)

// Refrigerant is what a cycle asks of a property model. [*props.Pure] is one. Implementations must be safe for
// concurrent use and must count enthalpy and entropy from one datum.
//
// More abilities are used where a model has them: SaturationPressure and SaturationTemperature, which promise that bubble
// and dew line are one; Extrapolated, which tells states outside the model's validity; PressureEnthalpyNear and
// PressureEntropyNear, which save the search for a start by that of a state nearby.
type Refrigerant interface {
	Designation() string
	Critical() props.Point
	BubblePoint(T float64) (props.State, error)
	DewPoint(T float64) (props.State, error)
	BubblePointAtPressure(p float64) (props.State, error)
	DewPointAtPressure(p float64) (props.State, error)
	TemperaturePressure(T, p float64) (props.State, error)
	PressureQuality(p, x float64) (props.State, error)
	PressureEnthalpy(p, h float64) (props.State, error)
	PressureEntropy(p, s float64) (props.State, error)
}

// vapourPressure is a property model with one saturation line.
type vapourPressure interface {
	SaturationPressure(T float64) (float64, error)
	SaturationTemperature(p float64) (float64, error)
}

// extrapolator is a property model that answers outside its validity and knows it.
type extrapolator interface{ Extrapolated(props.State) bool }

// guided is a property model that takes a state nearby as a start. The start is a hint and does not change the answer.
type guided interface {
	PressureEnthalpyNear(p, h float64, start props.State) (props.State, error)
	PressureEntropyNear(p, s float64, start props.State) (props.State, error)
}

// model is the property model of the circuit that is being put together. It counts the states it is asked for.
type model struct {
	Refrigerant
	asked int
}

// bubbleAt returns saturated liquid at pressure p, dewAt saturated vapour.
func (m *model) bubbleAt(p float64) (props.State, error) {
	m.asked++
	return m.BubblePointAtPressure(p)
}

func (m *model) dewAt(p float64) (props.State, error) {
	m.asked++
	return m.DewPointAtPressure(p)
}

// wetAt returns wet vapour of quality x.
func (m *model) wetAt(p, x float64) (props.State, error) {
	m.asked++
	return m.PressureQuality(p, x)
}

// atTemperature returns the state at pressure p and temperature T. On the saturation line of a refrigerant without glide
// that is any mixture of both phases; the content says which end of it is meant.
func (m *model) atTemperature(p, T float64, of content) (props.State, error) {
	m.asked++
	s, err := m.TemperaturePressure(T, p)
	switch _, onLine := errors.AsType[*props.AmbiguousError](err); {
	case !onLine:
		return s, err
	case of == liquid:
		return m.bubbleAt(p)
	default:
		return m.dewAt(p)
	}
}

// atEnthalpy and atEntropy return the state at pressure p with that property.
func (m *model) atEnthalpy(p, h float64) (props.State, error) {
	m.asked++
	return m.PressureEnthalpy(p, h)
}

func (m *model) atEntropy(p, s float64) (props.State, error) {
	m.asked++
	return m.PressureEntropy(p, s)
}

// atEnthalpyNear returns the state at pressure p and enthalpy h, which is not far from another one at about that pressure.
func (m *model) atEnthalpyNear(p, h float64, other *props.State) (props.State, error) {
	g, can := m.Refrigerant.(guided)
	if !can || !(other.Cp > 0) { // inside the dome there is no slope to go by
		return m.atEnthalpy(p, h)
	}
	m.asked++
	start := *other
	start.T += (h - other.H) / other.Cp
	start.Rho /= 1 + other.Expansivity()*(start.T-other.T)
	return g.PressureEnthalpyNear(p, h, start)
}

// compressed returns the state at pressure p with the entropy of another one, the start of a compression.
func (m *model) compressed(p float64, in *props.State) (props.State, error) {
	g, can := m.Refrigerant.(guided)
	if !can || !(in.W > 0) {
		return m.atEntropy(p, in.S)
	}
	m.asked++
	start := *in
	start.Rho *= math.Pow(p/in.P, 1/in.IsentropicExponent())
	start.T *= p / in.P * in.Rho / start.Rho // at the same compressibility factor
	return g.PressureEntropyNear(p, in.S, start)
}

// content of a pipe or exchanger decides which saturation line counts.
type content bool

const (
	gas    content = false // dew line
	liquid content = true  // bubble line
)

// withoutGlide reports whether the refrigerant has one saturation line.
func (m *model) withoutGlide() bool {
	_, one := m.Refrigerant.(vapourPressure)
	return one
}

// saturationPressure returns the pressure at which a saturation line passes T.
func (m *model) saturationPressure(T float64, of content) (float64, error) {
	if f, one := m.Refrigerant.(vapourPressure); one {
		return f.SaturationPressure(T)
	}
	m.asked++
	at := m.DewPoint
	if of == liquid {
		at = m.BubblePoint
	}
	s, err := at(T)
	return s.P, err
}

// saturationTemperature returns the temperature at which a saturation line passes p.
func (m *model) saturationTemperature(p float64, of content) (float64, error) {
	if f, one := m.Refrigerant.(vapourPressure); one {
		return f.SaturationTemperature(p)
	}
	m.asked++
	at := m.DewPointAtPressure
	if of == liquid {
		at = m.BubblePointAtPressure
	}
	s, err := at(p)
	return s.T, err
}
