package readings

import (
	"math"
	"time"

	"dewmark/service/cycle"
)

// Limits of what is plausible (common practice).
const (
	leastPressure    = 10e3 // Pa, absolute
	leastRise        = 50e3 // Pa, discharge over suction
	leastSuperheat   = -2.0 // K
	mostSuperheat    = 40.0 // K
	leastSubcooling  = -2.0 // K
	mostSubcooling   = 30.0 // K
	leastEfficiency  = 0.3  // isentropic
	mostEfficiency   = 0.85 //
	mostVolumetric   = 1.05 // volumetric efficiency
	leastVolumetric  = 0.3  //
	floodbackMargin  = 10.0 // K, discharge above condensation
	mostOpenClosure  = 0.15 // of the heat given off, in the field; 0.05 in a laboratory
	standstillMargin = 2.0  // K
	leastCOP         = 1.0  // of heating
	longStandstill   = 2 * time.Hour
)

func (r *Result) found(code FindingCode, field, text string, numbers ...cycle.Number) *Finding {
	r.Plausibility = append(r.Plausibility, Finding{Code: code, Field: field, Message: message(text, numbers...)})
	return &r.Plausibility[len(r.Plausibility)-1]
}

// findImplausible goes through the rules that readings of a machine obey.
func (w *work) findImplausible(r *Result) {
	if w.sample.Standstill > 0 {
		w.checkStandstill(r)
		return
	}
	w.checkPressures(r)
	w.checkDischarge(r)
	w.checkAgainstStreams(r)
	doubtful := w.checkMargins(r)
	w.checkPerformance(r)
	if doubtful != nil && w.evaluator.installation.OtherRefrigerants != nil {
		doubtful.Candidates = w.candidates()
	}
	for _, d := range r.Disagreements {
		r.found(RoutesDisagree, d.Figure.String(), "the "+d.Figure.String()+" by "+string(d.A)+" and by "+string(d.B)+
			" differ by %s standard uncertainties: one of their readings is wrong, or more uncertain than stated", plain(math.Sqrt(d.Ratio)))
	}
}

// highSide are the places between compressor and expansion.
var highSide = [placeCount]bool{discharge: true, condenserInlet: true, condenserOutlet: true, expansionInlet: true}

func (w *work) checkPressures(r *Result) {
	for p := range placeCount {
		at := &w.located[p]
		if at.pressure == 0 || at.twin != p || !(placeTable[p].pressure[0] == at.pressure) {
			continue
		}
		v := w.points[p].p.Value
		switch {
		case v <= leastPressure:
			r.found(PressuresTooClose, at.pressure.String(), "%s is hardly above a vacuum: a gauge pressure taken as absolute, or a broken sensor", pressure(v))
		case !w.points[p].saturated.Known() && !(v >= w.evaluator.fluid.critical && w.evaluator.gasCooled && highSide[p]):
			r.found(OutsideSaturation, at.pressure.String(), "at %s the refrigerant neither boils nor condenses", pressure(v))
		}
	}
	low, high := w.points[suction].p, w.points[discharge].p
	if low.Known() && high.Known() && !(high.Value > low.Value+leastRise) {
		r.found(PressuresTooClose, w.located[discharge].pressure.String(),
			"the discharge pressure, %s, is not clearly above the suction pressure, %s: swapped sensors, gauge and absolute pressure mixed up, or the machine stands still",
			pressure(high.Value), pressure(low.Value))
	}
}

