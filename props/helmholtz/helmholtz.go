// Package helmholtz evaluates equations of state that are explicit in the Helmholtz energy: the ideal-gas part and the
// sum of residual terms, with their derivatives.
//
// Temperature is in K, density in mol/m3. An equation works with tau = T_red/T and delta = rho/rho_red and gives
// alpha = a/(R T), dimensionless. Derivatives are reduced: a field such as Dt stands for
// delta*tau*(d2 alpha/d delta d tau), so that every field is dimensionless and the thermodynamic relations carry no
// factors of tau or delta. The forms of the terms are those in use since Span and Wagner, J. Phys. Chem. Ref. Data 25
// (1996) 1509, doi:10.1063/1.555991; Span, Multiparameter Equations of State (Springer, 2000), lists the relations.
//
// The package knows no limits of validity and solves nothing.
package helmholtz

import (
	"errors"
	"fmt"
	"math"
)

// maxShapes bounds the distinct factors in delta of an equation, so that an isotherm can live on the stack. Water, the
// equation with the most terms, has 36.
const maxShapes = 40

// maxPowers bounds the table of powers of tau, those of the ideal part included.
const maxPowers = 64

// maxPower bounds the whole exponents of delta; the largest in use is 15.
const maxPower = 24

// deltaPowers is the length of a table of powers of delta: whole exponents first, then the fractional ones of the
// equation. It is a power of two, so that a masked index needs no bounds check.
const deltaPowers = 32

// Ideal holds the coefficients of the ideal-gas part without its ln(delta):
// Constant + Tau*tau + LnTau*ln(tau) + TauLnTau*tau*ln(tau) + sum n*tau^t + sum n*ln(1-exp(-theta*tau)).
type Ideal struct {
	Constant       float64      `json:"constant"`
	Tau            float64      `json:"tau"`
	LnTau          float64      `json:"ln_tau"`
	TauLnTau       float64      `json:"tau_ln_tau"`
	TauPowers      [][2]float64 `json:"tau_powers"`      // n, t
	PlanckEinstein [][2]float64 `json:"planck_einstein"` // n, theta
}

// Residual holds the coefficients of the residual part, one row a term, in the order the sources print them.
type Residual struct {
	Polynomial        [][]float64 `json:"polynomial"`         // n, t, d
	Exponential       [][]float64 `json:"exponential"`        // n, t, d, l and optionally g: exp(-g delta^l)
	DoubleExponential [][]float64 `json:"double_exponential"` // n, t, d, l, m: exp(-delta^l - tau^m)
	Gaussian          [][]float64 `json:"gaussian"`           // n, t, d, eta, beta, gamma, epsilon
	Associating       [][]float64 `json:"associating"`        // n, t, d, eta, beta, gamma, epsilon, b
	NonAnalytic       [][]float64 `json:"nonanalytic"`        // n, a, b, beta, A, B, C, D
}

// Coefficients is everything that defines an equation.
type Coefficients struct {
	GasConstant         float64 // J/(mol K)
	ReducingTemperature float64 // K
	ReducingDensity     float64 // mol/m3
	Ideal               Ideal
	Residual            Residual
}

// Alpha holds a Helmholtz energy and its reduced derivatives to second order.
type Alpha struct {
	A  float64 // alpha
	D  float64 // delta * d alpha/d delta
	T  float64 // tau * d alpha/d tau
	DD float64 // delta^2 * d2 alpha/d delta2
	DT float64 // delta * tau * d2 alpha/(d delta d tau)
	TT float64 // tau^2 * d2 alpha/d tau2
}

// Equation is an equation of state prepared for evaluation. It is immutable and safe for concurrent use.
type Equation struct {
	R      float64 // gas constant, J/(mol K)
	TRed   float64 // K
	RhoRed float64 // mol/m3

	ideal    ideal
	powers   powerTable
	terms    []term      // those of the groups without a further factor in tau, for a single state
	first    []plainTerm // one for each shape, with a coefficient of zero where it has none
	plain    []plainTerm // the others
	special  []specialTerm
	shapes   []shape   // distinct factors in delta, grouped by exponential
	groups   []group   // consecutive shapes that share exp(-g delta^l)
	bells    []bell    // consecutive shapes after the groups, one Gaussian factor in delta each
	peaks    []peak    // non-analytic terms
	maxDelta int       // largest whole exponent of delta
	fraction []float64 // fractional exponents of delta
}

// powerTable plans a table of powers of tau: the numbers one, tau and 1/tau, the roots that are needed, the powers that cost
// an exponential, then products of two earlier entries.
type powerTable struct {
	t        []float64 // the exponents
	roots    []powerStep
	exps     []int // entries
	products []powerStep
}

// powerStep makes the entry at from the entry a and, for a product, b.
type powerStep struct{ at, a, b int }

