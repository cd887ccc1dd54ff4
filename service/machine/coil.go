package machine

import (
	"math"

	"dewmark/props/secondary"
)

// A coil cools moist air. Its evaporating zone is computed as fully dry and as fully wet, and the one that passes more heat
// counts; the wet one is driven by the enthalpy of saturated air at the refrigerant's temperature (Braun, Klein and
// Mitchell, ASHRAE Trans. 95 (1989)). The superheating zone is dry: its surface is hardly below the dew point.

// airState is moist air on its way through a coil.
type airState struct{ T, W, h float64 } // K, kg/kg, J/kg

// strip is a part of a coil with its share of the air.
type strip struct {
	pressure float64 // Pa
	air      airState
	flow     float64 // kg/s of dry air
	T1, T2   float64 // K, of the refrigerant
	heat     float64 // W
	share    float64 // of the thermal resistance on the side of the air
	settled  bool    // the streams do not cross, whatever rounding says
}

func (s *strip) capacity() float64 { return s.flow * moistCapacity(s.air.W) }

// moistCapacity returns the heat capacity of moist air in J/K per kg of dry air.
func moistCapacity(W float64) float64 { return secondary.Air{W: W}.HeatCapacity() }

// middle is the refrigerant's mean temperature, which drives condensation.
func (s *strip) middle() float64 { return (s.T1 + s.T2) / 2 }

// dry returns the conductance that the heat takes without condensation, or infinity. The gap is the difference at the air's
// inlet in counterflow.
func (s *strip) dry(a Arrangement, gap float64) float64 {
	left := s.air.T - s.heat/s.capacity() // temperature of the air behind the strip
	d1, d2 := left-s.T1, gap
	if a == ParallelFlow {
		d1, d2 = s.air.T-s.T1, left-s.T2
	}
	if s.settled {
		d1, d2 = math.Max(d1, leastDifference), math.Max(d2, leastDifference)
	}
	if m := logMean(d1, d2); m > 0 {
		return s.heat / m
	}
	return math.Inf(1)
}

// wet returns the conductance, as of a dry coil, that the heat takes on a wet surface, and the mean temperature of that
// surface. It is infinite where the air would leave with less than the enthalpy of saturation.
func (s *strip) wet() (ua, surface float64) {
	T := s.middle()
	hT, slope, _ := secondary.Saturation(s.pressure, T)
	in := s.air.h - hT
	out := in - s.heat/s.flow
	if s.settled {
		out = math.Max(out, leastDifference*slope)
	}
	if !(out > 0) {
		return math.Inf(1), T
	}
	units := math.Log(in / out)        // NTU*
	mean := s.heat / s.flow / units    // J/kg, logarithmic mean of the enthalpy differences
	x := s.surface(hT, slope, T, mean) // K above the refrigerant
	inner := slope
	if x > 0 {
		h, _, _ := secondary.Saturation(s.pressure, T+x)
		inner = (h - hT) / x
	}
	return units * s.flow * (moistCapacity(s.air.W)*s.share + inner*(1-s.share)), T + x
}

// surface returns by how much the wet surface is warmer than the refrigerant: the enthalpy difference divides between the
// resistance of the air and that of the inside.
func (s *strip) surface(hT, slope, T, mean float64) float64 {
	cp := moistCapacity(s.air.W)
	target := (1 - s.share) * mean
	most := saturatedAt(s.pressure, s.air.h) - T // there the air would give off nothing; beyond, water might boil
	x := math.Min(target/(cp*s.share+slope*(1-s.share)), most)
	for range surfaceSteps {
		h, dh, _ := secondary.Saturation(s.pressure, T+x)
		step := (cp*s.share*x + (1-s.share)*(h-hT) - target) / (cp*s.share + (1-s.share)*dh)
		x = math.Min(x-step, most)
		if math.Abs(step) < 1e-12*T {
			break
		}
	}
	return math.Max(0, x)
}

// surfaceSteps is more than Newton's method needs: the function is convex and starts above its zero.
const surfaceSteps = 20

