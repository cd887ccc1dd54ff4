package readings

import (
	"dewmark/props"
	"dewmark/service/readings/uncertainty"
)

// place is where readings fix a state of the refrigerant.
type place uint8

const (
	suction place = iota
	discharge
	condenserInlet
	condenserOutlet
	expansionInlet
	evaporatorOutlet
	placeCount
)

// placeTable says what is read at each place: first its own readings, then those that stand in for a missing one. An
// internal exchanger lies between the outlets of both exchangers and what comes next, so that temperatures there do not
// stand in for each other.
var placeTable = [placeCount]struct {
	label, words          string
	vapour                bool
	pressure, temperature []Reading
	parted                bool // by an internal exchanger
}{
	suction: {
		"1", "compressor suction", true,
		[]Reading{SuctionPressure, EvaporatorOutletPressure},
		[]Reading{SuctionTemperature, EvaporatorOutletTemperature},
		true,
	},
	discharge: {
		"2", "compressor discharge", true,
		[]Reading{DischargePressure, CondenserInletPressure, LiquidPressure, ExpansionInletPressure},
		[]Reading{DischargeTemperature, CondenserInletTemperature},
		false,
	},
	condenserInlet: {
		"3", "condenser inlet", true,
		[]Reading{CondenserInletPressure, DischargePressure, LiquidPressure, ExpansionInletPressure},
		[]Reading{CondenserInletTemperature, DischargeTemperature},
		false,
	},
	condenserOutlet: {
		"4", "condenser outlet", false,
		[]Reading{LiquidPressure, CondenserInletPressure, DischargePressure, ExpansionInletPressure},
		[]Reading{LiquidTemperature, ExpansionInletTemperature},
		true,
	},
	expansionInlet: {
		"5", "expansion valve inlet", false,
		[]Reading{ExpansionInletPressure, LiquidPressure, CondenserInletPressure, DischargePressure},
		[]Reading{ExpansionInletTemperature, LiquidTemperature},
		true,
	},
	evaporatorOutlet: {
		"7", "evaporator outlet", true,
		[]Reading{EvaporatorOutletPressure, SuctionPressure},
		[]Reading{EvaporatorOutletTemperature, SuctionTemperature},
		true,
	},
}

// located are the readings that count at a place, 0 for none.
type located struct {
	pressure, temperature Reading
	twin                  place // an earlier place with the same readings, or the place itself
}

// locate finds the readings that count at each place of a sample.
func (s *Sample) locate(withExchanger bool) (at [placeCount]located) {
	for p := range placeCount {
		row := &placeTable[p]
		temperatures := row.temperature
		if withExchanger && row.parted {
			temperatures = temperatures[:1]
		}
		at[p] = located{s.firstOf(row.pressure), s.firstOf(temperatures), p}
		for q := range p {
			if placeTable[q].vapour == row.vapour && at[q].pressure == at[p].pressure && at[q].temperature == at[p].temperature {
				at[p].twin = q
				break
			}
		}
	}
	return at
}

func (s *Sample) firstOf(list []Reading) Reading {
	for _, r := range list {
		if s.has(r) {
			return r
		}
	}
	return 0
}

// point is a place with what readings make of it. Numbers that are not known are NaN.
type point struct {
	p, T      uncertainty.Linear
	saturated uncertainty.Linear // dew or bubble temperature at p
	margin    uncertainty.Linear // superheat or subcooling
	state     props.State
	h, s, rho uncertainty.Linear
}

// standing says what is known of a point in every draw.
type standing uint8

const (
	unread        standing = iota // pressure or temperature is missing
	stateless                     // the property model has no such state
	tooClose                      // to saturation: quality unknown
	singlePhase                   // state known, between a saturation line and infinity
	aboveCritical                 // state known, no saturation line at its pressure
)

// known reports whether the state is known.
func (s standing) known() bool { return s >= singlePhase }
