package transport

import (
	"errors"
	"math"
	"slices"
)

// waterViscosity is IAPWS R12-08 (2008): Huber, Perkins, Laesecke, Friend, Sengers, Assael, Metaxa, Vogel, Mares,
// Miyagawa, J. Phys. Chem. Ref. Data 38 (2009) 101, with its critical enhancement.
type waterViscosity struct {
	temperature, density float64 // K, kg/m3
	h0                   []float64
	h1                   [6][7]float64
	critical             *enhancement
	exponent, qC         float64 // amplitude of the enhancement; cutoff wave number, 1/m
}

func (m *waterViscosity) dilute(T float64) float64 {
	x := T / m.temperature
	return 1e-4 * math.Sqrt(x) / horner(m.h0, 1/x) // eq 11
}

func (m *waterViscosity) viscosity(p point) (float64, bool) {
	return m.background(p.T, p.mass) * m.factor(&p), true
}

// background returns the viscosity in Pa s without its critical enhancement.
func (m *waterViscosity) background(T, rho float64) float64 {
	d := rho / m.density
	a, b := m.temperature/T-1, d-1
	var sum float64
	for i := len(m.h1) - 1; i >= 0; i-- {
		sum = sum*a + horner(m.h1[i][:], b)
	}
	return m.dilute(T) * math.Exp(d*sum) // eqs 10 to 12
}

// factor returns the critical enhancement, which is 1 far from the critical point.
func (m *waterViscosity) factor(p *point) float64 {
	xi, _, _ := m.critical.correlationLength(p, isothermSlope(&m.critical.reference, p.R, p.Rho))
	if xi == 0 {
		return 1
	}
	c, d := m.qC*xi, m.critical.qD*xi
	var y float64
	if xi < 0.3817016416e-9 { // m; where the release changes from one form to the other
		y = 0.2 * c * math.Pow(d, 5) * (1 - c + c*c - 765.0/504*d*d)
	} else {
		psi := math.Acos(1 / math.Sqrt(1+d*d))
		w := math.Sqrt(math.Abs((c-1)/(c+1))) * math.Tan(psi/2)
		l := 2 * math.Atan(math.Abs(w))
		if c > 1 {
			l = math.Log((1 + w) / (1 - w))
		}
		y = math.Sin(3*psi)/12 - math.Sin(2*psi)/(4*c) + (1-1.25*c*c)*math.Sin(psi)/(c*c) -
			((1-1.5*c*c)*psi-math.Pow(math.Abs(c*c-1), 1.5)*l)/(c*c*c)
	}
	return math.Exp(m.exponent * y)
}

// waterConductivity is IAPWS R15-11 (2011): Huber, Perkins, Friend, Sengers, Assael, Metaxa, Miyagawa, Hellmann, Vogel,
// J. Phys. Chem. Ref. Data 41 (2012) 033102. Its enhancement is the general one with constants of its own.
type waterConductivity struct {
	temperature, density float64 // K, kg/m3
	l0                   []float64
	l1                   [][]float64
}

func (m *waterConductivity) dilute(T, _ float64) float64 {
	x := T / m.temperature
	return 1e-3 * math.Sqrt(x) / horner(m.l0, 1/x) // eq 16
}

func (m *waterConductivity) background(p point) (float64, bool) {
	d := p.mass / m.density
	a, b := m.temperature/p.T-1, d-1
	var sum float64
	for _, c := range slices.Backward(m.l1) {
		sum = sum*a + horner(c, b)
	}
	return m.dilute(p.T, 0) * math.Exp(d*sum), true // eqs 15, 17
}

type waterViscosityForm struct {
	head
	Temperature float64      `json:"T_star"`
	Density     float64      `json:"rho_star"`
	H0          []float64    `json:"H0"`
	H1          [][3]float64 `json:"H1"` // i, j, value
	Critical    struct {
		Exponent   float64 `json:"x_mu"`
		QC         float64 `json:"qC"`
		QD         float64 `json:"qD"`
		Xi0        float64 `json:"xi0"`
		Gamma0     float64 `json:"gamma0"`
		ReferenceT float64 `json:"T_R_bar"`
		Nu         float64 `json:"nu"`
		Gamma      float64 `json:"gamma"`
		Note       string  `json:"note"`
	} `json:"critical"`
}

func (f *waterViscosityForm) compile(fluid *Fluid) (*waterViscosity, error) {
	if !(f.Temperature > 0 && f.Density > 0) || len(f.H0) == 0 {
		return nil, errors.New("constants T_star, rho_star and H0 must be given")
	}
	m := &waterViscosity{temperature: f.Temperature, density: f.Density, h0: f.H0, exponent: f.Critical.Exponent, qC: f.Critical.QC}
	for _, r := range f.H1 {
		i, j := int(r[0]), int(r[1])
		if i < 0 || i >= len(m.h1) || j < 0 || j >= len(m.h1[0]) {
			return nil, errors.New("H1: index out of range")
		}
		m.h1[i][j] = r[2]
	}
	c := f.Critical
	e := enhancementForm{
		ReferenceT: c.ReferenceT * f.Temperature, Xi0: c.Xi0, Gamma0: c.Gamma0, QD: c.QD, R0: 1,
		Nu: c.Nu, Gamma: c.Gamma, RhoC: &f.Density,
	}
	var err error
	m.critical, err = e.compile(fluid, waterReach)
	return m, err
}

type waterConductivityForm struct {
	head
	Temperature float64     `json:"T_star"`
	Density     float64     `json:"rho_star"`
	Pressure    float64     `json:"p_star"`
	L0          []float64   `json:"L0"`
	L1          [][]float64 `json:"L1"`
	Critical    struct {
		Amplitude  float64 `json:"Lambda"`
		QD         float64 `json:"qD"`
		Xi0        float64 `json:"xi0"`
		Gamma0     float64 `json:"gamma0"`
		ReferenceT float64 `json:"T_R_bar"`
		Nu         float64 `json:"nu"`
		Gamma      float64 `json:"gamma"`
		R          float64 `json:"R_specific"`
	} `json:"critical"`
}

func (f *waterConductivityForm) compile(fluid *Fluid) (*waterConductivity, *enhancement, error) {
	if !(f.Temperature > 0 && f.Density > 0 && f.Pressure > 0) || len(f.L0) == 0 || len(f.L1) == 0 {
		return nil, nil, errors.New("constants T_star, rho_star, p_star, L0 and L1 must be given")
	}
	c := f.Critical
	// The release gathers the constants of the enhancement in one number, for reference viscosity 1 uPa s and
	// conductivity 1 mW/(m K).
	r0 := c.Amplitude * 1e-9 * 6 * math.Pi / (f.Density * c.R * f.Temperature * boltzmann * c.QD)
	e, err := (&enhancementForm{
		ReferenceT: c.ReferenceT * f.Temperature, Xi0: c.Xi0, Gamma0: c.Gamma0, QD: c.QD, R0: r0,
		Nu: c.Nu, Gamma: c.Gamma, PC: &f.Pressure, RhoC: &f.Density,
	}).compile(fluid, waterReach)
	return &waterConductivity{f.Temperature, f.Density, f.L0, f.L1}, e, err
}
