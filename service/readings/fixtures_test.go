package readings_test

import (
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
