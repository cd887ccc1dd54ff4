package transport

import (
	"errors"
	"fmt"
	"math"

	"dewmark/props/helmholtz"
)

// Extended corresponding states: a fluid at (T, c) behaves like a reference fluid at the conformal state (T0, c0) that has
// the same reduced residual Helmholtz energy and the same compressibility factor. The form is that of Klein, McLinden,
// Laesecke, Int. J. Refrig. 20 (1997) 208; McLinden, Klein, Perkins, Int. J. Refrig. 23 (2000) 43; Huber, Laesecke,
// Perkins, Ind. Eng. Chem. Res. 42 (2003) 3163.

// The thin gas: the two conditions become dependent there, so simple corresponding states by the critical constants
// replace them below thinGas of the critical density and fade out towards denseEnough. The rule is this project's own; it
// changes the viscosity of a gas by less than 2 %.
const (
	thinGas     = 0.02
	denseEnough = 0.10
)

// A conformal state must lie within these factors of the one by the critical constants; a solution farther off is another
// branch. Its weight fades over the last part before the limits, so that nothing jumps where a solution drifts out.
const (
	conformalTMin, conformalTMax     = 0.75, 1.35
	conformalRhoMin, conformalRhoMax = 0.5, 2.5
	conformalTFade, conformalRhoFade = 0.03, 0.05 // of the limits
)

const (
	conformalSteps     = 25   // Newton steps; 4 to 7 are usual
	conformalTolerance = 1e-9 // in ln T0 and ln c0: far below the uncertainty of the method, reached quadratically
)

// conformal is the state of the reference fluid that stands for a state of the fluid, and that by the critical constants
// with its weight. Density is in mol/m3.
type conformal struct {
	fluid    *Fluid // the reference fluid, nil before a state was sought
	T0, rho0 float64
	T1, rho1 float64
	simple   float64 // weight of the state by the critical constants, 0 to 1
}

// conform finds the conformal state in fluid ref of state p of fluid f.
func conform(p *point, f, reference *Fluid) conformal {
	own, ref := f.Critical, reference.Critical
	s := conformal{fluid: reference, T1: p.T * ref.T / own.T, rho1: p.Rho * ref.Rho / own.Rho}
	s.T0, s.rho0, s.simple = s.T1, s.rho1, 1
	d := p.Rho / own.Rho
	if d <= thinGas {
		return s
	}
	if T0, rho0, ok := solveConformal(p, reference, s.T1, s.rho1); ok {
		within := min(inside(T0/s.T1, conformalTMin, conformalTMax, conformalTFade),
			inside(rho0/s.rho1, conformalRhoMin, conformalRhoMax, conformalRhoFade))
		if within > 0 {
			s.T0, s.rho0 = T0, rho0
			s.simple = 1 - within*min(1, (d-thinGas)/(denseEnough-thinGas))
		}
	}
	return s
}

// beyond reports whether the conformal state is outside the range of the reference fluid's equation of state.
func (s *conformal) beyond() bool {
	return s.T0 < s.fluid.TemperatureMin || s.T0 > s.fluid.TemperatureMax || s.rho0 > s.fluid.DensityMax
}

// inside returns 1 well between two limits, 0 at and beyond them, and a straight line over the fraction fade in between.
func inside(x, low, high, fade float64) float64 {
	return max(0, min(1, (x/low-1)/fade, (1-x/high)/fade))
}

// solveConformal finds the conformal state by Newton's method in ln T0 and ln c0, started at (T1, c1).
func solveConformal(p *point, reference *Fluid, T1, rho1 float64) (T0, rho0 float64, ok bool) {
	var iso helmholtz.Isotherm
	u, v := 0.0, 0.0 // ln(T0/T1), ln(c0/c1)
	for range conformalSteps {
		T0, rho0 = T1*math.Exp(u), rho1*math.Exp(v)
		iso.Set(reference.Equation, T0)
		a := iso.Residual(rho0)
		f, g := a.A-p.Residual.A, a.D-p.Residual.D
		fu, fv, gu, gv := -a.T, a.D, -a.DT, a.D+a.DD
		det := fu*gv - fv*gu
		du, dv := (fv*g-gv*f)/det, (gu*f-fu*g)/det
		if !finite(du) || !finite(dv) {
			return 0, 0, false
		}
		if size := max(math.Abs(du)/0.1, math.Abs(dv)/0.3); size > 1 { // a long step leaves the branch
			du, dv = du/size, dv/size
		}
		u, v = u+du, v+dv
		if math.Abs(u) > 1 || math.Abs(v) > 2 {
			return 0, 0, false
		}
		if math.Abs(du) < conformalTolerance && math.Abs(dv) < conformalTolerance {
			return T1 * math.Exp(u), rho1 * math.Exp(v), true
		}
	}
	return 0, 0, false
}

// mix evaluates a property of the reference fluid at both states of s and blends the results.
func (s *conformal) mix(at func(T0, rho0 float64) (float64, bool)) (float64, bool) {
	switch s.simple {
	case 0:
		return at(s.T0, s.rho0)
	case 1:
		return at(s.T1, s.rho1)
	}
	exact, ok := at(s.T0, s.rho0)
	simple, ok1 := at(s.T1, s.rho1)
	return s.simple*simple + (1-s.simple)*exact, ok && ok1
}

// conformalModel is what viscosity and conductivity share.
type conformalModel struct {
	own, ref *Fluid
	sphere   sphere
	scale    float64   // F_c, of the dilute viscosity
	shape    []float64 // psi or chi: coefficients of powers of the reduced density
}

