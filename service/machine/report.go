package machine

import (
	"math"
	"slices"

	"dewmark/props/secondary"
	"dewmark/service/cycle"
)

var nan = math.NaN()

// report computes the settled machine once more, with the temperatures of its streams in the accounts, and looks it over
// as a practitioner would.
func (t *trial) report(s *settled, clamped *Caution) (*OperatingPoint, error) {
	if err := s.apart(); err != nil {
		return nil, err
	}
	if s.evaporator.coil() { // condensation decides how warm the air leaves
		first, err := t.tryAt(t.on, s.y)
		if err != nil {
			return nil, t.impossible(err)
		}
		first.evaporator.result(first.levels[low])
		s.evaporator.stream.outT = first.evaporator.stream.outT
	}
	// The means are those of the secondary streams, so that entropy generation counts the exchangers' own.
	t.sourceMean, t.sinkMean = s.evaporator.stream.entropyMean(), s.condenser.stream.entropyMean()
	t.request.SourceTemperature, t.request.SinkTemperature = &t.sourceMean, &t.sinkMean
	final, err := t.tryAt(t.on, s.y)
	if err != nil {
		return nil, t.impossible(err)
	}
	final.pinned, final.uncertain = s.pinned, s.uncertain
	if err := t.readFlanges(final.solution, &final.flanges); err != nil {
		return nil, t.impossible(err)
	}
	p := &OperatingPoint{
		Cycle:                  final.solution,
		EvaporationTemperature: t.te, CondensationTemperature: t.tc, Superheat: t.sh, Speed: t.speedNow,
		SuctionDewTemperature: final.flanges.suctionDew, DischargeDewTemperature: final.flanges.dischargeDew,
		DischargePressure: final.flanges.dischargePressure,
		SourceTemperature: t.sourceMean, SinkTemperature: t.sinkMean,
		ResidualFraction: math.Max(final.worst(), final.uncertain), Evaluations: t.evaluations,
	}
	if t.gasCooled {
		p.CondensationTemperature = nan
	}
	p.Evaporator = final.evaporator.result(final.levels[low])
	p.Condenser = final.condenser.result(final.levels[high])
	if err := t.check(&final, p); err != nil {
		return nil, err
	}
	t.system(p)
	t.judge(&final, p)
	t.reserve(&final, p, clamped)
	t.unknownSwept(p.Cycle)
	return p, nil
}

// unknownSwept takes back the volumetric efficiency that stood for one that nobody knows.
func (t *trial) unknownSwept(s *cycle.Solution) {
	if len(t.compressor.ratings) == 0 || t.compressor.swept*t.speedNow > 0 {
		return
	}
	s.Performance.SweptVolumeFlow = nan
	s.Compressors[0].SweptVolumeFlow, s.Compressors[0].VolumetricEfficiency = nan, nan
}

// system adds fans, pumps and drive.
func (t *trial) system(p *OperatingPoint) {
	perf := &p.Cycle.Performance
	y := System{CompressorPower: perf.CompressorPower / t.compressor.terminals, ControlPower: t.control}
	source, _ := t.unit.auxiliary[0].at(p.Evaporator.Secondary.VolumeFlow)
	sink, _ := t.unit.auxiliary[1].at(p.Condenser.Secondary.VolumeFlow)
	y.SourcePower, y.SinkPower = source, sink
	y.Power = y.CompressorPower + y.SourcePower + y.SinkPower + y.ControlPower
	y.HeatingCapacity = perf.HeatingCapacity + sink*t.unit.auxiliary[1].toStream
	y.CoolingCapacity = perf.CoolingCapacity - source*t.unit.auxiliary[0].toStream
	y.COPHeating, y.COPCooling = y.HeatingCapacity/y.Power, y.CoolingCapacity/y.Power
	p.System = y
}

// result tells what an exchanger does.
func (w *work) result(level levels) ExchangerResult {
	r := ExchangerResult{
		Arrangement: w.arrangement, Duty: w.duty, Pinch: w.pinch, PinchAt: w.pinchAt, UA: w.needed, UAAvailable: nan,
		ApproachOf: w.approachOf, Secondary: w.stream.result(w.duty),
	}
	if !w.stream.known {
		r.Pinch, r.PinchAt, r.UA = nan, nan, nan
	}
	ua, share := w.conductance(&w.stream)
	if !math.IsNaN(w.ua) {
		r.UAAvailable = ua
	}
	switch {
	case w.coil():
		w.coilResult(&r, ua, share)
	case !w.series():
		w.asideResult(&r, ua)
	default:
		w.seriesResult(&r)
	}
	r.Approach = w.approachAt(level, w.approachOf)
	return r
}

