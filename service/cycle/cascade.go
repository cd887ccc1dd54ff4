package cycle

import "math"

// cascadeCircuits is two single stages; the lower one condenses, at the intermediate pressure, in the evaporator of the
// upper.
func (c *circuit) cascadeCircuits() {
	c.enterLower()
	below := c.loop(mainStream, &c.first)
	c.evaporate(below.wet, below.vapour)
	c.enterUpper()
	above := c.loop(highStream, &c.second)
	c.reject(above.hot, above.cooled)
	ratio := (below.hot.H - below.cooled.H) / (above.vapour.H - above.wet.H)
	if !(ratio > 0) {
		c.refuse(Refusal{
			Code: NoSolution, Field: c.intermediate.field(), Component: partNames[c.side][cascadeExchanger],
			Message: message("the cascade exchanger cannot close its balance: the upper circuit would have %s times the lower one's flow", plain(ratio)),
		})
	}
	c.flows[highStream] = ratio
	c.figures.FlowRatio = ratio
	c.record(cascadeExchanger, two(below.hot, above.wet), two(below.cooled, above.vapour), 0, 0, nan)
}

// enterLower turns to the lower circuit.
func (c *circuit) enterLower() {
	c.enter(lower)
	c.setLow(&c.evaporation, c.evaporatorDrop)
	c.setCondenser(&condensation{
		temperature: nan, pressure: c.middle.pressure, levelField: c.intermediate.field(),
		subcooling: c.cascade.subcooling, subcoolingField: "cascade.subcooling",
	}, Drop{})
}

// enterUpper turns to the upper circuit, which evaporates below the lower one's condensing temperature by the approach.
func (c *circuit) enterUpper() {
	condensing, err := c.fluid.saturationTemperature(c.middle.pressure, gas)
	if err != nil {
		c.refuse(c.noState(condenserOutlet, c.intermediate.field(), err))
		return
	}
	c.enter(upper)
	c.setLow(&evaporation{
		temperature: condensing - c.cascade.approach, pressure: nan, levelField: c.intermediate.field(),
		superheat: c.cascade.superheat, quality: nan, superheatField: "cascade.superheat",
	}, Drop{})
	c.setCondenser(&c.condensation, c.condenserDrop)
}

// cascadeBounds returns the pressures between which the lower circuit can condense: above its evaporation, and so that
// the upper circuit evaporates below its condensation. It fixes the geometric mean of evaporating and condensing
// temperature, half the approach above it, for a request that does not say.
func (c *circuit) cascadeBounds() (low, high float64) {
	c.setLow(&c.evaporation, c.evaporatorDrop)
	coldest := c.low.dew
	low = c.low.pressure
	c.enter(upper)
	warmest := c.condensation.temperature
	if c.refused == nil && !isGiven(warmest) {
		var err error
		if warmest, err = c.fluid.saturationTemperature(c.condensation.pressure, gas); err != nil {
			c.refuse(c.noState(condenserOutlet, c.condensation.field(), err))
		}
	}
	c.enter(lower)
	if c.refused != nil {
		return nan, nan
	}
	ceiling := min(warmest+c.cascade.approach, c.fluid.Critical().T)
	mean := min(math.Sqrt(coldest*warmest)+c.cascade.approach/2, ceiling)
	if !(coldest < ceiling) {
		c.refuse(Refusal{
			Code: PressuresOutOfOrder, Field: c.evaporation.field(),
			Message: message("evaporation at %s must be below what the upper circuit can serve, %s", temperature(coldest), temperature(ceiling)),
		})
		return nan, nan
	}
	c.middle.pressure = c.intermediateAt(mean)
	return low, c.intermediateAt(ceiling)
}
