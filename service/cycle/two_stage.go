package cycle

// twoStageFlash is two compressors with a flash tank at the intermediate pressure. In an open intercooler the low-stage
// gas bubbles through the tank's liquid and the high stage takes saturated vapour; with flash gas removal alone the gas
// mixes with the tank's vapour behind it.
func (c *circuit) twoStageFlash() {
	vapour := c.put(evaporatorOutlet, mainStream, c.low.outlet, nil, "")
	cooled := c.put(condenserOutlet, highStream, c.high.outlet, nil, "")
	wet := c.valve(highValve, c.throughLiquidLine(cooled, highValveInlet), c.middle.pressure, highValveOutlet)
	warm := c.compress(lowStage, &c.first, c.throughSuctionLine(vapour, lowSuction), c.middle.pressure)
	var liquid, gas *node
	if c.intercooler.kind == OpenIntercooler {
		liquid = c.put(lowValveInlet, mainStream, c.middle.bubble, nil, "")
		gas = c.put(highSuction, highStream, c.middle.dew, nil, "")
		c.stages((warm.H - liquid.H) / (gas.H - wet.H))
		c.record(flashTank, two(warm, wet), two(liquid, gas), 0, 0, nan)
	} else {
		var flashed *node
		var share float64
		liquid, flashed, share = c.separate(flashTank, wet, lowValveInlet, mainStream, separatorVapour, branchStream)
		c.share(share)
		gas = c.mix(interstageMixer, warm, flashed, highSuction, highStream)
	}
	c.highStageAbove(gas, cooled)
	c.evaporate(c.valve(expansionValve, liquid, c.low.inlet, evaporatorInlet), vapour)
}

// twoStageIntercooled is two compressors with the gas cooled between them: in a closed intercooler by boiling a branch
// of the liquid, which subcools the rest in a coil, or by water or air.
func (c *circuit) twoStageIntercooled() {
	vapour := c.put(evaporatorOutlet, mainStream, c.low.outlet, nil, "")
	warm := c.compress(lowStage, &c.first, c.throughSuctionLine(vapour, lowSuction), c.middle.pressure)
	var liquid, gas, cooled *node
	if c.intercooler.kind == ClosedIntercooler {
		cooled = c.put(condenserOutlet, highStream, c.high.outlet, nil, "")
		tapped, coil := c.branch(c.throughLiquidLine(cooled, liquidLineOutlet), highValveInlet, branchStream, branchedLiquid, mainStream)
		wet := c.valve(highValve, tapped, c.middle.pressure, highValveOutlet)
		liquid = c.subcooledInCoil(coil)
		gas = c.put(highSuction, highStream, c.middle.dew, nil, "")
		c.stages((warm.H - liquid.H) / (gas.H - wet.H))
		c.record(intercooler, three(warm, wet, coil), two(gas, liquid), 0, 0, nan)
	} else {
		cooled = c.put(condenserOutlet, mainStream, c.high.outlet, nil, "")
		liquid = c.throughLiquidLine(cooled, valveInlet)
		gas = c.cooledOutside(warm)
		c.figures.FlowRatio = 1
	}
	c.highStageAbove(gas, cooled)
	c.evaporate(c.valve(expansionValve, liquid, c.low.inlet, evaporatorInlet), vapour)
}

// stages fixes the flows by the high stage's flow over the low stage's.
func (c *circuit) stages(ratio float64) {
	if c.refused == nil && !(ratio >= 1) {
		c.refuse(Refusal{
			Code: NoSolution, Field: c.intermediate.field(), Component: "intercooler",
			Message: message("the intercooler cannot close its balance: the high stage would take %s times the low stage's flow", plain(ratio)),
		})
	}
	c.flows[mainStream], c.flows[highStream], c.flows[branchStream] = 1, ratio, ratio-1
	c.figures.FlowRatio, c.figures.InjectionRatio = ratio, (ratio-1)/ratio
}

// subcooledInCoil cools liquid in the coil of a closed intercooler, unless it is cold enough already.
func (c *circuit) subcooledInCoil(in *node) *node {
	T := c.middle.dew.T + c.intercooler.approach
	if T >= in.T {
		return c.put(valveInlet, in.stream, in.State, nil, "")
	}
	st, err := c.fluid.atTemperature(in.P, T, liquid)
	return c.put(valveInlet, in.stream, st, err, "intercooler.approach")
}

// cooledOutside cools gas with water or air, unless it is colder already.
func (c *circuit) cooledOutside(in *node) *node {
	x := &c.intercooler
	T := x.temperature + x.approach
	if T >= in.T {
		out := c.put(highSuction, in.stream, in.State, nil, "")
		c.record(intercooler, one(in), one(out), 0, 0, nan)
		return out
	}
	if T <= c.middle.dew.T {
		c.refuse(Refusal{
			Code: NoSolution, Field: "intercooler.temperature", Component: "intercooler",
			Message: message("gas cooled to %s would condense: it must stay above the intermediate dew point, %s", temperature(T), temperature(c.middle.dew.T)),
		})
	}
	st, err := c.fluid.atTemperature(in.P, T, gas)
	out := c.put(highSuction, in.stream, st, err, "intercooler.approach")
	c.exchange(intercooler, in, out, x.temperature)
	return out
}

// highStageAbove is the high stage and the condenser or gas cooler.
func (c *circuit) highStageAbove(gas, cooled *node) {
	hot := c.compress(highStage, &c.second, gas, c.high.discharge)
	c.reject(c.throughDischargeLine(hot), cooled)
}
