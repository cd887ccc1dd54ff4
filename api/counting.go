package api

import (
	"dewmark/props"
	"dewmark/service/cycle"
)

// countingRefrigerant counts the states that a solver asks for. It belongs to one solve.
type countingRefrigerant struct {
	cycle.Refrigerant
	states int
}

func (r *countingRefrigerant) BubblePoint(T float64) (props.State, error) {
	r.states++
	return r.Refrigerant.BubblePoint(T)
}

func (r *countingRefrigerant) DewPoint(T float64) (props.State, error) {
	r.states++
	return r.Refrigerant.DewPoint(T)
}

func (r *countingRefrigerant) BubblePointAtPressure(p float64) (props.State, error) {
	r.states++
	return r.Refrigerant.BubblePointAtPressure(p)
}

func (r *countingRefrigerant) DewPointAtPressure(p float64) (props.State, error) {
	r.states++
	return r.Refrigerant.DewPointAtPressure(p)
}

func (r *countingRefrigerant) TemperaturePressure(T, p float64) (props.State, error) {
	r.states++
	return r.Refrigerant.TemperaturePressure(T, p)
}

func (r *countingRefrigerant) PressureQuality(p, x float64) (props.State, error) {
	r.states++
	return r.Refrigerant.PressureQuality(p, x)
}

func (r *countingRefrigerant) PressureEnthalpy(p, h float64) (props.State, error) {
	r.states++
	return r.Refrigerant.PressureEnthalpy(p, h)
}

func (r *countingRefrigerant) PressureEntropy(p, s float64) (props.State, error) {
	r.states++
	return r.Refrigerant.PressureEntropy(p, s)
}
