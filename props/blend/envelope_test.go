package blend_test

import (
	"image"
	"image/color"
	"image/png"
	"math"
	"os"
	"path/filepath"
	"testing"

	"dewmark/props/blend"
)

// The envelope of every listed blend is one smooth curve from the cold end of the bubble line to that of the dew line.
// Along each half the points are even in the root of a coordinate in which nothing folds, so that the third differences of
// temperature, pressure and density are small beside the second ones; at a kink they would be as large.
func TestEnvelopesSmooth(t *testing.T) {
	l := library(t)
	for _, listed := range l.Listed() {
		b := get(t, l, listed.Designation)
		states, err := b.Envelope(2000)
		if err != nil {
			t.Error(err)
			continue
		}
		T, bubble, dew := b.SaturationLimits()
		first, last := states[0], states[len(states)-1]
		if !(math.Abs(first.T/T-1) < 1e-9 && math.Abs(first.P/bubble-1) < 1e-8 && math.Abs(last.T/T-1) < 1e-9 && math.Abs(last.P/dew-1) < 1e-8) {
			t.Errorf("%s: ends at %g K, %g Pa and %g K, %g Pa", listed.Designation, first.T, first.P, last.T, last.P)
		}
		c := b.Critical()
		half := len(states) / 2
		for _, s := range states[half-1 : half+1] {
			if !(math.Abs(s.T/c.T-1) < 1e-5 && math.Abs(s.P/c.P-1) < 1e-4 && math.Abs(s.Rho/c.Rho-1) < 1e-3) {
				t.Errorf("%s: a half ends at %g K, %g Pa, %g kg/m3, critical point %v", listed.Designation, s.T, s.P, s.Rho, c)
			}
		}
		for _, part := range [][]blend.State{states[:half], states[half:]} {
			for name, of := range map[string]func(*blend.State) float64{
				"ln T":   func(s *blend.State) float64 { return math.Log(s.T) },
				"ln p":   func(s *blend.State) float64 { return math.Log(s.P) },
				"ln rho": func(s *blend.State) float64 { return math.Log(s.Rho) },
			} {
				var curve, jerk float64
				var at blend.State
				for i := 3; i < len(part); i++ {
					v := [4]float64{of(&part[i-3]), of(&part[i-2]), of(&part[i-1]), of(&part[i])}
					curve = math.Max(curve, math.Abs(v[3]-2*v[2]+v[1]))
					if j := math.Abs(v[3] - 3*v[2] + 3*v[1] - v[0]); j > jerk {
						jerk, at = j, part[i]
					}
				}
				if !(jerk <= 0.25*curve) {
					t.Errorf("%s: kink of %s near %.3f K, %.5g Pa: third difference %.2e, second differences up to %.2e", listed.Designation, name, at.T, at.P, jerk, curve)
				}
			}
		}
	}
}

// In the retrograde region two dew points have one temperature, or two bubble points one pressure; the states between them
// are of two phases, and those of one quality come in pairs as well.
func TestRetrograde(t *testing.T) {
	l := library(t)
	for _, name := range []string{"R407C", "R455A", "R441A", "R445A", "R454C"} {
		b := get(t, l, name)
		c, top := b.Critical(), b.Cricondentherm()
		T := c.T + 0.5*(top.T-c.T)
		dews, err := b.States(blend.Given{Property: blend.Temperature, Value: T}, blend.Given{Property: blend.Quality, Value: 1})
		if err != nil || len(dews) != 2 {
			t.Errorf("%s: %d dew points at %g K, %v", name, len(dews), T, err)
			continue
		}
		if !(dews[0].Rho > dews[1].Rho && dews[0].P > dews[1].P) {
			t.Errorf("%s: dew points at %g K of %g and %g Pa", name, T, dews[0].P, dews[1].P)
		}
		if ordinary, err := b.DewPoint(T); err != nil || ordinary.P != dews[1].P {
			t.Errorf("%s: dew point at %g K of %g Pa, %v", name, T, ordinary.P, err)
		}
		if _, err := b.BubblePoint(T); err == nil {
			t.Errorf("%s has a bubble point above the critical temperature", name)
		}
		middle, err := b.TemperaturePressure(T, 0.5*(dews[0].P+dews[1].P))
		if err != nil || middle.Phase != blend.TwoPhase {
			t.Errorf("%s between two dew points: %v, %v", name, middle.Phase, err)
			continue
		}
		same, err := b.States(blend.Given{Property: blend.Temperature, Value: T}, blend.Given{Property: blend.Quality, Value: middle.Quality})
		if err != nil || len(same) != 2 || math.Min(math.Abs(same[0].P-middle.P), math.Abs(same[1].P-middle.P)) > 1e-6*middle.P {
			t.Errorf("%s: %d states of quality %g at %g K, %v", name, len(same), middle.Quality, T, err)
		}
		for _, beyond := range []struct {
			p     float64
			phase blend.Phase
		}{{dews[0].P * 1.001, blend.Supercritical}, {dews[1].P * 0.999, blend.Vapour}} {
			s, err := b.TemperaturePressure(T, beyond.p)
			if err != nil || s.Phase != beyond.phase && beyond.p > c.P == (beyond.phase == blend.Supercritical) {
				t.Errorf("%s at %g K and %g Pa: %v, %v, want %v", name, T, beyond.p, s.Phase, err, beyond.phase)
			}
		}

		bar := b.Cricondenbar()
		p := c.P + 0.5*(bar.P-c.P)
		if bar.T < c.T {
			bubbles, err := b.States(blend.Given{Property: blend.Pressure, Value: p}, blend.Given{Property: blend.Quality, Value: 0})
			if err != nil || len(bubbles) != 2 || !(bubbles[0].T < bar.T && bar.T < bubbles[1].T) {
				t.Errorf("%s: %d bubble points at %g Pa, %v", name, len(bubbles), p, err)
			}
		}
	}
}

