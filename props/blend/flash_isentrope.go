package blend

import (
	"errors"
	"math"

	"dewmark/props/internal/roots"
)

// lowestPressure is where solvers that walk along pressure begin, Pa: far below what any vacuum pump reaches.
const lowestPressure = 1e-6

// isentrope returns the state with a given entropy and enthalpy or internal energy. Both rise with pressure along an
// isentrope: (dh/dp) = 1/rho, (du/dp) = p/(rho^2 w^2), so that there is one state at most.
func (s *solver) isentrope(entropy float64, of Property, value float64) (result, error) {
	if err := s.checkFinite(Entropy, entropy); err != nil {
		return result{}, err
	}
	if err := s.checkFinite(of, value); err != nil {
		return result{}, err
	}
	if of == Enthalpy {
		if r, ok := s.isentropeNewton(entropy, value); ok {
			return r, nil
		}
	}
	var at result
	miss := func(lnP float64) (float64, error) {
		var err error
		if at, err = s.isobar(s.pressureOf(lnP), Entropy, entropy); err != nil {
			return 0, err
		}
		return at.value(of) - value, nil
	}
	lo, hi, err := s.walk(Entropy, entropy)
	if err != nil {
		return result{}, err
	}
	a, err := miss(lo)
	if err != nil {
		return result{}, err
	}
	b, err := miss(hi)
	if err != nil {
		return result{}, err
	}
	if !(a <= 0 && b >= 0) {
		// The ends are where an isentrope meets the limits, found by bisection.
		const slack = 1e-8
		scale := s.m.whole.R * at.T
		switch {
		case a > 0 && a <= slack*scale:
			_, err = miss(lo)
			return at, err
		case b < 0 && b >= -slack*scale:
			return at, nil
		}
		return result{}, s.unattainable(of, value, a+value, b+value)
	}
	lnP, err := roots.Bracketed(lo, a, hi, b, miss)
	if err != nil {
		return result{}, err
	}
	_, err = miss(lnP)
	return at, err
}

// isentropeNewton looks for the pressure at which enthalpy and entropy go together, in steps of ln(p) in a gas and of p in
// a liquid. It reports success only.
func (s *solver) isentropeNewton(entropy, enthalpy float64) (result, bool) {
	p := 0.3 * s.d.critical.p
	last := math.Inf(1)
	for range 30 {
		at, err := s.isobar(p, Entropy, entropy)
		if err != nil {
			return result{}, false
		}
		miss := enthalpy - at.h
		rt := s.m.whole.R * at.T
		if math.Abs(miss) <= 1e-13*(math.Abs(at.h)+10*rt) || math.Abs(miss) < 1e-9*rt && math.Abs(miss) >= 0.3*last {
			return at, true
		}
		last = math.Abs(miss)
		if step := miss * at.rho / p; p/at.rho > 0.3*rt { // step of ln(p)
			p *= math.Exp(min(max(step, -3), 3))
		} else {
			p += p * max(step, -0.7)
		}
		if p > s.reach.PressureMax || p < lowestPressure {
			return result{}, false
		}
	}
	return result{}, false
}

// jump is what a property may be off at a root, in parts of R T or R.
const jump = 1e-8

// pressureOf returns the pressure with that logarithm, within the limit in spite of rounding.
func (s *solver) pressureOf(lnP float64) float64 {
	return math.Min(math.Exp(lnP), s.reach.PressureMax)
}

