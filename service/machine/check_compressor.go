package machine

import (
	"math"
	"strings"

	"dewmark/service/cycle"
)

// law is an efficiency law that was checked.
type law struct {
	kind LawKind
	c    [3]float64
}

// at returns the efficiency at pressure ratio r.
func (l *law) at(r float64) float64 {
	if l.kind == ClearanceLaw {
		return l.c[0] - l.c[1]*(math.Pow(r, 1/l.c[2])-1)
	}
	return l.c[0] + r*(l.c[1]+r*l.c[2])
}

// drive is a compressor that was checked.
type drive struct {
	field      string
	ratings    []rating // in order of their speeds; none for laws
	isentropic law
	volumetric law
	swept      float64 // m3; NaN when not known
	loss       *float64
	terminals  float64 // power of the compressor over that at the terminals
	polygons   []*polygon
	speed      float64 // 1/s; NaN for none
	slowest    float64 // 1/s; NaN likewise
	fastest    float64
}

// hasSpeed reports whether the compressor knows speeds.
func (d *drive) hasSpeed() bool { return !math.IsNaN(d.slowest) }

// drive checks the compressor.
func (u *unit) drive(k *Compressor) drive {
	const field = "machine.compressor"
	d := drive{
		field:     field,
		swept:     u.number(field+".swept_volume", k.SweptVolume, &sweptBounds),
		loss:      k.HeatLossFraction,
		terminals: u.or(field+".drive_efficiency", k.DriveEfficiency, &efficiencyBounds, 1),
		speed:     u.number(field+".speed", k.Speed, &amountBounds),
		slowest:   u.number(field+".speed_min", k.SpeedMin, &amountBounds),
		fastest:   u.number(field+".speed_max", k.SpeedMax, &amountBounds),
	}
	u.number(field+".heat_loss_fraction", k.HeatLossFraction, &lossBounds)
	if len(k.Maps) > 0 {
		u.mapped(k, &d)
	} else {
		u.lawful(k, &d)
	}
	u.envelopes(k, &d)
	if math.IsNaN(d.slowest) != math.IsNaN(d.fastest) {
		u.missing(field, "give both of speed_min and speed_max, or neither")
	}
	if d.slowest > d.fastest {
		u.wrong(OutOfBounds, field+".speed_min", message("the lowest speed, %s 1/s, lies above the highest, %s 1/s", plain(d.slowest), plain(d.fastest)))
	}
	if !math.IsNaN(d.speed) && d.hasSpeed() && !(d.slowest <= d.speed && d.speed <= d.fastest) {
		u.wrong(OutOfBounds, field+".speed", message("%s 1/s lies outside the range of speeds, %s to %s 1/s", plain(d.speed), plain(d.slowest), plain(d.fastest)))
	}
	return d
}

// lawful takes a compressor by swept volume and laws.
func (u *unit) lawful(k *Compressor, d *drive) {
	if k.SweptVolume == nil {
		u.missing(d.field+".swept_volume", "a compressor without a map needs its swept volume, or give a map")
	}
	if k.IsentropicEfficiency == nil || k.VolumetricEfficiency == nil {
		u.missing(d.field, "a compressor without a map needs laws of its isentropic_efficiency and its volumetric_efficiency")
		return
	}
	d.isentropic = u.law(d.field+".isentropic_efficiency", k.IsentropicEfficiency, false)
	d.volumetric = u.law(d.field+".volumetric_efficiency", k.VolumetricEfficiency, true)
	if d.hasSpeed() {
		return
	}
	d.slowest, d.fastest = d.speed, d.speed
	if k.Speed == nil { // a condition gives it
		d.slowest, d.fastest = 0, math.Inf(1)
	}
}

