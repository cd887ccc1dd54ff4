package transport

import (
	"cmp"
	"encoding/json"
	"errors"
	"fmt"
	"math"
	"slices"

	"dewmark/props/helmholtz"
)

// Model computes the transport properties of one refrigerant. It is immutable and safe for concurrent use.
type Model struct {
	fluid        Fluid
	viscosity    []viscosityRecord // by rank
	conductivity []conductivityRecord
	tension      []tensionRecord
	records      [SurfaceTension + 1][]*Record // of all of them

	// The general methods that stand in at a pole, and that mixtures use. They may be the recommended records themselves.
	scaledViscosity    *viscosityRecord
	scaledConductivity *conductivityRecord
}

// New makes the model of a refrigerant from the transport member of its coefficient file. Records by corresponding states
// need the models of their reference fluids, R134a and R290. It returns an error that names the record when one is
// malformed, and when the recommended records or those of entropy scaling are missing.
func New(f Fluid, records json.RawMessage, references ...*Model) (*Model, error) {
	m := &Model{fluid: f}
	if err := m.read(records, references); err != nil {
		return nil, fmt.Errorf("transport: %s: %w", f.Designation, err)
	}
	return m, nil
}

func (m *Model) read(records json.RawMessage, references []*Model) error {
	f := &m.fluid
	if f.Equation == nil || !(f.MolarMass > 0 && f.Critical.T > 0 && f.Critical.P > 0 && f.Critical.Rho > 0) {
		return errors.New("equation, molar mass and critical point must be given")
	}
	var in form
	if err := decode(records, &in); err != nil {
		return err
	}
	var err error
	m.viscosity, err = readAll(in.Viscosity, Viscosity, func(b json.RawMessage) (viscosityRecord, error) { return newViscosity(b, f, references) })
	if err != nil {
		return err
	}
	m.conductivity, err = readAll(in.ThermalConductivity, ThermalConductivity, func(b json.RawMessage) (conductivityRecord, error) { return newConductivity(b, f, references) })
	if err != nil {
		return err
	}
	m.tension, err = readAll(in.SurfaceTension, SurfaceTension, func(b json.RawMessage) (tensionRecord, error) { return newTension(b, f) })
	if err != nil {
		return err
	}
	slices.SortStableFunc(m.viscosity, func(a, b viscosityRecord) int { return cmp.Compare(a.Rank, b.Rank) })
	slices.SortStableFunc(m.conductivity, func(a, b conductivityRecord) int { return cmp.Compare(a.Rank, b.Rank) })
	slices.SortStableFunc(m.tension, func(a, b tensionRecord) int { return cmp.Compare(a.Rank, b.Rank) })
	for i := range m.viscosity {
		if s, ok := m.viscosity[i].model.(*entropyScaledViscosity); ok && s.inMixtures {
			m.scaledViscosity = &m.viscosity[i]
		}
	}
	for i := range m.conductivity {
		if s, ok := m.conductivity[i].model.(*entropyScaledConductivity); ok && s.inMixtures {
			m.scaledConductivity = &m.conductivity[i]
		}
	}
	if m.scaledViscosity == nil || m.scaledConductivity == nil || m.scaledConductivity.critical == nil {
		return errors.New("no entropy_scaling record with use_in_mixtures for viscosity or thermal conductivity")
	}
	for i := range m.viscosity {
		m.records[Viscosity] = append(m.records[Viscosity], &m.viscosity[i].Record)
	}
	for i := range m.conductivity {
		m.records[ThermalConductivity] = append(m.records[ThermalConductivity], &m.conductivity[i].Record)
	}
	for i := range m.tension {
		m.records[SurfaceTension] = append(m.records[SurfaceTension], &m.tension[i].Record)
	}
	return nil
}

// readAll reads the records of one property.
func readAll[R any](in []json.RawMessage, p Property, read func(json.RawMessage) (R, error)) ([]R, error) {
	if len(in) == 0 {
		return nil, fmt.Errorf("no records of %s", p)
	}
	out := make([]R, len(in))
	for i, b := range in {
		var err error
		if out[i], err = read(b); err != nil {
			return nil, fmt.Errorf("%s record %d: %w", p, i, err)
		}
	}
	return out, nil
}

