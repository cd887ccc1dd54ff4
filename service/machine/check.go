package machine

import (
	"math"
	"strconv"
	"strings"

	"dewmark/service/cycle"
)

// Bounds of numbers as such. They keep nonsense away from the property models, whose own limits are tighter.
const (
	mostKelvin = 5000.0 // K
	mostPascal = 1e10   // Pa
	mostAmount = 1e15   // W, W/K, kg/s, m3/s, 1/s
)

// checker collects what is wrong with a request, and what was assumed in it.
type checker struct {
	refusals []Refusal
	cautions []Caution
}

func (c *checker) wrong(code Code, field string, m Message) {
	c.refusals = append(c.refusals, Refusal{Code: code, Field: field, Message: m})
}

func (c *checker) missing(field, text string) { c.wrong(Missing, field, message(text)) }
func (c *checker) surplus(field, text string) { c.wrong(Surplus, field, message(text)) }

func (c *checker) caution(code CautionCode, field, text string, numbers ...cycle.Number) {
	c.cautions = append(c.cautions, Caution{Code: code, Field: field, Message: message(text, numbers...)})
}

// err returns what was wrong, or nil.
func (c *checker) err() error {
	if len(c.refusals) == 0 {
		return nil
	}
	return &RefusedError{c.refusals}
}

// mostSwept is more than any compressor of positive displacement sweeps in a revolution, m3; common practice.
const mostSwept = 1.0

// bounds of a number; an open end does not belong to them.
type bounds struct {
	quantity         cycle.Quantity
	min, max         float64
	openMin, openMax bool
}

var (
	temperatureBounds = bounds{cycle.Temperature, 0, mostKelvin, true, false}
	differenceBounds  = bounds{cycle.TemperatureDifference, 0, mostKelvin, false, false}
	positiveKelvins   = bounds{cycle.TemperatureDifference, 0, mostKelvin, true, false}
	pressureBounds    = bounds{cycle.Pressure, 0, mostPascal, true, false}
	riseBounds        = bounds{cycle.PressureDifference, 0, mostPascal, false, false}
	powerBounds       = bounds{cycle.Power, 0, mostAmount, false, false}
	heatBounds        = bounds{cycle.HeatFlow, 0, mostAmount, true, false}
	massFlowBounds    = bounds{cycle.MassFlow, 0, mostAmount, true, false}
	sweptBounds       = bounds{cycle.Volume, 0, mostSwept, true, false}
	volumeFlowBounds  = bounds{cycle.VolumeFlow, 0, mostAmount, true, false}
	amountBounds      = bounds{cycle.Dimensionless, 0, mostAmount, true, false}
	resistanceBounds  = bounds{cycle.Dimensionless, 0, mostAmount, false, false}
	efficiencyBounds  = bounds{cycle.Dimensionless, 0, 1, true, false}
	fractionBounds    = bounds{cycle.Dimensionless, 0, 1, false, false}
	lossBounds        = bounds{cycle.Dimensionless, 0, 1, false, true}
	ratioBounds       = bounds{cycle.Dimensionless, 0, 100, true, false}
	exponentBounds    = bounds{cycle.Dimensionless, 0, 2, false, false}
	liftRatioBounds   = bounds{cycle.Dimensionless, 1, 1e6, false, false}
)

func (b *bounds) hold(x float64) bool {
	return (b.min < x || b.min == x && !b.openMin) && (x < b.max || x == b.max && !b.openMax)
}

// value checks x and returns it, or NaN when it is out of bounds.
func (c *checker) value(field string, x float64, b *bounds) float64 {
	switch {
	case b.hold(x):
		return x
	case math.IsNaN(x) || math.IsInf(x, 0):
		c.wrong(OutOfBounds, field, message("a finite number is needed"))
	default:
		least, most := "at least", "at most"
		if b.openMin {
			least = "above"
		}
		if b.openMax {
			most = "below"
		}
		n := func(v float64) cycle.Number { return cycle.Number{Quantity: b.quantity, Value: v} }
		c.wrong(OutOfBounds, field, message("%s is out of bounds: it must be "+least+" %s and "+most+" %s", n(x), n(b.min), n(b.max)))
	}
	return math.NaN()
}

// number returns the value that p points to, or NaN without one.
func (c *checker) number(field string, p *float64, b *bounds) float64 {
	if p == nil {
		return math.NaN()
	}
	return c.value(field, *p, b)
}

// or returns the value that p points to, or a default that nobody need be told of.
func (c *checker) or(field string, p *float64, b *bounds, standard float64) float64 {
	if p == nil {
		return standard
	}
	return c.value(field, *p, b)
}

// orAssume is or with a caution; text has one %s for the default.
func (c *checker) orAssume(field string, p *float64, b *bounds, standard float64, text string) float64 {
	if p == nil {
		c.caution(Assumed, field, text, cycle.Number{Quantity: b.quantity, Value: standard})
		return standard
	}
	return c.value(field, *p, b)
}

// exactlyOne checks that one of some alternatives is given.
func (c *checker) exactlyOne(path string, names []string, given ...bool) {
	count := 0
	for _, g := range given {
		if g {
			count++
		}
	}
	text := "exactly one of " + strings.Join(names, ", ") + " is needed, " + strconv.Itoa(count) + " are given"
	switch {
	case count == 0:
		c.missing(path, text)
	case count > 1:
		c.surplus(path, text)
	}
}

// atMostOne checks that no more than one of some alternatives is given.
func (c *checker) atMostOne(path string, names []string, given ...bool) {
	count := 0
	for _, g := range given {
		if g {
			count++
		}
	}
	if count > 1 {
		c.surplus(path, "at most one of "+strings.Join(names, ", ")+" can be given, "+strconv.Itoa(count)+" are")
	}
}

// index writes the path of an item of a list.
func index(path string, i int) string { return path + "." + strconv.Itoa(i) }
