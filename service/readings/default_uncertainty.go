package readings

import (
	"math"

	"dewmark/props"
	"dewmark/service/readings/uncertainty"
)

// usualSensors are assumed where nothing is said of a sensor: those of an installation that is supervised for good. All
// are common practice.
var usualSensors = [...]Sensor{
	pressureKind: Transmitter, pipeTemperature: InsulatedStrapOn, ambientKind: AirStream, streamChange: MatchedPair,
	humidityKind: HygrometerSensor, flowKind: FlowMeter, refrigerantFlow: CoriolisMeter, powerKind: PowerAnalyser,
	heatMeterKind: HeatMeterClass2,
}

// Standard uncertainties without a class of sensor (common practice).
const (
	streamUncertainty   = 0.15  // K, one thermometer in the pocket of a liquid
	speedUncertainty    = 0.005 // relative; slip of a motor whose supply frequency is known
	heatLossUncertainty = 0.05  // of a fraction: 0.02 to 0.15 are usual for hermetic compressors
	ambientUncertainty  = 1.7e3 // Pa; weather changes the pressure of a site by up to 3 kPa, taken as rectangular
	pureModel           = 0.003 // relative, of differences of enthalpy
	blendModel          = 0.01
)

// gaugeRanges are the ends of the scales of pressure gauges, Pa (EN 837-1).
var gaugeRanges = [...]float64{6e4, 1e5, 1.6e5, 2.5e5, 4e5, 6e5, 1e6, 1.6e6, 2.5e6, 4e6, 6e6, 10e6, 16e6, 25e6, 40e6, 60e6, 100e6}

// usualSpan returns the span of a sensor that was chosen for a pressure: the smallest scale of which a steady pressure
// uses at most three quarters (EN 837-2, from memory).
func usualSpan(p float64) float64 {
	gauge := p - props.StandardAtmosphere
	for _, span := range gaugeRanges {
		if gauge <= 0.75*span {
			return span
		}
	}
	return gauge / 0.75
}

// doubt is a standard uncertainty with what is known of it.
type doubt struct {
	standard     float64
	degrees      float64 // 0 for infinite
	distribution uncertainty.Distribution
	assumed      bool
}

// doubtOf returns the uncertainty of a reading.
func (e *Evaluator) doubtOf(r Reading, value float64, fluid *Stream) doubt {
	g := &e.given[r]
	if !g.stated {
		return usualDoubt(r, value, fluid)
	}
	d := doubt{degrees: g.degrees, distribution: g.distribution}
	switch {
	case g.sensor != "":
		d.standard, d.distribution = g.sensor.standard(value, g.span)
	default:
		d.standard = g.absolute + g.relative*math.Abs(value)
	}
	return d
}

// usualDoubt returns what is assumed of a reading. Fluid is the stream of a reading that has one.
func usualDoubt(r Reading, value float64, fluid *Stream) doubt {
	d := doubt{assumed: true}
	k := readingTable[r].kind
	air := fluid != nil && fluid.MoistAir
	switch {
	case k == fractionKind:
		d.standard = heatLossUncertainty
	case k == speedKind:
		d.standard = speedUncertainty * math.Abs(value)
	case k == streamTemperature && air:
		d.standard, d.distribution = AirStream.standard(value, 0)
	case k == streamTemperature:
		d.standard = streamUncertainty
	case k == flowKind && air:
		d.standard, d.distribution = AirFlow.standard(value, 0)
	default:
		d.standard, d.distribution = usualSensors[k].standard(value, 0)
	}
	return d
}

// standard returns the standard uncertainty of a sensor of this class at a reading; a span of 0 is the usual one.
func (s Sensor) standard(value, span float64) (float64, uncertainty.Distribution) {
	row := sensorRules[s]
	size := math.Abs(value)
	if row.celsius {
		size = math.Abs(value - 273.15)
	}
	if span == 0 && row.ofSpan > 0 {
		span = usualSpan(value)
	}
	u := row.absolute + row.relative*size + row.ofSpan*span
	if row.isLimit {
		return u / math.Sqrt(3), uncertainty.Rectangular
	}
	return u, uncertainty.Normal
}
