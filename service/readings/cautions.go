package readings

import (
	"dewmark/service/cycle"
	"dewmark/service/readings/uncertainty"
)

// caution lists what a result takes for granted and what it leaves out.
func (w *work) caution(r *Result) {
	r.Cautions = make([]Caution, 0, 12)
	w.cautionAssumed(r)
	w.cautionPlaces(r)
	w.cautionStreams(r)
	if w.evaluator.several {
		r.caution(StatesUnused, "layout", "", message("the refrigerant's states do not size a layout with more than one compression: capacities and power come from meters and streams alone"))
	}
	for i := range r.Routes {
		if k := &r.Routes[i]; k.Name == CompressorMap && k.Weight > 0 {
			r.caution(CircularMap, "machine.compressor", "", message("the flow that the machine's compressor should move takes part in the results: it cannot show a fault of the compressor"))
			break
		}
	}
}

func (r *Result) caution(code CautionCode, field, label string, m Message) {
	r.Cautions = append(r.Cautions, Caution{Code: code, Field: field, Label: label, Message: m})
}

// cautionAssumed names the readings whose uncertainty is a default, and the numbers that stand in for missing ones.
func (w *work) cautionAssumed(r *Result) {
	for i := range w.inputs.List {
		in := &w.inputs.List[i]
		if !in.Assumed {
			continue
		}
		if reading, is := ParseReading(in.Name); is && i != w.defaultLoss {
			r.caution(Assumed, in.Name, "", message("no uncertainty given: a standard uncertainty of %s is assumed (common practice)", uncertaintyOf(reading, in.Standard)))
		}
	}
	if w.defaultLoss != none && w.rises && !w.evaluator.lossStated {
		r.caution(Assumed, HeatLossFraction.String(), "", message(
			"no heat loss of the compressor given: none is assumed, with a standard uncertainty of %s of its power; hermetic compressors lose %s to %s (common practice)",
			plain(heatLossUncertainty), plain(0.02), plain(0.15)))
	}
	if w.ambient != none && !w.evaluator.ambientKnown {
		r.caution(Assumed, "site.ambient_uncertainty", "", message("the ambient pressure is taken as uncertain by %s, because of the weather", uncertaintyOf(SuctionPressure, ambientUncertainty)))
	}
	if high := w.located[condenserOutlet].pressure; w.standing[condenserOutlet] != unread && high != LiquidPressure {
		r.caution(Assumed, LiquidPressure.String(), "4", message("no pressure is read at the condenser outlet: that of the "+high.String()+" is taken, without any pressure drop"))
	}
}

// uncertaintyOf is a standard uncertainty of a reading for a message.
func uncertaintyOf(r Reading, u float64) cycle.Number {
	q := r.Quantity()
	switch q {
	case cycle.Temperature:
		q = cycle.TemperatureDifference
	case cycle.Pressure:
		q = cycle.PressureDifference
	}
	return cycle.Number{Quantity: q, Value: u}
}

// cautionPlaces tells why states are missing.
func (w *work) cautionPlaces(r *Result) {
	for p := range placeCount {
		if w.located[p].twin != p {
			continue
		}
		row := &placeTable[p]
		pt := &w.points[p]
		switch w.standing[p] {
		case tooClose:
			line, kind := "dew", "superheat"
			if !row.vapour {
				line, kind = "bubble", "subcooling"
			}
			r.caution(QualityUnknown, w.located[p].temperature.String(), row.label, message(
				"a "+kind+" of %s with a standard uncertainty of %s cannot be told from the "+line+" line: the refrigerant may be wet, its quality and enthalpy are unknown",
				difference(pt.margin.Value), difference(w.inputs.Standard(pt.margin))))
		case stateless:
			r.Cautions = append(r.Cautions, Caution{
				Code: NoSuchState, Field: w.located[p].pressure.String(), Label: row.label, Cause: w.obstacles[p],
				Message: message("the refrigerant has no state for "+row.words+" at %s and %s", temperature(pt.T.Value), pressure(pt.p.Value)),
			})
		}
	}
}

// cautionStreams tells why a stream has no heat.
func (w *work) cautionStreams(r *Result) {
	for of := range sideCount {
		row := &sideTable[of]
		stream := w.sample.stream(of)
		if err := w.streamObstacles[of]; err != nil {
			r.Cautions = append(r.Cautions, Caution{
				Code: StreamUnknown, Field: row.name, Message: message("the heat of the " + row.name + " cannot be told from its readings"), Cause: err,
			})
		}
		if stream.MoistAir && w.flowing[of] && !w.sample.has(row.inletHumidity) {
			r.caution(Assumed, row.inletHumidity.String(), "", message("no humidity given: dry air is assumed"))
		}
	}
}

// cautionDraws tells how far random draws confirm the law of propagation.
func (w *work) cautionDraws(r *Result) {
	for f := range FigureCount {
		v := r.Figures[f].Validation
		if v == nil {
			continue
		}
		if v.Verdict == uncertainty.Refuted {
			r.caution(FirstOrderRefuted, f.String(), "", message("random draws contradict the law of propagation: the drawn interval counts"))
		}
	}
	if !r.Draws.Stable {
		r.caution(MoreDrawsNeeded, "draws", "", message("after %s draws not every figure is stable to its digits", plain(float64(r.Draws.Draws))))
	}
	if r.Draws.Failed > 0 {
		r.caution(DrawsFailed, "draws", "", message("%s of %s draws have no result and count in no interval", plain(float64(r.Draws.Failed)), plain(float64(r.Draws.Draws))))
	}
}
