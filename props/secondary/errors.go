package secondary

import (
	"fmt"
	"strings"
)

// RangeError reports a quantity outside the range of a fluid or of a correlation. Value, Min and Max are SI; an open side
// is infinite.
type RangeError struct {
	Fluid    string
	Quantity Quantity
	Value    float64
	Min, Max float64
	Limit    string // what sets the limit, such as "freezing point"
}

func (e *RangeError) Error() string {
	return fmt.Sprintf("%s: %s %g%s is outside %g to %g (%s)", e.Fluid, e.Quantity, e.Value, e.Quantity.Unit(), e.Min, e.Max, e.Limit)
}

// Quantity names what a [RangeError] is about.
type Quantity uint8

// The quantities.
const (
	Temperature      Quantity = iota + 1 // K
	WetBulb                              // K
	DewPoint                             // K
	Pressure                             // Pa
	MassFraction                         // of the dissolved substance
	VolumeFraction                       // of the dissolved substance
	RelativeHumidity                     // 0 to 1
	HumidityRatio                        // kg water per kg dry air
)

var quantities = [...]struct{ name, unit string }{
	{"", ""},
	{"temperature", " K"},
	{"wet bulb temperature", " K"},
	{"dew point", " K"},
	{"pressure", " Pa"},
	{"mass fraction", ""},
	{"volume fraction", ""},
	{"relative humidity", ""},
	{"humidity ratio", ""},
}

func (q Quantity) String() string { return quantities[q].name }

// Unit returns the SI unit of q after a space, or nothing for a pure number.
func (q Quantity) Unit() string { return quantities[q].unit }

// FluidError reports the name of a brine that does not exist.
type FluidError struct {
	Name    string
	Allowed []string
}

func (e *FluidError) Error() string {
	return fmt.Sprintf("no brine is called %q; there are %s", e.Name, strings.Join(e.Allowed, ", "))
}

// TableError reports a table of a liquid that cannot be used. Row counts from 0 and is -1 when no row is to blame.
type TableError struct {
	Row    int
	Reason string
}

func (e *TableError) Error() string {
	if e.Row < 0 {
		return "table of a liquid: " + e.Reason
	}
	return fmt.Sprintf("table of a liquid, row %d: %s", e.Row, e.Reason)
}
