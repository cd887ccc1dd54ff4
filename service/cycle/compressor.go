package cycle

// stage says where a compressor or a step of compression sits.
type stage struct {
	part         part
	isentropic   place
	discharge    place
	sharesVolume bool
}

var (
	onlyStage     = stage{compressor, isentropic, discharge, false}
	lowStage      = stage{lowCompressor, lowIsentropic, lowDischarge, false}
	highStage     = stage{highCompressor, highIsentropic, highDischarge, false}
	firstOfSteps  = stage{firstStep, firstStepIsentropic, firstStepDischarge, false}
	secondOfSteps = stage{secondStep, isentropic, discharge, true}
	parallelStage = stage{parallelCompressor, parallelIsentropic, parallelDischarge, false}
)

// compress takes refrigerant to pressure p. The power is the isentropic power over the efficiency, or follows from the
// measured discharge temperature; a fraction of it is lost as heat to the ambient.
func (c *circuit) compress(s stage, e *efficiencies, in *node, p float64) *node {
	if p < in.P {
		c.refuse(Refusal{
			Code: PressuresOutOfOrder, Field: c.highField(), Component: partNames[c.side][s.part],
			Message: message("discharge pressure %s must be above suction pressure %s", pressure(p), pressure(in.P)),
		})
	}
	end := c.putIsentropic(s.isentropic, in, p)
	ideal := end.H - in.H // J/kg
	efficiency, work := e.isentropic, ideal/e.isentropic
	kept := 1 - e.heatLoss // fraction of the power that stays in the refrigerant
	var out *node
	switch measured := e.dischargeTemperature; {
	case isGiven(measured):
		st, err := c.fluid.atTemperature(p, measured, gas)
		out = c.put(s.discharge, in.stream, st, err, e.fields.discharge)
		work = (out.H - in.H) / kept
		efficiency = min(ideal/work, 1)
		if c.refused == nil && !(work > 0 && ideal <= work*(1+efficiencyRounding)) {
			c.refuse(c.impossibleDischarge(s, e, in, end, work))
		}
	case kept*work == ideal:
		out = c.put(s.discharge, in.stream, end.State, nil, "")
	default:
		st, err := c.fluid.atEnthalpyNear(p, in.H+kept*work, &end.State)
		out = c.put(s.discharge, in.stream, st, err, e.fields.isentropic)
	}
	c.record(s.part, one(in), one(out), 0-e.heatLoss*work, work, c.ambient) // no negative zero
	if c.refused == nil {
		c.compressions[c.compressionCount] = compression{
			s.part, c.side, in.index, out.index, work, efficiency, e.volumetric, s.sharesVolume,
		}
		c.compressionCount++
	}
	return out
}

// efficiencyRounding is how far above 1 an efficiency from a measured discharge temperature may lie by rounding.
const efficiencyRounding = 1e-9

// putIsentropic puts the end of a compression from in to p without losses.
func (c *circuit) putIsentropic(at place, in *node, p float64) *node {
	if p == in.P {
		return c.put(at, in.stream, in.State, nil, "")
	}
	st, err := c.fluid.compressed(p, &in.State)
	return c.put(at, in.stream, st, err, "")
}

// impossibleDischarge explains why no compressor discharges at the measured temperature.
func (c *circuit) impossibleDischarge(s stage, e *efficiencies, in, end *node, work float64) Refusal {
	r := Refusal{
		Code: ImpossibleMeasurement, Field: e.fields.discharge,
		Component: partNames[c.side][s.part], Label: placeNames[c.side][s.discharge].label,
	}
	least := end.State // what a lossless compressor that loses the same fraction of heat would discharge
	if e.heatLoss > 0 {
		if st, err := c.fluid.atEnthalpy(end.P, in.H+(1-e.heatLoss)*(end.H-in.H)); err == nil {
			least = st
		}
	}
	r.Message = message("a discharge temperature of %s would mean an isentropic efficiency of %s, outside 0 to 1; it must be at least %s",
		temperature(e.dischargeTemperature), plain((end.H-in.H)/work), temperature(least.T))
	return r
}
