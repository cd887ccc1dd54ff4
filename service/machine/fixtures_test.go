package machine

import (
	"sync"
	"testing"

	"dewmark/props"
	"dewmark/props/secondary"
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
