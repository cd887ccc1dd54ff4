package props

import (
	"errors"
	"math"
	"slices"

	"dewmark/props/internal/roots"
)

// EnthalpyEntropy returns the state at h in J/kg and s in J/(kg K). The pair has one solution at most.
func (r *Pure) EnthalpyEntropy(h, s float64) (State, error) {
	return r.isentrope(s, Enthalpy, h)
}

// EntropyInternalEnergy returns the state at s in J/(kg K) and u in J/kg. The pair has one solution at most.
func (r *Pure) EntropyInternalEnergy(s, u float64) (State, error) {
	return r.isentrope(s, InternalEnergy, u)
}

// lowestPressure is where solvers that walk along pressure begin, Pa: far below what any vacuum pump reaches.
const lowestPressure = 1e-6

// pressure returns the pressure with that logarithm, within the limit in spite of rounding.
func (r *Pure) pressure(lnP float64) float64 {
	return math.Min(math.Exp(lnP), r.reach().PressureMax)
}

// isentrope returns the state of entropy s with property y, enthalpy or internal energy, equal to v. Both rise with
// pressure along an isentrope: (dh/dp) = 1/rho, (du/dp) = p/(rho^2 w^2).
func (r *Pure) isentrope(s float64, y Property, v float64) (State, error) {
	if math.IsNaN(s) || math.IsInf(s, 0) {
		return State{}, r.notFinite(Entropy, s)
	}
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return State{}, r.notFinite(y, v)
	}
	if at, ok := r.alongIsentrope(s, y, v); ok {
		return at, nil
	}
	var at State
	miss := func(lnP float64) (float64, error) {
		var err error
		if at, err = r.PressureEntropy(r.pressure(lnP), s); err != nil {
			return 0, err
		}
		return y.Of(&at) - v, nil
	}
	lo, hi, err := r.isentropeEnds(s, Given{Property: y, Value: v})
	if err != nil {
		return State{}, err
	}
	a, err := miss(lo)
	if err != nil {
		return State{}, err
	}
	low := at
	b, err := miss(hi)
	if err != nil {
		return State{}, err
	}
	if !(a <= 0 && b >= 0) {
		return State{}, &RangeError{Refrigerant: r.rec.ID, Property: y, Value: v, Min: y.Of(&low), Max: y.Of(&at), Limit: LimitAttainable}
	}
	lnP, err := roots.Bracketed(lo, a, hi, b, miss)
	if err != nil {
		return State{}, err
	}
	if _, err = miss(lnP); err != nil {
		return State{}, err
	}
	// Where enthalpy and entropy of a liquid hardly depend on pressure, the pressure found is uncertain, but not what
	// else the state holds.
	return at, nil
}

// alongIsentrope solves by Newton's method in pressure, whose derivative is known. It reports false when an iterate
// leaves the range or the steps do not settle.
func (r *Pure) alongIsentrope(s float64, y Property, v float64) (State, bool) {
	const limit = 30
	p := r.curve.PCritical / 8 // the middle of where refrigerants work
	last := math.Inf(1)
	for range limit {
		at, err := r.PressureEntropy(p, s)
		if err != nil {
			return State{}, false
		}
		slope := p / at.Rho // d h/d ln p
		if y == InternalEnergy {
			if math.IsNaN(at.W) {
				return State{}, false // the derivative inside the dome is not worth its formula
			}
			slope *= p / (at.Rho * at.W * at.W)
		}
		step := (v - y.Of(&at)) / slope
		if math.Abs(step) < 4e-16 || math.Abs(step) < 1e-9 && math.Abs(step) >= last/2 {
			return at, true
		}
		last = math.Abs(step)
		if at.Phase == Liquid && step > -0.9 {
			step = math.Log1p(step) // nearly incompressible: linear in p itself
		}
		p *= math.Exp(math.Max(-2.5, math.Min(2.5, step)))
		if !(p < r.reach().PressureMax) {
			return State{}, false
		}
	}
	return State{}, false
}

// isentropeEnds returns the logarithms of the lowest and highest pressure at which a state of entropy s exists. An
// isentrope is warmer at higher pressure: it enters the range of the equation at its lowest temperature or at the
// lowest pressure, and leaves it at the highest temperature or pressure.
func (r *Pure) isentropeEnds(s float64, other Given) (lo, hi float64, err error) {
	return r.walk(Given{Property: Entropy, Value: s}, other, r.reach().PressureMax)
}

// side tells where a failed state lies: -1 where the state would be too cold or solid, +1 where too hot, 0 for a state.
func side(err error, y Property, v float64) (int, error) {
	if err == nil {
		return 0, nil
	}
	e, ok := errors.AsType[*RangeError](err)
	switch {
	case !ok:
		return 0, err
	case e.Property == y && v < e.Min, e.Property == Temperature && e.Value < e.Min, e.Limit == LimitDensity, e.Limit == LimitMelting:
		return -1, nil
	case e.Property == y && v > e.Max, e.Property == Temperature && e.Value > e.Max:
		return 1, nil
	}
	return 0, err
}

