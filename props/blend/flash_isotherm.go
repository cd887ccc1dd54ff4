package blend

import (
	"math"
	"slices"
)

// temperaturePressure returns the state at T and p.
func (s *solver) temperaturePressure(T, p float64) ([]result, error) {
	if err := s.checkTemperature(T); err != nil {
		return nil, err
	}
	if err := s.checkPressure(p); err != nil {
		return nil, err
	}
	fixed, other := constraint{Temperature, T}, constraint{Pressure, p}
	one := func(q point, ok bool) ([]result, error) {
		if !ok {
			return nil, s.unattainable(Pressure, p, 0, s.reach.PressureMax)
		}
		return []result{singlePhase(q)}, s.check(&q)
	}
	if T >= s.d.topT.T {
		s.iso.set(T)
		return one(s.onBranch(p, s.above(T, p)))
	}
	var at [2]boundary
	for sd := range at {
		var ok bool
		if at[sd], ok = s.boundaryAt(T, side(sd)); !ok {
			return nil, s.stuck(fixed, other)
		}
	}
	width := at[dense].p - at[light].p
	tie := edgeTie * p
	onDense, onLight := math.Abs(p-at[dense].p) <= tie, math.Abs(p-at[light].p) <= tie
	switch {
	case onDense || onLight || width <= 2*tie && p > at[light].p && p < at[dense].p:
		// On an edge. At an azeotrope, where both edges are one, the pair does not tell liquid from vapour.
		edges, ok := s.edgesAtT(T)
		if !ok {
			return nil, s.stuck(fixed, other)
		}
		var out []result
		for sd, on := range [2]bool{onDense || width <= 2*tie, onLight || width <= 2*tie} {
			if on {
				out = append(out, edges[sd].result())
			}
		}
		return out, nil
	case p > at[dense].p:
		return one(s.outside(at[dense], T, p, dense))
	case p < at[light].p:
		return one(s.outside(at[light], T, p, light))
	}
	// Close to an azeotrope the pressure hardly changes from one edge to the other.
	if weak := equilibriumTolerance / 10 * p / width; weak > wornOut {
		return nil, &ConditionError{Refrigerant: s.m.designation, Pair: [2]Property{Temperature, Pressure}, Property: Quality, Uncertainty: weak}
	}
	edges, ok := s.edgesAtT(T)
	if !ok {
		return nil, s.stuck(fixed, other)
	}
	o, ok := s.between(edges[light].tie(s.m.z), edges[dense].tie(s.m.z), fixed, other)
	if !ok {
		return nil, s.stuck(fixed, other)
	}
	return []result{o.result()}, nil
}

// temperatureVolume returns the state at T and molar volume v.
func (s *solver) temperatureVolume(T, v float64) (result, error) {
	if err := s.checkTemperature(T); err != nil {
		return result{}, err
	}
	if err := s.checkVolume(v); err != nil {
		return result{}, err
	}
	rho := 1 / v
	if T < s.d.topT.T {
		var at [2]boundary
		for sd := range at {
			var ok bool
			if at[sd], ok = s.boundaryAt(T, side(sd)); !ok {
				return result{}, s.stuck(constraint{Temperature, T}, constraint{Density, v})
			}
		}
		const tie = 1e-12
		if at[light].rho*(1-tie) <= rho && rho <= at[dense].rho*(1+tie) {
			return s.isothermTwoPhase(T, Density, v)
		}
	}
	s.iso.set(T)
	q := s.iso.at(rho)
	return singlePhase(q), s.check(&q)
}

// isothermTwoPhase returns the state inside the envelope or on its edge at T with a given property, whose value lies
// between those on the edges.
func (s *solver) isothermTwoPhase(T float64, of Property, value float64) (result, error) {
	fixed, other := constraint{Temperature, T}, constraint{of, value}
	edges, ok := s.edgesAtT(T)
	if !ok {
		return result{}, s.stuck(fixed, other)
	}
	a, b := edges[light].bulk.value(of), edges[dense].bulk.value(of)
	tie := edgeTie * math.Abs(b-a)
	if of == Density {
		tie = 1e-11 * value
	}
	switch {
	case math.Abs(value-a) <= tie:
		return edges[light].result(), nil
	case math.Abs(value-b) <= tie:
		return edges[dense].result(), nil
	}
	o, ok := s.between(edges[light].tie(s.m.z), edges[dense].tie(s.m.z), fixed, other)
	if !ok {
		return result{}, s.stuck(fixed, other)
	}
	return o.result(), nil
}

