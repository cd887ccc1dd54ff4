package data

import (
	"bytes"
	_ "embed" // the files of brines and moist air
	"encoding/json"
	"errors"
	"fmt"
	"math"
)

//go:embed brines.json
var brinesFile []byte

//go:embed moist_air.json
var moistAirFile []byte

// Brines is the content of the file of brines.
type Brines struct {
	Description  string  `json:"description"`
	Source       string  `json:"source"`
	Verification string  `json:"verification"`
	Brines       []Brine `json:"brines"`
}

// Brine holds the polynomials of an aqueous solution in mass per cent and degrees Celsius, as the file describes them.
type Brine struct {
	ID           string         `json:"id"`
	Name         string         `json:"name"`
	Reference    BrineReference `json:"reference"`
	Validity     BrineValidity  `json:"validity"`
	PureDensity  float64        `json:"pure_density"` // kg/m3 of the dissolved substance at 20 °C
	Density      [][]float64    `json:"density"`      // kg/m3
	HeatCapacity [][]float64    `json:"heat_capacity"`
	Conductivity [][]float64    `json:"conductivity"`
	LnViscosity  [][]float64    `json:"ln_viscosity"` // of mPa s
	Freezing     []float64      `json:"freezing"`     // °C
}

// BrineReference is what the polynomials count from.
type BrineReference struct {
	MassPercent        float64 `json:"mass_percent"`
	TemperatureCelsius float64 `json:"temperature_celsius"`
}

// BrineValidity is the range of the polynomials, which begins at the freezing point.
type BrineValidity struct {
	MassFractionMin float64 `json:"mass_fraction_min"`
	MassFractionMax float64 `json:"mass_fraction_max"`
	TemperatureMax  float64 `json:"temperature_max"` // K
}

// brineDegrees is the number of coefficients in t for each power of the mass fraction.
var brineDegrees = [...]int{4, 4, 4, 3, 2, 1}

// LoadBrines decodes the embedded brines and checks that they are complete.
func LoadBrines() (*Brines, error) {
	var b Brines
	if err := decodeStrictly(brinesFile, &b); err != nil {
		return nil, fmt.Errorf("data: brines: %w", err)
	}
	for i := range b.Brines {
		if err := b.Brines[i].check(); err != nil {
			return nil, fmt.Errorf("data: brine %q: %w", b.Brines[i].ID, err)
		}
	}
	return &b, nil
}

func (b *Brine) check() error {
	v := b.Validity
	if b.ID == "" || b.Name == "" || !(0 <= v.MassFractionMin && v.MassFractionMin < v.MassFractionMax && v.MassFractionMax < 1) || !(v.TemperatureMax > 273.15) {
		return errors.New("name or validity is missing or out of the question")
	}
	if !(b.PureDensity > 0) || len(b.Freezing) != len(brineDegrees) || !finite(b.Freezing) {
		return errors.New("pure density or freezing is incomplete")
	}
	for _, rows := range [][][]float64{b.Density, b.HeatCapacity, b.Conductivity, b.LnViscosity} {
		if len(rows) != len(brineDegrees) {
			return fmt.Errorf("a polynomial has %d rows, not %d", len(rows), len(brineDegrees))
		}
		for i, row := range rows {
			if len(row) != brineDegrees[i] || !finite(row) {
				return fmt.Errorf("row %d of a polynomial has %d coefficients, not %d finite ones", i, len(row), brineDegrees[i])
			}
		}
	}
	return nil
}

// MoistAir holds the coefficients of the saturation pressure of water vapour, as the file describes them.
type MoistAir struct {
	Description  string     `json:"description"`
	Source       string     `json:"source"`
	Verification string     `json:"verification"`
	Ice          [7]float64 `json:"ice"`
	Water        [6]float64 `json:"water"`
}

// LoadMoistAir decodes the embedded coefficients of moist air.
func LoadMoistAir() (*MoistAir, error) {
	var a MoistAir
	if err := decodeStrictly(moistAirFile, &a); err != nil {
		return nil, fmt.Errorf("data: moist air: %w", err)
	}
	if !finite(a.Ice[:]) || !finite(a.Water[:]) || a.Ice[6] == 0 || a.Water[5] == 0 {
		return nil, errors.New("data: moist air: coefficients are incomplete")
	}
	return &a, nil
}

func decodeStrictly(b []byte, into any) error {
	dec := json.NewDecoder(bytes.NewReader(b))
	dec.DisallowUnknownFields()
	return dec.Decode(into)
}

func finite(values []float64) bool {
	for _, v := range values {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return false
		}
	}
	return true
}