// Records returns the descriptions of the records of p in order of preference. The caller must not modify them.
func (m *Model) Records(p Property) []*Record {
	if int(p) >= len(m.records) {
		return nil
	}
	return m.records[p]
}

// State returns the state at T in K and rho in mol/m3 from the equation of state of the refrigerant. A caller that has
// solved the equation already makes a State of its own.
func (m *Model) State(T, rho float64) State {
	var iso helmholtz.Isotherm
	iso.Set(m.fluid.Equation, T)
	s := State{T: T, Rho: rho, R: m.fluid.Equation.R, Ideal: iso.Ideal}
	if rho > 0 {
		s.Residual = iso.Residual(rho)
	}
	return s
}

// Viscosity returns the viscosity in Pa s, or a [*StateError].
func (m *Model) Viscosity(s State) (Value, error) {
	p, ok := newPoint(s, m.fluid.MolarMass)
	if !ok {
		return Value{}, m.refuse(Viscosity, s)
	}
	return m.viscosityAt(&p)
}

// ThermalConductivity returns the thermal conductivity in W/(m K), or a [*StateError].
func (m *Model) ThermalConductivity(s State) (Value, error) {
	_, v, err := m.ViscosityAndConductivity(s)
	return v, err
}

// ViscosityAndConductivity returns both for little more than the cost of the conductivity, whose critical enhancement
// needs the viscosity.
func (m *Model) ViscosityAndConductivity(s State) (eta, lambda Value, err error) {
	p, ok := newPoint(s, m.fluid.MolarMass)
	if !ok {
		return Value{}, Value{}, m.refuse(ThermalConductivity, s)
	}
	if eta, err = m.viscosityAt(&p); err == nil {
		lambda, err = m.conductivityAt(&p, eta.Value)
	}
	return eta, lambda, err
}

// Outside its range of temperature the dilute part of a correlation may bend away or turn negative. Where it is not within
// this factor of that of entropy scaling, which is sound, a gas property comes from there. The rule is this project's own.
const gasFactor = 1.5

// extrapolated is the least relative uncertainty that is stated outside the range of a record: the order of the spread
// between correlations of one fluid where no data restrain them.
const extrapolated = 0.10

// viscosityAt evaluates the recommended viscosity, or entropy scaling where that is not usable.
func (m *Model) viscosityAt(p *point) (Value, error) {
	v, ok := m.viscosityOf(&m.viscosity[0], p)
	if ok && m.gasOutside(&v, p) {
		ok = v.compare(m.viscosity[0].model.dilute(p.T), m.scaledViscosity.model.dilute(p.T))
	}
	if !ok {
		if v, ok = m.viscosityOf(m.scaledViscosity, p); !ok {
			return Value{}, m.refuse(Viscosity, p.State)
		}
		v.reservations |= substituted
	}
	return v, nil
}

func (m *Model) viscosityOf(r *viscosityRecord, p *point) (Value, bool) {
	if p.mass > r.densest {
		return Value{}, false
	}
	p.conformTo(&m.fluid, r.conforms)
	eta, ok := r.model.viscosity(*p)
	v := m.value(&r.Record, p, eta)
	if s, scaled := r.model.(*entropyScaledViscosity); scaled && p.residualEntropy() > s.fit.end {
		v.continued()
	}
	if r.conforms != nil && p.conforms.beyond() {
		v.extrapolate(beyondReference)
	}
	if d := p.T/m.fluid.Critical.T - 1; -r.critical < d && d < r.critical {
		v.reservations |= nearCritical
	}
	return v, ok && eta > 0 && finite(eta)
}

