package cycle

// Solve computes the cycle that r describes. It returns a [*RefusedError] for a request that cannot be.
func Solve(r *Request) (*Solution, error) {
	var c circuit
	if c.fill(r); len(c.refusals) > 0 {
		return nil, &RefusedError{c.refusals}
	}
	c.fluid = r.Refrigerant
	c.refrigerants[only] = r.Refrigerant
	c.figures = noFigures
	c.run()
	if c.refused != nil {
		return nil, &RefusedError{[]Refusal{*c.refused}}
	}
	s := c.solution(r)
	if c.refused != nil {
		return nil, &RefusedError{[]Refusal{*c.refused}}
	}
	return s, nil
}

// run fixes the pressures and puts the machine together.
func (c *circuit) run() {
	c.setLow(&c.evaporation)
	if c.refused != nil {
		return
	}
	c.setCondenser(&c.condensation)
	if c.refused != nil {
		return
	}
	c.assemble()
	if c.evaporation.mean {
		c.meanEvaporation()
	}
}

// assemble puts the machine together at the pressures in force.
func (c *circuit) assemble() {
	c.clear()
	switch c.layout {
	case SingleStage:
		c.singleStage()
	}
}
