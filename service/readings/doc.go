// Package readings tells from its sensors how a running machine is doing, and how sure that is.
//
// Units are SI: K, Pa (absolute), kg/s, m3/s, W, J/kg, 1/s. Units and gauge pressures of other kinds are converted before;
// an [Installation] says what is still to be known of gauges.
//
// An [Installation] describes what is the same for all samples of a machine: its refrigerant, where pressures are read,
// and how uncertain its sensors are. [New] checks it and returns an [Evaluator], whose [Evaluator.Evaluate] answers a
// [Sample] with a [Result]: states, capacities, power, COP and efficiency with uncertainties, what does not fit together,
// and, where a machine is given to compare with, what its deviations point to. A [Series] goes through many samples in
// constant memory, keeps the steady ones and sums up.
//
// Places in the circuit have the labels of package [cycle]. A place whose pressure or temperature is not read takes that
// of the place before it, or the evaporator outlet that of the compressor suction:
//
//	1  compressor suction     4  condenser or gas cooler outlet ("liquid")
//	2  compressor discharge   5  expansion valve inlet
//	3  condenser inlet        7  evaporator outlet
//
// Evaporation and condensation temperatures are dew points at 7 and 4, superheat counts from dew, subcooling from bubble.
// A state closer to saturation than twice the uncertainty of its distance might be wet: its quality is unknown, and so is
// its enthalpy.
//
// Power is what the compressor takes, at the terminals where its reading is electrical; efficiencies and COP refer to it.
//
// Uncertainty: JCGM 100:2008 (GUM) and JCGM 101:2008. Measuring installed machines: P. Fahlén, Methods for commissioning
// and performance checking of heat pumps and refrigeration equipment, and Nordtest NT VVS 115 and 116. Faults: T. M. Rossi
// and J. E. Braun, HVAC&R Research 3(1):19 (1997).
//
// Results are indications. Refrigerant circuits are under pressure and may be flammable or toxic: local codes and licensed
// persons decide what is done to a machine.
package readings
