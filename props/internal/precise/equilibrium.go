package precise

import (
	"fmt"
	"math/big"
)

// Equilibrium is a vapour in equilibrium with its liquid.
type Equilibrium struct {
	P              *big.Float // Pa
	Liquid, Vapour *big.Float // mol/m3
}

// side is one phase: its pressure over R T, its Gibbs energy over R T less what depends on temperature alone, and
// their common slope K = d(p/RT)/d rho.
type side struct{ rho, p, g, k *big.Float }

func (e *Equation) side(T, rho *big.Float) side {
	r, _ := e.Residual(T, rho)
	one := Number(1)
	return side{
		rho: rho,
		p:   mul(rho, add(one, r.D)),
		g:   add(log(rho), add(r.A, r.D)),
		k:   add(one, add(add(r.D, r.D), r.DD)),
	}
}

// Saturation solves equal pressure and equal Gibbs energy at T in K by Newton's method to 36 digits, from densities in
// mol/m3 that are nearly right.
func (e *Equation) Saturation(T, liquid, vapour float64) (Equilibrium, error) {
	t := Number(T)
	l, v := e.side(t, Number(liquid)), e.side(t, Number(vapour))
	for range 12 {
		// dp = K d rho and dg = K/rho d rho on both sides.
		f, g := sub(l.p, v.p), sub(l.g, v.g)
		x := quo(sub(quo(f, v.rho), g), sub(quo(Number(1), l.rho), quo(Number(1), v.rho)))
		dl, dv := quo(x, l.k), quo(add(x, f), v.k)
		l, v = e.side(t, add(l.rho, dl)), e.side(t, add(v.rho, dv))
		if l.rho.Cmp(v.rho) <= 0 || v.rho.Sign() <= 0 {
			break
		}
		if small(quo(dl, l.rho), 36) && small(quo(dv, v.rho), 36) {
			return Equilibrium{P: mul(v.p, mul(Number(e.c.GasConstant), t)), Liquid: l.rho, Vapour: v.rho}, nil
		}
	}
	return Equilibrium{}, fmt.Errorf("precise: no equilibrium at %g K from %g and %g mol/m3", T, liquid, vapour)
}

// Critical solves for the temperature in K and density in mol/m3 at which the first two density derivatives of pressure
// vanish, by Newton's method from a point nearby. Higher derivatives are differences over so small a step that thirty
// digits remain.
func (e *Equation) Critical(T, rho float64) (Tc, rhoc *big.Float, err error) {
	t, r := Number(T), Number(rho)
	step := Number(1e-12)
	half := Number(0.5)
	for range 30 {
		h, w := mul(t, step), mul(r, step)
		slope := func(i, j int) *big.Float { // dp/d rho over R T
			return e.side(add(t, mul(Number(float64(i)), h)), add(r, mul(Number(float64(j)), w))).k
		}
		centred := func(up, down, width *big.Float) *big.Float { return mul(half, quo(sub(up, down), width)) }
		f, up, down := slope(0, 0), slope(0, 1), slope(0, -1)
		g := centred(up, down, w)
		gr := quo(sub(add(up, down), add(f, f)), mul(w, w))
		ft := centred(slope(1, 0), slope(-1, 0), h)
		gt := centred(centred(slope(1, 1), slope(1, -1), w), centred(slope(-1, 1), slope(-1, -1), w), h)
		det := sub(mul(ft, gr), mul(g, gt)) // (df/d rho) is g
		dt := quo(sub(mul(g, g), mul(f, gr)), det)
		dr := quo(sub(mul(f, gt), mul(g, ft)), det)
		t, r = add(t, dt), add(r, dr)
		if small(quo(dt, t), 24) && small(quo(dr, r), 16) {
			return t, r, nil
		}
	}
	return nil, nil, fmt.Errorf("precise: no critical point near %g K, %g mol/m3", T, rho)
}