func (u *unit) law(field string, l *Law, volumetric bool) (out law) {
	out.kind = l.Kind
	n := len(l.Coefficients)
	switch l.Kind {
	case PolynomialLaw:
		if n < 1 || n > 3 {
			u.wrong(OutOfBounds, field, message("a polynomial in the pressure ratio has one to three coefficients, not %s", plain(float64(n))))
			return out
		}
	case ClearanceLaw:
		if !volumetric {
			u.wrong(NotAllowed, field, message("a clearance law describes a volumetric efficiency"))
			return out
		}
		if n != 3 || !(l.Coefficients[2] > 0) {
			u.wrong(OutOfBounds, field, message("a clearance law has three coefficients, of which the last, the exponent of re-expansion, is above 0"))
			return out
		}
	default:
		u.wrong(NotAllowed, field, message("a law is a polynomial or a clearance law"))
		return out
	}
	for i, c := range l.Coefficients {
		if math.IsNaN(c) || math.IsInf(c, 0) {
			u.wrong(OutOfBounds, index(field, i), message("a finite number is needed"))
			return out
		}
		out.c[i] = c
	}
	return out
}

// mapped takes a compressor by maps.
func (u *unit) mapped(k *Compressor, d *drive) {
	if k.IsentropicEfficiency != nil || k.VolumetricEfficiency != nil {
		u.surplus(d.field+".maps", "give maps or laws of the efficiencies, not both")
	}
	if u.layout != cycle.SingleStage || u.ejecting || u.steps {
		u.wrong(NotAllowed, d.field+".maps", message("a map describes one compressor that does the whole lift: single_stage, suction_exchanger, or transcritical with at most suction_exchanger"))
	}
	for i := range k.Maps {
		field := index(d.field+".maps", i)
		d.ratings = append(d.ratings, u.rating(field, &k.Maps[i]))
		r := &d.ratings[i]
		if len(k.Maps) > 1 && math.IsNaN(r.speed) {
			u.missing(field+".speed", "each of several maps needs its speed")
		}
		if i > 0 && !(r.speed > d.ratings[i-1].speed) {
			u.wrong(OutOfBounds, field+".speed", message("maps stand in ascending order of speed"))
		}
	}
	first, last := d.ratings[0].speed, d.ratings[len(d.ratings)-1].speed
	if math.IsNaN(d.slowest) {
		d.slowest = first
	}
	if math.IsNaN(d.fastest) {
		d.fastest = last
	}
	if d.slowest < first {
		u.wrong(OutOfBounds, d.field+".speed_min", message("%s 1/s lies below the slowest map, %s 1/s: maps are not extrapolated in speed", plain(d.slowest), plain(first)))
	}
	if d.fastest > last {
		u.wrong(OutOfBounds, d.field+".speed_max", message("%s 1/s lies above the fastest map, %s 1/s: maps are not extrapolated in speed", plain(d.fastest), plain(last)))
	}
}

