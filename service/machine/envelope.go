package machine

import (
	"math"
	"slices"

	"dewmark/service/cycle"
)

const (
	// edgeWidth is how far from an edge a point still lies on it, K: maker's data are not known closer.
	edgeWidth = 0.5
	// pressurePerKelvin is what counts as 1 K on an axis of pressures, Pa. Transcritical envelopes are some 5 MPa high.
	pressurePerKelvin = 100e3
)

// corner is a vertex with both axes in K.
type corner struct{ x, y float64 }

// polygon is an envelope that was checked.
type polygon struct {
	corners  []corner // counterclockwise
	pressure bool     // y is a pressure over pressurePerKelvin
	turned   bool     // the vertices were given clockwise
	speed    float64  // 1/s; NaN for any
	source   string
	field    string
}

// at returns a point in the polygon's axes.
func (g *polygon) at(s *flanges) corner {
	if g.pressure {
		return corner{s.suctionDew, s.dischargePressure / pressurePerKelvin}
	}
	return corner{s.suctionDew, s.dischargeDew}
}

// newPolygon checks an envelope. It returns a message instead when it bounds no area or crosses itself.
func newPolygon(vertices []Vertex, pressureAxis bool) (*polygon, *Message) {
	refuse := func(text string, numbers ...cycle.Number) (*polygon, *Message) {
		m := message(text, numbers...)
		return nil, &m
	}
	if len(vertices) < 3 {
		return refuse("an envelope needs three vertices at least, not %s", plain(float64(len(vertices))))
	}
	g := &polygon{pressure: pressureAxis, speed: math.NaN()}
	for i, v := range vertices {
		c := corner{v.Evaporation, v.Condensation}
		if pressureAxis {
			c.y /= pressurePerKelvin
		}
		if !(c.x > 0 && c.x < 1e4 && c.y > 0 && c.y < 1e6) {
			return refuse("vertex %s of the envelope is no pair of temperatures above absolute zero or of temperature and pressure", plain(float64(i)))
		}
		g.corners = append(g.corners, c)
	}
	var area float64
	n := len(g.corners)
	for i, a := range g.corners {
		b := g.corners[(i+1)%n]
		area += (a.x*b.y - b.x*a.y) / 2
		if a == b {
			return refuse("vertex %s of the envelope stands there twice in a row; the first is not repeated at the end", plain(float64(i)))
		}
	}
	for i := range n {
		for j := i + 2; j < n; j++ {
			if i == 0 && j == n-1 {
				continue // neighbours
			}
			if crosses(g.corners[i], g.corners[i+1], g.corners[j], g.corners[(j+1)%n]) {
				return refuse("the edges of the envelope that begin at its vertices %s and %s cross", plain(float64(i)), plain(float64(j)))
			}
		}
	}
	const leastArea = 1e-3 // K2
	if math.Abs(area) < leastArea {
		return refuse("the envelope bounds no area")
	}
	if area < 0 {
		slices.Reverse(g.corners)
		g.turned = true
	}
	return g, nil
}

// crosses reports whether the closed line a b meets the closed line c d.
func crosses(a, b, c, d corner) bool {
	side := func(p, q, r corner) float64 { return (q.x-p.x)*(r.y-p.y) - (q.y-p.y)*(r.x-p.x) }
	between := func(p, q, r corner) bool {
		return math.Min(p.x, q.x) <= r.x && r.x <= math.Max(p.x, q.x) && math.Min(p.y, q.y) <= r.y && r.y <= math.Max(p.y, q.y)
	}
	s1, s2, s3, s4 := side(a, b, c), side(a, b, d), side(c, d, a), side(c, d, b)
	return s1*s2 < 0 && s3*s4 < 0 ||
		s1 == 0 && between(a, b, c) || s2 == 0 && between(a, b, d) || s3 == 0 && between(c, d, a) || s4 == 0 && between(c, d, b)
}

// contains reports whether p lies inside, by counting the edges that a ray to the right crosses. Each edge holds its lower
// end and not its upper one, so that a ray through a vertex counts once.
func (g *polygon) contains(p corner) bool {
	inside := false
	for i, a := range g.corners {
		b := g.corners[(i+1)%len(g.corners)]
		if (a.y <= p.y) != (b.y <= p.y) && p.x < a.x+(p.y-a.y)/(b.y-a.y)*(b.x-a.x) {
			inside = !inside
		}
	}
	return inside
}

// nearest returns the point of the edges that is closest to p, its distance, and what lies beyond that edge.
func (g *polygon) nearest(p corner) (q corner, distance float64, edge EnvelopeEdge) {
	distance = math.Inf(1)
	for i, a := range g.corners {
		b := g.corners[(i+1)%len(g.corners)]
		dx, dy := b.x-a.x, b.y-a.y
		t := ((p.x-a.x)*dx + (p.y-a.y)*dy) / (dx*dx + dy*dy)
		t = math.Max(0, math.Min(1, t))
		c := corner{a.x + t*dx, a.y + t*dy}
		if d := math.Hypot(p.x-c.x, p.y-c.y); d < distance {
			q, distance, edge = c, d, beyond(dy, -dx) // counterclockwise: outside is to the right
		}
	}
	return q, distance, edge
}

// beyond names what lies in a direction.
func beyond(dx, dy float64) EnvelopeEdge {
	switch {
	case math.Abs(dx) > math.Abs(dy) && dx < 0:
		return TooCold
	case math.Abs(dx) > math.Abs(dy):
		return TooWarm
	case dy > 0:
		return TooHot
	}
	return TooFlat
}

// result says how a point lies.
func (g *polygon) result(s *flanges) EnvelopeResult {
	p := g.at(s)
	r := EnvelopeResult{Verdict: InsideEnvelope, Source: g.source}
	if math.IsNaN(p.y) { // above the critical pressure, where an envelope of condensation ends
		p.y = math.Inf(1)
		r.Verdict, r.Margin, r.Edge = OutsideEnvelope, math.Inf(-1), TooHot
		return r
	}
	_, d, edge := g.nearest(p)
	r.Margin, r.Edge = d, edge
	if !g.contains(p) {
		r.Margin = -d
		r.Verdict = OutsideEnvelope
	}
	if d <= edgeWidth {
		r.Verdict = EdgeOfEnvelope
	}
	return r
}

// envelopeAt judges a point at speed n by polygons of ascending speeds.
func envelopeAt(all []*polygon, s *flanges, n float64) EnvelopeResult {
	if len(all) == 0 {
		return EnvelopeResult{Verdict: NoEnvelope, Margin: math.NaN()}
	}
	lower, upper := all[0], all[len(all)-1]
	for _, g := range all {
		if g.speed <= n {
			lower = g
		}
	}
	for _, g := range slices.Backward(all) {
		if g.speed >= n {
			upper = g
		}
	}
	if lower == upper || len(all) == 1 {
		return lower.result(s)
	}
	if len(lower.corners) == len(upper.corners) && lower.turned == upper.turned {
		share := math.Max(0, math.Min(1, (n-lower.speed)/(upper.speed-lower.speed)))
		between := polygon{pressure: lower.pressure, source: lower.source}
		for i, a := range lower.corners {
			b := upper.corners[i]
			between.corners = append(between.corners, corner{a.x + share*(b.x-a.x), a.y + share*(b.y-a.y)})
		}
		return between.result(s)
	}
	a, b := lower.result(s), upper.result(s) // both must hold
	if a.Margin < b.Margin {
		return a
	}
	return b
}
