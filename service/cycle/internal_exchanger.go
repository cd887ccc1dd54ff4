package cycle

// internalLimits is the most that each side of an internal exchanger can exchange: the liquid until it is as cold as the
// vapour that enters, the vapour until it is as warm as the liquid that enters.
type internalLimits struct {
	liquid, vapour                 float64 // J per kg of that side
	liquidPressure, vapourPressure float64 // Pa, behind the exchanger
}

func (c *circuit) internalLimits(warm, cold *node) (most internalLimits) {
	x := &c.internal
	most.liquidPressure = c.behind(x.liquid, warm.P, liquid, "internal_exchanger.liquid")
	most.vapourPressure = c.behind(x.vapour, cold.P, gas, "internal_exchanger.vapour")
	if c.refused != nil || warm.T <= cold.T {
		return most
	}
	coldest, err := c.fluid.atTemperature(most.liquidPressure, cold.T, liquid)
	if err != nil {
		c.refuse(c.noState(warm.place, "internal_exchanger.effectiveness", err))
	}
	warmest, err := c.fluid.atTemperature(most.vapourPressure, warm.T, gas)
	if err != nil {
		c.refuse(c.noState(cold.place, "internal_exchanger.effectiveness", err))
	}
	most.liquid, most.vapour = warm.H-coldest.H, warmest.H-cold.H
	return most
}

// heat returns the heat in J per kg of liquid when ratio kg of vapour pass with it: the effectiveness times the smaller
// limit. It names the side of that limit.
func (m *internalLimits) heat(effectiveness, ratio float64) (q float64, side string) {
	if ratio*m.vapour <= m.liquid {
		return effectiveness * ratio * m.vapour, "vapour"
	}
	return effectiveness * m.liquid, "liquid"
}

// exchangeInternally passes liquid and vapour through an internal exchanger.
func (c *circuit) exchangeInternally(warm, cold *node, most *internalLimits, atLiquid, atVapour place) (liquidOut, vapourOut *node) {
	ratio := c.flow(cold) / c.flow(warm)
	q, side := most.heat(c.internal.effectiveness, ratio)
	const field = "internal_exchanger.effectiveness"
	liquidOut = c.heated(warm, -q, most.liquidPressure, atLiquid, field)
	vapourOut = c.heated(cold, q/ratio, most.vapourPressure, atVapour, field)
	c.record(internalExchanger, two(warm, cold), two(liquidOut, vapourOut), 0, 0, nan)
	c.figures.InternalExchangerHeat = q * c.flow(warm)
	c.figures.CapacityLimitedBy = side
	return liquidOut, vapourOut
}

// heated puts refrigerant of in that has taken up q J/kg and gone to pressure p.
func (c *circuit) heated(in *node, q, p float64, at place, field string) *node {
	if q == 0 {
		return c.throttled(in, p, at, in.stream, field)
	}
	st, err := c.fluid.atEnthalpyNear(p, in.H+q, &in.State)
	return c.put(at, in.stream, st, err, field)
}