// plainTerm is one term n tau^t times the factor in delta of its shape, with the factors of its derivatives.
type plainTerm struct {
	power, shape int
	n, nt, ntt   float64 // n, n t, n t (t-1)
}

// term is one term n tau^t delta^d of a group.
type term struct {
	tau, delta      int     // of the powers in their tables
	n, t, t1, d, d1 float64 // t1 is t-1, d1 is d-1
}

// specialTerm has a further factor in tau.
type specialTerm struct {
	group, bell  int // whose factor in delta it has; the other one is -1
	power, shape int
	n, t         float64
	kind         tauFactor
	beta, gamma  float64 // Gaussian and associating; beta is m for tauExp
	mPower       int     // entry of tau^m for tauExp
	b            float64 // associating
}

type tauFactor uint8

const (
	tauExp    tauFactor = iota // exp(-tau^m)
	tauBell                    // exp(-beta (tau-gamma)^2)
	tauInvert                  // exp(1/(beta (tau-gamma)^2 + b))
)

// ideal is the ideal part with its powers in the table.
type ideal struct {
	Ideal
	powers []plainTerm // shape is not used
}

// shape is a factor in delta: delta^d times the exponential of its group or bell.
type shape struct {
	at int // of delta^d in the table of powers
	d  float64
}

// group is the run of shapes [from, to) that share exp(-g delta^l); l = 0 has no exponential. Its terms are [first, last).
type group struct {
	from, to    int
	first, last int
	l           int
	g, lf       float64
}

// bell is shape number at with the factor exp(-eta (delta-epsilon)^2).
type bell struct {
	at           int
	eta, epsilon float64
}

// peak is a non-analytic term of Span and Wagner (1996), eq 6.1.
type peak struct{ n, a, b, beta, A, B, C, D float64 }

// New prepares an equation. It returns an error that names the row when a row has the wrong length, a value that is not
// finite, or an exponent of delta beyond what the tables of powers hold.
func New(c Coefficients) (*Equation, error) {
	for _, v := range []float64{c.GasConstant, c.ReducingTemperature, c.ReducingDensity} {
		if !(v > 0) || math.IsInf(v, 0) {
			return nil, fmt.Errorf("helmholtz: gas constant and reducing point must be positive and finite, have %g", v)
		}
	}
	if err := c.Ideal.check(); err != nil {
		return nil, err
	}
	e := &Equation{R: c.GasConstant, TRed: c.ReducingTemperature, RhoRed: c.ReducingDensity, ideal: ideal{Ideal: c.Ideal}}
	b := builder{eq: e, shapeAt: map[shapeKey]int{}}
	r := c.Residual
	for _, form := range []struct {
		name     string
		rows     [][]float64
		min, max int
		add      func(row []float64) error
	}{
		{"polynomial", r.Polynomial, 3, 3, func(x []float64) error { return b.exponential(x, 0, 1) }},
		{"exponential", r.Exponential, 4, 5, func(x []float64) error {
			g := 1.0
			if len(x) == 5 {
				g = x[4]
			}
			return b.exponential(x, x[3], g)
		}},
		{"double_exponential", r.DoubleExponential, 5, 5, b.doubleExponential},
		{"gaussian", r.Gaussian, 7, 7, func(x []float64) error { return b.gaussian(x, tauBell, 0) }},
		{"associating", r.Associating, 8, 8, func(x []float64) error { return b.gaussian(x, tauInvert, x[7]) }},
		{"nonanalytic", r.NonAnalytic, 8, 8, func(x []float64) error {
			e.peaks = append(e.peaks, peak{x[0], x[1], x[2], x[3], x[4], x[5], x[6], x[7]})
			return nil
		}},
	} {
		for i, row := range form.rows {
			if len(row) < form.min || len(row) > form.max {
				return nil, fmt.Errorf("helmholtz: %s row %d has %d numbers, want %d to %d", form.name, i, len(row), form.min, form.max)
			}
			for _, v := range row {
				if math.IsNaN(v) || math.IsInf(v, 0) {
					return nil, fmt.Errorf("helmholtz: %s row %d is not finite", form.name, i)
				}
			}
			if err := form.add(row); err != nil {
				return nil, fmt.Errorf("helmholtz: %s row %d: %w", form.name, i, err)
			}
		}
	}
	if err := b.finish(); err != nil {
		return nil, err
	}
	return e, nil
}

func (p *Ideal) check() error {
	numbers := []float64{p.Constant, p.Tau, p.LnTau, p.TauLnTau}
	for _, row := range p.TauPowers {
		numbers = append(numbers, row[:]...)
	}
	for _, row := range p.PlanckEinstein {
		numbers = append(numbers, row[:]...)
		if row[1] <= 0 {
			return fmt.Errorf("helmholtz: theta %g in the ideal part is not positive", row[1])
		}
	}
	for _, v := range numbers {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return errors.New("helmholtz: a number of the ideal part is not finite")
		}
	}
	return nil
}
