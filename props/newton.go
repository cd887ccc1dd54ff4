package props

import "math"

// newton2 solves pressure and a caloric property together for temperature and density, from a start. It reports
// success only; the caller must check that the solution lies on the side of the dome that it meant, and falls back to
// a bracketed solver otherwise.
func (r *Pure) newton2(p float64, y Property, v, T, rho float64) (f fluidState, ok bool) {
	const limit = 25
	last := math.Inf(1)
	for range limit {
		if !(T > 0.8*r.limits.TemperatureMin && T < 2*r.limits.TemperatureMax && rho > 0 && rho < r.densest()) {
			return f, false
		}
		r.evaluateAt(T, rho, &f)
		if !(f.pRho > 0) {
			return f, false
		}
		have, yT, yRho := f.value(y)
		dy, dp := v-have, p-f.p
		det := yT*f.pRho - yRho*f.pT
		dT := (dy*f.pRho - dp*yRho) / det
		dRho := (dp*yT - dy*f.pT) / det
		size := math.Max(math.Abs(dT)/T, math.Abs(dRho)/rho)
		if math.IsNaN(size) {
			return f, false
		}
		if size < 4e-16 || size < 1e-9 && size >= last/2 {
			return f, true
		}
		if size < 1e-9 && last < 1e-3 { // quadratic by now: one more step is exact to rounding
			r.evaluateAt(T+dT, rho+dRho, &f)
			return f, true
		}
		last = size
		scale := math.Min(1, 0.3/size)
		T += scale * dT
		rho += scale * dRho
	}
	return f, false
}
