package cycle

// CautionCode is a stable name for a reservation about an answer.
type CautionCode string

// The cautions.
const (
	Assumed                   CautionCode = "assumed"                     // a number the request did not give
	PerUnitFlow               CautionCode = "per_unit_flow"               // no size: everything per 1 kg/s
	WetSuction                CautionCode = "wet_suction"                 // liquid at a compressor's suction
	WetDischarge              CautionCode = "wet_discharge"               // liquid at a compressor's discharge
	HotDischarge              CautionCode = "hot_discharge"               // above a usual limit for oil and valves
	HighPressureRatio         CautionCode = "high_pressure_ratio"         // above what one stage usually does
	BelowAtmosphere           CautionCode = "below_atmosphere"            // a leak draws air in
	NearCritical              CautionCode = "near_critical"               // condensing close to the critical pressure
	SubcoolingBelowSink       CautionCode = "subcooling_below_sink"       // liquid colder than what cools the condenser
	SubcoolingBelowSource     CautionCode = "subcooling_below_source"     // liquid colder than the heat source
	SubcooledBelowEvaporation CautionCode = "subcooled_below_evaporation" // liquid colder than the evaporator
	FlashBeforeValve          CautionCode = "flash_before_valve"          // vapour at an expansion valve's inlet
	OutletAboveSource         CautionCode = "outlet_above_source"         // vapour leaves warmer than the heat source
	Extrapolated              CautionCode = "extrapolated"                // a state outside the validity of the equation of state
	OptimumAtLimit            CautionCode = "optimum_at_limit"            // the search ended at its bound
	CorrelationRange          CautionCode = "correlation_range"           // a correlation outside its stated range
	OptimisticEjector         CautionCode = "optimistic_ejector"          // better than real ejectors
	CompositionShift          CautionCode = "composition_shift"           // a vessel parts the components of a blend, which is neglected
)

// Caution is a reservation about an answer.
type Caution struct {
	Code    CautionCode
	Field   string // path of the request's field it speaks of, or ""
	Label   string // place in the circuit, or ""
	Message Message
}

// Limits beyond which a practitioner asks back. All are common practice and none replaces a maker's data.
const (
	usualDischarge    = 120 + 273.15 // K, at the flange, halocarbons and hydrocarbons; 120 to 130 °C are usual
	hardyDischarge    = 140 + 273.15 // K, R717 and R744; 140 to 150 °C are usual
	usualRatio        = 10.0         // one stage, reciprocating; 8 to 10 are usual
	poorEjector       = 0.15         // efficiency by Elbel and Hrnjak
	bestEjector       = 0.35
	nearCriticalShare = 0.98 // of the critical pressure: latent heat and densities change steeply from there
)

// noticedGlide is the difference of dew and bubble temperature from which a vessel parts the components of a blend, K.
const noticedGlide = 0.01

// aboveEnough is the temperature difference that counts, K; less is rounding.
const aboveEnough = 1e-6

func (p *plan) caution(k Caution) {
	if p.cautions == nil {
		p.cautions = make([]Caution, 0, 8) // more than most requests raise
	}
	p.cautions = append(p.cautions, k)
}

// raise looks over a solved cycle as a practitioner would.
func (c *circuit) raise(s *Solution) {
	c.raiseCompressors()
	lowest := -1
	for i := range s.States {
		at := &s.States[i]
		if at.State.P < c.air && (lowest < 0 || at.State.P < s.States[lowest].State.P) {
			lowest = i
		}
		if x, can := at.Refrigerant.(extrapolator); can && x.Extrapolated(at.State) {
			c.caution(Caution{Code: Extrapolated, Label: at.Label, Message: message("the state at " + at.Label + " lies outside the validity of the equation of state")})
		}
	}
	if lowest >= 0 {
		at := &s.States[lowest]
		c.caution(Caution{Code: BelowAtmosphere, Label: at.Label, Message: message(
			"the pressure falls to %s, below that of the air around, %s: a leak draws air and moisture in", pressure(at.State.P), pressure(c.air))})
	}
	for i := range c.nodeCount {
		c.raiseAt(&c.nodes[i])
	}
	if glide := c.middle.dew.T - c.middle.bubble.T; c.hasVessel() && glide > noticedGlide {
		c.caution(Caution{Code: CompositionShift, Field: "refrigerant", Message: message(
			"liquid and vapour of the vessel at the intermediate pressure differ in composition, with a glide of %s; both are taken as the blend itself, which leaves the vessel without an entropy account and the cycle without an exergy account", difference(glide))})
	}
	for i := range c.optima {
		if o := &c.optima[i]; o.AtLimit {
			text := "the COP still rises at the end of the search, %s"
			if o.atLow && o.Field == c.gasCooling.field() && c.low.pressure < c.refrigerants[c.side].Critical().P {
				text += ", the critical pressure: the outlet is so cold that a condenser below it may serve better"
			}
			c.caution(Caution{Code: OptimumAtLimit, Field: o.Field, Message: message(text, pressure(o.Pressure))})
		}
	}
	if e := c.figures.EjectorEfficiency; c.ejector.assumed || e > bestEjector {
		c.caution(Caution{Code: OptimisticEjector, Field: "ejector", Message: message(
			"the model in one dimension gives the ejector an efficiency of %s; real ones reach %s to %s, the poorer away from their design point (common practice)",
			plain(e), plain(poorEjector), plain(bestEjector))})
	}
}

