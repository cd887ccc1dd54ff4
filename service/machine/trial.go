package machine

import (
	"context"
	"math"

	"dewmark/service/cycle"
)

// unknowns are what a machine settles at: the temperatures at which the refrigerant leaves the evaporator and the condenser
// or gas cooler, K. With superheat and subcooling they fix evaporation and condensation; where a valve holds the evaporation
// the first fixes the superheat.
type unknowns [2]float64

// The indexes of unknowns and of their mismatches.
const (
	low  = 0 // evaporator
	high = 1 // condenser or gas cooler
)

// trial is a machine whose levels are on trial. The cycle's request points into it.
type trial struct {
	*plan
	ctx          context.Context
	speedNow     float64 // 1/s; NaN without
	highPressure float64 // Pa, of a gas cooler
	held         bool    // the valve holds the evaporation; the superheat is unknown
	evaluations  int

	request              cycle.Request
	te, sh               float64 // K, dew point and superheat at the evaporator outlet
	t4                   float64 // K, condenser or gas cooler outlet
	pc, bubble, tc       float64 // Pa and K, pressure, bubble and dew point at the condenser outlet
	isentropic           float64
	volumetric           float64
	isentropic2          float64
	volumetric2          float64
	swept, flow          float64
	sweptSize, flowSize  cycle.Size
	gasCooler            cycle.GasCooler
	following            cycle.Compressor
	strained             string // path of the law or map that left what a compressor can be, or ""
	strainedLaw          *law
	sourceMean, sinkMean float64
	gaps                 [2]float64 // K, between the refrigerants' outlets and the streams' inlets; NaN where the temperatures tell
	on                   *axes
	buffers              [2][]segment
}

func newTrial(ctx context.Context, p *plan) *trial {
	t := &trial{plan: p, ctx: ctx, speedNow: p.speed, request: p.template(), sh: p.superheat}
	r := &t.request
	r.Evaporation = cycle.Evaporation{Temperature: &t.te, Superheat: &t.sh}
	if p.gasCooled {
		t.highPressure = p.highSide.pressure
		t.gasCooler = cycle.GasCooler{OutletTemperature: &t.t4, Correlation: p.highSide.correlation}
		if p.highSide.correlation == cycle.NoCorrelation {
			t.gasCooler.Pressure = &t.highPressure
		}
		r.GasCooler = &t.gasCooler
	} else {
		r.Condensation = cycle.Condensation{Pressure: &t.pc, Subcooling: &p.subcooling}
	}
	loss := p.compressor.loss
	r.Compressor = cycle.Compressor{IsentropicEfficiency: &t.isentropic, VolumetricEfficiency: &t.volumetric, HeatLossFraction: loss}
	if p.steps {
		t.following = cycle.Compressor{IsentropicEfficiency: &t.isentropic2, VolumetricEfficiency: &t.volumetric2, HeatLossFraction: loss}
		if p.second != nil {
			t.following.HeatLossFraction = p.second.loss
		}
		r.SecondCompressor = &t.following
	}
	t.sweptSize.SweptVolumeFlow, t.flowSize.MassFlow = &t.swept, &t.flow
	return t
}

// settled is a machine at levels on trial.
type settled struct {
	y          unknowns // where x lies on the axes of a search
	capped     [2]bool  // the exchanger could do more although the refrigerant leaves as the stream enters
	pinned     [2]bool  // the mismatch jumps across zero between neighbouring levels
	uncertain  float64  // share by which duties differ across such a jump
	x          unknowns
	mismatch   unknowns // of the exchangers, as shares of the duty; in K for an approach or a pinch
	solution   *cycle.Solution
	evaporator work
	condenser  work
	levels     [2]levels
	flanges    flanges
}

// worst returns the larger mismatch. One that no level can close does not count.
func (s *settled) worst() (worst float64) {
	for i, m := range s.mismatch {
		if !s.capped[i] && !s.pinned[i] {
			worst = math.Max(worst, math.Abs(m))
		}
	}
	return worst
}

// at puts the machine together at x.
func (t *trial) at(x unknowns) (settled, error) {
	if t.ctx.Err() != nil {
		return settled{}, &stopped{context.Cause(t.ctx)}
	}
	t.evaluations++
	s := settled{x: x}
	err := t.place(x)
	if err != nil {
		return s, err
	}
	if err := t.compress(&s); err != nil {
		return s, err
	}
	if s.solution, err = t.solve(); err != nil {
		return s, err
	}
	if err := t.exchange(&s); err != nil {
		return s, err
	}
	s.mismatch = unknowns{s.evaporator.mismatch(s.levels[low]), s.condenser.mismatch(s.levels[high])}
	return s, nil
}

