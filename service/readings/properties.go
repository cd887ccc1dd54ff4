package readings

import (
	"math"

	"dewmark/props"
	"dewmark/service/readings/uncertainty"
)

// vapourPressure is a property model with one saturation line.
type vapourPressure interface {
	SaturationTemperature(p float64) (float64, error)
}

// fluid asks the property model and keeps derivatives.
type fluid struct {
	Refrigerant
	line     vapourPressure // nil for a model with glide
	critical float64        // Pa
}

func newFluid(r Refrigerant) fluid {
	line, _ := r.(vapourPressure)
	return fluid{r, line, r.Critical().P}
}

// saturationTemperature returns the dew or bubble temperature at pressure p.
func (f *fluid) saturationTemperature(p float64, dew bool) (float64, error) {
	switch {
	case f.line != nil:
		return f.line.SaturationTemperature(p)
	case dew:
		s, err := f.DewPointAtPressure(p)
		return s.T, err
	default:
		s, err := f.BubblePointAtPressure(p)
		return s.T, err
	}
}

// saturated is saturationTemperature with its derivative, a central difference whose error is a millionth of it.
func (f *fluid) saturated(c *uncertainty.Calculus, p uncertainty.Linear, dew bool) (uncertainty.Linear, error) {
	T, err := f.saturationTemperature(p.Value, dew)
	if err != nil || !c.Differentiates() {
		return uncertainty.Constant(T), err
	}
	const step = 1e-4
	low, high := p.Value*(1-step), p.Value*(1+step)
	Tlow, err := f.saturationTemperature(low, dew)
	if err != nil { // an end of the saturation line
		low, Tlow = p.Value, T
	}
	Thigh, err := f.saturationTemperature(high, dew)
	if err != nil {
		high, Thigh = p.Value, T
	}
	if low == high {
		return uncertainty.Unknown, nil
	}
	return c.Of(T, p, (Thigh-Tlow)/(high-low)), nil
}

// fill sets the state of a point at its pressure and temperature.
func (pt *point) fill(c *uncertainty.Calculus, f *fluid) error {
	s, err := f.TemperaturePressure(pt.T.Value, pt.p.Value)
	if err != nil {
		return err
	}
	pt.state = s
	if !c.Differentiates() {
		pt.h, pt.s, pt.rho = uncertainty.Constant(s.H), uncertainty.Constant(s.S), uncertainty.Constant(s.Rho)
		return nil
	}
	beta := s.Expansivity()
	pt.h = c.OfTwo(s.H, pt.T, s.Cp, pt.p, (1-beta*s.T)/s.Rho)
	pt.s = c.OfTwo(s.S, pt.T, s.Cp/s.T, pt.p, -beta/s.Rho)
	pt.rho = c.OfTwo(s.Rho, pt.T, -beta*s.Rho, pt.p, 1/s.DPDRho)
	return nil
}

// guided is a property model that takes a state nearby as a start.
type guided interface {
	PressureEntropyNear(p, s float64, start props.State) (props.State, error)
}

// compressed returns the isentropic end of a compression from a point to pressure p.
func (f *fluid) compressed(c *uncertainty.Calculus, from *point, p uncertainty.Linear) (props.State, uncertainty.Linear, error) {
	var s props.State
	var err error
	if g, can := f.Refrigerant.(guided); can && from.state.W > 0 {
		start := from.state
		start.Rho *= math.Pow(p.Value/start.P, 1/start.IsentropicExponent())
		start.T *= p.Value / start.P * from.state.Rho / start.Rho
		s, err = g.PressureEntropyNear(p.Value, from.state.S, start)
	} else {
		s, err = f.PressureEntropy(p.Value, from.state.S)
	}
	if err != nil {
		return s, uncertainty.Unknown, err
	}
	return s, c.OfTwo(s.H, from.s, s.T, p, 1/s.Rho), nil // dh = T ds + dp/rho, inside the dome too
}
