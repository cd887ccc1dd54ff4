package cycle

import (
	"fmt"
	"strings"

	"dewmark/props"
)

// Defaults for what a request leaves out. All are common practice, and each use of one but the last is a caution.
const (
	defaultIsentropicEfficiency = 0.65
	defaultVolumetricEfficiency = 0.90
	defaultAmbient              = 298.15 // K
	defaultApproach             = 5.0    // K, economiser, intercooler and cascade exchanger
	defaultInjectionSuperheat   = 5.0    // K
	defaultNozzleEfficiency     = 0.8
	defaultDiffuserEfficiency   = 0.75
	defaultSuctionChamberDrop   = 30e3 // Pa
	defaultHighPressureMax      = 14e6 // Pa
)

// fill takes over r: it checks every field, and what belongs together, and fills in the defaults. What is wrong with r is
// in the refusals then.
func (v *plan) fill(r *Request) {
	if r.Refrigerant == nil {
		v.missing("refrigerant", "a refrigerant is needed")
	}
	v.arrangement(r)
	v.temperatures(r)
	v.first = v.compressor(&firstFields, &r.Compressor)
	v.second = v.secondCompressor(r)
	v.sides(r)
	v.drops(r)
	v.parts(r)
	v.sized(r.Size)
	v.air = v.orDefault("site.ambient_pressure", r.AmbientPressure, &pressureBounds, props.StandardAtmosphere)
}

func (v *plan) wrong(code RefusalCode, field string, m Message) {
	v.refusals = append(v.refusals, Refusal{Code: code, Field: field, Message: m})
}

func (v *plan) missing(field, text string) { v.wrong(Missing, field, message(text)) }

func (v *plan) surplus(field, text string) { v.wrong(Surplus, field, message(text)) }

// assume cautions that a default was used.
func (v *plan) assume(field, text string, n Number) float64 {
	v.caution(Caution{Code: Assumed, Field: field, Message: message(text, n)})
	return n.Value
}

// exactlyOne checks that one of some alternatives is given.
func (v *plan) exactlyOne(path string, names []string, given ...bool) {
	count := 0
	for _, g := range given {
		if g {
			count++
		}
	}
	if count == 1 {
		return
	}
	text := fmt.Sprintf("exactly one of %s is needed, %d are given", strings.Join(names, ", "), count)
	if count == 0 {
		v.missing(path, text)
	} else {
		v.surplus(path, text)
	}
}

// arrangement finds out which components there are.
func (v *plan) arrangement(r *Request) {
	if r.Purpose != Heating && r.Purpose != Cooling {
		v.wrong(NotAllowed, "purpose", message("purpose must be heating or cooling"))
	}
	v.purpose = r.Purpose
	switch r.Layout {
	case Transcritical:
		v.layout, v.gasCooled = SingleStage, true
		v.combine(r.With)
	case SuctionExchanger:
		v.layout, v.exchanger = SingleStage, true
	case Ejector:
		v.layout, v.gasCooled = Ejector, true
	case SingleStage, EconomisedSubcooler, EconomisedFlash, TwoStageFlash, TwoStageIntercooled, Cascade, ParallelCompression:
		v.layout = r.Layout
	default:
		v.wrong(NotAllowed, "layout", message("layout must be one of "+strings.Join(Layouts(), ", ")))
	}
	if r.Layout != Transcritical && len(r.With) > 0 {
		v.surplus("with", "only the transcritical layout is combined with others")
	}
}

