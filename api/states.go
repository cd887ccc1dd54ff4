package api

// statesRequest asks for the states of one refrigerant.
type statesRequest struct {
	calculation
	Points     []point  `json:"points" validate:"required,min=1"`
	Properties []string `json:"properties" validate:"max=64,dive,max=64"`
}

// calculation holds what all requests that compute share.
type calculation struct {
	Refrigerant string            `json:"refrigerant" validate:"required,max=64"`
	Datum       string            `json:"datum" validate:"max=32"`
	Units       map[string]string `json:"units"`
	Site        *site             `json:"site"`
	Extrapolate bool              `json:"extrapolate"`
}

// point names a state by exactly two of its properties. Phase says which one is meant where a pair has several.
type point struct {
	ID             string   `json:"id" validate:"max=128"`
	Temperature    *float64 `json:"temperature"`
	Pressure       *float64 `json:"pressure"`
	Density        *float64 `json:"density"`
	SpecificVolume *float64 `json:"specific_volume"`
	Enthalpy       *float64 `json:"enthalpy"`
	Entropy        *float64 `json:"entropy"`
	InternalEnergy *float64 `json:"internal_energy"`
	Quality        *float64 `json:"quality"`
	Phase          string   `json:"phase"`
}

// statesResponse holds the answers in the order of the points.
type statesResponse struct {
	Refrigerant string            `json:"refrigerant"`
	Datum       string            `json:"datum"`
	Units       map[string]string `json:"units"`
	Site        *site             `json:"site,omitempty"` // what gauge pressures counted from
	Failed      int               `json:"failed"`
	States      []stateItem       `json:"states"`
	Basis       basis             `json:"basis"`
	Cautions    []caution         `json:"cautions"`
}

// singleStateResponse is the answer to GET /v1/states: the members of the state stand beside those of the response.
type singleStateResponse struct {
	Refrigerant string            `json:"refrigerant"`
	Datum       string            `json:"datum"`
	Units       map[string]string `json:"units"`
	Site        *site             `json:"site,omitempty"`
	stateView
	Basis    basis     `json:"basis"`
	Cautions []caution `json:"cautions"`
}

// stateItem is one place of a batch: a state, or the problem that stands for it.
type stateItem struct {
	ID      string
	State   *stateView // its members are members of the item
	Problem *Problem   // member "problem"
}

// basis names what a result rests on.
type basis struct {
	Refrigerant  string `json:"refrigerant"`
	Model        string `json:"model"`  // "Helmholtz energy equation of state"
	Source       string `json:"source"` // of the equation
	Datum        string `json:"datum"`
	Extrapolated bool   `json:"extrapolated"`
	Version      string `json:"version"` // of the service
}

// caution is a reservation about a result.
type caution struct {
	Code   string `json:"code"`
	Detail string `json:"detail"`
}

// stateFields are the members of a state in the order they are written. Numbers that do not exist in the state's phase
// are null. A blend in two-phase adds its compositions.
var stateFields = [...]stateField{
	{name: "phase", kind: kindNone}, // liquid, vapour, two_phase, supercritical
	{name: "temperature", kind: kindTemperature},
	{name: "pressure", kind: kindPressure},
	{name: "density", kind: kindDensity},
	{name: "specific_volume", kind: kindSpecificVolume},
	{name: "enthalpy", kind: kindEnthalpy},
	{name: "entropy", kind: kindEntropy},
	{name: "internal_energy", kind: kindEnthalpy},
	{name: "quality", kind: kindNone}, // null outside the dome
	{name: "isobaric_heat_capacity", kind: kindEntropy},
	{name: "isochoric_heat_capacity", kind: kindEntropy},
	{name: "speed_of_sound", kind: kindVelocity},
	{name: "compressibility_factor", kind: kindNone},
	{name: "isentropic_exponent", kind: kindNone},
	{name: "joule_thomson_coefficient", kind: kindJouleThomson},
	{name: "isothermal_compressibility", kind: kindCompressibility},
	{name: "volume_expansivity", kind: kindExpansivity},
	{name: "viscosity", kind: kindViscosity},
	{name: "thermal_conductivity", kind: kindThermalConductivity},
	{name: "prandtl_number", kind: kindNone},
	{name: "surface_tension", kind: kindSurfaceTension},
	{name: "dew_temperature", kind: kindTemperature}, // null where no saturation has this pressure
	{name: "bubble_temperature", kind: kindTemperature},
	{name: "superheat", kind: kindTemperatureDifference},  // vapour only
	{name: "subcooling", kind: kindTemperatureDifference}, // liquid only
}

type stateField struct {
	name string
	kind kind
}

// stateView is a state in the caller's units.
type stateView struct{}
