package cycle

// singleStage is a compressor, a condenser or gas cooler, a valve and an evaporator, with or without an internal
// exchanger.
func (c *circuit) singleStage() {
	vapour := c.put(evaporatorOutlet, mainStream, c.low.outlet, nil, "")
	cooled := c.put(condenserOutlet, mainStream, c.high.outlet, nil, "")
	liquid, gas := c.beforeExpansion(cooled, vapour, valveInlet)
	hot := c.compress(onlyStage, &c.first, gas, c.high.discharge)
	c.reject(c.throughDischargeLine(hot), cooled)
	c.evaporate(c.valve(expansionValve, liquid, c.low.inlet, evaporatorInlet), vapour)
}

// beforeExpansion leads liquid to an expansion and vapour to the compressor at label 1, through the internal exchanger
// where there is one: liquid line, exchanger, expansion; evaporator, exchanger, suction line.
func (c *circuit) beforeExpansion(cooled, vapour *node, at place) (liquid, gas *node) {
	if !c.exchanger {
		return c.throughLiquidLine(cooled, at), c.throughSuctionLine(vapour, suction)
	}
	warm := c.throughLiquidLine(cooled, liquidLineOutlet)
	liquid, vapour = c.exchangeInternally(warm, vapour, at, exchangerVapour)
	return liquid, c.throughSuctionLine(vapour, suction)
}
