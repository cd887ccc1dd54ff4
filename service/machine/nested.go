package machine

import (
	"errors"
	"math"
)

// wall is where a search for a level ended without an answer.
type wall struct {
	above bool    // at the upper end of where the machine can be put together
	x     float64 // the last point of the axis that could be tried
	miss  float64 // the function there; NaN when no level could be tried
	cause error   // what stood behind x; nil at a bound
}

func (w *wall) Error() string { return "no level makes compressor and exchanger agree" }

func (w *wall) Unwrap() error { return w.cause }

const (
	firstStride = 0.5  // on an axis
	wallWidth   = 1e-7 // on an axis, how close a search goes to where the machine can no longer be put together
	scanPoints  = 24   // points of an axis that are tried for one to begin with
)

// hunt returns where a rising function passes zero, from a start within bounds, and the other end of the last bracket. Where f
// fails, it goes as close as it can; without a change of sign it returns a [*wall].
func hunt(start, low, high float64, f func(float64) (float64, error)) (root, other float64, err error) {
	x, fx, err := begin(math.Max(low, math.Min(start, high)), low, high, f)
	if err != nil || fx == 0 {
		return x, x, err
	}
	end, stride := high, firstStride
	if fx > 0 {
		end, stride = low, -firstStride
	}
	var cause error
	barrier := end // what is known not to work, or the bound
	for x != end {
		next := x + stride
		if (next-barrier)*stride >= 0 {
			if next = end; cause != nil {
				next = (x + barrier) / 2
			}
		}
		fn, err := f(next)
		switch {
		case interrupted(err):
			return next, next, err
		case err != nil:
			cause, barrier = err, next
		case fn == 0 || (fn > 0) != (fx > 0):
			if root, other, err = narrowed(x, fx, next, fn, settledMismatch, f); err != nil {
				err = orWall(err, root)
			}
			return root, other, err
		default:
			x, fx = next, fn
			stride *= 2
		}
		if cause != nil && math.Abs(barrier-x) < wallWidth {
			break
		}
	}
	return x, x, &wall{stride > 0, x, fx, cause}
}

// begin returns a point where f can be evaluated: the start, or the nearest of some others.
func begin(start, low, high float64, f func(float64) (float64, error)) (x, fx float64, err error) {
	if fx, err = f(start); err == nil || interrupted(err) {
		return start, fx, err
	}
	for i := range 2 * scanPoints {
		step := (high - low) / scanPoints * float64(i/2+1)
		if i%2 == 1 {
			step = -step
		}
		if x = start + step; x <= low || x >= high {
			continue
		}
		if fx, e := f(x); e == nil || interrupted(e) {
			return x, fx, e
		}
	}
	return start, 0, orWall(err, start)
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

// nested looks for the level of the condenser at each level of the evaporator, and for that of the evaporator at which it
// agrees too. Both mismatches are monotone, so that it finds the levels wherever they exist, if slowly.
func (t *trial) nested(start unknowns, b *axes) (settled, error) {
	from := start[high]
	var beside unknowns // the other ends of the last brackets
	inner := func(y float64) (settled, error) {
		z, other, err := hunt(from, b[high].min, b[high].max, func(z float64) (float64, error) {
			s, err := t.tryAt(b, unknowns{y, z})
			return s.mismatch[high], err
		})
		if z, err = b[high].end(z, err); err != nil {
			return settled{}, err
		}
		from, beside[high] = z, other
		return t.tryAt(b, unknowns{y, z})
	}
	y, other, err := hunt(start[low], b[low].min, b[low].max, func(y float64) (float64, error) {
		s, err := inner(y)
		return s.mismatch[low], err
	})
	if y, err = b[low].end(y, err); err != nil {
		return settled{}, err
	}
	s, err := inner(y)
	if err != nil || s.worst() <= acceptedMismatch {
		return s, err
	}
	beside[low] = other
	return t.pin(s, b, beside)
}

// pin looks at mismatches that jump between neighbouring levels: where streams come as close as rounding, the smallest change
// of a level closes or opens the exchanger. What the duty changes across the jump is what is left uncertain of it.
func (t *trial) pin(s settled, b *axes, beside unknowns) (settled, error) {
	for i := range s.mismatch {
		if s.capped[i] || math.Abs(s.mismatch[i]) <= acceptedMismatch {
			continue
		}
		y := s.y
		y[i] = beside[i]
		across, err := t.tryAt(b, y)
		if err != nil {
			return s, err
		}
		s.uncertain = math.Max(s.uncertain, math.Abs(across.evaporator.duty/s.evaporator.duty-1))
		s.uncertain = math.Max(s.uncertain, math.Abs(across.condenser.duty/s.condenser.duty-1))
		if s.pinned[i] = across.mismatch[i]*s.mismatch[i] < 0; !s.pinned[i] || s.uncertain > acceptedMismatch {
			return s, &wall{x: y[low], miss: s.worst()}
		}
	}
	return s, nil
}

// end accepts the wall at the end of a bent axis: the exchanger could do more, but the refrigerant cannot leave any closer to
// the stream.
func (a *axis) end(y float64, err error) (float64, error) {
	if w, ok := err.(*wall); ok && w.cause == nil && !w.above && w.miss > 0 && a.atEnd(y) { //nolint:errorlint // the outermost wall is meant
		return y, nil
	}
	return y, err
}
