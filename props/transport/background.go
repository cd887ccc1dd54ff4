package transport

import (
	"encoding/json"
	"errors"
	"fmt"
	"math"
)

// poleMargin is how near the denominator of a term may come to zero, relative to its value in the dilute gas. Closer, the
// term grows faster than any real fluid; no correlation was fitted there.
const poleMargin = 0.01

// background is the residual part of a correlation: a sum in tau = T_red/T and d = rho/rho_red.
type background struct {
	temperature float64 // K
	density     float64 // kg/m3
	tau, delta  powers
	poly        []monomial
	decays      []decay
	bells       [][3]float64 // n, b, e
	ratios      []ratio
	packings    []packing
}

// monomial is n tau^t d^b, the powers given by their places.
type monomial struct {
	n          float64
	tau, delta uint8
	constant   bool // b = 0
}

// decay is a monomial times exp(-g d^c).
type decay struct {
	monomial
	g   float64
	cut uint8
}

// ratio is a quotient of two sums.
type ratio struct{ num, den []monomial }

// packing is a term that diverges at a close-packed density d0(tau).
type packing struct {
	f     float64
	g0    float64
	g     [][2]float64 // d0 = g0 (1 + sum g tau^a)
	c     [3]float64   // or d0 = c10/(1 + c8/tau + c9/tau^2), for R134a
	r134a bool
}

// backgroundForm is a background as the coefficient files hold it.
type backgroundForm struct {
	Temperature float64           `json:"temperature"`
	Density     float64           `json:"density"`
	Terms       []json.RawMessage `json:"terms"`
}

func (f *backgroundForm) compile() (*background, error) {
	if !(f.Temperature > 0 && f.Density > 0) {
		return nil, errors.New("residual: temperature and density must be positive")
	}
	b := &background{temperature: f.Temperature, density: f.Density}
	for i, raw := range f.Terms {
		if err := b.add(raw); err != nil {
			return nil, fmt.Errorf("residual: term %d: %w", i, err)
		}
	}
	if err := b.tau.check(); err != nil {
		return nil, fmt.Errorf("residual: tau: %w", err)
	}
	if err := b.delta.check(); err != nil {
		return nil, fmt.Errorf("residual: density: %w", err)
	}
	return b, nil
}

func (b *background) add(raw json.RawMessage) error {
	var t struct {
		Kind string       `json:"kind"`
		Rows [][]float64  `json:"rows"`
		Num  [][]float64  `json:"num"`
		Den  [][]float64  `json:"den"`
		F    float64      `json:"f"`
		G0   float64      `json:"g0"`
		G    [][2]float64 `json:"g"`
		C8   float64      `json:"c8"`
		C9   float64      `json:"c9"`
		C10  float64      `json:"c10"`
	}
	if err := decode(raw, &t); err != nil {
		return err
	}
	switch t.Kind {
	case "poly":
		rows, err := b.monomials(t.Rows, 3)
		b.poly = append(b.poly, rows...)
		return err
	case "poly_exp":
		rows, err := b.monomials(t.Rows, 5)
		for i, m := range rows {
			b.decays = append(b.decays, decay{m, t.Rows[i][3], b.delta.index(t.Rows[i][4])})
		}
		return err
	case "gauss":
		for _, r := range t.Rows {
			if len(r) != 3 {
				return fmt.Errorf("gauss row has %d numbers, want 3", len(r))
			}
			b.bells = append(b.bells, [3]float64(r))
		}
	case "ratio":
		num, err := b.monomials(t.Num, 3)
		if err != nil {
			return err
		}
		den, err := b.monomials(t.Den, 3)
		b.ratios = append(b.ratios, ratio{num, den})
		return err
	case "close_packed":
		b.packings = append(b.packings, packing{f: t.F, g0: t.G0, g: t.G})
	case "close_packed_r134a":
		b.packings = append(b.packings, packing{f: t.F, c: [3]float64{t.C8, t.C9, t.C10}, r134a: true})
	default:
		return fmt.Errorf("unknown kind %q", t.Kind)
	}
	return nil
}

func (b *background) monomials(rows [][]float64, width int) ([]monomial, error) {
	if len(rows) == 0 {
		return nil, errors.New("no rows")
	}
	out := make([]monomial, len(rows))
	for i, r := range rows {
		if len(r) != width {
			return nil, fmt.Errorf("row %d has %d numbers, want %d", i, len(r), width)
		}
		if r[2] < 0 {
			return nil, fmt.Errorf("row %d has a negative exponent of density", i)
		}
		out[i] = monomial{n: r[0], tau: b.tau.index(r[1]), delta: b.delta.index(r[2]), constant: r[2] == 0}
	}
	return out, nil
}

// value returns the residual part at T in K and mass density rho in kg/m3, in the unit of the coefficients. It reports
// false at and beyond a pole.
func (b *background) value(T, rho float64) (float64, bool) {
	tau, d := b.temperature/T, rho/b.density
	var tp, dp [maxPowers]float64
	b.tau.of(tau, &tp)
	b.delta.of(d, &dp)
	var sum float64
	for i := range b.poly {
		sum += b.poly[i].of(&tp, &dp)
	}
	for i := range b.decays {
		k := &b.decays[i]
		sum += k.of(&tp, &dp) * math.Exp(-k.g*dp[k.cut&(maxPowers-1)])
	}
	for _, g := range b.bells {
		sum += g[0] * tau * d * math.Exp(-g[1]*(d-1)*(d-1)-g[2]*math.Abs(tau-1))
	}
	for i := range b.ratios {
		var num, den, thin float64
		for j := range b.ratios[i].num {
			num += b.ratios[i].num[j].of(&tp, &dp)
		}
		for j := range b.ratios[i].den {
			m := &b.ratios[i].den[j]
			v := m.of(&tp, &dp)
			den += v
			if m.constant {
				thin += v
			}
		}
		if !(den/thin > poleMargin) {
			return 0, false
		}
		sum += num / den
	}
	for i := range b.packings {
		p := &b.packings[i]
		d0 := p.limit(tau)
		if !(d < (1-poleMargin)*d0) {
			return 0, false
		}
		v := p.f * d / (d0 * (d0 - d)) // 1/(d0-d) - 1/d0
		if !p.r134a {
			v *= d // d/(d0-d) - d/d0
		}
		sum += v
	}
	return sum, true
}

func (m *monomial) of(tau, delta *[maxPowers]float64) float64 {
	return m.n * tau[m.tau&(maxPowers-1)] * delta[m.delta&(maxPowers-1)]
}

// limit returns the close-packed density.
func (p *packing) limit(tau float64) float64 {
	if p.r134a {
		return p.c[2] / (1 + (p.c[0]+p.c[1]/tau)/tau)
	}
	return p.g0 * (1 + polynomial(p.g, tau))
}
