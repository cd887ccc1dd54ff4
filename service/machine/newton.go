package machine

import "math"

const (
	// settledMismatch ends a search: closer, the rounding of the property models shows.
	settledMismatch = 1e-11
	// acceptedMismatch is what a search may end with when it gets no closer.
	acceptedMismatch = 1e-9
	newtonSteps      = 40
	newtonHalvings   = 6
	differenceStep   = 2e-3 // K, for slopes: large against rounding, small against their change
	longestStep      = 12.0 // K
	// nearBound is how much of the way to a bound one step may go.
	nearBound = 0.9
)

// box holds the bounds of the levels, K.
type box struct{ min, max unknowns }

// newton looks for the levels from a start, by Newton's method with slopes from differences that Broyden's formula keeps
// up to date. It reports whether it arrived; where it did not, the nested search takes over.
func (t *trial) newton(start unknowns, b box) (settled, bool) {
	for i := range start {
		start[i] = math.Max(b.min[i]+differenceStep, math.Min(start[i], b.max[i]-differenceStep))
	}
	now, err := t.at(start)
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
			if slopes, err = t.slopes(&now); err != nil {
				return now, false
			}
			stale, exact = false, true
		}
		next, ok := t.advance(&now, newtonStep(slopes, now.mismatch), b)
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

// slopes differences the mismatches away from where streams cross: evaporation down, condensation up.
func (t *trial) slopes(now *settled) (J [2]unknowns, err error) {
	for j, d := range [2]float64{-differenceStep, differenceStep} {
		x := now.x
		x[j] += d
		side, err := t.at(x)
		if err != nil {
			return J, err
		}
		for i := range J {
			J[i][j] = (side.mismatch[i] - now.mismatch[i]) / d
		}
	}
	return J, nil
}

// newtonStep solves J dx = -f.
func newtonStep(J [2]unknowns, f unknowns) unknowns {
	det := J[0][0]*J[1][1] - J[0][1]*J[1][0]
	return unknowns{
		(J[0][1]*f[1] - J[1][1]*f[0]) / det,
		(J[1][0]*f[0] - J[0][0]*f[1]) / det,
	}
}

// advance goes along a step, shortened until the mismatch falls.
func (t *trial) advance(now *settled, dx unknowns, b box) (settled, bool) {
	part := 1.0
	for i, d := range dx {
		if math.IsNaN(d) || math.IsInf(d, 0) {
			return *now, false
		}
		room := b.max[i] - now.x[i]
		if d < 0 {
			room = now.x[i] - b.min[i]
		}
		part = math.Min(part, math.Min(longestStep, nearBound*room)/math.Max(math.Abs(d), 1e-300))
	}
	for range newtonHalvings {
		x := now.x
		for i := range x {
			x[i] += part * dx[i]
		}
		if x == now.x {
			return *now, false
		}
		next, err := t.at(x)
		if err == nil && next.worst() < now.worst() {
			return next, true
		}
		part /= 3
	}
	return *now, false
}

// broyden corrects slopes by what a step has shown.
func broyden(J [2]unknowns, from, to *settled) [2]unknowns {
	dx := unknowns{to.x[0] - from.x[0], to.x[1] - from.x[1]}
	square := dx[0]*dx[0] + dx[1]*dx[1]
	for i := range J {
		miss := (to.mismatch[i] - from.mismatch[i] - J[i][0]*dx[0] - J[i][1]*dx[1]) / square
		J[i][0] += miss * dx[0]
		J[i][1] += miss * dx[1]
	}
	return J
}
