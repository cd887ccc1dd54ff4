// Package machine finds where a machine settles: the evaporation and condensation at which its compressor moves just the
// heat that its exchangers pass, with given source and sink.
//
// Units are SI: K, Pa (absolute), kg/s, m3/s, W, W/K, 1/s for speeds, J per kg of dry air for moist air. A speed is whatever
// swept volume and maps count by, revolutions or supply frequency. Flows of moist air are of moist air, at the inlet.
//
// A [Machine] is a compressor, an evaporator, a condenser or gas cooler and their [cycle.Layout]. A [Condition] says what
// passes through its exchangers. [Solve] answers with an [OperatingPoint]: a solved cycle with its accounts, the exchangers'
// zones, and the system with its fans and pumps. [Rate] fills a table of operating points, [FitMap] turns measured points
// into the coefficients of a map.
//
// Evaporation and condensation temperatures are dew points. Each exchanger is described by its conductance, by the smallest
// difference of temperatures in it, or by an approach at one of its ends.
//
// A machine or condition that cannot be is refused with a [*RefusedError], whose refusals name the field and the reason. A
// field's path begins with "machine", "condition" or "site"; the comment of a field names its path where it is not the field's own
// name in lower case.
package machine
