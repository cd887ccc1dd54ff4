// Package cycle solves vapour-compression cycles: the states of the refrigerant around the circuit, and the mass, energy,
// entropy and exergy account of every component at steady state.
//
// Units are SI: K, Pa (absolute), J/kg, J/(kg K), kg/m3, kg/s, W, W/K, m3/s. Work into the machine and heat into the
// refrigerant are positive; capacities and powers of [Performance] are magnitudes. Kinetic and potential energy are left
// out except inside an ejector. Exergy counts from the ambient temperature of the request.
//
// A [Request] names a [Layout], the arrangement of the components, and gives what the layout needs. [Solve] answers
// with a [Solution], or with a [*RefusedError] that says which fields of the request cannot be, why, and what is allowed.
//
// The evaporating pressure is the one at the evaporator outlet, the condensing pressure the one at the condenser outlet.
// Both go by the dew point unless the request says otherwise; superheat counts from dew, subcooling from bubble.
//
// Places in the circuit have the same label in every layout; a component that is absent or idle leaves two labels with
// one state:
//
//	1  compressor suction       5  expansion valve inlet
//	2  compressor discharge     6  evaporator inlet
//	2s isentropic end of 1-2    7  evaporator outlet
//	3  condenser inlet          L  suffix: low stage or lower circuit    i  suffix: injection
//	4  condenser outlet         H  suffix: high stage or upper circuit   m  suffix: intermediate
//
// Balances, exergy and reference cycles: Moran and Shapiro, Fundamentals of Engineering Thermodynamics; Gosney,
// Principles of Refrigeration (1982); Granryd et al., Refrigerating Engineering (KTH).
package cycle
