package blend

import (
	"math"
	"slices"
)

// quality returns the states of quality q at a given temperature or pressure. Between the critical point and the highest
// temperature or pressure of the envelope there are two or none.
func (s *solver) quality(fixed Property, value, q float64) ([]result, error) {
	if err := s.checkQuality(q); err != nil {
		return nil, err
	}
	bottom, top := s.d.min[dense].T, s.d.topT.T
	if fixed == Pressure {
		bottom, top = s.d.min[light].p, s.d.topP.p
	}
	if !(bottom <= value && value <= top) {
		return nil, s.outOfRange(fixed, value, bottom, top, LimitEnvelope)
	}
	given, wanted := constraint{fixed, value}, constraint{Quality, q}

	var ends [2]tie
	var edges []saturated
	if fixed == Pressure && value < s.d.min[dense].p {
		// The isobar begins inside the envelope, at the lowest temperature.
		cold, ok := s.coldEnd(value)
		if !ok {
			return nil, s.stuck(given, wanted)
		}
		dew, ok := s.edgeAtP(value, light)
		if !ok {
			return nil, s.stuck(given, wanted)
		}
		if q < cold.quality {
			return nil, s.outOfRange(Quality, q, cold.quality, 1, LimitAttainable)
		}
		ends = [2]tie{cold.tie(), dew.tie(s.m.z)}
		edges = []saturated{dew}
	} else {
		for sd := range ends {
			at := s.edgeAtT
			if fixed == Pressure {
				at = s.edgeAtP
			}
			a, ok := at(value, side(sd))
			if !ok {
				return nil, s.stuck(given, wanted)
			}
			ends[sd] = a.tie(s.m.z)
			edges = append(edges, a)
		}
	}
	if q == 0 || q == 1 {
		var out []result
		for i := range edges {
			if edges[i].bulkIsLiquid() == (q == 0) {
				out = append(out, edges[i].result())
			}
		}
		if len(out) == 0 {
			if fixed == Pressure && q == 0 {
				bottom = s.d.min[dense].p
			}
			return nil, s.outOfRange(fixed, value, bottom, s.lineEnd(fixed, q), LimitEnvelope)
		}
		return out, nil
	}
	if len(edges) < 2 || edges[0].bulkIsLiquid() != edges[1].bulkIsLiquid() {
		o, ok := s.between(ends[0], ends[1], given, wanted)
		if !ok {
			return nil, s.stuck(given, wanted)
		}
		return []result{o.result()}, nil
	}
	return s.retrograde(ends, given, wanted)
}

// lineEnd returns the highest temperature or pressure of the bubble line or the dew line.
func (s *solver) lineEnd(of Property, q float64) float64 {
	top, critical := s.d.topT, s.d.critical.T
	value := top.T
	if of == Pressure {
		top, critical = s.d.topP, s.d.critical.p
		value = top.p
	}
	if (top.S < 0) == (q == 0) {
		return value
	}
	return critical
}

// retrograde returns the states of a given quality between two edges of the same kind: from one to the other quality turns
// back, so that there are two or none.
func (s *solver) retrograde(ends [2]tie, given, wanted constraint) ([]result, error) {
	c := newChord(s.m, ends[0], ends[1])
	free := Pressure
	if given.of == Pressure {
		free = Temperature
	}
	at := func(r float64) (outcome, bool) {
		return s.between(ends[0], ends[1], given, constraint{free, c.look(r, free)})
	}
	var out []result
	var grid []float64
	for i := range 13 {
		grid = append(grid, 0.001+0.998*float64(i)/12)
	}
	eachRoot(grid, func(r float64) (float64, float64) {
		o, ok := at(r)
		if !ok {
			return math.NaN(), math.NaN()
		}
		return o.quality - wanted.value, math.NaN()
	}, func(r float64) {
		o, ok := at(r)
		if !ok {
			return
		}
		u := o.unknowns()
		if s.solveSplit(u, given, wanted) && s.belongs(c) {
			o = s.outcome()
			out = append(out, o.result())
		}
	})
	if len(out) == 0 {
		return nil, &NoSolutionError{Refrigerant: s.m.designation, Pair: [2]Given{{Property: given.of, Value: given.value}, {Property: Quality, Value: wanted.value}}}
	}
	return out, nil
}

// qualityLine returns every state of quality q with a given volume, enthalpy, entropy or internal energy. Along a line of
// constant quality none of them need be monotonic: the enthalpy of saturated vapour, for one, has a maximum. Inside the
// envelope it looks up to the critical temperature.
func (s *solver) qualityLine(q float64, of Property, value float64) ([]result, error) {
	if err := s.checkQuality(q); err != nil {
		return nil, err
	}
	if of == Density {
		if err := s.checkVolume(value); err != nil {
			return nil, err
		}
	} else if err := s.checkFinite(of, value); err != nil {
		return nil, err
	}
	grid, at := s.spreads(q), func(S float64) (result, bool) {
		a, ok := s.saturatedAtSpread(S)
		r := a.result()
		r.quality = q // at the critical point both phases are one
		return r, ok
	}
	if q != 0 && q != 1 {
		grid, at = s.temperatures(), func(T float64) (result, bool) {
			all, err := s.quality(Temperature, T, q)
			if err != nil {
				return result{}, false
			}
			return all[0], true
		}
	}
	scale := func(v float64) float64 { return v }
	if of == Density {
		scale = math.Log // volumes of vapour span many decades
	}
	lowest, highest := math.Inf(1), math.Inf(-1)
	var out []result
	eachRoot(grid, func(x float64) (float64, float64) {
		r, ok := at(x)
		if !ok {
			return math.NaN(), math.NaN()
		}
		have := r.value(of)
		lowest, highest = math.Min(lowest, have), math.Max(highest, have)
		return scale(have) - scale(value), math.NaN()
	}, func(x float64) {
		r, ok := at(x)
		size := s.m.whole.R * r.T
		switch of {
		case Entropy:
			size = s.m.whole.R
		case Density:
			size = value
		}
		if ok && math.Abs(r.value(of)-value) < jump*size {
			out = append(out, r)
		}
	})
	if len(out) == 0 {
		return nil, s.unattainable(of, value, lowest, highest)
	}
	return out, nil
}

// spreads returns a rising grid of spreads along the bubble or the dew line.
func (s *solver) spreads(q float64) []float64 {
	lo, hi := s.d.min[dense].S, 0.0
	if q == 1 {
		lo, hi = 0, s.d.min[light].S
	}
	grid := []float64{lo, hi}
	for i := range s.d.nodes {
		if S := s.d.nodes[i].S; lo < S && S < hi {
			grid = append(grid, S)
		}
	}
	slices.Sort(grid)
	return grid
}

// temperatures returns a rising grid from the lowest to almost the critical temperature, even in sqrt(1-T/Tc).
func (s *solver) temperatures() []float64 {
	const n = 48
	Tc, Tmin := s.d.critical.T, s.d.min[dense].T
	root := math.Sqrt(1 - Tmin/Tc)
	grid := []float64{Tmin}
	for i := n - 1; i > 0; i-- {
		r := root * float64(i) / n
		grid = append(grid, Tc*(1-r*r))
	}
	for r := root / n / 2; r > 3e-3; r /= 2 { // closer to the critical point phases are hard to tell apart
		grid = append(grid, Tc*(1-r*r))
	}
	return grid
}
