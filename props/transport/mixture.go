package transport

import (
	"errors"
	"fmt"
	"math"
	"slices"
	"strings"
)

// maxComponents bounds the components of a mixture, so that their properties can live on the stack.
const maxComponents = 16

// Mixture computes the transport properties of mixtures of some refrigerants at any composition, by residual-entropy
// scaling with the mixing rules of Wilke, J. Chem. Phys. 18 (1950) 517, and Mason and Saxena, Phys. Fluids 1 (1958) 361,
// for the dilute gas. It is immutable and safe for concurrent use.
type Mixture struct {
	components []*Model
	records    [SurfaceTension + 1]Record
}

// MixtureState is a single-phase state of a mixture. The embedded state is that of the mixture: its gas constant, its
// residual Helmholtz energy with derivatives at constant composition.
type MixtureState struct {
	State
	X        []float64        // mole fractions, in the order of the components
	Cp0      []float64        // isobaric heat capacities of the components as ideal gases, J/(mol K); computed when nil
	Critical *MixtureCritical // nil leaves the critical enhancement out
}

// MixtureCritical is what the critical enhancement of the thermal conductivity needs. A state far from the critical point
// of the mixture can do without; the enhancement is then left out.
type MixtureCritical struct {
	P     float64 // critical pressure at this composition, Pa
	Rho   float64 // critical density, mol/m3
	Slope float64 // (dp/d rho) at [Mixture.ReferenceTemperature] and the density of the state, J/mol
}

// mixtureUncertainty is what the abstracts of Yang et al. (2022) and (2021) say of mixtures: two thirds of the viscosities
// within 8.0 %, 95 % of the conductivities within 8.3 %.
var mixtureUncertainty = [...]Uncertainty{
	Viscosity:           {0.08, 0.08, "Yang et al. (2022): two thirds of the data on mixtures within 8.0 %"},
	ThermalConductivity: {0.042, 0.042, "Yang et al. (2021): 95 % of the data on mixtures within 8.3 %"},
	SurfaceTension:      {0.05, 0.05, "usual for the parachor method"},
}

// NewMixture makes the model of a mixture. It returns an error when there are no components, too many or one twice.
func NewMixture(components ...*Model) (*Mixture, error) {
	if len(components) == 0 || len(components) > maxComponents {
		return nil, fmt.Errorf("transport: %d components, want 1 to %d", len(components), maxComponents)
	}
	m := &Mixture{components: slices.Clone(components)}
	names := make([]string, len(components))
	for i, c := range components {
		if c == nil || slices.Contains(components[:i], c) {
			return nil, errors.New("transport: a component is missing or given twice")
		}
		names[i] = c.fluid.Designation
	}
	for p := Viscosity; p <= SurfaceTension; p++ {
		r := Record{
			Property: p, Rank: 1, Method: EntropyScaling, Uncertainty: mixtureUncertainty[p],
			Range: Range{0, math.Inf(1), math.Inf(1)},
		}
		if p == SurfaceTension {
			r.Method = Parachor
		}
		var sources []string
		for _, c := range components {
			own := c.mixtureRecord(p)
			r.Range.TemperatureMin = max(r.Range.TemperatureMin, own.Range.TemperatureMin)
			r.Range.TemperatureMax = min(r.Range.TemperatureMax, own.Range.TemperatureMax)
			r.Range.PressureMax = min(r.Range.PressureMax, own.Range.PressureMax)
			r.standing = append(r.standing, own.standing...)
			sources = append(sources, c.fluid.Designation+": "+own.Source)
		}
		r.Source = strings.Join(sources, "; ")
		m.records[p] = r
	}
	return m, nil
}

// Record returns what the model of a property is, with the sources of the components and the range that they share. The
// caller must not modify it.
func (m *Mixture) Record(p Property) *Record { return &m.records[p] }

// mixtureRecord returns the record that stands for m in a mixture.
func (m *Model) mixtureRecord(p Property) *Record {
	switch p {
	case Viscosity:
		return &m.scaledViscosity.Record
	case ThermalConductivity:
		return &m.scaledConductivity.Record
	default:
		return &m.tension[0].Record
	}
}

// Viscosity returns the viscosity in Pa s, or a [*StateError].
func (m *Mixture) Viscosity(s MixtureState) (Value, error) {
	p, mean, ok := m.point(s)
	if !ok {
		return Value{}, m.refuse(Viscosity, s.State)
	}
	var dilutes [maxComponents]float64
	return m.viscosityAt(&p, &dilutes, s.X, mean)
}

