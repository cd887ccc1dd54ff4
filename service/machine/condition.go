package machine

import "dewmark/props/secondary"

// Condition is what a machine finds around it, and what it is asked to do.
type Condition struct {
	Source Stream // through the evaporator
	Sink   Stream // through the condenser or gas cooler
	// Speed of the compressor, 1/s. Without it and without a demand it is the compressor's own.
	Speed *float64
	// Demand asks for a capacity instead of Speed. The speed that delivers it is found, or the nearest that the compressor
	// has, with a caution.
	Demand Demand
	// AmbientTemperature is the dead state of exergies and what lines and compressor shells exchange heat with, K. Default:
	// the source's inlet for heating, the sink's for cooling. Path "condition.ambient_temperature".
	AmbientTemperature *float64
	// AmbientPressure is that of the air around the machine, Pa, which cautions compare with. Default: 101.325 kPa. Path
	// "site.ambient_pressure".
	AmbientPressure *float64
}

// Demand asks for at most one of two capacities, those of the refrigerant.
type Demand struct {
	Heating *float64 // W
	Cooling *float64 // W
}

// Stream is a secondary stream. Two of InletTemperature, OutletTemperature, TemperatureChange and a flow fix it. Moist air
// that is cooled needs inlet and flow. An exchanger whose approach is one to the entering stream needs the inlet alone.
type Stream struct {
	Liquid            *secondary.Liquid // nil: moist air
	InletTemperature  *float64          // "….inlet_temperature", K
	OutletTemperature *float64          // "….outlet_temperature", K
	TemperatureChange *float64          // "….temperature_change", K, between inlet and outlet, positive
	MassFlow          *float64          // "….mass_flow", kg/s
	VolumeFlow        *float64          // "….volume_flow", m3/s at the inlet, instead of MassFlow

	// Moist air only. Pressure in Pa, default 101.325 kPa. At most one of the other four describes the inlet; without, the air
	// is taken as dry, with a caution where that matters.
	Pressure         *float64
	RelativeHumidity *float64 // "….relative_humidity", 0 to 1
	WetBulb          *float64 // "….wet_bulb_temperature", K
	DewPoint         *float64 // "….dew_point_temperature", K
	HumidityRatio    *float64 // "….humidity_ratio", kg/kg dry air
}
