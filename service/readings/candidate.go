package readings

import (
	"math"

	"dewmark/service/readings/uncertainty"
)

// candidates tries other refrigerants and returns those with which superheat, subcooling and efficiency are plausible.
func (w *work) candidates() []Candidate {
	var out []Candidate
	for _, other := range w.evaluator.installation.OtherRefrigerants() {
		if other.Designation() == w.evaluator.fluid.Designation() {
			continue
		}
		f := newFluid(other)
		if c, fits := w.try(&f); fits {
			out = append(out, c)
		}
	}
	return out
}

// try computes what a refrigerant would mean and reports whether that is plausible.
func (w *work) try(f *fluid) (Candidate, bool) {
	nan := math.NaN()
	c := Candidate{f.Designation(), nan, nan, nan}
	read := func(p place) (pressure, temperature float64) {
		return w.points[p].p.Value, w.points[p].T.Value
	}
	p1, T1 := read(suction)
	p2, T2 := read(discharge)
	p4, T4 := read(condenserOutlet)
	if T, err := f.saturationTemperature(p1, true); err == nil {
		c.Superheat = T1 - T
	}
	if T, err := f.saturationTemperature(p4, false); err == nil {
		c.Subcooling = T - T4
	}
	var none uncertainty.Calculus
	from, to := point{p: uncertainty.Constant(p1), T: uncertainty.Constant(T1)}, point{p: uncertainty.Constant(p2), T: uncertainty.Constant(T2)}
	if c.Superheat > 0 && !math.IsNaN(T2) && from.fill(&none, f) == nil && to.fill(&none, f) == nil {
		if _, end, err := f.compressed(&none, &from, to.p); err == nil {
			c.IsentropicEfficiency = (1 - w.loss.Value) * (end.Value - from.h.Value) / (to.h.Value - from.h.Value)
		}
	}
	within := func(v, low, high float64) bool { return math.IsNaN(v) || low < v && v < high }
	known := !math.IsNaN(c.Superheat) || !math.IsNaN(c.Subcooling)
	fits := known && within(c.Superheat, leastSuperheat, mostSuperheat) && within(c.Subcooling, leastSubcooling, mostSubcooling) &&
		within(c.IsentropicEfficiency, leastEfficiency, mostEfficiency)
	// A pressure outside the saturation line speaks against a refrigerant as much as an implausible superheat.
	if !math.IsNaN(p1) && !math.IsNaN(T1) && math.IsNaN(c.Superheat) || !math.IsNaN(p4) && !math.IsNaN(T4) && math.IsNaN(c.Subcooling) {
		fits = false
	}
	return c, fits
}
