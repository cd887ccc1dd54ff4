package machine

import (
	"math"
	"math/rand/v2"
	"testing"
)

// notched is an envelope that is not convex: hot condensation is not allowed at the lowest evaporation.
var notched = []Vertex{{250, 290}, {250, 315}, {258, 315}, {258, 330}, {285, 330}, {285, 300}, {275, 290}}

func polygonOf(t *testing.T, vertices []Vertex) *polygon {
	t.Helper()
	g, fault := newPolygon(vertices, false)
	if fault != nil {
		t.Fatal(fault)
	}
	return g
}

func at(te, tc float64) *flanges { return &flanges{suctionDew: te, dischargeDew: tc} }

func TestEnvelope(t *testing.T) {
	g := polygonOf(t, notched)
	reversed := append([]Vertex(nil), notched...)
	for i, v := range notched {
		reversed[len(notched)-1-i] = v
	}
	h := polygonOf(t, reversed)
	for _, c := range []struct {
		name    string
		te, tc  float64
		verdict EnvelopeVerdict
		margin  float64
		edge    EnvelopeEdge
	}{
		{"inside, the notch's corner is nearest", 270, 310, InsideEnvelope, 13, TooCold},
		{"inside", 270, 302, InsideEnvelope, 12, TooFlat},
		{"in the notch", 253, 318, OutsideEnvelope, -3, TooHot},
		{"beside the notch", 257, 325, OutsideEnvelope, -1, TooCold},
		{"too cold", 245, 300, OutsideEnvelope, -5, TooCold},
		{"too hot", 270, 333, OutsideEnvelope, -3, TooHot},
		{"too warm", 288, 315, OutsideEnvelope, -3, TooWarm},
		{"too flat", 260, 285, OutsideEnvelope, -5, TooFlat},
		{"just inside", 270, 329.8, EdgeOfEnvelope, 0.2, TooHot},
		{"just outside", 270, 330.4, EdgeOfEnvelope, -0.4, TooHot},
		{"on a vertex", 285, 330, EdgeOfEnvelope, 0, TooHot},
	} {
		for i, p := range []*polygon{g, h} {
			r := p.result(at(c.te, c.tc))
			if r.Verdict != c.verdict || !(math.Abs(r.Margin-c.margin) <= 1e-9) || r.Edge != c.edge && c.margin != 0 {
				t.Errorf("%s, turned %d: %+v, want %s %g %s", c.name, i, r, c.verdict, c.margin, c.edge)
			}
		}
	}
}

// Containment agrees with the angle that the corners sweep around a point, and the margin with a search along the edges.
func TestEnvelopeAgainstWinding(t *testing.T) {
	g := polygonOf(t, notched)
	r := rand.New(rand.NewPCG(4, 4))
	for range 400 {
		p := corner{245 + 45*r.Float64(), 285 + 50*r.Float64()}
		var angle float64
		nearest := math.Inf(1)
		for i, a := range g.corners {
			b := g.corners[(i+1)%len(g.corners)]
			angle += math.Atan2((a.x-p.x)*(b.y-p.y)-(b.x-p.x)*(a.y-p.y), (a.x-p.x)*(b.x-p.x)+(a.y-p.y)*(b.y-p.y))
			for k := range 2001 {
				s := float64(k) / 2000
				nearest = math.Min(nearest, math.Hypot(a.x+s*(b.x-a.x)-p.x, a.y+s*(b.y-a.y)-p.y))
			}
		}
		if inside := math.Abs(angle) > math.Pi; inside != g.contains(p) {
			t.Errorf("%v: contained %t, swept angle %g", p, g.contains(p), angle)
		}
		if _, d, _ := g.nearest(p); !(math.Abs(d-nearest) <= 0.02) { // the search's own steps
			t.Errorf("%v: distance %g, want %g", p, d, nearest)
		}
	}
}

func TestBadEnvelopes(t *testing.T) {
	for name, v := range map[string][]Vertex{
		"two vertices":    {{250, 290}, {260, 300}},
		"a line":          {{250, 290}, {260, 300}, {270, 310}},
		"a bow tie":       {{250, 290}, {280, 330}, {280, 290}, {250, 330}},
		"touching itself": {{250, 290}, {280, 290}, {280, 330}, {265, 290}, {250, 330}},
		"repeated":        {{250, 290}, {250, 290}, {280, 330}},
		"closed":          {{250, 290}, {280, 290}, {280, 330}, {250, 290}},
		"not a number":    {{250, math.NaN()}, {280, 290}, {280, 330}},
		"below zero":      {{-3, 290}, {280, 290}, {280, 330}},
	} {
		if g, fault := newPolygon(v, false); fault == nil {
			t.Errorf("%s passes: %+v", name, g)
		}
	}
}

// Between speeds the vertices are interpolated where their number is the same; otherwise both polygons must hold.
func TestEnvelopeSpeeds(t *testing.T) {
	slow := polygonOf(t, []Vertex{{250, 290}, {280, 290}, {280, 320}, {250, 320}})
	fast := polygonOf(t, []Vertex{{250, 290}, {280, 290}, {280, 340}, {250, 340}})
	slow.speed, fast.speed = 30, 90
	both := []*polygon{slow, fast}
	for _, c := range []struct{ speed, tc, margin float64 }{
		{30, 325, -5},
		{60, 325, 5},
		{90, 325, 15},
		{20, 325, -5}, // below the slowest that of the slowest
		{120, 325, 15},
	} {
		if r := envelopeAt(both, at(265, c.tc), c.speed); !(math.Abs(r.Margin-c.margin) <= 1e-9) {
			t.Errorf("speed %g: %+v, want a margin of %g", c.speed, r, c.margin)
		}
	}
	five := polygonOf(t, []Vertex{{250, 290}, {280, 290}, {280, 340}, {265, 340}, {250, 340}})
	five.speed = 90
	if r := envelopeAt([]*polygon{slow, five}, at(265, 325), 60); !(math.Abs(r.Margin+5) <= 1e-9) {
		t.Errorf("unequal polygons: %+v, want the stricter one", r)
	}
	if r := envelopeAt(nil, at(265, 325), 60); r.Verdict != NoEnvelope || !math.IsNaN(r.Margin) {
		t.Errorf("no polygon: %+v", r)
	}
	above := envelopeAt([]*polygon{slow}, &flanges{suctionDew: 265, dischargePressure: 9e6, dischargeDew: nan}, 30)
	if above.Verdict != OutsideEnvelope || above.Edge != TooHot {
		t.Errorf("above the critical pressure: %+v", above)
	}
}
