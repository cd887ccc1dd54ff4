package props

import (
	"math"

	"dewmark/props/blend"
	"dewmark/props/helmholtz"
	"dewmark/props/transport"
)

// Blend computes the states of a refrigerant blend, with enthalpy and entropy counted from one datum. Its saturation is
// two lines, bubble and dew, and inside the dome both phases have compositions of their own. It is immutable and safe for
// concurrent use.
type Blend struct {
	*blend.Blend
	flow    *transport.Mixture
	curves  []transport.Saturation // of the components
	sources []string               // of the components' equations
}

// newBlend completes a blend with the transport models of its components.
func (c *Catalogue) newBlend(b *blend.Blend) (*Blend, error) {
	out := &Blend{Blend: b}
	var models []*transport.Model
	for _, id := range b.Components() {
		f := c.byName[foldName(id)]
		curve := f.saturation()
		models = append(models, f.flow)
		out.sources = append(out.sources, f.rec.Source)
		out.curves = append(out.curves, transport.Saturation{TMin: curve.TMin, TCritical: curve.TCritical, At: curve.At})
	}
	var err error
	out.flow, err = transport.NewMixture(models...)
	return out, err
}

// WithDatum returns a view that counts from d. It returns a [*DatumError] when the blend cannot.
func (b *Blend) WithDatum(d Datum) (*Blend, error) {
	inner, err := b.Blend.WithDatum(d)
	if err != nil {
		return nil, err
	}
	view := *b
	view.Blend = inner
	return &view, nil
}

// Extrapolate returns a view that also answers above the limits, like [Pure.Extrapolate].
func (b *Blend) Extrapolate() *Blend {
	view := *b
	view.Blend = b.Blend.Extrapolate()
	return &view
}

// NormalBoilingPoint returns the bubble temperature at 101.325 kPa in K, or NaN when there is none.
func (b *Blend) NormalBoilingPoint() float64 {
	bubble, _ := b.NormalPoints()
	return bubble
}

// Identity returns what is known of the blend besides its states.
func (b *Blend) Identity() Identity {
	id := Identity{
		Designation: b.Designation(), Name: b.Describe(), Kind: KindBlend,
		Classification: b.Classification(), Acentric: math.NaN(),
		Model: "multi-fluid mixture model explicit in the Helmholtz energy", Pairs: b.Pairs(),
	}
	w, x := b.MassFractions(), b.MoleFractions()
	for i, component := range b.Components() {
		id.Composition = append(id.Composition, Share{component, w[i], x[i], b.sources[i]})
	}
	if listed := b.Listed(); listed != nil {
		id.Source, id.Notes = listed.Source, listed.Note
	}
	return id
}

// Reservations returns what must be said with every answer of the blend: pairs of components without published
// parameters.
func (b *Blend) Reservations() []blend.Caution { return b.Cautions() }

// Derived returns the derivatives of a state that b made, by differences between neighbouring states. The fundamental
// derivative of a blend is not computed.
func (b *Blend) Derived(s State) Derived {
	nan := math.NaN()
	d := Derived{DensityByEnthalpy: nan, DensityByPressure: nan, Fundamental: nan}
	const h = 1e-6
	dh, dp := h*(math.Abs(s.H)+1e5), h*s.P
	lo, e1 := b.PressureEnthalpy(s.P, s.H-dh)
	hi, e2 := b.PressureEnthalpy(s.P, s.H+dh)
	if e1 == nil && e2 == nil {
		d.DensityByEnthalpy = -s.Rho * s.Rho * (hi.V() - lo.V()) / (2 * dh)
	}
	down, e3 := b.PressureEnthalpy(s.P-dp, s.H)
	up, e4 := b.PressureEnthalpy(s.P+dp, s.H)
	if e3 == nil && e4 == nil {
		d.DensityByPressure = -s.Rho * s.Rho * (up.V() - down.V()) / (2 * dp)
	}
	return d
}

// Transport returns the transport properties of a state that b made, like [Pure.Transport], by the mixture form of
// residual-entropy scaling and the parachor rule.
func (b *Blend) Transport(s State) (Transport, error) {
	nan := transport.Value{Value: math.NaN()}
	t := Transport{Viscosity: nan, ThermalConductivity: nan, SurfaceTension: nan, Prandtl: math.NaN()}
	var err error
	if s.LiquidComposition != nil {
		if t.SurfaceTension, err = b.surfaceTension(s); err != nil {
			return t, err
		}
	}
	if s.Phase == TwoPhase {
		return t, nil
	}
	x := b.MoleFractions()
	reference := b.flow.ReferenceTemperature(x)
	critical := b.Critical()
	t.Viscosity, t.ThermalConductivity, err = b.flow.ViscosityAndConductivity(transport.MixtureState{
		State: b.flowState(s.T, s.Rho),
		X:     x,
		Critical: &transport.MixtureCritical{
			P: critical.P, Rho: critical.Rho / b.MolarMass(), Slope: b.slope(reference, s.Rho),
		},
	})
	if err != nil {
		return t, err
	}
	t.Prandtl = t.Viscosity.Value * s.Cp / t.ThermalConductivity.Value
	return t, nil
}

// flowState returns a single phase of the blend as the transport models see it.
func (b *Blend) flowState(T, rho float64) transport.State {
	ideal, residual, R := b.Helmholtz(T, rho)
	return transport.State{T: T, Rho: rho / b.MolarMass(), R: R, Ideal: helmholtz.Alpha{TT: ideal.TT}, Residual: residual}
}

// slope returns (dp/d rho) at constant temperature per mole, J/mol.
func (b *Blend) slope(T, rho float64) float64 {
	_, r, R := b.Helmholtz(T, rho)
	return R * T * (1 + 2*r.D + r.DD)
}

// surfaceTension returns the tension between the two phases of a state inside the dome or at its edge.
func (b *Blend) surfaceTension(s State) (transport.Value, error) {
	liquid, vapour, ok := b.Phases(s)
	if !ok {
		return transport.Value{Value: math.NaN()}, nil
	}
	return b.flow.SurfaceTension(s.T, b.Critical().T,
		transport.Phase{Rho: liquid.Rho, X: liquid.X}, transport.Phase{Rho: vapour.Rho, X: vapour.X}, b.curves)
}

// TransportRecords returns what the mixture form of a property is and rests on. The caller must not modify it.
func (b *Blend) TransportRecords(p transport.Property) []*transport.Record {
	return []*transport.Record{b.flow.Record(p)}
}
