package transport

import (
	"errors"
	"fmt"
	"math"
)

// gas is the part of a correlation that remains at zero density, in the unit of its coefficients.
type gas interface {
	at(T float64) float64 // T in K
}

// The forms of a dilute part, in x = T/temperature.
type (
	powerGas struct { // sum n x^a
		temperature float64
		rows        [][2]float64
	}
	rationalGas struct { // (sum n x^a)/(sum n x^a)
		temperature float64
		num, den    [][2]float64
	}
	logGas struct { // factor sqrt(T)/exp(sum a (ln x)^i)
		temperature, factor float64
		a                   []float64
	}
	sphereGas struct { // factor sqrt(T)/W(x)
		temperature, factor float64
	}
	inverseGas struct { // factor sqrt(x)/(sum n x^a)
		temperature, factor float64
		rows                [][2]float64
	}
	exponentialGas struct { // factor sqrt(T)/(sum c T^p exp(u T^r))
		factor float64
		rows   [][4]float64 // c, p, u, r
	}
)

func (g *powerGas) at(T float64) float64 {
	return polynomial(g.rows, T/g.temperature)
}

func (g *rationalGas) at(T float64) float64 {
	x := T / g.temperature
	return polynomial(g.num, x) / polynomial(g.den, x)
}

func (g *logGas) at(T float64) float64 {
	return g.factor * math.Sqrt(T) * math.Exp(-horner(g.a, math.Log(T/g.temperature)))
}

func (g *sphereGas) at(T float64) float64 {
	return g.factor * math.Sqrt(T) / collisionIntegral(T/g.temperature)
}

func (g *inverseGas) at(T float64) float64 {
	x := T / g.temperature
	return g.factor * math.Sqrt(x) / polynomial(g.rows, x)
}

func (g *exponentialGas) at(T float64) float64 {
	b := base{x: T}
	var sum float64
	for _, r := range g.rows {
		c := r[0] * b.power(r[1])
		if r[2] != 0 {
			c *= math.Exp(r[2] * b.power(r[3]))
		}
		sum += c
	}
	return g.factor * math.Sqrt(T) / sum
}

// gasForm is a dilute part as the coefficient files hold it.
type gasForm struct {
	Kind        string       `json:"kind"`
	Temperature float64      `json:"temperature"`
	Factor      float64      `json:"factor"`
	Rows        [][]float64  `json:"rows"`
	A           []float64    `json:"a"`
	Num         [][2]float64 `json:"num"`
	Den         [][2]float64 `json:"den"`
	From        string       `json:"from"` // how the factor follows from the paper
}

func (f *gasForm) compile() (gas, error) {
	g, err := f.build()
	if err != nil {
		return nil, fmt.Errorf("dilute: %s: %w", f.Kind, err)
	}
	return g, nil
}

func (f *gasForm) build() (gas, error) {
	width := 2
	if f.Kind == "sqrt_over_sum" {
		width = 4
	} else if !(f.Temperature > 0) {
		return nil, errors.New("temperature must be positive")
	}
	if f.Kind != "power" && f.Kind != "rational" && !(f.Factor > 0) {
		return nil, errors.New("factor must be positive")
	}
	var pairs [][2]float64
	var quads [][4]float64
	for i, r := range f.Rows {
		if len(r) != width {
			return nil, fmt.Errorf("row %d has %d numbers, want %d", i, len(r), width)
		}
		if width == 2 {
			pairs = append(pairs, [2]float64(r))
		} else {
			quads = append(quads, [4]float64(r))
		}
	}
	var g gas
	rows := len(f.Rows)
	switch f.Kind {
	case "power":
		g = &powerGas{f.Temperature, pairs}
	case "rational":
		g, rows = &rationalGas{f.Temperature, f.Num, f.Den}, min(len(f.Num), len(f.Den))
	case "sqrt_over_exp_log":
		g, rows = &logGas{f.Temperature, f.Factor, f.A}, len(f.A)
	case "sqrt_over_neufeld":
		g, rows = &sphereGas{f.Temperature, f.Factor}, 1
	case "sqrt_over_power":
		g = &inverseGas{f.Temperature, f.Factor, pairs}
	case "sqrt_over_sum":
		g = &exponentialGas{f.Factor, quads}
	default:
		return nil, errors.New("unknown kind")
	}
	if rows == 0 {
		return nil, errors.New("no coefficients")
	}
	return g, nil
}

// collisionIntegral returns the reduced collision integral (2,2) of the Lennard-Jones potential at x = k T/epsilon:
// Neufeld, Janzen, Aziz, J. Chem. Phys. 57 (1972) 1100, without the sine term.
func collisionIntegral(x float64) float64 {
	return 1.16145*math.Exp(-0.14874*math.Log(x)) + 0.52487*math.Exp(-0.77320*x) + 2.16178*math.Exp(-2.43787*x)
}

// sphere is a molecule with the potential of Lennard and Jones.
type sphere struct {
	EpsilonOverK float64 `json:"epsilon_over_k"` // K
	SigmaNM      float64 `json:"sigma_nm"`       // nm
}

func (m sphere) check() error {
	if !(m.EpsilonOverK > 0 && m.SigmaNM > 0) {
		return errors.New("epsilon_over_k and sigma_nm must be positive")
	}
	return nil
}

// viscosity returns the viscosity of the dilute gas in Pa s by Chapman and Enskog, for a molar mass M in kg/mol.
func (m sphere) viscosity(T, M float64) float64 {
	s := m.SigmaNM * 1e-9
	return 5.0 / 16 * math.Sqrt(M/avogadro*boltzmann*T/math.Pi) / (s * s * collisionIntegral(T/m.EpsilonOverK))
}
