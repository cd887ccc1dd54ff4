package machine

import "strings"

// machineField turns the path of a field of the cycle's request into that of the machine's or condition's.
func machineField(field string) string {
	head, rest, _ := strings.Cut(field, ".")
	switch head {
	case "":
		return ""
	case "evaporation":
		if rest == "superheat" {
			return "machine.superheat"
		}
		return "machine.evaporator"
	case "condensation":
		if rest == "subcooling" {
			return "machine.subcooling"
		}
		return "machine.condenser"
	case "gas_cooler":
		if rest == "outlet_temperature" || rest == "approach" {
			return "machine.condenser"
		}
	case "source_temperature":
		return "condition.source"
	case "sink_temperature":
		return "condition.sink"
	case "ambient_temperature":
		return "condition.ambient_temperature"
	case "size":
		return "machine.compressor"
	}
	return "machine." + field
}