// combine adds to a transcritical cycle what it is combined with.
func (v *plan) combine(with []Layout) {
	var seen [Ejector + 1]bool
	for i, l := range with {
		field := fmt.Sprintf("with.%d", i)
		switch {
		case int(l) >= len(seen) || l == 0 || l == Cascade || l == Transcritical:
			v.wrong(NotAllowed, field, message("transcritical can be combined with single_stage, suction_exchanger, economised_subcooler, "+
				"economised_flash, two_stage_flash, two_stage_intercooled, parallel_compression and ejector"))
			continue
		case seen[l]:
			v.surplus(field, l.String()+" is given twice")
			continue
		}
		seen[l] = true
		switch {
		case l == SuctionExchanger:
			v.exchanger = true
		case l == SingleStage:
		case v.layout != SingleStage:
			v.surplus(field, fmt.Sprintf("%s and %s cannot be combined with each other; besides suction_exchanger one layout is allowed", v.layout, l))
		default:
			v.layout = l
		}
	}
	if v.exchanger && v.layout != SingleStage && v.layout != ParallelCompression && v.layout != Ejector {
		v.surplus("with", "suction_exchanger goes with single_stage, parallel_compression or ejector, not with "+v.layout.String())
	}
}

// temperatures takes the three reservoirs. Without an ambient temperature the benefit's counterpart stands in: what a
// heat pump takes heat from, or a refrigerating machine gives heat to.
func (v *plan) temperatures(r *Request) {
	v.source = v.number("source_temperature", r.SourceTemperature, &temperatureBounds)
	v.sink = v.number("sink_temperature", r.SinkTemperature, &temperatureBounds)
	v.ambient = v.number("ambient_temperature", r.AmbientTemperature, &temperatureBounds)
	if r.AmbientTemperature != nil {
		return
	}
	switch {
	case r.Purpose == Heating && isGiven(v.source):
		v.ambient = v.assume("ambient_temperature", "no ambient temperature given: exergy counts from the source temperature, %s", temperature(v.source))
	case r.Purpose == Cooling && isGiven(v.sink):
		v.ambient = v.assume("ambient_temperature", "no ambient temperature given: exergy counts from the sink temperature, %s", temperature(v.sink))
	default:
		v.ambient = v.assume("ambient_temperature", "no ambient temperature given: exergy counts from %s", temperature(defaultAmbient))
	}
}

// sides takes what fixes the evaporator and the condenser or gas cooler.
func (v *plan) sides(r *Request) {
	e := &r.Evaporation
	v.evaporation = evaporation{
		temperature: v.number("evaporation.temperature", e.Temperature, &temperatureBounds),
		pressure:    v.number("evaporation.pressure", e.Pressure, &pressureBounds),
		mean:        e.Reference == Mean,
		quality:     v.number("evaporation.outlet_quality", e.OutletQuality, &qualityBounds),
	}
	v.reference("evaporation.reference", e.Reference, e.Pressure != nil)
	v.exactlyOne("evaporation", []string{"temperature", "pressure"}, e.Temperature != nil, e.Pressure != nil)
	if e.OutletQuality != nil && e.Superheat != nil && *e.Superheat != 0 {
		v.surplus("evaporation.outlet_quality", "wet vapour of a given quality has no superheat; give one of outlet_quality and superheat")
	}
	v.evaporation.superheat, v.evaporation.superheatField = 0, "evaporation.superheat"
	if e.OutletQuality == nil {
		v.evaporation.superheat = v.orAssume("evaporation.superheat", e.Superheat, &differenceBounds, 0, "no superheat given: %s assumed at the evaporator outlet")
	}

	k := &r.Condensation
	if !v.gasCooled {
		v.condensation = condensation{
			temperature: v.number("condensation.temperature", k.Temperature, &temperatureBounds),
			pressure:    v.number("condensation.pressure", k.Pressure, &pressureBounds),
			mean:        k.Reference == Mean,
		}
		v.reference("condensation.reference", k.Reference, k.Pressure != nil)
		v.exactlyOne("condensation", []string{"temperature", "pressure"}, k.Temperature != nil, k.Pressure != nil)
		v.condensation.subcoolingField = "condensation.subcooling"
		v.condensation.subcooling = v.orAssume("condensation.subcooling", k.Subcooling, &differenceBounds, 0, "no subcooling given: %s assumed at the condenser outlet")
		if r.GasCooler != nil {
			v.surplus("gas_cooler", "a gas cooler belongs to the transcritical and ejector layouts; "+r.Layout.String()+" has a condenser")
		}
		return
	}
	if *k != (Condensation{}) {
		v.surplus("condensation", r.Layout.String()+" has a gas cooler and no condensation; give gas_cooler alone")
	}
	v.gasCooler(r.GasCooler)
}

