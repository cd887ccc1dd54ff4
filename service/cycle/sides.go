package cycle

import (
	"errors"

	"dewmark/props"
)

// lowSide is the evaporator's end of a circuit.
type lowSide struct {
	pressure float64     // at 7, Pa
	dew      float64     // dew temperature at that pressure, K
	inlet    float64     // pressure at 6, Pa
	outlet   props.State // at 7
}

// highSide is the condenser's or gas cooler's end of a circuit.
type highSide struct {
	outlet    props.State // at 4
	inlet     float64     // pressure at 3, Pa
	discharge float64     // pressure at 2, Pa
}

// setLow fixes the low side. An evaporation with a mean reference is at the pressure that meanEvaporation tries.
func (c *circuit) setLow(e *evaporation, loss Drop) {
	critical := c.fluid.Critical()
	if e.temperature >= critical.T || e.pressure >= critical.P {
		c.refuse(Refusal{
			Code: AboveCritical, Field: e.field(), Label: placeNames[c.side][evaporatorOutlet].label,
			Message: message("evaporation must be below the critical point, %s and %s", temperature(critical.T), pressure(critical.P)),
		})
		return
	}
	p, dew := e.pressure, e.temperature
	if e.mean && isGiven(c.meanTrial) {
		p = c.meanTrial
	}
	var err error
	if isGiven(p) {
		dew, err = c.fluid.saturationTemperature(p, gas)
	} else {
		p, err = c.fluid.saturationPressure(dew, gas)
	}
	if err != nil {
		c.refuse(c.noState(evaporatorOutlet, e.field(), err))
		return
	}
	c.low = lowSide{pressure: p, dew: dew}
	c.evaporating[c.side] = dew
	field := e.superheatField
	switch {
	case isGiven(e.quality):
		field = "evaporation.outlet_quality"
		c.low.outlet, err = c.fluid.wetAt(p, e.quality)
	case e.superheat == 0:
		c.low.outlet, err = c.fluid.dewAt(p)
	default:
		c.low.outlet, err = c.fluid.atTemperature(p, dew+e.superheat, gas)
	}
	if err != nil {
		c.refuse(c.noState(evaporatorOutlet, field, err))
		return
	}
	c.low.inlet = c.before(loss, p, "evaporator")
}

// setCondenser fixes the high side at a condensation.
func (c *circuit) setCondenser(k *condensation, loss Drop) {
	critical := c.fluid.Critical()
	if k.temperature >= critical.T || k.pressure >= critical.P {
		c.refuse(Refusal{
			Code: AboveCritical, Field: k.field(), Label: placeNames[c.side][condenserOutlet].label,
			Message: message("condensation must be below the critical point, %s and %s; above it the transcritical layout has a gas cooler",
				temperature(critical.T), pressure(critical.P)),
		})
		return
	}
	p, bubble, err := c.condensing(k)
	if err != nil {
		c.refuse(c.noState(condenserOutlet, k.field(), err))
		return
	}
	var outlet props.State
	if k.subcooling == 0 {
		outlet, err = c.fluid.bubbleAt(p)
	} else {
		outlet, err = c.fluid.atTemperature(p, bubble-k.subcooling, liquid)
	}
	if err != nil {
		c.refuse(c.noState(condenserOutlet, k.subcoolingField, err))
		return
	}
	c.setHigh(outlet, loss)
}

// setGasCooler fixes the high side at a gas cooler's outlet temperature and a pressure.
func (c *circuit) setGasCooler(p float64) {
	g := &c.gasCooling
	if critical := c.fluid.Critical(); p <= critical.P {
		c.refuse(Refusal{
			Code: BelowCritical, Field: g.field(), Label: placeNames[c.side][condenserOutlet].label,
			Message: message("a gas cooler works above the critical pressure, %s, not at %s; below it give condensation and another layout",
				pressure(critical.P), pressure(p)),
		})
		return
	}
	outlet, err := c.fluid.atTemperature(p, g.outlet, gas)
	if err != nil {
		field := g.outletField
		if e, ok := errors.AsType[*props.RangeError](err); ok && e.Property == props.Pressure {
			field = g.field()
		}
		c.refuse(c.noState(condenserOutlet, field, err))
		return
	}
	c.setHigh(outlet, c.condenserDrop)
}

// condensing returns the pressure of a condensation and the bubble temperature there.
func (c *circuit) condensing(k *condensation) (p, bubble float64, err error) {
	switch {
	case isGiven(k.pressure):
		p = k.pressure
	case k.mean:
		if p, err = c.meanCondensing(k.temperature); err != nil {
			return nan, nan, err
		}
	default:
		if p, err = c.fluid.saturationPressure(k.temperature, gas); err != nil {
			return nan, nan, err
		}
		if c.fluid.withoutGlide() {
			return p, k.temperature, nil
		}
	}
	bubble, err = c.fluid.saturationTemperature(p, liquid)
	return p, bubble, err
}

// setHigh fixes the high side at its outlet and refuses one that is not above the low side.
func (c *circuit) setHigh(outlet props.State, loss Drop) {
	c.high.outlet = outlet
	c.high.inlet = c.before(loss, outlet.P, "condenser")
	c.high.discharge = c.before(c.dischargeLine.Drop, c.high.inlet, "discharge_line")
	if outlet.P > c.low.pressure {
		return
	}
	field := c.evaporation.field()
	if c.side != only {
		field = c.intermediate.field()
	}
	c.refuse(Refusal{
		Code: PressuresOutOfOrder, Field: field,
		Message: message("evaporation must be below condensation: the evaporator has %s (dew point %s), the condenser or gas cooler %s",
			pressure(c.low.pressure), temperature(c.low.dew), pressure(outlet.P)),
	})
}

// behind returns the pressure behind a loss that starts at p.
func (c *circuit) behind(d Drop, p float64, of content, field string) float64 {
	if d.TemperatureEquivalent != 0 {
		return c.moved(p, -d.TemperatureEquivalent, of, field)
	}
	if d.Pressure >= p {
		c.refuse(Refusal{
			Code: OutOfBounds, Field: field + ".pressure_drop",
			Message: message("a pressure drop of %s leaves nothing of %s", Number{PressureDifference, d.Pressure}, pressure(p)),
		})
		return p
	}
	return p - d.Pressure
}

// before returns the pressure before a loss in vapour that ends at p.
func (c *circuit) before(d Drop, p float64, field string) float64 {
	if d.TemperatureEquivalent != 0 {
		return c.moved(p, d.TemperatureEquivalent, gas, field)
	}
	return p + d.Pressure
}

// moved returns the saturation pressure at dT above the saturation temperature of p.
func (c *circuit) moved(p, dT float64, of content, field string) float64 {
	T, err := c.fluid.saturationTemperature(p, of)
	if err == nil {
		p, err = c.fluid.saturationPressure(T+dT, of)
	}
	if err != nil {
		c.refuse(Refusal{
			Code: NoState, Field: field + ".temperature_drop_equivalent",
			Message: message("no saturation temperature lies %s from that at %s", difference(dT), pressure(p)), Cause: err,
		})
	}
	return p
}
