package terms

import "slices"

// Datum says where enthalpy and entropy of a refrigerant are zero or have an agreed value.
type Datum uint8

// The datums. Each needs a saturated liquid at its reference point; see [Refrigerant.Datums].
const (
	// DefaultDatum is IIR, or TriplePoint for a refrigerant that is no liquid at 0 °C.
	DefaultDatum Datum = iota
	IIR                // saturated liquid at 0 °C: h = 200 kJ/kg, s = 1 kJ/(kg K)
	ASHRAE             // saturated liquid at -40 °C: h = 0, s = 0
	NBP                // saturated liquid at 101.325 kPa: h = 0, s = 0
	TriplePoint        // saturated liquid at the triple point: u = 0, s = 0; the datum of IAPWS-95
)

var datumNames = [...]string{"", "IIR", "ASHRAE", "NBP", "triple_point"}

func (d Datum) String() string { return nameOf(datumNames[:], int(d)) }

// ParseDatum returns the datum with that name and reports whether there is one.
func ParseDatum(name string) (Datum, bool) {
	i := slices.Index(datumNames[:], name)
	return Datum(max(i, 0)), i > 0
}
