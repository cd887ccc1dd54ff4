package secondary

import (
	"math"

	"dewmark/props"
)

// WaterPressure is the pressure of the isobar that stands for liquid water, Pa.
const WaterPressure = 300e3

// waterTerms is the length of the expansions of water, which keeps them within 1e-9 of the equation.
const waterTerms = 20

// NewWater returns liquid water from 0 °C to the boiling point at [WaterPressure], from R718's equation of
// state and transport correlations. It returns an error of the property core when r cannot give them.
func NewWater(r *props.Pure) (*Liquid, error) {
	low, _ := r.SaturationLimits() // 0.01 °C; the expansions go on to 0 °C
	high, err := r.SaturationTemperature(WaterPressure)
	if err != nil {
		return nil, err
	}
	l := &Liquid{
		name: "water", min: zeroCelsius, max: high, freezing: zeroCelsius,
		limits: [2]string{"freezing point", "boiling point at the pressure of the water circuit, 0.3 MPa"},
	}
	for _, e := range []struct {
		into *piecewise
		f    func(props.State) (float64, error)
	}{
		{&l.density, func(s props.State) (float64, error) { return s.Rho, nil }},
		{&l.heatCapacity, func(s props.State) (float64, error) { return s.Cp, nil }},
		{&l.conductivity, func(s props.State) (float64, error) {
			t, err := r.Transport(s)
			return t.ThermalConductivity.Value, err
		}},
		{&l.lnViscosity, func(s props.State) (float64, error) {
			t, err := r.Transport(s)
			return math.Log(t.Viscosity.Value), err
		}},
	} {
		c, err := chebyshev(low, high, waterTerms, func(T float64) (float64, error) {
			s, err := r.TemperaturePressure(T, WaterPressure)
			if err != nil {
				return 0, err
			}
			return e.f(s)
		})
		if err != nil {
			return nil, err
		}
		*e.into = piecewise{knots: []float64{low, high}, pieces: [][]float64{c}}
	}
	return l.finish(), nil
}
