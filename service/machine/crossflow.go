package machine

import "math"

// In crossflow the zones lie side by side: each has a share of the area and the same share of the stream, which enters all
// of them at its inlet temperature.

// beginAside looks at how the refrigerant leaves the segments against the stream's inlet, in crossflow and in coils.
func (w *work) beginAside() {
	w.needed, w.pinch, w.pinchAt, w.reach = math.NaN(), math.NaN(), math.NaN(), 0
	for i := range w.segments {
		w.reach = math.Min(w.reach, w.ahead(i))
	}
}

// dryShares adds up the shares of all zones at the conductance ua, without condensation.
func (w *work) dryShares(ua float64) (area float64) {
	for i := range w.segments {
		area += w.crossShare(i, ua)
	}
	return area
}

// pinchAside finds the smallest difference between the streams at the conductance ua: where the refrigerant leaves a segment,
// against the stream's inlet, and in two-phase segments against what leaves there.
func (w *work) pinchAside(ua float64) {
	w.pinch, w.pinchAt = math.Inf(1), 0
	for i := range w.segments {
		s := &w.segments[i]
		w.note(w.ahead(i), s.to)
		if s.zone == Condensing || s.zone == Evaporating {
			change := w.duty * (s.to - s.from) / (w.crossShare(i, ua) * w.stream.capacity)
			w.note(w.stream.sign*(s.T2-w.stream.inT)-change, s.to)
		}
	}
}

// crossMismatch is the mismatch of an exchanger in crossflow.
func (w *work) crossMismatch(ua float64) float64 {
	if w.reach < 0 {
		return w.reach/crossReach - 1
	}
	return 1/w.dryShares(ua) - 1
}

// ahead returns by how much the refrigerant, where it leaves a segment, is on its proper side of the stream's inlet.
func (w *work) ahead(i int) float64 {
	if i == len(w.segments)-1 {
		return w.gap
	}
	return w.stream.sign * (w.segments[i].T2 - w.stream.inT)
}

// crossShare returns the share of area and stream that a dry segment takes in crossflow at the conductance ua of the whole.
func (w *work) crossShare(i int, ua float64) float64 {
	s := &w.segments[i]
	C := w.stream.capacity
	heat := w.duty * (s.to - s.from)
	most := math.Abs(s.T1 - w.stream.inT)
	if glide := math.Abs(s.T1 - s.T2); glide > noGlide {
		own := heat / glide       // W/K, capacity flow of the refrigerant
		left := w.ahead(i) / most // share of the largest difference that the refrigerant leaves unused
		miss := func(share float64) float64 {
			other := share * C
			least, largest := math.Min(own, other), math.Max(own, other)
			rest := shortfall(w.arrangement, ua*s.ratio*share/least, least/largest, other >= own)
			if other >= own { // both small where the refrigerant comes close to the stream
				return math.Log(left / rest)
			}
			return math.Log((1 - rest) * least * most / heat)
		}
		low, high := 0.0, 1.0
		for miss(high) < 0 {
			if low, high = high, 4*high; high > mostShare {
				return math.Inf(1)
			}
		}
		share, _ := bracketed(low, high, func(x float64) (float64, error) {
			if x == 0 {
				return -1, nil
			}
			return miss(x), nil
		})
		return share
	}
	return heat / (-math.Expm1(-ua*s.ratio/C) * C * most)
}

// mostShare bounds the search for a share of area; an exchanger that is so much too small has no point anyway.
const mostShare = 1e6

// neededAside returns the conductance at which the zones' shares add up to the whole.
func (w *work) neededAside(shares func(ua float64) float64) float64 {
	if !w.stream.known || w.reach < 0 {
		return math.NaN()
	}
	low, high := 0.0, w.duty // W/K; one kelvin
	for range 60 {
		if shares(high) <= 1 {
			ua, _ := bracketed(low, high, func(ua float64) (float64, error) {
				if ua == 0 {
					return -1, nil
				}
				return 1/shares(ua) - 1, nil
			})
			return ua
		}
		low, high = high, 4*high
	}
	return math.Inf(1)
}
