package readings

import (
	"context"
	"errors"
	"math"

	"dewmark/props"
	"dewmark/service/machine"
)

// Standard uncertainties of what a model says of a healthy machine, where nothing better is known (common practice; ratings
// of compressors are declared to 5 %, AHRI 540, from memory).
const (
	levelDoubt      = 1.0  // K, evaporation, condensation and approaches
	valveDoubt      = 1.5  // K, superheat and subcooling
	dischargeDoubt  = 3.0  // K
	changeDoubt     = 0.05 // relative, changes of the streams
	capacityDoubt   = 0.05 // relative
	compressorDoubt = 0.05 // relative, flow by the map
	lossDoubt       = 0.02 // of the power, heat loss that the machine states
)

// ExpectOptions refine what is expected of a machine.
type ExpectOptions struct {
	// Standard holds standard uncertainties of the expected features, SI, instead of the defaults; 0 for the default.
	Standard [FeatureCount]float64
	// FlowUncertainty is the relative standard uncertainty of the compressor's flow; 0 for the default, 5 %.
	FlowUncertainty float64
}

// Expected makes a machine to compare with from a description of it, or refuses the description with a
// [*machine.RefusedError].
func Expected(m *machine.Machine, o ExpectOptions) (Machine, error) {
	x := &expected{machine: m, options: o}
	x.compressor, x.alone = machine.NewCompressorModel(m)
	if refused, ok := errors.AsType[*machine.RefusedError](x.alone); ok {
		for _, r := range refused.Refusals {
			// A layout with several compressions has operating points and no flow of its own.
			if r.Code != machine.NotAllowed || r.Field != "machine.layout" {
				return nil, refused
			}
		}
	}
	return x, nil
}

type expected struct {
	machine    *machine.Machine
	compressor *machine.CompressorModel
	alone      error // why the compressor does not do the whole lift alone, or nil
	options    ExpectOptions
}

// Flow implements [Machine].
func (x *expected) Flow(suctionPressure, suctionTemperature, dischargePressure, speed float64) (flow, relative float64, err error) {
	if x.alone != nil {
		return 0, 0, x.alone
	}
	relative = compressorDoubt
	if u := x.options.FlowUncertainty; u > 0 {
		relative = u
	}
	flow, err = x.compressor.Flow(suctionPressure, suctionTemperature, dischargePressure, speed)
	return flow, relative, err
}

// HeatLoss implements [heatLosing]: whatever of the power at the terminals does not reach the refrigerant.
func (x *expected) HeatLoss() (fraction, standard float64, ok bool) {
	c := &x.machine.Compressor
	if c.HeatLossFraction == nil {
		return 0, 0, false
	}
	drive := 1.0
	if c.DriveEfficiency != nil {
		drive = *c.DriveEfficiency
	}
	return 1 - drive*(1-*c.HeatLossFraction), lossDoubt, true
}

// errNoFlow says that a sample does not fix a stream.
var errNoFlow = errors.New("a stream needs its fluid, its inlet temperature and a flow, or both temperatures")

// Expect implements [Machine].
func (x *expected) Expect(ctx context.Context, c *Conditions) (*Expectation, error) {
	var k machine.Condition
	var err error
	if k.Source, err = streamOf(&c.Source); err != nil {
		return nil, err
	}
	if k.Sink, err = streamOf(&c.Sink); err != nil {
		return nil, err
	}
	k.Speed, k.AmbientTemperature = known(c.Speed), known(c.Ambient)
	p, err := machine.Solve(ctx, x.machine, &k)
	if err != nil {
		return nil, err
	}
	e := &Expectation{Features: x.features(p)}
	// A change that the machine was told says nothing about it.
	if k.Sink.OutletTemperature != nil {
		e.Features[FeatureCondenserChange] = math.NaN()
	}
	if k.Source.OutletTemperature != nil {
		e.Features[FeatureEvaporatorChange] = math.NaN()
	}
	e.Standard = x.doubts(&e.Features)
	for i := range p.Breaches {
		b := &p.Breaches[i]
		e.Cautions = append(e.Cautions, Caution{Code: BeyondMachine, Field: b.Field, Message: message(
			"the machine would run outside its limits here: what is expected of it is uncertain")})
	}
	return e, nil
}