// wetHeat returns the heat that a wet surface passes at conductance ua.
func (s *strip) wetHeat(ua float64) float64 {
	T := s.middle()
	hT, slope, _ := secondary.Saturation(s.pressure, T)
	in := s.air.h - hT
	if !(in > 0) {
		return 0
	}
	cp := moistCapacity(s.air.W)
	passed := func(inner float64) float64 {
		return -math.Expm1(-ua/s.flow/(cp*s.share+inner*(1-s.share))) * s.flow * in
	}
	most := saturatedAt(s.pressure, s.air.h) - T
	x, _ := bracketed(0, most, func(x float64) (float64, error) {
		inner := slope
		if x > 0 {
			h, _, _ := secondary.Saturation(s.pressure, T+x)
			inner = (h - hT) / x
		}
		return x - (1-s.share)*passed(inner)/ua, nil
	})
	if x > 0 {
		h, _, _ := secondary.Saturation(s.pressure, T+x)
		slope = (h - hT) / x
	}
	return passed(slope)
}

// outcome is what a strip leaves behind.
type outcome struct {
	air       airState
	wet       bool
	surface   float64 // K, mean of a wet surface
	apparatus float64 // K, apparatus dew point; NaN when dry
	shed      float64 // kg/s of water or frost
}

// leave returns the air behind a strip of conductance ua. The air that leaves a wet strip mixes air that bypassed the
// surface and saturated air at the apparatus dew point.
func (s *strip) leave(ua float64, wet bool, surface float64) outcome {
	in := s.air
	dry := outcome{air: airState{in.T - s.heat/s.capacity(), in.W, in.h - s.heat/s.flow}, surface: math.NaN(), apparatus: math.NaN()}
	if !wet {
		return dry
	}
	contact := -math.Expm1(-ua / s.share / s.capacity()) // 1 - bypass factor
	water := secondary.CondensateEnthalpy(surface)
	apparatus, _ := bracketed(coldest, hottest, func(T float64) (float64, error) {
		h, W := bounded(s.pressure, T)
		return contact*(in.h-h-(in.W-W)*water) - s.heat/s.flow, nil
	})
	_, _, WA := secondary.Saturation(s.pressure, apparatus)
	if !(WA < in.W) { // the surface is below the dew point only in name
		return dry
	}
	out := outcome{wet: true, surface: surface, apparatus: apparatus}
	out.air.W = in.W - contact*(in.W-WA)
	out.air.h = in.h - s.heat/s.flow - (in.W-out.air.W)*water
	out.air.T = dryBulb(out.air.h, out.air.W)
	if saturatedAt(s.pressure, out.air.h) > out.air.T {
		out.air = s.clear(surface)
	}
	out.shed = s.flow * (in.W - out.air.W)
	return out
}

// Saturated air that passes a coil is between them, K: coldest is below what any coil cools air to, and at hottest water
// boils at every pressure that moist air may have.
const (
	coldest = 175.0
	hottest = 455.0
)

// bounded returns the enthalpy and the humidity ratio of saturated air, or more than air has where water boils, for
// searches that start beyond.
func bounded(p, T float64) (h, W float64) {
	h, _, W = secondary.Saturation(p, T)
	return math.Min(h, 1e9), math.Min(W, 1e3)
}

// clear returns the air behind a strip that would leave as fog, after that has rained out. Air that a dry zone before it has
// cooled below its dew point becomes warmer by that.
func (s *strip) clear(surface float64) airState {
	in, water := s.air, secondary.CondensateEnthalpy(surface)
	T, _ := bracketed(coldest, hottest, func(T float64) (float64, error) {
		h, W := bounded(s.pressure, T)
		return h + (in.W-W)*water - (in.h - s.heat/s.flow), nil
	})
	h, _, W := secondary.Saturation(s.pressure, T)
	return airState{T, W, h}
}

// dryBulb returns the temperature of moist air with enthalpy h.
func dryBulb(h, W float64) float64 {
	a := secondary.Air{T: zeroCelsius, W: W}
	return a.Heated(h - a.Enthalpy()).T
}

