// Package data embeds the coefficient files, one JSON file a refrigerant: the equation of state with its source and
// range, the other names the refrigerant goes by, and its safety and environmental classification.
//
// Units are those of the sources: K, Pa, mol/m3, kg/mol, J/(mol K), and kg/m3 for concentration limits. An entry that is
// null is not known.
package data

import (
	"bytes"
	"embed"
	"encoding/json"
	"errors"
	"fmt"
	"io/fs"
	"math"

	"dewmark/props/helmholtz"
)

//go:embed R*.json
var files embed.FS

// Record is the content of one coefficient file.
type Record struct {
	ID                string             `json:"id"` // ISO 817 designation
	Name              string             `json:"name"`
	Formula           string             `json:"formula"`
	CAS               string             `json:"cas"`
	MolarMass         float64            `json:"molar_mass"`
	GasConstant       float64            `json:"gas_constant"`
	Reducing          Reducing           `json:"reducing"`
	Critical          Critical           `json:"critical"`
	TripleTemperature *float64           `json:"triple_temperature"`
	Validity          Validity           `json:"validity"`
	Acentric          float64            `json:"acentric"`
	Ideal             helmholtz.Ideal    `json:"ideal"`
	Residual          helmholtz.Residual `json:"residual"`
	Source            string             `json:"source"`
	Notes             string             `json:"notes"`
	Verification      string             `json:"verification"`
	Aliases           []string           `json:"aliases"`
	Classification    Classification     `json:"classification"`
	Transport         json.RawMessage    `json:"transport"`
}

// Reducing is the point that makes tau and delta dimensionless.
type Reducing struct {
	Temperature float64 `json:"temperature"`
	Density     float64 `json:"density"`
}

// Critical is the critical point that the paper states; the equation's own differs slightly.
type Critical struct {
	Temperature float64 `json:"temperature"`
	Pressure    float64 `json:"pressure"`
	Density     float64 `json:"density"`
}

// Validity is the range the authors state for the equation.
type Validity struct {
	TemperatureMin float64 `json:"temperature_min"`
	TemperatureMax float64 `json:"temperature_max"`
	PressureMax    float64 `json:"pressure_max"`
	DensityMax     float64 `json:"density_max"`
}

// Classification holds safety and environmental data; nil means not known.
type Classification struct {
	SafetyClass            *string    `json:"safety_class"`             // ISO 817 / ASHRAE 34
	ODP                    *float64   `json:"odp"`                      // relative to R11
	GWP100                 GWP        `json:"gwp_100"`                  // relative to R744
	LowerFlammabilityLimit *float64   `json:"lower_flammability_limit"` // kg/m3
	ToxicityLimit          *float64   `json:"toxicity_limit"`           // kg/m3, ATEL/ODL
	PracticalLimit         *float64   `json:"practical_limit"`          // kg/m3, EN 378
	ConcentrationLimit     *float64   `json:"concentration_limit"`      // kg/m3, RCL of ASHRAE 34
	TypicalUse             string     `json:"typical_use"`
	Notes                  string     `json:"notes"`
	Provenance             Provenance `json:"provenance"`
}

// GWP holds the 100-year global warming potential of three IPCC assessment reports.
type GWP struct {
	AR4 *float64 `json:"ar4"`
	AR5 *float64 `json:"ar5"`
	AR6 *float64 `json:"ar6"`
}

// Provenance says how well each group of numbers is known: S1 to S3 seen in that many independent transcriptions,
// M from memory, C computed from the equations of this project.
type Provenance struct {
	Safety        string `json:"safety"`
	GWP           string `json:"gwp"`
	Thermodynamic string `json:"thermodynamic"`
}

// Load decodes every embedded file. It returns an error that names the file when one has an unknown member, lacks a
// number or holds one that is out of the question.
func Load() ([]Record, error) {
	names, err := fs.Glob(files, "R*.json")
	if err != nil {
		return nil, err
	}
	records := make([]Record, len(names))
	for i, name := range names {
		b, err := files.ReadFile(name)
		if err != nil {
			return nil, err
		}
		if records[i], err = Decode(b); err != nil {
			return nil, fmt.Errorf("data: %s: %w", name, err)
		}
		if name != records[i].ID+".json" {
			return nil, fmt.Errorf("data: %s holds %s", name, records[i].ID)
		}
	}
	return records, nil
}

// Decode reads one coefficient file and checks it.
func Decode(b []byte) (Record, error) {
	var r Record
	dec := json.NewDecoder(bytes.NewReader(b))
	dec.DisallowUnknownFields()
	if err := dec.Decode(&r); err != nil {
		return Record{}, err
	}
	for what, v := range map[string]float64{
		"molar_mass": r.MolarMass, "gas_constant": r.GasConstant,
		"reducing.temperature": r.Reducing.Temperature, "reducing.density": r.Reducing.Density,
		"critical.temperature": r.Critical.Temperature, "critical.pressure": r.Critical.Pressure, "critical.density": r.Critical.Density,
		"validity.temperature_min": r.Validity.TemperatureMin, "validity.temperature_max": r.Validity.TemperatureMax,
		"validity.pressure_max": r.Validity.PressureMax, "validity.density_max": r.Validity.DensityMax,
	} {
		if !(v > 0) || math.IsInf(v, 0) {
			return Record{}, fmt.Errorf("%s must be positive and finite, have %g", what, v)
		}
	}
	v := r.Validity
	// The range of R236ea ends 0.4 K below its critical point, as its authors state it.
	if !(v.TemperatureMin < r.Critical.Temperature && r.Critical.Temperature < v.TemperatureMax+1 && r.Critical.Density < v.DensityMax) {
		return Record{}, errors.New("validity must reach from below the critical point to above it")
	}
	if r.ID == "" || r.Source == "" {
		return Record{}, errors.New("id and source must not be empty")
	}
	return r, nil
}
