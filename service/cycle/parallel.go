package cycle

// parallelCompression has a receiver at an intermediate pressure behind the high-pressure valve. Its liquid goes to the
// evaporator, its vapour to a compressor of its own. An internal exchanger sits before the high-pressure valve.
func (c *circuit) parallelCompression() {
	vapour := c.put(evaporatorOutlet, mainStream, c.low.outlet, nil, "")
	cooled := c.put(condenserOutlet, highStream, c.high.outlet, nil, "")
	liquid, gas := c.beforeReceiver(cooled, vapour)
	wet := c.valve(highValve, liquid, c.middle.pressure, highValveOutlet)
	liquid, flashed, share := c.separate(receiver, wet, lowValveInlet, mainStream, parallelSuction, branchStream)
	c.share(share)
	hot := c.compress(onlyStage, &c.first, gas, c.high.discharge)
	hotter := c.compress(parallelStage, &c.second, flashed, c.high.discharge)
	c.reject(c.throughDischargeLine(c.mix(headerMixer, hot, hotter, header, highStream)), cooled)
	c.evaporate(c.valve(expansionValve, liquid, c.low.inlet, evaporatorInlet), vapour)
}

// beforeReceiver leads liquid to the high-pressure valve and vapour to the main compressor, through the internal
// exchanger where there is one.
func (c *circuit) beforeReceiver(cooled, vapour *node) (liquid, gas *node) {
	if !c.exchanger {
		return c.throughLiquidLine(cooled, highValveInlet), c.throughSuctionLine(vapour, suction)
	}
	warm := c.throughLiquidLine(cooled, liquidLineOutlet)
	most := c.internalLimits(warm, vapour)
	c.share(c.receiverShare(warm.H, &most))
	liquid, vapour = c.exchangeInternally(warm, vapour, &most, highValveInlet, exchangerVapour)
	return liquid, c.throughSuctionLine(vapour, suction)
}

// receiverShare returns the vapour's share in the receiver when what comes with enthalpy h passes the internal exchanger
// first. The exchanger's vapour side sees the rest of the flow alone, so its heat depends on the share; both limits make it
// linear.
func (c *circuit) receiverShare(h float64, most *internalLimits) float64 {
	latent := c.middle.dew.H - c.middle.bubble.H
	cooling := c.internal.effectiveness * most.vapour // J/kg, per unit of vapour flow
	share := (h - cooling - c.middle.bubble.H) / (latent - cooling)
	if (1-share)*most.vapour > most.liquid {
		share = (h - c.internal.effectiveness*most.liquid - c.middle.bubble.H) / latent
	}
	return max(share, 0)
}
