package blend

import (
	"fmt"
	"math"
	"slices"

	"dewmark/props/helmholtz"
)

// whole is the blend at its overall composition, written as one equation of state: with the composition fixed, the
// multi-fluid model is a sum of terms in one tau and one delta, whose common powers and exponentials are computed once.
// A blend of many components needs more than one equation to hold its terms; their residual parts add up.
type whole struct {
	parts  []*helmholtz.Equation // the first holds the ideal part
	R, M   float64               // J/(mol K), kg/mol
	T, Rho float64               // reducing point, K and mol/m3
}

// newWhole merges the terms of m at mole fractions z.
func newWhole(m *model, z []float64) (*whole, error) {
	red := newReduction(len(z))
	red.set(m, z)
	w := &whole{R: mean(z, m.R), M: mean(z, m.M), T: red.T, Rho: 1 / red.V}

	ideal := helmholtz.Ideal{}
	var portions []helmholtz.Residual
	for i, r := range m.records {
		c := z[i] * m.R[i] / w.R
		addIdeal(&ideal, &r.Ideal, c, r.Reducing.Temperature/w.T)
		ideal.Constant += c * (math.Log(z[i]) + math.Log(w.Rho/r.Reducing.Density))
		portions = append(portions, scaled(&r.Residual, z[i]))
	}
	for i := range m.departures {
		var c float64
		for _, u := range m.departures[i].uses {
			c += u.factor * z[u.i] * z[u.j]
		}
		portions = append(portions, scaled(&m.departures[i].terms, c))
	}

	// Merge as many portions into an equation as its tables hold.
	for len(portions) > 0 {
		c := helmholtz.Coefficients{GasConstant: w.R, ReducingTemperature: w.T, ReducingDensity: w.Rho, Ideal: ideal}
		var part *helmholtz.Equation
		taken := 0
		var failure error
		for _, p := range portions {
			next := c
			next.Residual = joined(&c.Residual, &p)
			eq, err := helmholtz.New(next)
			if err != nil {
				failure = err
				break
			}
			part, c = eq, next
			taken++
		}
		if taken == 0 {
			return nil, fmt.Errorf("blend: %w", failure)
		}
		w.parts = append(w.parts, part)
		portions = portions[taken:]
		ideal = helmholtz.Ideal{}
	}
	return w, nil
}

// addIdeal adds c times the ideal part p of a component to sum; r is the ratio of the component's tau to the mixture's.
func addIdeal(sum, p *helmholtz.Ideal, c, r float64) {
	lnR := math.Log(r)
	sum.Constant += c * (p.Constant + p.LnTau*lnR)
	sum.Tau += c * r * (p.Tau + p.TauLnTau*lnR)
	sum.LnTau += c * p.LnTau
	sum.TauLnTau += c * r * p.TauLnTau
	for _, t := range p.TauPowers {
		sum.TauPowers = append(sum.TauPowers, [2]float64{c * t[0] * math.Pow(r, t[1]), t[1]})
	}
	for _, t := range p.PlanckEinstein {
		sum.PlanckEinstein = append(sum.PlanckEinstein, [2]float64{c * t[0], t[1] * r})
	}
}

// scaled returns the terms of r with every first number, the coefficient n, multiplied by c.
func scaled(r *helmholtz.Residual, c float64) helmholtz.Residual {
	rows := func(in [][]float64) [][]float64 {
		out := make([][]float64, len(in))
		for i, row := range in {
			out[i] = append([]float64{c * row[0]}, row[1:]...)
		}
		return out
	}
	return helmholtz.Residual{
		Polynomial: rows(r.Polynomial), Exponential: rows(r.Exponential), DoubleExponential: rows(r.DoubleExponential),
		Gaussian: rows(r.Gaussian), Associating: rows(r.Associating), NonAnalytic: rows(r.NonAnalytic),
	}
}

// joined returns the terms of a and b together.
func joined(a, b *helmholtz.Residual) helmholtz.Residual {
	rows := func(p, q [][]float64) [][]float64 { return append(slices.Clip(p), q...) }
	return helmholtz.Residual{
		Polynomial: rows(a.Polynomial, b.Polynomial), Exponential: rows(a.Exponential, b.Exponential),
		DoubleExponential: rows(a.DoubleExponential, b.DoubleExponential), Gaussian: rows(a.Gaussian, b.Gaussian),
		Associating: rows(a.Associating, b.Associating), NonAnalytic: rows(a.NonAnalytic, b.NonAnalytic),
	}
}

// isotherm is a whole blend at one temperature.
type isotherm struct {
	w     *whole
	T     float64
	parts []helmholtz.Isotherm
}

func newIsotherm(w *whole) *isotherm {
	return &isotherm{w: w, parts: make([]helmholtz.Isotherm, len(w.parts))}
}

func (s *isotherm) set(T float64) {
	s.T = T
	for i, e := range s.w.parts {
		s.parts[i].Set(e, T)
	}
}

// residual returns the residual part at density rho in mol/m3.
func (s *isotherm) residual(rho float64) helmholtz.Alpha {
	sum := s.parts[0].Residual(rho)
	for i := range s.parts[1:] {
		a := s.parts[i+1].Residual(rho)
		addScaled(&sum, &a, 1)
	}
	return sum
}

// pressure returns the pressure in Pa and its derivative in density at density rho in mol/m3.
func (s *isotherm) pressure(rho float64) (p, dpdrho float64) {
	a := s.residual(rho)
	rt := s.w.R * s.T
	return rho * rt * (1 + a.D), rt * (1 + 2*a.D + a.DD)
}

// point is a single-phase state per amount of substance, counted from the zero points of the component files.
type point struct {
	T, p, rho    float64 // K, Pa, mol/m3
	h, s         float64 // J/mol, J/(mol K)
	cp, cv, w    float64 // J/(mol K), J/(mol K), m/s
	dpdrho, dpdT float64 // Pa m3/mol, Pa/K
}

func (q *point) u() float64 { return q.h - q.p/q.rho }

// at returns the state on the isotherm at density rho in mol/m3.
func (s *isotherm) at(rho float64) point {
	a, id := s.residual(rho), s.parts[0].Ideal
	R, T := s.w.R, s.T
	q := point{T: T, rho: rho, p: rho * R * T * (1 + a.D)}
	q.h = R * T * (1 + id.T + a.T + a.D)
	q.s = R * (id.T + a.T - id.A - a.A - math.Log(rho/s.w.Rho))
	q.cv = -R * (id.TT + a.TT)
	q.dpdrho = R * T * (1 + 2*a.D + a.DD)
	q.dpdT = rho * R * (1 + a.D - a.DT)
	q.cp = q.cv + T*q.dpdT*q.dpdT/(rho*rho*q.dpdrho)
	q.w = math.Sqrt(q.cp / q.cv * q.dpdrho / s.w.M)
	return q
}
