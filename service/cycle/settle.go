package cycle

import (
	"math"
	"slices"
)

// secondLawRounding is the entropy destruction that counts as rounding, as a fraction of the condenser's heat over the
// ambient temperature.
const secondLawRounding = 1e-9

// totals are the sums over a machine on the common scale of flows.
type totals struct{ heating, cooling, power float64 } // W

// totals adds up what the machine does.
func (c *circuit) totals() (t totals) {
	for i := range c.accountCount {
		a := &c.accounts[i]
		flow := c.flow(&c.nodes[a.in[0]])
		t.power += flow * a.work
		switch a.part {
		case evaporator:
			t.cooling += flow * a.heat
		case condenser, gasCooler:
			t.heating -= flow * a.heat
		}
	}
	return t
}

// works refuses what moves no heat from the evaporator to the condenser.
func (c *circuit) works(t totals) {
	perFlow := 1 / c.flow(&c.nodes[c.compressions[0].in]) // J/kg at label 1
	switch {
	case !(t.power > 0):
		c.refuse(Refusal{Code: NoSolution, Component: "compressor", Message: message("the compressor has nothing to do: %s", Number{Enthalpy, t.power * perFlow})})
	case !(t.cooling > 0):
		c.refuse(Refusal{Code: NoSolution, Field: c.highField(), Component: "evaporator", Message: message(
			"the evaporator would take up %s: the refrigerant arrives there with more enthalpy than it leaves with", Number{Enthalpy, t.cooling * perFlow})})
	case !(t.heating > 0):
		c.refuse(Refusal{Code: NoSolution, Field: c.highField(), Component: "condenser", Message: message(
			"the condenser would give off %s: the refrigerant arrives there with less enthalpy than it leaves with", Number{Enthalpy, t.heating * perFlow})})
	}
}

// scale returns the factor from the common scale of flows to kg/s.
func (c *circuit) scale(t totals) float64 {
	first := &c.compressions[0]
	in := &c.nodes[first.in]
	var unit float64 // the sized quantity on the common scale
	switch c.size.of {
	case byHeating:
		unit = t.heating
	case byCooling:
		unit = t.cooling
	case byPower:
		unit = t.power
	case byMassFlow:
		unit = c.flow(in)
	case bySweptVolume:
		unit = c.flow(in) / in.Rho / first.volumetric
	default:
		return 1 / c.flow(in)
	}
	return c.size.value / unit
}

// balance is the account of one component in full.
type balance struct {
	heat, work, residual, entropy float64
}

// balance closes the account of a component at the given scale of flows.
func (c *circuit) balance(a *account, scale float64) (b balance) {
	for _, i := range a.out {
		if i != noNode {
			flow := scale * c.flow(&c.nodes[i])
			b.residual -= flow * c.nodes[i].H
			b.entropy += flow * c.nodes[i].S
		}
	}
	for _, i := range a.in {
		if i != noNode {
			flow := scale * c.flow(&c.nodes[i])
			b.residual += flow * c.nodes[i].H
			b.entropy -= flow * c.nodes[i].S
		}
	}
	flow := scale * c.flow(&c.nodes[a.in[0]])
	b.heat, b.work = flow*a.heat, flow*a.work
	b.residual += b.heat + b.work
	if b.heat != 0 {
		b.entropy -= b.heat / a.heatT
	}
	return b
}

// solution settles the accounts in s.
func (c *circuit) solution(r *Request, s *Solution) {
	t := c.totals()
	c.works(t)
	scale := c.scale(t)
	s.Layout, s.With, s.Purpose, s.PerUnit = r.Layout, r.With, c.purpose, c.size.of == perUnit
	s.Ambient, s.Figures, s.Optima, s.StatesAsked = c.ambient, c.figures, c.optima, c.fluid.asked
	c.settleStates(s, scale)
	c.settleComponents(s, scale, t)
	c.settleCompressors(s, scale)
	c.settlePerformance(s, scale, t)
	c.raise(s)
	s.Cautions = c.cautions
}

// again returns a list of n elements in the memory of one that is no longer needed, if that is enough.
func again[T any](list []T, n int) []T { return slices.Grow(list[:0], n)[:n] }

// inOrder sets list to the numbers of the keys in rising order, which hardly needs more than one pass.
func inOrder(list []int8, keys []int16) {
	for i := range list {
		list[i] = int8(i)
		for j := i; j > 0 && keys[list[j]] < keys[list[j-1]]; j-- {
			list[j], list[j-1] = list[j-1], list[j]
		}
	}
}

func (c *circuit) settleStates(s *Solution, scale float64) {
	var order [maxNodes]int8
	var keys [maxNodes]int16
	list := order[:c.nodeCount]
	for i := range list {
		keys[i] = int16(c.nodes[i].side)*int16(placeCount) + int16(c.nodes[i].place)
	}
	inOrder(list, keys[:])
	s.States = again(s.States, c.nodeCount)
	for i, k := range list {
		n := &c.nodes[k]
		name := &placeNames[n.side][n.place]
		at := &s.States[i]
		at.Label, at.Place, at.Refrigerant = name.label, name.words, c.refrigerants[n.side]
		at.MassFlow, at.State = scale*c.flow(n), n.State
	}
}

func (c *circuit) labels(p ports) []string {
	a := &c.nodes[p[0]]
	if p[1] == noNode {
		return labelLists[a.side][a.place]
	}
	labels := make([]string, 0, len(p))
	for _, i := range p {
		if i != noNode {
			labels = append(labels, c.nodes[i].label())
		}
	}
	return labels
}

