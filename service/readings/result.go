package readings

import (
	"time"

	"dewmark/props"
	"dewmark/service/readings/uncertainty"
)

// Figure names a number that is computed from readings.
type Figure uint8

// The figures.
const (
	FigureSuperheat               Figure = iota // K, at the compressor suction
	FigureEvaporatorSuperheat                   // K, at the evaporator outlet, where that is read
	FigureSubcooling                            // K, at the condenser outlet
	FigureDischargeSuperheat                    // K, at the compressor discharge
	FigureEvaporationTemperature                // K, dew point at the evaporator outlet
	FigureCondensationTemperature               // K, dew point at the condenser outlet
	FigurePressureRatio                         // of the compressor
	FigureIsentropicEfficiency                  // isentropic power over the power taken
	FigureVolumetricEfficiency                  // suction volume flow over swept volume flow
	FigureMassFlow                              // kg/s at the compressor suction
	FigureHeatingCapacity                       // W given off by the condenser or gas cooler
	FigureCoolingCapacity                       // W taken up by the evaporator
	FigureCompressorPower                       // W
	FigureCOPHeating
	FigureCOPCooling
	FigureSecondLawEfficiency // COP of heating over Carnot's between the mean temperatures of source and sink
	FigureEnergyClosure       // heat given off less heat and power taken up, over heat given off, where all three are measured
	FigureCount
)

var figureNames = [FigureCount]string{
	"superheat", "evaporator_superheat", "subcooling", "discharge_superheat", "evaporation_temperature", "condensation_temperature",
	"pressure_ratio", "isentropic_efficiency", "volumetric_efficiency", "mass_flow", "heating_capacity", "cooling_capacity",
	"compressor_power", "cop_heating", "cop_cooling", "second_law_efficiency", "energy_closure",
}

func (f Figure) String() string {
	if f >= FigureCount {
		return ""
	}
	return figureNames[f]
}

// ParseFigure returns the figure with that name and reports whether there is one.
func ParseFigure(name string) (Figure, bool) {
	for i, n := range figureNames {
		if n == name {
			return Figure(i), true
		}
	}
	return 0, false
}

// Result is what a sample tells.
type Result struct {
	Time    time.Time
	States  []StateAt // places that are read, in the order 1, 2, 2s, 3, 4, 5, 6, 7
	Figures [FigureCount]FigureResult
	// Routes are the ways to mass flow, both capacities and power that the readings allow, with the weight of each in the
	// figure.
	Routes        []Route
	Disagreements []Disagreement // between routes to one figure, the worst first
	Plausibility  []Finding
	Comparison    *Comparison  // with the given machine; nil without one or where it has no operating point
	Indications   []Indication // the most likely first; nil unless the comparison shows more than chance
	Draws         *DrawReport  // nil unless asked for
	Cautions      []Caution
}

// Figure returns the estimate of a figure.
func (r *Result) Figure(f Figure) *uncertainty.Estimate { return &r.Figures[f].Estimate }

// FigureResult is a figure with its uncertainty. Values that are not known are NaN.
type FigureResult struct {
	uncertainty.Estimate
	Drawn      *uncertainty.Drawn      // nil unless drawn
	Validation *uncertainty.Validation // nil unless drawn
}

// StateAt is the state of the refrigerant at one place.
type StateAt struct {
	Label string
	Place string // in words, such as "compressor suction"
	// Known reports whether the readings fix the state. Where not, State holds pressure and temperature alone and NaN.
	Known bool
	State props.State
}

// RouteName names a way to size the machine.
type RouteName string

// The routes.
const (
	SinkStream        RouteName = "sink_stream"        // flow and temperatures of what the condenser heats
	HeatingMeter      RouteName = "heating_meter"      // a heat meter on that side
	SourceStream      RouteName = "source_stream"      // flow and temperatures of what the evaporator cools
	CoolingMeter      RouteName = "cooling_meter"      // a heat meter on that side
	FlowMeasured      RouteName = "mass_flow"          // a flow meter in the refrigerant
	PowerMeasured     RouteName = "power_meter"        // power of the compressor, as measured
	CompressorBalance RouteName = "compressor_balance" // power over the rise of enthalpy
	EnergyBalance     RouteName = "energy_balance"     // heat given off = heat and power taken up
	CompressorMap     RouteName = "compressor_map"     // what the given machine's compressor should move
)

// Route is a way to one figure.
type Route struct {
	Name     RouteName
	Figure   Figure // mass flow, a capacity or the compressor's power
	Value    float64
	Standard float64 // standard uncertainty
	Weight   float64 // in the figure, 0 to 1
}

// Disagreement is a pair of routes to one figure that differ by more than twice the standard uncertainty of their
// difference.
type Disagreement struct {
	Figure Figure
	A, B   RouteName
	Ratio  float64 // squared difference over its variance, above 4
}

// FindingCode is a stable name for something implausible.
type FindingCode string

// The findings.
const (
	PressuresTooClose      FindingCode = "pressures_too_close"
	DischargeNotHottest    FindingCode = "discharge_not_hottest"
	EvaporationAboveSource FindingCode = "evaporation_above_source"
	CondensationBelowSink  FindingCode = "condensation_below_sink"
	SuperheatImplausible   FindingCode = "superheat_implausible"
	SubcoolingImplausible  FindingCode = "subcooling_implausible"
	EfficiencyImplausible  FindingCode = "efficiency_implausible"
	VolumetricImplausible  FindingCode = "volumetric_efficiency_implausible"
	COPImplausible         FindingCode = "cop_implausible"
	EnergyNotClosed        FindingCode = "energy_not_closed"
	RoutesDisagree         FindingCode = "routes_disagree"
	FloodbackSuspected     FindingCode = "floodback_suspected"
	StandstillPressureHigh FindingCode = "standstill_pressure_high"
	StandstillPressureLow  FindingCode = "standstill_pressure_low"
	OutsideSaturation      FindingCode = "outside_saturation"      // a pressure at which the refrigerant neither boils nor condenses
	NegativeDuty           FindingCode = "negative_duty"           // a stream that changes the wrong way
	EnthalpiesOutOfOrder   FindingCode = "enthalpies_out_of_order" // compression or heat exchange the wrong way
)

// Finding is something that does not fit.
type Finding struct {
	Code    FindingCode
	Field   string // path of the reading or figure that it speaks of, or ""
	Message Message
	// Candidates are refrigerants with which superheat, subcooling and efficiency would be plausible, in findings that make
	// one doubt the refrigerant.
	Candidates []Candidate
}

// Candidate is another refrigerant that would fit. Values that are not known are NaN.
type Candidate struct {
	Designation          string
	Superheat            float64 // K
	Subcooling           float64 // K
	IsentropicEfficiency float64
}

// DrawReport says how the random draws went.
type DrawReport struct {
	Seed     uint64
	Draws    int
	Failed   int
	Failures map[FailureName]int
	Stable   bool // every figure has its digits
}

// FailureName says why a draw has no result.
type FailureName string

// The failures.
const (
	WetSuction      FailureName = "wet_vapour"    // a state that was vapour is no longer
	FlashedLiquid   FailureName = "flashed"       // a state that was liquid is no longer
	CrossedEnthalpy FailureName = "crossed"       // differences of enthalpy or temperature change their sign
	OutsideModel    FailureName = "outside_model" // a state outside the property model
)
