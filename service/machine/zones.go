package machine

import (
	"math"

	"dewmark/props"
	"dewmark/service/cycle"
)

// segment is a part of an exchanger in which the refrigerant's temperature is straight over its heat.
type segment struct {
	zone     ZoneName
	from, to float64 // shares of the duty, from the refrigerant's inlet
	T1, T2   float64 // K, of the refrigerant at these
	ratio    float64 // of the heat transfer coefficient to that of the two-phase zone
}

// noGlide is how close dew and bubble temperature of a pure refrigerant lie, K.
const noGlide = 1e-7

// leastShareOfZone is the share of the duty below which a zone is rounding.
const leastShareOfZone = 1e-12

// profile cuts the refrigerant's way through an exchanger into segments.
type profile struct {
	fluid    cycle.Refrigerant
	in, out  props.State
	slices   int  // of a zone that is not straight
	always   bool // slices were asked for
	dropping bool // the pressure falls on the way
	segments []segment
}

// cut adds the segments of one zone, from enthalpy h1 to h2. The temperatures at its ends are known.
func (p *profile) cut(zone ZoneName, h1, h2, T1, T2, ratio float64, straight bool) error {
	from, to := p.share(h1), p.share(h2)
	if !(to-from > leastShareOfZone) {
		return nil
	}
	n := p.slices
	if straight && !p.always && !p.dropping || math.Abs(T1-T2) <= noGlide && !p.dropping {
		n = 1
	}
	last, T := from, T1
	for i := 1; i <= n; i++ {
		q, Tq := to, T2
		if i < n {
			q = from + (to-from)*float64(i)/float64(n)
			s, err := p.fluid.PressureEnthalpy(p.pressure(q), p.in.H+q*(p.out.H-p.in.H))
			if err != nil {
				return err
			}
			Tq = s.T
		}
		p.segments = append(p.segments, segment{zone, last, q, T, Tq, ratio})
		last, T = q, Tq
	}
	return nil
}

// share returns how much of the duty is done at enthalpy h.
func (p *profile) share(h float64) float64 {
	return math.Max(0, math.Min(1, (h-p.in.H)/(p.out.H-p.in.H)))
}

// pressure falls evenly with the heat.
func (p *profile) pressure(q float64) float64 { return p.in.P + q*(p.out.P-p.in.P) }

// edgeRounds is how often the pressure at a zone's edge is improved: it changes little over the way, so that each round gains
// two digits.
const edgeRounds = 5

// edge returns the dew or bubble point on the way, at the pressure where the refrigerant has its enthalpy.
func (p *profile) edge(first float64, at func(pressure float64) (props.State, error)) (props.State, error) {
	s, err := at(first)
	if !p.dropping {
		return s, err
	}
	for range edgeRounds {
		if err != nil {
			return s, err
		}
		s, err = at(p.pressure(p.share(s.H)))
	}
	return s, err
}

// condenser cuts the way from superheated vapour to subcooled liquid.
func (p *profile) condenser(x *exchange) error {
	dew, err := p.edge(p.in.P, p.fluid.DewPointAtPressure)
	if err != nil {
		return err
	}
	bubble, err := p.edge(p.out.P, p.fluid.BubblePointAtPressure)
	if err != nil {
		return err
	}
	hDew, hBubble := math.Min(dew.H, p.in.H), math.Max(bubble.H, p.out.H)
	TDew, TBubble := dew.T, bubble.T
	if dew.H >= p.in.H { // wet vapour enters
		TDew = p.in.T
	}
	if bubble.H <= p.out.H { // wet vapour leaves
		TBubble = p.out.T
	}
	if err := p.cut(Desuperheating, p.in.H, hDew, p.in.T, TDew, x.desuperheat, true); err != nil {
		return err
	}
	if err := p.cut(Condensing, hDew, hBubble, TDew, TBubble, 1, false); err != nil {
		return err
	}
	return p.cut(Subcooling, hBubble, p.out.H, TBubble, p.out.T, x.subcooling, true)
}

// evaporator cuts the way from wet vapour to superheated vapour.
func (p *profile) evaporator(x *exchange) error {
	dew, err := p.edge(p.out.P, p.fluid.DewPointAtPressure)
	if err != nil {
		return err
	}
	hDew, TDew := dew.H, dew.T
	if dew.H >= p.out.H { // wet vapour leaves
		hDew, TDew = p.out.H, p.out.T
	}
	if err := p.cut(Evaporating, p.in.H, hDew, p.in.T, TDew, 1, false); err != nil {
		return err
	}
	return p.cut(Superheating, hDew, p.out.H, TDew, p.out.T, x.superheat, true)
}

// gasCooler cuts the way of a gas above the critical pressure.
func (p *profile) gasCooler() error {
	return p.cut(GasCooling, p.in.H, p.out.H, p.in.T, p.out.T, 1, false)
}
