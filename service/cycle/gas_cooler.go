package cycle

// correlationRange is where a correlation for the best high-side pressure was fitted, in °C.
type correlationRange struct {
	evaporationMin, evaporationMax float64
	outletMin, outletMax           float64
}

// correlationRanges hold for the cycle with R744; a correlation without a stated range has none.
var correlationRanges = map[Correlation]correlationRange{
	Liao:   {-10, 20, 30, 60},
	Sarkar: {-10, 10, 30, 50},
}

// bestHighPressure returns the high-side pressure in Pa that a correlation recommends for R744 at evaporating temperature
// te and gas cooler outlet temperature t in °C.
func bestHighPressure(by Correlation, te, t float64) float64 {
	const bar = 1e5
	switch by {
	case Liao:
		return bar * ((2.778-0.0157*te)*t + 0.381*te - 9.34)
	case Sarkar:
		return bar * (4.9 + 2.256*t - 0.17*te + 0.002*t*t)
	default: // Chen and Gu, in terms of the outlet temperature
		return bar * (2.68*t - 6.797)
	}
}

// correlated returns the high-side pressure by the correlation that the request names.
func (c *circuit) correlated() float64 {
	g := &c.gasCooling
	if name := c.fluid.Designation(); name != "R744" {
		c.refuse(Refusal{
			Code: NotAllowed, Field: g.field(),
			Message: message("the correlations for the high-side pressure hold for R744 and not for " + name),
		})
		return nan
	}
	const zero = 273.15
	te, t := c.low.dew-zero, g.outlet-zero
	if r, stated := correlationRanges[g.correlation]; stated &&
		!(r.evaporationMin <= te && te <= r.evaporationMax && r.outletMin <= t && t <= r.outletMax) && !c.searching {
		c.caution(Caution{Code: CorrelationRange, Field: g.field(), Message: message(
			"evaporation at %s and a gas cooler outlet at %s lie outside the range of the correlation", temperature(c.low.dew), temperature(g.outlet))})
	}
	return bestHighPressure(g.correlation, te, t)
}
