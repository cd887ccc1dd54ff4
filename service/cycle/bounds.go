package cycle

import "math"

// Bounds of numbers as such. They keep nonsense away from the property model, whose own limits are tighter.
const (
	mostKelvin = 5000.0 // K
	mostPascal = 1e10   // Pa
	mostSize   = 1e15   // W, kg/s, m3/s
)

// bounds of a number; an open end does not belong to them.
type bounds struct {
	quantity         Quantity
	min, max         float64
	openMin, openMax bool
}

var (
	temperatureBounds = bounds{Temperature, 0, mostKelvin, true, false}
	pressureBounds    = bounds{Pressure, 0, mostPascal, true, false}
	differenceBounds  = bounds{TemperatureDifference, 0, mostKelvin, false, false}
	changeBounds      = bounds{TemperatureDifference, -mostKelvin, mostKelvin, false, false}
	dropBounds        = bounds{PressureDifference, 0, mostPascal, false, false}
	efficiencyBounds  = bounds{Dimensionless, 0, 1, true, false}
	nozzleBounds      = bounds{Dimensionless, 0, 1, false, false}
	fractionBounds    = bounds{Dimensionless, 0, 1, false, true}
	qualityBounds     = bounds{Dimensionless, 0, 1, false, false}
)

func (b *bounds) hold(x float64) bool {
	return (b.min < x || b.min == x && !b.openMin) && (x < b.max || x == b.max && !b.openMax)
}

// number returns the value that p points to, or NaN without one.
func (v *plan) number(field string, p *float64, b *bounds) float64 {
	if p == nil {
		return nan
	}
	return v.value(field, *p, b)
}

// value checks x and returns it, or NaN when it is out of bounds.
func (v *plan) value(field string, x float64, b *bounds) float64 {
	if b.hold(x) {
		return x
	}
	least, most := "at least", "at most"
	if b.openMin {
		least = "above"
	}
	if b.openMax {
		most = "below"
	}
	if math.IsNaN(x) || math.IsInf(x, 0) {
		v.wrong(OutOfBounds, field, message("a finite number is needed"))
		return nan
	}
	v.wrong(OutOfBounds, field, message("%s is out of bounds: it must be "+least+" %s and "+most+" %s",
		Number{b.quantity, x}, Number{b.quantity, b.min}, Number{b.quantity, b.max}))
	return nan
}

// orDefault is number with a default that needs no caution.
func (v *plan) orDefault(field string, p *float64, b *bounds, standard float64) float64 {
	if p == nil {
		return standard
	}
	return v.value(field, *p, b)
}

// orAssume is number with a default that needs a caution; text has one %s for it.
func (v *plan) orAssume(field string, p *float64, b *bounds, standard float64, text string) float64 {
	if p == nil {
		return v.assume(field, text, Number{b.quantity, standard})
	}
	return v.value(field, *p, b)
}
