package props

import (
	"math"

	"dewmark/props/internal/elementary"
)

// newton2 solves pressure and a caloric property together for temperature and density, from a start. It reports
// success only; the caller must check that the solution lies on the side of the dome that it meant, and falls back to
// a bracketed solver otherwise.
func (r *Pure) newton2(p float64, y Property, v, T, rho float64) (f fluidState, ok bool) {
	const limit = 25
	const far = 1e-3 // relative step from which the curvature of an ideal gas counts
	critical := r.curve.RhoCritical * r.M
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
		gas := rho < critical
		if gas && f.p > 0 && math.Abs(dp) > far*f.p {
			dp = f.p * elementary.Log(p/f.p) // ln p is almost linear in ln(rho T)
		}
		det := yT*f.pRho - yRho*f.pT
		dT := (dy*f.pRho - dp*yRho) / det
		dRho := (dp*yT - dy*f.pT) / det
		size := math.Max(math.Abs(dT)/T, math.Abs(dRho)/rho)
		if math.IsNaN(size) {
			return f, false
		}
		switch {
		case size < 4e-16 || size < 1e-9 && size >= last/2:
			return f, true
		case size < 1e-12 && last < 1e-3:
			f.shift(dT, dRho)
			return f, true
		case size < 1e-9 && last < 1e-3: // quadratic by now: one more step is exact to rounding
			r.evaluateAt(T+dT, rho+dRho, &f)
			return f, true
		}
		last = size
		scale := math.Min(1, 0.3/size)
		dT *= scale
		dRho *= scale
		if !gas || size < far {
			T += dT
			rho += dRho
			continue
		}
		before := T
		if y == Entropy { // almost linear in ln T, enthalpy in T
			T *= elementary.Exp(dT / T)
		} else {
			T += dT
		}
		rho *= before / T * elementary.Exp(dRho/rho+dT/before)
	}
	return f, false
}

// shift moves f by the last step of a search, so small that the derivatives do not change.
func (f *fluidState) shift(dT, dRho float64) {
	h, hT, hRho := f.value(Enthalpy)
	s, sT, sRho := f.value(Entropy)
	u, uT, uRho := f.value(InternalEnergy)
	f.h = h + hT*dT + hRho*dRho
	f.s = s + sT*dT + sRho*dRho
	f.u = u + uT*dT + uRho*dRho
	f.p += f.pT*dT + f.pRho*dRho
	f.T += dT
	f.rho += dRho
}
