package cycle

// Request describes a cycle. Nil pointers and zero structs mean "not given"; where a number that matters is then assumed,
// the solution says so in a caution. [Solve] checks in one place what belongs together.
//
// The comment of a field names its path in a [Refusal] where it is not the field's own name in lower case.
type Request struct {
	Refrigerant Refrigerant // required
	Layout      Layout      // required
	// With names what a [Transcritical] layout is combined with: [SuctionExchanger] together with at most one other layout
	// but [SingleStage] and [Cascade]. Path "with".
	With    []Layout
	Purpose Purpose // required

	Evaporation  Evaporation
	Condensation Condensation // not with a GasCooler
	GasCooler    *GasCooler   // "gas_cooler"; Transcritical and Ejector, and with them alone

	Compressor Compressor // the only compressor, the low stage, the first step, or the lower circuit's
	// SecondCompressor is the high stage, the step after an injection port, or the parallel compressor. Nil means the same
	// efficiencies as Compressor. Path "second_compressor".
	SecondCompressor *Compressor

	Evaporator    Exchanger
	Condenser     Exchanger     // the gas cooler too
	SuctionLine   SuctionLine   // "suction_line"
	DischargeLine DischargeLine // "discharge_line"
	LiquidLine    LiquidLine    // "liquid_line"

	InternalExchanger *InternalExchanger // "internal_exchanger"
	Intermediate      *Intermediate      // nil: geometric mean of the two pressures, as an assumed default
	Economiser        *Economiser
	Intercooler       *Intercooler
	Cascade           *CascadeCircuit
	Ejector           *EjectorGeometry

	Size *Size // nil: results per 1 kg/s

	SourceTemperature  *float64 // "source_temperature", K: what the evaporator takes heat from
	SinkTemperature    *float64 // "sink_temperature", K: what the condenser gives heat to
	AmbientTemperature *float64 // "ambient_temperature", K: dead state; what lines and compressor shells exchange heat with
	AmbientPressure    *float64 // "site.ambient_pressure", Pa: of the air around the machine; nil means the standard atmosphere
}

// Evaporation fixes the evaporator outlet. Exactly one of Temperature and Pressure is given.
type Evaporation struct {
	Temperature *float64 // K
	Pressure    *float64 // Pa, at the evaporator outlet
	Reference   Reference
	Superheat   *float64 // K, at the evaporator outlet
	// OutletQuality is the quality of wet vapour at the evaporator outlet, instead of Superheat. Path "evaporation.outlet_quality".
	OutletQuality *float64
}

// Condensation fixes the condenser outlet. Exactly one of Temperature and Pressure is given.
type Condensation struct {
	Temperature *float64 // K
	Pressure    *float64 // Pa, at the condenser outlet
	Reference   Reference
	Subcooling  *float64 // K, at the condenser outlet
}

// GasCooler fixes the outlet of a gas cooler. Exactly one of OutletTemperature and Approach is given, and exactly one of
// Pressure, Correlation and Optimise.
type GasCooler struct {
	OutletTemperature *float64 // "gas_cooler.outlet_temperature", K
	Approach          *float64 // K, outlet above the sink temperature
	Pressure          *float64 // Pa, at the outlet
	Correlation       Correlation
	Optimise          Objective
	// PressureMax bounds the search for the optimum, Pa. Nil means 14 MPa, as usual for R744. Path "gas_cooler.pressure_max".
	PressureMax *float64
}

// Correlation names a published formula for the best high-side pressure of R744.
type Correlation uint8

// The correlations.
const (
	NoCorrelation Correlation = iota
	Liao                      // Liao, Zhao and Jakobsen 2000, Applied Thermal Engineering 20
	Sarkar                    // Sarkar, Bhattacharyya and Ram Gopal 2004, International Journal of Refrigeration 27
	ChenGu                    // Chen and Gu 2005, International Journal of Refrigeration 28
)

var correlationNames = [...]string{"", "liao_2000", "sarkar_2004", "chen_gu_2005"}

func (c Correlation) String() string { return nameOf(correlationNames[:], c) }

// Correlations returns the names of all correlations.
func Correlations() []string { return append([]string(nil), correlationNames[1:]...) }

// ParseCorrelation returns the correlation with that name and reports whether there is one.
func ParseCorrelation(name string) (Correlation, bool) {
	return parse[Correlation](correlationNames[:], name)
}

// Objective is what a free pressure is chosen for.
type Objective uint8

// The objectives.
const (
	NoObjective Objective = iota
	OptimiseCOP           // highest COP of the request's purpose
)

var objectiveNames = [...]string{"", "cop"}

func (o Objective) String() string { return nameOf(objectiveNames[:], o) }

// ParseObjective returns the objective with that name and reports whether there is one.
func ParseObjective(name string) (Objective, bool) { return parse[Objective](objectiveNames[:], name) }

// Compressor is one compressor or one step of compression.
type Compressor struct {
	// IsentropicEfficiency is the isentropic power over the power taken, 0 to 1. Power is whatever the efficiency refers to:
	// at the shaft or at the terminals. Path "compressor.isentropic_efficiency"; the others likewise.
	IsentropicEfficiency *float64
	DischargeTemperature *float64 // K, measured at the discharge flange, instead of IsentropicEfficiency
	VolumetricEfficiency *float64 // suction volume flow over swept volume flow
	HeatLossFraction     *float64 // heat given off to the ambient over the power taken, 0 up to 1
}

