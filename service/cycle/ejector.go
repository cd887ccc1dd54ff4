package cycle

import (
	"math"

	"dewmark/props"
)

// ejectorExpansion expands the refrigerant behind the gas cooler in an ejector, which draws in the evaporator's vapour and
// raises its pressure. A separator behind it feeds the compressor with vapour and the evaporator with liquid. The gas
// cooler's flow is the high stream, the evaporator's the main stream.
func (c *circuit) ejectorExpansion() {
	vapour := c.put(evaporatorOutlet, mainStream, c.low.outlet, nil, "")
	cooled := c.put(condenserOutlet, highStream, c.high.outlet, nil, "")
	warmAt := valveInlet
	if c.exchanger {
		warmAt = liquidLineOutlet
	}
	warm := c.throughLiquidLine(cooled, warmAt)
	m := c.mixing(warm, vapour)
	c.flows[highStream], c.flows[mainStream], c.flows[branchStream] = 1, m.entrainment, 1+m.entrainment
	separated := c.put(separatorVapour, highStream, c.middle.dew, nil, "")
	liquid := c.put(lowValveInlet, mainStream, c.middle.bubble, nil, "")
	motive, gas := warm, separated
	if c.exchanger {
		motive, gas = c.exchangeInternally(warm, separated, &m.most, valveInlet, exchangerVapour)
	}
	st, err := c.fluid.atEnthalpy(c.middle.pressure, m.enthalpy)
	mixed := c.put(ejectorOutlet, branchStream, st, err, "ejector")
	c.record(ejector, two(motive, vapour), one(mixed), 0, 0, nan)
	c.record(separator, one(mixed), two(liquid, separated), 0, 0, nan)
	hot := c.compress(onlyStage, &c.first, c.throughSuctionLine(gas, suction), c.high.discharge)
	c.reject(c.throughDischargeLine(hot), cooled)
	c.evaporate(c.valve(expansionValve, liquid, c.low.inlet, evaporatorInlet), vapour)
	c.rateEjector(m, vapour)
}

// mixing is an ejector at work. Speeds in m/s.
type mixing struct {
	entrainment                      float64 // suction flow over motive flow
	enthalpy                         float64 // of both flows together, J/kg
	motiveSpeed, suctionSpeed, speed float64
	motive                           props.State // at the motive nozzle's inlet
	most                             internalLimits
}

// mixingSection is what an ejector's mixing section is known by before the separator's pressure is.
type mixingSection struct {
	pressure     float64
	bubble, dew  props.State
	suctionSpeed float64
	motiveSpeed  float64 // without an internal exchanger, which makes it depend on the separator's pressure
}

// mixing finds the separator's pressure and with it the state of the ejector, by constant-pressure mixing in one dimension:
// Kornhauser 1990, International Refrigeration and Air Conditioning Conference at Purdue. The separator takes exactly the
// vapour that the compressor draws when the quality behind the diffuser is the motive share of the flow; together with the
// energy balance this gives the entrainment at any pressure, and the diffuser's balance is left for the search.
func (c *circuit) mixing(warm, vapour *node) (m mixing) {
	section := c.mixingSection(warm, vapour)
	if c.refused != nil {
		return m
	}
	miss := func(p float64) float64 {
		if c.refused != nil {
			return nan
		}
		c.setMiddle(p)
		m = c.mixedAt(warm, vapour, &section)
		return c.diffuserMiss(&m, &section)
	}
	p := section.pressure
	c.middle = middle{p, section.bubble, section.dew}
	m = c.mixedAt(warm, vapour, &section)
	f := c.diffuserMiss(&m, &section)
	if c.ejector.diffuser*m.speed*m.speed/2 < leastGain {
		c.checkEjector(&m)
		return m
	}
	// Most ejectors gain little of what there is to the critical pressure, where there is nothing to separate.
	next, fNext := p, f
	high := min(c.fluid.Critical().P, warm.P) * (1 - ejectorBracket)
	for step := ejectorStep; fNext < 0 && next < high; step *= 2 {
		p, f = next, fNext
		next = min(next*(1+step), high)
		fNext = miss(next)
	}
	p, err := root(p, f, next, fNext, miss)
	if err != nil {
		c.refuse(Refusal{
			Code: NoSolution, Field: "ejector", Component: "ejector",
			Message: message("no separator pressure between %s and %s closes the ejector's balance", pressure(section.pressure), pressure(high)), Cause: err,
		})
		return m
	}
	c.setMiddle(p)
	m = c.mixedAt(warm, vapour, &section)
	c.checkEjector(&m)
	return m
}

// leastShare keeps the flows of a trial apart from none at all.
const leastShare = 1e-3

// checkEjector refuses an ejector that does not lift the pressure enough, or a separator without one of its flows.
func (c *circuit) checkEjector(m *mixing) {
	r := Refusal{Code: NoSolution, Field: "ejector", Component: "ejector"}
	switch {
	case c.middle.pressure < c.low.inlet:
		r.Message = message("the ejector reaches %s, and the evaporator needs %s at its inlet", pressure(c.middle.pressure), pressure(c.low.inlet))
	case m.entrainment <= leastShare || 1/m.entrainment <= leastShare:
		r.Message = message("the separator cannot close its balance at %s", pressure(c.middle.pressure))
	default:
		return
	}
	c.refuse(r)
}

const (
	ejectorBracket = 1e-6 // relative distance of the search from the critical pressure
	ejectorStep    = 0.1  // relative first step in search of a bracket; usual lifts are 5 to 20 %
	leastGain      = 1e-6 // J/kg in the diffuser that lift the pressure by more than rounding
)

