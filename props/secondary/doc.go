// Package secondary computes the properties of what passes on the other side of a heat exchanger: water, aqueous glycol
// brines, liquids given as tables, and moist air.
//
// Units are SI: K, Pa (absolute), kg/m3, J/kg, J/(kg K), W/(m K), Pa s, mass fractions. Enthalpies of liquids count from
// 273.15 K; those of moist air from dry air and liquid water at 273.15 K and are per kilogram of dry air.
//
// Water comes from the equation of state and the transport correlations of R718 along one isobar, [WaterPressure], as
// Chebyshev expansions that follow it far closer than it is known. A rounded table would be as fast but has four digits
// and no consistent enthalpy; the equation itself costs microseconds where a solver asks thousands of times. Liquid water
// hardly feels its pressure: from 0.1 to 1 MPa density changes by 0.05 %, heat capacity by 0.07 % (IAPWS-95).
//
// Brines: Å. Melinder, Properties of Secondary Working Fluids for Indirect Systems, IIR 2010. Moist air: ASHRAE Handbook
// Fundamentals, chapter Psychrometrics, ideal-gas relations with the saturation pressures of Hyland and Wexler (1983).
//
// All values are immutable once made and safe for concurrent use. Errors are typed: [RangeError], [FluidError],
// [TableError].
package secondary
