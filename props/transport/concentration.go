package transport

import (
	"errors"
	"math"
)

// concentration is the residual concentration model of Shan, Penoncello, Jacobsen, ASHRAE Trans. 106 part 1 (2000) 757,
// for R23: viscosity in uPa s and conductivity in mW/(m K) from the density in mol/L. It includes a critical peak.
type concentration struct {
	gas         gas
	liquid      float64 // density where the model ends, mol/L
	c1, c2      float64
	energy      float64 // J/mol
	peak        float64
	criticalT   float64 // K
	criticalRho float64 // mol/L
	gasConstant float64 // J/(mol K)
}

func (m *concentration) at(T, rho float64) (float64, bool) {
	c := rho / 1e3
	free := m.liquid - c
	if !(free > poleMargin*m.liquid) {
		return 0, false
	}
	y := m.gas.at(T) * math.Pow(free/m.liquid, m.c1)
	y += math.Pow(c/m.liquid, m.c1) * m.c2 * m.liquid * m.liquid / free * math.Sqrt(T) * math.Exp(c/free*m.energy/(m.gasConstant*T))
	return y + m.peak/(math.Cosh(c-m.criticalRho)*math.Cosh(T-m.criticalT)), true
}

type concentrationViscosity struct{ concentration }

func (m *concentrationViscosity) dilute(T float64) float64 { return 1e-6 * m.gas.at(T) }

func (m *concentrationViscosity) viscosity(p point) (float64, bool) {
	v, ok := m.at(p.T, p.Rho)
	return 1e-6 * v, ok
}

type concentrationConductivity struct{ concentration }

func (m *concentrationConductivity) dilute(T, _ float64) float64 { return 1e-3 * m.gas.at(T) }

func (m *concentrationConductivity) background(p point) (float64, bool) {
	v, ok := m.at(p.T, p.Rho)
	return 1e-3 * v, ok
}

// concentrationForm is a record of kind shan_2000.
type concentrationForm struct {
	head
	Unit   string  `json:"unit"`
	Dilute gasForm `json:"dilute"`
	Liquid float64 `json:"rho_L"`
	C1     float64 `json:"C1"`
	C2     float64 `json:"C2"`
	Energy float64 `json:"dG"`
	Peak   float64 `json:"peak"`
	RhoC   float64 `json:"rho_c"`
	TC     float64 `json:"T_c"`
	R      float64 `json:"R"`
}

func (f *concentrationForm) compile(unit string) (concentration, error) {
	if f.Unit != unit {
		return concentration{}, errors.New("unit must be " + unit)
	}
	for _, v := range []float64{f.Liquid, f.C1, f.C2, f.Energy, f.Peak, f.RhoC, f.TC, f.R} {
		if !(v > 0) {
			return concentration{}, errors.New("every number must be positive")
		}
	}
	g, err := f.Dilute.compile()
	return concentration{g, f.Liquid, f.C1, f.C2, f.Energy, f.Peak, f.TC, f.RhoC, f.R}, err
}

func (f *concentrationForm) viscosity() (viscosityModel, error) {
	m, err := f.compile("uPa s")
	return &concentrationViscosity{m}, err
}

func (f *concentrationForm) conductivity() (conductivityModel, error) {
	m, err := f.compile("mW/(m K)")
	return &concentrationConductivity{m}, err
}
