package readings_test

import (
	"context"
	"errors"
	"math"
	"math/rand/v2"
	"testing"

	"dewmark/service/cycle"
	"dewmark/service/machine"
	"dewmark/service/readings"
)

// rooftop is an invented air conditioner with a fixed orifice: superheat and subcooling are what orifice and charge make of
// them. The orifice passes K sqrt(2 rho (p4 - p7)) (1 + 0.02 subcooling); the charge lies as liquid in the condenser, which
// subcools it, or in the evaporator, where it keeps the superheat down.
type rooftop struct {
	base    *machine.Machine
	orifice float64 // K, m2
	charge  float64 // departure from the right charge, K of subcooling
}

const (
	rooftopSuperheat  = 9.0 // K, at the design point
	rooftopSubcooling = 8.0 // K
	chargeShare       = 0.5 // K of subcooling that go with a kelvin of superheat
)

func newRooftop(t testing.TB) *rooftop {
	r := &rooftop{base: &machine.Machine{
		Name: "Thorn roof", Refrigerant: refrigerant(t, "R290"), Layout: cycle.SingleStage, Purpose: cycle.Cooling,
		Compressor: machine.Compressor{
			SweptVolume:          new(50e-6),
			IsentropicEfficiency: &machine.Law{Coefficients: []float64{0.68}},
			VolumetricEfficiency: &machine.Law{Coefficients: []float64{0.97, -0.025}},
			HeatLossFraction:     new(0.05),
			Speed:                new(50.0),
		},
		Evaporator: machine.Exchanger{UA: new(900.0), SecondaryShare: new(0.7), ReferenceFlow: new(0.72)},
		Condenser:  machine.Exchanger{UA: new(1300.0), ReferenceFlow: new(1.37)},
	}}
	// The orifice fits the design point.
	design := rooftopCondition(300.15, 308.15)
	m := *r.base
	m.Superheat, m.Subcooling = new(rooftopSuperheat), new(rooftopSubcooling)
	p, err := machine.Solve(t.Context(), &m, design)
	if err != nil {
		t.Fatal(err)
	}
	r.orifice = 1
	r.orifice = p.Cycle.Performance.MassFlow / r.passes(p, rooftopSubcooling)
	return r
}

func rooftopCondition(room, outside float64) *machine.Condition {
	return &machine.Condition{
		Source: machine.Stream{InletTemperature: &room, RelativeHumidity: new(0.45), VolumeFlow: new(0.62)},
		Sink:   machine.Stream{InletTemperature: &outside, RelativeHumidity: new(0.3), VolumeFlow: new(1.20)},
	}
}

func (r *rooftop) passes(p *machine.OperatingPoint, subcooling float64) float64 {
	var high, low, rho float64
	for _, s := range p.Cycle.States {
		switch s.Label {
		case "4":
			high, rho = s.State.P, s.State.Rho
		case "7":
			low = s.State.P
		}
	}
	return r.orifice * math.Sqrt(2*rho*(high-low)) * (1 + 0.02*subcooling)
}

// settle finds superheat and subcooling, by regula falsi in the superheat; the charge ties the subcooling to it.
func (r *rooftop) settle(ctx context.Context, k *machine.Condition) (*machine.Machine, *machine.OperatingPoint, error) {
	var p *machine.OperatingPoint
	m := *r.base
	at := func(superheat float64) (float64, error) {
		subcooling := math.Max(0.2, rooftopSubcooling+r.charge+chargeShare*(superheat-rooftopSuperheat))
		m.Superheat, m.Subcooling = &superheat, &subcooling
		var err error
		if p, err = machine.Solve(ctx, &m, k); err != nil {
			return 0, err
		}
		return r.passes(p, subcooling)/p.Cycle.Performance.MassFlow - 1, nil
	}
	a, b := 0.5, 22.0
	fa, err := at(a)
	if err != nil {
		return nil, nil, err
	}
	if fa > 0 { // more than the compressor takes even without superheat
		return nil, nil, errors.New("floodback")
	}
	fb, err := at(b)
	for err != nil && b > a+1 {
		b--
		fb, err = at(b)
	}
	if err != nil || fb < 0 {
		return nil, nil, errors.New("too little to wet the evaporator")
	}
	for range 40 {
		c := b - fb*(b-a)/(fb-fa)
		fc, err := at(c)
		if err != nil {
			return nil, nil, err
		}
		if math.Abs(fc) < 1e-6 {
			return &m, p, nil
		}
		if fc*fb < 0 {
			a, fa = b, fb
		} else {
			fa /= 2 // Illinois
		}
		b, fb = c, fc
	}
	return nil, nil, errors.New("no convergence")
}

