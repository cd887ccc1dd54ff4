package machine

import (
	"math"

	"dewmark/props/secondary"
	"dewmark/service/cycle"
)

const (
	// mapReach is how far outside its area a map is still evaluated, K, with a caution.
	mapReach = 5.0
	// freezingMargin is how close to its freezing point a secondary liquid's coldest surface may come without a caution, K:
	// sources of freezing points differ by as much.
	freezingMargin = 3.0
	usualPinch     = 1.0 // K, common practice
	// streamReach is how far beyond the range of its properties a secondary liquid is still computed, K, with a caution.
	streamReach = 30.0
)

// check refuses what a search can reach but no machine can do.
func (t *trial) check(s *settled, p *OperatingPoint) error {
	switch {
	case t.strained == "":
	case t.strainedLaw == nil:
		return refused(EnvelopeLeft, t.strained, nil, "the machine would settle at evaporation %s and %s, where the map means no possible compressor",
			temperature(p.SuctionDewTemperature), t.dischargeNumber(p))
	default:
		return refused(Impossible, t.strained, nil, "at the pressure ratio of %s the law gives %s, outside 0 to 1",
			plain(s.solution.Performance.PressureRatio), plain(t.strainedLaw.at(s.solution.Performance.PressureRatio)))
	}
	for i := range t.compressor.ratings {
		r := &t.compressor.ratings[i]
		if r.area == nil {
			continue
		}
		v := envelopeAt([]*polygon{r.area}, &s.flanges, t.speedNow)
		if v.Margin < -mapReach {
			return refused(EnvelopeLeft, r.field+".envelope", nil, "the machine would settle at evaporation %s and %s, %s outside the area of the map: a cubic says nothing there",
				temperature(p.SuctionDewTemperature), t.dischargeNumber(p), difference(-v.Margin))
		}
	}
	if w := &s.evaporator; w.coil() && math.IsNaN(w.ua) && w.pinch <= 0 {
		return w.crossed(w.pinch)
	}
	for _, x := range []struct {
		side *side
		q    *StreamResult
	}{{&t.source, &p.Evaporator.Secondary}, {&t.sink, &p.Condenser.Secondary}} {
		if err := x.side.possible(x.q); err != nil {
			return err
		}
	}
	if q := &p.Evaporator.Secondary; q.OutletTemperature <= q.FreezingPoint {
		return refused(Freezing, "condition.source", nil, "the "+q.Fluid+" would leave the evaporator at %s; it freezes at %s",
			temperature(q.OutletTemperature), temperature(q.FreezingPoint))
	}
	return nil
}

// possible refuses a liquid that would enter frozen, or far beyond the range of its properties.
func (s *side) possible(q *StreamResult) error {
	if s.liquid == nil {
		return nil
	}
	_, highest := s.liquid.Range()
	warm := math.Max(q.InletTemperature, q.OutletTemperature)
	switch {
	case q.InletTemperature <= q.FreezingPoint:
		return refused(Freezing, s.field+".inlet_temperature", nil, "the "+q.Fluid+" would enter at %s; it freezes at %s",
			temperature(q.InletTemperature), temperature(q.FreezingPoint))
	case warm > highest+streamReach:
		return refused(NoState, s.field, s.liquid.Check(warm), "the "+q.Fluid+" would reach %s, far beyond the range of its properties", temperature(warm))
	}
	return nil
}

// apart refuses streams that an approach makes cross. A conductance keeps them apart by itself. What a coil's air leaves with
// is for [trial.check], which knows of condensation.
func (s *settled) apart() error {
	for _, w := range []*work{&s.evaporator, &s.condenser} {
		least := w.gap
		if w.pinch < least && !w.coil() {
			least = w.pinch
		}
		if math.IsNaN(w.ua) && least <= 0 {
			return w.crossed(least)
		}
	}
	return nil
}

func (w *work) crossed(pinch float64) error {
	return refused(TemperatureCross, w.field, nil, "with this approach the streams would cross inside the exchanger by %s", difference(-pinch))
}

// dischargeNumber is the temperature of condensation at the flange, or the pressure above the critical one.
func (t *trial) dischargeNumber(p *OperatingPoint) cycle.Number {
	if math.IsNaN(p.DischargeDewTemperature) {
		return pressure(p.DischargePressure)
	}
	return temperature(p.DischargeDewTemperature)
}