// Drop is a loss of pressure, given as one of its two fields. The zero value is no loss.
type Drop struct {
	Pressure float64 // "….pressure_drop", Pa
	// TemperatureEquivalent is the fall of saturation temperature that the loss means: of the dew point, or of the bubble
	// point in a liquid line. Path "….temperature_drop_equivalent", K.
	TemperatureEquivalent float64
}

// Exchanger is the refrigerant side of the evaporator or of the condenser.
type Exchanger struct{ Drop }

// SuctionLine leads from the evaporator, or from an internal exchanger, to the compressor.
type SuctionLine struct {
	Drop
	TemperatureRise float64 // "suction_line.temperature_rise", K; negative for a fall
}

// DischargeLine leads from the compressor to the condenser.
type DischargeLine struct {
	Drop
	TemperatureDrop float64 // "discharge_line.temperature_drop", K; negative for a rise
}

// LiquidLine leads from the condenser towards the expansion valve.
type LiquidLine struct {
	Drop
	TemperatureChange float64 // "liquid_line.temperature_change", K; negative when the liquid cools
}

// InternalExchanger subcools liquid with suction vapour. Effectiveness is heat over the most that either side could
// exchange.
type InternalExchanger struct {
	Effectiveness *float64 // 0 to 1; required
	Liquid        Drop     // "internal_exchanger.liquid"
	Vapour        Drop     // "internal_exchanger.vapour"
}

// Intermediate fixes the intermediate pressure of a layout that has one, by exactly one of its fields.
type Intermediate struct {
	Pressure    *float64 // Pa; in a cascade the condensing pressure of the lower circuit
	Temperature *float64 // K, dew point at that pressure; in a cascade the condensing temperature of the lower circuit
	Optimise    Objective
}

// Economiser is the exchanger that evaporates the injection flow of [EconomisedSubcooler].
type Economiser struct {
	Approach           *float64 // K, liquid outlet above the dew point of the injection flow; default 5 K
	InjectionSuperheat *float64 // "economiser.injection_superheat", K; default 5 K
	InjectionRatio     *float64 // "economiser.injection_ratio": injection flow over condenser flow, instead of Approach
}

// IntercoolerKind tells what cools the gas between two stages.
type IntercoolerKind uint8

// The kinds of intercooler.
const (
	DefaultIntercooler  IntercoolerKind = iota // open in two_stage_flash, closed in two_stage_intercooled
	OpenIntercooler                            // two_stage_flash: low-stage gas bubbles through the flash tank's liquid
	FlashGasRemoval                            // two_stage_flash: low-stage gas mixes with the flash tank's vapour
	ClosedIntercooler                          // two_stage_intercooled: as open, with the liquid for the evaporator subcooled in a coil
	ExternalIntercooler                        // two_stage_intercooled: water or air cools the gas; one expansion for all
)

var intercoolerNames = [...]string{"", "open", "flash_gas_removal", "closed", "external"}

func (k IntercoolerKind) String() string { return nameOf(intercoolerNames[:], k) }

// ParseIntercooler returns the kind of intercooler with that name and reports whether there is one.
func ParseIntercooler(name string) (IntercoolerKind, bool) {
	return parse[IntercoolerKind](intercoolerNames[:], name)
}

// Intercooler sits between the stages of a two-stage layout.
type Intercooler struct {
	Kind     IntercoolerKind
	Approach *float64 // K; closed: liquid above the intermediate dew point; external: gas above Temperature; default 5 K
	// Temperature is that of the water or air of an external intercooler, K. Nil means the sink temperature.
	Temperature *float64
}

// CascadeCircuit describes what lies above the lower circuit of a cascade. The request's own Refrigerant, Evaporation,
// Compressor, Evaporator and SuctionLine belong to the lower circuit, its Condensation and Condenser to the upper;
// the discharge and liquid lines to both.
type CascadeCircuit struct {
	// Upper holds the refrigerants above the lower circuit's, and must have exactly one. Path "cascade.upper".
	Upper      []Refrigerant
	Approach   *float64 // K, condensing below over evaporating above; default 5 K
	Superheat  *float64 // K, at the upper circuit's evaporator outlet
	Subcooling *float64 // K, at the lower circuit's condenser outlet
}

// EjectorGeometry describes an ejector by its losses.
type EjectorGeometry struct {
	MotiveEfficiency    *float64 // "ejector.motive_efficiency", 0 to 1; default 0.8
	SuctionEfficiency   *float64 // "ejector.suction_efficiency", 0 to 1; default 0.8
	DiffuserEfficiency  *float64 // "ejector.diffuser_efficiency", 0 to 1; default 0.75
	SuctionPressureDrop *float64 // "ejector.suction_pressure_drop", Pa, evaporator outlet to mixing section; default 30 kPa
}

// Size scales the cycle by exactly one of its fields.
type Size struct {
	Heating         *float64 // "size.heating", W given off by the condenser
	Cooling         *float64 // "size.cooling", W taken up by the evaporator
	CompressorPower *float64 // "size.compressor_power", W, of all compressors together
	MassFlow        *float64 // "size.mass_flow", kg/s, at label 1, or 1L in two stages and cascades
	SweptVolumeFlow *float64 // "size.swept_volume_flow", m3/s, of the compressor at that label
}
