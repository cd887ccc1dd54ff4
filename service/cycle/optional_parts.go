package cycle

import "fmt"

// parts takes what only some layouts have and refuses it elsewhere.
func (v *plan) parts(r *Request) {
	v.internalExchanger(r.InternalExchanger)
	v.intermediatePressure(r)
	v.economiserPart(r.Economiser)
	v.intercoolerPart(r.Intercooler)
	v.cascadePart(r)
	v.ejectorPart(r.Ejector)
}

func (v *plan) internalExchanger(x *InternalExchanger) {
	switch {
	case !v.exchanger && x != nil:
		v.surplus("internal_exchanger", "an internal exchanger belongs to suction_exchanger, or to transcritical with suction_exchanger")
	case v.exchanger && (x == nil || x.Effectiveness == nil):
		v.missing("internal_exchanger.effectiveness", "a suction exchanger needs its effectiveness, 0 to 1")
	case v.exchanger:
		v.internal = internalExchange{
			effectiveness: v.number("internal_exchanger.effectiveness", x.Effectiveness, &nozzleBounds),
			liquid:        v.drop("internal_exchanger.liquid", x.Liquid),
			vapour:        v.drop("internal_exchanger.vapour", x.Vapour),
		}
	}
}

func (v *plan) intermediatePressure(r *Request) {
	v.intermediate = intermediate{pressure: nan, temperature: nan}
	m := r.Intermediate
	switch {
	case !v.hasSecond():
		if m != nil {
			v.surplus("intermediate", v.layout.String()+" has no intermediate pressure")
		}
		return
	case m == nil && v.layout == ParallelCompression:
		v.missing("intermediate", "parallel compression needs the receiver's pressure or dew temperature, or optimise")
		return
	case m == nil && v.layout == Cascade:
		v.caution(Caution{Code: Assumed, Field: "intermediate", Message: message("no intermediate temperature given: geometric mean of evaporating and condensing temperature assumed")})
		return
	case m == nil:
		v.caution(Caution{Code: Assumed, Field: "intermediate", Message: message("no intermediate pressure given: geometric mean of low and high pressure assumed")})
		return
	}
	v.exactlyOne("intermediate", []string{"pressure", "temperature", "optimise"}, m.Pressure != nil, m.Temperature != nil, m.Optimise != NoObjective)
	v.objective("intermediate.optimise", m.Optimise)
	v.intermediate = intermediate{
		pressure:    v.number("intermediate.pressure", m.Pressure, &pressureBounds),
		temperature: v.number("intermediate.temperature", m.Temperature, &temperatureBounds),
		optimise:    m.Optimise != NoObjective,
	}
	v.optimisable("intermediate.optimise", v.intermediate.optimise)
}

// optimisable refuses to search a pressure when a measured discharge temperature stands for the compressor's efficiency.
func (v *plan) optimisable(field string, wanted bool) {
	if wanted && (isGiven(v.first.dischargeTemperature) || v.hasSecond() && isGiven(v.second.dischargeTemperature)) {
		v.surplus(field, "a pressure is optimised at given isentropic efficiency; a measured discharge temperature belongs to one pressure")
	}
}

func (v *plan) economiserPart(x *Economiser) {
	if v.layout != EconomisedSubcooler {
		if x != nil {
			v.surplus("economiser", "an economiser belongs to economised_subcooler")
		}
		return
	}
	if x == nil {
		x = &Economiser{}
	}
	v.economiser = economising{
		approach:  nan,
		ratio:     v.number("economiser.injection_ratio", x.InjectionRatio, &fractionBounds),
		superheat: v.orAssume("economiser.injection_superheat", x.InjectionSuperheat, &differenceBounds, defaultInjectionSuperheat, "no superheat of the injection vapour given: %s assumed"),
	}
	switch {
	case x.InjectionRatio == nil:
		v.economiser.approach = v.orAssume("economiser.approach", x.Approach, &differenceBounds, defaultApproach, "no approach of the economiser given: %s assumed")
	case x.Approach != nil:
		v.surplus("economiser.injection_ratio", "give one of approach and injection_ratio")
	}
}

