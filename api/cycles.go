package api

// cycleRequest describes a vapour-compression cycle.
type cycleRequest struct {
	calculation
	Layout       string        `json:"layout" validate:"max=64"`  // default single_stage
	Purpose      string        `json:"purpose" validate:"max=64"` // heating (default) or cooling
	Evaporation  evaporation   `json:"evaporation" validate:"required"`
	Condensation condensation  `json:"condensation" validate:"required"`
	Compressor   compressor    `json:"compressor"`
	Evaporator   exchangerDrop `json:"evaporator"`
	Condenser    exchangerDrop `json:"condenser"`
	Suction      suctionLine   `json:"suction_line"`
	Discharge    dischargeLine `json:"discharge_line"`
	Liquid       liquidLine    `json:"liquid_line"`
	Size         *size         `json:"size"` // without it, results are per 1 kg/s

	SourceTemperature  *float64 `json:"source_temperature"`
	SinkTemperature    *float64 `json:"sink_temperature"`
	AmbientTemperature *float64 `json:"ambient_temperature"`
}

// evaporation takes temperature or pressure.
type evaporation struct {
	Temperature *float64 `json:"temperature"`
	Pressure    *float64 `json:"pressure"`
	Reference   string   `json:"reference"` // dew (default) or mean
	Superheat   *float64 `json:"superheat"`
}

// condensation takes temperature or pressure.
type condensation struct {
	Temperature *float64 `json:"temperature"`
	Pressure    *float64 `json:"pressure"`
	Reference   string   `json:"reference"`
	Subcooling  *float64 `json:"subcooling"`
}

// compressor takes isentropic_efficiency or a measured discharge_temperature.
type compressor struct {
	IsentropicEfficiency *float64 `json:"isentropic_efficiency"`
	DischargeTemperature *float64 `json:"discharge_temperature"`
	VolumetricEfficiency *float64 `json:"volumetric_efficiency"`
	HeatLossFraction     *float64 `json:"heat_loss_fraction"`
}

// exchangerDrop is a pressure drop, given as pressure or as a drop of saturation temperature.
type exchangerDrop struct {
	PressureDrop              *float64 `json:"pressure_drop"`
	TemperatureDropEquivalent *float64 `json:"temperature_drop_equivalent"`
}

type suctionLine struct {
	exchangerDrop
	TemperatureRise *float64 `json:"temperature_rise"`
}

type dischargeLine struct {
	exchangerDrop
	TemperatureDrop *float64 `json:"temperature_drop"`
}

type liquidLine struct {
	exchangerDrop
	TemperatureChange *float64 `json:"temperature_change"`
}

// size takes exactly one member.
type size struct {
	Heating         *float64 `json:"heating"`
	Cooling         *float64 `json:"cooling"`
	CompressorPower *float64 `json:"compressor_power"`
	MassFlow        *float64 `json:"mass_flow"`
	SweptVolumeFlow *float64 `json:"swept_volume_flow"`
}

type cycleResponse struct {
	Refrigerant string            `json:"refrigerant"`
	Layout      string            `json:"layout"`
	Purpose     string            `json:"purpose"`
	Datum       string            `json:"datum"`
	Units       map[string]string `json:"units"`
	Site        *site             `json:"site,omitempty"`
	States      []cycleState      `json:"states"`
	Components  []component       `json:"components"`
	Performance performance       `json:"performance"`
	Closure     closure           `json:"closure"`
	Basis       basis             `json:"basis"`
	Cautions    []caution         `json:"cautions"`
}

// cycleState is a state with its label and place; the members of the state follow.
type cycleState struct {
	Label string `json:"label"`
	Place string `json:"place"`
	stateView
}

type component struct {
	Name              string   `json:"name"`
	Inlets            []string `json:"inlets"`
	Outlets           []string `json:"outlets"`
	MassFlow          float64  `json:"mass_flow"`
	Heat              float64  `json:"heat"` // into the refrigerant
	Work              float64  `json:"work"` // into the machine
	EntropyGeneration *float64 `json:"entropy_generation"`
	ExergyDestruction *float64 `json:"exergy_destruction"`
}

type performance struct {
	MassFlow                  float64  `json:"mass_flow"`
	HeatingCapacity           float64  `json:"heating_capacity"`
	CoolingCapacity           float64  `json:"cooling_capacity"`
	CompressorPower           float64  `json:"compressor_power"`
	COPHeating                float64  `json:"cop_heating"`
	COPCooling                float64  `json:"cop_cooling"`
	CarnotCOPHeating          *float64 `json:"carnot_cop_heating"`
	CarnotCOPCooling          *float64 `json:"carnot_cop_cooling"`
	SecondLawEfficiency       *float64 `json:"second_law_efficiency"`
	IsentropicEfficiency      float64  `json:"isentropic_efficiency"`
	PressureRatio             float64  `json:"pressure_ratio"`
	DischargeTemperature      float64  `json:"discharge_temperature"`
	SuctionVolumeFlow         float64  `json:"suction_volume_flow"`
	SweptVolumeFlow           *float64 `json:"swept_volume_flow"`
	VolumetricHeatingCapacity float64  `json:"volumetric_heating_capacity"`
	VolumetricCoolingCapacity float64  `json:"volumetric_cooling_capacity"`
}

type closure struct {
	EnergyResidualFraction    float64  `json:"energy_residual_fraction"`
	SmallestEntropyGeneration *float64 `json:"smallest_entropy_generation"`
}