func (c *circuit) settleComponents(s *Solution, scale float64, t totals) {
	var order [maxAccounts]int8
	var keys [maxAccounts]int16
	list := order[:c.accountCount]
	for i := range list {
		keys[i] = int16(c.accounts[i].side)*int16(partCount) + int16(c.accounts[i].part)
	}
	inOrder(list, keys[:])
	s.Components = again(s.Components, c.accountCount)
	k := &s.Closure
	*k = Closure{SmallestEntropyGeneration: math.Inf(1)}
	tolerance := secondLawRounding * scale * max(t.heating, t.power) / c.ambient
	received, delivered := 0.0, 0.0 // exergy with heat
	for i, j := range list {
		a := &c.accounts[j]
		b := c.balance(a, scale)
		if c.partsBlend(a.part) {
			b.entropy = nan
		}
		comp := &s.Components[i]
		*comp = Component{
			Name: partNames[a.side][a.part], Inlets: c.labels(a.in), Outlets: c.labels(a.out),
			MassFlow: scale * c.flow(&c.nodes[a.in[0]]),
			Heat:     b.heat, Work: b.work, HeatTemperature: nan,
			EntropyGeneration: b.entropy, ExergyDestruction: c.ambient * b.entropy,
		}
		for _, i := range a.in[1:] {
			if i != noNode && a.part.mixes() {
				comp.MassFlow += scale * c.flow(&c.nodes[i])
			}
		}
		k.EnergyResidualFraction += math.Abs(b.residual)
		k.ExergyDestruction += comp.ExergyDestruction
		if b.heat != 0 {
			comp.HeatTemperature = a.heatT
			if x := b.heat * (1 - c.ambient/a.heatT); x > 0 {
				received += x
			} else {
				delivered -= x
			}
		}
		if b.entropy < k.SmallestEntropyGeneration {
			k.SmallestEntropyGeneration, k.SmallestComponent = b.entropy, comp.Name
		}
		if b.entropy < -tolerance {
			c.refuse(c.againstSecondLaw(a, b.entropy))
		}
	}
	power := scale * t.power
	k.EnergyResidualFraction /= power
	k.ExergyDelivered, k.ExergyReceived = delivered, received
	k.ExergyResidualFraction = (power - k.ExergyDestruction - delivered + received) / power
	if !isGiven(k.ExergyDestruction) {
		k.ExergyDelivered, k.ExergyReceived = nan, nan
	}
}

// mixes reports whether all inlets of a component become one flow.
func (p part) mixes() bool {
	return p != internalExchanger && p != economiser && p != cascadeExchanger
}

func (c *circuit) settleCompressors(s *Solution, scale float64) {
	s.Compressors = again(s.Compressors, c.compressionCount)
	for i := range s.Compressors {
		k := &c.compressions[i]
		in, out := &c.nodes[k.in], &c.nodes[k.out]
		flow := scale * c.flow(in)
		s.Compressors[i] = CompressorPerformance{
			Name: partNames[k.side][k.part], MassFlow: flow, Power: flow * k.work,
			IsentropicEfficiency: k.isentropic, VolumetricEfficiency: k.volumetric,
			PressureRatio: out.P / in.P, DischargeTemperature: out.T,
			SuctionVolumeFlow: flow / in.Rho, SweptVolumeFlow: flow / in.Rho / k.volumetric,
		}
		if k.sharesVolume {
			s.Compressors[i].VolumetricEfficiency, s.Compressors[i].SweptVolumeFlow = nan, nan
		}
	}
}

func (c *circuit) settlePerformance(s *Solution, scale float64, t totals) {
	first := &s.Compressors[0]
	p := &s.Performance
	*p = Performance{
		MassFlow:                  first.MassFlow,
		HeatingCapacity:           scale * t.heating,
		CoolingCapacity:           scale * t.cooling,
		CompressorPower:           scale * t.power,
		COPHeating:                t.heating / t.power,
		COPCooling:                t.cooling / t.power,
		CarnotCOPHeating:          nan,
		CarnotCOPCooling:          nan,
		IsentropicEfficiency:      first.IsentropicEfficiency,
		PressureRatio:             first.PressureRatio,
		SuctionVolumeFlow:         first.SuctionVolumeFlow,
		SweptVolumeFlow:           first.SweptVolumeFlow,
		VolumetricHeatingCapacity: scale * t.heating / first.SuctionVolumeFlow,
		VolumetricCoolingCapacity: scale * t.cooling / first.SuctionVolumeFlow,
	}
	for i := range s.Compressors {
		p.DischargeTemperature = max(p.DischargeTemperature, s.Compressors[i].DischargeTemperature)
	}
	if c.layout != Cascade {
		p.PressureRatio = c.high.discharge / c.nodes[c.compressions[0].in].P
	}
	if c.sink > c.source {
		p.CarnotCOPHeating = c.sink / (c.sink - c.source)
		p.CarnotCOPCooling = c.source / (c.sink - c.source)
	}
	if c.purpose == Heating {
		p.SecondLawEfficiency = p.COPHeating / p.CarnotCOPHeating
	} else {
		p.SecondLawEfficiency = p.COPCooling / p.CarnotCOPCooling
	}
	f := &s.Figures
	f.HighPressure = c.high.outlet.P
	f.IntermediatePressure = c.middle.pressure
	f.InternalExchangerHeat *= scale
}