// raiseAt looks at one place.
func (c *circuit) raiseAt(n *node) {
	switch n.place {
	case evaporatorOutlet:
		if n.side != upper && n.T > c.source+aboveEnough {
			c.caution(Caution{Code: OutletAboveSource, Field: "source_temperature", Label: n.label(), Message: message(
				"vapour leaves the evaporator at %s, warmer than the heat source at %s", temperature(n.T), temperature(c.source))})
		}
	case condenserOutlet:
		c.raiseCondensed(n)
	case valveInlet, highValveInlet, lowValveInlet, injectionValveInlet:
		if n.Quality > 0 {
			c.caution(Caution{Code: FlashBeforeValve, Label: n.label(), Message: message(
				"liquid flashes before the expansion valve: quality %s at its inlet", plain(n.Quality))})
		}
		if n.place == valveInlet && n.T < c.evaporating[n.side]-aboveEnough {
			c.caution(Caution{Code: SubcooledBelowEvaporation, Label: n.label(), Message: message(
				"liquid reaches the expansion valve at %s, colder than it evaporates, %s", temperature(n.T), temperature(c.evaporating[n.side]))})
		}
	}
}

// raiseCondensed looks at what leaves a condenser or gas cooler.
func (c *circuit) raiseCondensed(n *node) {
	fluid := c.refrigerants[n.side]
	critical := fluid.Critical()
	if !c.gasCooled && n.P > nearCriticalShare*critical.P {
		field := c.condensation.field()
		if n.side == lower {
			field = c.intermediate.field()
		}
		c.caution(Caution{Code: NearCritical, Field: field, Label: n.label(), Message: message(
			"condensing at %s is within 2 %% of the critical pressure, %s: properties and results change steeply there", pressure(n.P), pressure(critical.P))})
	}
	if n.side != lower && n.T < c.sink-aboveEnough {
		c.caution(Caution{Code: SubcoolingBelowSink, Field: "sink_temperature", Label: n.label(), Message: message(
			"refrigerant leaves the condenser or gas cooler at %s, colder than the sink at %s", temperature(n.T), temperature(c.sink))})
	}
	if n.side != upper && n.T < c.source-aboveEnough {
		c.caution(Caution{Code: SubcoolingBelowSource, Field: "source_temperature", Label: n.label(), Message: message(
			"refrigerant leaves the condenser or gas cooler at %s, colder than the heat source at %s", temperature(n.T), temperature(c.source))})
	}
}

// raiseCompressors looks at the ends of each compression.
func (c *circuit) raiseCompressors() {
	for i := range c.compressionCount {
		k := &c.compressions[i]
		in, out := &c.nodes[k.in], &c.nodes[k.out]
		if in.Quality < 1 {
			c.caution(Caution{Code: WetSuction, Label: in.label(), Message: message(
				"wet vapour enters the compressor, quality %s: liquid can break it", plain(in.Quality))})
		}
		if out.Quality < 1 {
			c.caution(Caution{Code: WetDischarge, Label: out.label(), Message: message(
				"wet vapour leaves the compressor, quality %s", plain(out.Quality))})
		}
		if limit := dischargeLimit(c.refrigerants[k.side].Designation()); out.T > limit {
			c.caution(Caution{Code: HotDischarge, Label: out.label(), Message: message(
				"discharge at %s is above %s, a usual limit for oil and valves (common practice; the maker's data govern)", temperature(out.T), temperature(limit))})
		}
		if ratio := out.P / in.P; ratio > usualRatio {
			c.caution(Caution{Code: HighPressureRatio, Label: out.label(), Message: message(
				"a pressure ratio of %s is above %s, about the most that one stage does (common practice)", plain(ratio), plain(usualRatio))})
		}
	}
}

func dischargeLimit(designation string) float64 {
	if designation == "R717" || designation == "R744" {
		return hardyDischarge
	}
	return usualDischarge
}