// judge compares the point with the envelope and the limits.
func (t *trial) judge(s *settled, p *OperatingPoint) {
	p.Envelope = envelopeAt(t.compressor.polygons, &s.flanges, t.speedNow)
	if p.Envelope.Verdict == OutsideEnvelope {
		p.Breaches = append(p.Breaches, Breach{
			Field: t.compressor.polygons[0].field, Quantity: cycle.TemperatureDifference, Value: p.Envelope.Margin, Limit: 0,
			Message: message("evaporation at %s with %s lies %s outside the envelope ("+string(p.Envelope.Edge)+")",
				temperature(p.SuctionDewTemperature), t.dischargeNumber(p), difference(-p.Envelope.Margin)),
		})
	}
	perf := &p.Cycle.Performance
	l := &t.limits
	above := func(k *limit, v float64, what string) {
		if v > k.value {
			p.breach(k, v, what+" of %s is above the limit, %s")
		}
	}
	below := func(k *limit, v float64, what string) {
		if v < k.value {
			p.breach(k, v, what+" of %s is below the limit, %s")
		}
	}
	above(&l.discharge, perf.DischargeTemperature, "the discharge temperature")
	above(&l.ratioMax, perf.PressureRatio, "the pressure ratio")
	below(&l.ratioMin, perf.PressureRatio, "the pressure ratio")
	below(&l.difference, s.flanges.dischargePressure-s.flanges.suctionPressure, "the pressure difference")
	above(&l.high, s.flanges.dischargePressure, "the discharge pressure")
	below(&l.low, s.flanges.suctionPressure, "the suction pressure")
}

func (p *OperatingPoint) breach(k *limit, v float64, text string) {
	n := func(v float64) cycle.Number { return cycle.Number{Quantity: k.quantity, Value: v} }
	p.Breaches = append(p.Breaches, Breach{
		Field: k.field, Quantity: k.quantity, Value: v, Limit: k.value, Message: message(text, n(v), n(k.value)),
	})
}

// reserve collects the cautions.
func (t *trial) reserve(s *settled, p *OperatingPoint, clamped *Caution) {
	p.Cautions = append(append(p.Cautions, t.unit.cautions...), t.cautions...)
	add := func(code CautionCode, field, text string, numbers ...cycle.Number) {
		p.Cautions = append(p.Cautions, Caution{Code: code, Field: field, Message: message(text, numbers...)})
	}
	if clamped != nil {
		p.Cautions = append(p.Cautions, *clamped)
	}
	if t.held {
		add(EvaporationHeld, "machine.limits.evaporation_max", "the expansion valve holds the evaporation at %s; the superheat is %s", temperature(t.te), difference(t.sh))
	}
	for i := range p.Breaches {
		b := &p.Breaches[i]
		code := LimitBroken
		if i == 0 && p.Envelope.Verdict == OutsideEnvelope {
			code = BeyondEnvelope
		}
		p.Cautions = append(p.Cautions, Caution{Code: code, Field: b.Field, Message: b.Message})
	}
	if p.Envelope.Verdict == EdgeOfEnvelope {
		add(EdgeCaution, t.compressor.polygons[0].field, "the point lies on the edge of the envelope, %s inside ("+string(p.Envelope.Edge)+")", difference(p.Envelope.Margin))
	}
	t.reserveMaps(s, add)
	t.reserveExchangers(s, p, add)
	t.reserveAuxiliaries(p, add)
	t.reserveCycle(p)
	if p.Envelope.Verdict != NoEnvelope || len(t.compressor.ratings) > 0 {
		add(ManufacturerGoverns, "machine.compressor", "maps and envelopes are those of the request; the manufacturer's current data sheet governs")
	}
}

type adder func(code CautionCode, field, text string, numbers ...cycle.Number)

func (t *trial) reserveMaps(s *settled, add adder) {
	i, share := around(t.compressor.ratings, t.speedNow)
	for j := i; j < len(t.compressor.ratings) && (j == i || j == i+1 && share > 0); j++ {
		r := &t.compressor.ratings[j]
		if r.area != nil && !r.area.contains(r.area.at(&s.flanges)) {
			_, d, _ := r.area.nearest(r.area.at(&s.flanges))
			if d > edgeWidth {
				add(MapExtrapolated, r.field+".envelope", "the point lies %s outside the area of the map, which goes on in a straight line there", difference(d))
			}
		}
	}
}

