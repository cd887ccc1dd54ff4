package props

import (
	"math"

	"dewmark/props/helmholtz"
	"dewmark/props/internal/elementary"
)

// fluidState is the result of one evaluation of the equation at temperature and density, before anything is decided
// about phases: pressure, the caloric properties and the derivatives that solvers need.
type fluidState struct {
	T, rho, p, h, s, u, cv float64
	pRho, pT               float64 // (dp/d rho) at constant T, (dp/dT) at constant rho
}

// evaluate returns the state of a single phase at density rho in kg/m3 on an isotherm.
func (r *Pure) evaluate(iso *helmholtz.Isotherm, rho float64) (f fluidState) {
	res := iso.Residual(rho * r.perM)
	r.derive(iso.T, rho, &iso.Ideal, &res, &f)
	return f
}

// evaluateAt sets f to a single phase at T in K and rho in kg/m3.
func (r *Pure) evaluateAt(T, rho float64, f *fluidState) {
	var id, res helmholtz.Alpha
	r.eq.At(T, rho*r.perM, &id, &res)
	r.derive(T, rho, &id, &res, f)
}

// derive sets f from both parts of the Helmholtz energy, the ideal part without its ln(delta).
func (r *Pure) derive(T, rho float64, id, res *helmholtz.Alpha, f *fluidState) {
	RT := r.Rs * T
	e := id.T + res.T
	f.T, f.rho = T, rho
	f.p = rho * RT * (1 + res.D)
	f.s = r.Rs*(e-id.A-res.A-elementary.Log(rho*r.perRho)) + r.s0
	f.u = RT*e + r.h0
	f.h = f.u + RT*(1+res.D)
	f.cv = -r.Rs * (id.TT + res.TT)
	f.pRho = RT * (1 + 2*res.D + res.DD)
	f.pT = rho * r.Rs * (1 + res.D - res.DT)
}

// value returns the caloric property y of f and its derivatives: in temperature at constant density and in density at
// constant temperature.
func (f *fluidState) value(y Property) (v, dT, dRho float64) {
	q := f.pT / f.rho
	switch y {
	case Enthalpy:
		return f.h, f.cv + q, (f.pRho - f.T*q) / f.rho
	case Entropy:
		return f.s, f.cv / f.T, -q / f.rho
	default: // internal energy
		return f.u, f.cv, (f.p/f.rho - f.T*q) / f.rho
	}
}

// state returns a single-phase state. Pressure p is the one that is known exactly, from which the equation's own
// differs by rounding that matters in a cold liquid.
func (r *Pure) state(f fluidState, p float64) (s State) {
	r.complete(&f, p, &s)
	return s
}

// complete is state in place: s must be empty.
func (r *Pure) complete(f *fluidState, p float64, s *State) {
	v := 1 / f.rho
	q := f.T * f.pT * f.pT * v * v
	s.Phase = r.phase(f.T, p, f.rho)
	s.T, s.P, s.Rho, s.S, s.U = f.T, p, f.rho, f.s, f.u
	s.H = f.u + p*v
	s.Quality = math.NaN()
	s.Cv = f.cv
	s.Cp = f.cv + q/f.pRho
	s.W = math.Sqrt(f.pRho + q/f.cv)
	s.DPDRho, s.DPDT = f.pRho, f.pT
	s.Z = p * v / (r.Rs * f.T)
}

func (r *Pure) phase(T, p, rho float64) Phase {
	c := r.curve
	switch {
	case T <= c.TCritical && rho > c.RhoCritical*r.M:
		return Liquid
	case T > c.TCritical && p > c.PCritical:
		return Supercritical
	default:
		return Vapour
	}
}

// dome is the pair of saturated phases at one temperature.
type dome struct {
	T, p           float64
	liquid, vapour fluidState
}

// domeAt returns the saturated phases at temperature T, which must lie on the curve.
func (r *Pure) domeAt(T float64) dome {
	p, liquid, vapour := r.curve.At(T)
	return r.domeOf(T, p, liquid*r.M, vapour*r.M)
}

// domeAtPressure returns the saturated phases at pressure p, which must lie on the curve.
func (r *Pure) domeAtPressure(p float64) dome {
	T := r.curve.Temperature(p)
	_, liquid, vapour := r.curve.At(T)
	return r.domeOf(T, p, liquid*r.M, vapour*r.M)
}

func (r *Pure) domeOf(T, p, liquid, vapour float64) dome {
	d := dome{T: T, p: p}
	r.evaluateAt(T, liquid, &d.liquid)
	r.evaluateAt(T, vapour, &d.vapour)
	d.settle()
	return d
}

// domeOn is domeOf on an isotherm, for searches that look at single phases on it: any other evaluation differs by rounding, and
// a value between the two would be on neither side of the dome's edge.
func (r *Pure) domeOn(iso *helmholtz.Isotherm, p, liquid, vapour float64) dome {
	d := dome{T: iso.T, p: p, liquid: r.evaluate(iso, liquid), vapour: r.evaluate(iso, vapour)}
	d.settle()
	return d
}

// settle makes the enthalpies of both phases those of the curve's pressure.
func (d *dome) settle() {
	// The equation's pressure of a cold liquid is rounding noise; the curve's is not.
	d.liquid.h = d.liquid.u + d.p/d.liquid.rho
	d.vapour.h = d.vapour.u + d.p/d.vapour.rho
}

// quality returns the vapour fraction at which the dome has property y, density included.
func (d *dome) quality(y Property, v float64) float64 {
	if y == Density {
		return (1/v - 1/d.liquid.rho) / (1/d.vapour.rho - 1/d.liquid.rho)
	}
	a, _, _ := d.liquid.value(y)
	b, _, _ := d.vapour.value(y)
	return (v - a) / (b - a)
}

// value returns property y at quality x, density included.
func (d *dome) value(y Property, x float64) float64 {
	if y == Density {
		return 1 / (1/d.liquid.rho + x*(1/d.vapour.rho-1/d.liquid.rho))
	}
	a, _, _ := d.liquid.value(y)
	b, _, _ := d.vapour.value(y)
	return a + x*(b-a)
}

// domeState returns the state at quality x. The ends are the saturated phases themselves, with all their properties.
func (r *Pure) domeState(d *dome, x float64) State {
	switch x {
	case 0:
		s := r.state(d.liquid, d.p)
		s.Phase, s.Quality = Liquid, 0
		return s
	case 1:
		s := r.state(d.vapour, d.p)
		s.Phase, s.Quality = Vapour, 1
		return s
	}
	nan := math.NaN()
	l, v := &d.liquid, &d.vapour
	rho := d.value(Density, x)
	s := State{
		Phase: TwoPhase, Quality: x, T: d.T, P: d.p, Rho: rho,
		H: d.value(Enthalpy, x), S: d.value(Entropy, x),
		Cp: nan, Cv: nan, W: nan, DPDRho: nan,
		DPDT: (v.s - l.s) / (1/v.rho - 1/l.rho), // Clapeyron
		Z:    d.p / (rho * r.Rs * d.T),
	}
	s.U = s.H - s.P/s.Rho
	return s
}
