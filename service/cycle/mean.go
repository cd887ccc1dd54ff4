package cycle

import "math"

// meanCondensing returns the pressure at which the mean of bubble and dew temperature is T. It lies between the
// pressures at which the two lines themselves pass T.
func (c *circuit) meanCondensing(T float64) (float64, error) {
	low, err := c.fluid.saturationPressure(T, gas)
	if err != nil || c.fluid.withoutGlide() {
		return low, err
	}
	high, err := c.fluid.saturationPressure(T, liquid)
	if err != nil {
		return nan, err
	}
	var failure error
	miss := func(p float64) float64 {
		bubble, errB := c.fluid.saturationTemperature(p, liquid)
		dew, errD := c.fluid.saturationTemperature(p, gas)
		for _, e := range [...]error{errB, errD} {
			if e != nil && failure == nil {
				failure = e
			}
		}
		return (bubble+dew)/2 - T
	}
	p, err := root(low, miss(low), high, miss(high), miss)
	if failure != nil {
		return nan, failure
	}
	return p, err
}

const (
	// meanTolerance is how far the mean evaporating temperature may lie from the one asked for without a search, relative:
	// ten times what a pressure-to-temperature round trip of a saturation curve loses.
	meanTolerance = 1e-12
	// meanFactor is the first step of the evaporating pressure in search of a bracket; each further step is twice as wide.
	meanFactor = 1.02
	meanSteps  = 12 // together beyond any range of pressures
)

// meanEvaporation moves the evaporating pressure until the mean of the evaporator's inlet and dew temperature is the one
// asked for. The inlet temperature is that behind the expansion, so the machine is put together at each trial.
func (c *circuit) meanEvaporation() {
	e := &c.evaporation
	miss := func(p float64) float64 {
		if !c.goesOn() {
			return nan
		}
		c.meanTrial = p
		c.atLowSide()
		return (c.evaporatorInlet+c.evaporatingDew())/2 - e.temperature
	}
	c.atLowSide() // at the dew point
	p, f := c.figures.EvaporatingPressure, (c.evaporatorInlet+c.evaporatingDew())/2-e.temperature
	factor := meanFactor
	if f > 0 {
		factor = 1 / factor
	}
	for range meanSteps {
		if c.refused != nil || math.Abs(f) <= meanTolerance*e.temperature {
			return
		}
		next := p * factor
		fNext := miss(next)
		if f*fNext <= 0 {
			if found, err := root(p, f, next, fNext, miss); err == nil {
				miss(found)
				return
			}
		}
		p, f = next, fNext
		factor *= factor
	}
	c.refuse(Refusal{
		Code: NoSolution, Field: e.field(),
		Message: message("no evaporating pressure has a mean temperature of %s", temperature(e.temperature)),
	})
}

// evaporatingDew returns the dew temperature in the machine's evaporator.
func (c *circuit) evaporatingDew() float64 {
	if c.layout == Cascade {
		return c.evaporating[lower]
	}
	return c.evaporating[only]
}
