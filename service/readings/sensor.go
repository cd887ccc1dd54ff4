package readings

import "math"

// Uncertainty describes how uncertain a reading is, by exactly one of Standard, Relative, Expanded, Limit and Sensor.
type Uncertainty struct {
	Standard *float64 // standard uncertainty, SI unit of the reading
	Relative *float64 // standard uncertainty over the reading
	// Expanded is a stated uncertainty with a coverage factor, which is CoverageFactor, by default 2. Path
	// "….coverage_factor".
	Expanded       *float64
	CoverageFactor *float64
	Limit          *float64 // the reading is off by no more than this; taken as a rectangular distribution
	Sensor         Sensor
	Span           *float64 // Pa, of a pressure sensor named by Sensor
	// DegreesOfFreedom of the standard uncertainty, such as n - 1 for the mean of n samples; nil means unlimited. Path
	// "….degrees_of_freedom".
	DegreesOfFreedom *float64
}

// Sensor names a class of sensors whose uncertainty is known.
type Sensor string

// The classes. Numbers without a standard are common practice.
const (
	Transmitter      Sensor = "transmitter"           // pressure, 0.5 % of span: standard uncertainty 0.3 % of span
	Manifold         Sensor = "manifold_class_1.6"    // pressure gauge of class 1.6: 1 % of span
	Immersed         Sensor = "immersed"              // thermometer in a pocket, 0.15 K
	InsulatedStrapOn Sensor = "insulated_strap_on"    // thermometer on the pipe under insulation, 0.5 K
	BareClamp        Sensor = "bare_clamp"            // thermometer on the pipe, 1 K and biased towards the ambient
	MatchedPair      Sensor = "matched_pair"          // difference of two paired thermometers in pockets, 0.05 K
	Pt100ClassA      Sensor = "pt100_class_a"         // ±(0.15 + 0.002 |t|) °C, IEC 60751
	Pt100ClassB      Sensor = "pt100_class_b"         // ±(0.30 + 0.005 |t|) °C, IEC 60751
	ThermocoupleT1   Sensor = "thermocouple_t_class1" // type T class 1, ±0.5 °C, IEC 60584
	AirStream        Sensor = "air_stream"            // thermometer in an air stream, 0.3 K; stratification adds 1 to 2 K
	FlowMeter        Sensor = "flow_meter"            // installed meter of a liquid, 1 %
	ClampOnFlow      Sensor = "clamp_on_flow"         // ultrasonic clamp-on, 2.5 %
	AirFlow          Sensor = "air_flow"              // traverse or fan curve, 10 %
	CoriolisMeter    Sensor = "coriolis_meter"        // refrigerant liquid without bubbles, 0.5 %
	HeatMeterClass2  Sensor = "heat_meter_class_2"    // at 5 K difference and design flow, EN 1434-1
	PowerAnalyser    Sensor = "power_analyser"        // electrical power, 0.5 %
	CurrentClamps    Sensor = "current_clamps"        // with an assumed power factor, 4 %
	HygrometerSensor Sensor = "hygrometer"            // relative humidity, 1.5 %
)

// sensorRule is how the standard uncertainty of a class follows from the reading: limit or standard = absolute + relative
// times the reading, or times the span.
type sensorRule struct {
	kinds    []kind
	absolute float64
	relative float64 // of the reading; of |t| in °C for thermometers
	ofSpan   float64
	isLimit  bool // the numbers are limits of a rectangular distribution
	celsius  bool // relative counts from 0 °C
}

var (
	temperatures = []kind{pipeTemperature, streamTemperature, ambientKind}
	sensorRules  = map[Sensor]sensorRule{
		Transmitter:      {kinds: []kind{pressureKind}, ofSpan: 0.003},
		Manifold:         {kinds: []kind{pressureKind}, ofSpan: 0.01},
		Immersed:         {kinds: temperatures, absolute: 0.15},
		InsulatedStrapOn: {kinds: temperatures, absolute: 0.5},
		BareClamp:        {kinds: temperatures, absolute: 1},
		MatchedPair:      {kinds: []kind{streamChange}, absolute: 0.05},
		Pt100ClassA:      {kinds: temperatures, absolute: 0.15, relative: 0.002, isLimit: true, celsius: true},
		Pt100ClassB:      {kinds: temperatures, absolute: 0.30, relative: 0.005, isLimit: true, celsius: true},
		ThermocoupleT1:   {kinds: temperatures, absolute: 0.5, isLimit: true},
		AirStream:        {kinds: []kind{streamTemperature, ambientKind}, absolute: 0.3},
		FlowMeter:        {kinds: []kind{flowKind}, relative: 0.01},
		ClampOnFlow:      {kinds: []kind{flowKind}, relative: 0.025},
		AirFlow:          {kinds: []kind{flowKind}, relative: 0.1},
		CoriolisMeter:    {kinds: []kind{refrigerantFlow}, relative: 0.005},
		HeatMeterClass2:  {kinds: []kind{heatMeterKind}, relative: HeatMeterLimit(5, 3, 1), isLimit: true},
		PowerAnalyser:    {kinds: []kind{powerKind}, relative: 0.005},
		CurrentClamps:    {kinds: []kind{powerKind}, relative: 0.04},
		HygrometerSensor: {kinds: []kind{humidityKind}, absolute: 0.015},
	}
)

// Sensors returns the names of all classes.
func Sensors() []Sensor {
	return []Sensor{
		Transmitter, Manifold, Immersed, InsulatedStrapOn, BareClamp, MatchedPair, Pt100ClassA, Pt100ClassB, ThermocoupleT1,
		AirStream, FlowMeter, ClampOnFlow, AirFlow, CoriolisMeter, HeatMeterClass2, PowerAnalyser, CurrentClamps, HygrometerSensor,
	}
}

// HeatMeterLimit returns the largest permissible error of a heat meter of class 2, relative, at a temperature difference
// and its meter's least one, in K, and a flow over the permanent flow: the sum of those of flow sensor, pair and calculator
// (EN 1434-1; Directive 2014/32/EU, annex VI).
func HeatMeterLimit(difference, least, flow float64) float64 {
	return math.Min(0.05, 0.02+0.0002/flow) + (0.005 + 3*0.01*least/difference) + (0.005 + 0.01*least/difference)
}
