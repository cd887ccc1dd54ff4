package saturation

import (
	"cmp"
	"fmt"
	"math"
	"slices"

	"dewmark/props/helmholtz"
)

// maker holds what is needed while a curve is made.
type maker struct {
	eq    *helmholtz.Equation
	curve *Curve
	trace []point // in rising s
}

// point is a solved equilibrium.
type point struct{ s, lnP, liquid, lnVapour float64 } // ln Pa, mol/m3, ln mol/m3

// solve returns the equilibrium at s from the given start.
func (m *maker) solve(s float64, start point) (point, error) {
	T := m.curve.TCritical * (1 - s*s)
	l, v, err := equilibrium(m.eq, T, start.liquid/m.eq.RhoRed, math.Exp(start.lnVapour)/m.eq.RhoRed)
	if err != nil {
		return point{}, err
	}
	rho := v.delta * m.eq.RhoRed
	return point{s: s, lnP: math.Log(v.P * m.eq.RhoRed * m.eq.R * T), liquid: l.delta * m.eq.RhoRed, lnVapour: math.Log(rho)}, nil
}

// follow solves equilibria along the curve, from 0.9 of the critical temperature outwards, each started from its
// neighbours. The trace gives every later solve a start from which Newton converges at once.
func (m *maker) follow(acentric float64) error {
	c := m.curve
	sMax := math.Sqrt(1 - c.TMin/c.TCritical)
	s0 := math.Min(math.Sqrt(0.1), sMax/2)
	first, err := m.solve(s0, m.corresponding(s0, acentric))
	if err != nil {
		return err
	}
	m.trace = []point{first}
	var down, up []float64 // values of s in the order they are solved
	for i := 1; i <= steps; i++ {
		down = append(down, s0+(sMax-s0)*float64(i)/steps)
		up = append(up, s0+(0.03-s0)*float64(i)/steps)
	}
	for s := 0.03 * closer; s > m.edge()/4; s *= closer {
		up = append(up, s)
	}
	for _, values := range [][]float64{down, up} {
		run := []point{first}
		for _, s := range values {
			p, err := m.solve(s, interpolate(run[max(0, len(run)-4):], s))
			if err != nil {
				return fmt.Errorf("following the curve: %w", err)
			}
			run = append(run, p)
		}
		m.trace = append(m.trace, run[1:]...)
	}
	slices.SortFunc(m.trace, func(a, b point) int { return cmp.Compare(a.s, b.s) })
	return nil
}

// corresponding estimates an equilibrium by corresponding states: densities after Guggenheim, J. Chem. Phys. 13 (1945)
// 253, vapour pressure from the definition of the acentric factor.
func (m *maker) corresponding(s, acentric float64) point {
	c := m.curve
	t := s * s
	cube := math.Cbrt(t)
	lnPr := -7.0 / 3 * (1 + acentric) * math.Ln10 * t / (1 - t)
	p := c.PCritical * math.Exp(lnPr)
	vapour := math.Min(c.RhoCritical*(1-1.75*cube+0.75*t), 1.35*p/(m.eq.R*c.TCritical*(1-t)))
	return point{s: s, lnP: lnPr, liquid: c.RhoCritical * (1 + 1.75*cube + 0.75*t), lnVapour: math.Log(vapour)}
}

// interpolate puts a polynomial through all the points and evaluates it at s. Near the critical point it works in s,
// where both densities are smooth.
func interpolate(points []point, s float64) point {
	out := point{s: s}
	for i, p := range points {
		w := 1.0
		for j, q := range points {
			if i != j {
				w *= (s - q.s) / (p.s - q.s)
			}
		}
		out.lnP += w * p.lnP
		out.liquid += w * p.liquid
		out.lnVapour += w * p.lnVapour
	}
	return out
}

// at solves the equilibrium at s, started from the trace. Close to the critical point of an equation with non-analytic
// terms the rounding of one solve would show in the curve; there it is averaged over neighbours so close that the curve
// itself does not change.
func (m *maker) at(s float64) (point, error) {
	const near, several, apart = 0.05, 8, 1e-10
	if !m.eq.HasPeaks() || s > near {
		return m.once(s)
	}
	mean := point{s: s}
	for i := range several {
		p, err := m.once(s * (1 + apart*(float64(i)-float64(several-1)/2)))
		if err != nil {
			return point{}, err
		}
		mean.lnP += p.lnP / several
		mean.liquid += p.liquid / several
		mean.lnVapour += p.lnVapour / several
	}
	return mean, nil
}

func (m *maker) once(s float64) (point, error) {
	i, _ := slices.BinarySearchFunc(m.trace, s, func(p point, s float64) int { return cmp.Compare(p.s, s) })
	lo := min(max(0, i-2), len(m.trace)-4)
	return m.solve(s, interpolate(m.trace[lo:lo+4], s))
}

