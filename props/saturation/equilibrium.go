package saturation

import (
	"fmt"
	"math"

	"dewmark/props/helmholtz"
)

// phase is one side of the equilibrium in reduced form.
type phase struct {
	delta float64
	P     float64 // p/(rho_red R T)
	G     float64 // Gibbs energy over R T, less what depends on temperature alone
	K     float64 // d P/d delta
}

func phaseAt(iso *helmholtz.Isotherm, eq *helmholtz.Equation, delta float64) phase {
	r := iso.Residual(delta * eq.RhoRed)
	return phase{delta: delta, P: delta * (1 + r.D), G: math.Log(delta) + r.A + r.D, K: 1 + 2*r.D + r.DD}
}

// equilibrium solves equal pressure and equal Gibbs energy at temperature T from a start (liquid, vapour), all
// densities over the reducing density.
func equilibrium(eq *helmholtz.Equation, T, liquid, vapour float64) (l, v phase, err error) {
	const limit = 60 // a good start needs 4 steps, the first one of a curve up to 20
	var iso helmholtz.Isotherm
	iso.Set(eq, T)
	best := math.Inf(1)
	stalled := 0
	for range limit {
		l, v = phaseAt(&iso, eq, liquid), phaseAt(&iso, eq, vapour)
		dl, dv := newton(&iso, eq, l, v)
		step := math.Max(math.Abs(dl/liquid), math.Abs(dv/vapour))
		if math.IsNaN(step) {
			break
		}
		// Newton converges quadratically until rounding; stop when the step no longer shrinks.
		if step < 1e-15 {
			return l, v, nil
		}
		if step >= best/2 && best < 1e-8 {
			if stalled++; stalled > 2 {
				return l, v, nil
			}
		}
		best = math.Min(best, step)
		// Near the critical point the two densities must not pass each other.
		scale := math.Min(1, math.Min(0.2/step, 0.4*(liquid-vapour)/(math.Abs(dl)+math.Abs(dv))))
		liquid += scale * dl
		vapour *= math.Exp(scale * dv / vapour)
	}
	return l, v, fmt.Errorf("saturation: no equilibrium at %g K, last densities %g and %g of the reducing density", T, liquid, vapour)
}

// newton returns the Newton step for both densities. It is written so that the vapour density, which may be ten orders
// of magnitude below the liquid's, keeps its own relative precision.
func newton(iso *helmholtz.Isotherm, eq *helmholtz.Equation, l, v phase) (dl, dv float64) {
	d := 1/l.delta - 1/v.delta
	if width := l.delta - v.delta; width < 0.2 && !eq.HasPeaks() {
		// The differences of P and G drown in rounding where the phases are alike. As integrals of K they keep another
		// two digits and more: p and G follow from dP = K d delta and dG = K/delta d delta.
		var fv, fl float64
		for i, x := range gauss.x {
			delta := v.delta + width*x
			r := iso.Residual(delta * eq.RhoRed)
			k := (1 + 2*r.D + r.DD) * gauss.w[i] * width * width / delta
			fv += k * x / v.delta
			fl -= k * (1 - x) / l.delta
		}
		return fv / d / l.K, fl / d / v.K
	}
	f, g := l.P-v.P, l.G-v.G
	return (f/v.delta - g) / d / l.K, (f/l.delta - g) / d / v.K
}

// gauss is the Gauss-Legendre rule of 12 points on [0, 1].
var gauss = func() (g struct{ x, w [12]float64 }) {
	const n = len(g.x)
	for i := range n {
		x := math.Cos(math.Pi * (float64(i) + 0.75) / (float64(n) + 0.5))
		var slope float64
		for range 8 {
			p0, p1 := 1.0, x
			for k := 2; k <= n; k++ {
				p0, p1 = p1, (float64(2*k-1)*x*p1-float64(k-1)*p0)/float64(k)
			}
			slope = float64(n) * (x*p1 - p0) / (x*x - 1)
			x -= p1 / slope
		}
		g.x[i], g.w[i] = (1+x)/2, 1/((1-x*x)*slope*slope)
	}
	return g
}()

// criticalPoint finds where the first two density derivatives of pressure vanish, from the critical point the authors
// state. It returns tau and delta.
func criticalPoint(eq *helmholtz.Equation, T, rho float64) (tau, delta float64, err error) {
	tau, delta = eq.TRed/T, rho/eq.RhoRed
	if eq.HasPeaks() {
		return tau, delta, nil // the non-analytic terms are built around the stated point
	}
	residuals := func(tau, delta float64) (f, g float64) {
		var iso helmholtz.Isotherm
		iso.Set(eq, eq.TRed/tau)
		rho := delta * eq.RhoRed
		r := iso.Residual(rho)
		return 1 + 2*r.D + r.DD, 2*r.D + 4*r.DD + iso.ThirdDensity(rho)
	}
	const h = 1e-5 // central differences serve the direction only; the residuals are exact
	for range 50 {
		f, g := residuals(tau, delta)
		ft1, gt1 := residuals(tau*(1+h), delta)
		ft0, gt0 := residuals(tau*(1-h), delta)
		fd1, gd1 := residuals(tau, delta*(1+h))
		fd0, gd0 := residuals(tau, delta*(1-h))
		ft, gt, fd, gd := (ft1-ft0)/(2*h), (gt1-gt0)/(2*h), (fd1-fd0)/(2*h), (gd1-gd0)/(2*h)
		det := ft*gd - fd*gt
		dt, dd := -(f*gd-fd*g)/det, -(ft*g-f*gt)/det
		m := math.Max(math.Abs(dt)/0.01, math.Abs(dd)/0.1)
		if math.IsNaN(m) {
			break
		}
		scale := math.Min(1, 1/m)
		tau, delta = tau*(1+scale*dt), delta*(1+scale*dd)
		if math.Max(math.Abs(dt), math.Abs(dd)) < 1e-12 {
			return tau, delta, nil
		}
	}
	return 0, 0, fmt.Errorf("saturation: no critical point near %g K, %g mol/m3", T, rho)
}