// saturatedAt returns the temperature at which saturated air has enthalpy h.
func saturatedAt(p, h float64) float64 {
	T, _ := bracketed(coldest, hottest, func(T float64) (float64, error) {
		hT, _ := bounded(p, T)
		return hT - h, nil
	})
	return T
}

// strip returns the part of the coil that a segment is, with a share of the air that enters in a state.
func (w *work) strip(s *segment, air airState, flow, share float64) strip {
	return strip{
		pressure: w.stream.air.P, air: air, flow: flow, T1: s.T1, T2: s.T2, heat: w.duty * (s.to - s.from), share: share,
	}
}

func (w *work) entering() airState {
	return airState{w.stream.inT, w.stream.air.W, w.stream.inH}
}

// canBeWet reports whether water or frost can form in a segment.
func (w *work) canBeWet(s *segment) bool {
	if s.zone != Evaporating || w.stream.air.W == 0 {
		return false
	}
	_, _, W := secondary.Saturation(w.stream.air.P, (s.T1+s.T2)/2)
	return W < w.stream.air.W
}

// coilMismatch is the mismatch of a coil.
func (w *work) coilMismatch(ua, share float64) float64 {
	if w.reach < 0 {
		return w.reach/crossReach - 1
	}
	if !w.series() {
		return 1/w.coilShares(ua, share) - 1
	}
	needed, short := w.coilSeries(share, nil)
	w.needed = needed
	return w.surplus(ua, needed, short)
}

// coilShares adds up the shares of a coil's zones that lie side by side.
func (w *work) coilShares(ua, share float64) float64 {
	var area float64
	for i := range w.segments {
		area += w.coilShare(i, ua, share)
	}
	return area
}

// coilShare returns the share of area and air that a segment takes. A wet strip's heat grows with both alike, so the share is
// its heat over that of the whole coil.
func (w *work) coilShare(i int, ua, share float64) float64 {
	s := &w.segments[i]
	dry := w.crossShare(i, ua)
	if !w.canBeWet(s) {
		return dry
	}
	k := w.strip(s, w.entering(), w.stream.flow, share)
	return math.Min(dry, k.heat/k.wetHeat(ua*s.ratio))
}

// visit hears of each strip with its conductance, the share of the air, and the air behind it.
type visit func(s *segment, ua, share float64, k *strip, out outcome)

// coilSeries adds up what the zones take that the air passes one after another. Where the air cannot give the heat it
// returns infinity and by how many kelvins it falls short, negative.
func (w *work) coilSeries(share float64, tell visit) (needed, short float64) {
	air := w.entering()
	n := len(w.segments)
	for j := range n {
		i := j
		if w.arrangement == Counterflow {
			i = n - 1 - j
		}
		s := &w.segments[i]
		k := w.strip(s, air, w.stream.flow, share)
		k.settled = tell != nil
		gap := air.T - s.T2
		if i == n-1 && w.arrangement == Counterflow {
			gap = w.gap
		}
		ua, wet, surface := k.dry(w.arrangement, gap), false, math.NaN()
		left := air.T - k.heat/k.capacity() - k.coldEnd(w.arrangement)
		if w.canBeWet(s) {
			if u, T := k.wet(); u < ua {
				ua, wet, surface = u, true, T
			}
			h, slope, _ := secondary.Saturation(k.pressure, k.middle())
			left = math.Max(left, (air.h-k.heat/k.flow-h)/slope)
		}
		if math.IsInf(ua, 1) || math.IsNaN(ua) {
			return math.Inf(1), math.Min(0, left)
		}
		needed += ua / s.ratio
		out := k.leave(ua, wet, surface)
		if tell != nil {
			tell(s, ua, 1, &k, out)
		}
		air = out.air
	}
	return needed, 0
}

// coldEnd returns the refrigerant's temperature where dry air leaves the strip.
func (s *strip) coldEnd(a Arrangement) float64 {
	if a == ParallelFlow {
		return s.T2
	}
	return s.T1
}