// thinnest is the density, over the reducing one, below which the solvers of temperature with a caloric property do not
// look: the gas is ideal there to rounding, and enthalpy and internal energy no longer depend on density.
const thinnest = 1e-9

// isotherm returns every state at T with a given enthalpy, entropy or internal energy. Enthalpy and internal energy turn
// back in a compressed fluid, so that a pair may have several states.
func (s *solver) isotherm(T float64, of Property, value float64) ([]result, error) {
	if err := s.checkTemperature(T); err != nil {
		return nil, err
	}
	if err := s.checkFinite(of, value); err != nil {
		return nil, err
	}
	var out []result
	lowest, highest := math.Inf(1), math.Inf(-1)
	worst := 0.0
	scan := func(lo, hi float64) {
		s.iso.set(T)
		eachRoot(densities(s.m.whole.Rho, lo, hi), func(rho float64) (float64, float64) {
			q := s.iso.at(rho)
			have := q.value(of)
			_, slope := q.slopes(of)
			lowest, highest = math.Min(lowest, have), math.Max(highest, have)
			return have - value, slope
		}, func(rho float64) {
			q := s.iso.at(rho)
			if s.check(&q) == nil {
				_, slope := q.slopes(of)
				worst = math.Max(worst, s.rounding(of, &q)/math.Abs(rho*slope))
				out = append(out, singlePhase(q))
			}
		})
	}
	thin, thick := thinnest*s.m.whole.Rho, s.reach.DensityMax
	if T >= s.d.topT.T {
		scan(thin, thick)
	} else {
		edges, ok := s.edgesAtT(T)
		if !ok {
			return nil, s.stuck(constraint{Temperature, T}, constraint{of, value})
		}
		a, b := edges[light].bulk.value(of), edges[dense].bulk.value(of)
		scan(math.Min(thin, edges[light].bulk.rho/2), edges[light].bulk.rho)
		if thick > edges[dense].bulk.rho {
			scan(edges[dense].bulk.rho, thick)
		}
		if tie := edgeTie * math.Abs(b-a); math.Min(a, b)-tie <= value && value <= math.Max(a, b)+tie {
			r, err := s.isothermTwoPhase(T, of, value)
			if err != nil {
				return nil, err
			}
			// The edge itself is the end of both stretches.
			if r.edge != nil {
				out = slices.DeleteFunc(out, func(o result) bool { return math.Abs(o.rho/r.rho-1) < 1e-8 })
			}
			out = append(out, r)
		}
	}
	if worst > wornOut {
		return nil, &ConditionError{Refrigerant: s.m.designation, Pair: [2]Property{Temperature, of}, Property: Density, Uncertainty: worst}
	}
	if len(out) == 0 && !(lowest <= value && value <= highest) {
		return nil, s.unattainable(of, value, lowest, highest)
	}
	return out, nil
}

// wornOut is the relative uncertainty by rounding beyond which a pair does not fix its state.
const wornOut = 1e-7

// rounding returns the rounding error of a property: a few units in the last place of the terms it is summed from.
func (s *solver) rounding(of Property, q *point) float64 {
	const ulp = 4e-16
	R := s.m.whole.R
	if of == Entropy {
		return ulp * (math.Abs(q.s) + math.Abs(s.b.s0)*s.m.whole.M + 10*R)
	}
	return ulp * (math.Abs(q.h) + math.Abs(s.b.h0)*s.m.whole.M + 10*R*q.T)
}

// densities returns a rising grid from lo to hi, geometric in a gas and finer where a fluid is dense, as seen from the
// reducing density.
func densities(reducing, lo, hi float64) []float64 {
	grid := []float64{lo}
	for x := lo; ; {
		if x < 0.05*reducing {
			x *= 2
		} else {
			x += 0.05 * reducing
		}
		if x >= hi*(1-1e-9) {
			return append(grid, hi)
		}
		grid = append(grid, x)
	}
}
