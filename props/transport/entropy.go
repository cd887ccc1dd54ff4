package transport

import (
	"errors"
	"fmt"
	"math"
)

// Residual-entropy scaling: the residual viscosity or conductivity, made dimensionless with the number density and the
// thermal velocity, is nearly a function of the residual entropy s+ = -s_res/R alone.

// entropySet is a published set of exponents with the coefficients of its largest group, for fluids without a fit of their
// own.
type entropySet struct {
	exponents []float64
	group     []float64
}

var entropySets = map[string]*entropySet{
	// Martinek, Bell, Herzog, Richter, Yang, J. Chem. Eng. Data 70 (2025) 727: viscosity.
	"martinek_2025": {[]float64{1.8, 2.4, 2.8}, []float64{0.392983, -0.167528, 0.037984}},
	// Yang, Xiao, Thol, Richter, Bell, Int. J. Thermophys. 43 (2022) 183: viscosity.
	"yang_2022": {[]float64{1, 1.5, 2, 2.5}, []float64{-0.448046, 1.012681, -0.381869, 0.054674}},
	// Yang, Kim, May, Bell, Ind. Eng. Chem. Res. 60 (2021) 13052: thermal conductivity.
	"yang_2021": {[]float64{1, 1.5, 2, 2.5}, []float64{3.636446, -5.328258, 4.543762, -0.643352}},
}

// euckenEntropy is the factor of the internal degrees of freedom that the conductivity set was fitted with.
const euckenEntropy = 1.32

// thinnest is the mass density in kg/m3 below which the residual parts, which vanish like the density, are left out.
const thinnest = 1e-6

// entropyFit is the dimensionless residual part Q(s+) = sum n (s+/xi)^g of one fluid.
type entropyFit struct {
	n, exponents []float64
	xi           float64
	halves       bool // exponents 1, 1.5, 2, 2.5

	// The s+ beyond which the fit is continued in proportion to s+, infinite for most, and Q there.
	end, last float64
}

// Some fits of viscosity bend down in a cold liquid, until it gets thinner with falling temperature. All the others grow
// faster than s+ there. From the first s+ above bendFrom at which a fit grows slower, it is continued in proportion. The rule
// is this project's own; it concerns R12, R142b, R143a, R1224yd(Z) and R1336mzz(Z) below 0.6 of the critical temperature.
const (
	bendFrom = 4.0 // thinner states are within every fit
	bendTo   = 20.0
)

// bound finds the end of the fit.
func (f *entropyFit) bound() {
	const step = 0.01
	before := f.sum(bendFrom) / bendFrom
	for s := bendFrom + step; s < bendTo; s += step {
		ratio := f.sum(s) / s
		if ratio < before && before > 0 {
			f.end, f.last = s-step, before*(s-step)
			return
		}
		before = ratio
	}
}

// q returns Q.
func (f *entropyFit) q(splus float64) float64 {
	if splus > f.end {
		return f.last * splus / f.end
	}
	return f.sum(splus)
}

func (f *entropyFit) sum(splus float64) float64 {
	x := splus / f.xi
	if f.halves {
		r := math.Sqrt(x)
		return x * (f.n[0] + r*(f.n[1]+r*(f.n[2]+r*f.n[3])))
	}
	lnX := math.Log(x)
	var sum float64
	for i, g := range f.exponents {
		sum += f.n[i] * math.Exp(g*lnX)
	}
	return sum
}

// residualEntropy returns s+.
func (p *point) residualEntropy() float64 { return p.Residual.A - p.Residual.T }

// entropyViscosity returns the residual viscosity in Pa s for a value of Q and a molar mass in kg/mol.
func entropyViscosity(p *point, q, splus, molarMass float64) float64 {
	return math.Expm1(q) * packed(p.Rho, splus) * math.Sqrt(molarMass/avogadro*boltzmann*p.T)
}