func (w *work) checkDischarge(r *Result) {
	hot := w.points[discharge].T
	field := w.located[discharge].temperature.String()
	if cold := w.points[suction].T; hot.Known() && cold.Known() && !(hot.Value > cold.Value) {
		r.found(DischargeNotHottest, field, "the discharge, %s, is not warmer than the suction, %s: swapped sensors", temperature(hot.Value), temperature(cold.Value))
	}
	condensation := r.Figure(FigureCondensationTemperature)
	if !hot.Known() || !condensation.Known() {
		return
	}
	switch at := condensation.Value; {
	case !(hot.Value > at):
		r.found(DischargeNotHottest, field, "the discharge, %s, is not warmer than the condensation, %s: swapped sensors or severe floodback", temperature(hot.Value), temperature(at))
	case hot.Value < at+floodbackMargin:
		r.found(FloodbackSuspected, field, "the discharge, %s, is less than %s above the condensation, %s: liquid may return to the compressor, which is urgent",
			temperature(hot.Value), difference(floodbackMargin), temperature(at))
	}
}

// checkAgainstStreams compares with what the exchangers exchange heat with.
func (w *work) checkAgainstStreams(r *Result) {
	evaporation, condensation := r.Figure(FigureEvaporationTemperature), r.Figure(FigureCondensationTemperature)
	cold := w.streamMean(source)
	if !cold.Known() { // one end still bounds it
		cold, _, _ = w.ends(source)
	}
	if cold.Known() && evaporation.Known() && !(evaporation.Value < cold.Value) {
		r.found(EvaporationAboveSource, FigureEvaporationTemperature.String(),
			"the evaporation, %s, is not colder than the source, %s: wrong refrigerant, or gauge and absolute pressure mixed up",
			temperature(evaporation.Value), temperature(cold.Value))
	}
	in, out, _ := w.ends(sink)
	if !out.Known() {
		out = in
	}
	if out.Known() && condensation.Known() {
		glide := 0.0
		if bubble := w.points[condenserOutlet].saturated; bubble.Known() {
			glide = condensation.Value - bubble.Value
		}
		if !(condensation.Value > out.Value-glide) {
			r.found(CondensationBelowSink, FigureCondensationTemperature.String(),
				"the condensation, %s, is not warmer than the sink, %s, less a glide of %s: wrong refrigerant, or gauge and absolute pressure mixed up",
				temperature(condensation.Value), temperature(out.Value), difference(glide))
		}
	}
	for of := range sideCount {
		row := &sideTable[of]
		if w.sample.reads(of) && w.streamObstacles[of] == nil && !w.flowing[of] {
			r.found(NegativeDuty, row.name, "the "+row.name+" changes its temperature the wrong way: swapped sensors, or the machine does not run")
		}
		if v := w.sample.values[row.meter]; w.sample.has(row.meter) && v < 0 {
			r.found(NegativeDuty, row.meter.String(), "heat flows the wrong way, %s: a defrost, a swapped sign, or the machine does not run", heat(v))
		}
	}
}

// checkMargins looks at superheat and subcooling and returns a finding that makes the refrigerant doubtful, or nil.
func (w *work) checkMargins(r *Result) (doubtful *Finding) {
	check := func(f Figure, code FindingCode, low, high float64) {
		if e := r.Figure(f); e.Known() && !(low < e.Value && e.Value < high) {
			r.found(code, f.String(), "a "+f.String()+" of %s is not between %s and %s: the wrong refrigerant is the first suspicion, a wrong pressure or a loose thermometer the next",
				difference(e.Value), difference(low), difference(high))
		}
	}
	from := len(r.Plausibility)
	check(FigureSuperheat, SuperheatImplausible, leastSuperheat, mostSuperheat)
	check(FigureSubcooling, SubcoolingImplausible, leastSubcooling, mostSubcooling)
	if len(r.Plausibility) > from {
		return &r.Plausibility[from]
	}
	return nil
}

