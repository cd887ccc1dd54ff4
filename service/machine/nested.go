package machine

import (
	"errors"
	"math"
)

// wall is where a search for a level ended without an answer.
type wall struct {
	above bool    // at the upper end of where the machine can be put together
	x     float64 // K, the last level that could be tried
	miss  float64 // the function there; NaN when no level could be tried
	cause error   // what stood behind x; nil at a bound
}

func (w *wall) Error() string { return "no level makes compressor and exchanger agree" }

func (w *wall) Unwrap() error { return w.cause }

const (
	firstStride = 1.0  // K
	wallWidth   = 1e-7 // K, how close a search goes to where the machine can no longer be put together
	scanPoints  = 24   // levels that are tried for one to begin with
)

// hunt returns where a rising function passes zero, from a start within bounds. Where f fails, it goes as close as it can;
// without a change of sign it returns a [*wall].
func hunt(start, low, high float64, f func(float64) (float64, error)) (float64, error) {
	start = math.Max(low, math.Min(start, high))
	at, err := f(start)
	for i := 0; err != nil; i++ {
		if i == 2*scanPoints || interrupted(err) {
			return start, orWall(err, start)
		}
		// Nearest levels first, on both sides.
		step := (high - low) / scanPoints * float64(i/2+1)
		if i%2 == 1 {
			step = -step
		}
		x := start + step
		if x <= low || x >= high {
			continue
		}
		var e error
		if at, e = f(x); e == nil {
			start, err = x, nil
		} else if interrupted(e) {
			return x, e
		}
	}
	if at == 0 {
		return start, nil
	}
	x, fx := start, at
	end, stride := high, firstStride
	if at > 0 {
		end, stride = low, -firstStride
	}
	var cause error
	wallAt := end
	for x != end {
		next := x + stride
		if (next-wallAt)*stride >= 0 { // at or beyond the bound, or what is known not to work
			if next = end; cause != nil {
				next = (x + wallAt) / 2
			}
		}
		fn, err := f(next)
		switch {
		case interrupted(err):
			return next, err
		case err != nil:
			cause, wallAt = err, next
			if math.Abs(wallAt-x) < wallWidth {
				return x, &wall{stride > 0, x, fx, cause}
			}
			continue
		case fn == 0 || (fn > 0) != (fx > 0):
			root, err := narrowed(x, fx, next, fn, settledMismatch, f)
			if err != nil {
				return root, orWall(err, root)
			}
			return root, nil
		}
		x, fx = next, fn
		stride *= 2
		if cause != nil && math.Abs(wallAt-x) < wallWidth {
			return x, &wall{stride > 0, x, fx, cause}
		}
	}
	return x, &wall{stride > 0, x, fx, cause}
}

// orWall keeps what ends a search at once and makes a wall of the rest.
func orWall(err error, x float64) error {
	if interrupted(err) {
		return err
	}
	return &wall{x: x, miss: math.NaN(), cause: err}
}

// interrupted reports whether the caller gave up.
func interrupted(err error) bool {
	_, ok := errors.AsType[*stopped](err)
	return ok
}

// stopped marks the cause of a context that ended.
type stopped struct{ cause error }

func (s *stopped) Error() string { return s.cause.Error() }
func (s *stopped) Unwrap() error { return s.cause }

// nested looks for the condensation at each evaporation, and for the evaporation at which the evaporator agrees too. Both
// mismatches are monotone, so that it finds the levels wherever they exist, if slowly.
func (t *trial) nested(start unknowns, b box) (settled, error) {
	condensation := start[high]
	inner := func(te float64) (settled, error) {
		var last settled
		x, err := hunt(condensation, b.min[high], b.max[high], func(tc float64) (float64, error) {
			var err error
			last, err = t.at(unknowns{te, tc})
			return last.mismatch[high], err
		})
		if err != nil {
			return last, err
		}
		condensation = x
		if last.x[high] != x {
			last, err = t.at(unknowns{te, x})
		}
		return last, err
	}
	// The evaporator's mismatch falls with the evaporation, so the search runs downwards.
	te, err := hunt(-start[low], -b.max[low], -b.min[low], func(negative float64) (float64, error) {
		s, err := inner(-negative)
		return s.mismatch[low], err
	})
	if err != nil {
		if w, ok := err.(*wall); ok { //nolint:errorlint // the outermost wall is meant
			w.x, w.above = -w.x, !w.above
		}
		return settled{}, err
	}
	s, err := inner(-te)
	if err == nil && s.worst() > acceptedMismatch*10 {
		return s, &wall{x: -te, miss: s.worst()}
	}
	return s, err
}