// ViscosityAndConductivity returns both, the conductivity in W/(m K), or a [*StateError].
func (m *Mixture) ViscosityAndConductivity(s MixtureState) (eta, lambda Value, err error) {
	p, mean, ok := m.point(s)
	if !ok {
		return Value{}, Value{}, m.refuse(ThermalConductivity, s.State)
	}
	var dilutes [maxComponents]float64
	if eta, err = m.viscosityAt(&p, &dilutes, s.X, mean); err != nil {
		return Value{}, Value{}, err
	}
	lambda, err = m.conductivityAt(&p, &dilutes, &s, mean, eta.Value)
	return eta, lambda, err
}

// ReferenceTemperature returns the temperature in K far above the critical one, at which the fluctuations of a mixture
// with mole fractions x are gone.
func (m *Mixture) ReferenceTemperature(x []float64) float64 {
	var T float64
	for i, c := range m.components {
		T += x[i] * c.scaledConductivity.critical.referenceT
	}
	return T
}

// point derives the quantities of a state, with the mean molar mass, and reports whether it can be one.
func (m *Mixture) point(s MixtureState) (p point, mean float64, ok bool) {
	if len(s.X) != len(m.components) || s.Cp0 != nil && len(s.Cp0) != len(s.X) {
		return point{}, 0, false
	}
	var sum float64
	for i, c := range m.components {
		if !(s.X[i] >= 0) {
			return point{}, 0, false
		}
		mean += s.X[i] * c.fluid.MolarMass
		sum += s.X[i]
	}
	p, ok = newPoint(s.State, mean)
	return p, mean, ok && math.Abs(sum-1) < 1e-6
}

// viscosityAt leaves the dilute viscosities of the components in dilutes.
func (m *Mixture) viscosityAt(p *point, dilutes *[maxComponents]float64, x []float64, mean float64) (Value, error) {
	for i, c := range m.components {
		dilutes[i] = c.diluteViscosity(p.T)
	}
	var eta float64
	for i := range m.components {
		if x[i] > 0 {
			eta += x[i] * dilutes[i] / m.collisions(i, x, dilutes)
		}
	}
	var continued bool
	if splus := p.residualEntropy(); p.mass >= thinnest && splus > 0 {
		var q float64
		for i, c := range m.components {
			fit := &c.scaledViscosity.model.(*entropyScaledViscosity).fit
			q += x[i] * fit.q(splus)
			continued = continued || x[i] > 0 && splus > fit.end
		}
		eta += entropyViscosity(p, q, splus, mean)
	}
	if !(eta > 0) || !finite(eta) {
		return Value{}, m.refuse(Viscosity, p.State)
	}
	v := m.value(Viscosity, p, x, eta)
	if continued {
		v.continued()
	}
	return v, nil
}

func (m *Mixture) conductivityAt(p *point, dilutes *[maxComponents]float64, s *MixtureState, mean, eta float64) (Value, error) {
	var translation [maxComponents]float64 // 15/4 R eta0/M without the common factor
	for i, c := range m.components {
		translation[i] = dilutes[i] / c.fluid.MolarMass
	}
	var lambda float64
	for i, c := range m.components {
		if s.X[i] > 0 {
			var cp0 float64
			if s.Cp0 == nil {
				cp0 = c.idealHeatCapacity(p.T)
			} else {
				cp0 = s.Cp0[i]
			}
			lambda += s.X[i] * c.diluteConductivity(p.T, cp0) / m.collisions(i, s.X, &translation)
		}
	}
	if splus := p.residualEntropy(); p.mass >= thinnest && splus > 0 {
		var q float64
		for i, c := range m.components {
			q += s.X[i] * c.scaledConductivity.model.(*entropyScaledConductivity).fit.q(splus)
		}
		lambda += entropyConductivity(p, q, splus, mean)
	}
	var add float64
	var limited bool
	if c := s.Critical; c != nil {
		f := m.fluctuation(s.X)
		f.pc, f.rhoc = c.P, c.Rho
		add, limited = f.conductivity(p, c.Slope, eta)
		lambda += add
	}
	if !(lambda > 0) || !finite(lambda) {
		return Value{}, m.refuse(ThermalConductivity, p.State)
	}
	v := m.value(ThermalConductivity, p, s.X, lambda)
	if limited {
		v.Uncertainty = math.Hypot(v.Uncertainty, add/lambda)
		v.reservations |= nearCritical
	}
	return v, nil
}

