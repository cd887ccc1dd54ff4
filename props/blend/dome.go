package blend

import (
	"math"
	"sort"
)

// side tells the two halves of the envelope apart. Seen over temperature they meet where temperature is highest, seen
// over pressure where pressure is highest; below that they are the bubble and the dew line.
type side int

const (
	dense side = iota
	light
)

// dome is everything known about the phase envelope of a blend.
type dome struct {
	*envelope
	lines [2]*line
	min   [2]edgePoint // the cold ends
}

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

// newDome traces the envelope and expands its lines.
func (s *solver) newDome(Tmin float64) (*dome, error) {
	e, err := s.newEnvelope(Tmin)
	if err != nil {
		return nil, err
	}
	d := &dome{envelope: e}
	places := manyPlaces
	if s.m.listed != nil {
		places = 1 // the cold end; a test looks at the rest
	}
	if Tmin, err = s.stableFrom(d, Tmin, places); err != nil {
		return nil, err
	}
	iso := newIsotherm(s.m.whole)
	ends := [2]float64{
		min(-lineSpread, e.topT.S-lineClearance, e.topP.S-lineClearance),
		max(lineSpread, e.topT.S+lineClearance, e.topP.S+lineClearance),
	}
	for sd, S := range ends {
		u := make([]float64, len(s.m.z)+3)
		e.interpolate(S, u)
		end, ok := s.solveNode(edge(u[:len(u)-1]), S)
		top := end.point()
		if !ok || top.T <= Tmin {
			return nil, &EnvelopeError{Refrigerant: s.m.designation, T: top.T, Reason: "too small to be expanded"}
		}
		var l *line
		l, ok = newLine(len(s.m.z), Tmin, top.T, func(T float64) ([]float64, bool) {
			a, ok := s.saturatedAtT(d, iso, T, side(sd))
			if !ok {
				return nil, false
			}
			return a.fields(), true
		})
		if !ok {
			return nil, &EnvelopeError{Refrigerant: s.m.designation, T: top.T, Reason: "it cannot be expanded"}
		}
		first, _ := s.saturatedAtT(d, iso, Tmin, side(sd))
		l.lo, l.hi = edgePoint{first.S, first.T, first.p, first.bulk.rho}, top
		d.min[sd] = l.lo
		d.lines[sd] = l // only now: the samples were solved
	}
	return d, nil
}

func (a *saturated) fields() []float64 {
	b := &a.bulk
	v := make([]float64, fieldsOfLine, fieldsOfLine+len(a.x))
	v[lineLnP], v[lineLnRho], v[lineLnRhoInc] = math.Log(a.p), math.Log(b.rho), math.Log(a.rhoInc)
	v[lineH], v[lineS], v[lineHInc], v[lineSInc] = b.h, b.s, a.h, a.s
	v[lineCp], v[lineCv], v[lineW], v[lineDPDRho], v[lineDPDT] = b.cp, b.cv, b.w, b.dpdrho, b.dpdT
	return append(v, a.x...)
}

// fromLine returns the point of a line at T.
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
func (s *solver) interpolated(d *dome, iso *isotherm, S float64) saturated {
	n := len(s.m.z)
	v := make([]float64, n+3)
	d.nearCritical(S, v)
	s.bulk.T = math.Exp(v[n+1])
	s.bulk.rho = math.Exp(v[n])
	s.inc.T = s.bulk.T
	s.inc.setConcentrations(v[:n])
	s.k.evaluate(s.inc, true)
	a := s.finish(iso)
	a.p = math.Exp(v[n+2])
	a.bulk.p = a.p
	return a
}

// finish returns the point that was solved last with caloric properties.
func (s *solver) finish(iso *isotherm) saturated {
	iso.set(s.bulk.T)
	a := saturated{
		S: math.Log(s.inc.rho / s.bulk.rho), T: s.bulk.T, p: s.edgePressure(), bulk: iso.at(s.bulk.rho), rhoInc: s.inc.rho,
		s: s.inc.s / s.inc.rho, x: append([]float64(nil), s.inc.x...),
	}
	a.bulk.p = a.p
	a.h = (s.inc.u + a.p) / s.inc.rho
	return a
}