func (v *plan) reference(field string, ref Reference, byPressure bool) {
	if int(ref) >= len(referenceNames) {
		v.wrong(NotAllowed, field, message("reference must be dew or mean"))
	}
	if byPressure && ref == Mean {
		v.surplus(field, "a reference belongs to a temperature; a pressure has none")
	}
}

func (v *plan) gasCooler(g *GasCooler) {
	if g == nil {
		v.missing("gas_cooler", "a gas cooler is needed: its outlet temperature or approach, and its pressure, a correlation or optimise")
		return
	}
	v.gasCooling = gasCooling{
		outlet:      v.number("gas_cooler.outlet_temperature", g.OutletTemperature, &temperatureBounds),
		outletField: "gas_cooler.outlet_temperature",
		pressure:    v.number("gas_cooler.pressure", g.Pressure, &pressureBounds),
		correlation: g.Correlation,
		optimise:    g.Optimise != NoObjective,
		pressureMax: v.orDefault("gas_cooler.pressure_max", g.PressureMax, &pressureBounds, defaultHighPressureMax),
	}
	v.exactlyOne("gas_cooler", []string{"outlet_temperature", "approach"}, g.OutletTemperature != nil, g.Approach != nil)
	v.exactlyOne("gas_cooler", []string{"pressure", "correlation", "optimise"}, g.Pressure != nil, g.Correlation != NoCorrelation, g.Optimise != NoObjective)
	if int(g.Correlation) >= len(correlationNames) {
		v.wrong(NotAllowed, "gas_cooler.correlation", message("correlation must be one of "+strings.Join(Correlations(), ", ")))
	}
	v.objective("gas_cooler.optimise", g.Optimise)
	v.optimisable("gas_cooler.optimise", g.Optimise != NoObjective)
	if g.PressureMax != nil && g.Optimise == NoObjective {
		v.surplus("gas_cooler.pressure_max", "pressure_max bounds the search for an optimum; it goes with optimise")
	}
	if g.Approach != nil {
		approach := v.number("gas_cooler.approach", g.Approach, &differenceBounds)
		v.gasCooling.outletField = "gas_cooler.approach"
		if !isGiven(v.sink) {
			v.missing("sink_temperature", "a gas cooler's approach counts from the sink temperature, which is not given")
		}
		v.gasCooling.outlet = v.sink + approach
	}
}

func (v *plan) objective(field string, o Objective) {
	if int(o) >= len(objectiveNames) {
		v.wrong(NotAllowed, field, message("the objective must be cop"))
	}
}

// compressorFields are the paths of a compressor's numbers, ready made because most requests need none of them.
type compressorFields struct{ part, isentropic, discharge, volumetric, heatLoss string }

func fieldsOf(part string) compressorFields {
	return compressorFields{
		part, part + ".isentropic_efficiency", part + ".discharge_temperature",
		part + ".volumetric_efficiency", part + ".heat_loss_fraction",
	}
}

var firstFields, secondFields = fieldsOf("compressor"), fieldsOf("second_compressor")

func (v *plan) compressor(f *compressorFields, k *Compressor) efficiencies {
	e := efficiencies{
		fields:               f,
		dischargeTemperature: v.number(f.discharge, k.DischargeTemperature, &temperatureBounds),
		volumetric:           v.orAssume(f.volumetric, k.VolumetricEfficiency, &efficiencyBounds, defaultVolumetricEfficiency, "no volumetric efficiency given: %s assumed"),
		heatLoss:             v.orAssume(f.heatLoss, k.HeatLossFraction, &fractionBounds, 0, "no heat loss fraction given: %s assumed"),
	}
	if k.DischargeTemperature == nil {
		e.isentropic = v.orAssume(f.isentropic, k.IsentropicEfficiency, &efficiencyBounds, defaultIsentropicEfficiency, "no isentropic efficiency given: %s assumed")
	} else if k.IsentropicEfficiency != nil {
		v.surplus(f.discharge, "give one of isentropic_efficiency and a measured discharge_temperature")
	}
	return e
}

