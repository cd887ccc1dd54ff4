package props

import (
	"math"

	"dewmark/props/helmholtz"
)

// Derived holds derivatives that are computed only when asked for. A value that does not exist in the state's phase is
// NaN.
type Derived struct {
	DensityByEnthalpy float64 // (d rho/dh) at constant pressure, kg2/(m3 J)
	DensityByPressure float64 // (d rho/dp) at constant enthalpy, kg/(m3 Pa)
	Fundamental       float64 // 1 + (rho/w)(dw/d rho) at constant entropy; below zero a compression wave spreads out
}

// Derived returns the derivatives of a state that r made. The first two serve models of control and of moving
// boundaries and exist in the dome too, where density follows the equilibrium of both phases; they jump at its edge. At
// quality 0 and 1 they are those of the single phase. The fundamental derivative (Thompson, Phys. Fluids 14 (1971) 1843)
// is differenced along the isentrope, good to about seven digits.
func (r *Pure) Derived(s State) Derived {
	if s.Phase == TwoPhase {
		return r.domeDerivatives(s)
	}
	beta := s.Expansivity()
	byT := -s.Rho * beta         // (d rho/dT) at constant p
	byP := 1 / s.DPDRho          // (d rho/dp) at constant T
	hP := (1 - s.T*beta) / s.Rho // (dh/dp) at constant T
	return Derived{
		DensityByEnthalpy: byT / s.Cp,
		DensityByPressure: byP - byT*hP/s.Cp,
		Fundamental:       r.fundamental(s),
	}
}

// domeDerivatives differentiates v = v_l + x (v_v - v_l) with x = (h - h_l)/(h_v - h_l), l and v being the saturated phases.
func (r *Pure) domeDerivatives(s State) Derived {
	d := r.domeAt(s.T)
	l, v := r.domeState(&d, 0), r.domeState(&d, 1)
	slope := 1 / s.DPDT // dT/dp along the saturation line
	// along returns dv/dp and dh/dp of a saturated phase along the saturation line.
	along := func(q State) (byV, byH float64) {
		vT := q.Expansivity() / q.Rho
		return vT*slope - q.IsothermalCompressibility()/q.Rho, q.Cp*slope + 1/q.Rho - q.T*vT
	}
	lv, lh := along(l)
	vv, vh := along(v)
	dv, dh := 1/v.Rho-1/l.Rho, v.H-l.H
	x := s.Quality
	xp := -(lh + x*(vh-lh)) / dh // (dx/dp) at constant h
	vp := lv + x*(vv-lv) + xp*dv // (dv/dp) at constant h
	return Derived{
		DensityByEnthalpy: -s.Rho * s.Rho * dv / dh,
		DensityByPressure: -s.Rho * s.Rho * vp,
		Fundamental:       math.NaN(),
	}
}

// fundamental differences the speed of sound between two points on the isentrope, found by a midpoint step of
// (dT/d rho) = T (dp/dT)/(rho^2 cv).
func (r *Pure) fundamental(s State) float64 {
	const h = 1e-4
	at := func(T, rho float64) (slope, w float64) {
		var iso helmholtz.Isotherm
		iso.Set(r.eq, T)
		f := r.evaluate(&iso, rho)
		slope = T * f.pT / (rho * rho * f.cv)
		return slope, math.Sqrt(f.pRho + slope*f.pT)
	}
	lnW := func(dRho float64) float64 {
		slope, _ := at(s.T, s.Rho)
		slope, _ = at(s.T+slope*dRho/2, s.Rho+dRho/2)
		_, w := at(s.T+slope*dRho, s.Rho+dRho)
		return math.Log(w)
	}
	d := h * s.Rho
	return 1 + (lnW(d)-lnW(-d))/(2*h)
}
