package blend

import (
	"fmt"
	"math"
	"slices"

	"dewmark/props/data"
	"dewmark/props/helmholtz"
)

// model is the multi-fluid model of a list of components, whatever their amounts. It is immutable.
type model struct {
	records  []*data.Record
	residual []*helmholtz.Equation // residual part alone, evaluated at the mixture's tau and delta
	ideal    []*helmholtz.Equation // ideal part alone, evaluated at its own tau
	R, M     []float64             // J/(mol K), kg/mol

	reducingT, reducingV          []float64 // K, m3/mol
	temperaturePairs, volumePairs []pairTerm
	departures                    []departure
	basis                         []Pair
}

// departure is a departure function with the pairs that use it. The generalised functions serve several pairs, and cost
// one evaluation.
type departure struct {
	eq    *helmholtz.Equation
	terms helmholtz.Residual
	uses  []departureUse
}

type departureUse struct {
	i, j   int
	factor float64
}

// newModel prepares the model of the given components. find returns the parameters of a pair in the order asked for.
func newModel(records []*data.Record, find func(a, b string) Pair) (*model, error) {
	n := len(records)
	m := &model{
		records: records, residual: make([]*helmholtz.Equation, n), ideal: make([]*helmholtz.Equation, n),
		R: make([]float64, n), M: make([]float64, n), reducingT: make([]float64, n), reducingV: make([]float64, n),
	}
	for i, r := range records {
		c := helmholtz.Coefficients{GasConstant: r.GasConstant, ReducingTemperature: r.Reducing.Temperature, ReducingDensity: r.Reducing.Density}
		c.Residual = r.Residual
		var err error
		if m.residual[i], err = helmholtz.New(c); err != nil {
			return nil, fmt.Errorf("blend: %s: %w", r.ID, err)
		}
		c.Residual, c.Ideal = helmholtz.Residual{}, r.Ideal
		if m.ideal[i], err = helmholtz.New(c); err != nil {
			return nil, fmt.Errorf("blend: %s: %w", r.ID, err)
		}
		m.R[i], m.M[i] = r.GasConstant, r.MolarMass
		m.reducingT[i], m.reducingV[i] = r.Reducing.Temperature, 1/r.Reducing.Density
	}
	for i := range n {
		for j := i + 1; j < n; j++ {
			if err := m.addPair(i, j, find(records[i].ID, records[j].ID)); err != nil {
				return nil, err
			}
		}
	}
	return m, nil
}

func (m *model) addPair(i, j int, p Pair) error {
	m.basis = append(m.basis, p)
	ti, tj, vi, vj := m.reducingT[i], m.reducingT[j], m.reducingV[i], m.reducingV[j]
	q := p.parameters
	switch q.Form {
	case data.LemmonJacobsenForm:
		m.temperaturePairs = append(m.temperaturePairs, newLemmonJacobsenTerm(i, j, q.ExcessTemperature, ti, tj))
		m.volumePairs = append(m.volumePairs, newLemmonJacobsenTerm(i, j, q.ExcessVolume, vi, vj))
	default:
		m.temperaturePairs = append(m.temperaturePairs, newKunzWagnerTerm(i, j, q.BetaTemperature, q.GammaTemperature, math.Sqrt(ti*tj)))
		m.volumePairs = append(m.volumePairs, newKunzWagnerTerm(i, j, q.BetaVolume, q.GammaVolume, lorentzMean(vi, vj)))
	}
	d := p.departure
	if d == nil {
		return nil
	}
	terms := helmholtz.Residual{Polynomial: d.Polynomial, Exponential: d.Exponential}
	use := departureUse{i, j, d.Factor}
	for k := range m.departures {
		if sameRows(m.departures[k].terms.Polynomial, d.Polynomial) && sameRows(m.departures[k].terms.Exponential, d.Exponential) {
			m.departures[k].uses = append(m.departures[k].uses, use)
			return nil
		}
	}
	eq, err := helmholtz.New(helmholtz.Coefficients{GasConstant: 1, ReducingTemperature: 1, ReducingDensity: 1, Residual: terms})
	if err != nil {
		return fmt.Errorf("blend: departure function of %s/%s: %w", p.Components[0], p.Components[1], err)
	}
	m.departures = append(m.departures, departure{eq: eq, terms: terms, uses: []departureUse{use}})
	return nil
}

func sameRows(a, b [][]float64) bool {
	return slices.EqualFunc(a, b, slices.Equal[[]float64])
}

// mean returns the average of v weighted with the fractions x.
func mean(x, v []float64) float64 {
	var sum float64
	for i := range x {
		sum += x[i] * v[i]
	}
	return sum
}
