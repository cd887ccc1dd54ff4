package machine

import (
	"math"

	"dewmark/service/cycle"
)

// plan is a machine at a condition, both checked.
type plan struct {
	*unit
	checker // of the condition

	evaporator, condenser exchange
	source, sink          side
	ambient               float64 // K; NaN when not given
	ambientPressure       float64 // Pa
	speed                 float64 // 1/s; NaN without
	demand                float64 // W; NaN when a speed is given
	demandCools           bool
}

// newPlan checks a condition for a machine that was checked.
func newPlan(u *unit, k *Condition) (*plan, error) {
	p := &plan{unit: u, demand: math.NaN()}
	p.evaporator = p.exchanger("machine.evaporator", &u.machine.Evaporator, true, k.Source.Liquid == nil)
	p.condenser = p.exchanger("machine.condenser", &u.machine.Condenser, false, k.Sink.Liquid == nil)
	p.streams(k)
	p.speeds(k)
	if len(u.refusals)+len(p.refusals) > 0 {
		return nil, &RefusedError{append(append([]Refusal(nil), u.refusals...), p.refusals...)}
	}
	return p, nil
}

// speeds takes the speed or the demand.
func (p *plan) speeds(k *Condition) {
	d := &p.compressor
	p.speed = p.number("condition.speed", k.Speed, &amountBounds)
	p.atMostOne("condition", []string{"speed", "demand.heating", "demand.cooling"}, k.Speed != nil, k.Demand.Heating != nil, k.Demand.Cooling != nil)
	switch {
	case k.Demand.Heating != nil:
		p.demand = p.number("condition.demand.heating", k.Demand.Heating, &heatBounds)
	case k.Demand.Cooling != nil:
		p.demand, p.demandCools = p.number("condition.demand.cooling", k.Demand.Cooling, &heatBounds), true
	case k.Speed == nil:
		p.speed = d.speed
		if math.IsNaN(p.speed) && d.hasSpeed() {
			if d.slowest < d.fastest {
				p.missing("condition.speed", "the compressor has a range of speeds: give the speed, a demand, or a speed of the compressor to go by")
			}
			p.speed = d.slowest
		}
		return
	}
	switch {
	case !math.IsNaN(p.demand) && !(d.slowest < d.fastest && d.slowest > 0 && !math.IsInf(d.fastest, 1)):
		p.missing("machine.compressor.speed_max", "a demand needs a compressor whose speed_min and speed_max differ")
	case !math.IsNaN(p.speed) && !d.hasSpeed():
		p.surplus("condition.speed", "the compressor's map has no speed")
	case !math.IsNaN(p.speed) && !(d.slowest <= p.speed && p.speed <= d.fastest):
		p.wrong(OutOfBounds, "condition.speed", message("%s 1/s lies outside the range of speeds, %s to %s 1/s", plain(p.speed), plain(d.slowest), plain(d.fastest)))
	}
}

// template fills the cycle's request with what does not change from trial to trial.
func (p *plan) template() cycle.Request {
	m := p.machine
	r := cycle.Request{
		Refrigerant: p.fluid, Layout: m.Layout, With: m.With, Purpose: p.purpose,
		Evaporator: cycle.Exchanger{Drop: m.Evaporator.Drop}, Condenser: cycle.Exchanger{Drop: m.Condenser.Drop},
		SuctionLine: m.SuctionLine, DischargeLine: m.DischargeLine, LiquidLine: m.LiquidLine,
		InternalExchanger: m.InternalExchanger, Intermediate: m.Intermediate, Economiser: m.Economiser,
		Intercooler: m.Intercooler, Ejector: m.Ejector,
	}
	ambient := p.ambient
	if math.IsNaN(ambient) {
		ambient = p.source.inlet
		if p.purpose == cycle.Cooling {
			ambient = p.sink.inlet
		}
	}
	if math.IsNaN(ambient) { // only the outlet is known
		ambient = p.source.outlet
		if p.purpose == cycle.Cooling {
			ambient = p.sink.outlet
		}
	}
	r.AmbientTemperature, r.AmbientPressure = &ambient, &p.ambientPressure
	return r
}
