package props

import (
	"math"

	"dewmark/props/internal/roots"
)

// qualityLine calls found with every state of quality x whose property y, density included, is v. Along a line of
// constant quality none of them need be monotonic: the enthalpy of saturated vapour, for one, has a maximum.
func (r *Pure) qualityLine(x float64, y Property, v float64, found func(State)) error {
	if err := r.checkQuality(x); err != nil {
		return err
	}
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return r.notFinite(y, v)
	}
	lowest, highest := math.Inf(1), math.Inf(-1)
	value := func(T float64) float64 {
		d := r.domeAt(T)
		return d.value(y, x)
	}
	scale := func(v float64) float64 { return v }
	if y == Density {
		scale = math.Log // densities of vapour span ten decades
		if !(v > 0) {
			return &RangeError{Refrigerant: r.rec.ID, Property: Density, Value: v, Min: 0, Max: r.reach().DensityMax, Limit: LimitPhysical}
		}
	}
	n := 0
	roots.All(r.curveTemperatures(), func(T float64) (float64, float64) {
		have := value(T)
		lowest, highest = math.Min(lowest, have), math.Max(highest, have)
		const h = 1e-6
		above, below := math.Min(T*(1+h), r.curve.TCritical), math.Max(T*(1-h), r.curve.TMin)
		return scale(have) - scale(v), (scale(value(above)) - scale(value(below))) / (above - below)
	}, func(T float64) {
		n++
		d := r.domeAt(T)
		found(r.domeState(&d, x))
	})
	if n == 0 {
		return &RangeError{Refrigerant: r.rec.ID, Property: y, Value: v, Min: lowest, Max: highest, Limit: LimitAttainable}
	}
	return nil
}

// curveTemperatures returns a rising grid over the saturation curve, even in sqrt(1-T/Tc), where the properties of both
// phases are smooth, and geometric in its last step, where a line of constant quality may still turn.
func (r *Pure) curveTemperatures() []float64 {
	const n, last = 64, 6
	c := r.curve
	s := math.Sqrt(1 - c.TMin/c.TCritical)
	grid := make([]float64, 0, n+last+1)
	add := func(s float64) { grid = append(grid, math.Min(c.TCritical, math.Max(c.TMin, c.TCritical*(1-s*s)))) }
	for i := n; i > 0; i-- {
		add(s * float64(i) / n)
	}
	for i := 1; i <= last; i++ {
		add(s / n * math.Pow(0.5, float64(i)))
	}
	add(0)
	return grid
}
