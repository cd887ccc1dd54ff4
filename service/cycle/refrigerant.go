package cycle

import "dewmark/props"

// Refrigerant is what a cycle asks of a property model. [*props.Refrigerant] is one. Implementations must be safe for
// concurrent use and must count enthalpy and entropy from one datum.
//
// Two more abilities are used where a model has them: SaturationPressure and SaturationTemperature, which promise that
// bubble and dew line are one, and Extrapolated, which tells states outside the model's validity.
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

// atTemperature, atEnthalpy and atEntropy return the state at pressure p with that property.
func (m *model) atTemperature(p, T float64) (props.State, error) {
	m.asked++
	return m.TemperaturePressure(T, p)
}

func (m *model) atEnthalpy(p, h float64) (props.State, error) {
	m.asked++
	return m.PressureEnthalpy(p, h)
}

func (m *model) atEntropy(p, s float64) (props.State, error) {
	m.asked++
	return m.PressureEntropy(p, s)
}

// content of a pipe decides which saturation line counts.
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
