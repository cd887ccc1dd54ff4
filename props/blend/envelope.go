package blend

import (
	"math"
	"slices"
	"sort"
)

// envelope is the whole phase envelope of a blend as a curve over the spread S, the logarithm of the density of the
// incipient phase over that of the bulk. S rises from the cold end of the bubble line (a liquid over its first bubble)
// through zero at the critical point to the cold end of the dew line. Nothing folds in S: neither where temperature nor
// where pressure is highest, nor at an azeotrope, where all compositions are equal but the densities are not.
type envelope struct {
	nodes    []node // by rising S
	critical edgePoint
	rise     []float64 // of the critical point over the cubic across the gap, in the order of a node
	topT     edgePoint // highest temperature
	topP     edgePoint // highest pressure
}

// edgePoint is a point on the curve.
type edgePoint struct{ S, T, p, rho float64 }

// node is a solved edge and its derivative in S. v holds the unknowns of the edge, then ln(p).
type node struct {
	S     float64
	v, dv []float64
}

// coordinate is a value of a node, counted from the end of v.
type coordinate int

const (
	lnPOfNode   coordinate = 1
	lnTOfNode   coordinate = 2
	lnRhoOfNode coordinate = 3
)

func (c coordinate) in(v []float64) float64 { return v[len(v)-int(c)] }

func (a *node) lnT() float64   { return lnTOfNode.in(a.v) }
func (a *node) lnP() float64   { return lnPOfNode.in(a.v) }
func (a *node) lnRho() float64 { return lnRhoOfNode.in(a.v) }

func (a *node) point() edgePoint {
	return edgePoint{a.S, math.Exp(a.lnT()), math.Exp(a.lnP()), math.Exp(a.lnRho())}
}

const (
	// Between -gap and gap both phases are so alike that equilibrium is solved no more; the curve is interpolated there.
	gap           = 0.04
	longestStep   = 0.3
	shortestStep  = 1e-3
	predictorGoal = 2e-3 // error of the predictor that keeps the step as it is
	maxNodes      = 600
)

// solveNode solves the edge at spread S from the guess u and returns it with its derivatives.
func (s *solver) solveNode(u edge, S float64) (node, bool) {
	if !s.solveEdge(u, fixedSpread, S, false) {
		return node{}, false
	}
	n := len(s.m.z)
	nd := node{S: S, v: make([]float64, n+3), dv: make([]float64, n+3)}
	copy(nd.v, u)
	s.edgeTangent(nd.dv[:n+2])
	light := s.inc
	var dp float64
	if s.inc.rho > s.bulk.rho {
		light = s.bulk
		for _, c := range light.pC {
			dp += c * nd.dv[n]
		}
	} else {
		for j, c := range light.pC {
			dp += c * nd.dv[j]
		}
	}
	dp += light.pT * nd.dv[n+1]
	nd.v[n+2], nd.dv[n+2] = math.Log(light.p), dp/light.p
	return nd, !math.IsNaN(nd.v[n+2]) && !math.IsInf(nd.v[n+2], 0)
}

// trace follows the envelope from node a in steps of the sign of h until done says so.
func (s *solver) trace(a node, h float64, done func(*node) bool) ([]node, bool) {
	nodes := []node{a}
	u := make(edge, len(a.v)-1)
	for len(nodes) < maxNodes {
		b := nodes[len(nodes)-1]
		S := b.S + h
		switch { // over the critical point in one step, from one end of the gap to the other
		case b.S == -gap && h > 0, b.S == gap && h < 0:
			S = -b.S
		case b.S < -gap && S > -gap*1.05, b.S > gap && S < gap*1.05:
			S = math.Copysign(gap, b.S)
		}
		if len(nodes) == 1 {
			for i := range u {
				u[i] = b.v[i] + (S-b.S)*b.dv[i]
			}
		} else {
			hermite(&nodes[len(nodes)-2], &b, S, u)
		}
		guess := slices.Clone(u)
		next, ok := s.solveNode(u, S)
		err := 0.0
		for i := range guess {
			err = math.Max(err, math.Abs(guess[i]-u[i]))
		}
		// The bulk thins out all the way; where it does not, the curve is another one, between two liquids.
		if !ok || err > 50*predictorGoal || lnRhoOfNode.in(next.dv) >= 0 {
			if h /= 3; math.Abs(h) < shortestStep {
				return nodes, false
			}
			continue
		}
		nodes = append(nodes, next)
		if done(&next) {
			return nodes, true
		}
		grow := math.Pow(predictorGoal/math.Max(err, 1e-9), 0.25)
		h *= math.Max(0.4, math.Min(1.6, grow))
		h = math.Copysign(math.Min(math.Abs(h), longestStep), h)
	}
	return nodes, false
}

// hermite evaluates the cubic through nodes a and b at S.
func hermite(a, b *node, S float64, out []float64) {
	h := b.S - a.S
	t := (S - a.S) / h
	t2, t3 := t*t, t*t*t
	h00, h10, h01, h11 := 2*t3-3*t2+1, t3-2*t2+t, -2*t3+3*t2, t3-t2
	for i := range out {
		out[i] = h00*a.v[i] + h*h10*a.dv[i] + h01*b.v[i] + h*h11*b.dv[i]
	}
}

