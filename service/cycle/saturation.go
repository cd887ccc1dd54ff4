package cycle

// content of a pipe decides which saturation line counts.
type content bool

const (
	gas    content = false // dew line
	liquid content = true  // bubble line
)

// vapourPressure is a property model that has one boiling pressure at a temperature: bubble and dew line are one.
type vapourPressure interface {
	SaturationPressure(T float64) (float64, error)
	SaturationTemperature(p float64) (float64, error)
}

// withoutGlide reports whether the refrigerant has one saturation line.
func (c *circuit) withoutGlide() bool {
	_, one := c.fluid.(vapourPressure)
	return one
}

// saturationPressure returns the pressure at which a saturation line passes T.
func (c *circuit) saturationPressure(T float64, of content) (float64, error) {
	if f, one := c.fluid.(vapourPressure); one {
		return f.SaturationPressure(T)
	}
	at := c.fluid.DewPoint
	if of == liquid {
		at = c.fluid.BubblePoint
	}
	s, err := at(T)
	return s.P, err
}

// saturationTemperature returns the temperature at which a saturation line passes p.
func (c *circuit) saturationTemperature(p float64, of content) (float64, error) {
	if f, one := c.fluid.(vapourPressure); one {
		return f.SaturationTemperature(p)
	}
	at := c.fluid.DewPointAtPressure
	if of == liquid {
		at = c.fluid.BubblePointAtPressure
	}
	s, err := at(p)
	return s.T, err
}
