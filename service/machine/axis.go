package machine

import "math"

// axis is what a search moves on. Mismatches rise along it: an exchanger can do the more, the farther its refrigerant is from
// the stream. Where the refrigerant leaves against a stream of known inlet temperature, the axis is straight in their
// difference d while that is large and logarithmic where it is small, y = ln(exp d - 1): with a large exchanger the difference
// vanishes exponentially.
type axis struct {
	bent     bool
	limit    float64 // K, temperature of the stream's inlet
	sign     float64 // -1 for an evaporator, +1 for a condenser or gas cooler
	min, max float64 // bounds on the axis
}

// leastDifference is where a search stops to look for smaller differences between the refrigerant and the stream at their
// common end, K: a hundredth of a microkelvin more or less is no change of a duty by more than 1e-9.
const leastDifference = 1e-8

// newAxis returns the axis between two temperatures of the refrigerant; limit is NaN for a straight one.
func newAxis(sign, limit, coldest, hottest float64) axis {
	a := axis{bent: !math.IsNaN(limit), limit: limit, sign: sign}
	near, far := coldest, hottest
	if sign < 0 {
		near, far = hottest, coldest
	}
	a.min, a.max = a.at(near), a.at(far)
	return a
}

// gap returns the difference at y between the refrigerant's outlet and the stream's inlet, which the two temperatures cannot
// tell where it is small; NaN for a straight axis.
func (a *axis) gap(y float64) float64 {
	if a.bent {
		return math.Log1p(math.Exp(y))
	}
	return math.NaN()
}

// at returns where a temperature lies.
func (a *axis) at(T float64) float64 {
	if a.bent {
		return math.Log(math.Expm1(math.Max(leastDifference, a.sign*(T-a.limit))))
	}
	return a.sign * T
}

// temperature is the inverse of at.
func (a *axis) temperature(y float64) float64 {
	if a.bent {
		return a.limit + a.sign*a.gap(y)
	}
	return a.sign * y
}

// Steps on an axis, K where it is straight.
const (
	longestStep    = 8.0
	differenceStep = 1e-3 // for slopes: large against rounding, small against the change of slopes
)

// atEnd reports whether y lies at the end of a bent axis.
func (a *axis) atEnd(y float64) bool { return a.bent && y <= a.min }

// axes are those of evaporator and condenser.
type axes [2]axis

func (b *axes) temperatures(y unknowns) unknowns {
	return unknowns{b[low].temperature(y[low]), b[high].temperature(y[high])}
}

// tryAt puts the machine together at a point of the axes.
func (t *trial) tryAt(b *axes, y unknowns) (settled, error) {
	t.gaps = [2]float64{b[low].gap(y[low]), b[high].gap(y[high])}
	s, err := t.at(b.temperatures(y))
	s.y = y
	for i := range b {
		s.capped[i] = b[i].atEnd(y[i]) && s.mismatch[i] > 0
	}
	return s, err
}
