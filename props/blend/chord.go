package blend

import "math"

// tie is a pair of phases in equilibrium: a point of the envelope, or a split.
type tie struct {
	T, p   float64
	lnK    []float64 // ln(y_i/x_i)
	vL, vV float64   // m3/mol
	hL, hV float64   // J/mol
	sL, sV float64   // J/(mol K)
}

// tie returns the tie line that ends in a.
func (a *saturated) tie(z []float64) tie {
	t := tie{T: a.T, p: a.p, lnK: make([]float64, len(z))}
	for i := range z {
		t.lnK[i] = math.Log(a.x[i] / z[i])
	}
	if a.bulkIsLiquid() {
		t.vL, t.hL, t.sL, t.vV, t.hV, t.sV = 1/a.bulk.rho, a.bulk.h, a.bulk.s, 1/a.rhoInc, a.h, a.s
		return t
	}
	for i := range t.lnK {
		t.lnK[i] = -t.lnK[i]
	}
	t.vL, t.hL, t.sL, t.vV, t.hV, t.sV = 1/a.rhoInc, a.h, a.s, 1/a.bulk.rho, a.bulk.h, a.bulk.s
	return t
}

// tie returns the tie line of a solved split.
func (o *outcome) tie() tie {
	t := tie{T: o.T, p: o.p, lnK: make([]float64, len(o.x)), vL: 1 / o.rhoL, hL: o.hL, sL: o.sL, vV: 1 / o.rhoV, hV: o.hV, sV: o.sV}
	for i := range o.x {
		t.lnK[i] = math.Log(o.y[i] / o.x[i])
	}
	return t
}

// chord estimates the splits between two tie lines of one temperature or one pressure by interpolation, as starts for
// Newton's method.
type chord struct {
	m    *mixture
	a, b tie
	K    []float64
	beta float64 // amount of vapour at the place that was looked at last
	at   tie
}

func newChord(m *mixture, a, b tie) *chord {
	n := len(m.z)
	return &chord{m: m, a: a, b: b, K: make([]float64, n), at: tie{lnK: make([]float64, n)}}
}

// look interpolates at r between 0 and 1 and returns the value of a property there.
func (c *chord) look(r float64, of Property) float64 {
	a, b, t := &c.a, &c.b, &c.at
	mix := func(x, y float64) float64 { return x + r*(y-x) }
	blend := func(x, y float64) float64 { // geometric
		if x == y {
			return x
		}
		return x * math.Pow(y/x, r)
	}
	t.T, t.p = mix(a.T, b.T), blend(a.p, b.p)
	t.vL, t.vV = mix(a.vL, b.vL), blend(a.vV, b.vV)
	t.hL, t.hV, t.sL, t.sV = mix(a.hL, b.hL), mix(a.hV, b.hV), mix(a.sL, b.sL), mix(a.sV, b.sV)
	for i := range t.lnK {
		t.lnK[i] = mix(a.lnK[i], b.lnK[i])
		c.K[i] = math.Exp(t.lnK[i])
	}
	c.beta = vapourFraction(c.m.z, c.K, r)
	switch of {
	case Temperature:
		return t.T
	case Pressure:
		return t.p
	case Density:
		return t.vL + c.beta*(t.vV-t.vL)
	case Enthalpy:
		return t.hL + c.beta*(t.hV-t.hL)
	case Entropy:
		return t.sL + c.beta*(t.sV-t.sL)
	case InternalEnergy:
		return t.hL + c.beta*(t.hV-t.hL) - t.p*(t.vL+c.beta*(t.vV-t.vL))
	}
	var q float64
	for i, z := range c.m.z {
		q += z * c.K[i] * c.beta / (1 + c.beta*(c.K[i]-1)) * c.m.model.M[i]
	}
	return q / c.m.whole.M
}

// vapourFraction solves the equation of Rachford and Rice for the amount of vapour. Where the K-values say nothing, as
// at an azeotrope, it returns the given guess.
func vapourFraction(z, K []float64, guess float64) float64 {
	f := func(beta float64) (g, dg float64) {
		for i := range z {
			d := K[i] - 1
			q := d / (1 + beta*d)
			g += z[i] * q
			dg -= z[i] * q * q
		}
		return g, dg
	}
	g0, _ := f(0)
	g1, d1 := f(1)
	if !(math.Abs(d1) > 1e-9) {
		return guess
	}
	if g0 <= 0 {
		return 0
	}
	if g1 >= 0 {
		return 1
	}
	lo, hi, beta := 0.0, 1.0, guess
	for range 50 {
		g, dg := f(beta)
		if g > 0 {
			lo = beta
		} else {
			hi = beta
		}
		next := beta - g/dg
		if !(lo < next && next < hi) {
			next = (lo + hi) / 2
		}
		if math.Abs(next-beta) < 1e-9 {
			return next
		}
		beta = next
	}
	return beta
}

// aim looks for the place where a property has the given value and writes the unknowns of the split there to u. It
// returns the place.
func (c *chord) aim(of Property, value float64, u split) float64 {
	lo, hi := 0.0, 1.0
	flo, fhi := c.look(lo, of)-value, c.look(hi, of)-value
	r := 0.5
	switch {
	case (flo < 0) != (fhi < 0):
		for i := range 25 {
			r = lo - flo*(hi-lo)/(fhi-flo)
			if i%3 == 2 || !(lo < r && r < hi) {
				r = (lo + hi) / 2
			}
			f := c.look(r, of) - value
			if (f < 0) == (flo < 0) {
				lo, flo = r, f
			} else {
				hi, fhi = r, f
			}
			if hi-lo < 1e-6 || math.Abs(f) < 1e-5*math.Abs(fhi-flo) {
				break
			}
		}
	case math.Abs(flo) < math.Abs(fhi):
		r = 0
	default:
		r = 1
	}
	c.look(r, of)
	c.write(r, u)
	return r
}

// write writes the unknowns of the split that was looked at last, at place r.
func (c *chord) write(r float64, u split) {
	n := len(c.m.z)
	beta := min(max(c.beta, 1e-9), 1-1e-9)
	if c.beta <= 0 || c.beta >= 1 { // rounding of the interpolation; the place is a better guess
		beta = min(max(r, 1e-6), 1-1e-6)
	}
	ratio := math.Log(beta / (1 - beta))
	for i := range n {
		u[i] = c.at.lnK[i] + ratio
	}
	u[n], u[n+1], u[n+2] = -math.Log(c.at.vL), -math.Log(c.at.vV), math.Log(c.at.T)
}
