package cycle

// internalExchange passes liquid and vapour through an internal exchanger and puts them at two places. The heat is the
// effectiveness times the most that either side can exchange: the liquid until it is as cold as the vapour that enters,
// the vapour until it is as warm as the liquid that enters.
func (c *circuit) exchangeInternally(warm, cold *node, atLiquid, atVapour place) (liquidOut, vapourOut *node) {
	x := &c.internal
	liquidP := c.behind(x.liquid, warm.P, liquid, "internal_exchanger.liquid")
	vapourP := c.behind(x.vapour, cold.P, gas, "internal_exchanger.vapour")
	q := 0.0 // J per kg of liquid
	if warm.T > cold.T {
		most := c.mostInternalHeat(warm, cold, liquidP, vapourP)
		ratio := c.flow(cold) / c.flow(warm)
		q = x.effectiveness * min(most.liquid, ratio*most.vapour)
		c.figures.CapacityLimitedBy = "vapour"
		if most.liquid < ratio*most.vapour {
			c.figures.CapacityLimitedBy = "liquid"
		}
	}
	liquidOut = c.heated(warm, -q, liquidP, atLiquid)
	vapourOut = c.heated(cold, q*c.flow(warm)/c.flow(cold), vapourP, atVapour)
	c.record(internalExchanger, two(warm, cold), two(liquidOut, vapourOut), 0, 0, nan)
	c.figures.InternalExchangerHeat = q * c.flow(warm)
	return liquidOut, vapourOut
}

// internalHeat is the most that each side of an internal exchanger can exchange, in J per kg of that side.
type internalHeat struct{ liquid, vapour float64 }

func (c *circuit) mostInternalHeat(warm, cold *node, liquidP, vapourP float64) internalHeat {
	if c.refused != nil {
		return internalHeat{}
	}
	coldest, err := c.fluid.TemperaturePressure(cold.T, liquidP)
	if err != nil {
		c.refuse(c.noState(warm.place, "internal_exchanger.effectiveness", err))
		return internalHeat{}
	}
	warmest, err := c.fluid.TemperaturePressure(warm.T, vapourP)
	if err != nil {
		c.refuse(c.noState(cold.place, "internal_exchanger.effectiveness", err))
		return internalHeat{}
	}
	return internalHeat{warm.H - coldest.H, warmest.H - cold.H}
}

// heated puts refrigerant of in that has taken up q J/kg and gone to pressure p.
func (c *circuit) heated(in *node, q, p float64, at place) *node {
	if q == 0 {
		return c.throttled(in, p, at, in.stream, "")
	}
	st, err := c.fluid.PressureEnthalpy(p, in.H+q)
	return c.put(at, in.stream, st, err, "internal_exchanger.effectiveness")
}
