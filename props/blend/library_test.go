package blend_test

import (
	"sync"
	"testing"

	"dewmark/props/blend"
	"dewmark/props/data"
)

var loaded = sync.OnceValues(func() (*blend.Library, error) {
	records, err := data.Load()
	if err != nil {
		return nil, err
	}
	return blend.NewLibrary(records)
})

func library(t testing.TB) *blend.Library {
	t.Helper()
	l, err := loaded()
	if err != nil {
		t.Fatal(err)
	}
	return l
}

func get(t testing.TB, l *blend.Library, designation string) *blend.Blend {
	t.Helper()
	b, err := l.Blend(designation, blend.DefaultDatum)
	if err != nil {
		t.Fatal(err)
	}
	return b
}