// entropyConductivity returns the residual thermal conductivity in W/(m K).
func entropyConductivity(p *point, q, splus, molarMass float64) float64 {
	return q * packed(p.Rho, splus) * boltzmann * math.Sqrt(boltzmann*p.T/(molarMass/avogadro))
}

// packed returns (number density/s+)^(2/3) in 1/m2.
func packed(rho, splus float64) float64 {
	c := math.Cbrt(rho * avogadro / splus)
	return c * c
}

// entropyModel is what viscosity and conductivity by entropy scaling share.
type entropyModel struct {
	fit       entropyFit
	sphere    sphere
	molarMass float64
}

// scaling returns Q and s+, or false where there is nothing to add to the dilute gas.
func (m *entropyModel) scaling(p *point) (q, splus float64, ok bool) {
	splus = p.residualEntropy()
	if p.mass < thinnest || !(splus > 0) {
		return 0, 0, false
	}
	return m.fit.q(splus), splus, true
}

// entropyScaledViscosity is the viscosity by entropy scaling.
type entropyScaledViscosity struct {
	entropyModel
	inMixtures bool
}

func (m *entropyScaledViscosity) dilute(T float64) float64 { return m.sphere.viscosity(T, m.molarMass) }

func (m *entropyScaledViscosity) viscosity(p point) (float64, bool) {
	eta := m.dilute(p.T)
	if q, splus, ok := m.scaling(&p); ok {
		eta += entropyViscosity(&p, q, splus, m.molarMass)
	}
	return eta, true
}

// entropyScaledConductivity is the thermal conductivity by entropy scaling.
type entropyScaledConductivity struct {
	entropyModel
	inMixtures bool
}

func (m *entropyScaledConductivity) dilute(T, cp0 float64) float64 {
	return eucken(m.sphere.viscosity(T, m.molarMass), m.molarMass, cp0, euckenEntropy)
}

func (m *entropyScaledConductivity) background(p point) (float64, bool) {
	lambda := m.dilute(p.T, p.cp0)
	if q, splus, ok := m.scaling(&p); ok {
		lambda += entropyConductivity(&p, q, splus, m.molarMass)
	}
	return lambda, true
}

// entropyForm is a record of kind entropy_scaling. It has either coefficients of its own or a scaling of s+ for those of
// the group.
type entropyForm struct {
	head
	sphere
	Set        string           `json:"set"`
	N          []float64        `json:"n"`
	Xi         *float64         `json:"xi"`
	InMixtures bool             `json:"use_in_mixtures"`
	Critical   *enhancementForm `json:"critical"`
}

func (f *entropyForm) compile(fluid *Fluid) (entropyModel, error) {
	set := entropySets[f.Set]
	if set == nil {
		return entropyModel{}, fmt.Errorf("unknown set %q", f.Set)
	}
	if err := f.check(); err != nil {
		return entropyModel{}, err
	}
	fit := entropyFit{n: f.N, exponents: set.exponents, xi: 1, halves: len(set.exponents) == 4}
	switch {
	case (len(f.N) == 0) == (f.Xi == nil):
		return entropyModel{}, errors.New("want either n or xi")
	case f.Xi != nil:
		fit.n, fit.xi = set.group, *f.Xi
		if !(fit.xi > 0) {
			return entropyModel{}, errors.New("xi must be positive")
		}
	case len(f.N) != len(set.exponents):
		return entropyModel{}, fmt.Errorf("n has %d numbers, want %d", len(f.N), len(set.exponents))
	}
	fit.end = math.Inf(1)
	return entropyModel{fit, f.sphere, fluid.MolarMass}, nil
}

func (f *entropyForm) viscosity(fluid *Fluid) (viscosityModel, error) {
	m, err := f.compile(fluid)
	if err != nil {
		return nil, err
	}
	m.fit.bound()
	return &entropyScaledViscosity{m, f.InMixtures}, nil
}

func (f *entropyForm) conductivity(fluid *Fluid) (conductivityModel, error) {
	m, err := f.compile(fluid)
	return &entropyScaledConductivity{m, f.InMixtures}, err
}
