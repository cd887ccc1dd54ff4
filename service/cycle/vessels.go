package cycle

import "dewmark/props"

// middle is what is known of the intermediate pressure.
type middle struct {
	pressure float64     // Pa
	bubble   props.State // saturated liquid there
	dew      props.State // saturated vapour there
}

// setMiddle fixes the intermediate pressure.
func (c *circuit) setMiddle(p float64) {
	c.middle = middle{pressure: p}
	var err error
	if c.middle.bubble, err = c.fluid.bubbleAt(p); err == nil {
		c.middle.dew, err = c.fluid.dewAt(p)
	}
	if err != nil {
		c.refuse(Refusal{
			Code: NoState, Field: c.intermediate.field(),
			Message: message("no boiling at the intermediate pressure %s", pressure(p)), Cause: err,
		})
	}
}

// flashShare returns the vapour share of enthalpy h at the intermediate pressure: below zero in subcooled liquid.
func (m *middle) flashShare(h float64) float64 { return (h - m.bubble.H) / (m.dew.H - m.bubble.H) }

// separate parts what enters a vessel at the intermediate pressure into saturated liquid and saturated vapour. Subcooled
// liquid passes as it is. It returns the vapour's share of the flow.
func (c *circuit) separate(as part, in *node, atLiquid place, ofLiquid stream, atVapour place, ofVapour stream) (liquid, vapour *node, share float64) {
	bubble := c.middle.bubble
	share = c.middle.flashShare(in.H)
	switch {
	case share <= 0:
		share, bubble = 0, in.State
	case share >= 1:
		c.refuse(Refusal{
			Code: NoSolution, Field: c.intermediate.field(), Component: partNames[c.side][as], Label: in.label(),
			Message: message("no liquid is left at the intermediate pressure %s", pressure(c.middle.pressure)),
		})
	}
	liquid = c.put(atLiquid, ofLiquid, bubble, nil, "")
	vapour = c.put(atVapour, ofVapour, c.middle.dew, nil, "")
	c.record(as, one(in), two(liquid, vapour), 0, 0, nan)
	return liquid, vapour, share
}

// partsBlend reports whether a component is a vessel that parts liquid and vapour of a zeotropic blend. Both are taken to
// have the composition of the blend, which leaves the vessel without an entropy account, and the whole without an exergy
// account.
func (c *circuit) partsBlend(p part) bool {
	vessel := p == flashTank || p == receiver || p == separator || p == intercooler
	return vessel && c.hasVessel() && !c.fluid.withoutGlide()
}

// mix joins two flows at the pressure of the first.
func (c *circuit) mix(as part, a, b *node, at place, of stream) *node {
	fa, fb := c.flow(a), c.flow(b)
	var out *node
	if fb == 0 {
		out = c.put(at, of, a.State, nil, "")
	} else {
		st, err := c.fluid.atEnthalpyNear(a.P, (fa*a.H+fb*b.H)/(fa+fb), &a.State)
		out = c.put(at, of, st, err, "")
	}
	c.record(as, two(a, b), one(out), 0, 0, nan)
	return out
}

// branch divides a flow in two.
func (c *circuit) branch(in *node, at place, of stream, atOther place, ofOther stream) (a, b *node) {
	a = c.put(at, of, in.State, nil, "")
	b = c.put(atOther, ofOther, in.State, nil, "")
	c.record(liquidBranch, one(in), two(a, b), 0, 0, nan)
	return a, b
}

// share divides the flow of the high stream between the branch and the main stream.
func (c *circuit) share(branch float64) {
	c.flows[highStream], c.flows[branchStream], c.flows[mainStream] = 1, branch, 1-branch
	c.figures.InjectionRatio = branch
	c.figures.FlowRatio = 1 / (1 - branch)
}