// hasSecond reports whether the layout has a second compressor or a second step of compression.
func (v *plan) hasSecond() bool { return v.layout != SingleStage && v.layout != Ejector }

// hasVessel reports whether liquid and vapour part in a vessel at the intermediate pressure.
func (v *plan) hasVessel() bool {
	switch v.layout {
	case EconomisedFlash, TwoStageFlash, ParallelCompression, Ejector:
		return true
	case TwoStageIntercooled:
		return v.intercooler.kind == ClosedIntercooler
	}
	return false
}

func (v *plan) secondCompressor(r *Request) efficiencies {
	switch k := r.SecondCompressor; {
	case !v.hasSecond():
		if k != nil {
			v.surplus("second_compressor", v.layout.String()+" has one compressor")
		}
		return efficiencies{}
	case k == nil && r.Compressor.DischargeTemperature != nil:
		v.missing("second_compressor", "the first compressor goes by its own discharge temperature, so the second needs efficiencies or a discharge temperature too")
		return efficiencies{}
	case k == nil:
		same := v.first
		same.fields = &secondFields
		return same
	default:
		return v.compressor(&secondFields, k)
	}
}

// drop checks one loss of pressure.
func (v *plan) drop(part string, d Drop) Drop {
	if d == (Drop{}) {
		return d
	}
	if d.Pressure != 0 && d.TemperatureEquivalent != 0 {
		v.surplus(part+".temperature_drop_equivalent", "give one of pressure_drop and temperature_drop_equivalent")
	}
	return Drop{
		Pressure:              v.value(part+".pressure_drop", d.Pressure, &dropBounds),
		TemperatureEquivalent: v.value(part+".temperature_drop_equivalent", d.TemperatureEquivalent, &differenceBounds),
	}
}

func (v *plan) drops(r *Request) {
	v.evaporatorDrop = v.drop("evaporator", r.Evaporator.Drop)
	v.condenserDrop = v.drop("condenser", r.Condenser.Drop)
	v.suctionLine = SuctionLine{v.drop("suction_line", r.SuctionLine.Drop), v.value("suction_line.temperature_rise", r.SuctionLine.TemperatureRise, &changeBounds)}
	v.dischargeLine = DischargeLine{v.drop("discharge_line", r.DischargeLine.Drop), v.value("discharge_line.temperature_drop", r.DischargeLine.TemperatureDrop, &changeBounds)}
	v.liquidLine = LiquidLine{v.drop("liquid_line", r.LiquidLine.Drop), v.value("liquid_line.temperature_change", r.LiquidLine.TemperatureChange, &changeBounds)}
}

func (v *plan) sized(s *Size) {
	if s == nil {
		v.caution(Caution{Code: PerUnitFlow, Field: "size", Message: message("no size given: flows, capacities and powers are per 1 kg/s at the first compressor's suction")})
		return
	}
	given := [...]struct {
		of       sizing
		value    *float64
		quantity Quantity
	}{
		{byHeating, s.Heating, HeatFlow},
		{byCooling, s.Cooling, HeatFlow},
		{byPower, s.CompressorPower, Power},
		{byMassFlow, s.MassFlow, MassFlow},
		{bySweptVolume, s.SweptVolumeFlow, VolumeFlow},
	}
	count := 0
	for _, g := range given {
		if g.value == nil {
			continue
		}
		count++
		v.size = size{g.of, v.number(sizeFields[g.of], g.value, &bounds{g.quantity, 0, mostSize, true, false})}
	}
	if count != 1 {
		v.exactlyOne("size", []string{"heating", "cooling", "compressor_power", "mass_flow", "swept_volume_flow"},
			s.Heating != nil, s.Cooling != nil, s.CompressorPower != nil, s.MassFlow != nil, s.SweptVolumeFlow != nil)
	}
}