// expand makes the pieces.
func (m *maker) expand() error {
	c := m.curve
	sMax := math.Sqrt(1 - c.TMin/c.TCritical)
	var err error
	if m.eq.HasPeaks() {
		err = m.powerPiece()
	} else {
		err = m.analyticPiece()
	}
	if err != nil {
		return err
	}
	const quiet = 0.009
	for lo := c.critical.hi; lo < sMax; {
		hi := math.Min(sMax, lo+widest)
		if sMax-hi < 0.01 { // no sliver at the end
			hi = sMax
		}
		if m.eq.HasPeaks() && lo < quiet {
			hi = quiet // 1 - T/Tc = 8e-5: keeps the noise of the phase solve nearer to the critical point in there
		}
		k, err := m.split(lo, hi)
		if err != nil {
			return err
		}
		c.pieces = append(c.pieces, k)
		lo = k.hi
	}
	return nil
}

// split makes the widest piece from lo that meets the goal, or the rounding of the phase solve where that is larger,
// halving from hi.
func (m *maker) split(lo, hi float64) (piece, error) {
	for ; ; hi = lo + (hi-lo)/2 {
		k, worst, err := m.piece(lo, hi)
		if err != nil {
			return piece{}, err
		}
		if worst.pressure >= goal || worst.density() >= goal {
			floor, err := m.noise(lo, hi)
			if err != nil {
				return piece{}, err
			}
			if worst.pressure >= math.Max(goal, floor.pressure) || worst.density() >= math.Max(goal, floor.density()) {
				continue
			}
		}
		b := &m.curve.bounds
		b.Pressure = math.Max(b.Pressure, worst.pressure)
		b.Liquid = math.Max(b.Liquid, worst.liquid)
		b.Vapour = math.Max(b.Vapour, worst.vapour)
		return k, nil
	}
}

// noise measures the rounding of the phase solve between lo and hi: second differences over steps so small that the
// curve itself contributes nothing, taken twice as large as seen since few are taken.
func (m *maker) noise(lo, hi float64) (deviation, error) {
	const h = 1e-8
	var d deviation
	for i := range 6 {
		var p [3]point
		for j := range p {
			var err error
			if p[j], err = m.at(lo + (hi-lo)*float64(i)/6 + float64(j+1)*h); err != nil {
				return deviation{}, err
			}
		}
		d.pressure = math.Max(d.pressure, 2*math.Abs(p[0].lnP-2*p[1].lnP+p[2].lnP))
		d.liquid = math.Max(d.liquid, 2*math.Abs(p[0].liquid-2*p[1].liquid+p[2].liquid)/p[1].liquid)
		d.vapour = math.Max(d.vapour, 2*math.Abs(p[0].lnVapour-2*p[1].lnVapour+p[2].lnVapour))
	}
	return d, nil
}

// edge is the s at which the piece through the critical point takes over, 1 - T/Tc = 1e-6. The sharp non-analytic terms
// of R718 and R744 leave the phase solve sound to 2.5e-5 only.
func (m *maker) edge() float64 {
	if m.eq.HasPeaks() {
		return 0.005
	}
	return 0.001
}

type deviation struct{ pressure, liquid, vapour float64 }

func (d deviation) density() float64 { return math.Max(d.liquid, d.vapour) }

func (m *maker) piece(lo, hi float64) (piece, deviation, error) {
	k := piece{lo: lo, hi: hi, scale: 2 / (hi - lo)}
	var lnP, liquid, lnVapour [degree + 1]float64
	for i, x := range nodes {
		p, err := m.at(lo + (x+1)/k.scale)
		if err != nil {
			return piece{}, deviation{}, err
		}
		lnP[i], liquid[i], lnVapour[i] = p.lnP, p.liquid, p.lnVapour
	}
	k.lnP, k.liquid, k.lnVapour = fit(&lnP), fit(&liquid), fit(&lnVapour)
	var d deviation
	for i := range degree { // between the nodes, where the error of an expansion is largest, and at both ends
		x := (nodes[i] + nodes[i+1]) / 2
		switch i {
		case 0:
			x = 1
		case degree - 1:
			x = -1
		}
		s := lo + (x+1)/k.scale
		p, err := m.at(s)
		if err != nil {
			return piece{}, deviation{}, err
		}
		d.pressure = math.Max(d.pressure, math.Abs(k.lnP.at(x)-p.lnP))
		d.liquid = math.Max(d.liquid, math.Abs(k.liquid.at(x)/p.liquid-1))
		d.vapour = math.Max(d.vapour, math.Abs(k.lnVapour.at(x)-p.lnVapour))
	}
	return k, d, nil
}

