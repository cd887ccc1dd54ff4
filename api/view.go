package api

import (
	"math"
	"slices"
	"strconv"
	"strings"

	"dewmark/props"
	"dewmark/props/transport"
)

// solved is a state with what its surroundings say about it.
type solved struct {
	props.State
	props.Surroundings
	transport props.Transport
	derived   props.Derived
}

// noTransport stands where transport properties are not wanted.
var noTransport = props.Transport{
	Viscosity: transport.Value{Value: math.NaN()}, ThermalConductivity: transport.Value{Value: math.NaN()},
	SurfaceTension: transport.Value{Value: math.NaN()}, Prandtl: math.NaN(),
}

// noSurroundings stands where the saturation around a state is not wanted.
var noSurroundings = props.Surroundings{Bubble: math.NaN(), Dew: math.NaN(), Superheat: math.NaN(), Subcooling: math.NaN()}

// surround makes s the state, with the saturation at its pressure when it is wanted.
func (around *solved) surround(r props.Refrigerant, s props.State, wanted *selection) {
	*around = solved{State: s, Surroundings: noSurroundings, transport: noTransport}
	if wanted.saturation {
		around.Surroundings = props.Surround(r, s)
	}
}

// stateField is a member of a state.
type stateField struct {
	name  string
	kind  kind
	value func(*solved) float64 // SI; NaN where the state has no such property
}

// stateFields are the members of a state in the order they are written.
var stateFields = [...]stateField{
	{"phase", kindNone, nil}, // the one member that is no number; always shown
	{"temperature", kindTemperature, func(s *solved) float64 { return s.T }},
	{"pressure", kindPressure, func(s *solved) float64 { return s.P }},
	{"density", kindDensity, func(s *solved) float64 { return s.Rho }},
	{"specific_volume", kindSpecificVolume, func(s *solved) float64 { return s.V() }},
	{"enthalpy", kindEnthalpy, func(s *solved) float64 { return s.H }},
	{"entropy", kindEntropy, func(s *solved) float64 { return s.S }},
	{"internal_energy", kindEnthalpy, func(s *solved) float64 { return s.U }},
	{"quality", kindNone, func(s *solved) float64 { return s.Quality }},
	{"isobaric_heat_capacity", kindEntropy, func(s *solved) float64 { return s.Cp }},
	{"isochoric_heat_capacity", kindEntropy, func(s *solved) float64 { return s.Cv }},
	{"speed_of_sound", kindVelocity, func(s *solved) float64 { return s.W }},
	{"compressibility_factor", kindNone, func(s *solved) float64 { return s.Z }},
	{"isentropic_exponent", kindNone, func(s *solved) float64 { return s.IsentropicExponent() }},
	{"joule_thomson_coefficient", kindJouleThomson, func(s *solved) float64 { return s.JouleThomson() }},
	{"isothermal_compressibility", kindCompressibility, func(s *solved) float64 { return s.IsothermalCompressibility() }},
	{"volume_expansivity", kindExpansivity, func(s *solved) float64 { return s.Expansivity() }},
	{"viscosity", kindViscosity, func(s *solved) float64 { return s.transport.Viscosity.Value }},
	{"thermal_conductivity", kindThermalConductivity, func(s *solved) float64 { return s.transport.ThermalConductivity.Value }},
	{"prandtl_number", kindNone, func(s *solved) float64 { return s.transport.Prandtl }},
	{"surface_tension", kindSurfaceTension, func(s *solved) float64 { return s.transport.SurfaceTension.Value }},
	{"dew_temperature", kindTemperature, func(s *solved) float64 { return s.Dew }},
	{"bubble_temperature", kindTemperature, func(s *solved) float64 { return s.Bubble }},
	{"superheat", kindTemperatureDifference, func(s *solved) float64 { return s.Superheat }},
	{"subcooling", kindTemperatureDifference, func(s *solved) float64 { return s.Subcooling }},
	// Only for those who ask:
	{"density_by_enthalpy", kindDensityByEnthalpy, func(s *solved) float64 { return s.derived.DensityByEnthalpy }},
	{"density_by_pressure", kindDensityByPressure, func(s *solved) float64 { return s.derived.DensityByPressure }},
	{"fundamental_derivative", kindNone, func(s *solved) float64 { return s.derived.Fundamental }},
}

// The members that are objects: the mass fractions of both phases of a blend inside the dome and at its edges. They stand
// in no other state.
const liquidComposition, vapourComposition = "liquid_composition", "vapour_composition"

// The fields that need more than the state itself: transport properties, then what the saturation around the state
// decides, then derivatives, which are shown only when a request names them.
var firstTransportField, firstSaturationField, firstDerivedField = fieldNamed("viscosity"), fieldNamed("dew_temperature"), fieldNamed("density_by_enthalpy")