// collisions returns sum_j x_j P_ij of Wilke's rule, y being viscosities or the conductivities of translation.
func (m *Mixture) collisions(i int, x []float64, y *[maxComponents]float64) float64 {
	var sum float64
	for j, c := range m.components {
		if x[j] == 0 {
			continue
		}
		r := m.components[i].fluid.MolarMass / c.fluid.MolarMass
		a := 1 + math.Sqrt(y[i]/y[j]/math.Sqrt(r))
		sum += x[j] * a * a / math.Sqrt(8*(1+r))
	}
	return sum
}

// fluctuation returns the mole-fraction means of the components' constants.
func (m *Mixture) fluctuation(x []float64) fluctuation {
	var f fluctuation
	for i, c := range m.components {
		k := &c.scaledConductivity.critical.fluctuation
		f.referenceT += x[i] * k.referenceT
		f.xi0 += x[i] * k.xi0
		f.gamma0 += x[i] * k.gamma0
		f.qD += x[i] * k.qD
		f.r0 += x[i] * k.r0
		f.exponent += x[i] * k.exponent
		f.ceiling += x[i] * k.ceiling
	}
	return f
}

// diluteViscosity returns the dilute part of the recommended viscosity, or that of entropy scaling where it is out of the
// question.
func (m *Model) diluteViscosity(T float64) float64 {
	own, general := m.viscosity[0].model.dilute(T), m.scaledViscosity.model.dilute(T)
	if !plausible(own, general) {
		return general
	}
	return own
}

// diluteConductivity does the same for the thermal conductivity. The factor 1.32 of entropy scaling overpredicts many
// refrigerants by 10 to 35 %, so that the recommended part matters.
func (m *Model) diluteConductivity(T, cp0 float64) float64 {
	own, general := m.conductivity[0].model.dilute(T, cp0), m.scaledConductivity.model.dilute(T, cp0)
	if !plausible(own, general) {
		return general
	}
	return own
}

func (m *Mixture) value(property Property, p *point, x []float64, y float64) Value {
	r := &m.records[property]
	v := Value{Value: y, Uncertainty: r.Uncertainty.Gas, Record: r, T: p.T, P: p.p}
	var estimates float64
	for i, c := range m.components {
		if own := c.mixtureRecord(property); len(own.standing) > 0 {
			estimates += x[i] * own.Uncertainty.Liquid
		}
	}
	v.Uncertainty = math.Hypot(v.Uncertainty, estimates)
	v.extrapolate(r.check(p.T, p.p))
	return v
}

func (m *Mixture) refuse(p Property, s State) error {
	names := make([]string, len(m.components))
	for i, c := range m.components {
		names[i] = c.fluid.Designation
	}
	return &StateError{strings.Join(names, "/"), p, s.T, s.Rho}
}

// Phase is one of two phases in equilibrium.
type Phase struct {
	Rho float64   // mol/m3
	X   []float64 // mole fractions
}

// Saturation is the saturation curve of a component.
type Saturation struct {
	TMin, TCritical float64                                     // K
	At              func(T float64) (p, liquid, vapour float64) // Pa, mol/m3
}

// SurfaceTension returns the surface tension in N/m between liquid and vapour in equilibrium at T in K, or a
// [*StateError]. merge is the critical temperature of the mixture in K, curves are those of the components. The rule is
// that of Macleod and Sugden, with the parachor of each component at the same reduced temperature.
func (m *Mixture) SurfaceTension(T, merge float64, liquid, vapour Phase, curves []Saturation) (Value, error) {
	n := len(m.components)
	if !(T > 0 && merge > 0) || len(liquid.X) != n || len(vapour.X) != n || len(curves) != n {
		return Value{}, m.refuse(SurfaceTension, State{T: T})
	}
	r := &m.records[SurfaceTension]
	v := Value{Record: r, T: T}
	if T >= merge {
		return v, nil
	}
	var root float64
	for i, k := range curves {
		// Near the critical point a parachor is a quotient of two vanishing numbers, of which the equation of state gives
		// one badly; it hardly depends on temperature.
		Ti := min(max(T/merge*k.TCritical, k.TMin), 0.98*k.TCritical)
		_, l, g := k.At(Ti)
		parachor := math.Sqrt(math.Sqrt(m.components[i].tension[0].at(Ti, k.TCritical))) / (l - g)
		root += parachor * (liquid.X[i]*liquid.Rho - vapour.X[i]*vapour.Rho)
	}
	v.Value = root * root * root * root
	if !(root >= 0) || !finite(v.Value) {
		return Value{}, m.refuse(SurfaceTension, State{T: T})
	}
	v.Uncertainty = r.Uncertainty.Liquid
	v.extrapolate(r.check(T, 0))
	return v, nil
}
