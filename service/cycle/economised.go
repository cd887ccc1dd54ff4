package cycle

// economisedFlash is a compressor with an injection port that takes the vapour of a flash tank; the evaporator gets the
// tank's liquid.
func (c *circuit) economisedFlash() {
	vapour := c.put(evaporatorOutlet, mainStream, c.low.outlet, nil, "")
	cooled := c.put(condenserOutlet, highStream, c.high.outlet, nil, "")
	wet := c.valve(injectionValve, c.throughLiquidLine(cooled, injectionValveInlet), c.middle.pressure, injectionValveOutlet)
	liquid, injected, share := c.separate(flashTank, wet, valveInlet, mainStream, injection, branchStream)
	c.share(share)
	c.injected(vapour, injected, cooled)
	c.evaporate(c.valve(expansionValve, liquid, c.low.inlet, evaporatorInlet), vapour)
}

// economisedSubcooler is a compressor with an injection port that takes the vapour of a branch of the liquid; evaporating,
// the branch subcools the rest.
func (c *circuit) economisedSubcooler() {
	vapour := c.put(evaporatorOutlet, mainStream, c.low.outlet, nil, "")
	cooled := c.put(condenserOutlet, highStream, c.high.outlet, nil, "")
	tapped, warm := c.branch(c.throughLiquidLine(cooled, liquidLineOutlet), injectionValveInlet, branchStream, branchedLiquid, mainStream)
	wet := c.valve(injectionValve, tapped, c.middle.pressure, injectionValveOutlet)
	liquid, injected := c.economise(warm, wet)
	c.injected(vapour, injected, cooled)
	c.evaporate(c.valve(expansionValve, liquid, c.low.inlet, evaporatorInlet), vapour)
}

// economise evaporates and superheats the injection flow with liquid. The flow follows from the temperature of the liquid
// that leaves, or is given. Where the liquid is cold enough already, nothing is injected.
func (c *circuit) economise(warm, wet *node) (cold, injected *node) {
	e := &c.economiser
	injected = c.injectionVapour(e.superheat)
	gain := injected.H - wet.H // J per kg injected
	target := c.middle.dew.T + e.approach
	switch {
	case isGiven(e.ratio):
		c.share(e.ratio)
		cold = c.heated(warm, -gain*e.ratio/(1-e.ratio), warm.P, valveInlet, "economiser.injection_ratio")
	case target >= warm.T:
		c.share(0)
		cold = c.put(valveInlet, mainStream, warm.State, nil, "")
	default:
		st, err := c.fluid.atTemperature(warm.P, target, liquid)
		cold = c.put(valveInlet, mainStream, st, err, "economiser.approach")
		loss := warm.H - cold.H // J per kg subcooled
		c.share(loss / (loss + gain))
	}
	if c.flows[branchStream] > 0 && (injected.T > warm.T || cold.T < wet.T) {
		c.refuse(Refusal{
			Code: SecondLaw, Field: "economiser", Component: partNames[c.side][economiser],
			Message: message("heat cannot pass from liquid at %s to injection vapour at %s that starts from %s",
				temperature(warm.T), temperature(injected.T), temperature(wet.T)),
		})
	}
	c.record(economiser, two(warm, wet), two(cold, injected), 0, 0, nan)
	return cold, injected
}

// injectionVapour puts vapour of the intermediate pressure, superheated.
func (c *circuit) injectionVapour(superheat float64) *node {
	if superheat == 0 {
		return c.put(injection, branchStream, c.middle.dew, nil, "")
	}
	st, err := c.fluid.atTemperature(c.middle.pressure, c.middle.dew.T+superheat, gas)
	return c.put(injection, branchStream, st, err, "economiser.injection_superheat")
}

// injected is the gas side of a compressor with a port at the intermediate pressure: two steps of compression with the
// injection mixed in between, then the condenser or gas cooler.
func (c *circuit) injected(vapour, injected, cooled *node) {
	middle := c.compress(firstOfSteps, &c.first, c.throughSuctionLine(vapour, suction), c.middle.pressure)
	mixed := c.mix(injectionMixer, middle, injected, mixedInjection, highStream)
	hot := c.compress(secondOfSteps, &c.second, mixed, c.high.discharge)
	c.reject(c.throughDischargeLine(hot), cooled)
}