func (v *plan) intercoolerPart(x *Intercooler) {
	kinds := map[Layout][2]IntercoolerKind{
		TwoStageFlash:       {OpenIntercooler, FlashGasRemoval},
		TwoStageIntercooled: {ClosedIntercooler, ExternalIntercooler},
	}
	allowed, has := kinds[v.layout]
	if !has {
		if x != nil {
			v.surplus("intercooler", "an intercooler belongs to two_stage_flash and two_stage_intercooled")
		}
		return
	}
	if x == nil {
		x = &Intercooler{}
	}
	kind := x.Kind
	if kind == DefaultIntercooler {
		kind = allowed[0]
	}
	if kind != allowed[0] && kind != allowed[1] {
		v.wrong(NotAllowed, "intercooler.kind", message(fmt.Sprintf("the intercooler of %s must be %s or %s", v.layout, allowed[0], allowed[1])))
	}
	v.intercooler = intercooling{kind: kind, approach: nan, temperature: nan}
	switch kind {
	case ClosedIntercooler, ExternalIntercooler:
		v.intercooler.approach = v.orAssume("intercooler.approach", x.Approach, &differenceBounds, defaultApproach, "no approach of the intercooler given: %s assumed")
	default:
		if x.Approach != nil {
			v.surplus("intercooler.approach", "an approach belongs to a closed or an external intercooler")
		}
	}
	if kind != ExternalIntercooler {
		if x.Temperature != nil {
			v.surplus("intercooler.temperature", "the temperature of water or air belongs to an external intercooler")
		}
		return
	}
	v.intercooler.temperature = v.number("intercooler.temperature", x.Temperature, &temperatureBounds)
	if x.Temperature == nil {
		v.intercooler.temperature = v.sink
		if !isGiven(v.sink) {
			v.missing("intercooler.temperature", "an external intercooler needs the temperature of its water or air, or a sink temperature")
		}
	}
}

func (v *plan) cascadePart(r *Request) {
	x := r.Cascade
	if v.layout != Cascade {
		if x != nil {
			v.surplus("cascade", "an upper circuit belongs to cascade")
		}
		return
	}
	if x == nil {
		v.missing("cascade", "a cascade needs its upper circuit: the refrigerant, and if wanted approach, superheat and subcooling")
		return
	}
	if len(x.Upper) != 1 || x.Upper[0] == nil {
		v.wrong(NotAllowed, "cascade.upper", message("a cascade has two refrigerants: one below, in refrigerant, and exactly one above; %s are given above", plain(float64(len(x.Upper)))))
		return
	}
	v.cascade = cascading{
		upper:      x.Upper[0],
		approach:   v.orAssume("cascade.approach", x.Approach, &differenceBounds, defaultApproach, "no approach of the cascade exchanger given: %s assumed"),
		superheat:  v.orAssume("cascade.superheat", x.Superheat, &differenceBounds, 0, "no superheat given: %s assumed at the upper evaporator's outlet"),
		subcooling: v.orAssume("cascade.subcooling", x.Subcooling, &differenceBounds, 0, "no subcooling given: %s assumed at the lower condenser's outlet"),
	}
}

func (v *plan) ejectorPart(x *EjectorGeometry) {
	if v.layout != Ejector {
		if x != nil {
			v.surplus("ejector", "an ejector belongs to the ejector layout, or to transcritical with ejector")
		}
		return
	}
	if x == nil {
		x = &EjectorGeometry{}
	}
	v.ejector = ejecting{
		assumed:  x.MotiveEfficiency == nil || x.SuctionEfficiency == nil || x.DiffuserEfficiency == nil,
		motive:   v.orAssume("ejector.motive_efficiency", x.MotiveEfficiency, &nozzleBounds, defaultNozzleEfficiency, "no motive nozzle efficiency given: %s assumed"),
		suction:  v.orAssume("ejector.suction_efficiency", x.SuctionEfficiency, &nozzleBounds, defaultNozzleEfficiency, "no suction nozzle efficiency given: %s assumed"),
		diffuser: v.orAssume("ejector.diffuser_efficiency", x.DiffuserEfficiency, &nozzleBounds, defaultDiffuserEfficiency, "no diffuser efficiency given: %s assumed"),
		drop:     v.orAssume("ejector.suction_pressure_drop", x.SuctionPressureDrop, &dropBounds, defaultSuctionChamberDrop, "no pressure drop into the mixing section given: %s assumed"),
	}
}
