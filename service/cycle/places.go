package cycle

// place is a point of the circuit that has a label. The order of the constants is the order of a solution's states.
type place uint8

const (
	suction              place = iota // 1
	firstStepDischarge                // 2i
	firstStepIsentropic               // 2si
	mixedInjection                    // 3i
	discharge                         // 2
	isentropic                        // 2s
	lowSuction                        // 1L
	lowDischarge                      // 2L
	lowIsentropic                     // 2sL
	highSuction                       // 1H
	highDischarge                     // 2H
	highIsentropic                    // 2sH
	parallelSuction                   // 1m
	parallelDischarge                 // 2m
	parallelIsentropic                // 2sm
	header                            // 3m
	condenserInlet                    // 3
	condenserOutlet                   // 4
	liquidLineOutlet                  // 4m
	branchedLiquid                    // 4i
	injectionValveInlet               // 5i
	injectionValveOutlet              // 6i
	injection                         // 7i
	highValveInlet                    // 5H
	highValveOutlet                   // 6H
	valveInlet                        // 5
	ejectorOutlet                     // 6m
	separatorVapour                   // 1m
	lowValveInlet                     // 5L
	evaporatorInlet                   // 6
	evaporatorOutlet                  // 7
	exchangerVapour                   // 7m
	placeCount
)

type name struct{ label, words string }

var plainPlaces = [placeCount]name{
	suction:              {"1", "compressor suction"},
	firstStepDischarge:   {"2i", "end of first compression step"},
	firstStepIsentropic:  {"2si", "isentropic end of first compression step"},
	mixedInjection:       {"3i", "after mixing with injection"},
	discharge:            {"2", "compressor discharge"},
	isentropic:           {"2s", "isentropic end of compression"},
	lowSuction:           {"1L", "low-stage compressor suction"},
	lowDischarge:         {"2L", "low-stage compressor discharge"},
	lowIsentropic:        {"2sL", "isentropic end of low-stage compression"},
	highSuction:          {"1H", "high-stage compressor suction"},
	highDischarge:        {"2H", "high-stage compressor discharge"},
	highIsentropic:       {"2sH", "isentropic end of high-stage compression"},
	parallelSuction:      {"1m", "parallel compressor suction"},
	parallelDischarge:    {"2m", "parallel compressor discharge"},
	parallelIsentropic:   {"2sm", "isentropic end of parallel compression"},
	header:               {"3m", "discharge header"},
	condenserInlet:       {"3", "condenser inlet"},
	condenserOutlet:      {"4", "condenser outlet"},
	liquidLineOutlet:     {"4m", "liquid line outlet"},
	branchedLiquid:       {"4i", "liquid behind the branch"},
	injectionValveInlet:  {"5i", "injection valve inlet"},
	injectionValveOutlet: {"6i", "injection valve outlet"},
	injection:            {"7i", "injection vapour"},
	highValveInlet:       {"5H", "high-pressure valve inlet"},
	highValveOutlet:      {"6H", "high-pressure valve outlet"},
	valveInlet:           {"5", "expansion valve inlet"},
	ejectorOutlet:        {"6m", "ejector outlet"},
	separatorVapour:      {"1m", "separator vapour"},
	lowValveInlet:        {"5L", "low-pressure valve inlet"},
	evaporatorInlet:      {"6", "evaporator inlet"},
	evaporatorOutlet:     {"7", "evaporator outlet"},
	exchangerVapour:      {"7m", "internal exchanger vapour outlet"},
}

// part is a component of a circuit. The order of the constants is the order of a solution's components.
type part uint8

const (
	compressor part = iota
	firstStep
	injectionMixer
	secondStep
	lowCompressor
	intercooler
	highCompressor
	parallelCompressor
	headerMixer
	dischargeLine
	condenser
	gasCooler
	liquidLine
	liquidBranch
	internalExchanger
	economiser
	injectionValve
	highValve
	flashTank
	receiver
	interstageMixer
	ejector
	separator
	expansionValve
	evaporator
	cascadeExchanger
	suctionLine
	partCount
)

var plainParts = [partCount]string{
	compressor:         "compressor",
	firstStep:          "compressor_first_step",
	injectionMixer:     "injection_mixer",
	secondStep:         "compressor_second_step",
	lowCompressor:      "low_stage_compressor",
	intercooler:        "intercooler",
	highCompressor:     "high_stage_compressor",
	parallelCompressor: "parallel_compressor",
	headerMixer:        "discharge_header",
	dischargeLine:      "discharge_line",
	condenser:          "condenser",
	gasCooler:          "gas_cooler",
	liquidLine:         "liquid_line",
	liquidBranch:       "liquid_branch",
	internalExchanger:  "internal_exchanger",
	economiser:         "economiser",
	injectionValve:     "injection_valve",
	highValve:          "high_pressure_valve",
	flashTank:          "flash_tank",
	receiver:           "receiver",
	interstageMixer:    "interstage_mixer",
	ejector:            "ejector",
	separator:          "separator",
	expansionValve:     "expansion_valve",
	evaporator:         "evaporator",
	cascadeExchanger:   "cascade_exchanger",
	suctionLine:        "suction_line",
}

// side tells the circuits of a cascade apart. Its value is the offset of a place or part in the tables, in blocks.
type side uint8

const (
	only  side = iota // not a cascade
	lower             // labels end in L, components begin with lower_
	upper             // labels end in H, components begin with upper_
	sideCount
)

// placeNames and partNames hold a block for each side. labelLists holds each label as a list of one, to be shared.
var (
	placeNames = func() (all [sideCount][placeCount]name) {
		for i, n := range plainPlaces {
			all[only][i] = n
			all[lower][i] = name{n.label + "L", n.words + ", lower circuit"}
			all[upper][i] = name{n.label + "H", n.words + ", upper circuit"}
		}
		return all
	}()
	partNames = func() (all [sideCount][partCount]string) {
		for i, n := range plainParts {
			all[only][i], all[lower][i], all[upper][i] = n, "lower_"+n, "upper_"+n
		}
		for s := range all { // shared by both circuits
			all[s][cascadeExchanger] = plainParts[cascadeExchanger]
		}
		return all
	}()
	labelLists = func() (all [sideCount][placeCount][]string) {
		for s := range all {
			for p := range all[s] {
				all[s][p] = []string{placeNames[s][p].label}
			}
		}
		return all
	}()
)
