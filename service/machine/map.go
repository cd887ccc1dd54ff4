package machine

import (
	"math"

	"dewmark/props"
	"dewmark/service/cycle"
)

// coefficients of a map of any kind: c1 to c10 of a [TenCoefficient], and that of S² D².
type coefficients [11]float64

// fromBiquadratic is where the nine coefficients of a [Biquadratic] belong.
var fromBiquadratic = [9]int{0, 1, 3, 2, 5, 4, 7, 8, 10}

// at returns X and its slopes at S and D in the units of the data sheet.
func (c *coefficients) at(S, D float64) (x, byS, byD float64) {
	x = c[0] + S*(c[1]+S*(c[3]+S*c[6])) + D*(c[2]+D*(c[5]+D*c[9])) + S*D*(c[4]+S*c[7]+D*(c[8]+S*c[10]))
	byS = c[1] + S*(2*c[3]+3*S*c[6]) + D*(c[4]+2*S*c[7]+D*(c[8]+2*S*c[10]))
	byD = c[2] + D*(2*c[5]+3*D*c[9]) + S*(c[4]+S*c[7]+2*D*(c[8]+S*c[10]))
	return x, byS, byD
}

// defaultSuperheatFactor is F of Dabiri and Rice 1981.
const defaultSuperheatFactor = 0.75

// rating is a map that was checked.
type rating struct {
	field       string
	flow        coefficients // of mass flow, or of capacity
	capacity    bool
	power       coefficients
	scale       Scale
	perFlow     float64 // kg/s or W in one unit of the data sheet
	perPower    float64 // W
	perPressure float64 // Pa
	pressure    bool    // D is a pressure
	superheat   float64 // K; NaN when the return gas has a fixed temperature
	returnGas   float64 // K
	subcool     float64 // K
	factor      float64
	speed       float64  // 1/s; NaN without
	area        *polygon // nil without
}

// flanges are the conditions between which a compressor works.
type flanges struct {
	suction                            props.State
	suctionDew                         float64 // K
	suctionPressure, dischargePressure float64 // Pa
	dischargeDew                       float64 // K; NaN above the critical pressure
}

// axes returns S and D of a map.
func (r *rating) axes(f *flanges) (S, D float64) {
	S = r.scale.Reading(f.suctionDew)
	if r.pressure {
		return S, f.dischargePressure / r.perPressure
	}
	return S, r.scale.Reading(f.dischargeDew)
}

// leastShare is the share of a map's value at its edge below which its continuation does not fall.
const leastShare = 0.02

// raw returns what the map says of flow (or capacity) and power, in SI. Outside its area it goes on from the nearest point
// of the edge in a straight line: a cubic is unbounded there, and a search that passes outside must find its way back.
func (r *rating) raw(f *flanges) (flow, power float64) {
	S, D := r.axes(f)
	if r.area == nil {
		x, _, _ := r.flow.at(S, D)
		w, _, _ := r.power.at(S, D)
		return x * r.perFlow, w * r.perPower
	}
	p := r.area.at(f)
	if r.area.contains(p) {
		x, _, _ := r.flow.at(S, D)
		w, _, _ := r.power.at(S, D)
		return x * r.perFlow, w * r.perPower
	}
	q, _, _ := r.area.nearest(p)
	S0 := r.scale.Reading(q.x)
	D0 := r.scale.Reading(q.y)
	if r.pressure {
		D0 = q.y * pressurePerKelvin / r.perPressure
	}
	along := func(c *coefficients) float64 {
		x, byS, byD := c.at(S0, D0)
		return math.Max(leastShare*x, x+byS*(S-S0)+byD*(D-D0))
	}
	return along(&r.flow) * r.perFlow, along(&r.power) * r.perPower
}

// rated returns flow and isentropic efficiency at the real suction state, corrected from that of the map.
func (r *rating) rated(fluid cycle.Refrigerant, f *flanges) (flow, isentropic float64, err error) {
	flow, power := r.raw(f)
	reference, err := r.suctionState(fluid, f)
	if err != nil {
		return 0, 0, err
	}
	if r.capacity {
		liquid, err := r.liquid(fluid, f)
		if err != nil {
			return 0, 0, err
		}
		flow /= reference.H - liquid.H
	}
	ideal, err := fluid.PressureEntropy(f.dischargePressure, f.suction.S)
	if err != nil {
		return 0, 0, err
	}
	rise := ideal.H - f.suction.H
	if same := math.Abs(f.suction.Rho/reference.Rho-1) < 1e-12; same {
		return flow, flow * rise / power, nil
	}
	idealMap, err := fluid.PressureEntropy(f.dischargePressure, reference.S)
	if err != nil {
		return 0, 0, err
	}
	// Dabiri and Rice: flow by the density, power by flow and isentropic rise, so that the efficiency stays the map's.
	isentropic = flow * (idealMap.H - reference.H) / power
	flow *= 1 + r.factor*(f.suction.Rho/reference.Rho-1)
	return flow, isentropic, nil
}

// suctionState returns the suction gas that the map was rated with.
func (r *rating) suctionState(fluid cycle.Refrigerant, f *flanges) (props.State, error) {
	T := r.returnGas
	if math.IsNaN(T) {
		T = f.suctionDew + r.superheat
	}
	if T <= f.suctionDew {
		return fluid.DewPointAtPressure(f.suctionPressure)
	}
	return fluid.TemperaturePressure(T, f.suctionPressure)
}

// liquid returns what a map of capacities counts from.
func (r *rating) liquid(fluid cycle.Refrigerant, f *flanges) (props.State, error) {
	bubble, err := fluid.BubblePointAtPressure(f.dischargePressure)
	if err != nil || r.subcool == 0 {
		return bubble, err
	}
	return fluid.TemperaturePressure(bubble.T-r.subcool, f.dischargePressure)
}
