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
	bubble, dew           float64 // K, saturation temperatures at its pressure; NaN where there are none
	superheat, subcooling float64 // K; NaN in the wrong phase
	transport             props.Transport
	derived               props.Derived
}

// noTransport stands where transport properties are not wanted.
var noTransport = props.Transport{
	Viscosity: transport.Value{Value: math.NaN()}, ThermalConductivity: transport.Value{Value: math.NaN()},
	SurfaceTension: transport.Value{Value: math.NaN()}, Prandtl: math.NaN(),
}

// surround makes s the state, with the saturation at its pressure when it is wanted.
func (around *solved) surround(r props.Refrigerant, s props.State, wanted *selection) {
	nan := math.NaN()
	*around = solved{State: s, bubble: nan, dew: nan, superheat: nan, subcooling: nan, transport: noTransport}
	if !wanted.saturation {
		return
	}
	bubble, err := r.BubbleTemperature(s.P)
	if err != nil {
		return
	}
	dew, err := r.DewTemperature(s.P)
	if err != nil {
		return
	}
	around.bubble, around.dew = bubble, dew
	switch { // the ends of the dome exactly, in spite of rounding
	case s.Quality == 0:
		around.bubble, around.subcooling = s.T, 0
	case s.Quality == 1:
		around.dew, around.superheat = s.T, 0
	case s.Phase == props.Liquid:
		around.subcooling = bubble - s.T
	case s.Phase == props.Vapour:
		around.superheat = s.T - dew
	}
	if _, pure := r.(*props.Pure); pure && !math.IsNaN(s.Quality) {
		around.bubble, around.dew = s.T, s.T
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
	{"dew_temperature", kindTemperature, func(s *solved) float64 { return s.dew }},
	{"bubble_temperature", kindTemperature, func(s *solved) float64 { return s.bubble }},
	{"superheat", kindTemperatureDifference, func(s *solved) float64 { return s.superheat }},
	{"subcooling", kindTemperatureDifference, func(s *solved) float64 { return s.subcooling }},
	// Only for those who ask:
	{"density_by_enthalpy", kindDensityByEnthalpy, func(s *solved) float64 { return s.derived.DensityByEnthalpy }},
	{"density_by_pressure", kindDensityByPressure, func(s *solved) float64 { return s.derived.DensityByPressure }},
	{"fundamental_derivative", kindNone, func(s *solved) float64 { return s.derived.Fundamental }},
}

// The fields that need more than the state itself: transport properties, then what the saturation around the state
// decides, then derivatives, which are shown only when a request names them.
var firstTransportField, firstSaturationField, firstDerivedField = fieldNamed("viscosity"), fieldNamed("dew_temperature"), fieldNamed("density_by_enthalpy")

// selection is what a request wants to see of a state besides its phase.
type selection struct {
	saturation bool  // some field needs the saturation around the state
	transport  bool  // some field is a transport property
	derived    bool  // some field is a derivative
	fields     []int // of stateFields, rising
}

// everything selects all members but the derivatives.
var everything = func() *selection {
	s := &selection{saturation: true, transport: true}
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
	for i, name := range names {
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
	s := &selection{}
	for i, yes := range wanted {
		if yes {
			s.fields = append(s.fields, i)
			s.derived = s.derived || i >= firstDerivedField
			s.saturation = s.saturation || i >= firstSaturationField && i < firstDerivedField
			s.transport = s.transport || i >= firstTransportField && i < firstSaturationField
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
	return names
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
}

// fill makes v the view of s.
func (v *stateView) fill(s *solved, u *units, shown *selection) {
	v.shown, v.phase = shown, s.Phase.String()
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
	if v.extrapolated {
		o.name("extrapolated")
		o.b = append(o.b, "true"...)
	}
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
