package transport

import (
	"errors"
	"math"

	"dewmark/props/helmholtz"
)

// The relative distances from the critical temperature at which the enhancements stop growing. Nearer, an equation of state
// says little about the compressibility, and the conductivity of the real fluid diverges. The release for water has check
// values at 4e-4.
const (
	criticalReach = 1e-3
	waterReach    = 1e-5
)

// criticalHeat limits cv to a multiple of the ideal heat capacity. Only equations with non-analytic terms, of water and R744,
// exceed it, and only next to their critical point.
const criticalHeat = 5

// fluctuation holds what the theory of critical fluctuations needs of a fluid. The correlation length is
// xi0 (D/gamma0)^(nu/gamma) for a reduced susceptibility D above that of a reference temperature.
type fluctuation struct {
	referenceT  float64 // K; far enough above the critical temperature for fluctuations to be gone
	xi0, gamma0 float64 // m, dimensionless
	qD          float64 // cutoff wave number, 1/m
	r0          float64 // amplitude
	exponent    float64 // nu/gamma
	ceiling     float64 // limit of the reduced susceptibility: its own power law at the reach
	pc, rhoc    float64 // Pa, mol/m3
}

// susceptibility returns the reduced susceptibility and the compressibility (d rho/dp) in mol/J at density rho in mol/m3 for
// (dp/d rho) = slope in J/mol, both limited, and reports whether they were.
func (f *fluctuation) susceptibility(rho, slope float64) (X, k float64, limited bool) {
	scale := f.pc * rho / (f.rhoc * f.rhoc)
	k = 1 / slope
	if limit := f.ceiling / scale; !(slope > 0) || k > limit {
		k, limited = limit, true
	}
	return scale * k, k, limited
}

// correlationLength returns the length in m by which critical fluctuations exceed those at the reference temperature, zero
// when they do not, and the limited compressibility in mol/J. slope is (dp/d rho) of the state's density at the reference
// temperature in J/mol.
func (f *fluctuation) correlationLength(p *point, slope float64) (xi, k float64, limited bool) {
	if p.Rho == 0 {
		return 0, 0, false
	}
	X, k, limited := f.susceptibility(p.Rho, p.slope)
	D := X - f.pc*p.Rho/(f.rhoc*f.rhoc)/slope*f.referenceT/p.T
	if !(D > 0) {
		return 0, k, limited
	}
	return f.xi0 * math.Exp(f.exponent*math.Log(D/f.gamma0)), k, limited
}

// conductivity returns the enhancement of the thermal conductivity in W/(m K) by the simplified crossover model of
// Olchowy and Sengers, Int. J. Thermophys. 10 (1989) 417, for viscosity eta in Pa s. It reports whether the
// susceptibility was limited.
func (f *fluctuation) conductivity(p *point, slope, eta float64) (float64, bool) {
	xi, k, limited := f.correlationLength(p, slope)
	y := f.qD * xi
	if y < 1e-7 { // rounding exceeds the result
		return 0, limited
	}
	cv := min(p.cv, criticalHeat*p.cp0)
	cp := p.heatCapacity(k) + cv - p.cv
	q := cv / cp
	r := f.rhoc / p.Rho
	omega := (1-q)*math.Atan(y) + q*y
	omega0 := -math.Expm1(-1 / (1/y + y*y*r*r/3))
	return p.Rho * cp * f.r0 * boltzmann * p.T / (6 * math.Pi * eta * xi) * 2 / math.Pi * (omega - omega0), limited
}

// enhancement is a fluctuation of a pure fluid with the isotherm of its reference temperature.
type enhancement struct {
	fluctuation
	reference helmholtz.Isotherm // only read once it is set
}

// at returns the enhancement of the thermal conductivity at a state.
func (e *enhancement) at(p *point, eta float64) (float64, bool) {
	return e.conductivity(p, isothermSlope(&e.reference, p.R, p.Rho), eta)
}

// isothermSlope returns (dp/d rho) in J/mol.
func isothermSlope(s *helmholtz.Isotherm, R, rho float64) float64 {
	if rho == 0 {
		return R * s.T
	}
	a := s.Residual(rho)
	return R * s.T * (1 + 2*a.D + a.DD)
}

// enhancementForm is the member critical of a conductivity record.
type enhancementForm struct {
	ReferenceT float64  `json:"T_ref"`
	Xi0        float64  `json:"xi0"`
	Gamma0     float64  `json:"gamma0"`
	QD         float64  `json:"qD"`
	R0         float64  `json:"R0"`
	Nu         float64  `json:"nu"`
	Gamma      float64  `json:"gamma"`
	PC         *float64 `json:"pc"`   // Pa; that of the equation of state when absent
	RhoC       *float64 `json:"rhoc"` // kg/m3, likewise
}

func (f *enhancementForm) compile(fluid *Fluid, reach float64) (*enhancement, error) {
	for _, v := range []float64{f.Xi0, f.Gamma0, f.QD, f.R0, f.Nu, f.Gamma} {
		if !(v > 0) {
			return nil, errors.New("critical: every number must be positive")
		}
	}
	if !(f.ReferenceT > fluid.Critical.T) {
		return nil, errors.New("critical: T_ref must be above the critical temperature")
	}
	e := &enhancement{fluctuation: fluctuation{
		referenceT: f.ReferenceT, xi0: f.Xi0, gamma0: f.Gamma0, qD: f.QD, r0: f.R0,
		exponent: f.Nu / f.Gamma, ceiling: f.Gamma0 * math.Pow(reach, -f.Gamma), pc: fluid.Critical.P, rhoc: fluid.Critical.Rho,
	}}
	if f.PC != nil {
		e.pc = *f.PC
	}
	if f.RhoC != nil {
		e.rhoc = *f.RhoC / fluid.MolarMass
	}
	e.reference.Set(fluid.Equation, f.ReferenceT)
	return e, nil
}
