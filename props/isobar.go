package props

import (
	"math"

	"dewmark/props/helmholtz"
	"dewmark/props/internal/roots"
)

// PressureEnthalpy returns the state at p in Pa and h in J/kg. The pair has one solution at most.
func (r *Pure) PressureEnthalpy(p, h float64) (State, error) { return r.isobar(p, Enthalpy, h) }

// PressureEntropy returns the state at p in Pa and s in J/(kg K). The pair has one solution at most.
func (r *Pure) PressureEntropy(p, s float64) (State, error) { return r.isobar(p, Entropy, s) }

// PressureInternalEnergy returns the state at p in Pa and u in J/kg. The pair has one solution at most.
func (r *Pure) PressureInternalEnergy(p, u float64) (State, error) {
	return r.isobar(p, InternalEnergy, u)
}

// PressureEnthalpyNear is [Pure.PressureEnthalpy] with a start: the temperature and density of a state that is
// not far. A good start saves half the time; a bad one costs some and changes nothing.
func (r *Pure) PressureEnthalpyNear(p, h float64, start State) (State, error) {
	return r.isobarNear(p, Enthalpy, h, &start)
}

// PressureEntropyNear is [Pure.PressureEntropy] with a start, like [Pure.PressureEnthalpyNear].
func (r *Pure) PressureEntropyNear(p, s float64, start State) (State, error) {
	return r.isobarNear(p, Entropy, s, &start)
}

func (r *Pure) isobarNear(p float64, y Property, v float64, start *State) (s State, err error) {
	if r.checkPressure(p) == nil {
		if f, ok := r.newton2(p, y, v, start.T, start.Rho); ok && r.clearOfDome(&f, p, 1e-8) {
			if r.complete(&f, p, &s); r.check(&s) == nil {
				return s, nil
			}
		}
	}
	return r.isobar(p, y, v)
}

// clearOfDome reports whether a solution of the equation at pressure p is the single phase that is stable there. Many
// equations have false roots inside the dome, at pressures far above the critical one too. At the very edge, within a
// fraction edge of the vapour pressure, it says no.
func (r *Pure) clearOfDome(f *fluidState, p, edge float64) bool {
	c := r.curve
	if f.T >= c.TCritical || c.Outside(f.T, f.rho*r.perM) {
		return true
	}
	ps, liquid, vapour := c.At(f.T)
	const rounding = 1e-9
	return p > ps*(1+edge) && f.rho >= liquid*r.M*(1-rounding) || p < ps*(1-edge) && f.rho <= vapour*r.M*(1+rounding)
}

// isobar returns the state at pressure p with the caloric property y equal to v. Along an isobar all three rise with
// temperature.
func (r *Pure) isobar(p float64, y Property, v float64) (s State, err error) {
	if err := r.checkPressure(p); err != nil {
		return s, err
	}
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return s, r.notFinite(y, v)
	}
	lo, hi := r.reach().TemperatureMin, r.reach().TemperatureMax
	start := fluidState{T: r.curve.TCritical, rho: r.curve.RhoCritical * r.M}
	side := AnyPhase // of a dome on which the answer lies
	if r.curve.PMin <= p && p < r.curve.PCritical {
		d := r.domeAtPressure(p)
		x := r.snap(&d, y, d.quality(y, v))
		switch {
		case 0 <= x && x <= 1:
			return r.domeState(&d, x), nil
		case x < 0:
			start, hi, side = d.liquid, d.T, Liquid
		default:
			start, lo, side = d.vapour, d.T, Vapour
		}
		start = along(start, y, v)
		start.T = math.Min(math.Max(start.T, lo), hi)
	} else if p < r.curve.PMin {
		start = fluidState{T: lo, rho: p / (r.Rs * lo)}
	} else if T, rho, ok := r.starts.near(p, y, r.ownDatum(y, v)); ok {
		start.T, start.rho = T, rho
	}
	f, ok := r.newton2(p, y, v, start.T, start.rho)
	if !ok || !(lo*(1-1e-9) <= f.T && f.T <= hi*(1+1e-9)) || !r.onSide(f, side) || !r.clearOfDome(&f, p, -1e-8) {
		if f, err = r.searchIsobar(p, y, v, lo, hi, side); err != nil {
			return s, err
		}
	}
	r.complete(&f, p, &s)
	if err := r.check(&s); err != nil {
		return State{}, err
	}
	return s, nil
}

