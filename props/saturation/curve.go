// Package saturation represents the vapour pressure and the saturation densities of a pure fluid as piecewise Chebyshev
// expansions in temperature, made from the equation of state itself to near machine precision, after Bell and Alpert,
// Int. J. Thermophys. 42 (2021) 75, doi:10.1007/s10765-021-02824-z.
//
// Temperatures are in K, pressures in Pa, densities in mol/m3. The variable of the expansions is s = sqrt(1 - T/Tc): an
// analytic equation has densities that are smooth in s through the critical point, liquid on the side of positive s and
// vapour on the other, so that one expansion over both signs ends the curve exactly at the critical point.
package saturation

import (
	"errors"
	"math"
	"unsafe"

	"dewmark/props/helmholtz"
	"dewmark/props/internal/elementary"
)

const (
	// goal is the relative error at which a piece is not split further: a few times the rounding of the phase solve.
	goal = 2e-13
	// widest is where splitting starts.
	widest = 0.25
	// steps is the number of equilibria solved on each side of 0.9 Tc to follow the curve; closer is the ratio of s
	// from one to the next where they approach the critical point.
	steps  = 48
	closer = 0.93
)

// Curve is a saturation curve. It is immutable and safe for concurrent use.
type Curve struct {
	TMin, TCritical float64 // K
	PMin, PCritical float64 // Pa
	RhoCritical     float64 // mol/m3

	pieces   []piece // in rising s, the critical piece first
	critical criticalPiece
	inverse  []inversePiece  // in rising ln p
	bands    [bandCount]band // evenly from TMin to TCritical
	bounds   Bounds
}

// bandCount is how many stretches of temperature there are with densities known to lie outside the dome.
const bandCount = 128

// band holds densities in mol/m3 beyond which a fluid is outside the dome everywhere in a stretch of temperature.
type band struct{ thin, dense float64 }

// Bounds holds the largest relative deviations seen when a curve was made, expansions against the phase solve between
// the nodes.
type Bounds struct {
	Pressure, Liquid, Vapour float64 // up to 0.9999 of the critical temperature
	Temperature              float64 // of the inverse, over the whole range
}

// piece covers s from lo to hi.
type piece struct {
	lo, hi, scale         float64 // x = (s-lo)*scale - 1
	lnP, liquid, lnVapour series  // ln Pa, mol/m3, ln mol/m3
}

// criticalPiece covers s from -hi to hi for densities (vapour where s is negative) and 0 to hi^2 of s^2 for ln p.
type criticalPiece struct {
	hi           float64
	density, lnP series
	power        float64 // where not zero, densities are RhoCritical*(1 +- c s^power) instead
	cl, cv       float64
}

// inversePiece covers ln p from lo to hi.
type inversePiece struct {
	lo, hi, scale float64
	T             series
}

// Options says from where to where a curve is made and where to look for the critical point.
type Options struct {
	TMin        float64 // lowest temperature, K
	TCritical   float64 // critical temperature as stated, K
	RhoCritical float64 // critical density as stated, mol/m3
	Acentric    float64 // acentric factor, for the first start
}

// New makes the curve of an equation.
func New(eq *helmholtz.Equation, o Options) (*Curve, error) {
	tau, delta, err := criticalPoint(eq, o.TCritical, o.RhoCritical)
	if err != nil {
		return nil, err
	}
	c := &Curve{TMin: o.TMin, TCritical: eq.TRed / tau, RhoCritical: delta * eq.RhoRed}
	if c.TCritical <= c.TMin {
		return nil, errors.New("saturation: lowest temperature is above the critical temperature")
	}
	var iso helmholtz.Isotherm
	iso.Set(eq, c.TCritical)
	c.PCritical = phaseAt(&iso, eq, delta).P * eq.RhoRed * eq.R * c.TCritical

	b := maker{eq: eq, curve: c}
	if err := b.follow(o.Acentric); err != nil {
		return nil, err
	}
	if err := b.expand(); err != nil {
		return nil, err
	}
	c.PMin, _, _ = c.At(c.TMin)
	b.invert()
	c.fillBands()
	return c, nil
}

// fillBands fills the bands. The density of saturated vapour rises with temperature; that of liquid has its maximum inside a
// stretch for water, which the margin covers.
func (c *Curve) fillBands() {
	const margin, parts = 1e-3, 4
	width := (c.TCritical - c.TMin) / bandCount
	for i := range c.bands {
		b := &c.bands[i]
		for j := range parts + 1 {
			T := math.Min(c.TMin+width*(float64(i)+float64(j)/parts), c.TCritical)
			_, liquid, vapour := c.At(T)
			if j == 0 {
				b.thin = vapour * (1 - margin)
			}
			b.dense = math.Max(b.dense, liquid*(1+margin))
		}
	}
}

