package props

import (
	"math"

	"dewmark/props/helmholtz"
)

// A branch is the stretch of an isotherm on which pressure rises with density: all of it above the critical
// temperature, the part outside the dome below. Staying on it keeps solvers away from the false roots that many
// equations have inside the dome.
type branch struct {
	lo, hi float64 // kg/m3
	start  float64 // first guess for the density
}

// saturationTie is the relative distance from the vapour pressure within which temperature and pressure do not tell
// liquid from vapour: the error of the saturation curve with a margin.
const saturationTie = 1e-10

// TemperaturePressure returns the state at T in K and p in Pa. On the saturation line itself, where p equals the
// vapour pressure to 1e-10, it returns an [*AmbiguousError] with saturated liquid and vapour.
func (r *Pure) TemperaturePressure(T, p float64) (s State, err error) {
	if err := r.checkTemperature(T); err != nil {
		return s, err
	}
	if err := r.checkPressure(p); err != nil {
		return s, err
	}
	var iso helmholtz.Isotherm
	iso.Set(r.eq, T)
	if T < r.curve.TCritical {
		ps, liquid, vapour := r.curve.At(T)
		if math.Abs(p-ps) <= saturationTie*ps {
			d := r.domeOf(T, p, liquid*r.M, vapour*r.M)
			return s, &AmbiguousError{
				Refrigerant: r.rec.ID, Pair: [2]Property{Temperature, Pressure},
				Solutions: []State{r.domeState(&d, 0), r.domeState(&d, 1)},
			}
		}
		err = r.solveDensity(&iso, p, r.subcritical(&iso, p, ps, liquid*r.M, vapour*r.M), &s)
		return s, err
	}
	err = r.solveDensity(&iso, p, r.supercritical(T, p), &s)
	return s, err
}

// subcritical returns the branch of an isotherm below the critical temperature that holds pressure p.
func (r *Pure) subcritical(iso *helmholtz.Isotherm, p, ps, liquid, vapour float64) branch {
	if p < ps {
		// The compressibility factor falls almost linearly with pressure from 1 to that of saturated vapour.
		z := ps / (vapour * r.Rs * iso.T)
		return branch{lo: 0, hi: vapour, start: p / (r.Rs * iso.T * (1 - (1-z)*p/ps))}
	}
	// Murnaghan: the bulk modulus rises linearly with pressure, in liquids by about 8.
	const slope = 8
	d, dd := iso.Density(liquid * r.perM)
	bulk := liquid * r.Rs * iso.T * math.Max(1+2*d+dd, 1e-3)
	return branch{lo: liquid, hi: r.densest(), start: liquid * math.Sqrt(math.Sqrt(math.Sqrt(1+slope*(p-ps)/bulk)))} // the power 1/slope
}

// supercritical returns the branch of an isotherm above the critical temperature, started from the cubic equation of
// Peng and Robinson, Ind. Eng. Chem. Fundam. 15 (1976) 59.
func (r *Pure) supercritical(T, p float64) branch {
	tc, pc, w := r.curve.TCritical, r.curve.PCritical, r.rec.Acentric
	k := 0.37464 + w*(1.54226-0.26992*w)
	alpha := 1 + k*(1-math.Sqrt(T/tc))
	a := 0.45724 * alpha * alpha * (p / pc) * (tc / T) * (tc / T)
	b := 0.07780 * (p / pc) * (tc / T)
	// Z^3 + c2 Z^2 + c1 Z + c0 has one real root here, or three of which the largest is the gas.
	c2, c1, c0 := b-1, a-b*(3*b+2), -b*(a-b*(1+b))
	z := math.Max(1, 2*b) // above the root, where the cubic is convex
	for range 30 {
		f := ((z+c2)*z+c1)*z + c0
		df := (3*z+2*c2)*z + c1
		step := f / df
		if !(df > 0) || math.Abs(step) < 1e-4*z {
			break
		}
		z = math.Max(z-step, b*1.0001)
	}
	return branch{lo: 0, hi: r.densest(), start: math.Min(p/(z*r.Rs*T), 0.98*r.densest())}
}

// densest is the highest density that solvers try: a little beyond the limit, so that a state beyond it is found and
// refused by name.
func (r *Pure) densest() float64 { return 1.15 * r.reach().DensityMax }

// solveDensity sets s to the state at pressure p on a branch of an isotherm.
func (r *Pure) solveDensity(iso *helmholtz.Isotherm, p float64, b branch, s *State) error {
	f, err := r.density(iso, p, b)
	if err != nil {
		return err
	}
	if err := r.checkFluid(iso.T, p, f.rho); err != nil {
		return err
	}
	r.complete(&f, p, s)
	return nil
}

// density solves the density at pressure p by Newton's method, with bisection wherever a step leaves the branch.
func (r *Pure) density(iso *helmholtz.Isotherm, p float64, b branch) (fluidState, error) {
	const limit = 100 // Newton takes 3 to 6 steps; bisection alone would need 60
	const rounding = 1e-15
	RT := r.Rs * iso.T
	lo, hi, rho := b.lo, b.hi, b.start
	if !(lo <= rho && rho < hi) {
		rho = lo + (hi-lo)/2
	}
	last := math.Inf(1)
	for range limit {
		d, dd := iso.Density(rho / r.M)
		miss := rho*RT*(1+d) - p
		slope := RT * (1 + 2*d + dd)
		if miss > 0 {
			hi = math.Min(hi, rho)
		} else {
			lo = math.Max(lo, rho)
		}
		step := -miss / slope
		next := rho + step
		if !(slope > 0) || next <= lo || next >= hi {
			if slope > 0 && math.Abs(step) <= 1e-12*rho {
				return r.evaluate(iso, rho), nil // the noise of a cold liquid's pressure knows no bracket
			}
			next = lo + (hi-lo)/2
			step = next - rho
		}
		size := math.Abs(step)
		if size <= rounding*rho || size <= 1e-11*rho && size >= last/2 {
			if rho >= b.hi*(1-1e-9) && miss < -1e-9*p {
				break // even the highest density does not reach the pressure
			}
			return r.evaluate(iso, rho), nil
		}
		if size < 1e-9*rho && last < 1e-4*rho {
			return r.evaluate(iso, next), nil // quadratic by now: this step is exact to rounding
		}
		last = size
		rho = next
	}
	return fluidState{}, &RangeError{Refrigerant: r.rec.ID, Property: Pressure, Value: p, Min: 0, Max: r.evaluate(iso, b.hi).p, Limit: LimitDensity}
}
