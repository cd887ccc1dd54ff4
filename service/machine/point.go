package machine

import "dewmark/service/cycle"

// OperatingPoint is where a machine settles. A number that does not exist is NaN.
type OperatingPoint struct {
	// Cycle holds states, components, performance and closure of the refrigerant's circuit. Its source and sink temperatures,
	// for Carnot and exergy, are the entropy means of the secondary streams.
	Cycle                   *cycle.Solution
	EvaporationTemperature  float64 // K, dew point at the evaporator outlet
	CondensationTemperature float64 // K, dew point at the condenser outlet; NaN with a gas cooler
	SuctionDewTemperature   float64 // K, at the compressor's suction flange
	DischargeDewTemperature float64 // K, at the compressor's discharge flange; NaN above the critical pressure
	DischargePressure       float64 // Pa, at the compressor's discharge flange
	Superheat               float64 // K, at the evaporator outlet
	Speed                   float64 // 1/s; NaN for a compressor without one
	SourceTemperature       float64 // K, entropy mean of the source over its change, by dry bulb for moist air
	SinkTemperature         float64 // K, likewise
	Evaporator              ExchangerResult
	Condenser               ExchangerResult // the gas cooler too
	System                  System
	Envelope                EnvelopeResult
	Breaches                []Breach // of the envelope and of [Limits]
	Cautions                []Caution
	ResidualFraction        float64 // largest mismatch between compressor and exchangers over the duty
	Evaluations             int     // of the whole machine
}

// WithinEnvelope reports whether the envelope and all limits are kept.
func (p *OperatingPoint) WithinEnvelope() bool { return len(p.Breaches) == 0 }

// System is the machine with its fans, pumps and drive.
type System struct {
	Power           float64 // W, all
	CompressorPower float64 // W, at the terminals
	SourcePower     float64 // W
	SinkPower       float64 // W
	ControlPower    float64 // W
	HeatingCapacity float64 // W, with the heat of the sink's fan or pump
	CoolingCapacity float64 // W, less the heat of the source's fan or pump
	COPHeating      float64
	COPCooling      float64
}

// ExchangerResult is an exchanger at work.
type ExchangerResult struct {
	Arrangement Arrangement
	Duty        float64 // W
	Pinch       float64 // K, smallest difference between the streams; NaN when the stream's change is not known
	PinchAt     float64 // share of the duty, from the liquid end of the refrigerant, at which it lies
	UA          float64 // W/K that the duty takes, two-phase zone's coefficient; NaN likewise
	UAAvailable float64 // W/K at this flow; NaN unless UA is given
	Approach    float64 // K, the one named by the exchanger, or by its default
	ApproachOf  ApproachKind
	Zones       []Zone // in the direction of the refrigerant
	Secondary   StreamResult
}

// Zone is a part of an exchanger.
type Zone struct {
	Name              ZoneName
	Duty              float64 // W
	LMTD              float64 // K, duty over UA
	UA                float64 // W/K, with the zone's own coefficient
	Share             float64 // of the exchanger's area that the duty takes
	RefrigerantInlet  float64 // K
	RefrigerantOutlet float64 // K
	SecondaryInlet    float64 // K, where the stream enters the zone
	SecondaryOutlet   float64 // K, where it leaves the zone
	Slices            int
}

// ZoneName names a zone.
type ZoneName string

// The zones.
const (
	Desuperheating ZoneName = "desuperheating"
	Condensing     ZoneName = "condensing"
	Subcooling     ZoneName = "subcooling"
	Evaporating    ZoneName = "evaporating"
	Superheating   ZoneName = "superheating"
	GasCooling     ZoneName = "gas_cooling"
)

// StreamResult is a secondary stream at work.
type StreamResult struct {
	Fluid             string
	InletTemperature  float64 // K
	OutletTemperature float64 // K
	MassFlow          float64 // kg/s
	VolumeFlow        float64 // m3/s, at the inlet
	FreezingPoint     float64 // K; NaN for moist air

	// Moist air; NaN for liquids.
	InletHumidity      float64 // relative humidity
	OutletHumidity     float64
	InletWetBulb       float64 // K
	OutletWetBulb      float64 // K
	InletRatio         float64 // humidity ratio, kg/kg dry air
	OutletRatio        float64
	SensibleDuty       float64 // W
	LatentDuty         float64 // W
	SensibleRatio      float64 // sensible over whole duty
	CondensateFlow     float64 // kg/s of water or frost
	SurfaceTemperature float64 // K, mean of the wetted surface, or of a dry coil; NaN where it does not matter
	ApparatusDewPoint  float64 // K; NaN for a dry coil
	Wet                bool    // water or frost forms on the surface
}

// EnvelopeVerdict says where a point lies.
type EnvelopeVerdict string

// The verdicts.
const (
	NoEnvelope      EnvelopeVerdict = "none"
	InsideEnvelope  EnvelopeVerdict = "inside"
	EdgeOfEnvelope  EnvelopeVerdict = "edge" // within 0.5 K of the edge, inside or outside
	OutsideEnvelope EnvelopeVerdict = "outside"
)

// EnvelopeEdge says what lies beyond the nearest edge of an envelope.
type EnvelopeEdge string

// The edges.
const (
	TooCold EnvelopeEdge = "evaporation_too_low"
	TooWarm EnvelopeEdge = "evaporation_too_high"
	TooHot  EnvelopeEdge = "condensation_too_high"
	TooFlat EnvelopeEdge = "condensation_too_low"
	NoEdge  EnvelopeEdge = ""
)

// EnvelopeResult says how a point lies in its envelope.
type EnvelopeResult struct {
	Verdict EnvelopeVerdict
	Margin  float64      // K to the nearest edge, negative outside; NaN without an envelope. On a pressure axis 100 kPa count as 1 K
	Edge    EnvelopeEdge // the nearest
	Source  string       // document of the maker
}

// Breach is a limit that an operating point breaks.
type Breach struct {
	Field    string // path of the limit
	Quantity cycle.Quantity
	Value    float64 // SI
	Limit    float64 // SI; of an envelope the margin 0 K
	Message  Message
}