// TestPlotEnvelopes draws the envelopes of three blends for a look at them, as PNG files in the directory that
// DEWMARK_TEST_PLOTS names.
func TestPlotEnvelopes(t *testing.T) {
	dir := os.Getenv("DEWMARK_TEST_PLOTS")
	if dir == "" {
		t.Skip("DEWMARK_TEST_PLOTS names no directory")
	}
	l := library(t)
	for _, name := range []string{"R407C", "R455A", "R454B"} {
		b := get(t, l, name)
		states, err := b.Envelope(800)
		if err != nil {
			t.Fatal(err)
		}
		c := b.Critical()
		var tp, hp, near, ts []dot
		for _, s := range states {
			shade := color.RGBA{30, 90, 200, 255}
			if s.Quality == 1 {
				shade = color.RGBA{200, 40, 40, 255}
			}
			tp = append(tp, dot{s.T, math.Log(s.P), shade})
			hp = append(hp, dot{s.H, math.Log(s.P), shade})
			ts = append(ts, dot{s.S, s.T, shade})
			if s.T > c.T-6 && s.P > 0.9*c.P {
				near = append(near, dot{s.T, s.P, shade})
			}
		}
		mark := dot{c.T, c.P, color.RGBA{0, 130, 0, 255}}
		top := image.NewRGBA(image.Rect(0, 0, 1200, 900))
		plot(top, image.Rect(0, 0, 600, 450), tp, dot{c.T, math.Log(c.P), mark.shade})
		plot(top, image.Rect(600, 0, 1200, 450), near, mark)
		plot(top, image.Rect(0, 450, 600, 900), hp)
		plot(top, image.Rect(600, 450, 1200, 900), ts)
		f, err := os.Create(filepath.Join(dir, name+".png"))
		if err != nil {
			t.Fatal(err)
		}
		if err := png.Encode(f, top); err != nil {
			t.Fatal(err)
		}
		if err := f.Close(); err != nil {
			t.Fatal(err)
		}
	}
}

type dot struct {
	x, y  float64
	shade color.RGBA
}

// plot draws a curve through points into a part of an image, and crosses at the marks.
func plot(img *image.RGBA, area image.Rectangle, points []dot, marks ...dot) {
	lo, hi := points[0], points[0]
	for _, p := range points {
		lo.x, lo.y, hi.x, hi.y = math.Min(lo.x, p.x), math.Min(lo.y, p.y), math.Max(hi.x, p.x), math.Max(hi.y, p.y)
	}
	const margin = 20
	place := func(p dot) (float64, float64) {
		return float64(area.Min.X) + margin + (p.x-lo.x)/(hi.x-lo.x)*float64(area.Dx()-2*margin),
			float64(area.Max.Y) - margin - (p.y-lo.y)/(hi.y-lo.y)*float64(area.Dy()-2*margin)
	}
	for y := area.Min.Y; y < area.Max.Y; y++ {
		for x := area.Min.X; x < area.Max.X; x++ {
			shade := color.RGBA{255, 255, 255, 255}
			if x == area.Min.X || y == area.Min.Y {
				shade = color.RGBA{160, 160, 160, 255}
			}
			img.SetRGBA(x, y, shade)
		}
	}
	for i := 1; i < len(points); i++ {
		ax, ay := place(points[i-1])
		bx, by := place(points[i])
		steps := 2 * (1 + int(math.Hypot(bx-ax, by-ay)))
		for k := range steps + 1 {
			r := float64(k) / float64(steps)
			img.SetRGBA(int(ax+r*(bx-ax)), int(ay+r*(by-ay)), points[i].shade)
		}
	}
	for _, m := range marks {
		x, y := place(m)
		for k := -6; k <= 6; k++ {
			img.SetRGBA(int(x)+k, int(y), m.shade)
			img.SetRGBA(int(x), int(y)+k, m.shade)
		}
	}
}
