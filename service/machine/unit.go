package machine

import (
	"math"

	"dewmark/service/cycle"
)

// Defaults of a machine. All are common practice.
const (
	defaultSuperheat       = 5.0   // K
	defaultHighPressureMax = 14e6  // Pa, as usual for R744
	aboveCritical          = 1.001 // lowest high-side pressure over the critical one
)

// unit is a machine that was checked, apart from what depends on its streams.
type unit struct {
	checker
	machine *Machine
	fluid   cycle.Refrigerant

	layout    cycle.Layout // SingleStage stands for every layout with one compressor that does the whole lift
	gasCooled bool
	ejecting  bool
	steps     bool // a second compressor or a second step
	simple    bool // suction and discharge follow from the two dew temperatures alone
	purpose   cycle.Purpose

	compressor drive
	second     *drive
	superheat  float64 // K
	subcooling float64 // K
	highSide   highSide
	limits     limits
	auxiliary  [2]auxiliary // of source and sink
	control    float64      // W
}

type highSide struct {
	pressure    float64 // Pa; NaN when not given
	correlation cycle.Correlation
	optimise    bool
	min, max    float64 // Pa
}

// limit is one scalar limit.
type limit struct {
	field    string
	quantity cycle.Quantity
	value    float64
}

type limits struct {
	discharge, ratioMax, ratioMin, difference, high, low limit
	evaporation                                          float64 // K; NaN for none
}

// auxiliary is a fan or pump that was checked.
type auxiliary struct {
	power      float64 // W; NaN when it follows from the rise
	rise       float64 // Pa
	efficiency float64
	reference  float64 // m3/s; NaN for any flow
	toStream   float64
}

// newUnit checks m. The refusals are in the checker.
func newUnit(m *Machine) *unit {
	u := &unit{machine: m, fluid: m.Refrigerant, purpose: m.Purpose}
	if u.fluid == nil {
		u.missing("machine.refrigerant", "a refrigerant is needed")
		return u
	}
	if m.Purpose != cycle.Heating && m.Purpose != cycle.Cooling {
		u.wrong(NotAllowed, "machine.purpose", message("purpose must be heating or cooling"))
	}
	u.arrange(m)
	u.superheat = u.orAssume("machine.superheat", m.Superheat, &differenceBounds, defaultSuperheat, "no superheat given: %s assumed at the evaporator outlet")
	if u.gasCooled {
		if m.Subcooling != nil {
			u.surplus("machine.subcooling", "a gas cooler has no subcooling")
		}
	} else {
		u.subcooling = u.orAssume("machine.subcooling", m.Subcooling, &differenceBounds, 0, "no subcooling given: %s assumed at the condenser outlet")
	}
	u.pressures(m.GasCooler)
	u.compressor = u.drive(&m.Compressor)
	u.secondCompressor(m)
	u.limited(&m.Limits)
	u.auxiliary[0] = u.fan("machine.auxiliaries.source", &m.Auxiliaries.Source)
	u.auxiliary[1] = u.fan("machine.auxiliaries.sink", &m.Auxiliaries.Sink)
	u.control = u.or("machine.auxiliaries.control", m.Auxiliaries.Control, &powerBounds, 0)
	if x := m.Intermediate; x != nil && x.Optimise != cycle.NoObjective {
		u.wrong(NotAllowed, "machine.intermediate.optimise", message("give the intermediate pressure or temperature of a machine, or leave it out for the geometric mean"))
	}
	if len(u.refusals) == 0 {
		u.plausible(&u.compressor)
	}
	return u
}

// arrange finds out which components there are.
func (u *unit) arrange(m *Machine) {
	u.layout = cycle.SingleStage
	exchanger := m.Layout == cycle.SuctionExchanger
	inner := []cycle.Layout{m.Layout}
	if m.Layout == cycle.Transcritical {
		u.gasCooled = true
		inner = m.With
	}
	for _, l := range inner {
		switch l {
		case cycle.SingleStage:
		case cycle.SuctionExchanger:
			exchanger = true
		case cycle.Ejector:
			u.ejecting, u.gasCooled, u.layout = true, true, l
		case cycle.Cascade:
			u.wrong(NotAllowed, "machine.layout", message("a cascade has two compressors of their own displacement, which no operating point is found for; allowed is every other layout"))
		case cycle.EconomisedSubcooler, cycle.EconomisedFlash, cycle.TwoStageFlash, cycle.TwoStageIntercooled, cycle.ParallelCompression:
			u.steps, u.layout = true, l
		default:
			u.wrong(NotAllowed, "machine.layout", message("a layout is needed"))
		}
	}
	noLine := cycle.Drop{}
	u.simple = !exchanger && !u.steps && !u.ejecting && m.SuctionLine == (cycle.SuctionLine{}) && m.DischargeLine.Drop == noLine &&
		m.Condenser.Drop == noLine && (m.GasCooler == nil || m.GasCooler.Correlation == cycle.NoCorrelation)
}