// Expect implements [readings.Machine]: the flows of air are not read and taken as they should be.
func (r *rooftop) Expect(ctx context.Context, c *readings.Conditions) (*readings.Expectation, error) {
	m, _, err := r.settle(ctx, rooftopCondition(c.Source.InletTemperature, c.Sink.InletTemperature))
	if err != nil {
		return nil, err
	}
	x, err := readings.Expected(m, readings.ExpectOptions{Standard: commissioned})
	if err != nil {
		return nil, err
	}
	with := *c
	with.Source.VolumeFlow, with.Sink.VolumeFlow = 0.62, 1.20
	with.Source.InletHumidity, with.Sink.InletHumidity = 0.45, 0.3
	return x.Expect(ctx, &with)
}

// Flow implements [readings.Machine].
func (r *rooftop) Flow(_, _, _, _ float64) (flow, relative float64, err error) {
	return 0, 0, errors.New("not told")
}

// orificeFaults act on the machine alone; their signs follow from orifice and charge.
var orificeFaults = []struct {
	name  string
	apply func(r *rooftop, k *machine.Condition, severity float64)
}{
	{"refrigerant_leak", func(r *rooftop, _ *machine.Condition, s float64) { r.charge = -3 - 4*s }},
	{"compressor_valve_leak", func(r *rooftop, _ *machine.Condition, s float64) { leaking(r.base, 0.12+0.15*s) }},
	{"liquid_line_restriction", func(r *rooftop, _ *machine.Condition, s float64) { r.orifice *= 0.94 - 0.08*s }},
	{"condenser_fouling", func(_ *rooftop, k *machine.Condition, s float64) { k.Sink.VolumeFlow = new(1.20 * (0.7 - 0.25*s)) }},
	{"evaporator_fouling", func(_ *rooftop, k *machine.Condition, s float64) { k.Source.VolumeFlow = new(0.62 * (0.75 - 0.25*s)) }},
}

// The table of Rossi and Braun, with a machine whose orifice and charge make the signs.
func TestFaultsOfAMachineWithOrifice(t *testing.T) {
	healthy := newRooftop(t)
	e := evaluator(t, readings.Installation{
		Refrigerant: healthy.base.Refrigerant, Uncertainties: sensors(), Machine: healthy, Expansion: readings.FixedOrifice,
	}, nil)
	var faults []caseOf
	for _, f := range orificeFaults {
		faults = append(faults, caseOf{f.name, func(t testing.TB, rng *rand.Rand) (*readings.Sample, bool) {
			sick := *healthy
			base := *healthy.base
			sick.base = &base
			k := rooftopCondition(296+8*rng.Float64(), 300+12*rng.Float64())
			f.apply(&sick, k, rng.Float64())
			return readRooftop(t, rng, &sick, k)
		}})
	}
	confusion(t, e, readings.FixedOrifice, func(t testing.TB, rng *rand.Rand) (*readings.Sample, bool) {
		return readRooftop(t, rng, healthy, rooftopCondition(296+8*rng.Float64(), 300+12*rng.Float64()))
	}, faults)
}

func readRooftop(t testing.TB, rng *rand.Rand, r *rooftop, k *machine.Condition) (*readings.Sample, bool) {
	_, p, err := r.settle(t.Context(), k)
	if err != nil {
		return nil, false
	}
	s := read(t, rng, r.base.Refrigerant, p, states(p), p.System.CompressorPower)
	s.Sink, s.Source = readings.Stream{MoistAir: true}, readings.Stream{MoistAir: true}
	return s, true
}
