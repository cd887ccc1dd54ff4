package blend

import (
	"math"
	"sort"
)

// saturated is a solved point of the envelope.
type saturated struct {
	S      float64 // spread; NaN when it comes from a line
	T, p   float64
	bulk   point
	rhoInc float64
	h, s   float64   // of the incipient phase, J/mol and J/(mol K)
	x      []float64 // mole fractions of the incipient phase
}

// bulkIsLiquid reports whether the bulk is the denser phase.
func (a *saturated) bulkIsLiquid() bool { return a.bulk.rho > a.rhoInc }

func (a *saturated) fields() []float64 {
	b := &a.bulk
	v := make([]float64, fieldsOfLine, fieldsOfLine+len(a.x))
	v[lineLnP], v[lineLnRho], v[lineLnRhoInc] = math.Log(a.p), math.Log(b.rho), math.Log(a.rhoInc)
	v[lineH], v[lineS], v[lineHInc], v[lineSInc] = b.h, b.s, a.h, a.s
	v[lineCp], v[lineCv], v[lineW], v[lineDPDRho], v[lineDPDT] = b.cp, b.cv, b.w, b.dpdrho, b.dpdT
	return append(v, a.x...)
}

// saturated returns the point of the line at T.
func (l *line) saturated(T float64) saturated {
	v := make([]float64, fieldsOfLine+l.n)
	l.at(T, v)
	p := math.Exp(v[lineLnP])
	return saturated{
		S: math.NaN(), T: T, p: p, rhoInc: math.Exp(v[lineLnRhoInc]), h: v[lineHInc], s: v[lineSInc], x: v[fieldsOfLine:],
		bulk: point{
			T: T, p: p, rho: math.Exp(v[lineLnRho]), h: v[lineH], s: v[lineS],
			cp: v[lineCp], cv: v[lineCv], w: v[lineW], dpdrho: v[lineDPDRho], dpdT: v[lineDPDT],
		},
	}
}

const (
	// farFromTop is the distance in S from the highest temperature or pressure at which these fix a point well.
	farFromTop = 0.1
	// spreadNoise is the relative error of temperature and pressure that a given spread near the critical point leaves.
	spreadNoise = 1e-10
)

// interpolated returns a point so close to the critical one that its phases can not be told apart by solving.
func (s *solver) interpolated(S float64) saturated {
	n := len(s.m.z)
	v := make([]float64, n+3)
	s.d.interpolate(S, v)
	s.bulk.T = math.Exp(v[n+1])
	s.bulk.rho = math.Exp(v[n])
	s.inc.T = s.bulk.T
	s.inc.setConcentrations(v[:n])
	s.k.evaluate(s.inc, true)
	return s.finish(math.Exp(v[n+2]))
}

// finish returns the point whose phases were evaluated last, with caloric properties, at pressure p.
func (s *solver) finish(p float64) saturated {
	s.iso.set(s.bulk.T)
	a := saturated{
		S: math.Log(s.inc.rho / s.bulk.rho), T: s.bulk.T, p: p, bulk: s.iso.at(s.bulk.rho), rhoInc: s.inc.rho,
		h: (s.inc.u + p) / s.inc.rho, s: s.inc.s / s.inc.rho, x: append([]float64(nil), s.inc.x...),
	}
	a.bulk.h += (p - a.bulk.p) / a.bulk.rho // the equation's pressure of a cold liquid is rounding noise
	a.bulk.p = p
	return a
}

// topOf returns the spread where a coordinate is highest.
func (e *envelope) topOf(of coordinate) float64 {
	if of == lnPOfNode {
		return e.topP.S
	}
	return e.topT.S
}