// analyticPiece makes the expansion through the critical point: the polynomial through that point, which is known by
// itself, and five solved points on each side. None of them is so near to it that the noise of the phase solve matters.
func (m *maker) analyticPiece() error {
	c, edge := m.curve, m.edge()
	through := []point{{s: 0, liquid: c.RhoCritical, lnP: math.Log(c.PCritical)}}
	pressures := through[:1:1]
	for _, x := range []float64{0.38, 0.6, 0.8, 0.93, 1} {
		p, err := m.at(x * edge)
		if err != nil {
			return err
		}
		through = append(through, p, point{s: -p.s, liquid: math.Exp(p.lnVapour)})
		pressures = append(pressures, point{s: p.s * p.s, lnP: p.lnP})
	}
	k := criticalPiece{hi: edge}
	var density, lnP [degree + 1]float64
	for i, x := range nodes {
		density[i] = interpolate(through, x*edge).liquid
		lnP[i] = interpolate(pressures, edge*edge*(x+1)/2).lnP
	}
	k.density, k.lnP = fit(&density), fit(&lnP)
	c.critical = k
	return nil
}

// powerPiece closes the curve of an equation with non-analytic terms, whose densities follow a power law there, by the
// power that the last solvable points have.
func (m *maker) powerPiece() error {
	c, edge := m.curve, m.edge()
	a, err := m.at(edge)
	if err != nil {
		return err
	}
	b, err := m.at(edge * 1.05)
	if err != nil {
		return err
	}
	width := func(p point) float64 { return (p.liquid - math.Exp(p.lnVapour)) / c.RhoCritical }
	k := criticalPiece{hi: edge, power: math.Log(width(b)/width(a)) / math.Log(1.05)}
	w := math.Pow(edge, k.power)
	k.cl, k.cv = (a.liquid/c.RhoCritical-1)/w, (1-math.Exp(a.lnVapour)/c.RhoCritical)/w
	// ln p over s^2 as the parabola through the critical point and both solved ones.
	points := []point{{s: 0, lnP: math.Log(c.PCritical)}, {s: a.s * a.s, lnP: a.lnP}, {s: b.s * b.s, lnP: b.lnP}}
	var lnP [degree + 1]float64
	for i, x := range nodes {
		lnP[i] = interpolate(points, edge*edge*(x+1)/2).lnP
	}
	k.lnP = fit(&lnP)
	c.critical = k
	return nil
}

// invert makes the expansions of T in ln p from those of ln p in T.
func (m *maker) invert() {
	c := m.curve
	top := math.Log(c.PCritical)
	// The expansions meet at the edge of the critical piece to their error only; no piece here may cross that step.
	edge := math.Log(c.Pressure(c.TCritical * (1 - c.critical.hi*c.critical.hi)))
	for lo := math.Log(c.PMin); lo < top; {
		hi := math.Min(top, lo+4)
		if lo < edge && edge < hi {
			hi = edge
		}
		for {
			k := inversePiece{lo: lo, hi: hi, scale: 2 / (hi - lo)}
			var T [degree + 1]float64
			for i, x := range nodes {
				T[i] = m.boiling(lo + (x+1)/k.scale)
			}
			k.T = fit(&T)
			worst := 0.0
			for i := range degree {
				x := (nodes[i] + nodes[i+1]) / 2
				worst = math.Max(worst, math.Abs(k.T.at(x)/m.boiling(lo+(x+1)/k.scale)-1))
			}
			// Near the critical point T bends ever more with ln p; only there is a piece made narrower than 0.002.
			if worst < goal/10 || hi-lo < 0.002 && worst < 5e-13 || hi-lo < 1e-5 {
				c.inverse = append(c.inverse, k)
				c.bounds.Temperature = math.Max(c.bounds.Temperature, worst)
				lo = hi
				break
			}
			hi = lo + (hi-lo)/2
		}
	}
}

// boiling solves ln p(T) = y on the expansions by bisection that secant steps speed up (Illinois).
func (m *maker) boiling(y float64) float64 {
	c := m.curve
	f := func(u float64) float64 { return math.Log(c.Pressure(1/u)) - y } // nearly straight in u = 1/T
	a, b := 1/c.TCritical, 1/c.TMin
	fa, fb := f(a), f(b)
	if fa <= 0 {
		return c.TCritical
	}
	if fb >= 0 {
		return c.TMin
	}
	for range 100 {
		u := b - fb*(b-a)/(fb-fa)
		fu := f(u)
		if math.Abs(fu) < 1e-15 || math.Abs(b-a) < 4e-16*b {
			return 1 / u
		}
		if (fu < 0) != (fb < 0) {
			a, fa = b, fb
		} else {
			fa /= 2
		}
		b, fb = u, fu
	}
	return 1 / b
}
