package cycle

import (
	"context"
	"math"
)

// Solve computes the cycle that r describes. It returns a [*RefusedError] for a request that cannot be, and the cause of ctx
// when that ends first. Most cycles take microseconds, but two pressures searched at once for a mixture of many components, with
// mean temperatures, take seconds.
func Solve(ctx context.Context, r *Request) (*Solution, error) {
	s := new(Solution)
	if err := s.Solve(ctx, r); err != nil {
		return nil, err
	}
	return s, nil
}

// Solve is the function of that name with its answer in s, whose memory is used again: a simple cycle then allocates nothing. It
// overwrites what the lists of the answer before refer to, in copies of s too. After an error s holds nothing of use. It must not
// be called concurrently.
func (s *Solution) Solve(ctx context.Context, r *Request) error {
	c := circuit{ctx: ctx}
	c.cautions = s.Cautions[:0]
	if c.fill(r); len(c.refusals) > 0 {
		return &RefusedError{c.refusals}
	}
	c.start(r)
	if c.evaporation.mean {
		c.meanEvaporation()
	} else {
		c.atLowSide()
	}
	if c.refused == nil {
		if c.solution(r, s); c.refused == nil {
			return nil
		}
	}
	if c.refused == &interrupted {
		return context.Cause(ctx)
	}
	return &RefusedError{[]Refusal{*c.refused}}
}

// interrupted is the obstacle where the context has ended.
var interrupted Refusal

// goesOn reports whether another trial may be made. If the context has ended, that is the obstacle to it.
func (c *circuit) goesOn() bool {
	if c.ctx.Err() != nil {
		c.refused = &interrupted
	}
	return c.refused == nil
}

// start takes over what a plan does not hold.
func (c *circuit) start(r *Request) {
	c.fluid.Refrigerant = r.Refrigerant
	c.refrigerants = [sideCount]Refrigerant{only: r.Refrigerant, lower: r.Refrigerant, upper: c.cascade.upper}
	c.middle.pressure, c.meanTrial = nan, nan
	c.figures = noFigures
}

// Pressures are found from the outside in: the evaporator's, the condenser's or gas cooler's, the intermediate one. Each
// of the next three methods fixes one, or searches it with all that lies further in at each trial.

// atLowSide goes on at the evaporating pressure of the request, or at the one on trial.
func (c *circuit) atLowSide() {
	if c.layout == Cascade {
		c.atCascadePressure()
		return
	}
	c.setLow(&c.evaporation, c.evaporatorDrop)
	if c.refused == nil {
		c.atHighSide()
	}
}

// atHighSide goes on at the condensing pressure, or at the gas cooler's.
func (c *circuit) atHighSide() {
	g := &c.gasCooling
	switch {
	case !c.gasCooled:
		c.setCondenser(&c.condensation, c.condenserDrop)
	case g.optimise:
		low := max(c.fluid.Critical().P, c.low.pressure) * aboveBracketEnd
		c.search(g.field(), low, g.pressureMax, highPressureStep, func(p float64) {
			c.setGasCooler(p)
			c.atIntermediatePressure()
		})
		return
	case g.correlation != NoCorrelation:
		c.setGasCooler(c.correlated())
	default:
		c.setGasCooler(g.pressure)
	}
	c.atIntermediatePressure()
}

// atIntermediatePressure puts the machine together, at its intermediate pressure where it has one.
func (c *circuit) atIntermediatePressure() {
	if c.refused != nil {
		return
	}
	if !c.hasSecond() {
		c.assemble()
		return
	}
	m := &c.intermediate
	if m.optimise {
		ceiling := min(c.high.outlet.P, c.fluid.Critical().P) / aboveBracketEnd
		c.search(m.field(), c.low.pressure*aboveBracketEnd, ceiling, nan, func(p float64) {
			c.setMiddle(p)
			c.assemble()
		})
		return
	}
	p := math.Sqrt(c.low.pressure * c.high.outlet.P)
	switch {
	case isGiven(m.pressure):
		p = m.pressure
	case isGiven(m.temperature):
		p = c.intermediateAt(m.temperature)
	}
	c.checkBetween(p, c.low.pressure, c.high.outlet.P)
	c.setMiddle(p)
	c.assemble()
}

// atCascadePressure puts a cascade together at the condensing pressure of its lower circuit.
func (c *circuit) atCascadePressure() {
	c.enter(lower)
	m := &c.intermediate
	low, high := c.cascadeBounds()
	switch {
	case c.refused != nil:
	case m.optimise:
		c.search(m.field(), low*aboveBracketEnd, high/aboveBracketEnd, nan, func(p float64) {
			c.middle.pressure = p
			c.assemble()
		})
		return
	case isGiven(m.pressure):
		c.middle.pressure = m.pressure
	case isGiven(m.temperature):
		c.middle.pressure = c.intermediateAt(m.temperature)
	}
	c.assemble()
}

// intermediateAt returns the pressure with that dew temperature.
func (c *circuit) intermediateAt(T float64) float64 {
	p, err := c.fluid.saturationPressure(T, gas)
	if err != nil {
		c.refuse(Refusal{
			Code: NoState, Field: "intermediate.temperature",
			Message: message("%s is no temperature of boiling", temperature(T)), Cause: err,
		})
	}
	return p
}

// checkBetween refuses an intermediate pressure that does not lie between the low and the high one.
func (c *circuit) checkBetween(p, low, high float64) {
	if low <= p && p <= high {
		return
	}
	c.refuse(Refusal{
		Code: PressuresOutOfOrder, Field: c.intermediate.field(),
		Message: message("the intermediate pressure, %s, must lie between the low pressure, %s, and the high pressure, %s",
			pressure(p), pressure(low), pressure(high)),
	})
}

// assemble puts the machine together at the pressures in force. A new layout is one more method here, a list of components;
// what it brings along has its labels in places.go and its fields in the request, the plan and the validation.
func (c *circuit) assemble() {
	c.clear()
	if c.refused != nil {
		return
	}
	switch c.layout {
	case SingleStage:
		c.singleStage()
	case EconomisedSubcooler:
		c.economisedSubcooler()
	case EconomisedFlash:
		c.economisedFlash()
	case TwoStageFlash:
		c.twoStageFlash()
	case TwoStageIntercooled:
		c.twoStageIntercooled()
	case Cascade:
		c.cascadeCircuits()
	case ParallelCompression:
		c.parallelCompression()
	case Ejector:
		c.ejectorExpansion()
	}
}
