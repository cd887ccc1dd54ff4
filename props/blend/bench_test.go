package blend_test

import (
	"testing"

	"dewmark/props"
	"dewmark/props/blend"
	"dewmark/props/data"
)

// The benchmarks come in families to be compared as ratios in one run: a blend against its components or a pure fluid.

func pure(b *testing.B, designation string) *props.Pure {
	b.Helper()
	c, err := props.NewCatalogue()
	if err != nil {
		b.Fatal(err)
	}
	r, err := c.Pure(designation, props.DefaultDatum)
	if err != nil {
		b.Fatal(err)
	}
	return r
}

// One vapour and one liquid state each; a blend is to cost no more than 1.6 times the sum of its components.
func BenchmarkTemperaturePressure(b *testing.B) {
	for _, state := range []struct {
		name string
		T, p float64
	}{{"vapour", 290, 300e3}, {"liquid", 260, 2e6}} {
		for _, name := range []string{"R32", "R125", "R134a", "R1234yf", "R1234ze(E)", "R744"} {
			r := pure(b, name)
			b.Run(state.name+"/"+name, func(b *testing.B) {
				b.ReportAllocs()
				for b.Loop() {
					if _, err := r.TemperaturePressure(state.T, state.p); err != nil {
						b.Fatal(err)
					}
				}
			})
		}
		for _, name := range []string{"R410A", "R407C", "R454B", "R449A", "R448A", "R455A"} {
			r := get(b, library(b), name)
			b.Run(state.name+"/"+name, func(b *testing.B) {
				b.ReportAllocs()
				for b.Loop() {
					if _, err := r.TemperaturePressure(state.T, state.p); err != nil {
						b.Fatal(err)
					}
				}
			})
		}
	}
}

// Bubble and dew points from the expansions; a blend is to cost no more than twice a pure fluid.
func BenchmarkSaturation(b *testing.B) {
	const T, p = 283.15, 8e5
	for _, name := range []string{"R32", "R1234yf", "R134a"} {
		r := pure(b, name)
		b.Run("bubble at T/"+name, func(b *testing.B) {
			for b.Loop() {
				if _, err := r.BubblePoint(T); err != nil {
					b.Fatal(err)
				}
			}
		})
		b.Run("dew at p/"+name, func(b *testing.B) {
			for b.Loop() {
				if _, err := r.DewPointAtPressure(p); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
	for _, name := range []string{"R454B", "R407C", "R448A"} {
		r := get(b, library(b), name)
		b.Run("bubble at T/"+name, func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				if _, err := r.BubblePoint(T); err != nil {
					b.Fatal(err)
				}
			}
		})
		b.Run("dew at p/"+name, func(b *testing.B) {
			for b.Loop() {
				if _, err := r.DewPointAtPressure(p); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

// Flashes of one blend, among them the one inside the envelope, which is to take less than 60 us.
func BenchmarkFlash(b *testing.B) {
	for _, name := range []string{"R454B", "R407C", "R448A"} {
		r := get(b, library(b), name)
		const p = 8e5
		bubble, err := r.BubblePointAtPressure(p)
		if err != nil {
			b.Fatal(err)
		}
		dew, err := r.DewPointAtPressure(p)
		if err != nil {
			b.Fatal(err)
		}
		inside := bubble.H + 0.3*(dew.H-bubble.H)
		hot, err := r.TemperaturePressure(dew.T+30, p)
		if err != nil {
			b.Fatal(err)
		}
		for _, flash := range []struct {
			name string
			run  func() (blend.State, error)
		}{
			{"p-h two-phase", func() (blend.State, error) { return r.PressureEnthalpy(p, inside) }},
			{"p-h vapour", func() (blend.State, error) { return r.PressureEnthalpy(p, hot.H) }},
			{"p-s vapour", func() (blend.State, error) { return r.PressureEntropy(p, hot.S) }},
			{"h-s vapour", func() (blend.State, error) { return r.EnthalpyEntropy(hot.H, hot.S) }},
			{"p-h liquid", func() (blend.State, error) { return r.PressureEnthalpy(p, bubble.H-10e3) }},
			{"T-q", func() (blend.State, error) { return r.TemperatureQuality(bubble.T, 0.5) }},
		} {
			b.Run(flash.name+"/"+name, func(b *testing.B) {
				b.ReportAllocs()
				for b.Loop() {
					if _, err := flash.run(); err != nil {
						b.Fatal(err)
					}
				}
			})
		}
	}
}

// The properties of a simple cycle: what it costs on a blend is to stay below 150 us.
func BenchmarkCycle(b *testing.B) {
	for _, name := range []string{"R454B", "R410A", "R448A"} {
		r := get(b, library(b), name)
		b.Run(name, func(b *testing.B) {
			for b.Loop() {
				if err := simpleCycle(r); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

// simpleCycle computes evaporation at a dew point of 0 °C with 5 K superheat, compression of efficiency 0.7, condensation
// at a dew point of 45 °C with 3 K subcooling, and throttling.
func simpleCycle(r *blend.Blend) error {
	dew, err := r.DewPoint(273.15)
	if err != nil {
		return err
	}
	suction, err := r.TemperaturePressure(dew.T+5, dew.P)
	if err != nil {
		return err
	}
	condensation, err := r.DewPoint(318.15)
	if err != nil {
		return err
	}
	ideal, err := r.PressureEntropy(condensation.P, suction.S)
	if err != nil {
		return err
	}
	if _, err = r.PressureEnthalpy(condensation.P, suction.H+(ideal.H-suction.H)/0.7); err != nil {
		return err
	}
	bubble, err := r.BubblePointAtPressure(condensation.P)
	if err != nil {
		return err
	}
	liquid, err := r.TemperaturePressure(bubble.T-3, bubble.P)
	if err != nil {
		return err
	}
	_, err = r.PressureEnthalpy(dew.P, liquid.H)
	return err
}

// What the first question to a blend costs: envelope, critical point and expansions.
func BenchmarkFirstUse(b *testing.B) {
	records, err := data.Load()
	if err != nil {
		b.Fatal(err)
	}
	for _, name := range []string{"R454B", "R407C", "R448A"} {
		b.Run(name, func(b *testing.B) {
			for b.Loop() {
				l, err := blend.NewLibrary(records)
				if err != nil {
					b.Fatal(err)
				}
				if _, err := l.Blend(name, blend.DefaultDatum); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
