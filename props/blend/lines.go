package blend

import (
	"math"
	"sort"
)

// line is the bubble or the dew line of a blend as piecewise Chebyshev expansions in temperature, from the lowest
// temperature to a safe distance from where temperature or pressure is highest on the envelope.
type line struct {
	pieces   []linePiece // by rising temperature
	n        int         // components
	lo, hi   edgePoint
	worst    [fieldsOfLine + MaxComponents]float64 // largest deviation seen between the nodes, by field
	evaluate int                                   // equilibria solved to make it
}

// linePiece holds expansions of all fields over temperatures lo to hi. Row k of c holds the coefficients of T_k.
type linePiece struct {
	lo, hi         float64 // K
	lnPlo, lnPhi   float64
	center, invers float64 // x = (T-center)*invers
	c              [][]float64
}

// The fields of a line: per mole, from the zero points of the component files. The mole fractions of the incipient phase
// follow them.
const (
	lineLnP = iota
	lineLnRho
	lineDPDRho
	lineH
	lineS
	lineDPDT
	lineCp
	lineCv
	lineW
	lineLnRhoInc
	lineHInc
	lineSInc
	fieldsOfLine
)

const (
	lineDegree    = 16
	lineGoal      = 2e-12 // deviation between the nodes at which a piece is not split further
	narrowest     = 1e-3  // of the temperature: closer to a fold rounding would be expanded
	lineSpread    = 0.5   // |S| at which a line ends at the latest
	lineClearance = 0.3   // in S, to the highest temperature and pressure
)

// newLine expands a line between two temperatures. sample solves it at a temperature and returns the fields.
func newLine(n int, Tmin, Tmax float64, sample func(T float64) ([]float64, bool)) (*line, bool) {
	l := &line{n: n}
	if !l.add(Tmin, Tmax, sample) {
		return nil, false
	}
	return l, true
}

// add appends pieces from a to b, split until the expansions meet the goal.
func (l *line) add(a, b float64, sample func(T float64) ([]float64, bool)) bool {
	p := linePiece{lo: a, hi: b, center: (a + b) / 2, invers: 2 / (b - a)}
	const m = lineDegree + 1
	var values [m][]float64
	for i := range values {
		var ok bool
		l.evaluate++
		if values[i], ok = sample(p.center + math.Cos(math.Pi*(float64(i)+0.5)/m)/p.invers); !ok {
			return false
		}
	}
	width := len(values[0])
	p.c = make([][]float64, m)
	store := make([]float64, m*width)
	for k := range m {
		p.c[k], store = store[:width:width], store[width:]
		for i, v := range values {
			t := math.Cos(math.Pi * float64(k) * (float64(i) + 0.5) / m)
			for f := range v {
				p.c[k][f] += v[f] * t * 2 / m
			}
		}
	}
	for f := range p.c[0] {
		p.c[0][f] /= 2
	}

	// Between the nodes, where the remainder is largest, and at the ends.
	out := make([]float64, width)
	var worst [fieldsOfLine + MaxComponents]float64
	good := true
	for _, x := range []float64{-1, -0.95, -0.52, 0.06, 0.52, 0.95, 1} {
		l.evaluate++
		T := p.center + x/p.invers
		want, ok := sample(T)
		if !ok {
			return false
		}
		p.at(T, out)
		for f := range out {
			d := math.Abs(out[f]-want[f]) / lineScale(f, want)
			worst[f] = math.Max(worst[f], d)
			good = good && d <= lineGoal*lineWeight(f)
		}
	}
	if !good && (b-a) > narrowest*b {
		return l.add(a, p.center, sample) && l.add(p.center, b, sample)
	}
	p.at(a, out)
	p.lnPlo = out[lineLnP]
	p.at(b, out)
	p.lnPhi = out[lineLnP]
	for f := range worst {
		l.worst[f] = math.Max(l.worst[f], worst[f])
	}
	l.pieces = append(l.pieces, p)
	return true
}

// lineScale returns what a deviation of field f counts against: one for logarithms and fractions, R T of the order of
// magnitude for energies, the value itself for the rest.
func lineScale(f int, v []float64) float64 {
	switch f {
	case lineH, lineHInc:
		return 3e4 // J/mol, the order of a heat of vaporisation
	case lineS, lineSInc:
		return 1e2 // J/(mol K)
	case lineCp, lineCv, lineW, lineDPDRho, lineDPDT:
		return math.Abs(v[f])
	}
	return 1
}

// lineWeight loosens the goal of the fields that are second derivatives, which feel the rounding of density most.
func lineWeight(f int) float64 {
	switch f {
	case lineCp, lineCv, lineW, lineDPDRho, lineDPDT:
		return 100
	}
	return 1
}

// at writes the first fields at T into out, as many as out holds.
func (p *linePiece) at(T float64, out []float64) {
	x := (T - p.center) * p.invers
	t0, t1 := 1.0, x
	copy(out, p.c[0])
	for k := 1; k < len(p.c); k++ {
		for f, c := range p.c[k][:len(out)] {
			out[f] += t1 * c
		}
		t0, t1 = t1, 2*x*t1-t0
	}
}

func (l *line) find(T float64) *linePiece {
	i := sort.Search(len(l.pieces), func(i int) bool { return l.pieces[i].hi >= T })
	return &l.pieces[min(i, len(l.pieces)-1)]
}

// at writes the first fields at T into out, as many as out holds.
func (l *line) at(T float64, out []float64) { l.find(T).at(T, out) }

// temperature returns the temperature in K at ln(p/Pa), which must lie on the line.
func (l *line) temperature(lnP float64) float64 {
	i := sort.Search(len(l.pieces), func(i int) bool { return l.pieces[i].lnPhi >= lnP })
	p := &l.pieces[min(i, len(l.pieces)-1)]
	// ln(p) is nearly linear in 1/T; Newton's method gains the rest in two or three steps.
	r := (lnP - p.lnPlo) / (p.lnPhi - p.lnPlo)
	T := 1 / (1/p.lo + r*(1/p.hi-1/p.lo))
	for range 10 {
		x := (T - p.center) * p.invers
		t0, t1, u0, u1 := 1.0, x, 0.0, 1.0 // T_(k-1), T_k and U_(k-2), U_(k-1)
		v, dv := p.c[0][lineLnP], 0.0
		for k := 1; k < len(p.c); k++ {
			c := p.c[k][lineLnP]
			v += c * t1
			dv += c * float64(k) * u1
			t0, t1 = t1, 2*x*t1-t0
			u0, u1 = u1, 2*x*u1-u0
		}
		step := (v - lnP) / (dv * p.invers)
		T -= step
		if math.Abs(step) < 1e-9*T { // converging quadratically
			break
		}
	}
	return min(max(T, p.lo), p.hi)
}
