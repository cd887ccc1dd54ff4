package cycle_test

import (
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"dewmark/props"
	"dewmark/service/cycle"
)

// randomLayout is a layout as a random request.
type randomLayout struct {
	name string
	make func(t *testing.T, rng *rand.Rand) *cycle.Request
}

// anyRefrigerant returns a random single stage of a random refrigerant.
func anyRefrigerant(t *testing.T, rng *rand.Rand) *cycle.Request {
	c, err := catalogue()
	if err != nil {
		t.Fatal(err)
	}
	names := c.PureDesignations()
	return randomSingleStage(rng, refrigerant(t, names[rng.IntN(len(names))], props.DefaultDatum))
}

// second gives a request a second compressor of its own, or none.
func second(rng *rand.Rand, r *cycle.Request) {
	if rng.IntN(2) == 0 {
		r.SecondCompressor = &cycle.Compressor{
			IsentropicEfficiency: new(between(rng, 0.4, 1)),
			HeatLossFraction:     new(sometimes(rng, 0.5, between(rng, 0, 0.2))),
		}
	}
}

// middle gives a request an intermediate pressure somewhere between the low and the high pressure.
func middle(rng *rand.Rand, r *cycle.Request, low, high float64) {
	r.Intermediate = &cycle.Intermediate{Pressure: new(low * math.Pow(high/low, between(rng, 0.2, 0.8)))}
}

// saturation returns the request's evaporating and condensing pressure.
func saturation(r *cycle.Request) (low, high float64) {
	fluid := r.Refrigerant.(*props.Pure)
	low, _ = fluid.SaturationPressure(*r.Evaporation.Temperature)
	high, _ = fluid.SaturationPressure(*r.Condensation.Temperature)
	return low, high
}

// withMiddle returns a random request of any refrigerant with an intermediate pressure.
func withMiddle(layout cycle.Layout, change func(rng *rand.Rand, r *cycle.Request)) func(*testing.T, *rand.Rand) *cycle.Request {
	return func(t *testing.T, rng *rand.Rand) *cycle.Request {
		r := anyRefrigerant(t, rng)
		r.Layout = layout
		low, high := saturation(r)
		middle(rng, r, low, high)
		second(rng, r)
		if change != nil {
			change(rng, r)
		}
		return r
	}
}

// transcritical turns a request into one of R744 with a gas cooler.
func transcritical(with ...cycle.Layout) func(*testing.T, *rand.Rand) *cycle.Request {
	return func(t *testing.T, rng *rand.Rand) *cycle.Request {
		Te, Tout := between(rng, 245, 278), between(rng, 302, 318)
		superheat := sometimes(rng, 0.7, between(rng, 0, 10))
		r := &cycle.Request{
			Refrigerant: refrigerant(t, "R744", props.IIR),
			Layout:      cycle.Transcritical, With: with, Purpose: cycle.Heating + cycle.Purpose(rng.IntN(2)),
			Evaporation: cycle.Evaporation{Temperature: &Te, Superheat: &superheat},
			GasCooler:   &cycle.GasCooler{OutletTemperature: &Tout, Pressure: new(between(rng, 88e5, 130e5))},
			Compressor: cycle.Compressor{
				IsentropicEfficiency: new(between(rng, 0.5, 1)), HeatLossFraction: new(sometimes(rng, 0.5, between(rng, 0, 0.1))),
			},
			AmbientTemperature: new(288.15),
			SourceTemperature:  new(Te + superheat + between(rng, 0, 6)),
			SinkTemperature:    new(Tout - between(rng, 0, 6)),
			Size:               &cycle.Size{MassFlow: new(0.1)},
		}
		for _, l := range with {
			switch l {
			case cycle.SuctionExchanger:
				r.InternalExchanger = &cycle.InternalExchanger{Effectiveness: new(between(rng, 0, 1))}
				r.InternalExchanger.Vapour.Pressure = sometimes(rng, 0.5, between(rng, 0, 3e4))
				r.InternalExchanger.Liquid.Pressure = sometimes(rng, 0.5, between(rng, 0, 3e4))
			case cycle.ParallelCompression:
				r.Intermediate = &cycle.Intermediate{Pressure: new(between(rng, 46e5, 60e5))}
				second(rng, r)
			case cycle.Ejector:
				r.Ejector = &cycle.EjectorGeometry{
					MotiveEfficiency: new(between(rng, 0.4, 1)), SuctionEfficiency: new(between(rng, 0.4, 1)),
					DiffuserEfficiency: new(between(rng, 0.4, 1)), SuctionPressureDrop: new(between(rng, 0, 4e4)),
				}
			case cycle.EconomisedFlash, cycle.EconomisedSubcooler, cycle.TwoStageFlash:
				r.Intermediate = &cycle.Intermediate{Pressure: new(between(rng, 46e5, 60e5))}
			}
		}
		return r
	}
}

