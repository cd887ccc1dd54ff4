package cycle_test

import (
	"context"
	"fmt"

	"dewmark/props"
	"dewmark/service/cycle"
)

// The numbers are those of case B in testdata/worked_cycles.csv.
func ExampleSolve() {
	catalogue, err := props.NewCatalogue()
	if err != nil {
		fmt.Println(err)
		return
	}
	propane, err := catalogue.Refrigerant("R290", props.DefaultDatum)
	if err != nil {
		fmt.Println(err)
		return
	}
	s, err := cycle.Solve(context.Background(), &cycle.Request{
		Refrigerant:  propane,
		Layout:       cycle.SingleStage,
		Purpose:      cycle.Heating,
		Evaporation:  cycle.Evaporation{Temperature: new(266.15), Superheat: new(5.0)},
		Condensation: cycle.Condensation{Temperature: new(313.15), Subcooling: new(3.0)},
		Compressor:   cycle.Compressor{IsentropicEfficiency: new(0.7), VolumetricEfficiency: new(0.92), HeatLossFraction: new(0.0)},
		Size:         &cycle.Size{Heating: new(8000.0)},
	})
	if err != nil {
		fmt.Println(err)
		return
	}
	p := s.Performance
	fmt.Printf("COP %.2f, compressor %.0f W, %.1f g/s\n", p.COPHeating, p.CompressorPower, 1000*p.MassFlow)
	// Output: COP 4.14, compressor 1930 W, 21.9 g/s
}
