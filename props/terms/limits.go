package terms

// Limits is the range in which an equation of state is valid.
type Limits struct {
	TemperatureMin, TemperatureMax float64 // K
	PressureMax                    float64 // Pa
	DensityMax                     float64 // kg/m3
}

// Extrapolated returns the range in which a model still answers when it may extrapolate: to 1.5 times the highest
// temperature, 2 times the highest pressure and 1.15 times the highest density.
func (l Limits) Extrapolated() Limits {
	l.TemperatureMax *= 1.5
	l.PressureMax *= 2
	l.DensityMax *= 1.15
	return l
}

// Point is a state point named by temperature, pressure and density.
type Point struct {
	T   float64 // K
	P   float64 // Pa
	Rho float64 // kg/m3
}