// checkPerformance looks at efficiencies, COP and the balance of energy.
func (w *work) checkPerformance(r *Result) {
	pairs := [...]struct {
		first, second place
		right         bool
		text          string
	}{
		{suction, discharge, w.rises, "the enthalpy falls from suction to discharge: wet suction, liquid injection, or a wrong thermometer"},
		{condenserInlet, condenserOutlet, w.releases, "the enthalpy rises over the condenser: swapped thermometers"},
		{expansionInlet, evaporatorOutlet, w.takes, "the enthalpy falls over the evaporator: swapped thermometers"},
	}
	for _, k := range pairs {
		if w.points[k.first].h.Known() && w.points[k.second].h.Known() && !k.right {
			r.found(EnthalpiesOutOfOrder, w.located[k.second].temperature.String(), k.text)
		}
	}
	w.checkEfficiency(r)
	if e := r.Figure(FigureVolumetricEfficiency); e.Known() && !(leastVolumetric < e.Value && e.Value < mostVolumetric) {
		r.found(VolumetricImplausible, FigureVolumetricEfficiency.String(),
			"a volumetric efficiency of %s is not between %s and %s: flow, speed or swept volume is wrong", plain(e.Value), plain(leastVolumetric), plain(mostVolumetric))
	}
	if e := r.Figure(FigureCOPHeating); e.Known() {
		limit := w.carnotLimit(r)
		if !(leastCOP < e.Value) || e.Value >= limit {
			r.found(COPImplausible, FigureCOPHeating.String(),
				"a COP of heating of %s is not between %s and Carnot's, %s: an error of units, such as L/min taken for L/s, or a difference of temperatures converted like a temperature",
				plain(e.Value), plain(leastCOP), plain(limit))
		}
	}
	if e := r.Figure(FigureEnergyClosure); e.Known() && math.Abs(e.Value) > mostOpenClosure {
		r.found(EnergyNotClosed, FigureEnergyClosure.String(),
			"heat given off and heat and power taken up differ by a share of %s; %s is usual in the field", plain(e.Value), plain(mostOpenClosure))
	}
}

// checkEfficiency looks at the efficiency by the states alone, which a wrong thermometer spoils first, and at the one by flow
// and power.
func (w *work) checkEfficiency(r *Result) {
	states := w.calculus.Quotient(w.perKilo.ideal, w.perKilo.work)
	for _, v := range [...]float64{states.Value, r.Figure(FigureIsentropicEfficiency).Value} {
		if math.IsNaN(v) || leastEfficiency < v && v < mostEfficiency {
			continue
		}
		r.found(EfficiencyImplausible, FigureIsentropicEfficiency.String(),
			"an isentropic efficiency of %s is not between %s and %s: a thermometer or the power reading is wrong, the suction is wet, or liquid is injected",
			plain(v), plain(leastEfficiency), plain(mostEfficiency))
		return
	}
}

// carnotLimit returns Carnot's COP of heating between the streams, or between condensation and evaporation.
func (w *work) carnotLimit(r *Result) float64 {
	if c := w.carnot(); c.Known() {
		return c.Value
	}
	hot, cold := r.Figure(FigureCondensationTemperature), r.Figure(FigureEvaporationTemperature)
	if hot.Known() && cold.Known() && hot.Value > cold.Value {
		return hot.Value / (hot.Value - cold.Value)
	}
	return math.Inf(1)
}

// checkStandstill compares the saturation temperature of a machine that has stood still with the ambient.
func (w *work) checkStandstill(r *Result) {
	ambient := w.reading(AmbientTemperature)
	if w.sample.Standstill < longStandstill || !ambient.Known() {
		return
	}
	for _, p := range [...]place{suction, discharge} {
		saturated := w.points[p].saturated
		if !saturated.Known() {
			continue
		}
		field := w.located[p].pressure.String()
		switch off := saturated.Value - ambient.Value; {
		case off > standstillMargin:
			r.found(StandstillPressureHigh, field, "after a long standstill the pressure belongs to saturation at %s, above the ambient's %s: non-condensable gas, or another refrigerant",
				temperature(saturated.Value), temperature(ambient.Value))
		case off < -standstillMargin:
			r.found(StandstillPressureLow, field, "after a long standstill the pressure belongs to saturation at %s, below the ambient's %s: no liquid is left after a leak, or another refrigerant",
				temperature(saturated.Value), temperature(ambient.Value))
		}
	}
}
