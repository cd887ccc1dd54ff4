package blend_test

import (
	"math"
	"testing"

	"dewmark/props/blend"
)

// FuzzStates looks for values that panic, hang, or give a state that is no number or lacks what was asked for.
func FuzzStates(f *testing.F) {
	for _, v := range [][2]float64{{300, 1e6}, {220, 101325}, {350, 4.4e6}, {1e6, 250e3}, {0.5, 300}, {math.NaN(), math.Inf(1)}, {1200, 1}, {1e5, 1000}} {
		for p := byte(1); p <= 7; p++ {
			f.Add(p, p%7+1, v[0], v[1])
		}
	}
	records := library(f)
	var blends []*blend.Blend
	for _, name := range []string{"R407C", "R455A", "R507A"} {
		blends = append(blends, get(f, records, name))
	}
	f.Fuzz(func(t *testing.T, p, q byte, v, w float64) {
		for _, b := range blends {
			x, y := blend.Given{Property: blend.Property(p), Value: v}, blend.Given{Property: blend.Property(q), Value: w}
			states, err := b.States(x, y)
			if err != nil {
				if !typed(err) {
					t.Fatalf("%s: untyped error %v", b.Designation(), err)
				}
				continue
			}
			for i := range states {
				s := &states[i]
				if math.IsNaN(s.T+s.P+s.Rho+s.H+s.S+s.U) || !(s.T > 0 && s.P > 0 && s.Rho > 0) {
					t.Fatalf("%s: %v %g, %v %g: %+v", b.Designation(), x.Property, v, y.Property, w, *s)
				}
				if value(s, x.Property) != v || value(s, y.Property) != w {
					t.Fatalf("%s: %v %g, %v %g: %+v", b.Designation(), x.Property, v, y.Property, w, *s)
				}
			}
		}
	})
}
