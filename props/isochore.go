package props

import (
	"math"

	"dewmark/props/internal/roots"
)

// isochore returns the state at density rho with the caloric property y equal to v. Along an isochore all three rise
// with temperature, through the dome and out of it, so that there is one state at most.
func (r *Pure) isochore(rho float64, y Property, v float64) (State, error) {
	if err := r.checkDensity(rho); err != nil {
		return State{}, err
	}
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return State{}, r.notFinite(y, v)
	}
	lo, hi := r.reach().TemperatureMin, r.reach().TemperatureMax
	low, high := r.valueAt(lo, rho, y), r.valueAt(hi, rho, y)
	if !(low <= v && v <= high) {
		return State{}, &RangeError{Refrigerant: r.rec.ID, Property: y, Value: v, Min: low, Max: high, Limit: LimitAttainable}
	}
	T, _ := roots.Bracketed(lo, low-v, hi, high-v, func(T float64) (float64, error) { return r.valueAt(T, rho, y) - v, nil })
	return r.TemperatureDensity(T, rho)
}

// valueAt returns caloric property y at temperature T and density rho, in the dome or out of it.
func (r *Pure) valueAt(T, rho float64, y Property) float64 {
	if T < r.curve.TCritical {
		p, liquid, vapour := r.curve.At(T)
		if vapour*r.M <= rho && rho <= liquid*r.M {
			d := r.domeOf(T, p, liquid*r.M, vapour*r.M)
			return d.value(y, d.quality(Density, rho))
		}
	}
	var f fluidState
	r.evaluateAt(T, rho, &f)
	v, _, _ := f.value(y)
	return v
}

// pressureDensity calls found with every state at pressure p and density rho. There is one, but for cold water, whose
// density has a maximum in temperature.
func (r *Pure) pressureDensity(p, rho float64, found func(State)) error {
	if err := r.checkPressure(p); err != nil {
		return err
	}
	if err := r.checkDensity(rho); err != nil {
		return err
	}
	l := r.reach()
	lo, hi := l.TemperatureMin, l.TemperatureMax
	if r.curve.PMin <= p && p < r.curve.PCritical {
		d := r.domeAtPressure(p)
		if x := d.quality(Density, rho); -1e-12 <= x && x <= 1+1e-12 {
			s := r.domeState(&d, math.Min(1, math.Max(0, x)))
			s.Rho = rho
			found(s)
			if x > 0 || r.rec.ID != "R718" {
				return nil
			}
		}
		if rho > d.liquid.rho || r.rec.ID == "R718" && rho > 0.99*d.liquid.rho {
			hi = d.T
		} else {
			lo = d.T
		}
	}
	var highest, lowest float64 = 0, math.Inf(1) // of the density, for the error
	miss := func(T float64) (float64, float64) {
		side := AnyPhase
		if hi < r.curve.TCritical {
			side = Liquid
		}
		if lo > l.TemperatureMin {
			side = Vapour
		}
		f, err := r.singlePhase(T, p, side)
		if err != nil {
			return math.NaN(), math.NaN()
		}
		highest, lowest = math.Max(highest, f.rho), math.Min(lowest, f.rho)
		return math.Log(f.rho / rho), -f.pT / (f.rho * f.pRho)
	}
	n := 0
	roots.All(temperatures(lo, hi), miss, func(T float64) {
		f, ok := r.pressureOnIsochore(T, p, rho)
		if !ok {
			return
		}
		if s := r.state(f, p); r.check(&s) == nil {
			n++
			found(s)
		}
	})
	if n > 0 {
		return nil
	}
	for _, T := range []float64{l.TemperatureMin, l.TemperatureMax} { // the other side of the dome counts too
		if f, err := r.singlePhase(T, p, AnyPhase); err == nil {
			highest, lowest = math.Max(highest, f.rho), math.Min(lowest, f.rho)
		}
	}
	if !(lowest <= rho && rho <= highest) {
		return &RangeError{Refrigerant: r.rec.ID, Property: Density, Value: rho, Min: lowest, Max: highest, Limit: LimitAttainable}
	}
	return nil
}

// pressureOnIsochore polishes the temperature at which the isochore rho has pressure p: the last digits of a
// temperature found from densities are lost where a liquid hardly expands.
func (r *Pure) pressureOnIsochore(T, p, rho float64) (f fluidState, ok bool) {
	for range 8 {
		r.evaluateAt(T, rho, &f)
		step := (p - f.p) / f.pT
		if math.Abs(step) < 1e-14*T {
			return f, true
		}
		if !(math.Abs(step) < 0.05*T) {
			return f, false
		}
		T += step
	}
	r.evaluateAt(T, rho, &f)
	return f, true
}

// temperatures returns a rising grid from lo to hi for scans, in even steps of at most 2 % of the temperature.
func temperatures(lo, hi float64) []float64 {
	n := 2 + int(50*math.Log(hi/lo))
	grid := make([]float64, n+1)
	for i := range grid {
		grid[i] = lo + (hi-lo)*float64(i)/float64(n)
	}
	return grid
}
