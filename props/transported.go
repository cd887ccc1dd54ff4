package props

import (
	"math"
	"slices"

	"dewmark/props/transport"
)

// Transport holds the transport properties of a state. A property that does not exist in the state's phase has the
// value NaN: viscosity and conductivity inside the dome, surface tension outside it.
type Transport struct {
	Viscosity           transport.Value // Pa s
	ThermalConductivity transport.Value // W/(m K)
	SurfaceTension      transport.Value // N/m
	Prandtl             float64         // Prandtl number
}

// Cautions returns the reservations about the values that exist.
func (t *Transport) Cautions() []transport.Caution {
	var out []transport.Caution
	for _, v := range []*transport.Value{&t.Viscosity, &t.ThermalConductivity, &t.SurfaceTension} {
		if !math.IsNaN(v.Value) {
			out = append(out, v.Cautions()...)
		}
	}
	return out
}

// Transport returns the transport properties of a state that r made, by the recommended published correlations. It
// returns a [*transport.StateError] when no correlation gives a usable value there.
func (r *Pure) Transport(s State) (Transport, error) {
	nan := transport.Value{Value: math.NaN()}
	t := Transport{Viscosity: nan, ThermalConductivity: nan, SurfaceTension: nan, Prandtl: math.NaN()}
	var err error
	if !math.IsNaN(s.Quality) {
		if t.SurfaceTension, err = r.flow.SurfaceTension(s.T, r.curve.TCritical); err != nil {
			return t, err
		}
	}
	if s.Phase == TwoPhase {
		return t, nil
	}
	at := transport.State{T: s.T, Rho: s.Rho / r.M, R: r.eq.R}
	r.eq.At(at.T, at.Rho, &at.Ideal, &at.Residual)
	t.Viscosity, t.ThermalConductivity, err = r.flow.ViscosityAndConductivity(at)
	if err != nil {
		return t, err
	}
	t.Prandtl = t.Viscosity.Value * s.Cp / t.ThermalConductivity.Value
	return t, nil
}

// TransportRecords returns what the transport correlations of a property are, in order of preference. The caller must
// not modify them.
func (r *Pure) TransportRecords(p transport.Property) []*transport.Record {
	return r.flow.Records(p)
}

// addTransport makes the transport models. Those by corresponding states lean on the models of R134a and R290, which
// are made first.
func addTransport(fluids []*fluid) error {
	references := []string{"R134a", "R290"}
	order := slices.Clone(fluids)
	slices.SortStableFunc(order, func(a, b *fluid) int {
		return slices.Index(references, b.rec.ID) - slices.Index(references, a.rec.ID)
	})
	var made []*transport.Model
	for i, f := range order {
		v := f.rec.Validity
		m, err := transport.New(transport.Fluid{
			Designation:    f.rec.ID,
			MolarMass:      f.M,
			Critical:       transport.Critical{T: f.rec.Critical.Temperature, P: f.rec.Critical.Pressure, Rho: f.rec.Critical.Density},
			Equation:       f.eq,
			TemperatureMin: v.TemperatureMin, TemperatureMax: v.TemperatureMax,
			PressureMax: v.PressureMax, DensityMax: v.DensityMax,
		}, f.rec.Transport, made...)
		if err != nil {
			return err
		}
		f.flow = m
		if i < len(references) {
			made = append(made, m)
		}
	}
	return nil
}
