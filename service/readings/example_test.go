package readings_test

import (
	"context"
	"fmt"
	"reflect"
	"sync"
	"testing"

	"dewmark/props"
	"dewmark/service/readings"
)

func Example() {
	catalogue, err := props.NewCatalogue()
	if err != nil {
		panic(err)
	}
	propane, err := catalogue.Refrigerant("R290", props.DefaultDatum)
	if err != nil {
		panic(err)
	}
	e, err := readings.New(&readings.Installation{
		Refrigerant: propane,
		Uncertainties: map[readings.Reading]readings.Uncertainty{
			readings.SuctionTemperature:   {Standard: new(0.3)},
			readings.DischargeTemperature: {Standard: new(0.3)},
			readings.LiquidTemperature:    {Standard: new(0.3)},
			readings.HeatLossFraction:     {Standard: new(0.01)},
		},
	}, nil)
	if err != nil {
		panic(err)
	}
	var s readings.Sample
	s.Set(readings.SuctionPressure, 474e3)
	s.Set(readings.SuctionTemperature, 281.15)
	s.Set(readings.DischargePressure, 1534e3)
	s.Set(readings.DischargeTemperature, 339.15)
	s.Set(readings.LiquidTemperature, 313.15)
	s.Set(readings.HeatLossFraction, 0.05)
	s.Set(readings.CompressorPower, 2500)
	r, err := e.Evaluate(context.Background(), &s)
	if err != nil {
		panic(err)
	}
	cop := r.Figure(readings.FigureCOPHeating)
	fmt.Printf("COP of heating %.2f ± %.2f (k = %g)\n", cop.Value, cop.Expanded, cop.CoverageFactor)
	fmt.Println("to know better:", cop.Budget[0].Input)
	// Output:
	// COP of heating 4.43 ± 0.14 (k = 2)
	// to know better: heat_loss_fraction
}

// One evaluator serves many goroutines, and each sample has one answer.
func TestConcurrentEvaluation(t *testing.T) {
	names := []string{"R290", "R134a"}
	for _, name := range names {
		fluid := refrigerant(t, name)
		e := evaluator(t, readings.Installation{Refrigerant: fluid}, nil)
		full, short := heatPump(t, fluid), heatPump(t, fluid)
		short.Unset(readings.SinkVolumeFlow)
		want := [2]*readings.Result{evaluate(t, e, full), evaluate(t, e, short)}
		var wg sync.WaitGroup
		for i := range 8 {
			wg.Go(func() {
				for j := range 50 {
					s, k := full, (i+j)%2
					if k == 1 {
						s = short
					}
					r, err := e.Evaluate(t.Context(), s)
					if err != nil || !reflect.DeepEqual(r.Routes, want[k].Routes) || r.Figure(readings.FigureCOPHeating).Standard != want[k].Figure(readings.FigureCOPHeating).Standard {
						t.Errorf("%s: another answer, %v", name, err)
						return
					}
				}
			})
		}
		wg.Wait()
	}
}
