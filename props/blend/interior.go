package blend

import "math"

// between solves the split that holds both constraints, between two tie lines of the temperature or pressure that the
// first of them gives. It reports whether there is one.
func (s *solver) between(a, b tie, fixed, other constraint) (outcome, bool) {
	c := newChord(s.m, a, b)
	u := make(split, len(s.m.z)+3)
	c.aim(other.of, other.value, u)
	if s.solveSplit(u, fixed, other) && s.belongs(c) {
		return s.outcome(), true
	}
	return s.creep(c, fixed, other)
}

// belongs reports whether the split that was solved last lies between the ends of the chord, and not on a false
// equilibrium elsewhere.
func (s *solver) belongs(c *chord) bool {
	const slack = 1e-9
	T, p := s.inc.T, s.inc.p
	lnL, lnV := -math.Log(s.bulk.rho), -math.Log(s.inc.rho)
	inside := func(x, a, b, more float64) bool {
		return x >= math.Min(a, b)-more && x <= math.Max(a, b)+more
	}
	if !(inside(T, c.a.T, c.b.T, slack*T) && inside(p, c.a.p, c.b.p, slack*p)) {
		return false
	}
	// The volumes of the phases need not be monotonic along the chord, but stay near its ends.
	return inside(lnL, math.Log(c.a.vL), math.Log(c.b.vL), 0.3) && inside(lnV, math.Log(c.a.vV), math.Log(c.b.vV), 0.3)
}

// creep approaches the split in short steps: each solution is the start for the next.
func (s *solver) creep(c *chord, fixed, other constraint) (outcome, bool) {
	if o, ok := s.creepQuality(c, fixed, other); ok {
		return o, true
	}
	return s.creepAlong(c, fixed, other)
}

// creepQuality starts at the end of the chord where the phases differ more, which must be an edge of the envelope, and
// raises or lowers the quality from there until the constraint holds.
func (s *solver) creepQuality(c *chord, fixed, other constraint) (outcome, bool) {
	n := len(s.m.z)
	end := &c.a
	if math.Abs(math.Log(c.a.vV/c.a.vL)) < math.Abs(math.Log(c.b.vV/c.b.vL)) {
		end = &c.b
	}
	// On an edge the liquid or the vapour is the blend itself: sum z K = 1 or sum z/K = 1.
	var bubble, dew float64
	for i, z := range s.m.z {
		k := math.Exp(end.lnK[i])
		bubble, dew = bubble+z*k, dew+z/k
	}
	const off = 1e-3 // from the edge, where the equations are singular
	q, step := off, 0.05
	if math.Abs(dew-1) < math.Abs(bubble-1) {
		q, step = 1-off, -step
	}
	u, try := make(split, n+3), make(split, n+3)
	logit := func(q float64) float64 { return math.Log(q / (1 - q)) }
	for i, k := range end.lnK {
		u[i] = k + logit(q)
	}
	u[n], u[n+1], u[n+2] = -math.Log(end.vL), -math.Log(end.vV), math.Log(end.T)
	if !s.solveSplit(u, fixed, constraint{Quality, q}) {
		return outcome{}, false
	}
	value := func() float64 {
		o := s.outcome()
		r := o.result()
		if other.of == Quality {
			return r.quality
		}
		return r.value(other.of)
	}
	before := value() - other.value
	for off/2 < q && q < 1-off/2 && math.Abs(step) > 1e-4 {
		next := min(max(q+step, off/2), 1-off/2)
		copy(try, u)
		for i := range n {
			try[i] += logit(next) - logit(q)
		}
		if !s.solveSplit(try, fixed, constraint{Quality, next}) || math.Abs(s.inc.T/end.T-1) > 0.5 {
			step /= 2
			continue
		}
		now := value() - other.value
		if (now < 0) != (before < 0) {
			// The answer lies between; the better start is the nearer one.
			near := try
			if math.Abs(before) < math.Abs(now) {
				near = u
			}
			final := append(split(nil), near...)
			if s.solveSplit(final, fixed, other) && s.belongs(c) {
				return s.outcome(), true
			}
			step /= 2
			continue
		}
		copy(u, try)
		q, before = next, now
	}
	return outcome{}, false
}

// creepAlong approaches the split along the chord in steps of the property itself.
func (s *solver) creepAlong(c *chord, fixed, other constraint) (outcome, bool) {
	n := len(s.m.z)
	u, try := make(split, n+3), make(split, n+3)
	first := 0.02
	if math.Abs(math.Log(c.a.vV/c.a.vL)) < math.Abs(math.Log(c.b.vV/c.b.vL)) {
		first = 1 - first
	}
	from := c.look(first, other.of)
	c.write(first, u)
	if !s.solveSplit(u, fixed, constraint{other.of, from}) {
		return outcome{}, false
	}
	at, step := 0.0, 0.1
	for at < 1 {
		next := math.Min(1, at+step)
		copy(try, u)
		if s.solveSplit(try, fixed, constraint{other.of, from + next*(other.value-from)}) && s.belongs(c) {
			copy(u, try)
			at = next
			step *= 1.5
			continue
		}
		if step /= 3; step < 1e-4 {
			return outcome{}, false
		}
	}
	return s.outcome(), true
}

// edgeAtT returns the point of a side of the envelope at T.
func (s *solver) edgeAtT(T float64, sd side) (saturated, bool) {
	if l := s.d.lines[sd]; T <= l.hi.T {
		return l.saturated(T), true
	}
	return s.saturatedAtT(T, sd)
}

// edgeAtP returns the point of a side of the envelope at p.
func (s *solver) edgeAtP(p float64, sd side) (saturated, bool) {
	if l := s.d.lines[sd]; p <= l.hi.p {
		a := l.saturated(l.temperature(math.Log(p)))
		a.p, a.bulk.p = p, p
		return a, true
	}
	return s.saturatedAtP(p, sd)
}

// edgesAtT returns both points of the envelope at T.
func (s *solver) edgesAtT(T float64) (a [2]saturated, ok bool) {
	for sd := range a {
		if a[sd], ok = s.edgeAtT(T, side(sd)); !ok {
			return a, false
		}
	}
	return a, true
}

// coldEnd returns the tie line at the lowest temperature and pressure p, which lies inside the envelope there.
func (s *solver) coldEnd(p float64) (outcome, bool) {
	T := s.d.min[dense].T
	a, ok := s.edgesAtT(T)
	if !ok {
		return outcome{}, false
	}
	return s.between(a[dense].tie(s.m.z), a[light].tie(s.m.z), constraint{Temperature, T}, constraint{Pressure, p})
}
