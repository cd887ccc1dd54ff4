package cycle

import "dewmark/props"

// Solution is a solved cycle. A number that does not exist is NaN, such as a Carnot COP without a source temperature.
type Solution struct {
	Layout     Layout
	With       []Layout // as in the request
	Purpose    Purpose
	PerUnit    bool        // no size was given: everything is per 1 kg/s at label 1 (1L)
	States     []StateAt   // in the order of the flow, starting at the evaporator outlet
	Components []Component // likewise
	// Compressors has an entry for each compressor or step of compression, the one at label 1 (1L) first.
	Compressors []CompressorPerformance
	Performance Performance
	Figures     Figures
	Optima      []Optimum // pressures that were optimised; nil when none was
	Closure     Closure
	Cautions    []Caution
	Ambient     float64 // dead state in force, K
	StatesAsked int     // how many states the property model was asked for
}

// StateAt is the state of the refrigerant at one place.
type StateAt struct {
	Label       string
	Place       string // in words, such as "compressor suction"
	Refrigerant Refrigerant
	MassFlow    float64 // kg/s
	State       props.State
}

// Component is the account of one component. Its energy balance is Heat + Work + sum of flow times enthalpy in = sum out.
type Component struct {
	Name     string
	Inlets   []string // labels; shared, not to be modified
	Outlets  []string
	MassFlow float64 // kg/s, of all inlets together; of the first inlet where two streams pass without mixing
	Heat     float64 // W, into the refrigerant from outside
	Work     float64 // W, into the refrigerant or its compressor
	// HeatTemperature is that of what Heat comes from or goes to, K; NaN without heat or when the request does not say.
	HeatTemperature   float64
	EntropyGeneration float64 // W/K, including the heat's way to HeatTemperature; NaN when that is not known
	ExergyDestruction float64 // W; NaN likewise
}

// CompressorPerformance describes one compressor or step of compression.
type CompressorPerformance struct {
	Name                 string  // that of its component
	MassFlow             float64 // kg/s
	Power                float64 // W
	IsentropicEfficiency float64
	VolumetricEfficiency float64
	PressureRatio        float64
	DischargeTemperature float64 // K
	SuctionVolumeFlow    float64 // m3/s
	SweptVolumeFlow      float64 // m3/s; NaN for a step that shares its swept volume with another
}

// Performance holds the figures of the whole machine.
type Performance struct {
	MassFlow         float64 // kg/s at label 1 (1L)
	HeatingCapacity  float64 // W given off by the condenser
	CoolingCapacity  float64 // W taken up by the evaporator
	CompressorPower  float64 // W, all compressors
	COPHeating       float64
	COPCooling       float64
	CarnotCOPHeating float64 // between source and sink temperature; NaN unless both are given and sink > source
	CarnotCOPCooling float64
	// SecondLawEfficiency is the COP of the request's purpose over the Carnot COP of the same purpose.
	SecondLawEfficiency       float64
	IsentropicEfficiency      float64 // of the compressor at label 1 (1L)
	PressureRatio             float64 // of the whole lift: highest discharge over lowest suction pressure; of the lower circuit in a cascade
	DischargeTemperature      float64 // K, highest of all compressors
	SuctionVolumeFlow         float64 // m3/s at label 1 (1L)
	SweptVolumeFlow           float64 // m3/s
	VolumetricHeatingCapacity float64 // J/m3 of suction volume at label 1 (1L)
	VolumetricCoolingCapacity float64 // J/m3
}

// Figures holds what only some layouts have; NaN in the others.
type Figures struct {
	EvaporatingPressure   float64 // Pa, at the evaporator outlet
	HighPressure          float64 // Pa, at the condenser or gas cooler outlet
	IntermediatePressure  float64 // Pa; in a cascade the lower circuit's condensing pressure
	InjectionRatio        float64 // injection or flash gas flow over condenser flow
	FlowRatio             float64 // high-stage flow over low-stage flow; upper over lower circuit
	EntrainmentRatio      float64 // ejector: suction flow over motive flow
	PressureLift          float64 // Pa: separator over evaporator outlet
	EjectorEfficiency     float64 // by Elbel and Hrnjak 2008
	InternalExchangerHeat float64 // W
	CapacityLimitedBy     string  // internal exchanger: "vapour" or "liquid", the side of the smaller capacity; "" without one
	MotiveVelocity        float64 // m/s, ejector: at the motive nozzle's exit
	SuctionVelocity       float64 // m/s, ejector: at the suction nozzle's exit
	MixedVelocity         float64 // m/s, ejector: before the diffuser
}

var noFigures = Figures{nan, nan, nan, nan, nan, nan, nan, nan, nan, "", nan, nan, nan}

// Optimum describes the search for one pressure.
type Optimum struct {
	Field       string  // path of the field that asked for it
	Pressure    float64 // Pa
	COP         float64 // of the request's purpose
	Step        float64 // Pa, beside the optimum, for the two losses
	LossBelow   float64 // fraction of COP lost one step below; NaN when that is outside the bracket
	LossAbove   float64 // fraction of COP lost one step above; likewise
	Tolerance   float64 // Pa, width of the last bracket
	Evaluations int
	AtLimit     bool // the best pressure is an end of the bracket: no inner optimum
	atLow       bool // the lower end
}

// Closure says how well the accounts close.
type Closure struct {
	EnergyResidualFraction    float64 // sum of the components' absolute energy residuals over the compressor power
	SmallestEntropyGeneration float64 // W/K, of the components where it is known
	SmallestComponent         string
	ExergyDestruction         float64 // W, all components; NaN unless source and sink temperatures are given
	ExergyDelivered           float64 // W, with the heat given off
	ExergyReceived            float64 // W, with the heat taken up
	// ExergyResidualFraction is power - destroyed - delivered + received over power.
	ExergyResidualFraction float64
}
