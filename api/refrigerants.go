package api

type refrigerantsResponse struct {
	Refrigerants []refrigerantSummary `json:"refrigerants"`
	Units        map[string]string    `json:"units"`
}

// refrigerantSummary is one row of the catalogue. Null means not known or not existing.
type refrigerantSummary struct {
	Designation         string     `json:"designation"`
	Name                string     `json:"name"`
	Kind                string     `json:"kind"` // pure or blend
	Composition         []fraction `json:"composition"`
	SafetyClass         *string    `json:"safety_class"` // ISO 817
	GWP100              *float64   `json:"gwp_100"`      // IPCC AR6
	CriticalTemperature float64    `json:"critical_temperature"`
	CriticalPressure    float64    `json:"critical_pressure"`
	CriticalDensity     float64    `json:"critical_density"`
	NormalBoilingPoint  *float64   `json:"normal_boiling_point"`
	TemperatureMin      float64    `json:"temperature_min"`
	TemperatureMax      float64    `json:"temperature_max"`
	PressureMax         float64    `json:"pressure_max"`
}

type fraction struct {
	Designation  string  `json:"designation"`
	MassFraction float64 `json:"mass_fraction"`
}

// refrigerantDetail is GET /v1/refrigerants/{designation}.
type refrigerantDetail struct {
	refrigerantSummary
	MolarMass              float64           `json:"molar_mass"`
	Formula                string            `json:"formula"`
	CAS                    string            `json:"cas"`
	Aliases                []string          `json:"aliases"`
	TripleTemperature      *float64          `json:"triple_temperature"`
	DensityMax             float64           `json:"density_max"`
	AcentricFactor         float64           `json:"acentric_factor"`
	Datums                 []string          `json:"datums"`
	ODP                    *float64          `json:"odp"`
	GWP                    gwp               `json:"gwp"`
	LowerFlammabilityLimit *float64          `json:"lower_flammability_limit"` // kind density
	ToxicityLimit          *float64          `json:"toxicity_limit"`
	PracticalLimit         *float64          `json:"practical_limit"`
	ConcentrationLimit     *float64          `json:"concentration_limit"`
	TypicalUse             string            `json:"typical_use"`
	Notes                  string            `json:"notes"`
	Provenance             provenance        `json:"provenance"`
	Model                  model             `json:"model"`
	Units                  map[string]string `json:"units"`
	Cautions               []caution         `json:"cautions"`
}

type gwp struct {
	AR4 *float64 `json:"ar4"`
	AR5 *float64 `json:"ar5"`
	AR6 *float64 `json:"ar6"`
}

// provenance says how well each group of numbers is known: S1 to S3 seen in that many independent transcriptions, M from
// memory, C computed from the equations of this service.
type provenance struct {
	Safety        string `json:"safety"`
	GWP           string `json:"gwp"`
	Thermodynamic string `json:"thermodynamic"`
}

// model describes the equation of state.
type model struct {
	Kind         string `json:"kind"`
	Source       string `json:"source"`
	Notes        string `json:"notes"`        // stated uncertainties among them
	Verification string `json:"verification"` // how the coefficients were confirmed
}
