package machine

import "math"

const (
	// settledMismatch ends a search: closer, the rounding of the property models shows.
	settledMismatch = 1e-11
	// acceptedMismatch is what a search may end with when it gets no closer.
	acceptedMismatch = 1e-9
	newtonSteps      = 20
	newtonCuts       = 6
	// nearBound is how much of the way to a bound one step may go, apart from the end of a bent axis.
	nearBound = 0.9
)

// newton looks for the levels from a start, by Newton's method with slopes from differences that Broyden's formula keeps up
// to date. It reports whether it arrived; where it did not, the nested search takes over.
func (t *trial) newton(start unknowns, b *axes) (settled, bool) {
	for i := range start {
		start[i] = math.Max(b[i].min, math.Min(start[i], b[i].max))
	}
	now, err := t.tryAt(b, start)
	if err != nil {
		return now, false
	}
	var slopes [2]unknowns
	stale, exact := true, false
	for range newtonSteps {
		if now.worst() <= settledMismatch {
			return now, true
		}
		if stale {
			if slopes, err = t.slopes(&now, b); err != nil {
				return now, false
			}
			stale, exact = false, true
		}
		next, ok := t.advance(&now, newtonStep(slopes, &now), b)
		switch {
		case ok:
			slopes = broyden(slopes, &now, &next)
			now, exact = next, false
		case now.worst() <= acceptedMismatch:
			return now, true
		case exact:
			return now, false
		default:
			stale = true
		}
	}
	return now, now.worst() <= acceptedMismatch
}

// slopes differences the mismatches away from where streams cross.
func (t *trial) slopes(now *settled, b *axes) (J [2]unknowns, err error) {
	for j := range b {
		y := now.y
		y[j] += differenceStep
		beside, err := t.tryAt(b, y)
		if err != nil {
			return J, err
		}
		for i := range J {
			J[i][j] = (beside.mismatch[i] - now.mismatch[i]) / differenceStep
		}
	}
	return J, nil
}

// newtonStep solves J dy = -f. A capped mismatch leaves its level where it is.
func newtonStep(J [2]unknowns, s *settled) unknowns {
	f := s.mismatch
	for i, capped := range s.capped {
		if capped {
			J[i], f[i] = unknowns{}, 0
			J[i][i] = 1
		}
	}
	det := J[0][0]*J[1][1] - J[0][1]*J[1][0]
	return unknowns{
		(J[0][1]*f[1] - J[1][1]*f[0]) / det,
		(J[1][0]*f[0] - J[0][0]*f[1]) / det,
	}
}

// advance goes along a step, shortened until the mismatch falls.
func (t *trial) advance(now *settled, dy unknowns, b *axes) (settled, bool) {
	part := 1.0
	for i, d := range dy {
		if math.IsNaN(d) || math.IsInf(d, 0) {
			return *now, false
		}
		longest := longestStep
		if room := b[i].max - now.y[i]; d > 0 {
			longest = math.Min(longest, nearBound*room)
		} else if !b[i].bent {
			longest = math.Min(longest, nearBound*(now.y[i]-b[i].min))
		}
		part = math.Min(part, longest/math.Max(math.Abs(d), 1e-300))
	}
	for range newtonCuts {
		y := now.y
		for i := range y {
			y[i] = math.Max(b[i].min, y[i]+part*dy[i])
		}
		if y == now.y {
			return *now, false
		}
		next, err := t.tryAt(b, y)
		if err == nil && next.worst() < now.worst() {
			return next, true
		}
		part /= 3
	}
	return *now, false
}

// broyden corrects slopes by what a step has shown.
func broyden(J [2]unknowns, from, to *settled) [2]unknowns {
	dy := unknowns{to.y[0] - from.y[0], to.y[1] - from.y[1]}
	square := dy[0]*dy[0] + dy[1]*dy[1]
	for i := range J {
		miss := (to.mismatch[i] - from.mismatch[i] - J[i][0]*dy[0] - J[i][1]*dy[1]) / square
		J[i][0] += miss * dy[0]
		J[i][1] += miss * dy[1]
	}
	return J
}