// Outside reports whether density rho in mol/m3 at temperature T in K, at most TCritical, lies outside the dome, as far as
// that can be told without an expansion. Where it reports false, the density may lie outside still.
func (c *Curve) Outside(T, rho float64) bool {
	if !(T >= c.TMin) {
		return false
	}
	b := &c.bands[min(int((T-c.TMin)/(c.TCritical-c.TMin)*bandCount), bandCount-1)]
	return rho < b.thin || rho > b.dense
}

// Encloses reports whether density rho in mol/m3 at temperature T in K, at most TCritical, lies in the dome, its edge included
// to rounding.
func (c *Curve) Encloses(T, rho float64) bool {
	const rounding = 1e-12
	if c.Outside(T, rho) {
		return false
	}
	if rho > c.RhoCritical {
		return rho <= c.Density(T, true)*(1+rounding)
	}
	return rho >= c.Density(T, false)*(1-rounding)
}

// At returns the vapour pressure in Pa and the densities of saturated liquid and vapour in mol/m3 at temperature T in K,
// which must lie between TMin and TCritical.
func (c *Curve) At(T float64) (p, liquid, vapour float64) {
	s := math.Sqrt(math.Max(0, (c.TCritical-T)/c.TCritical))
	if s < c.critical.hi {
		return c.critical.at(c, s)
	}
	k := c.find(s)
	x := (s-k.lo)*k.scale - 1
	return elementary.Exp(k.lnP.at(x)), k.liquid.at(x), elementary.Exp(k.lnVapour.at(x))
}

// Pressure returns the vapour pressure in Pa at T in K.
func (c *Curve) Pressure(T float64) float64 {
	s := math.Sqrt(math.Max(0, (c.TCritical-T)/c.TCritical))
	if s < c.critical.hi {
		k := &c.critical
		return elementary.Exp(k.lnP.at(2*s*s/(k.hi*k.hi) - 1))
	}
	k := c.find(s)
	return elementary.Exp(k.lnP.at((s-k.lo)*k.scale - 1))
}

// Density returns the density of saturated liquid or vapour alone in mol/m3 at T in K: half the price of [Curve.At].
func (c *Curve) Density(T float64, liquid bool) float64 {
	s := math.Sqrt(math.Max(0, (c.TCritical-T)/c.TCritical))
	if s < c.critical.hi {
		_, l, v := c.critical.at(c, s)
		if liquid {
			return l
		}
		return v
	}
	k := c.find(s)
	x := (s-k.lo)*k.scale - 1
	if liquid {
		return k.liquid.at(x)
	}
	return elementary.Exp(k.lnVapour.at(x))
}

// Temperature returns the boiling temperature in K at pressure p in Pa, which must lie between PMin and PCritical.
func (c *Curve) Temperature(p float64) float64 {
	y := elementary.Log(p)
	lo, hi := 0, len(c.inverse)-1
	for lo < hi {
		m := (lo + hi) / 2
		if y > c.inverse[m].hi {
			lo = m + 1
		} else {
			hi = m
		}
	}
	k := &c.inverse[lo]
	return math.Min(c.TCritical, math.Max(c.TMin, k.T.at((y-k.lo)*k.scale-1)))
}

// Bounds returns the deviations measured when the curve was made.
func (c *Curve) Bounds() Bounds { return c.bounds }

// Size returns the memory that the expansions take, in bytes.
func (c *Curve) Size() int {
	return int(unsafe.Sizeof(*c)) + len(c.pieces)*int(unsafe.Sizeof(piece{})) + len(c.inverse)*int(unsafe.Sizeof(inversePiece{}))
}

// Pieces returns how many expansions the curve and its inverse have.
func (c *Curve) Pieces() (forward, inverse int) { return len(c.pieces) + 1, len(c.inverse) }

func (c *Curve) find(s float64) *piece {
	lo, hi := 0, len(c.pieces)-1
	for lo < hi {
		m := (lo + hi) / 2
		if s > c.pieces[m].hi {
			lo = m + 1
		} else {
			hi = m
		}
	}
	return &c.pieces[lo]
}

func (k *criticalPiece) at(c *Curve, s float64) (p, liquid, vapour float64) {
	p = elementary.Exp(k.lnP.at(2*s*s/(k.hi*k.hi) - 1))
	if k.power != 0 {
		w := math.Pow(s, k.power)
		return p, c.RhoCritical * (1 + k.cl*w), c.RhoCritical * (1 - k.cv*w)
	}
	x := s / k.hi
	return p, k.density.at(x), k.density.at(-x)
}