// cascade returns a random cascade of refrigerants that go together.
func cascade(t *testing.T, rng *rand.Rand) *cycle.Request {
	below := []string{"R744", "R23", "R170", "R41", "R290"}
	above := []string{"R717", "R290", "R134a", "R600a", "R1234yf", "R1270"}
	Te, Tk := between(rng, 221, 240), between(rng, 300, 325)
	Tm := between(rng, 255, 275)
	return &cycle.Request{
		Refrigerant: refrigerant(t, below[rng.IntN(len(below))], props.DefaultDatum),
		Layout:      cycle.Cascade, Purpose: cycle.Cooling,
		Evaporation:  cycle.Evaporation{Temperature: &Te, Superheat: new(between(rng, 0, 10))},
		Condensation: cycle.Condensation{Temperature: &Tk, Subcooling: new(between(rng, 0, 5))},
		Compressor:   cycle.Compressor{IsentropicEfficiency: new(between(rng, 0.5, 1))},
		Cascade: &cycle.CascadeCircuit{
			Upper:    []cycle.Refrigerant{refrigerant(t, above[rng.IntN(len(above))], props.DefaultDatum)},
			Approach: new(between(rng, 0, 8)), Superheat: new(sometimes(rng, 0.5, between(rng, 0, 5))), Subcooling: new(sometimes(rng, 0.5, between(rng, 0, 3))),
		},
		Intermediate:       &cycle.Intermediate{Temperature: &Tm},
		AmbientTemperature: new(298.15), SourceTemperature: new(Te + 12), SinkTemperature: new(Tk - 6),
	}
}

var randomLayouts = []randomLayout{
	{"suction_exchanger", func(t *testing.T, rng *rand.Rand) *cycle.Request {
		r := anyRefrigerant(t, rng)
		r.Layout = cycle.SuctionExchanger
		low, high := saturation(r)
		r.InternalExchanger = &cycle.InternalExchanger{Effectiveness: new(between(rng, 0, 1))}
		r.InternalExchanger.Vapour.Pressure = sometimes(rng, 0.5, between(rng, 0, 0.03*low))
		r.InternalExchanger.Liquid.Pressure = sometimes(rng, 0.5, between(rng, 0, 0.01*(high-low)))
		r.AmbientTemperature = new(*r.Condensation.Temperature + 5) // the suction line starts as warm as the liquid
		return r
	}},
	{"economised_flash", withMiddle(cycle.EconomisedFlash, nil)},
	{"economised_subcooler", withMiddle(cycle.EconomisedSubcooler, func(rng *rand.Rand, r *cycle.Request) {
		r.Economiser = &cycle.Economiser{Approach: new(between(rng, 2, 8)), InjectionSuperheat: new(sometimes(rng, 0.5, between(rng, 0, 2)))}
	})},
	{"economised_subcooler by ratio", withMiddle(cycle.EconomisedSubcooler, func(rng *rand.Rand, r *cycle.Request) {
		r.Economiser = &cycle.Economiser{InjectionRatio: new(between(rng, 0, 0.02)), InjectionSuperheat: new(0.0)}
	})},
	{"two_stage_flash open", withMiddle(cycle.TwoStageFlash, nil)},
	{"two_stage_flash gas removal", withMiddle(cycle.TwoStageFlash, func(_ *rand.Rand, r *cycle.Request) {
		r.Intercooler = &cycle.Intercooler{Kind: cycle.FlashGasRemoval}
	})},
	{"two_stage_intercooled closed", withMiddle(cycle.TwoStageIntercooled, func(rng *rand.Rand, r *cycle.Request) {
		r.Intercooler = &cycle.Intercooler{Approach: new(between(rng, 0, 8))}
	})},
	{"two_stage_intercooled external", withMiddle(cycle.TwoStageIntercooled, func(rng *rand.Rand, r *cycle.Request) {
		r.Intercooler = &cycle.Intercooler{Kind: cycle.ExternalIntercooler, Approach: new(between(rng, 1, 8))}
		r.Intercooler.Temperature = new(*r.Condensation.Temperature - between(rng, 0, 5))
	})},
	{"parallel_compression", withMiddle(cycle.ParallelCompression, nil)},
	{"cascade", cascade},
	{"transcritical", transcritical()},
	{"transcritical suction_exchanger", transcritical(cycle.SuctionExchanger)},
	{"transcritical parallel_compression", transcritical(cycle.ParallelCompression)},
	{"transcritical parallel_compression suction_exchanger", transcritical(cycle.ParallelCompression, cycle.SuctionExchanger)},
	{"transcritical economised_flash", transcritical(cycle.EconomisedFlash)},
	{"transcritical economised_subcooler", transcritical(cycle.EconomisedSubcooler)},
	{"transcritical two_stage_flash", transcritical(cycle.TwoStageFlash)},
	{"transcritical ejector", transcritical(cycle.Ejector)},
	{"transcritical ejector suction_exchanger", transcritical(cycle.Ejector, cycle.SuctionExchanger)},
}

// TestLayoutAccountsClose solves random machines of every layout and checks each component's account and the sums.
func TestLayoutAccountsClose(t *testing.T) {
	trials := 300
	if testing.Short() {
		trials = 30
	}
	for i, layout := range randomLayouts {
		t.Run(layout.name, func(t *testing.T) {
			rng := rand.New(rand.NewPCG(5, uint64(i)))
			solved := 0
			reasons := map[string]int{}
			for range trials {
				r := layout.make(t, rng)
				s, err := cycle.Solve(t.Context(), r)
				if e, ok := errors.AsType[*cycle.RefusedError](err); ok {
					f := e.Refusals[0]
					reasons[fmt.Sprintf("%s %s %s", f.Code, f.Field, f.Component)]++
					continue
				}
				if err != nil {
					t.Fatal(err)
				}
				solved++
				checkAccounts(t, s)
				if t.Failed() {
					t.Fatalf("%s: %v", r.Refrigerant.Designation(), describe(r))
				}
			}
			t.Logf("%d of %d solved, refused: %v", solved, trials, reasons)
			if solved < trials*8/10 {
				t.Errorf("only %d of %d possible requests were solved: %v", solved, trials, reasons)
			}
		})
	}
}
