package transport

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"math"
)

// Method names a family of models.
type Method string

// The methods.
const (
	Correlation         Method = "reference_correlation"
	CorrespondingStates Method = "extended_corresponding_states"
	EntropyScaling      Method = "residual_entropy_scaling"
	BoilingPointRule    Method = "boiling_point_estimate" // Brock and Bird
	Parachor            Method = "parachor"               // Macleod and Sugden
)

// Record describes a model of one property: what it is, where it comes from and how far it goes.
type Record struct {
	Property     Property
	Rank         int // 1 recommended, 2 alternative, above 10 a general method
	Method       Method
	Source       string
	Note         string
	Verification string // how the coefficients were confirmed
	Range        Range
	Uncertainty  Uncertainty

	standing []Caution // reservations at every state
}

// Range is where a model holds. A coefficient file that states none means that of the equation of state.
type Range struct {
	TemperatureMin float64 `json:"temperature_min"` // K
	TemperatureMax float64 `json:"temperature_max"` // K
	PressureMax    float64 `json:"pressure_max"`    // Pa
}

// Uncertainty is a relative standard uncertainty above and below the critical density. Unless Basis says that the source
// states it, it is an estimate of this project.
type Uncertainty struct {
	Liquid float64 `json:"liquid"`
	Gas    float64 `json:"gas"`
	Basis  string  `json:"basis"`
}

// form is the content of the transport member of a coefficient file.
type form struct {
	Viscosity           []json.RawMessage `json:"viscosity"`
	ThermalConductivity []json.RawMessage `json:"thermal_conductivity"`
	SurfaceTension      []json.RawMessage `json:"surface_tension"`
}

// head holds the members that every record has.
type head struct {
	Rank         int          `json:"rank"`
	Kind         string       `json:"kind"`
	Source       string       `json:"source"`
	Range        *Range       `json:"range"`
	Uncertainty  *Uncertainty `json:"uncertainty"`
	Note         string       `json:"note"`
	Doubtful     string       `json:"doubtful"`
	Estimate     bool         `json:"estimate"`
	Verification string       `json:"verification"`
}

// kinds says what a kind of model is good for where its record states nothing. The figures of the general methods are
// the spread of these against the reference correlations along saturation, which a test of this package measures; those
// of reference correlations are common practice: their papers state 1 to 5 % with a coverage factor of 2.
var kinds = map[string]struct {
	method      Method
	uncertainty Uncertainty
}{
	"viscosity_sum":        {Correlation, Uncertainty{0.02, 0.01, "usual for a reference correlation of viscosity"}},
	"conductivity_sum":     {Correlation, Uncertainty{0.025, 0.025, "usual for a reference correlation of thermal conductivity"}},
	"iapws_2008":           {Correlation, Uncertainty{0.01, 0.01, "IAPWS R12-08, from memory: 1 to 3 %"}},
	"iapws_2011":           {Correlation, Uncertainty{0.01, 0.015, "IAPWS R15-11, from memory: 1 to 4 %"}},
	"shan_2000":            {Correlation, Uncertainty{0.05, 0.05, "residual concentration model, no published check value"}},
	"corresponding_states": {CorrespondingStates, Uncertainty{0.05, 0.05, "usual for fitted shape factors"}},
	"entropy_scaling":      {EntropyScaling, Uncertainty{}},
	"sigma_sum":            {Correlation, Uncertainty{0.02, 0.02, "independent fits agree within 3 %"}},
	"iapws_surface":        {Correlation, Uncertainty{0.005, 0.005, "IAPWS R1-76, from memory: 0.2 to 2 %"}},
	"brock_bird":           {BoilingPointRule, Uncertainty{0.08, 0.08, "spread against published fits"}},
}

// entropyUncertainty is that of entropy scaling, by property.
var entropyUncertainty = [...]Uncertainty{
	Viscosity:           {0.04, 0.09, "spread of the method against reference correlations along saturation"},
	ThermalConductivity: {0.06, 0.12, "spread of the method against reference correlations along saturation"},
}

// describe makes the description of a record that has been read.
func describe(h *head, p Property, f *Fluid) (Record, error) {
	k, ok := kinds[h.Kind]
	if !ok {
		return Record{}, fmt.Errorf("unknown kind %q", h.Kind)
	}
	if h.Rank < 1 || h.Source == "" {
		return Record{}, errors.New("rank and source must not be empty")
	}
	r := Record{
		Property: p, Rank: h.Rank, Method: k.method, Source: h.Source, Note: h.Note, Verification: h.Verification,
		Range: Range{f.TemperatureMin, f.TemperatureMax, f.PressureMax}, Uncertainty: k.uncertainty,
	}
	if k.method == EntropyScaling {
		r.Uncertainty = entropyUncertainty[p]
	}
	if h.Range != nil {
		r.Range = *h.Range
		if r.Range.PressureMax == 0 {
			r.Range.PressureMax = math.Inf(1)
		}
		if !(0 < r.Range.TemperatureMin && r.Range.TemperatureMin < r.Range.TemperatureMax) {
			return Record{}, errors.New("range must have a lower and a higher temperature")
		}
	}
	if h.Uncertainty != nil {
		r.Uncertainty = *h.Uncertainty
	}
	if h.Estimate {
		r.standing = append(r.standing, Caution{
			Code: Estimated, Property: p,
			Text: fmt.Sprintf("%s of %s is estimated: %s", p, f.Designation, h.Source),
		})
	}
	if h.Doubtful != "" {
		r.standing = append(r.standing, Caution{
			Code: Doubtful, Property: p,
			Text: fmt.Sprintf("%s of %s is doubtful. %s", p, f.Designation, h.Doubtful),
		})
	}
	return r, nil
}

// check returns in which respects a state is outside the range of r.
func (r *Record) check(T, p float64) reservation {
	var out reservation
	if T < r.Range.TemperatureMin || T > r.Range.TemperatureMax {
		out |= beyondTemperature
	}
	if p > r.Range.PressureMax {
		out |= beyondPressure
	}
	return out
}

// decode reads a record into v, which must hold a member for everything in it.
func decode(b []byte, v any) error {
	dec := json.NewDecoder(bytes.NewReader(b))
	dec.DisallowUnknownFields()
	return dec.Decode(v)
}
