package props_test

import (
	"sync"
	"testing"

	"dewmark/props"
)

var sharedCatalogue = sync.OnceValues(props.NewCatalogue)

func catalogue(t testing.TB) *props.Catalogue {
	t.Helper()
	c, err := sharedCatalogue()
	if err != nil {
		t.Fatal(err)
	}
	return c
}

func refrigerant(t testing.TB, name string) *props.Pure {
	t.Helper()
	r, err := catalogue(t).Pure(name, props.DefaultDatum)
	if err != nil {
		t.Fatal(err)
	}
	return r
}