// solve computes the cycle of the request.
func (t *trial) solve() (*cycle.Solution, error) {
	s, err := cycle.Solve(t.ctx, &t.request)
	if err != nil && t.ctx.Err() != nil {
		err = &stopped{context.Cause(t.ctx)}
	}
	return s, err
}

// place finds evaporation and condensation.
func (t *trial) place(x unknowns) error {
	t.te, t.sh = x[low]-t.superheat, t.superheat
	if t.held {
		t.te, t.sh = t.limits.evaporation, x[low]-t.limits.evaporation
	}
	t.t4 = x[high]
	if t.gasCooled {
		return nil
	}
	bubble, err := t.fluid.BubblePoint(t.t4 + t.subcooling)
	if err != nil {
		return err
	}
	dew, err := t.fluid.DewPointAtPressure(bubble.P)
	t.bubble, t.pc, t.tc = bubble.T, bubble.P, dew.T
	return err
}

// exchange looks at both exchangers.
func (t *trial) exchange(s *settled) error {
	var err error
	if s.evaporator, err = t.passing(s, &t.evaporator, "6", "7", &t.source, low); err != nil {
		return err
	}
	if s.condenser, err = t.passing(s, &t.condenser, "3", "4", &t.sink, high); err != nil {
		return err
	}
	s.levels[low] = levels{dew: t.te, mean: (stateAt(s.solution, "6").State.T + t.te) / 2}
	s.levels[high] = levels{dew: t.tc, mean: (t.bubble + t.tc) / 2, outlet: t.t4}
	return nil
}

func (t *trial) passing(s *settled, x *exchange, in, out string, stream *side, which int) (work, error) {
	w, err := x.workAt(t.fluid, stateAt(s.solution, in), stateAt(s.solution, out), stream, t.gaps[which], t.buffers[which])
	t.buffers[which] = w.segments
	return w, err
}

// stateAt returns the state with a label, or nil.
func stateAt(s *cycle.Solution, label string) *cycle.StateAt {
	for i := range s.States {
		if s.States[i].Label == label {
			return &s.States[i]
		}
	}
	return nil
}

// Efficiencies that a search works with where a law or a map leaves what is possible. An answer there is refused.
const (
	leastEfficiency = 0.01
	mostEfficiency  = 1.0
)

// compress sets the compressor's efficiencies and the flow.
func (t *trial) compress(s *settled) error {
	if t.simple {
		if err := t.simpleFlanges(&s.flanges); err != nil {
			return err
		}
	}
	ratios := [2]float64{s.flanges.dischargePressure / s.flanges.suctionPressure}
	if !t.simple {
		var err error
		if ratios, err = t.probe(&s.flanges); err != nil {
			return err
		}
	}
	d := &t.compressor
	t.strained, t.strainedLaw = "", nil
	if len(d.ratings) > 0 {
		return t.byMaps(&s.flanges)
	}
	t.isentropic = t.efficiency(&d.isentropic, d.field+".isentropic_efficiency", ratios[0])
	t.volumetric = t.efficiency(&d.volumetric, d.field+".volumetric_efficiency", ratios[0])
	if t.steps {
		two := d
		if t.second != nil {
			two = t.second
		}
		t.isentropic2 = t.efficiency(&two.isentropic, two.field+".isentropic_efficiency", ratios[1])
		t.volumetric2 = t.efficiency(&two.volumetric, two.field+".volumetric_efficiency", ratios[1])
	}
	t.swept = d.swept * t.speedNow
	t.request.Size = &t.sweptSize
	return nil
}

// efficiency evaluates a law and keeps it within what a search can work with.
func (t *trial) efficiency(l *law, field string, ratio float64) float64 {
	v := l.at(ratio)
	if leastEfficiency <= v && v <= mostEfficiency {
		return v
	}
	if t.strained == "" {
		t.strained, t.strainedLaw = field, l
	}
	return math.Max(leastEfficiency, math.Min(v, mostEfficiency))
}