// snap makes a quality that differs from 0 or 1 by rounding exactly so: given values that were computed from a
// saturated phase return to it. In a cold fluid a larger step would be one from liquid into vapour.
func (r *Pure) snap(d *dome, y Property, x float64) float64 {
	const noise = 2e-13 // relative error of the saturation temperature, and with it of the saturated phases
	a, b := d.value(y, 0), d.value(y, 1)
	scale := 10 * r.Rs
	if y != Entropy {
		scale *= d.T
	}
	tie := noise * (math.Abs(a) + math.Abs(b) + scale) / (b - a)
	switch {
	case math.Abs(x) < tie:
		return 0
	case math.Abs(x-1) < tie:
		return 1
	}
	return x
}

// ownDatum returns a caloric property as the equation itself counts it.
func (r *Pure) ownDatum(y Property, v float64) float64 {
	if y == Entropy {
		return v - r.s0
	}
	return v - r.h0
}

// along estimates where on an isobar property y is v, from a state on it whose derivatives are known.
func along(f fluidState, y Property, v float64) fluidState {
	have, yT, yRho := f.value(y)
	slope := yT - yRho*f.pT/f.pRho // (dy/dT) at constant pressure
	if !(slope > 0) {
		return f
	}
	dT := (v - have) / slope
	T := f.T + dT
	if y == Entropy {
		T = f.T * math.Exp(dT/f.T)
	}
	T = math.Max(T, 0.3*f.T)
	// Density falls with temperature, in a gas as 1/T, in a liquid by its expansivity.
	beta := f.pT / (f.rho * f.pRho)
	return fluidState{T: T, rho: f.rho * math.Pow(f.T/T, math.Min(math.Max(beta*f.T, 0.1), 3))}
}

// onSide reports whether a solution lies on the side of the dome that it was looked for.
func (r *Pure) onSide(f fluidState, side Phase) bool {
	dense := f.rho > r.curve.RhoCritical*r.M
	return side == AnyPhase || f.T > r.curve.TCritical || dense == (side == Liquid)
}

// searchIsobar finds the temperature between lo and hi at which property y is v by bracketing, with the density solved
// at each step. It cannot miss, at the price of some ten density solves.
func (r *Pure) searchIsobar(p float64, y Property, v, lo, hi float64, side Phase) (fluidState, error) {
	var f fluidState
	miss := func(T float64) (float64, error) {
		var err error
		if f, err = r.singlePhase(T, p, side); err != nil {
			return 0, err
		}
		have, _, _ := f.value(y)
		return have - v, nil
	}
	a, err := miss(lo)
	for step := (hi - lo) / 32; err != nil && lo+step < hi; { // the cold end may be solid
		lo += step
		a, err = miss(lo)
	}
	if err != nil {
		return f, err
	}
	b, err := miss(hi)
	if err != nil {
		return f, err
	}
	if !(a <= 0 && b >= 0) {
		return f, r.unattainable(p, y, v, a+v, b+v)
	}
	T, err := roots.Bracketed(lo, a, hi, b, miss)
	if err != nil {
		return f, err
	}
	_, err = miss(T)
	return f, err
}

// unattainable returns the error for a property that no state at pressure p has, with the range that they do have. The
// search saw values from low to high; where it covered one side of a dome only, the other end lies across it.
func (r *Pure) unattainable(p float64, y Property, v, low, high float64) error {
	if f, err := r.singlePhase(r.reach().TemperatureMin, p, AnyPhase); err == nil {
		low, _, _ = f.value(y)
	}
	if f, err := r.singlePhase(r.reach().TemperatureMax, p, AnyPhase); err == nil {
		high, _, _ = f.value(y)
	}
	return &RangeError{Refrigerant: r.rec.ID, Property: y, Value: v, Min: low, Max: high, Limit: LimitAttainable}
}

// singlePhase returns the single phase at T and p. On the saturation line itself rounding would choose a phase; side
// says which one is meant.
func (r *Pure) singlePhase(T, p float64, side Phase) (fluidState, error) {
	var iso helmholtz.Isotherm
	iso.Set(r.eq, T)
	if T >= r.curve.TCritical {
		return r.density(&iso, p, r.supercritical(T, p))
	}
	ps, liquid, vapour := r.curve.At(T)
	switch {
	case side == Liquid && p <= ps:
		return r.evaluate(&iso, liquid*r.M), nil
	case side == Vapour && p >= ps:
		return r.evaluate(&iso, vapour*r.M), nil
	}
	return r.density(&iso, p, r.subcritical(&iso, p, ps, liquid*r.M, vapour*r.M))
}

func (r *Pure) notFinite(y Property, v float64) error {
	return &RangeError{Refrigerant: r.rec.ID, Property: y, Value: v, Min: math.Inf(-1), Max: math.Inf(1), Limit: LimitPhysical}
}
