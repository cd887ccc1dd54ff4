package props

import (
	"dewmark/props/blend"
	"dewmark/props/data"
	"dewmark/props/transport"
)

// Refrigerant answers questions about the states of a refrigerant: a [*Pure] or a [*Blend]. All methods are safe for
// concurrent use; units are SI, and enthalpy and entropy count from one [Datum].
//
// A pure refrigerant boils at one temperature and has SaturationPressure and SaturationTemperature besides; whoever needs
// that promise asks for a [*Pure].
type Refrigerant interface {
	Designation() string
	Identity() Identity
	MolarMass() float64 // kg/mol
	Datum() Datum
	Datums() []Datum
	Limits() Limits
	Critical() Point
	NormalBoilingPoint() float64 // bubble temperature at 101.325 kPa in K; NaN where there is none

	BubblePoint(T float64) (State, error)
	DewPoint(T float64) (State, error)
	BubblePointAtPressure(p float64) (State, error)
	DewPointAtPressure(p float64) (State, error)
	BubbleTemperature(p float64) (float64, error)
	DewTemperature(p float64) (float64, error)

	TemperaturePressure(T, p float64) (State, error)
	TemperatureDensity(T, rho float64) (State, error)
	TemperatureQuality(T, x float64) (State, error)
	PressureQuality(p, x float64) (State, error)
	PressureEnthalpy(p, h float64) (State, error)
	PressureEntropy(p, s float64) (State, error)
	EnthalpyEntropy(h, s float64) (State, error)
	States(a, b Given) ([]State, error)
	State(a, b Given, phase Phase) (State, error)

	Extrapolated(s State) bool
	Derived(s State) Derived
	Transport(s State) (Transport, error)
	TransportRecords(p transport.Property) []*transport.Record
	Reservations() []blend.Caution
}

var (
	_ Refrigerant = (*Pure)(nil)
	_ Refrigerant = (*Blend)(nil)
)

// Extrapolate returns a view of r that also answers outside the limits of its model; see [Pure.Extrapolate].
func Extrapolate(r Refrigerant) Refrigerant {
	switch r := r.(type) {
	case *Pure:
		return r.Extrapolate()
	case *Blend:
		return r.Extrapolate()
	}
	return r
}

// Kind says whether a refrigerant is pure or a blend.
type Kind string

// The kinds.
const (
	KindPure  Kind = "pure"
	KindBlend Kind = "blend"
)

// Share is the part that a component has in a refrigerant.
type Share struct {
	Designation  string
	MassFraction float64
	MoleFraction float64
	Source       string // of the component's equation
}

// Identity is what is known of a refrigerant besides its states. Empty or nil means not known or not applicable.
type Identity struct {
	Designation, Name string
	Kind              Kind
	Composition       []Share
	Formula, CAS      string
	Aliases           []string
	TripleTemperature *float64 // K
	Acentric          float64  // acentric factor; NaN for a blend
	Classification    data.Classification
	Model             string // kind of model
	Source            string // of the equation, or of a blend's composition
	Notes             string
	Verification      string
	Pairs             []blend.Pair // on what the model of every pair of a blend rests
}

// Identity returns what is known of the refrigerant besides its states.
func (f *fluid) Identity() Identity {
	r := &f.rec
	return Identity{
		Designation: r.ID, Name: r.Name, Kind: KindPure, Composition: []Share{{r.ID, 1, 1, r.Source}},
		Formula: r.Formula, CAS: r.CAS, Aliases: r.Aliases, TripleTemperature: r.TripleTemperature, Acentric: r.Acentric,
		Classification: r.Classification, Model: "equation of state explicit in the Helmholtz energy",
		Source: r.Source, Notes: r.Notes, Verification: r.Verification,
	}
}

// Reservations returns nothing: an answer of a pure refrigerant stands on a published equation.
func (f *fluid) Reservations() []blend.Caution { return nil }

// BubbleTemperature is [Pure.SaturationTemperature].
func (r *Pure) BubbleTemperature(p float64) (float64, error) { return r.SaturationTemperature(p) }

// DewTemperature is [Pure.SaturationTemperature].
func (r *Pure) DewTemperature(p float64) (float64, error) { return r.SaturationTemperature(p) }
