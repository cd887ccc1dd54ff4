package machine

import "dewmark/service/cycle"

// Machine describes a machine. Nil pointers and zero structs mean "not given"; where a number that matters is then assumed,
// the operating point says so in a caution.
type Machine struct {
	Name        string
	Refrigerant cycle.Refrigerant // required; safe for concurrent use when given to [Rate]
	// Layout is required; every layout but [cycle.Cascade] can be solved. With combines as in a [cycle.Request].
	Layout  cycle.Layout
	With    []cycle.Layout
	Purpose cycle.Purpose // required

	Compressor Compressor
	// SecondCompressor is the high stage, the step after an injection port, or the parallel compressor. Only its efficiency
	// laws and heat loss count: its displacement follows from the flow. Nil means those of Compressor. Path
	// "machine.second_compressor".
	SecondCompressor *Compressor

	Evaporator Exchanger
	Condenser  Exchanger // the gas cooler too
	Superheat  *float64  // K, at the evaporator outlet; default 5 K
	Subcooling *float64  // K, at the condenser outlet; default 0; not with a gas cooler
	// GasCooler says how the high-side pressure is set. Transcritical and ejector layouts need it, and they alone. Path
	// "machine.gas_cooler".
	GasCooler *HighSide

	SuctionLine       cycle.SuctionLine        // "machine.suction_line"
	DischargeLine     cycle.DischargeLine      // "machine.discharge_line"
	LiquidLine        cycle.LiquidLine         // "machine.liquid_line"
	InternalExchanger *cycle.InternalExchanger // "machine.internal_exchanger"
	Intermediate      *cycle.Intermediate      // not optimised
	Economiser        *cycle.Economiser
	Intercooler       *cycle.Intercooler
	Ejector           *cycle.EjectorGeometry

	Limits      Limits
	Auxiliaries Auxiliaries
}

// HighSide sets the high-side pressure of a gas cooler by exactly one of its first three fields.
type HighSide struct {
	Pressure    *float64 // Pa, at the gas cooler outlet
	Correlation cycle.Correlation
	Optimise    cycle.Objective
	PressureMin *float64 // "machine.gas_cooler.pressure_min", Pa; default just above the critical pressure
	PressureMax *float64 // "machine.gas_cooler.pressure_max", Pa; default 14 MPa, as usual for R744
}

// Limits are what a compressor or its maker allows beside the envelope. Nil means no limit. An operating point that breaks
// one is still answered: it lists its breaches.
type Limits struct {
	DischargeTemperature  *float64 // "machine.limits.discharge_temperature", K, at most
	PressureRatioMax      *float64 // "machine.limits.pressure_ratio_max"
	PressureRatioMin      *float64 // "machine.limits.pressure_ratio_min"
	PressureDifferenceMin *float64 // "machine.limits.pressure_difference_min", Pa
	HighPressure          *float64 // "machine.limits.high_pressure", Pa, at most, at the compressor's discharge
	LowPressure           *float64 // "machine.limits.low_pressure", Pa, at least, at the compressor's suction
	// EvaporationMax is where an expansion valve with a limited opening pressure holds the evaporation, K: above it the
	// superheat rises instead. Path "machine.limits.evaporation_max".
	EvaporationMax *float64
}

// Auxiliaries are the powers beside the compressor's.
type Auxiliaries struct {
	Source  Auxiliary // fan or pump of the source
	Sink    Auxiliary // fan or pump of the sink
	Control *float64  // W, always on
}

// Auxiliary is a fan or a pump, given by its power or by the pressure rise and the efficiency. The zero value takes no
// power. Paths "machine.auxiliaries.source.power" and so on.
type Auxiliary struct {
	Power        *float64 // W, at ReferenceFlow where that is given
	PressureRise *float64 // "….pressure_rise", Pa, at ReferenceFlow where that is given
	Efficiency   *float64 // of fan or pump, motor and drive together, with PressureRise
	// ReferenceFlow is the volume flow in m3/s that Power or PressureRise belongs to. With it a fixed circuit is assumed:
	// the pressure rise grows with the square of the flow and the power with its cube. Path "….reference_flow".
	ReferenceFlow *float64
	// HeatToStream is the share of the power that heats the stream and so adds to a heating capacity or takes from a cooling
	// capacity, 0 to 1; default 0. Path "….heat_to_stream".
	HeatToStream *float64
}