// rating checks a map.
func (u *unit) rating(field string, m *Map) rating {
	r := rating{
		field:       field,
		capacity:    len(m.Capacity) > 0,
		scale:       m.Units.Temperature,
		perFlow:     u.inSI(field+".units.mass_flow", m.Units.MassFlow),
		perPower:    u.inSI(field+".units.power", m.Units.Power),
		perPressure: u.inSI(field+".units.pressure", m.Units.Pressure),
		pressure:    m.PressureAxis,
		superheat:   u.number(field+".suction_superheat", m.SuctionSuperheat, &differenceBounds),
		returnGas:   u.number(field+".return_gas_temperature", m.ReturnGasTemperature, &temperatureBounds),
		subcool:     u.or(field+".subcooling", m.Subcooling, &differenceBounds, 0),
		factor:      u.or(field+".superheat_factor", m.SuperheatFactor, &exponentBounds, defaultSuperheatFactor),
		speed:       u.number(field+".speed", m.Speed, &amountBounds),
	}
	if r.scale != (Scale{}) && !(r.scale.Unit > 0 && r.scale.Unit < mostKelvin && math.Abs(r.scale.Zero) < mostKelvin) {
		u.wrong(OutOfBounds, field+".units.temperature", message("a scale of temperature needs a positive unit"))
	}
	if int(m.Kind) >= len(mapNames) {
		u.wrong(NotAllowed, field+".kind", message("a map is of one of the kinds "+strings.Join(mapNames[:], ", ")))
	}
	u.exactlyOne(field, []string{"mass_flow", "capacity"}, len(m.MassFlow) > 0, len(m.Capacity) > 0)
	u.exactlyOne(field, []string{"suction_superheat", "return_gas_temperature"}, m.SuctionSuperheat != nil, m.ReturnGasTemperature != nil)
	given, name := m.MassFlow, ".mass_flow"
	if r.capacity {
		given, name = m.Capacity, ".capacity"
		r.perFlow = u.inSI(field+".units.capacity", m.Units.Capacity)
		if m.PressureAxis {
			u.wrong(NotAllowed, field+".capacity", message("a map over discharge pressure needs the mass flow: a capacity would depend on the gas cooler"))
		}
		if m.Subcooling == nil {
			u.caution(Assumed, field+".subcooling", "no subcooling of the capacity map given: %s assumed", difference(0))
		}
	} else if m.Subcooling != nil {
		u.surplus(field+".subcooling", "a map of mass flow has no liquid")
	}
	r.flow = u.coefficients(field+name, m.Kind, given)
	r.power = u.coefficients(field+".power", m.Kind, m.Power)
	if u.gasCooled && !m.PressureAxis {
		u.wrong(NotAllowed, field+".pressure_axis", message("a transcritical compressor needs a map over discharge pressure"))
	}
	if len(m.Envelope) > 0 {
		g, fault := newPolygon(m.Envelope, m.PressureAxis)
		if fault != nil {
			u.wrong(BadEnvelope, field+".envelope", *fault)
		} else {
			g.field, g.speed = field+".envelope", r.speed
			r.area = g
		}
	} else {
		u.caution(EnvelopeMissing, field+".envelope", "no envelope given: nothing says where the map holds, and a cubic is unbounded outside its data")
	}
	return r
}

// inSI returns a unit of a data sheet in SI.
func (c *checker) inSI(field string, v float64) float64 {
	if v == 0 {
		return 1
	}
	return c.value(field, v, &amountBounds)
}

func (u *unit) coefficients(field string, kind MapKind, given []float64) (out coefficients) {
	most := terms
	if kind == Biquadratic {
		most = len(fromBiquadratic)
	}
	if len(given) != most {
		u.wrong(OutOfBounds, field, message("a map of this kind has %s coefficients, not %s", plain(float64(most)), plain(float64(len(given)))))
		return out
	}
	for i, v := range given {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			u.wrong(OutOfBounds, index(field, i), message("a finite number is needed"))
		}
		if kind == Biquadratic {
			i = fromBiquadratic[i]
		}
		out[i] = v
	}
	return out
}

// envelopes takes the polygons of the compressor, or those of its maps.
func (u *unit) envelopes(k *Compressor, d *drive) {
	for i := range k.Envelopes {
		e := &k.Envelopes[i]
		field := index(d.field+".envelopes", i)
		g, fault := newPolygon(e.Vertices, e.PressureAxis)
		if fault != nil {
			u.wrong(BadEnvelope, field+".vertices", *fault)
			continue
		}
		g.field, g.source = field, e.Source
		g.speed = u.number(field+".speed", e.Speed, &amountBounds)
		if len(k.Envelopes) > 1 && e.Speed == nil {
			u.missing(field+".speed", "each of several envelopes needs its speed")
		}
		if n := len(d.polygons); n > 0 {
			if !(g.speed > d.polygons[n-1].speed) {
				u.wrong(OutOfBounds, field+".speed", message("envelopes stand in ascending order of speed"))
			}
			if g.pressure != d.polygons[n-1].pressure {
				u.wrong(NotAllowed, field+".pressure_axis", message("all envelopes have the same axes"))
			}
		}
		d.polygons = append(d.polygons, g)
	}
	if len(d.polygons) == 0 {
		for i := range d.ratings {
			if g := d.ratings[i].area; g != nil {
				d.polygons = append(d.polygons, g)
			}
		}
	}
	for _, g := range d.polygons {
		if g.pressure != u.gasCooled {
			u.wrong(NotAllowed, g.field, message("the envelope of a transcritical compressor has discharge pressures, any other condensing temperatures"))
			return
		}
	}
	if len(d.polygons) == 0 && len(d.ratings) == 0 {
		u.caution(EnvelopeMissing, d.field+".envelopes", "no envelope given: whether the compressor may run here is not checked")
	}
}