// walk finds the ends, in the logarithm of pressure up to top, of the one stretch where states with the property along
// exist, by a coarse scan and bisection at both edges. The other given property is for the error.
func (r *Pure) walk(along, other Given, top float64) (from, to float64, err error) {
	const n = 48
	y, v := along.Property, along.Value
	lo, hi := math.Log(lowestPressure), math.Log(top)
	where := func(lnP float64) (int, error) {
		_, err := r.isobar(math.Min(math.Exp(lnP), top), y, v)
		return side(err, y, v)
	}
	first, last := math.NaN(), math.NaN()
	before, after := math.NaN(), math.NaN() // failing neighbours of the stretch
	for i := range n + 1 {
		x := lo + (hi-lo)*float64(i)/n
		w, err := where(x)
		if err != nil {
			return 0, 0, err
		}
		switch {
		case w == 0:
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
		low, high := r.extent(y)
		if low <= v && v <= high {
			return 0, 0, &NoSolutionError{Refrigerant: r.rec.ID, Pair: [2]Given{along, other}}
		}
		return 0, 0, &RangeError{Refrigerant: r.rec.ID, Property: y, Value: v, Min: low, Max: high, Limit: LimitAttainable}
	}
	edge := func(in, out float64) float64 {
		if math.IsNaN(out) {
			return in
		}
		for range 60 {
			m := in + (out-in)/2
			if m == in || m == out {
				break
			}
			if w, err := where(m); err == nil && w == 0 {
				in = m
			} else {
				out = m
			}
		}
		return in
	}
	return edge(first, before), edge(last, after), nil
}

// extent returns the lowest and the highest value of property y at the corners of the range, lowest pressure and
// highest at the lowest and highest temperature.
func (r *Pure) extent(y Property) (low, high float64) {
	low, high = math.Inf(1), math.Inf(-1)
	l := r.reach()
	for _, T := range []float64{l.TemperatureMin, l.TemperatureMax} {
		for _, p := range []float64{lowestPressure, math.Min(l.PressureMax, r.meltingPressure(T))} {
			if f, err := r.singlePhase(T, p, AnyPhase); err == nil {
				v, _, _ := f.value(y)
				low, high = math.Min(low, v), math.Max(high, v)
			}
		}
	}
	return low, high
}

// enthalpyEnergy calls found with every state of enthalpy h and internal energy u. The two differ by p/rho alone, which
// an ideal gas fixes by temperature, so that the pair is weak in a thin gas.
func (r *Pure) enthalpyEnergy(h, u float64, found func(State)) error {
	if math.IsNaN(h) || math.IsInf(h, 0) {
		return r.notFinite(Enthalpy, h)
	}
	if math.IsNaN(u) || math.IsInf(u, 0) {
		return r.notFinite(InternalEnergy, u)
	}
	// An isenthalp may leave the range of temperatures and come back. Walking it in a wider range leaves no gap.
	wide := r.Extrapolate()
	lo, hi, err := wide.walk(Given{Property: Enthalpy, Value: h}, Given{Property: InternalEnergy, Value: u}, r.reach().PressureMax)
	if err != nil {
		return err
	}
	grid := wide.isenthalpPressures(h, lo, hi)
	lowest, highest := math.Inf(1), math.Inf(-1)
	worst, count := 0.0, 0
	miss := func(lnP float64) (v, slope float64) {
		s, err := wide.PressureEnthalpy(r.pressure(lnP), h)
		if err != nil {
			return math.NaN(), math.NaN()
		}
		lowest, highest = math.Min(lowest, s.U), math.Max(highest, s.U)
		return s.U - u, wide.slopeAtEnthalpy(lnP, h)
	}
	roots.All(grid, miss, func(lnP float64) {
		s, err := r.PressureEnthalpy(r.pressure(lnP), h)
		if err != nil {
			return
		}
		slope := wide.slopeAtEnthalpy(lnP, h)
		noise := 1e-15 * (math.Abs(s.H) + math.Abs(r.h0) + 10*r.Rs*s.T)
		worst = math.Max(worst, noise/math.Abs(slope))
		count++
		found(s)
	})
	if worst > 1e-7 {
		return &ConditionError{Refrigerant: r.rec.ID, Pair: [2]Property{Enthalpy, InternalEnergy}, Property: Pressure, Uncertainty: worst}
	}
	if count == 0 && !(lowest <= u && u <= highest) {
		return &RangeError{Refrigerant: r.rec.ID, Property: InternalEnergy, Value: u, Min: lowest, Max: highest, Limit: LimitAttainable}
	}
	return nil
}

// slopeAtEnthalpy returns (du/d ln p) at constant enthalpy, by differences.
func (r *Pure) slopeAtEnthalpy(lnP, h float64) float64 {
	const step = 1e-5
	above, err := r.PressureEnthalpy(r.pressure(lnP+step), h)
	if err != nil {
		above, err = r.PressureEnthalpy(r.pressure(lnP), h)
	}
	if err != nil {
		return math.NaN()
	}
	below, err := r.PressureEnthalpy(r.pressure(lnP-step), h)
	if err != nil {
		return math.NaN()
	}
	return (above.U - below.U) / math.Log(above.P/below.P)
}

// isenthalpPressures returns a rising grid of ln p from lo to hi for a scan along the isenthalp h: coarse where the
// fluid is an almost ideal gas or well inside the dome, finer towards the critical pressure, and with the points where
// the isenthalp enters and leaves the dome, at which it has a kink.
func (r *Pure) isenthalpPressures(h, lo, hi float64) []float64 {
	critical := math.Log(r.curve.PCritical)
	grid := []float64{lo}
	for x := lo; x < hi; grid = append(grid, x) {
		step := 0.05
		switch d := x - critical; {
		case d < -7:
			step = 0.5
		case math.Abs(d) < 0.5:
			step = 0.01
		}
		x = math.Min(x+step, hi)
	}
	for _, quality := range []float64{0, 1} {
		_ = r.qualityLine(quality, Enthalpy, h, func(s State) { // no crossing is no error here
			if x := math.Log(s.P); lo < x && x < hi {
				grid = append(grid, x)
			}
		})
	}
	slices.Sort(grid)
	return slices.Compact(grid)
}
