// Package props computes thermodynamic states of refrigerants from equations of state that are explicit in the Helmholtz
// energy.
//
// Units are SI and per mass: K, Pa (absolute), kg/m3, J/kg, J/(kg K), m/s, Pa s, W/(m K). Enthalpy, entropy and internal
// energy count from the [Datum] of the [Refrigerant] value that computed them.
//
// A [Catalogue] holds the refrigerants. A [Refrigerant] answers questions about states:
//
//	catalogue, err := props.NewCatalogue()
//	propane, err := catalogue.Refrigerant("R290", props.DefaultDatum)
//	suction, err := propane.TemperaturePressure(278.15, 400e3)
//
// Any two independent properties out of temperature, pressure, density, enthalpy, entropy, internal energy and vapour
// quality fix a state; [Pure.States] takes any such pair and returns every solution.
//
// All values are immutable once made and safe for concurrent use. Errors are typed: [RangeError], [AmbiguousError],
// [NoSolutionError], [ConvergenceError], [DependentPairError], [UnknownRefrigerantError], [DatumError], [ConditionError],
// [transport.StateError].
package props