// Bounds of what a map can say, checked at each corner of its area.
const (
	mostMapEfficiency  = 0.9
	leastMapVolumetric = 0.3
	mostMapVolumetric  = 1.05
)

// plausible checks a map at the corners of its area: flow and power are positive, efficiencies are those of a compressor,
// and the flow rises with the suction pressure.
func (u *unit) plausible(d *drive) {
	for i := range d.ratings {
		r := &d.ratings[i]
		if r.area == nil {
			continue
		}
		for j, c := range r.area.corners {
			f, err := u.flangesAt(r, c)
			if err != nil {
				u.refusals = append(u.refusals, Refusal{
					Code: ImplausibleMap, Field: r.field + ".envelope",
					Message: message("the refrigerant has no suction or discharge at corner %s of the envelope", plain(float64(j))), Cause: err,
				})
				return
			}
			if m := u.fault(d, r, f, j); m != nil {
				u.wrong(ImplausibleMap, r.field, *m)
				return
			}
		}
	}
}

// flangesAt returns the conditions at a corner of a map's area, with the suction gas that it was rated with.
func (u *unit) flangesAt(r *rating, c corner) (*flanges, error) {
	dew, err := u.fluid.DewPoint(c.x)
	if err != nil {
		return nil, err
	}
	f := flanges{suctionDew: c.x, suctionPressure: dew.P, dischargeDew: c.y}
	if r.pressure {
		f.dischargePressure, f.dischargeDew = c.y*pressurePerKelvin, math.NaN()
	} else {
		hot, err := u.fluid.DewPoint(c.y)
		if err != nil {
			return nil, err
		}
		f.dischargePressure = hot.P
	}
	f.suction, err = r.suctionState(u.fluid, &f)
	return &f, err
}

// fault says what is wrong with a map at a corner, or nil.
func (u *unit) fault(d *drive, r *rating, f *flanges, j int) *Message {
	say := func(text string, numbers ...cycle.Number) *Message {
		m := message("at corner %s of its envelope "+text, append([]cycle.Number{plain(float64(j))}, numbers...)...)
		return &m
	}
	S, D := r.axes(f)
	x, byS, _ := r.flow.at(S, D)
	w, _, _ := r.power.at(S, D)
	if !(x > 0 && w > 0) {
		return say("the map gives a flow or capacity of %s and a power of %s in its own units; both must be positive", plain(x), plain(w))
	}
	if !(byS > 0) {
		return say("the map's flow or capacity does not rise with the suction temperature: its slope is %s in its own units", plain(byS))
	}
	flow := x * r.perFlow
	ideal, err := u.fluid.PressureEntropy(f.dischargePressure, f.suction.S)
	if err != nil {
		return say("the refrigerant has no isentropic end of compression within its limits")
	}
	if r.capacity {
		liquid, err := r.liquid(u.fluid, f)
		if err != nil {
			return say("the refrigerant has no liquid within its limits")
		}
		flow /= f.suction.H - liquid.H
	}
	if eta := flow * (ideal.H - f.suction.H) / (w * r.perPower); !(eta > 0 && eta < mostMapEfficiency) {
		return say("the map means an isentropic efficiency of %s, outside 0 to %s: check units, refrigerant and suction gas", plain(eta), plain(mostMapEfficiency))
	}
	if n := r.speed; !math.IsNaN(d.swept) && !math.IsNaN(n) {
		if eta := flow / f.suction.Rho / (d.swept * n); !(eta > leastMapVolumetric && eta < mostMapVolumetric) {
			return say("the map means a volumetric efficiency of %s, outside %s to %s: check units, speed and swept volume",
				plain(eta), plain(leastMapVolumetric), plain(mostMapVolumetric))
		}
	}
	return nil
}
