package machine

import (
	"sync"
	"testing"

	"dewmark/props"
	"dewmark/props/secondary"
	"dewmark/service/cycle"
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

var water = sync.OnceValue(func() *secondary.Liquid {
	r, err := catalogue().Pure("R718", props.DefaultDatum)
	if err != nil {
		panic(err)
	}
	l, err := secondary.NewWater(r)
	if err != nil {
		panic(err)
	}
	return l
})

// haveRefrigerant reports whether the catalogue has a refrigerant.
func haveRefrigerant(name string) bool {
	_, err := catalogue().Refrigerant(name, props.DefaultDatum)
	return err == nil
}

// countedFluid counts dew points by temperature.
type countedFluid struct {
	cycle.Refrigerant
	states chan struct{}
}

func (f *countedFluid) DewPoint(T float64) (props.State, error) {
	f.states <- struct{}{}
	return f.Refrigerant.DewPoint(T)
}
