package props

import (
	"sync"

	"dewmark/props/data"
	"dewmark/props/helmholtz"
)

// Datum says where enthalpy and entropy of a refrigerant are zero or have an agreed value.
type Datum uint8

// The datums. Each needs a saturated liquid at its reference point; see [Refrigerant.Datums].
const (
	// DefaultDatum is IIR, or TriplePoint for a refrigerant that is no liquid at 0 °C.
	DefaultDatum Datum = iota
	IIR                // saturated liquid at 0 °C: h = 200 kJ/kg, s = 1 kJ/(kg K)
	ASHRAE             // saturated liquid at -40 °C: h = 0, s = 0
	NBP                // saturated liquid at 101.325 kPa: h = 0, s = 0
	TriplePoint        // saturated liquid at the triple point: u = 0, s = 0; the datum of IAPWS-95, offered for water only
)

var datumNames = [...]string{"", "IIR", "ASHRAE", "NBP", "triple_point"}

func (d Datum) String() string { return datumNames[d] }

// ParseDatum returns the datum with that name and reports whether there is one.
func ParseDatum(name string) (Datum, bool) {
	for i, n := range datumNames {
		if n == name && i > 0 {
			return Datum(i), true
		}
	}
	return DefaultDatum, false
}

// Limits is the range in which an equation of state is valid.
type Limits struct {
	TemperatureMin, TemperatureMax float64 // K
	PressureMax                    float64 // Pa
	DensityMax                     float64 // kg/m3
}

// Point is a state point named by temperature, pressure and density.
type Point struct {
	T   float64 // K
	P   float64 // Pa
	Rho float64 // kg/m3
}

// Refrigerant computes the states of one refrigerant, with enthalpy and entropy counted from one datum. It is immutable,
// cheap to copy and safe for concurrent use.
type Refrigerant struct {
	*fluid
	datum       Datum
	h0, s0      float64 // added to the equation's own h and s
	extrapolate bool
}

// fluid is what all views of a refrigerant share.
type fluid struct {
	rec   data.Record
	eq    *helmholtz.Equation
	build sync.Once
}

// Designation returns the ISO 817 designation.
func (f *fluid) Designation() string { return f.rec.ID }

// Record returns the coefficient file: names, sources, limits and classification. The caller must not modify it.
func (f *fluid) Record() *data.Record { return &f.rec }

// MolarMass returns the molar mass in kg/mol.
func (f *fluid) MolarMass() float64 { return f.rec.MolarMass }

// Datum returns the datum that is in force, never DefaultDatum.
func (r *Refrigerant) Datum() Datum { return r.datum }

// Extrapolate returns a view that also answers above the temperature, pressure and density limits of the equation, as
// far as 1.5 times the highest temperature and 2 times the highest pressure. The answers are extrapolations.
func (r *Refrigerant) Extrapolate() *Refrigerant {
	view := *r
	view.extrapolate = true
	return &view
}

// Limits returns the range of validity of the equation.
func (r *Refrigerant) Limits() Limits { panic("stub") }

// Critical returns the critical point of the equation itself, which differs slightly from the one its authors state.
func (r *Refrigerant) Critical() Point { panic("stub") }

// NormalBoilingPoint returns the boiling temperature at 101.325 kPa in K, or NaN when the refrigerant sublimes there.
func (r *Refrigerant) NormalBoilingPoint() float64 { panic("stub") }

// Extrapolated reports whether s lies outside the validity of the equation.
func (r *Refrigerant) Extrapolated(s State) bool { panic("stub") }

// SaturationPressure returns the vapour pressure in Pa at temperature T in K. It returns a [*RangeError] unless T lies
// between the lowest temperature of the equation and its critical temperature. The same holds for [Refrigerant.BubblePoint]
// and [Refrigerant.DewPoint].
func (r *Refrigerant) SaturationPressure(T float64) (float64, error) { panic("stub") }

// SaturationTemperature returns the boiling temperature in K at pressure p in Pa. It returns a [*RangeError] unless p lies
// between the vapour pressure at the lowest temperature of the equation and the critical pressure.
func (r *Refrigerant) SaturationTemperature(p float64) (float64, error) { panic("stub") }

// BubblePoint returns saturated liquid at temperature T in K: phase Liquid, quality 0.
func (r *Refrigerant) BubblePoint(T float64) (State, error) { panic("stub") }

// DewPoint returns saturated vapour at temperature T in K: phase Vapour, quality 1.
func (r *Refrigerant) DewPoint(T float64) (State, error) { panic("stub") }

// BubblePointAtPressure returns saturated liquid at pressure p in Pa.
func (r *Refrigerant) BubblePointAtPressure(p float64) (State, error) { panic("stub") }

// DewPointAtPressure returns saturated vapour at pressure p in Pa.
func (r *Refrigerant) DewPointAtPressure(p float64) (State, error) { panic("stub") }

// TemperatureDensity returns the state at T in K and rho in kg/m3.
func (r *Refrigerant) TemperatureDensity(T, rho float64) (State, error) { panic("stub") }

// TemperaturePressure returns the state at T in K and p in Pa. On the saturation line itself, where p equals the
// vapour pressure to 1e-10, it returns an [*AmbiguousError] with saturated liquid and vapour.
func (r *Refrigerant) TemperaturePressure(T, p float64) (State, error) { panic("stub") }

// TemperatureQuality returns the state inside the dome at T in K and quality x from 0 to 1.
func (r *Refrigerant) TemperatureQuality(T, x float64) (State, error) { panic("stub") }

// PressureQuality returns the state inside the dome at p in Pa and quality x from 0 to 1.
func (r *Refrigerant) PressureQuality(p, x float64) (State, error) { panic("stub") }

// PressureEnthalpy returns the state at p in Pa and h in J/kg. The pair has one solution at most.
func (r *Refrigerant) PressureEnthalpy(p, h float64) (State, error) { panic("stub") }

// PressureEntropy returns the state at p in Pa and s in J/(kg K). The pair has one solution at most.
func (r *Refrigerant) PressureEntropy(p, s float64) (State, error) { panic("stub") }

// EnthalpyEntropy returns the state at h in J/kg and s in J/(kg K). The pair has one solution at most.
func (r *Refrigerant) EnthalpyEntropy(h, s float64) (State, error) { panic("stub") }

// States returns every state within the limits that has both given properties, in order of rising temperature and then
// falling density. It returns an error when there is none.
func (r *Refrigerant) States(a, b Given) ([]State, error) { panic("stub") }

// State returns the one state that has both given properties and, unless phase is AnyPhase, that phase. It returns an
// [*AmbiguousError] when more than one state remains and a [*NoSolutionError] when none does.
func (r *Refrigerant) State(a, b Given, phase Phase) (State, error) { panic("stub") }

func newFluid(rec data.Record) (*fluid, error)           { panic("stub") }
func (f *fluid) curve()                                  {}
func (f *fluid) withDatum(d Datum) (*Refrigerant, error) { panic("stub") }

// Datums returns the datums that the refrigerant can have.
func (f *fluid) Datums() []Datum { panic("stub") }
