package cycle

import (
	"strings"

	"dewmark/props"
)

// throttled puts refrigerant of in at pressure p and the same enthalpy.
func (c *circuit) throttled(in *node, p float64, at place, of stream, field string) *node {
	if p == in.P {
		return c.put(at, of, in.State, nil, "")
	}
	st, err := c.fluid.atEnthalpy(p, in.H)
	return c.put(at, of, st, err, field)
}

// valve expands refrigerant to pressure p.
func (c *circuit) valve(as part, in *node, p float64, at place) *node {
	if p > in.P {
		c.refuse(Refusal{
			Code: PressuresOutOfOrder, Component: partNames[c.side][as],
			Message: message("the pressure behind the valve, %s, must not be above that before it, %s", pressure(p), pressure(in.P)),
		})
	}
	out := c.throttled(in, p, at, in.stream, "")
	c.record(as, one(in), one(out), 0, 0, nan)
	return out
}

// line leads refrigerant to pressure p and changes its temperature by dT, with heat from the ambient. Where dT is zero
// there is no heat either, and a loss of pressure alone keeps the enthalpy.
func (c *circuit) line(as part, of content, in *node, p, dT float64, at place, field string) *node {
	if dT == 0 {
		out := c.throttled(in, p, at, in.stream, field)
		c.record(as, one(in), one(out), 0, 0, nan)
		return out
	}
	st, err := c.fluid.atTemperature(p, in.T+dT, of)
	out := c.put(at, in.stream, st, err, field)
	if of.lost(in.Phase, out.Phase) {
		name := partNames[c.side][as]
		c.refuse(Refusal{
			Code: NoSolution, Field: field, Component: name, Label: out.label(),
			Message: message("all refrigerant would become "+out.Phase.String()+" in the "+strings.ReplaceAll(name, "_", " ")+", which it would leave at %s and %s",
				temperature(out.T), pressure(out.P)),
		})
	}
	c.record(as, one(in), one(out), out.H-in.H, 0, c.ambient)
	return out
}

// lost reports whether nothing is left of a pipe's content between two places. Above the critical pressure there is nothing
// to lose.
func (of content) lost(before, behind props.Phase) bool {
	if before == props.Supercritical {
		return false
	}
	if of == liquid {
		return before != props.Vapour && behind == props.Vapour
	}
	return before != props.Liquid && behind == props.Liquid
}

// throughSuctionLine leads vapour to a compressor.
func (c *circuit) throughSuctionLine(in *node, at place) *node {
	l := &c.suctionLine
	return c.line(suctionLine, gas, in, c.behind(l.Drop, in.P, gas, "suction_line"), l.TemperatureRise, at, "suction_line.temperature_rise")
}

// throughDischargeLine leads hot gas to the condenser or gas cooler.
func (c *circuit) throughDischargeLine(in *node) *node {
	return c.line(dischargeLine, gas, in, c.high.inlet, 0-c.dischargeLine.TemperatureDrop, condenserInlet, "discharge_line.temperature_drop")
}

// throughLiquidLine leads condensed refrigerant towards the expansion.
func (c *circuit) throughLiquidLine(in *node, at place) *node {
	l := &c.liquidLine
	return c.line(liquidLine, liquid, in, c.behind(l.Drop, in.P, liquid, "liquid_line"), l.TemperatureChange, at, "liquid_line.temperature_change")
}

// exchange records the refrigerant side of an exchanger between two known states, with heat from or to something at T.
func (c *circuit) exchange(as part, in, out *node, T float64) {
	c.record(as, one(in), one(out), out.H-in.H, 0, T)
}

// evaporate takes heat from the source.
func (c *circuit) evaporate(in, out *node) {
	c.exchange(evaporator, in, out, c.source)
	c.evaporatorInlet = in.T
	c.figures.EvaporatingPressure = out.P
}

// reject gives heat to the sink.
func (c *circuit) reject(in, out *node) {
	as := condenser
	if c.gasCooled {
		as = gasCooler
	}
	c.exchange(as, in, out, c.sink)
}