// chapmanEnskog is the factor that these models were fitted with; the constants give 0.0266958.
const chapmanEnskog = 0.026692e-6 // Pa s nm2 (g/mol K)^(-1/2)

func (m *conformalModel) diluteViscosity(T float64) float64 {
	return m.scale * chapmanEnskog * math.Sqrt(1e3*m.own.MolarMass*T) /
		(m.sphere.SigmaNM * m.sphere.SigmaNM * collisionIntegral(T/m.sphere.EpsilonOverK))
}

// scaled returns excess(T0, c0 shape) sqrt(f mass) h^(-2/3), f = T/T0, h = c0/c.
func (m *conformalModel) scaled(p *point, mass float64, excess func(T0, rho0 float64) (float64, bool)) (float64, bool) {
	if p.Rho == 0 {
		return 0, true
	}
	shape := horner(m.shape, p.Rho/m.own.Critical.Rho)
	return p.conforms.mix(func(T0, rho0 float64) (float64, bool) {
		v, ok := excess(T0, rho0*shape)
		h := math.Cbrt(p.Rho / rho0)
		return v * math.Sqrt(p.T/T0*mass) * h * h, ok
	})
}

// conformalViscosity is the viscosity by extended corresponding states.
type conformalViscosity struct {
	conformalModel
	model *viscositySum
}

func (m *conformalViscosity) dilute(T float64) float64 { return m.diluteViscosity(T) }

func (m *conformalViscosity) viscosity(p point) (float64, bool) {
	excess, ok := m.scaled(&p, m.own.MolarMass/m.ref.MolarMass, func(T0, rho0 float64) (float64, bool) {
		return m.model.excess(T0, rho0, rho0*m.ref.MolarMass, m.model.dilute(T0))
	})
	return m.diluteViscosity(p.T) + excess, ok
}

// conformalConductivity is the thermal conductivity by extended corresponding states.
type conformalConductivity struct {
	conformalModel
	internal []float64 // f_int: coefficients of powers of T
	model    *conductivitySum
}

func (m *conformalConductivity) dilute(T, cp0 float64) float64 {
	return eucken(m.diluteViscosity(T), m.own.MolarMass, cp0, horner(m.internal, T))
}

func (m *conformalConductivity) background(p point) (float64, bool) {
	excess, ok := m.scaled(&p, m.ref.MolarMass/m.own.MolarMass, func(T0, rho0 float64) (float64, bool) {
		return m.model.residual.value(T0, rho0*m.ref.MolarMass)
	})
	return m.dilute(p.T, p.cp0) + excess, ok
}

// eucken returns the thermal conductivity of a dilute gas: the translational part and internal times that of the internal
// degrees of freedom. eta0 is in Pa s, cp0 in J/(mol K).
func eucken(eta0, molarMass, cp0, internal float64) float64 {
	return eta0 / molarMass * (3.75*molarGas + internal*(cp0-2.5*molarGas))
}

// conformalForm is a record of kind corresponding_states.
type conformalForm struct {
	head
	sphere
	Reference     string           `json:"reference"`      // designation
	ReferenceRank int              `json:"reference_rank"` // which of its records
	Scale         float64          `json:"F_c"`
	Psi           []float64        `json:"psi"`
	Chi           []float64        `json:"chi"`
	Internal      []float64        `json:"f_int"`
	Critical      *enhancementForm `json:"critical"`
}

func (f *conformalForm) viscosity(fluid *Fluid, references []*Model) (viscosityModel, *Fluid, error) {
	m, r, err := f.compile(fluid, references, f.Psi)
	if err != nil {
		return nil, nil, err
	}
	for i := range r.viscosity {
		rec := &r.viscosity[i]
		if sum, ok := rec.model.(*viscositySum); ok && rec.Rank == f.ReferenceRank {
			return &conformalViscosity{m, sum}, &r.fluid, nil
		}
	}
	return nil, nil, fmt.Errorf("%s has no viscosity_sum of rank %d", f.Reference, f.ReferenceRank)
}

func (f *conformalForm) conductivity(fluid *Fluid, references []*Model) (conductivityModel, *Fluid, error) {
	m, r, err := f.compile(fluid, references, f.Chi)
	if err != nil {
		return nil, nil, err
	}
	if len(f.Internal) == 0 {
		return nil, nil, errors.New("f_int is missing")
	}
	for i := range r.conductivity {
		rec := &r.conductivity[i]
		if sum, ok := rec.model.(*conductivitySum); ok && rec.Rank == f.ReferenceRank {
			return &conformalConductivity{m, f.Internal, sum}, &r.fluid, nil
		}
	}
	return nil, nil, fmt.Errorf("%s has no conductivity_sum of rank %d", f.Reference, f.ReferenceRank)
}

func (f *conformalForm) compile(fluid *Fluid, references []*Model, shape []float64) (conformalModel, *Model, error) {
	if err := f.check(); err != nil {
		return conformalModel{}, nil, err
	}
	if !(f.Scale > 0) || len(shape) == 0 {
		return conformalModel{}, nil, errors.New("scale F_c and shape psi or chi must be given")
	}
	for _, r := range references {
		if r.fluid.Designation == f.Reference {
			return conformalModel{fluid, &r.fluid, f.sphere, f.Scale, shape}, r, nil
		}
	}
	return conformalModel{}, nil, fmt.Errorf("reference fluid %s is not among those given", f.Reference)
}