// segment returns the node before the place where a coordinate reaches target on a side.
func (d *dome) segment(of coordinate, target float64, sd side, topS float64) int {
	get := func(i int) float64 { return of.in(d.nodes[i].v) }
	split := sort.Search(len(d.nodes), func(i int) bool { return d.nodes[i].S > topS }) // first node past the top
	var i int
	if sd == dense {
		i = sort.Search(split, func(i int) bool { return get(i) > target }) - 1
	} else {
		i = split + sort.Search(len(d.nodes)-split, func(j int) bool { return get(split+j) <= target }) - 1
	}
	return min(max(i, 0), len(d.nodes)-2)
}

// locate finds the spread at which the interpolated temperature or pressure reaches target on a side, and writes the
// interpolated node there to u. It also returns bounds of the spread.
func (d *dome) locate(of coordinate, target float64, sd side, u []float64) (lo, S, hi float64) {
	top := d.topOf(of)
	i := d.segment(of, target, sd, top)
	a, b := &d.nodes[i], &d.nodes[i+1]
	lo, hi = a.S, b.S
	if sd == dense {
		hi = math.Min(hi, top)
	} else {
		lo = math.Max(lo, top)
	}
	x, y := lo, hi
	for range 50 {
		S = (x + y) / 2
		d.between(a, b, S, u)
		if (of.in(u) < target) == (sd == dense) {
			x = S
		} else {
			y = S
		}
	}
	return lo, S, hi
}

// saturatedAtT solves the point of a side at temperature T.
func (s *solver) saturatedAtT(T float64, sd side) (saturated, bool) {
	return s.saturatedAt(lnTOfNode, math.Log(T), sd)
}

// saturatedAtP solves the point of a side at pressure p.
func (s *solver) saturatedAtP(p float64, sd side) (saturated, bool) {
	return s.saturatedAt(lnPOfNode, math.Log(p), sd)
}

// saturatedAt solves the point of a side where a coordinate is target.
func (s *solver) saturatedAt(of coordinate, target float64, sd side) (saturated, bool) {
	d, n := s.d, len(s.m.z)
	v := make([]float64, n+3)
	lo, S, hi := d.locate(of, target, sd, v)
	top := d.topOf(of)
	u := edge(v[:n+2])
	fixed, value := fixedT, target
	if of == lnPOfNode {
		fixed, value = fixedP, math.Exp(target)
	}
	if math.Abs(S-top) > farFromTop && math.Abs(S) > gap {
		if s.solveEdge(u, fixed, value, true) && math.Abs(math.Log(s.inc.rho/s.bulk.rho)-S) < 0.1 {
			return s.finish(s.edgePressure()), true
		}
	}

	// Where temperature or pressure folds back, or both phases become alike, follow the spread instead.
	for range 60 {
		if math.Abs(S) < gap {
			return s.interpolated(S), true
		}
		d.interpolate(S, v)
		nd, ok := s.solveNode(u, S)
		if !ok {
			return saturated{}, false
		}
		w, dw := of.in(nd.v), of.in(nd.dv)
		if (w < target) == (sd == dense) {
			lo = S
		} else {
			hi = S
		}
		next := S + (target-w)/dw
		if math.Abs(target-w) < spreadNoise || hi-lo < 1e-9 {
			// Close enough to fix temperature or pressure itself, but at the very top.
			copy(u, nd.v)
			if s.solveEdge(u, fixed, value, true) && math.Abs(math.Log(s.inc.rho/s.bulk.rho)-S) < 1e-4 {
				return s.finish(s.edgePressure()), true
			}
			return s.saturatedAtSpread(S)
		}
		if !(lo < next && next < hi) {
			next = (lo + hi) / 2
		}
		S = next
	}
	return saturated{}, false
}

// saturatedAtSpread solves the point of the envelope at spread S.
func (s *solver) saturatedAtSpread(S float64) (saturated, bool) {
	if math.Abs(S) < gap {
		return s.interpolated(S), true
	}
	v := make([]float64, len(s.m.z)+2)
	s.d.interpolate(S, v)
	ok := s.solveEdge(edge(v), fixedSpread, S, true)
	return s.finish(s.edgePressure()), ok
}