// newEnvelope traces the envelope between temperatures Tmin on both sides.
func (s *solver) newEnvelope(Tmin float64) (*envelope, error) {
	fail := func(T float64, reason string) error {
		return &EnvelopeError{Refrigerant: s.m.designation, T: T, Reason: reason}
	}
	var u edge
	var T float64
	found := false
	for _, r := range []float64{0.65, 0.7, 0.6, 0.55, 0.75, 0.5, 0.8, 0.45} {
		if T = r * s.m.whole.T; T < Tmin {
			continue
		}
		if u, found = s.start(T); found {
			break
		}
	}
	if !found {
		return nil, fail(T, "no bubble point found to start from")
	}
	first, ok := s.solveNode(u, math.Log(s.inc.rho/s.bulk.rho))
	if !ok {
		return nil, fail(T, "no bubble point found to start from")
	}
	lnTmin := math.Log(Tmin)
	cold := func(a *node) bool { return a.lnT() < lnTmin }
	down, ok := s.trace(first, -0.05, cold)
	if !ok {
		return nil, fail(down[len(down)-1].point().T, "the bubble line does not reach the lowest temperature")
	}
	up, ok := s.trace(first, 0.05, cold)
	if !ok {
		return nil, fail(up[len(up)-1].point().T, "the line cannot be followed over the critical point to the cold end of the dew line")
	}
	slices.Reverse(down)
	e := &envelope{nodes: append(down, up[1:]...)}
	if err := s.findCritical(e); err != nil {
		return nil, err
	}
	if e.topT, ok = s.top(e, lnTOfNode); !ok {
		return nil, fail(e.topT.T, "temperature has more than one maximum along it")
	}
	if e.topP, ok = s.top(e, lnPOfNode); !ok {
		return nil, fail(e.topP.T, "pressure has more than one maximum along it")
	}
	return e, nil
}

// top finds the maximum of a coordinate along the curve, and reports whether there is just one.
func (s *solver) top(e *envelope, of coordinate) (edgePoint, bool) {
	at := -1
	for i := range e.nodes[1:] {
		a, b := of.in(e.nodes[i].dv), of.in(e.nodes[i+1].dv)
		if a > 0 && b <= 0 && at < 0 {
			at = i
		} else if (a > 0) != (b > 0) {
			return e.nodes[i].point(), false
		}
	}
	if at < 0 {
		return e.nodes[0].point(), false
	}
	lo, hi := e.nodes[at], e.nodes[at+1]
	u := make([]float64, len(lo.v))
	for range 60 {
		a, b := of.in(lo.dv), of.in(hi.dv)
		S := lo.S - a*(hi.S-lo.S)/(b-a)
		if math.Abs(S) < gap {
			return e.topNearCritical(lo.S, hi.S, of), true
		}
		if hi.S-lo.S < 1e-6 {
			e.interpolate(S, u)
			mid := node{S: S, v: u}
			return mid.point(), true
		}
		S = min(max(S, lo.S+0.02*(hi.S-lo.S)), hi.S-0.02*(hi.S-lo.S)) // a secant that creeps along one end stops here
		e.interpolate(S, u)
		mid, ok := s.solveNode(edge(u[:len(u)-1]), S)
		if !ok {
			return edgePoint{S: S}, false
		}
		if of.in(mid.dv) > 0 {
			lo = mid
		} else {
			hi = mid
		}
	}
	return lo.point(), true
}

// topNearCritical finds the maximum of a coordinate in the gap.
func (e *envelope) topNearCritical(lo, hi float64, of coordinate) edgePoint {
	n := node{v: make([]float64, len(e.nodes[0].v))}
	at := func(S float64) float64 {
		n.S = S
		e.interpolate(S, n.v)
		return of.in(n.v)
	}
	lo, hi = max(lo, -gap), min(hi, gap)
	const golden = 0.6180339887498949
	for hi-lo > 1e-6 { // closer, rounding hides which is higher
		a, b := hi-golden*(hi-lo), lo+golden*(hi-lo)
		if at(a) > at(b) {
			hi = b
		} else {
			lo = a
		}
	}
	at((lo + hi) / 2)
	return n.point()
}

// interpolate writes the values of the curve at S into out, as many as out holds. It is a start for a solver; between -gap
// and gap it is the answer.
func (e *envelope) interpolate(S float64, out []float64) {
	i := sort.Search(len(e.nodes), func(i int) bool { return e.nodes[i].S > S })
	i = min(max(i, 1), len(e.nodes)-1)
	e.between(&e.nodes[i-1], &e.nodes[i], S, out)
}

// between interpolates between neighbouring nodes: by the cubic through both with their slopes and, across the gap, by the
// polynomial of fourth degree that passes through the critical point too.
func (e *envelope) between(a, b *node, S float64, out []float64) {
	hermite(a, b, S, out)
	if e.rise == nil || a.S > 0 || b.S < 0 {
		return
	}
	shape := func(S float64) float64 { x, y := S-a.S, S-b.S; return x * x * y * y }
	r := shape(S) / shape(0)
	for j := range out {
		out[j] += r * e.rise[j]
	}
}
