package machine

import (
	"math"

	"dewmark/service/cycle"
)

// exchange is an exchanger whose description was checked. NaN stands for what was not given.
type exchange struct {
	field       string // path of the exchanger
	gasCooler   bool
	evaporator  bool
	ua          float64 // W/K
	pinch       float64 // K
	approach    float64 // K
	approachOf  ApproachKind
	mean        bool // the approach counts from the mean temperature of evaporation or condensation
	arrangement Arrangement
	slices      int
	always      bool
	superheat   float64 // ratios
	desuperheat float64
	subcooling  float64
	share       float64 // of the thermal resistance on the side of the stream
	reference   float64 // kg/s
	exponent    float64
	fouling     float64 // K/W
	single      bool    // one coefficient for all zones, by default
}

// crossReach is the temperature difference that counts as one whole mismatch where streams cross, K: it gives a search
// a slope back to where they do not.
const crossReach = 5.0

// work is an exchanger with its two streams at a duty.
type work struct {
	*exchange
	segments []segment
	stream   passage
	duty     float64 // W
	// needed is the conductance that the duty takes, W/K; infinite where the streams cross. Crossflow finds it late.
	needed  float64
	pinch   float64 // K; negative where the streams cross
	pinchAt float64 // share of the duty from the refrigerant's liquid end
	reach   float64 // K by which the closest ends of a crossing miss each other, negative
	gap     float64 // K, between the refrigerant's outlet and the stream's inlet
}

// conductance returns the available UA at the stream's flow and the share of its resistance on the stream's side.
func (x *exchange) conductance(p *passage) (ua, share float64) {
	ua, share = x.ua, x.share
	if math.IsNaN(ua) {
		return ua, share
	}
	own, rest := share/ua, (1-share)/ua // K/W
	if !math.IsNaN(x.reference) && p.known {
		flow := p.flow
		if p.liquid == nil {
			flow *= 1 + p.air.W
		}
		own *= math.Pow(x.reference/flow, x.exponent)
	}
	total := own + rest + x.fouling
	return 1 / total, own / total
}

// begin looks at the differences between the streams at the ends of all segments, and adds up what the duty takes in
// counterflow or parallel flow without condensation.
func (w *work) begin() {
	w.pinch, w.pinchAt, w.needed = math.Inf(1), 0, 0
	if !w.stream.known {
		w.pinch, w.pinchAt, w.needed = math.NaN(), math.NaN(), math.NaN()
		return
	}
	for i := range w.segments {
		s := &w.segments[i]
		d1, d2 := w.differences(i)
		w.note(d1, s.from)
		w.note(d2, s.to)
		if m := logMean(d1, d2); m > 0 {
			w.needed += w.duty * (s.to - s.from) / m / s.ratio
		} else {
			w.needed = math.Inf(1)
		}
	}
	w.reach = math.Min(0, w.pinch)
}

// differences returns those at both ends of a segment.
func (w *work) differences(i int) (d1, d2 float64) {
	s := &w.segments[i]
	d1, d2 = w.difference(s.T1, s.from), w.difference(s.T2, s.to)
	if i == len(w.segments)-1 && w.arrangement != ParallelFlow {
		d2 = w.gap
	}
	return d1, d2
}

// difference returns by how much the refrigerant at T, at share q of the duty, is on its proper side of the stream.
func (w *work) difference(T, q float64) float64 {
	share := 1 - q
	if w.arrangement == ParallelFlow {
		share = q
	}
	return w.stream.sign * (T - w.stream.at(share))
}

// note remembers the smallest difference.
func (w *work) note(d, q float64) {
	if d < w.pinch {
		w.pinch, w.pinchAt = d, q
		if !w.evaporator {
			w.pinchAt = 1 - q
		}
	}
}

// series reports whether the stream passes the zones one after another.
func (x *exchange) series() bool {
	return x.arrangement == Counterflow || x.arrangement == ParallelFlow
}

// mismatch compares what the exchanger would pass with the duty, as a share of it: above 0 it could do more, below 0 it falls
// short. It rises with the difference of temperatures between the refrigerant and the stream. For an approach or a pinch it
// is the difference to what was asked for, in K.
func (w *work) mismatch(level levels) float64 {
	switch {
	case !math.IsNaN(w.ua):
		ua, share := w.conductance(&w.stream)
		switch {
		case w.coil():
			return w.coilMismatch(ua, share)
		case !w.series():
			return w.crossMismatch(ua)
		}
		return w.surplus(ua, w.needed, w.reach)
	case !math.IsNaN(w.exchange.pinch):
		if !w.series() {
			if w.pinch = w.reach; w.reach >= 0 {
				w.pinchAside(w.neededAside(w.dryShares))
			}
		}
		return w.pinch - w.exchange.pinch
	}
	return w.approachAt(level, w.approachOf) - w.approach
}

// surplus compares two conductances by the heat that they pass. Condensing and evaporating refrigerant is of even temperature:
// it passes 1 - exp(-UA/C) of what is possible, and where the duty comes close to that, the conductance that it takes grows
// beyond all bounds, but not the heat that is left over. The streams of a gas cooler change alike, so that heat and
// conductance do too.
func (w *work) surplus(ua, needed, reach float64) float64 {
	C := w.stream.capacity
	passes := -math.Expm1(-ua / C)
	switch {
	case w.gasCooler && math.IsInf(needed, 1):
		return reach/crossReach - 1
	case w.gasCooler:
		return ua/needed - 1
	case math.IsInf(needed, 1):
		return passes - 1 + reach/crossReach
	}
	return passes/-math.Expm1(-needed/C) - 1
}

// coil reports whether water can condense on the exchanger.
func (w *work) coil() bool { return w.evaporator && w.stream.liquid == nil }

// levels are the temperatures that an approach counts from.
type levels struct {
	dew, mean float64 // K, of evaporation or condensation
	outlet    float64 // K, of a gas cooler
}

// approachAt returns the approach of a kind.
func (w *work) approachAt(level levels, kind ApproachKind) float64 {
	T := level.dew
	if w.mean {
		T = level.mean
	}
	if w.gasCooler {
		T = level.outlet
	}
	if kind == LeavingApproach {
		return w.stream.sign * (T - w.stream.outT)
	}
	return w.stream.sign * (T - w.stream.inT)
}

// workAt cuts the refrigerant's way and lets the stream pass. The gap between the refrigerant's outlet and the stream's inlet
// is NaN where the temperatures tell it.
func (x *exchange) workAt(fluid cycle.Refrigerant, in, out *cycle.StateAt, s *side, gap float64, buffer []segment) (work, error) {
	p := profile{
		fluid: fluid, in: in.State, out: out.State, slices: x.slices, always: x.always,
		dropping: in.State.P != out.State.P, segments: buffer[:0],
	}
	var err error
	switch {
	case x.gasCooler:
		err = p.gasCooler()
	case x.evaporator:
		err = p.evaporator(x)
	default:
		err = p.condenser(x)
	}
	if err != nil {
		return work{}, err
	}
	duty := math.Abs(in.MassFlow * (out.State.H - in.State.H))
	w := work{exchange: x, segments: p.segments, stream: s.pass(duty), duty: duty, gap: gap}
	if math.IsNaN(gap) {
		w.gap = s.sign * (out.State.T - w.stream.inT)
	}
	if w.coil() || !w.series() {
		w.beginAside()
	} else {
		w.begin()
	}
	return w, nil
}