// zone returns the zone that a segment belongs to: the last one, or a new one behind it.
func (r *ExchangerResult) zone(s *segment) *Zone {
	if n := len(r.Zones); n > 0 && r.Zones[n-1].Name == s.zone {
		r.Zones[n-1].RefrigerantOutlet = s.T2
		return &r.Zones[n-1]
	}
	r.Zones = append(r.Zones, Zone{Name: s.zone, RefrigerantInlet: s.T1, RefrigerantOutlet: s.T2})
	return &r.Zones[len(r.Zones)-1]
}

// finish derives what follows from a zone's duty and conductance.
func (r *ExchangerResult) finish() {
	for i := range r.Zones {
		r.Zones[i].LMTD = r.Zones[i].Duty / r.Zones[i].UA
	}
}

// seriesResult tells the zones of counterflow and parallel flow.
func (w *work) seriesResult(r *ExchangerResult) {
	var needed float64
	for i := range w.segments {
		s := &w.segments[i]
		z := r.zone(s)
		heat := w.duty * (s.to - s.from)
		z.Duty += heat
		z.Slices++
		first, last := 1-s.from, 1-s.to // shares of the stream's change
		if w.arrangement == ParallelFlow {
			first, last = s.from, s.to
		}
		if w.stream.known {
			d1, d2 := w.differences(i)
			ua := heat / logMean(math.Max(d1, leastDifference), math.Max(d2, leastDifference))
			z.UA += ua
			z.Share += ua / s.ratio
			needed += ua / s.ratio
		} else {
			z.UA, z.Share = nan, nan
		}
		if w.arrangement == ParallelFlow {
			if z.Slices == 1 {
				z.SecondaryInlet = w.stream.at(first)
			}
			z.SecondaryOutlet = w.stream.at(last)
		} else {
			if z.Slices == 1 {
				z.SecondaryOutlet = w.stream.at(first)
			}
			z.SecondaryInlet = w.stream.at(last)
		}
	}
	if w.stream.known {
		for i := range r.Zones {
			r.Zones[i].Share /= needed
		}
		r.UA = needed
		r.takePinch(w)
	}
	r.finish()
}

// takePinch takes over the smallest difference. A conductance keeps streams apart; what falls below zero is rounding.
func (r *ExchangerResult) takePinch(w *work) {
	if r.Pinch, r.PinchAt = w.pinch, w.pinchAt; !math.IsNaN(w.ua) {
		r.Pinch = math.Max(0, w.pinch)
	}
}

// asideResult tells the zones of crossflow.
func (w *work) asideResult(r *ExchangerResult, ua float64) {
	if math.IsNaN(ua) {
		ua = w.neededAside(w.dryShares)
	}
	r.UA = ua
	if w.stream.known {
		w.pinchAside(ua)
		r.takePinch(w)
	}
	for i := range w.segments {
		s := &w.segments[i]
		z := r.zone(s)
		heat := w.duty * (s.to - s.from)
		share := w.crossShare(i, ua)
		z.Duty += heat
		z.Slices++
		z.UA += ua * s.ratio * share
		z.Share += share
		z.SecondaryInlet = w.stream.inT
		z.SecondaryOutlet = w.stream.inT + w.stream.sign*z.Duty/(z.Share*w.stream.capacity)
	}
	if !w.stream.known {
		r.UA = nan
	}
	r.finish()
}

// coilResult tells the zones of a coil and the air behind it.
func (w *work) coilResult(r *ExchangerResult, ua, share float64) {
	if !w.stream.known {
		w.seriesResult(r)
		return
	}
	var surface, apparatus, wetHeat float64
	q := &r.Secondary
	tell := func(s *segment, ua, part float64, k *strip, out outcome) {
		z := r.zone(s)
		z.Duty += k.heat
		z.UA += ua
		z.Slices++
		before := z.Share
		z.Share += part
		switch {
		case !w.series():
			z.SecondaryInlet = k.air.T
			z.SecondaryOutlet = (z.SecondaryOutlet*before + out.air.T*part) / z.Share
		case w.arrangement == ParallelFlow:
			if z.Slices == 1 {
				z.SecondaryInlet = k.air.T
			}
			z.SecondaryOutlet = out.air.T
		default:
			if z.Slices == 1 {
				z.SecondaryOutlet = out.air.T
			}
			z.SecondaryInlet = k.air.T
		}
		if s.zone == Evaporating {
			w.note(out.air.T-k.coldEnd(w.arrangement), s.to)
		}
		q.CondensateFlow += out.shed
		if out.wet {
			surface += out.surface * k.heat
			apparatus += out.apparatus * k.heat
			wetHeat += k.heat
		}
	}
	q.CondensateFlow = 0
	w.pinch, w.pinchAt = w.gap, 1
	var W float64
	if w.series() {
		W = w.tellSeries(r, share, tell)
	} else {
		W = w.tellAside(r, ua, share, tell)
	}
	r.finish()
	if q.Wet = wetHeat > 0; q.Wet {
		q.SurfaceTemperature, q.ApparatusDewPoint = surface/wetHeat, apparatus/wetHeat
	}
	w.leaving(q, W)
	r.takePinch(w)
}