// reserveExchangers looks at pinches, frost, freezing and ranges.
func (t *trial) reserveExchangers(s *settled, p *OperatingPoint, add adder) {
	for i, e := range []*ExchangerResult{&p.Evaporator, &p.Condenser} {
		x, stream := &t.evaporator, &t.source
		if i == 1 {
			x, stream = &t.condenser, &t.sink
		}
		if x.single {
			add(SingleCoefficient, x.field, "one heat transfer coefficient is taken for all zones; common practice: desuperheating 0.2 to 0.4, subcooling 0.3 to 0.5, superheating 0.1 to 0.3 of that of the two-phase zone")
		}
		if s.capped[i] {
			add(Oversized, x.field, "the exchanger could pass more than the duty: the refrigerant already leaves at the temperature at which the stream enters, so that superheat or subcooling decides the level")
		}
		if e.Pinch < usualPinch {
			add(SmallPinch, x.field, "the smallest difference between the streams is %s; exchangers are rarely built for less than %s", difference(e.Pinch), difference(usualPinch))
		}
		if stream.liquid == nil {
			continue
		}
		for _, T := range []float64{e.Secondary.InletTemperature, e.Secondary.OutletTemperature} {
			if lowest, highest := stream.liquid.Range(); T < lowest || T > highest {
				add(StreamExtrapolated, stream.field, "the "+stream.liquid.Name()+" at %s lies outside the range of its properties, %s to %s", temperature(T), temperature(lowest), temperature(highest))
			}
		}
	}
	coldest := math.Min(p.Evaporator.Zones[0].RefrigerantInlet, p.EvaporationTemperature)
	q := &p.Evaporator.Secondary
	if frozen := q.FreezingPoint; coldest < frozen+freezingMargin {
		text := "the refrigerant enters or leaves at %s, less than %s above the freezing point of the " + q.Fluid + ", %s: its coldest surface may ice up; check flow and frost protection"
		add(FreezingRisk, "condition.source", text, temperature(coldest), difference(freezingMargin), temperature(frozen))
	}
	t.reserveFrost(s, p, add)
}

// reserveFrost looks at the surface of a coil below 0 °C.
func (t *trial) reserveFrost(s *settled, p *OperatingPoint, add adder) {
	if t.source.liquid != nil || t.source.air.W == 0 || coldestSurface(s) >= zeroCelsius {
		return
	}
	dew := secondary.Air{T: s.evaporator.stream.inT, P: t.source.air.P, W: t.source.air.W}.DewPoint()
	surface := coldestSurface(s)
	if w := p.Evaporator.Secondary.SurfaceTemperature; w < zeroCelsius && w > surface {
		surface = w
	}
	if dew > surface {
		add(Frost, "condition.source", "frost forms: the surface, at %s, lies below 0 °C and below the air's dew point, %s; capacity falls between defrosts, by 5 to 15 %% of the steady state over a season in the worst zone (common practice), which these figures leave out", temperature(surface), temperature(dew))
	}
}

// coldestSurface is the refrigerant's temperature, which the surface of a coil comes close to.
func coldestSurface(s *settled) float64 {
	return math.Min(s.evaporator.segments[0].T1, s.levels[low].dew)
}

func (t *trial) reserveAuxiliaries(p *OperatingPoint, add adder) {
	if math.IsNaN(p.System.SourcePower) {
		add(Assumed, "machine.auxiliaries.source", "the source's flow is not known, so that neither is the power of its fan or pump")
	}
	if math.IsNaN(p.System.SinkPower) {
		add(Assumed, "machine.auxiliaries.sink", "the sink's flow is not known, so that neither is the power of its fan or pump")
	}
}

// reserveCycle passes on the cycle's cautions, but for those that compare states with the mean temperature of a whole
// stream: the exchangers know better.
func (t *trial) reserveCycle(p *OperatingPoint) {
	for _, c := range p.Cycle.Cautions {
		switch c.Code {
		case cycle.OutletAboveSource, cycle.SubcoolingBelowSink, cycle.SubcoolingBelowSource, cycle.PerUnitFlow:
			continue
		case cycle.HotDischarge:
			if !math.IsNaN(t.limits.discharge.value) {
				continue // the machine's own limit counts
			}
		}
		p.Cautions = append(p.Cautions, Caution{Code: CautionCode(c.Code), Field: machineField(c.Field), Label: c.Label, Message: fromCycle(c.Message)})
	}
}