// walk finds the logarithms of the lowest and the highest pressure of the one stretch where states with a property of the
// given value exist, by a coarse scan and bisection at both ends.
func (s *solver) walk(of Property, value float64) (from, to float64, err error) {
	const n = 48
	lo, hi := math.Log(lowestPressure), math.Log(s.reach.PressureMax)
	exists := func(lnP float64) (bool, error) {
		_, err := s.isobar(s.pressureOf(lnP), of, value)
		if _, refused := errors.AsType[*RangeError](err); err != nil && !refused {
			return false, err
		}
		return err == nil, nil
	}
	first, last, before, after := math.NaN(), math.NaN(), math.NaN(), math.NaN()
	for i := range n + 1 {
		x := lo + (hi-lo)*float64(i)/n
		ok, err := exists(x)
		if err != nil {
			return 0, 0, err
		}
		switch {
		case ok:
			if math.IsNaN(first) {
				first = x
			}
			last, after = x, math.NaN()
		case math.IsNaN(first):
			before = x
		case math.IsNaN(after):
			after = x
		}
	}
	if math.IsNaN(first) {
		cold := s.floor(s.reach.PressureMax, of)
		return 0, 0, s.unattainable(of, value, cold, s.ceiling(lowestPressure, of))
	}
	end := func(in, out float64) float64 {
		if math.IsNaN(out) {
			return in
		}
		for range 60 {
			m := in + (out-in)/2
			if m == in || m == out {
				break
			}
			if ok, err := exists(m); err == nil && ok {
				in = m
			} else {
				out = m
			}
		}
		return in
	}
	return end(first, before), end(last, after), nil
}

// isenthalp returns every state with a given enthalpy and internal energy. The two differ by p/rho alone, which an ideal
// gas fixes by temperature, so that the pair is weak in a thin gas.
func (s *solver) isenthalp(enthalpy, energy float64) ([]result, error) {
	if err := s.checkFinite(Enthalpy, enthalpy); err != nil {
		return nil, err
	}
	if err := s.checkFinite(InternalEnergy, energy); err != nil {
		return nil, err
	}
	// An isenthalp may leave the range of temperatures and come back. Walking it in a wider range leaves no gap.
	strict := s.reach
	defer func() { s.reach = strict }()
	s.reach = strict.Extrapolated()
	s.reach.PressureMax = strict.PressureMax
	lo, hi, err := s.walk(Enthalpy, enthalpy)
	if err != nil {
		return nil, err
	}
	u := func(lnP float64) float64 {
		r, err := s.isobar(s.pressureOf(lnP), Enthalpy, enthalpy)
		if err != nil {
			return math.NaN()
		}
		return r.u()
	}
	grid := []float64{lo}
	critical := math.Log(s.d.critical.p)
	for x := lo; x < hi; grid = append(grid, x) {
		step := 0.1
		switch away := x - critical; {
		case away < -7:
			step = 0.5
		case math.Abs(away) < 0.5:
			step = 0.02
		}
		x = math.Min(x+step, hi)
	}
	var out []result
	lowest, highest := math.Inf(1), math.Inf(-1)
	worst := 0.0
	var failure error
	eachRoot(grid, func(lnP float64) (float64, float64) {
		have := u(lnP)
		if !math.IsNaN(have) {
			lowest, highest = math.Min(lowest, have), math.Max(highest, have)
		}
		return have - energy, math.NaN()
	}, func(lnP float64) {
		r, err := s.isobar(s.pressureOf(lnP), Enthalpy, enthalpy)
		if err != nil {
			failure = err
			return
		}
		if !(math.Abs(r.u()-energy) < jump*s.m.whole.R*r.T) {
			return // a step of rounding between two ways of solving, not a root
		}
		if !(strict.TemperatureMin <= r.T && r.T <= strict.TemperatureMax && r.rho <= strict.DensityMax) {
			return
		}
		const step = 1e-5
		above, below := math.Min(lnP+step, hi), lnP-step
		slope := (u(above) - u(below)) / (above - below)
		worst = math.Max(worst, s.rounding(Enthalpy, &r.point)/math.Abs(slope))
		out = append(out, r)
	})
	switch {
	case failure != nil:
		return nil, failure
	case worst > wornOut:
		return nil, &ConditionError{Refrigerant: s.m.designation, Pair: [2]Property{Enthalpy, InternalEnergy}, Property: Pressure, Uncertainty: worst}
	case len(out) == 0:
		return nil, s.unattainable(InternalEnergy, energy, lowest, highest)
	}
	return out, nil
}
