package data

import (
	"bytes"
	_ "embed" // the pair and blend files
	"encoding/json"
	"errors"
	"fmt"
	"math"
)

//go:embed blends.json
var blendsFile []byte

// Blend is a refrigerant blend of nominal composition.
type Blend struct {
	Designation    string           `json:"designation"` // ISO 817
	Components     []BlendComponent `json:"components"`
	Published      NormalPoints     `json:"published"`
	Computed       ComputedPoints   `json:"computed"`
	Source         string           `json:"source"`
	Note           string           `json:"note"`
	Classification Classification   `json:"classification"`
}

// BlendComponent is the share of one refrigerant in a blend.
type BlendComponent struct {
	Designation  string  `json:"designation"`
	MassFraction float64 `json:"mass_fraction"`
}

// NormalPoints are the saturation temperatures at 101.325 kPa in K.
type NormalPoints struct {
	Bubble float64 `json:"normal_bubble_point"`
	Dew    float64 `json:"normal_dew_point"`
}

// ComputedPoints is what an independent evaluation of the same model gave, rounded to 0.001 K.
type ComputedPoints struct {
	MolarMass float64 `json:"molar_mass"` // kg/mol
	NormalPoints
}

// LoadBlends decodes the embedded blends. It returns an error that names the blend when one is incomplete, stands there
// twice, does not add up to one or names a refrigerant without a coefficient file.
func LoadBlends() ([]Blend, error) { return DecodeBlends(blendsFile) }

// DecodeBlends reads a file of blends and checks it.
func DecodeBlends(b []byte) ([]Blend, error) {
	var f struct {
		Description string  `json:"description"`
		Blends      []Blend `json:"blends"`
	}
	dec := json.NewDecoder(bytes.NewReader(b))
	dec.DisallowUnknownFields()
	if err := dec.Decode(&f); err != nil {
		return nil, fmt.Errorf("data: blends: %w", err)
	}
	seen := map[string]bool{}
	for i := range f.Blends {
		d := &f.Blends[i]
		if err := d.check(); err != nil {
			return nil, fmt.Errorf("data: blend %q: %w", d.Designation, err)
		}
		if seen[d.Designation] {
			return nil, fmt.Errorf("data: blend %s stands there twice", d.Designation)
		}
		seen[d.Designation] = true
	}
	return f.Blends, nil
}

func (d *Blend) check() error {
	if d.Designation == "" || d.Source == "" {
		return errors.New("designation and source must not be empty")
	}
	if len(d.Components) < 2 {
		return errors.New("a blend needs two components at least")
	}
	seen := map[string]bool{}
	var sum float64
	for _, c := range d.Components {
		switch {
		case !haveRefrigerant(c.Designation):
			return fmt.Errorf("no coefficient file of %q", c.Designation)
		case seen[c.Designation]:
			return fmt.Errorf("component %s stands there twice", c.Designation)
		case !(c.MassFraction > 0):
			return fmt.Errorf("mass fraction of %s must be positive, have %g", c.Designation, c.MassFraction)
		}
		seen[c.Designation] = true
		sum += c.MassFraction
	}
	if !(math.Abs(sum-1) < 1e-9) {
		return fmt.Errorf("mass fractions add up to %.10g", sum)
	}
	for _, p := range []NormalPoints{d.Published, d.Computed.NormalPoints} {
		if !(100 < p.Bubble && p.Bubble <= p.Dew && p.Dew < 500) {
			return fmt.Errorf("normal bubble and dew point %g and %g K are out of the question", p.Bubble, p.Dew)
		}
	}
	if !(d.Computed.MolarMass > 0) {
		return errors.New("computed molar mass must be positive")
	}
	return nil
}
