package data

import (
	"bytes"
	_ "embed" // the pair and blend files
	"encoding/json"
	"errors"
	"fmt"
	"math"

	"dewmark/props/helmholtz"
)

//go:embed pairs.json
var pairsFile []byte

// Pairs is the content of the file of binary parameters of the mixture model.
type Pairs struct {
	Description string            `json:"description"`
	Model       map[string]string `json:"model"` // the conventions of the parameters, by topic
	Missing     []MissingPair     `json:"missing"`
	Pairs       []Pair            `json:"pairs"`
}

// PairStatus says where the parameters of a pair come from.
type PairStatus string

// The statuses.
const (
	Published  PairStatus = "published"   // parameters of the cited paper
	Fitted     PairStatus = "fitted here" // fitted for this project to the cited points
	Assumed    PairStatus = "assumed"     // Lorentz-Berthelot: every parameter one, no data
	Unverified PairStatus = "unverified"  // recalled and never tested
)

// Pair holds the binary parameters of two refrigerants. The first of Components is component i of the formulas.
type Pair struct {
	Components           [2]string    `json:"components"`
	Status               PairStatus   `json:"status"`
	Reducing             PairReducing `json:"reducing"`
	KunzWagnerEquivalent *KunzWagner  `json:"kunz_wagner_equivalent"` // what a Lemmon-Jacobsen pair amounts to; a check only
	Departure            *Departure   `json:"departure"`              // nil: none
	Source               string       `json:"source"`
	Provenance           string       `json:"provenance"` // how the numbers were transcribed or fitted
	Verified             string       `json:"verified"`   // what they were compared with, and the residuals
}

// The forms of the reducing functions.
const (
	KunzWagnerForm     = "kunz-wagner"
	LemmonJacobsenForm = "lemmon-jacobsen"
)

// PairReducing holds the parameters of the reducing functions of temperature and volume, in one of two forms.
type PairReducing struct {
	Form string `json:"form"`
	KunzWagner
	ExcessTemperature float64 `json:"excess_temperature"` // Lemmon-Jacobsen, K
	ExcessVolume      float64 `json:"excess_volume"`      // Lemmon-Jacobsen, m3/mol
}

// KunzWagner holds the four parameters of the Kunz-Wagner reducing functions.
type KunzWagner struct {
	BetaTemperature  float64 `json:"beta_temperature"`
	GammaTemperature float64 `json:"gamma_temperature"`
	BetaVolume       float64 `json:"beta_volume"`
	GammaVolume      float64 `json:"gamma_volume"`
}

// Departure is the departure function of a pair: Factor times the sum of the terms.
type Departure struct {
	Factor      float64     `json:"factor"`
	Polynomial  [][]float64 `json:"polynomial"`  // n, t, d
	Exponential [][]float64 `json:"exponential"` // n, t, d, l
}

// MissingPair says why a pair has no entry.
type MissingPair struct {
	Components [2]string `json:"components"`
	Reason     string    `json:"reason"`
}

// LoadPairs decodes the embedded pair parameters. It returns an error that names the pair when one is incomplete, stands
// there twice or names a refrigerant without a coefficient file.
func LoadPairs() (*Pairs, error) { return DecodePairs(pairsFile) }

// DecodePairs reads a file of pair parameters and checks it.
func DecodePairs(b []byte) (*Pairs, error) {
	var p Pairs
	dec := json.NewDecoder(bytes.NewReader(b))
	dec.DisallowUnknownFields()
	if err := dec.Decode(&p); err != nil {
		return nil, fmt.Errorf("data: pairs: %w", err)
	}
	seen := map[[2]string]bool{}
	for i := range p.Pairs {
		q := &p.Pairs[i]
		if err := q.check(); err != nil {
			return nil, fmt.Errorf("data: pair %s/%s: %w", q.Components[0], q.Components[1], err)
		}
		if seen[q.Components] {
			return nil, fmt.Errorf("data: pair %s/%s stands there twice", q.Components[0], q.Components[1])
		}
		seen[q.Components], seen[[2]string{q.Components[1], q.Components[0]}] = true, true
	}
	for _, m := range p.Missing {
		if seen[m.Components] {
			return nil, fmt.Errorf("data: pair %s/%s is listed as missing and has parameters", m.Components[0], m.Components[1])
		}
	}
	return &p, nil
}

func (p *Pair) check() error {
	if p.Components[0] == p.Components[1] {
		return errors.New("the components are the same")
	}
	for _, id := range p.Components {
		if !haveRefrigerant(id) {
			return fmt.Errorf("no coefficient file of %q", id)
		}
	}
	switch p.Status {
	case Published, Fitted, Assumed, Unverified:
	default:
		return fmt.Errorf("status %q is unknown", p.Status)
	}
	if p.Source == "" || p.Provenance == "" || p.Verified == "" {
		return errors.New("source, provenance and verified must not be empty")
	}
	r := p.Reducing
	switch r.Form {
	case KunzWagnerForm:
		for _, v := range []float64{r.BetaTemperature, r.GammaTemperature, r.BetaVolume, r.GammaVolume} {
			if !(0.3 < v && v < 3) { // no pair in the literature is outside
				return fmt.Errorf("beta and gamma must lie between 0.3 and 3, have %g", v)
			}
		}
		if r.ExcessTemperature != 0 || r.ExcessVolume != 0 {
			return fmt.Errorf("a %s pair has no excess values", r.Form)
		}
	case LemmonJacobsenForm:
		if r.KunzWagner != (KunzWagner{}) {
			return fmt.Errorf("a %s pair has no beta and gamma", r.Form)
		}
		if !(math.Abs(r.ExcessTemperature) < 300 && math.Abs(r.ExcessVolume) < 1e-4) {
			return fmt.Errorf("excess values %g K and %g m3/mol are out of the question", r.ExcessTemperature, r.ExcessVolume)
		}
	default:
		return fmt.Errorf("form %q is unknown", r.Form)
	}
	d := p.Departure
	if d == nil {
		return nil
	}
	if d.Factor == 0 || math.IsNaN(d.Factor) || math.IsInf(d.Factor, 0) || len(d.Polynomial)+len(d.Exponential) == 0 {
		return errors.New("the departure function has no factor or no terms")
	}
	_, err := helmholtz.New(helmholtz.Coefficients{
		GasConstant: 1, ReducingTemperature: 1, ReducingDensity: 1,
		Residual: helmholtz.Residual{Polynomial: d.Polynomial, Exponential: d.Exponential},
	})
	return err
}

// haveRefrigerant reports whether a coefficient file of that name is embedded.
func haveRefrigerant(id string) bool {
	f, err := files.Open(id + ".json")
	if err != nil {
		return false
	}
	return f.Close() == nil
}
