package cycle

import "math"

const (
	// aboveBracketEnd keeps a search off the ends of its bracket, where two pressures coincide and nothing is left to solve.
	aboveBracketEnd = 1.001
	// searchPoints is the number of pressures, evenly spaced in their logarithm, that are tried before the search closes in
	// around the best: a COP can have a second, lower maximum where one limit of an exchanger takes over from another.
	searchPoints = 9
	// searchTolerance is the half width of the last bracket, relative to the pressure. Around a smooth optimum the COP is
	// lost by its square.
	searchTolerance = 3e-6
	// searchSteps is more than golden sections alone need for searchTolerance.
	searchSteps = 60

	highPressureStep     = 5e5  // Pa beside a high-side optimum, for the report
	intermediateStepPart = 0.05 // of the pressure, beside an intermediate optimum
)

// search finds the pressure between two limits at which the machine has its best COP, and leaves the machine put together
// there. The step is how far beside the optimum its loss is reported, in Pa; NaN means a part of the optimum.
func (c *circuit) search(field string, low, high, step float64, at func(p float64)) {
	if c.refused != nil {
		return
	}
	if !(low < high) {
		c.refuse(Refusal{
			Code: PressuresOutOfOrder, Field: field,
			Message: message("no pressure lies between the limits of the search, %s and %s", pressure(low), pressure(high)),
		})
		return
	}
	outer, found := c.searching, len(c.optima)
	c.searching = true
	count := 0
	var refused *Refusal // what stood in the way of the last pressure without a COP
	try := func(p float64) float64 {
		count++
		c.optima, c.refused = c.optima[:found], nil
		if c.goesOn() {
			at(p)
		}
		if c.refused != nil {
			refused = c.refused
			return math.Inf(-1)
		}
		return c.objective()
	}
	best, cop, end := maximum(math.Log(low), math.Log(high), func(u float64) float64 { return try(math.Exp(u)) })
	p := math.Exp(best)
	if math.IsInf(cop, -1) {
		c.refused = refused
		c.searching = outer
		return
	}
	o := Optimum{
		Field: field, Pressure: p, COP: cop, Step: step, LossBelow: nan, LossAbove: nan,
		Tolerance: searchTolerance * p, AtLimit: end, atLow: end && p < math.Sqrt(low*high),
	}
	if !outer { // not worth it at each trial of a search further out
		if !isGiven(step) {
			o.Step = intermediateStepPart * p
		}
		o.LossBelow = lossAt(try, p-o.Step, low, high, cop)
		o.LossAbove = lossAt(try, p+o.Step, low, high, cop)
	}
	c.searching = outer
	o.Evaluations = count
	try(p)
	c.optima = append(c.optima, o)
}

// lossAt returns the fraction of the best COP that is lost at pressure p, or NaN outside the limits.
func lossAt(try func(float64) float64, p, low, high, best float64) float64 {
	if p < low || p > high {
		return nan
	}
	cop := try(p)
	if math.IsInf(cop, -1) {
		return nan
	}
	return 1 - cop/best
}

// objective returns the COP of the purpose.
func (c *circuit) objective() float64 {
	t := c.totals()
	if c.purpose == Heating {
		return t.heating / t.power
	}
	return t.cooling / t.power
}

// maximum returns where f is highest between a and b, f there, and whether that is at an end. It tries evenly spaced
// points and closes in around the best of them by golden sections and parabolas: the method of Brent 1973, Algorithms for
// Minimization without Derivatives, chapter 5.
func maximum(a, b float64, f func(float64) float64) (x, fx float64, end bool) {
	var at, values [searchPoints]float64
	best := 0
	for i := range at {
		at[i] = a + (b-a)*float64(i)/(searchPoints-1)
		if values[i] = f(at[i]); values[i] > values[best] || i == 0 {
			best = i
		}
	}
	left, right := at[max(best-1, 0)], at[min(best+1, searchPoints-1)]
	x, fx = brent(left, right, f)
	if values[best] >= fx {
		x, fx = at[best], values[best]
	}
	return x, fx, x-a < 2*searchTolerance || b-x < 2*searchTolerance
}

// goldenShare is the smaller part of a golden section.
const goldenShare = 0.381966011250105

// brent returns the maximum of f between a and b, which must be the only one there.
func brent(a, b float64, f func(float64) float64) (x, fx float64) {
	x = a + goldenShare*(b-a)
	fx = f(x)
	w, v, fw, fv := x, x, fx, fx // the second and third best points
	var d, e float64             // the last step and the one before
	for range searchSteps {
		middle := (a + b) / 2
		if math.Abs(x-middle) <= 2*searchTolerance-(b-a)/2 {
			break
		}
		golden := true
		if math.Abs(e) > searchTolerance {
			r, q := (x-w)*(fx-fv), (x-v)*(fx-fw)
			p := (x-v)*q - (x-w)*r
			if q = 2 * (q - r); q > 0 {
				p = -p
			}
			q = math.Abs(q)
			last := e
			e = d
			if math.Abs(p) < math.Abs(q*last/2) && p > q*(a-x) && p < q*(b-x) {
				d, golden = p/q, false
				if u := x + d; u-a < 2*searchTolerance || b-u < 2*searchTolerance {
					d = math.Copysign(searchTolerance, middle-x)
				}
			}
		}
		if golden {
			e = b - x
			if x >= middle {
				e = a - x
			}
			d = goldenShare * e
		}
		u := x + d
		if math.Abs(d) < searchTolerance {
			u = x + math.Copysign(searchTolerance, d)
		}
		fu := f(u)
		if fu >= fx {
			if u >= x {
				a = x
			} else {
				b = x
			}
			v, fv, w, fw, x, fx = w, fw, x, fx, u, fu
			continue
		}
		if u < x {
			a = u
		} else {
			b = u
		}
		if fu >= fw || w == x {
			v, fv, w, fw = w, fw, u, fu
		} else if fu >= fv || v == x || v == w {
			v, fv = u, fu
		}
	}
	return x, fx
}
