package api

import "dewmark/service/readings"

// perReading has something for each reading of the refrigerant's circuit.
type perReading[T any] struct {
	SuctionPressure             *T `json:"suction_pressure"`
	SuctionTemperature          *T `json:"suction_temperature"`
	DischargePressure           *T `json:"discharge_pressure"`
	DischargeTemperature        *T `json:"discharge_temperature"`
	CondenserInletPressure      *T `json:"condenser_inlet_pressure"`
	CondenserInletTemperature   *T `json:"condenser_inlet_temperature"`
	LiquidPressure              *T `json:"liquid_pressure"`
	LiquidTemperature           *T `json:"liquid_temperature"`
	ExpansionInletPressure      *T `json:"expansion_inlet_pressure"`
	ExpansionInletTemperature   *T `json:"expansion_inlet_temperature"`
	EvaporatorOutletPressure    *T `json:"evaporator_outlet_pressure"`
	EvaporatorOutletTemperature *T `json:"evaporator_outlet_temperature"`
	CompressorPower             *T `json:"compressor_power"`
	HeatLossFraction            *T `json:"heat_loss_fraction"`
	ShellTemperature            *T `json:"shell_temperature"`
	AmbientTemperature          *T `json:"ambient_temperature"`
	Speed                       *T `json:"speed"` // 1/s
	MassFlow                    *T `json:"mass_flow"`
	HeatingCapacity             *T `json:"heating_capacity"`
	CoolingCapacity             *T `json:"cooling_capacity"`
}

// perStream has something for each reading of a stream.
type perStream[T any] struct {
	InletTemperature  *T `json:"inlet_temperature"`
	OutletTemperature *T `json:"outlet_temperature"`
	TemperatureChange *T `json:"temperature_change"`
	VolumeFlow        *T `json:"volume_flow"`
	MassFlow          *T `json:"mass_flow"`
	InletHumidity     *T `json:"inlet_humidity"`
	OutletHumidity    *T `json:"outlet_humidity"`
}

// each calls visit for everything that is there.
func each[T any](p *perReading[T], sink, source *perStream[T], visit func(readings.Reading, *T)) {
	for _, x := range [...]struct {
		reading readings.Reading
		of      *T
	}{
		{readings.SuctionPressure, p.SuctionPressure},
		{readings.SuctionTemperature, p.SuctionTemperature},
		{readings.DischargePressure, p.DischargePressure},
		{readings.DischargeTemperature, p.DischargeTemperature},
		{readings.CondenserInletPressure, p.CondenserInletPressure},
		{readings.CondenserInletTemperature, p.CondenserInletTemperature},
		{readings.LiquidPressure, p.LiquidPressure},
		{readings.LiquidTemperature, p.LiquidTemperature},
		{readings.ExpansionInletPressure, p.ExpansionInletPressure},
		{readings.ExpansionInletTemperature, p.ExpansionInletTemperature},
		{readings.EvaporatorOutletPressure, p.EvaporatorOutletPressure},
		{readings.EvaporatorOutletTemperature, p.EvaporatorOutletTemperature},
		{readings.CompressorPower, p.CompressorPower},
		{readings.HeatLossFraction, p.HeatLossFraction},
		{readings.ShellTemperature, p.ShellTemperature},
		{readings.AmbientTemperature, p.AmbientTemperature},
		{readings.Speed, p.Speed},
		{readings.MassFlow, p.MassFlow},
		{readings.HeatingCapacity, p.HeatingCapacity},
		{readings.CoolingCapacity, p.CoolingCapacity},
		{readings.SinkInletTemperature, sink.InletTemperature},
		{readings.SinkOutletTemperature, sink.OutletTemperature},
		{readings.SinkTemperatureChange, sink.TemperatureChange},
		{readings.SinkVolumeFlow, sink.VolumeFlow},
		{readings.SinkMassFlow, sink.MassFlow},
		{readings.SinkInletHumidity, sink.InletHumidity},
		{readings.SinkOutletHumidity, sink.OutletHumidity},
		{readings.SourceInletTemperature, source.InletTemperature},
		{readings.SourceOutletTemperature, source.OutletTemperature},
		{readings.SourceTemperatureChange, source.TemperatureChange},
		{readings.SourceVolumeFlow, source.VolumeFlow},
		{readings.SourceMassFlow, source.MassFlow},
		{readings.SourceInletHumidity, source.InletHumidity},
		{readings.SourceOutletHumidity, source.OutletHumidity},
	} {
		if x.of != nil {
			visit(x.reading, x.of)
		}
	}
}
