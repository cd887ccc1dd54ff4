package readings_test

import (
	"errors"
	"sync"
	"testing"

	"dewmark/props"
	"dewmark/props/secondary"
	"dewmark/service/readings"
)

var catalogue = sync.OnceValue(func() *props.Catalogue {
	c, err := props.NewCatalogue()
	if err != nil {
		panic(err)
	}
	return c
})

func refrigerant(t testing.TB, name string) props.Refrigerant {
	t.Helper()
	r, err := catalogue().Refrigerant(name, props.DefaultDatum)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func water(t testing.TB) *secondary.Liquid {
	t.Helper()
	l, err := waterOnce()
	if err != nil {
		t.Fatal(err)
	}
	return l
}

var waterOnce = sync.OnceValues(func() (*secondary.Liquid, error) {
	r, err := catalogue().Pure("R718", props.DefaultDatum)
	if err != nil {
		return nil, err
	}
	return secondary.NewWater(r)
})

// certain gives every reading the standard uncertainty u.
func certain(u float64) map[readings.Reading]readings.Uncertainty {
	m := map[readings.Reading]readings.Uncertainty{}
	for _, r := range readings.Readings() {
		m[r] = readings.Uncertainty{Standard: new(u)}
	}
	return m
}

func evaluator(t testing.TB, i readings.Installation, o *readings.Options) *readings.Evaluator {
	t.Helper()
	e, err := readings.New(&i, o)
	if err != nil {
		t.Fatal(err)
	}
	return e
}

func evaluate(t testing.TB, e *readings.Evaluator, s *readings.Sample) *readings.Result {
	t.Helper()
	r, err := e.Evaluate(t.Context(), s)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// heatPump is a sample of a heat pump with R290 or another refrigerant, at about 0 °C and 45 °C, with sensors wherever a
// supervised installation has some.
func heatPump(t testing.TB, fluid props.Refrigerant) *readings.Sample {
	t.Helper()
	low, err := fluid.DewPoint(273.15)
	if err != nil {
		t.Fatal(err)
	}
	high := props.State{P: 9.5e6} // of a gas cooler
	if fluid.Critical().T > 330 {
		if high, err = fluid.BubblePoint(318.15); err != nil {
			t.Fatal(err)
		}
	}
	var s readings.Sample
	for r, v := range map[readings.Reading]float64{
		readings.SuctionPressure: low.P, readings.SuctionTemperature: 281.15,
		readings.DischargePressure: high.P, readings.DischargeTemperature: 343.15,
		readings.LiquidTemperature: 313.15, readings.CompressorPower: 2500, readings.HeatLossFraction: 0.05,
		readings.SinkInletTemperature: 308.15, readings.SinkOutletTemperature: 313.15, readings.SinkVolumeFlow: 0.5e-3,
	} {
		s.Set(r, v)
	}
	s.Sink.Liquid = water(t)
	return &s
}

// refuses reports an error that is no refusal of that field.
func refuses(t testing.TB, err error, field string) {
	t.Helper()
	refused, ok := errors.AsType[*readings.RefusedError](err)
	if !ok {
		t.Errorf("%s: not refused: %v", field, err)
		return
	}
	for _, r := range refused.Refusals {
		if r.Field == field && r.Message.String() != "" && r.Code != "" {
			return
		}
	}
	t.Errorf("%s: refused for another field: %v", field, err)
}
