package props

import (
	"math"

	"dewmark/props/helmholtz"
	"dewmark/props/internal/roots"
)

// TemperatureDensity returns the state at T in K and rho in kg/m3.
func (r *Pure) TemperatureDensity(T, rho float64) (s State, err error) {
	if err := r.checkTemperature(T); err != nil {
		return s, err
	}
	if err := r.checkDensity(rho); err != nil {
		return s, err
	}
	if T < r.curve.TCritical && r.curve.Encloses(T, rho*r.perM) {
		p, liquid, vapour := r.curve.At(T)
		d := r.domeOf(T, p, liquid*r.M, vapour*r.M)
		x := math.Min(1, math.Max(0, d.quality(Density, rho)))
		s = r.domeState(&d, x)
		s.Rho = rho
		return s, nil
	}
	var f fluidState
	r.evaluateAt(T, rho, &f)
	if err := r.checkPressure(f.p); err != nil {
		return s, err
	}
	if err := r.checkFluid(T, f.p, rho); err != nil {
		return s, err
	}
	r.complete(&f, f.p, &s)
	return s, nil
}

// TemperatureQuality returns the state inside the dome at T in K and quality x from 0 to 1.
func (r *Pure) TemperatureQuality(T, x float64) (State, error) {
	if err := r.checkSaturationTemperature(T); err != nil {
		return State{}, err
	}
	if err := r.checkQuality(x); err != nil {
		return State{}, err
	}
	p, liquid, vapour := r.curve.At(T)
	return r.onDome(T, p, liquid*r.M, vapour*r.M, x), nil
}

// PressureQuality returns the state inside the dome at p in Pa and quality x from 0 to 1.
func (r *Pure) PressureQuality(p, x float64) (State, error) {
	if err := r.checkSaturationPressure(p); err != nil {
		return State{}, err
	}
	if err := r.checkQuality(x); err != nil {
		return State{}, err
	}
	T := r.curve.Temperature(p)
	_, liquid, vapour := r.curve.At(T)
	return r.onDome(T, p, liquid*r.M, vapour*r.M, x), nil
}

// onDome returns the state at quality x from the temperature, pressure and densities of the saturated phases. At the
// ends it evaluates one phase only.
func (r *Pure) onDome(T, p, liquid, vapour, x float64) State {
	if x > 0 && x < 1 {
		d := r.domeOf(T, p, liquid, vapour)
		return r.domeState(&d, x)
	}
	phase, rho := Liquid, liquid
	if x == 1 {
		phase, rho = Vapour, vapour
	}
	var f fluidState
	r.evaluateAt(T, rho, &f)
	s := r.state(f, p)
	s.Phase, s.Quality = phase, x
	return s
}

func (r *Pure) checkQuality(x float64) error {
	if !(0 <= x && x <= 1) {
		return &RangeError{Refrigerant: r.rec.ID, Property: Quality, Value: x, Min: 0, Max: 1, Limit: LimitPhysical}
	}
	return nil
}

// thinnest is the density, over the critical one, below which the solvers of temperature with a caloric property do
// not look: the gas is ideal there to rounding, and enthalpy and internal energy no longer depend on density.
const thinnest = 1e-9

// isotherm calls found with every state at temperature T whose caloric property y is v. Entropy falls with density, but
// for cold water; enthalpy and internal energy turn back in a compressed fluid, so that a pair may have several states.
func (r *Pure) isotherm(T float64, y Property, v float64, found func(State)) error {
	if err := r.checkTemperature(T); err != nil {
		return err
	}
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return r.notFinite(y, v)
	}
	lowest, highest := math.Inf(1), math.Inf(-1)
	var iso helmholtz.Isotherm
	iso.Set(r.eq, T)
	miss := func(rho float64) (float64, float64) {
		f := r.evaluate(&iso, rho)
		have, _, slope := f.value(y)
		lowest, highest = math.Min(lowest, have), math.Max(highest, have)
		return have - v, slope
	}
	worst := 0.0 // relative uncertainty of the density that rounding leaves
	single := func(rho float64) {
		f := r.evaluate(&iso, rho)
		s := r.state(f, f.p)
		if r.check(&s) == nil {
			_, _, slope := f.value(y)
			worst = math.Max(worst, roundingOf(y, f, r)/math.Abs(rho*slope))
			found(s)
		}
	}
	thin, dense := thinnest*r.curve.RhoCritical*r.M, r.reach().DensityMax
	if T >= r.curve.TCritical {
		roots.All(r.densities(thin, dense), miss, single)
	} else {
		p, liquid, vapour := r.curve.At(T)
		liquid, vapour = liquid*r.M, vapour*r.M
		d := r.domeOn(&iso, p, liquid, vapour)
		if dense > liquid {
			roots.All(r.densities(liquid, dense), miss, single)
		}
		if x := r.snap(&d, y, d.quality(y, v)); 0 <= x && x <= 1 {
			// On the edge the value may lie outside what the searches see, by the noise of the equation's own pressure.
			lowest, highest = math.Min(lowest, v), math.Max(highest, v)
			found(r.domeState(&d, x))
		}
		roots.All(r.densities(math.Min(thin, vapour/2), vapour), miss, single)
	}
	if y != Entropy { // which grows without end as a gas thins
		end, _ := miss(thin)
		limit := r.h0 + r.Rs*T*iso.Ideal.T - v // of the ideal gas
		if y == Enthalpy {
			limit += r.Rs * T
		}
		if (end < 0) != (limit < 0) || limit == 0 {
			worst = 1 // a gas thinner than the search goes has the value too
		}
	}
	if worst > 1e-7 {
		return &ConditionError{Refrigerant: r.rec.ID, Pair: [2]Property{Temperature, y}, Property: Density, Uncertainty: worst}
	}
	if !(lowest <= v && v <= highest) {
		return &RangeError{Refrigerant: r.rec.ID, Property: y, Value: v, Min: lowest, Max: highest, Limit: LimitAttainable}
	}
	return nil
}

// roundingOf returns the rounding error of property y in state f: a few units in the last place of the terms it is
// summed from.
func roundingOf(y Property, f fluidState, r *Pure) float64 {
	const ulp = 4e-16
	if y == Entropy {
		return ulp * (math.Abs(f.s) + math.Abs(r.s0) + 10*r.Rs)
	}
	return ulp * (math.Abs(f.h) + math.Abs(r.h0) + 10*r.Rs*f.T)
}

// densities returns a rising grid from lo to hi, geometric in a gas and finer where a fluid is dense.
func (r *Pure) densities(lo, hi float64) []float64 {
	grid := []float64{lo}
	c := r.curve.RhoCritical * r.M
	for x := lo; ; {
		switch {
		case x < 0.05*c:
			x *= 2
		default:
			x += 0.05 * c
		}
		if x >= hi*(1-1e-9) {
			return append(grid, hi)
		}
		grid = append(grid, x)
	}
}