// conductivityAt evaluates the recommended thermal conductivity, or entropy scaling where that is not usable.
func (m *Model) conductivityAt(p *point, eta float64) (Value, error) {
	v, ok := m.conductivityOf(&m.conductivity[0], p, eta)
	if ok && m.gasOutside(&v, p) {
		ok = v.compare(m.conductivity[0].model.dilute(p.T, p.cp0), m.scaledConductivity.model.dilute(p.T, p.cp0))
	}
	if !ok {
		if v, ok = m.conductivityOf(m.scaledConductivity, p, eta); !ok {
			return Value{}, m.refuse(ThermalConductivity, p.State)
		}
		v.reservations |= substituted
	}
	return v, nil
}

func (m *Model) conductivityOf(r *conductivityRecord, p *point, eta float64) (Value, bool) {
	p.conformTo(&m.fluid, r.conforms)
	lambda, ok := r.model.background(*p)
	v := m.value(&r.Record, p, lambda)
	if r.conforms != nil && p.conforms.beyond() {
		v.extrapolate(beyondReference)
	}
	switch {
	case r.critical != nil:
		add, limited := r.critical.at(p, eta)
		v.Value += add
		if limited { // as uncertain as it is large
			v.Uncertainty = math.Hypot(v.Uncertainty, add/v.Value)
			v.reservations |= nearCritical
		}
	case !r.peaked:
		// The record knows no enhancement; that of the general method measures what is missing.
		if add, _ := m.scaledConductivity.critical.at(p, eta); add > v.Uncertainty*lambda {
			v.Uncertainty = math.Hypot(v.Uncertainty, add/lambda)
			v.reservations |= nearCritical
		}
	}
	return v, ok && lambda > 0 && v.Value > 0 && finite(v.Value)
}

// gasOutside reports whether v is a gas property outside the temperature range of its record.
func (m *Model) gasOutside(v *Value, p *point) bool {
	return v.reservations&beyondTemperature != 0 && p.Rho <= m.fluid.Critical.Rho
}

// compare reports whether the dilute part of a correlation outside its range is plausible beside the general one. What they
// differ by is the least uncertainty of v.
func (v *Value) compare(own, general float64) bool {
	if !plausible(own, general) {
		return false
	}
	v.Uncertainty = max(v.Uncertainty, math.Abs(math.Log(own/general)))
	return true
}

// plausible reports whether the dilute part of a correlation is within a factor of the general one.
func plausible(v, general float64) bool { return v < gasFactor*general && general < gasFactor*v }

// SurfaceTension returns the surface tension in N/m at temperature T in K, or a [*StateError]. It vanishes at and above
// merge, the temperature in K at which the two phases of the equation of state merge.
func (m *Model) SurfaceTension(T, merge float64) (Value, error) {
	r := &m.tension[0]
	sigma := r.at(T, merge)
	if !(T > 0 && merge > 0 && sigma >= 0) || !finite(sigma) {
		return Value{}, &StateError{Refrigerant: m.fluid.Designation, Property: SurfaceTension, T: T}
	}
	v := Value{Value: sigma, Uncertainty: r.Uncertainty.Liquid, Record: &r.Record, T: T}
	if T < merge {
		v.extrapolate(r.check(T, 0))
	}
	return v, nil
}

func (m *Model) value(r *Record, p *point, x float64) Value {
	v := Value{Value: x, Uncertainty: r.Uncertainty.Gas, Record: r, T: p.T, P: p.p}
	if p.Rho > m.fluid.Critical.Rho {
		v.Uncertainty = r.Uncertainty.Liquid
	}
	v.extrapolate(r.check(p.T, p.p))
	return v
}

func (m *Model) refuse(p Property, s State) error {
	return &StateError{m.fluid.Designation, p, s.T, s.Rho}
}

// conformTo finds the conformal state in reference fluid r, unless it is known or not needed.
func (p *point) conformTo(f, r *Fluid) {
	if r == nil || p.conforms.fluid == r {
		return
	}
	p.conforms = conform(p, f, r)
}

// idealHeatCapacity returns the isobaric heat capacity of the ideal gas in J/(mol K).
func (m *Model) idealHeatCapacity(T float64) float64 {
	var iso helmholtz.Isotherm
	iso.Set(m.fluid.Equation, T)
	return m.fluid.Equation.R * (1 - iso.Ideal.TT)
}