// simpleFlanges finds the compressor's conditions where no line and no exchanger lies in between.
func (t *trial) simpleFlanges(f *flanges) error {
	dew, err := t.fluid.DewPoint(t.te)
	if err != nil {
		return err
	}
	f.suctionDew, f.suctionPressure = t.te, dew.P
	f.dischargePressure, f.dischargeDew = t.highPressure, math.NaN()
	if !t.gasCooled {
		f.dischargePressure, f.dischargeDew = t.pc, t.tc
	}
	if len(t.compressor.ratings) == 0 {
		return nil
	}
	f.suction = dew
	if t.sh > 0 {
		f.suction, err = t.fluid.TemperaturePressure(t.te+t.sh, dew.P)
	}
	return err
}

// probe finds the compressor's conditions, and the pressure ratios of both compressors, from a cycle of any efficiency:
// they do not depend on it.
func (t *trial) probe(f *flanges) (ratios [2]float64, err error) {
	t.isentropic, t.volumetric, t.isentropic2, t.volumetric2 = 0.7, 1, 0.7, 1
	t.flow = 1
	t.request.Size = &t.flowSize
	s, err := t.solve()
	if err != nil {
		return ratios, err
	}
	if err := t.readFlanges(s, f); err != nil {
		return ratios, err
	}
	whole := f.dischargePressure / f.suctionPressure
	ratios = [2]float64{whole, whole}
	switch {
	case t.layout == cycle.EconomisedSubcooler || t.layout == cycle.EconomisedFlash:
		if t.second != nil { // each step by a law of its own
			ratios = [2]float64{s.Compressors[0].PressureRatio, s.Compressors[1].PressureRatio}
		}
	case len(s.Compressors) > 1:
		ratios = [2]float64{s.Compressors[0].PressureRatio, s.Compressors[1].PressureRatio}
	}
	return ratios, nil
}

// readFlanges takes the compressor's conditions from a solved cycle.
func (t *trial) readFlanges(s *cycle.Solution, f *flanges) error {
	in, out := stateAt(s, "1"), stateAt(s, "2")
	if in == nil {
		in = stateAt(s, "1L")
	}
	if out == nil {
		out = stateAt(s, "2H")
	}
	dew, err := t.fluid.DewPointAtPressure(in.State.P)
	if err != nil {
		return err
	}
	f.suction, f.suctionDew, f.suctionPressure = in.State, dew.T, in.State.P
	f.dischargePressure, f.dischargeDew = out.State.P, math.NaN()
	if out.State.P < t.fluid.Critical().P {
		hot, err := t.fluid.DewPointAtPressure(out.State.P)
		if err != nil {
			return err
		}
		f.dischargeDew = hot.T
	}
	return nil
}

// byMaps takes flow and efficiency from the maps around the speed.
func (t *trial) byMaps(f *flanges) error {
	d := &t.compressor
	i, share := around(d.ratings, t.speedNow)
	flow, eta, err := d.ratings[i].rated(t.fluid, f)
	if err != nil {
		return err
	}
	if share > 0 { // flow and power are linear in the speed; the isentropic rise is the same
		flow2, eta2, err := d.ratings[i+1].rated(t.fluid, f)
		if err != nil {
			return err
		}
		power := (1-share)*flow/eta + share*flow2/eta2 // per isentropic rise
		flow = (1-share)*flow + share*flow2
		eta = flow / power
	}
	t.isentropic = eta
	if !(leastEfficiency <= eta && eta <= mostEfficiency) {
		t.strained = d.ratings[i].field
		t.isentropic = math.Max(leastEfficiency, math.Min(eta, mostEfficiency))
	}
	t.volumetric = 1 // stands for "not known"; the report removes it
	if v := d.swept * t.speedNow * f.suction.Rho; v > 0 {
		if eta := flow / v; eta > 0 && eta <= 1 {
			t.volumetric = eta
		}
	}
	if !(flow > leastFlow) {
		t.strained = d.ratings[i].field
		flow = leastFlow
	}
	t.flow = flow
	t.request.Size = &t.flowSize
	return nil
}

// leastFlow keeps a search going where a map without an envelope says nothing sensible, kg/s.
const leastFlow = 1e-9

// around returns the map below a speed and the share of the next one.
func around(all []rating, n float64) (i int, share float64) {
	for i+1 < len(all)-1 && all[i+1].speed <= n {
		i++
	}
	if len(all) < 2 || !(n > all[i].speed) {
		return i, 0
	}
	return i, math.Min(1, (n-all[i].speed)/(all[i+1].speed-all[i].speed))
}