func (c *circuit) mixingSection(warm, vapour *node) (x mixingSection) {
	x.pressure = vapour.P - c.ejector.drop
	if !(x.pressure > 0) {
		c.refuse(Refusal{
			Code: OutOfBounds, Field: "ejector.suction_pressure_drop", Component: "ejector",
			Message: message("a pressure drop of %s leaves nothing of %s", Number{PressureDifference, c.ejector.drop}, pressure(vapour.P)),
		})
		return x
	}
	var err error
	if x.bubble, err = c.fluid.bubbleAt(x.pressure); err == nil {
		x.dew, err = c.fluid.dewAt(x.pressure)
	}
	if err != nil {
		c.refuse(c.noState(ejectorOutlet, "ejector.suction_pressure_drop", err))
		return x
	}
	x.suctionSpeed = c.nozzle(&vapour.State, x.pressure, c.ejector.suction)
	if !c.exchanger {
		x.motiveSpeed = c.nozzle(&warm.State, x.pressure, c.ejector.motive)
	}
	return x
}

// nozzle returns the speed behind a nozzle that expands refrigerant to pressure p.
func (c *circuit) nozzle(in *props.State, p, efficiency float64) float64 {
	if efficiency == 0 || p == in.P {
		return 0
	}
	end, err := c.fluid.atEntropy(p, in.S)
	if err != nil {
		c.refuse(c.noState(ejectorOutlet, "ejector", err))
		return nan
	}
	return math.Sqrt(2 * efficiency * max(in.H-end.H, 0))
}

// mixedAt returns the ejector at the separator pressure in force.
func (c *circuit) mixedAt(warm, vapour *node, x *mixingSection) (m mixing) {
	m.motive, m.motiveSpeed, m.suctionSpeed = warm.State, x.motiveSpeed, x.suctionSpeed
	if c.exchanger {
		m.most = c.internalLimits(warm, &node{State: c.middle.dew, place: separatorVapour})
		if q, _ := m.most.heat(c.internal.effectiveness, 1); q != 0 && c.refused == nil {
			var err error
			if m.motive, err = c.fluid.atEnthalpyNear(m.most.liquidPressure, warm.H-q, &warm.State); err != nil {
				c.refuse(c.noState(valveInlet, "internal_exchanger.effectiveness", err))
			}
		}
		m.motiveSpeed = c.nozzle(&m.motive, x.pressure, c.ejector.motive)
	}
	bubble, dew := &c.middle.bubble, &c.middle.dew
	share := (vapour.H - bubble.H) / (vapour.H - m.motive.H + dew.H - bubble.H) // of the motive flow
	share = min(max(share, leastShare), 1-leastShare)                           // the search may pass where no separator works
	m.entrainment = 1/share - 1
	m.enthalpy = share*m.motive.H + (1-share)*vapour.H
	m.speed = share*m.motiveSpeed + (1-share)*m.suctionSpeed // momentum
	return m
}

// diffuserMiss returns by how much the isentropic enthalpy at the separator's pressure is above what the diffuser can
// make of the flow's speed, J/kg.
func (c *circuit) diffuserMiss(m *mixing, x *mixingSection) float64 {
	kinetic := m.speed * m.speed / 2
	h := m.enthalpy - kinetic
	s := c.entropyAt(x, h)
	bubble, dew := &c.middle.bubble, &c.middle.dew
	if q := (s - bubble.S) / (dew.S - bubble.S); 0 <= q && q <= 1 {
		return bubble.H + q*(dew.H-bubble.H) - h - c.ejector.diffuser*kinetic
	}
	end, err := c.fluid.atEntropy(c.middle.pressure, s)
	if err != nil {
		c.refuse(c.noState(ejectorOutlet, "ejector", err))
		return nan
	}
	return end.H - h - c.ejector.diffuser*kinetic
}

// entropyAt returns the entropy in the mixing section at enthalpy h.
func (c *circuit) entropyAt(x *mixingSection, h float64) float64 {
	if q := (h - x.bubble.H) / (x.dew.H - x.bubble.H); 0 <= q && q <= 1 {
		return x.bubble.S + q*(x.dew.S-x.bubble.S)
	}
	st, err := c.fluid.atEnthalpy(x.pressure, h)
	if err != nil {
		c.refuse(c.noState(ejectorOutlet, "ejector", err))
	}
	return st.S
}

// rateEjector reports what the ejector does. Its efficiency is that of Elbel and Hrnjak 2008, International Journal of
// Refrigeration 31: work recovered in compressing the suction flow over work recoverable from the motive flow.
func (c *circuit) rateEjector(m mixing, vapour *node) {
	f := &c.figures
	f.EntrainmentRatio, f.FlowRatio = m.entrainment, 1/m.entrainment
	f.PressureLift = c.middle.pressure - vapour.P
	f.MotiveVelocity, f.SuctionVelocity, f.MixedVelocity = m.motiveSpeed, m.suctionSpeed, m.speed
	if c.refused != nil || c.searching {
		return
	}
	compressed, err := c.fluid.atEntropy(c.middle.pressure, vapour.S)
	if err != nil {
		return // the efficiency stays unknown
	}
	expanded, err := c.fluid.atEntropy(c.middle.pressure, m.motive.S)
	if err != nil {
		return
	}
	f.EjectorEfficiency = m.entrainment * (compressed.H - vapour.H) / (m.motive.H - expanded.H)
}
