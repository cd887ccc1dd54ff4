package machine

import (
	"math"

	"dewmark/service/cycle"
)

// Defaults of exchangers. All are common practice.
const (
	defaultSlices          = 20
	defaultGasCoolerSlices = 100
	mostSlices             = 1000
	liquidShare            = 0.5
	airShare               = 0.7
	liquidExponent         = 0.8 // Dittus and Boelter, turbulent
	airExponent            = 0.5
)

// byInlet reports whether the inlet temperature of its stream alone fixes the level of an exchanger.
func (x *exchange) byInlet() bool {
	return math.IsNaN(x.ua) && math.IsNaN(x.pinch) && (x.gasCooler || x.approachOf == EnteringApproach)
}

// exchanger checks an exchanger; air says that its stream is moist air.
func (p *plan) exchanger(field string, e *Exchanger, evaporator, air bool) exchange {
	x := exchange{
		field: field, evaporator: evaporator, gasCooler: !evaporator && p.gasCooled,
		ua:       p.number(field+".ua", e.UA, &amountBounds),
		pinch:    p.number(field+".pinch", e.Pinch, &differenceBounds),
		approach: p.number(field+".approach", e.Approach, &differenceBounds),
		mean:     e.Reference == cycle.Mean,
		fouling:  p.or(field+".fouling", e.Fouling, &resistanceBounds, 0),
		slices:   defaultSlices,
	}
	p.exactlyOne(field, []string{"ua", "pinch", "approach"}, e.UA != nil, e.Pinch != nil, e.Approach != nil)
	if x.gasCooler {
		x.slices = defaultGasCoolerSlices
	}
	if e.Slices != nil {
		x.slices, x.always = *e.Slices, true
		if !(1 <= x.slices && x.slices <= mostSlices) {
			p.wrong(OutOfBounds, field+".slices", message("%s is out of bounds: it must be at least %s and at most %s",
				plain(float64(x.slices)), plain(1), plain(mostSlices)))
		}
	}
	p.arrange(&x, e, air)
	p.approaching(&x, e, air)
	p.ratios(&x, e)
	p.resistances(&x, e, air)
	return x
}

func (p *plan) arrange(x *exchange, e *Exchanger, air bool) {
	x.arrangement = e.Arrangement
	switch {
	case int(e.Arrangement) >= len(arrangementNames):
		p.wrong(NotAllowed, x.field+".arrangement", message("there is no such arrangement"))
	case e.Arrangement == DefaultArrangement && air:
		x.arrangement = CrossflowUnmixed
	case e.Arrangement == DefaultArrangement:
		x.arrangement = Counterflow
	}
}

func (p *plan) approaching(x *exchange, e *Exchanger, air bool) {
	x.approachOf = e.ApproachOf
	switch {
	case int(e.ApproachOf) >= len(approachNames):
		p.wrong(NotAllowed, x.field+".approach_of", message("approach_of must be leaving or entering"))
	case x.gasCooler:
		if e.ApproachOf == LeavingApproach {
			p.wrong(NotAllowed, x.field+".approach_of", message("the approach of a gas cooler is that of the refrigerant's outlet above the entering stream"))
		}
		x.approachOf = EnteringApproach
	case e.ApproachOf == DefaultApproach:
		x.approachOf = LeavingApproach
		if air {
			x.approachOf = EnteringApproach
		}
	}
	if air && x.evaporator && (e.Pinch != nil || e.Approach != nil && x.approachOf == LeavingApproach) {
		p.wrong(NotAllowed, x.field, message("an evaporator that cools moist air goes by ua or by an approach to the entering stream: what leaves depends on condensation"))
	}
}

func (p *plan) ratios(x *exchange, e *Exchanger) {
	x.superheat = p.or(x.field+".superheat_ratio", e.SuperheatRatio, &ratioBounds, 1)
	x.desuperheat = p.or(x.field+".desuperheat_ratio", e.DesuperheatRatio, &ratioBounds, 1)
	x.subcooling = p.or(x.field+".subcooling_ratio", e.SubcoolingRatio, &ratioBounds, 1)
	type ratio struct {
		name string
		v    *float64
	}
	foreign := []ratio{{"superheat_ratio", e.SuperheatRatio}}
	switch {
	case x.evaporator:
		foreign = []ratio{{"desuperheat_ratio", e.DesuperheatRatio}, {"subcooling_ratio", e.SubcoolingRatio}}
		x.single = e.UA != nil && e.SuperheatRatio == nil
	case x.gasCooler:
		foreign = append(foreign, ratio{"desuperheat_ratio", e.DesuperheatRatio}, ratio{"subcooling_ratio", e.SubcoolingRatio})
	default:
		x.single = e.UA != nil && e.DesuperheatRatio == nil && e.SubcoolingRatio == nil
	}
	for _, r := range foreign {
		if r.v != nil {
			p.surplus(x.field+"."+r.name, "this exchanger has no such zone")
		}
	}
}

func (p *plan) resistances(x *exchange, e *Exchanger, air bool) {
	share, exponent := liquidShare, liquidExponent
	if air {
		share, exponent = airShare, airExponent
	}
	matters := e.ReferenceFlow != nil || air && x.evaporator && e.UA != nil
	if matters {
		x.share = p.orAssume(x.field+".secondary_share", e.SecondaryShare, &efficiencyBounds, share,
			"no share of the thermal resistance on the side of the stream given: %s assumed (common practice)")
	} else {
		x.share = p.or(x.field+".secondary_share", e.SecondaryShare, &efficiencyBounds, share)
	}
	x.reference = p.number(x.field+".reference_flow", e.ReferenceFlow, &massFlowBounds)
	x.exponent = exponent
	if e.FlowExponent != nil {
		x.exponent = p.value(x.field+".flow_exponent", *e.FlowExponent, &exponentBounds)
		if e.ReferenceFlow == nil {
			p.missing(x.field+".reference_flow", "a flow_exponent needs the flow that ua belongs to")
		}
	}
	if e.UA == nil && (e.ReferenceFlow != nil || e.Fouling != nil) {
		p.surplus(x.field, "reference_flow and fouling change a ua, and none is given")
	}
}