// pressures takes how the high side of a gas cooler is set.
func (u *unit) pressures(h *HighSide) {
	const field = "machine.gas_cooler"
	if !u.gasCooled {
		if h != nil {
			u.surplus(field, "a gas cooler belongs to transcritical and ejector layouts")
		}
		return
	}
	if h == nil {
		u.missing(field, "a transcritical machine needs its gas cooler pressure, a correlation of it, or optimise")
		return
	}
	u.exactlyOne(field, []string{"pressure", "correlation", "optimise"}, h.Pressure != nil, h.Correlation != cycle.NoCorrelation, h.Optimise != cycle.NoObjective)
	critical := u.fluid.Critical().P
	s := highSide{
		pressure:    u.number(field+".pressure", h.Pressure, &pressureBounds),
		correlation: h.Correlation,
		optimise:    h.Optimise != cycle.NoObjective,
		min:         u.or(field+".pressure_min", h.PressureMin, &pressureBounds, critical*aboveCritical),
		max:         u.or(field+".pressure_max", h.PressureMax, &pressureBounds, defaultHighPressureMax),
	}
	if s.min <= critical {
		u.wrong(OutOfBounds, field+".pressure_min", message("%s must lie above the critical pressure, %s", pressure(s.min), pressure(critical)))
	}
	if s.min >= s.max {
		u.wrong(OutOfBounds, field+".pressure_max", message("the highest pressure, %s, must lie above the lowest, %s", pressure(s.max), pressure(s.min)))
	}
	if s.pressure <= critical {
		u.wrong(OutOfBounds, field+".pressure", message("%s must lie above the critical pressure, %s", pressure(s.pressure), pressure(critical)))
	}
	u.highSide = s
}

// secondCompressor takes the laws of a second compressor.
func (u *unit) secondCompressor(m *Machine) {
	const field = "machine.second_compressor"
	k := m.SecondCompressor
	switch {
	case k == nil:
		return
	case !u.steps:
		u.surplus(field, "this layout has one compressor")
		return
	case len(k.Maps) > 0 || len(k.Envelopes) > 0 || k.SweptVolume != nil || k.Speed != nil || k.SpeedMin != nil || k.SpeedMax != nil:
		u.wrong(NotAllowed, field, message("a second compressor goes by laws of its efficiencies; its displacement follows from the flow"))
		return
	case k.IsentropicEfficiency == nil || k.VolumetricEfficiency == nil:
		u.missing(field, "a second compressor needs laws of its isentropic_efficiency and its volumetric_efficiency")
		return
	}
	u.second = &drive{
		field:      field,
		isentropic: u.law(field+".isentropic_efficiency", k.IsentropicEfficiency, false),
		volumetric: u.law(field+".volumetric_efficiency", k.VolumetricEfficiency, true),
		loss:       k.HeatLossFraction,
	}
	u.number(field+".heat_loss_fraction", k.HeatLossFraction, &lossBounds)
}

func (u *unit) limited(l *Limits) {
	take := func(name string, p *float64, b *bounds) limit {
		field := "machine.limits." + name
		return limit{field, b.quantity, u.number(field, p, b)}
	}
	u.limits = limits{
		discharge:   take("discharge_temperature", l.DischargeTemperature, &temperatureBounds),
		ratioMax:    take("pressure_ratio_max", l.PressureRatioMax, &liftRatioBounds),
		ratioMin:    take("pressure_ratio_min", l.PressureRatioMin, &liftRatioBounds),
		difference:  take("pressure_difference_min", l.PressureDifferenceMin, &riseBounds),
		high:        take("high_pressure", l.HighPressure, &pressureBounds),
		low:         take("low_pressure", l.LowPressure, &pressureBounds),
		evaporation: u.number("machine.limits.evaporation_max", l.EvaporationMax, &temperatureBounds),
	}
}

func (u *unit) fan(field string, a *Auxiliary) auxiliary {
	out := auxiliary{
		power:      u.number(field+".power", a.Power, &powerBounds),
		rise:       u.number(field+".pressure_rise", a.PressureRise, &riseBounds),
		efficiency: u.number(field+".efficiency", a.Efficiency, &efficiencyBounds),
		reference:  u.number(field+".reference_flow", a.ReferenceFlow, &volumeFlowBounds),
		toStream:   u.or(field+".heat_to_stream", a.HeatToStream, &fractionBounds, 0),
	}
	switch {
	case a.Power != nil && (a.PressureRise != nil || a.Efficiency != nil):
		u.surplus(field+".power", "give power, or pressure_rise and efficiency")
	case a.PressureRise != nil && a.Efficiency == nil:
		u.missing(field+".efficiency", "a pressure_rise needs the efficiency of fan or pump, motor and drive together")
	case a.PressureRise == nil && a.Efficiency != nil:
		u.missing(field+".pressure_rise", "an efficiency needs the pressure_rise")
	case a.Power == nil && a.PressureRise == nil:
		if a.ReferenceFlow != nil {
			u.missing(field+".power", "a reference_flow needs the power or the pressure_rise that belongs to it")
		}
		out.power = 0
	}
	return out
}

// at returns the power at a volume flow, and whether it is known there.
func (a *auxiliary) at(flow float64) (power float64, known bool) {
	part := 1.0
	if !math.IsNaN(a.reference) {
		part = flow / a.reference
	}
	switch {
	case a.power == 0:
		return 0, true
	case !math.IsNaN(a.power):
		power = a.power * part * part * part
	default:
		power = flow * a.rise * part * part / a.efficiency
		if math.IsNaN(a.reference) {
			power = flow * a.rise / a.efficiency
		}
	}
	return power, !math.IsNaN(power)
}