// tellSeries goes through a coil whose zones the air passes one after another, in the direction of the refrigerant. It
// returns the humidity ratio behind the coil.
func (w *work) tellSeries(r *ExchangerResult, share float64, tell visit) (W float64) {
	var calls []func()
	r.UA, _ = w.coilSeries(share, func(s *segment, ua, _ float64, k *strip, out outcome) {
		held := *k
		calls = append(calls, func() { tell(s, ua, ua/s.ratio, &held, out) })
		W = out.air.W
	})
	if w.arrangement == Counterflow {
		slices.Reverse(calls)
	}
	for _, call := range calls {
		call()
	}
	for i := range r.Zones {
		r.Zones[i].Share /= r.UA
	}
	return W
}

// tellAside goes through a coil whose zones lie side by side. It returns the humidity ratio of the air behind them.
func (w *work) tellAside(r *ExchangerResult, ua, share float64, tell visit) (W float64) {
	if math.IsNaN(ua) {
		ua = w.neededAside(func(ua float64) float64 { return w.coilShares(ua, share) })
	}
	r.UA = ua
	var area float64
	for i := range w.segments {
		s := &w.segments[i]
		part := w.coilShare(i, ua, share)
		k := w.strip(s, w.entering(), w.stream.flow*part, share)
		own := ua * s.ratio * part
		wet, surface := part < w.crossShare(i, ua), nan
		if wet {
			_, surface = k.wet()
		}
		out := k.leave(own, wet, surface)
		tell(s, own, part, &k, out)
		W += part * out.air.W
		area += part
	}
	return W + (1-area)*w.stream.air.W // an exchanger larger than it can use leaves some air as it is
}

// result tells what is known of a stream without looking at the exchanger.
func (p *passage) result(duty float64) StreamResult {
	r := StreamResult{
		Fluid: "moist_air", InletTemperature: p.inT, OutletTemperature: p.outT, MassFlow: p.flow, FreezingPoint: nan,
		InletHumidity: nan, OutletHumidity: nan, InletWetBulb: nan, OutletWetBulb: nan, InletRatio: nan, OutletRatio: nan,
		SensibleDuty: nan, LatentDuty: nan, SensibleRatio: nan, CondensateFlow: nan, SurfaceTemperature: nan, ApparatusDewPoint: nan,
	}
	if !p.known {
		r.OutletTemperature = nan
	}
	if p.liquid != nil {
		r.Fluid, r.FreezingPoint = p.liquid.Name(), p.liquid.FreezingPoint()
		r.VolumeFlow = p.flow / p.liquid.Density(p.inT)
		return r
	}
	in := p.air
	in.T = p.inT
	r.MassFlow = p.flow * (1 + in.W)
	r.VolumeFlow = p.flow * in.Volume()
	r.InletHumidity, r.InletWetBulb, r.InletRatio = in.RelativeHumidity(), in.WetBulb(), in.W
	if p.known {
		out := in
		out.T = p.outT
		r.OutletHumidity, r.OutletWetBulb, r.OutletRatio = out.RelativeHumidity(), out.WetBulb(), out.W
		r.SensibleDuty, r.LatentDuty, r.SensibleRatio, r.CondensateFlow = duty, 0, 1, 0
	}
	return r
}

// leaving completes the state of air behind a coil from its humidity: the heat fixes the enthalpy.
func (w *work) leaving(q *StreamResult, W float64) {
	p := &w.stream
	h := p.inH - w.duty/p.flow
	if q.Wet {
		h -= (p.air.W - W) * secondary.CondensateEnthalpy(q.SurfaceTemperature)
	}
	out := secondary.Air{T: dryBulb(h, W), P: p.air.P, W: W}
	q.OutletTemperature, q.OutletRatio = out.T, W
	q.OutletHumidity, q.OutletWetBulb = math.Min(1, out.RelativeHumidity()), out.WetBulb()
	q.SensibleDuty = p.flow * moistCapacity(p.air.W) * (p.inT - out.T)
	if !q.Wet {
		q.SensibleDuty = w.duty
	}
	q.LatentDuty = w.duty - q.SensibleDuty
	q.SensibleRatio = q.SensibleDuty / w.duty
	w.stream.outT = out.T // for the leaving approach
}
