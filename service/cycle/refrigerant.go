package cycle

import "dewmark/props"

// Refrigerant is what a cycle asks of a property model. [*props.Refrigerant] is one. Implementations must be safe for
// concurrent use and must count enthalpy and entropy from one datum.
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
