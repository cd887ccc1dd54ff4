package machine

import "dewmark/service/cycle"

// Exchanger is an evaporator, a condenser or a gas cooler, given by exactly one of UA, Pinch and Approach.
type Exchanger struct {
	// UA is the conductance in W/K, referred to the two-phase zone where the zones' ratios differ from 1.
	UA       *float64
	Pinch    *float64 // K, smallest difference between the streams
	Approach *float64 // K, a difference at one end
	// ApproachOf says which difference Approach is; default entering for moist air, leaving for liquids. A gas cooler's is
	// always that of the refrigerant's outlet above the entering stream. Path "….approach_of".
	ApproachOf ApproachKind
	// Reference says what the temperature of evaporation or condensation in an approach is. Dew unless given.
	Reference   cycle.Reference
	Arrangement Arrangement // default counterflow; crossflow for moist air
	// Slices cuts each zone in which the refrigerant's temperature is not straight over its heat into so many slices of equal
	// heat: blends, gas coolers and exchangers with pressure drop; default 20, in gas coolers 100. A pure refrigerant without
	// pressure drop has three zones with one logarithmic mean each, and slices only where this asks for them.
	Slices *int

	// Ratios of the heat transfer coefficient of a zone to that of the two-phase zone, above 0; default 1. Common practice:
	// desuperheating 0.2 to 0.4, subcooling 0.3 to 0.5, superheating 0.1 to 0.3. Paths "….superheat_ratio" and so on.
	SuperheatRatio, DesuperheatRatio, SubcoolingRatio *float64

	// SecondaryShare is the share of the thermal resistance that lies on the side of the secondary stream at ReferenceFlow,
	// 0 to 1; default 0.5 for liquids, 0.7 for moist air. A wet coil and a flow other than the reference need it. Path
	// "….secondary_share".
	SecondaryShare *float64
	// ReferenceFlow is the mass flow of the secondary stream, kg/s, that UA belongs to; nil means any flow. FlowExponent says
	// how the coefficient on that side grows with the flow; default 0.8 for liquids (Dittus and Boelter), 0.5 for moist air.
	// Paths "….reference_flow" and "….flow_exponent".
	ReferenceFlow *float64
	FlowExponent  *float64
	Fouling       *float64 // K/W, added to the thermal resistance 1/UA

	cycle.Drop // of the refrigerant
}

// ApproachKind says which difference of temperatures an approach is.
type ApproachKind uint8

// The approaches.
const (
	DefaultApproach  ApproachKind = iota
	LeavingApproach               // leaving stream above evaporation; condensation above leaving stream
	EnteringApproach              // entering stream above evaporation; condensation above entering stream
)

var approachNames = [...]string{"", "leaving", "entering"}

func (k ApproachKind) String() string {
	if int(k) >= len(approachNames) {
		return ""
	}
	return approachNames[k]
}

// ParseApproach returns the approach with that name and reports whether there is one.
func ParseApproach(name string) (ApproachKind, bool) {
	for i, n := range approachNames {
		if n == name && i > 0 {
			return ApproachKind(i), true
		}
	}
	return 0, false
}

// Arrangement is how the two streams pass each other.
type Arrangement uint8

// The arrangements. In crossflow the zones lie side by side in the secondary stream, each with its share of the flow.
const (
	DefaultArrangement     Arrangement = iota
	Counterflow                        // in opposite directions
	ParallelFlow                       // in the same direction
	CrossflowUnmixed                   // neither stream mixed, approximately
	CrossflowStreamMixed               // the secondary stream mixed
	CrossflowStreamUnmixed             // the refrigerant mixed, the secondary stream not
)

var arrangementNames = [...]string{"", "counterflow", "parallel", "crossflow", "crossflow_stream_mixed", "crossflow_stream_unmixed"}

func (a Arrangement) String() string {
	if int(a) >= len(arrangementNames) {
		return ""
	}
	return arrangementNames[a]
}

// Arrangements returns the names of all arrangements.
func Arrangements() []string { return append([]string(nil), arrangementNames[1:]...) }

// ParseArrangement returns the arrangement with that name and reports whether there is one.
func ParseArrangement(name string) (Arrangement, bool) {
	for i, n := range arrangementNames {
		if n == name && i > 0 {
			return Arrangement(i), true
		}
	}
	return 0, false
}