// selection is what a request wants to see of a state besides its phase.
type selection struct {
	saturation bool  // some field needs the saturation around the state
	derived    bool  // some field is a derivative
	liquid     bool  // the composition of the liquid of a blend, where there is one
	vapour     bool  // likewise of the vapour
	fields     []int // of stateFields, rising

	transport []transport.Property // the transport properties that the fields rest on
}

// everything selects all members but the derivatives.
var everything = func() *selection {
	s := &selection{saturation: true, transport: transportProperties, liquid: true, vapour: true}
	for i := 1; i < firstDerivedField; i++ {
		s.fields = append(s.fields, i)
	}
	return s
}()

// selectFields returns the selection that names make, all members when there are none.
func selectFields(names []string) (*selection, error) {
	if len(names) == 0 {
		return everything, nil
	}
	var faults []MemberError
	var wanted [len(stateFields)]bool
	s := &selection{}
	for i, name := range names {
		switch name {
		case liquidComposition:
			s.liquid = true
			continue
		case vapourComposition:
			s.vapour = true
			continue
		}
		f := fieldNamed(name)
		if f <= 0 {
			faults = append(faults, MemberError{
				Pointer: "#/properties/" + strconv.Itoa(i), Code: "not_allowed",
				Detail: quote(name) + " cannot be selected; allowed are " + strings.Join(selectable(), ", "),
			})
			continue
		}
		wanted[f] = true
	}
	for i, yes := range wanted {
		if yes {
			s.fields = append(s.fields, i)
			s.derived = s.derived || i >= firstDerivedField
			s.saturation = s.saturation || i >= firstSaturationField && i < firstDerivedField
		}
	}
	for _, p := range transportProperties {
		if s.has(memberOf(p)) || p != transport.SurfaceTension && s.has("prandtl_number") {
			s.transport = append(s.transport, p)
		}
	}
	return s, invalid(faults)
}

// has reports whether the selection shows the member with that name.
func (s *selection) has(name string) bool { return slices.Contains(s.fields, fieldNamed(name)) }

func fieldNamed(name string) int {
	for i := range stateFields {
		if stateFields[i].name == name {
			return i
		}
	}
	return -1
}

func selectable() []string {
	var names []string
	for _, f := range stateFields[1:] {
		names = append(names, f.name)
	}
	return append(names, liquidComposition, vapourComposition)
}

// kinds returns the kinds of quantity that the selection shows.
func (s *selection) kinds() []kind {
	kinds := make([]kind, len(s.fields))
	for i, f := range s.fields {
		kinds[i] = stateFields[f].kind
	}
	return kinds
}

// stateView is a state in the caller's units. Its members stand in the object that holds it.
type stateView struct {
	shown        *selection
	phase        string
	numbers      [len(stateFields)]float64 // those shown; null where not a number
	extrapolated bool                      // outside the validity of the equation; written only when it is so

	components     []string // of a blend
	liquid, vapour []float64
}

// fill makes v the view of s, a state of the refrigerant with those components.
func (v *stateView) fill(s *solved, components []string, u *units, shown *selection) {
	v.shown, v.phase = shown, s.Phase.String()
	v.components, v.liquid, v.vapour = components, nil, nil
	if shown.liquid {
		v.liquid = s.LiquidComposition
	}
	if shown.vapour {
		v.vapour = s.VapourComposition
	}
	for _, i := range shown.fields {
		f := &stateFields[i]
		v.numbers[i] = u.out(f.kind, f.value(s))
	}
}

// echo puts the caller's own number in its place: converting there and back can change the last digit.
func (v *stateView) echo(member string, number float64) {
	if i := fieldNamed(member); i >= 0 {
		v.numbers[i] = number
	}
}

// write adds the members of v to o.
func (v *stateView) write(o *object) {
	o.text("phase", v.phase)
	for _, i := range v.shown.fields {
		o.number(stateFields[i].name, v.numbers[i])
	}
	v.composition(o, liquidComposition, v.liquid)
	v.composition(o, vapourComposition, v.vapour)
	if v.extrapolated {
		o.name("extrapolated")
		o.b = append(o.b, "true"...)
	}
}

// composition adds the mass fractions of a phase, if it has any.
func (v *stateView) composition(o *object, name string, fractions []float64) {
	if fractions == nil {
		return
	}
	o.name(name)
	inner := begin(o.b)
	for i, w := range fractions {
		inner.number(v.components[i], w)
	}
	o.b = inner.end()
}

// member adds v to o as a member of that name.
func (v *stateView) member(o *object, name string) {
	o.name(name)
	inner := begin(o.b)
	v.write(&inner)
	o.b = inner.end()
}

// MarshalJSON writes v as an object of its own.
func (v stateView) MarshalJSON() ([]byte, error) {
	o := begin(nil)
	v.write(&o)
	return o.end(), nil
}
