package readings

import (
	"math"
	"slices"
	"strconv"
	"strings"

	"dewmark/service/cycle"
	"dewmark/service/readings/uncertainty"
)

func (r Reading) valid() bool { return firstReading <= r && r < readingCount }

// at names an element of a list.
func at(list string, i int) string { return list + "." + strconv.Itoa(i) }

// within refuses a number outside bounds that belong to them; nil passes.
func (r *refusals) within(field string, v *float64, low, high float64) {
	if v != nil && !(low <= *v && *v <= high) {
		r.add(OutOfBounds, field, message("%s is out of bounds: it must be at least %s and at most %s", plain(*v), plain(low), plain(high)))
	}
}

// positive refuses a number that is not above zero; nil passes.
func (r *refusals) positive(field string, v *float64, why string) {
	if v != nil && !(0 < *v && *v <= math.MaxFloat64) {
		r.add(OutOfBounds, field, message("%s is out of bounds: it must be above zero"+why, plain(*v)))
	}
}

// check returns what an uncertainty says.
func (u *Uncertainty) check(r *refusals, of Reading) stated {
	field := "uncertainties." + of.String()
	out := stated{stated: true}
	count := 0
	for _, given := range [...]bool{u.Standard != nil, u.Relative != nil, u.Expanded != nil, u.Limit != nil, u.Sensor != ""} {
		if given {
			count++
		}
	}
	if count != 1 {
		r.add(Missing, field, message("an uncertainty is given by exactly one of standard, relative, expanded, limit and sensor"))
	}
	notNegative := func(name string, v *float64, into *float64, scale float64) {
		if v == nil {
			return
		}
		if !(0 <= *v && *v <= math.MaxFloat64) {
			r.add(OutOfBounds, field+"."+name, message("%s is out of bounds: an uncertainty is not negative", plain(*v)))
		}
		*into = *v * scale
	}
	factor := 2.0
	if u.CoverageFactor != nil {
		factor = *u.CoverageFactor
		r.positive(field+".coverage_factor", u.CoverageFactor, "")
		if u.Expanded == nil {
			r.add(Surplus, field+".coverage_factor", message("a coverage factor belongs to an expanded uncertainty"))
		}
	}
	notNegative("standard", u.Standard, &out.absolute, 1)
	notNegative("relative", u.Relative, &out.relative, 1)
	notNegative("expanded", u.Expanded, &out.absolute, 1/factor)
	if u.Limit != nil {
		notNegative("limit", u.Limit, &out.absolute, 1/math.Sqrt(3))
		out.distribution = uncertainty.Rectangular
	}
	if u.Sensor != "" {
		out.sensor = u.Sensor
		u.Sensor.check(r, field+".sensor", of)
	}
	if u.Span != nil {
		out.span = *u.Span
		r.positive(field+".span", u.Span, "")
		if sensorRules[u.Sensor].ofSpan == 0 {
			r.add(Surplus, field+".span", message("a span belongs to the sensors transmitter and "+string(Manifold)))
		}
	}
	if u.DegreesOfFreedom != nil {
		out.degrees = *u.DegreesOfFreedom
		if !(1 <= out.degrees && out.degrees <= math.MaxFloat64) {
			r.add(OutOfBounds, field+".degrees_of_freedom", message("%s is out of bounds: degrees of freedom are at least %s", plain(out.degrees), plain(1)))
		}
	}
	return out
}

// check refuses a class of sensors that does not exist or does not measure the reading.
func (s Sensor) check(r *refusals, field string, of Reading) {
	row, ok := sensorRules[s]
	if !ok {
		names := make([]string, 0, len(sensorRules))
		for _, n := range Sensors() {
			names = append(names, string(n))
		}
		r.add(NotAllowed, field, message("there is no such class of sensors; there are "+strings.Join(names, ", ")))
		return
	}
	if slices.Contains(row.kinds, readingTable[of].kind) {
		return
	}
	r.add(NotAllowed, field, message("a sensor of the class "+string(s)+" does not measure this"))
}

// lowestPressure is how far below zero an absolute pressure may come out of a gauge pressure near a vacuum, Pa.
const lowestPressure = -5e3

// limits of a reading.
type limits struct {
	low, high         float64
	openLow, openHigh bool
}

var kindLimits = [...]limits{
	pressureKind:      {low: lowestPressure, high: 1e9},
	pipeTemperature:   {low: 0, high: 5000, openLow: true},
	streamTemperature: {low: 0, high: 5000, openLow: true},
	streamChange:      {low: -5000, high: 5000},
	ambientKind:       {low: 0, high: 5000, openLow: true},
	humidityKind:      {low: 0, high: 1},
	flowKind:          {low: 0, high: 1e9},
	refrigerantFlow:   {low: 0, high: 1e9},
	powerKind:         {low: 0, high: 1e12},
	heatMeterKind:     {low: -1e12, high: 1e12},
	fractionKind:      {low: 0, high: 1, openHigh: true},
	speedKind:         {low: 0, high: 1e6},
}

// checkSample refuses a sample whose readings cannot be.
func (e *Evaluator) checkSample(s *Sample) error {
	var r refusals
	for reading := firstReading; reading < readingCount; reading++ {
		if !s.has(reading) {
			continue
		}
		v := s.values[reading] + e.sealing(reading)
		l := &kindLimits[readingTable[reading].kind]
		if !(l.low <= v && v <= l.high) || l.openLow && v == l.low || l.openHigh && v == l.high {
			number := func(x float64) cycle.Number { return cycle.Number{Quantity: reading.Quantity(), Value: x} }
			r.add(OutOfBounds, reading.String(), message("%s is out of bounds: it must be between %s and %s", number(v), number(l.low), number(l.high)))
		}
	}
	for of := range sideCount {
		row := &sideTable[of]
		flow := row.volumeFlow
		if s.has(row.massFlow) {
			flow = row.massFlow
		}
		switch {
		case s.has(row.volumeFlow) && s.has(row.massFlow):
			r.add(Surplus, row.massFlow.String(), message("give either the volume flow or the mass flow of a stream"))
		case s.has(flow) && !s.stream(of).known():
			r.add(Missing, row.name+".fluid", message("the flow of a stream needs its fluid"))
		}
		if st := s.stream(of); st.Liquid != nil && st.MoistAir {
			r.add(Surplus, row.name+".fluid", message("a stream is either a liquid or moist air"))
		}
	}
	if s.has(HeatLossFraction) && s.has(ShellTemperature) && e.installation.ShellConductance != nil {
		r.add(Surplus, HeatLossFraction.String(), message("the heat loss follows from the temperature of the shell and its conductance already"))
	}
	if s.given == 0 {
		r.add(Missing, "", message("a sample needs at least one reading"))
	}
	return r.err()
}

// sealing is what a sealed gauge's reading is corrected by: it counts from the standard atmosphere, while the ambient
// pressure was added to it.
func (e *Evaluator) sealing(r Reading) float64 {
	if !e.sealed[r] {
		return 0
	}
	return standardAtmosphere - *e.installation.Site.AmbientPressure
}
