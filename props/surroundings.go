package props

import "math"

// Surroundings is the saturation at the pressure of a state, and how far from it the state is. What does not exist is NaN.
type Surroundings struct {
	Bubble, Dew float64 // bubble and dew temperature at the pressure of the state, K
	Superheat   float64 // above the dew temperature, K; of vapour alone
	Subcooling  float64 // below the bubble temperature, K; of liquid alone
}

// Surround returns the surroundings of a state that r made. At the edges of the dome superheat or subcooling is zero
// exactly, in spite of rounding. Where a blend has two bubble or dew points at a pressure, the ordinary one counts; see
// [Blend.BubblePointAtPressure] and [Blend.DewPointAtPressure].
func Surround(r Refrigerant, s State) Surroundings {
	nan := math.NaN()
	around := Surroundings{Bubble: nan, Dew: nan, Superheat: nan, Subcooling: nan}
	if _, pure := r.(*Pure); pure && !math.IsNaN(s.Quality) {
		around.Bubble, around.Dew = s.T, s.T
	} else {
		if T, err := r.BubbleTemperature(s.P); err == nil {
			around.Bubble = T
		}
		if T, err := r.DewTemperature(s.P); err == nil {
			around.Dew = T
		}
	}
	switch {
	case s.Quality == 0:
		around.Bubble, around.Subcooling = s.T, 0
	case s.Quality == 1:
		around.Dew, around.Superheat = s.T, 0
	case s.Phase == Liquid:
		around.Subcooling = around.Bubble - s.T
	case s.Phase == Vapour:
		around.Superheat = s.T - around.Dew
	}
	return around
}
