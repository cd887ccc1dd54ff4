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

// creep approaches the split in short steps along the chord, from the end where the phases differ more: each solution is
// the start for the next.
func (s *solver) creep(c *chord, fixed, other constraint) (outcome, bool) {
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
	return s.saturatedAtT(s.d, s.iso, T, sd)
}

// edgeAtP returns the point of a side of the envelope at p.
func (s *solver) edgeAtP(p float64, sd side) (saturated, bool) {
	if l := s.d.lines[sd]; p <= l.hi.p {
		a := l.saturated(l.temperature(math.Log(p)))
		a.p, a.bulk.p = p, p
		return a, true
	}
	return s.saturatedAtP(s.d, s.iso, p, sd)
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
