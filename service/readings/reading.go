package readings

import "dewmark/service/cycle"

// Reading names what a sensor says, or a number about the machine that is given like a reading.
type Reading uint8

// The readings.
const (
	SuctionPressure             Reading = iota + 1 // Pa, at 1
	SuctionTemperature                             // K
	DischargePressure                              // Pa, at 2
	DischargeTemperature                           // K
	CondenserInletPressure                         // Pa, at 3
	CondenserInletTemperature                      // K
	LiquidPressure                                 // Pa, at 4
	LiquidTemperature                              // K
	ExpansionInletPressure                         // Pa, at 5
	ExpansionInletTemperature                      // K
	EvaporatorOutletPressure                       // Pa, at 7
	EvaporatorOutletTemperature                    // K

	CompressorPower    // W
	HeatLossFraction   // heat that the compressor gives to its surroundings over the power it takes, 0 up to 1
	ShellTemperature   // K, of the compressor; with [Installation.ShellConductance] instead of HeatLossFraction
	AmbientTemperature // K, around the machine
	Speed              // 1/s
	MassFlow           // kg/s of refrigerant, by a meter
	HeatingCapacity    // W given off by the condenser, by a heat meter
	CoolingCapacity    // W taken up by the evaporator, by a heat meter

	SinkInletTemperature // K
	SinkOutletTemperature
	SinkTemperatureChange      // K, inlet to outlet, positive: by a matched pair of sensors
	SinkVolumeFlow             // m3/s
	SinkMassFlow               // kg/s, of moist air where the fluid is that
	SinkInletHumidity          // relative, 0 to 1
	SinkOutletHumidity         // relative, 0 to 1
	SourceInletTemperature     // K
	SourceOutletTemperature    // K
	SourceTemperatureChange    // K, positive
	SourceVolumeFlow           // m3/s
	SourceMassFlow             // kg/s
	SourceInletHumidity        // relative, 0 to 1
	SourceOutletHumidity       // relative, 0 to 1
	readingCount, firstReading = iota + 1, SuctionPressure
)

// kind groups readings that are checked alike and have the same usual sensors.
type kind uint8

const (
	pressureKind kind = iota
	pipeTemperature
	streamTemperature
	streamChange
	ambientKind
	humidityKind
	flowKind
	refrigerantFlow
	powerKind
	heatMeterKind
	fractionKind
	speedKind
)

var readingTable = [readingCount]struct {
	name string
	kind kind
}{
	SuctionPressure:             {"suction_pressure", pressureKind},
	SuctionTemperature:          {"suction_temperature", pipeTemperature},
	DischargePressure:           {"discharge_pressure", pressureKind},
	DischargeTemperature:        {"discharge_temperature", pipeTemperature},
	CondenserInletPressure:      {"condenser_inlet_pressure", pressureKind},
	CondenserInletTemperature:   {"condenser_inlet_temperature", pipeTemperature},
	LiquidPressure:              {"liquid_pressure", pressureKind},
	LiquidTemperature:           {"liquid_temperature", pipeTemperature},
	ExpansionInletPressure:      {"expansion_inlet_pressure", pressureKind},
	ExpansionInletTemperature:   {"expansion_inlet_temperature", pipeTemperature},
	EvaporatorOutletPressure:    {"evaporator_outlet_pressure", pressureKind},
	EvaporatorOutletTemperature: {"evaporator_outlet_temperature", pipeTemperature},
	CompressorPower:             {"compressor_power", powerKind},
	HeatLossFraction:            {"heat_loss_fraction", fractionKind},
	ShellTemperature:            {"shell_temperature", pipeTemperature},
	AmbientTemperature:          {"ambient_temperature", ambientKind},
	Speed:                       {"speed", speedKind},
	MassFlow:                    {"mass_flow", refrigerantFlow},
	HeatingCapacity:             {"heating_capacity", heatMeterKind},
	CoolingCapacity:             {"cooling_capacity", heatMeterKind},
	SinkInletTemperature:        {"sink.inlet_temperature", streamTemperature},
	SinkOutletTemperature:       {"sink.outlet_temperature", streamTemperature},
	SinkTemperatureChange:       {"sink.temperature_change", streamChange},
	SinkVolumeFlow:              {"sink.volume_flow", flowKind},
	SinkMassFlow:                {"sink.mass_flow", flowKind},
	SinkInletHumidity:           {"sink.inlet_humidity", humidityKind},
	SinkOutletHumidity:          {"sink.outlet_humidity", humidityKind},
	SourceInletTemperature:      {"source.inlet_temperature", streamTemperature},
	SourceOutletTemperature:     {"source.outlet_temperature", streamTemperature},
	SourceTemperatureChange:     {"source.temperature_change", streamChange},
	SourceVolumeFlow:            {"source.volume_flow", flowKind},
	SourceMassFlow:              {"source.mass_flow", flowKind},
	SourceInletHumidity:         {"source.inlet_humidity", humidityKind},
	SourceOutletHumidity:        {"source.outlet_humidity", humidityKind},
}

// String returns the name of the reading, such as "suction_pressure" or "sink.inlet_temperature": its path in a [Refusal]
// too.
func (r Reading) String() string {
	if int(r) >= len(readingTable) {
		return ""
	}
	return readingTable[r].name
}

var readingsByName = func() map[string]Reading {
	m := map[string]Reading{}
	for r := firstReading; r < readingCount; r++ {
		m[r.String()] = r
	}
	return m
}()

// ParseReading returns the reading with that name and reports whether there is one.
func ParseReading(name string) (Reading, bool) {
	r, ok := readingsByName[name]
	return r, ok
}

// Readings returns all readings.
func Readings() []Reading {
	all := make([]Reading, 0, readingCount-1)
	for r := firstReading; r < readingCount; r++ {
		all = append(all, r)
	}
	return all
}

var kindQuantities = [...]cycle.Quantity{
	pressureKind: cycle.Pressure, pipeTemperature: cycle.Temperature, streamTemperature: cycle.Temperature,
	streamChange: cycle.TemperatureDifference, ambientKind: cycle.Temperature, humidityKind: cycle.Dimensionless,
	flowKind: cycle.VolumeFlow, refrigerantFlow: cycle.MassFlow, powerKind: cycle.Power, heatMeterKind: cycle.HeatFlow,
	fractionKind: cycle.Dimensionless, speedKind: cycle.Dimensionless,
}

// Quantity returns the kind of quantity of the reading. Its uncertainty is a difference of that kind: of temperatures in K,
// of pressures in Pa.
func (r Reading) Quantity() cycle.Quantity {
	if r == SinkMassFlow || r == SourceMassFlow {
		return cycle.MassFlow
	}
	return kindQuantities[readingTable[r].kind]
}

// IsPressure reports whether the reading is a pressure of the refrigerant.
func (r Reading) IsPressure() bool { return readingTable[r].kind == pressureKind }