// streamOf makes a condition of the machine from what is read: its inlet and its flow, or without a flow both ends.
func streamOf(c *StreamConditions) (machine.Stream, error) {
	s := machine.Stream{Liquid: c.Liquid, InletTemperature: known(c.InletTemperature)}
	if !c.known() || s.InletTemperature == nil {
		return s, errNoFlow
	}
	if c.MoistAir {
		s.Pressure, s.RelativeHumidity = known(c.Pressure), known(c.InletHumidity)
	}
	s.MassFlow, s.VolumeFlow = known(c.MassFlow), known(c.VolumeFlow)
	if s.MassFlow == nil && s.VolumeFlow == nil {
		s.OutletTemperature = known(c.OutletTemperature)
		if s.OutletTemperature == nil {
			return s, errNoFlow
		}
	}
	return s, nil
}

func known(v float64) *float64 {
	if math.IsNaN(v) {
		return nil
	}
	return &v
}

// features reads what can be compared out of an operating point.
func (x *expected) features(p *machine.OperatingPoint) (f [FeatureCount]float64) {
	for i := range f {
		f[i] = math.NaN()
	}
	at := func(label string) (props.State, bool) {
		for i := range p.Cycle.States {
			if s := &p.Cycle.States[i]; s.Label == label {
				return s.State, true
			}
		}
		return props.State{}, false
	}
	performance := &p.Cycle.Performance
	f[FeatureEvaporation], f[FeatureCondensation] = p.EvaporationTemperature, p.CondensationTemperature
	if s, ok := at("7"); ok {
		f[FeatureLowPressure] = s.P
	}
	if s, ok := at("1"); ok {
		f[FeatureSuperheat] = s.T - p.SuctionDewTemperature
	}
	if s, ok := at("4"); ok {
		f[FeatureHighPressure] = s.P
		if bubble, err := x.machine.Refrigerant.BubblePointAtPressure(s.P); err == nil {
			f[FeatureSubcooling] = bubble.T - s.T
		}
	}
	f[FeatureDischarge], f[FeaturePressureRatio] = performance.DischargeTemperature, performance.PressureRatio
	sink, source := &p.Condenser.Secondary, &p.Evaporator.Secondary
	f[FeatureCondenserChange] = sink.OutletTemperature - sink.InletTemperature
	f[FeatureEvaporatorChange] = source.InletTemperature - source.OutletTemperature
	f[FeatureCondenserApproach] = p.CondensationTemperature - sink.OutletTemperature
	f[FeatureEvaporatorApproach] = source.OutletTemperature - p.EvaporationTemperature
	f[FeatureCapacity], f[FeaturePower] = performance.CoolingCapacity, p.System.CompressorPower
	return f
}

// doubts returns the standard uncertainties of expected values. What follows from other features takes theirs.
func (x *expected) doubts(v *[FeatureCount]float64) [FeatureCount]float64 {
	u := x.options.Standard
	or := func(f Feature, doubt float64) {
		if u[f] == 0 {
			u[f] = math.Abs(doubt)
		}
	}
	or(FeatureEvaporation, levelDoubt)
	or(FeatureCondensation, levelDoubt)
	or(FeatureSuperheat, valveDoubt)
	or(FeatureSubcooling, valveDoubt)
	or(FeatureDischarge, dischargeDoubt)
	or(FeatureCondenserChange, changeDoubt*v[FeatureCondenserChange])
	or(FeatureEvaporatorChange, changeDoubt*v[FeatureEvaporatorChange])
	or(FeatureCapacity, capacityDoubt*v[FeatureCapacity])
	or(FeaturePower, capacityDoubt*v[FeaturePower])
	or(FeatureLowPressure, u[FeatureEvaporation]*x.slope(v[FeatureLowPressure]))
	or(FeatureHighPressure, u[FeatureCondensation]*x.slope(v[FeatureHighPressure]))
	or(FeaturePressureRatio, v[FeaturePressureRatio]*math.Hypot(u[FeatureLowPressure]/v[FeatureLowPressure], u[FeatureHighPressure]/v[FeatureHighPressure]))
	or(FeatureCondenserApproach, math.Hypot(u[FeatureCondensation], u[FeatureCondenserChange]))
	or(FeatureEvaporatorApproach, math.Hypot(u[FeatureEvaporation], u[FeatureEvaporatorChange]))
	return u
}

// slope returns dp/dT along the dew line at pressure p, Pa/K. Above the critical pressure, where a gas cooler is controlled,
// it is what keeps the doubt of the pressure at 1 % a kelvin.
func (x *expected) slope(p float64) float64 {
	const step = 1e-3
	low, err := x.machine.Refrigerant.DewPointAtPressure(p * (1 - step))
	if err != nil {
		return 0.01 * p
	}
	high, err := x.machine.Refrigerant.DewPointAtPressure(p * (1 + step))
	if err != nil {
		return 0.01 * p
	}
	return 2 * step * p / (high.T - low.T)
}