// segment returns the node before the place where the lnT or lnP (field from the end of v) of a side reaches target.
func (d *dome) segment(field int, target float64, sd side, topS float64) int {
	get := func(i int) float64 { v := d.nodes[i].v; return v[len(v)-field] }
	split := sort.Search(len(d.nodes), func(i int) bool { return d.nodes[i].S > topS }) // first node past the top
	var i int
	if sd == dense {
		i = sort.Search(split, func(i int) bool { return get(i) > target }) - 1
	} else {
		i = split + sort.Search(len(d.nodes)-split, func(j int) bool { return get(split+j) <= target }) - 1
	}
	return min(max(i, 0), len(d.nodes)-2)
}

// locate finds the spread at which the interpolated lnT (field 2) or lnP (field 1) reaches target on a side, and writes
// the interpolated unknowns there to u, which has the length of a node.
func (d *dome) locate(field int, target float64, sd side, u []float64) (lo, S, hi float64) {
	top := d.topT.S
	if field == 1 {
		top = d.topP.S
	}
	i := d.segment(field, target, sd, top)
	a, b := &d.nodes[i], &d.nodes[i+1]
	lo, hi = a.S, b.S
	if sd == dense {
		hi = math.Min(hi, top)
	} else {
		lo = math.Max(lo, top)
	}
	// Bisection of the cubic; it is only a start.
	x, y := lo, hi
	for range 40 {
		S = (x + y) / 2
		hermite(a, b, S, u)
		if (u[len(u)-field] < target) == (sd == dense) {
			x = S
		} else {
			y = S
		}
	}
	return lo, S, hi
}

// saturatedAtT solves the point of a side at temperature T.
func (s *solver) saturatedAtT(d *dome, iso *isotherm, T float64, sd side) (saturated, bool) {
	return s.saturatedAt(d, iso, 2, math.Log(T), sd)
}

// saturatedAtP solves the point of a side at pressure p.
func (s *solver) saturatedAtP(d *dome, iso *isotherm, p float64, sd side) (saturated, bool) {
	return s.saturatedAt(d, iso, 1, math.Log(p), sd)
}

// saturatedAt solves the point of a side where lnT (field 2) or lnP (field 1) is target.
func (s *solver) saturatedAt(d *dome, iso *isotherm, field int, target float64, sd side) (saturated, bool) {
	n := len(s.m.z)
	v := make([]float64, n+3)
	lo, S, hi := d.locate(field, target, sd, v)
	top := d.topT.S
	if field == 1 {
		top = d.topP.S
	}
	u := edge(v[:n+2])
	fixed, value := fixedT, target
	if field == 1 {
		fixed, value = fixedP, math.Exp(target)
	}
	if math.Abs(S-top) > farFromTop && math.Abs(S) > gap {
		if s.solveEdge(u, fixed, value, true) && math.Abs(math.Log(s.inc.rho/s.bulk.rho)-S) < 0.1 {
			return s.finish(iso), true
		}
	}

	// Where temperature or pressure folds back, or both phases become alike, follow the spread instead.
	for range 60 {
		if math.Abs(S) < gap {
			return s.interpolated(d, iso, S), true
		}
		d.interpolate(S, v)
		nd, ok := s.solveNode(u, S)
		if !ok {
			return saturated{}, false
		}
		w, dw := nd.v[len(nd.v)-field], nd.dv[len(nd.dv)-field]
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
				return s.finish(iso), true
			}
			return s.saturatedAtSpread(d, iso, S)
		}
		if !(lo < next && next < hi) {
			next = (lo + hi) / 2
		}
		S = next
	}
	return saturated{}, false
}

// saturatedAtSpread solves the point of the envelope at spread S.
func (s *solver) saturatedAtSpread(d *dome, iso *isotherm, S float64) (saturated, bool) {
	if math.Abs(S) < gap {
		return s.interpolated(d, iso, S), true
	}
	v := make([]float64, len(s.m.z)+2)
	d.interpolate(S, v)
	ok := s.solveEdge(edge(v), fixedSpread, S, true)
	return s.finish(iso), ok
}
