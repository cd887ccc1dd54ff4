package cycle

// singleStage is a compressor, a condenser or gas cooler, a valve and an evaporator, with or without an internal
// exchanger.
func (c *circuit) singleStage() {
	ends := c.loop(mainStream, &c.first)
	c.reject(ends.hot, ends.cooled)
	c.evaporate(ends.wet, ends.vapour)
}

// loop is a single stage without its two exchangers: what enters and leaves them.
type loop struct{ hot, cooled, wet, vapour *node }

func (c *circuit) loop(of stream, e *efficiencies) (ends loop) {
	ends.vapour = c.put(evaporatorOutlet, of, c.low.outlet, nil, "")
	ends.cooled = c.put(condenserOutlet, of, c.high.outlet, nil, "")
	liquid, gas := c.beforeExpansion(ends.cooled, ends.vapour)
	ends.hot = c.throughDischargeLine(c.compress(onlyStage, e, gas, c.high.discharge))
	ends.wet = c.valve(expansionValve, liquid, c.low.inlet, evaporatorInlet)
	return ends
}

// beforeExpansion leads liquid to the expansion valve and vapour to the compressor, through the internal exchanger where
// there is one: liquid line, exchanger, valve; evaporator, exchanger, suction line.
func (c *circuit) beforeExpansion(cooled, vapour *node) (liquid, gas *node) {
	if !c.exchanger {
		return c.throughLiquidLine(cooled, valveInlet), c.throughSuctionLine(vapour, suction)
	}
	warm := c.throughLiquidLine(cooled, liquidLineOutlet)
	most := c.internalLimits(warm, vapour)
	liquid, vapour = c.exchangeInternally(warm, vapour, &most, valveInlet, exchangerVapour)
	return liquid, c.throughSuctionLine(vapour, suction)
}
