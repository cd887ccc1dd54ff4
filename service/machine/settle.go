package machine

import (
	"errors"
	"math"

	"dewmark/props"
	"dewmark/service/cycle"
)

const (
	// deepest and highest bound the search for levels beyond the streams, K.
	deepest = 90.0
	highest = 150.0
	// criticalShare is the share of the critical pressure at which condensation ends: closer, latent heat and densities change
	// too steeply to settle anything (common practice).
	criticalShare = 0.98
	offBound      = 0.01 // K
	// First guesses of differences between refrigerant and stream, K.
	guessLiquid = 4.0
	guessAir    = 9.0
)

// settle finds the levels at the speed and the high-side pressure in force.
func (t *trial) settle(start *unknowns) (settled, error) {
	t.held = false
	s, err := t.levelsFrom(start)
	if err != nil || !(s.x[low] > t.limits.evaporation) {
		return s, err
	}
	// The valve holds the evaporation: with more superheat the evaporator passes less.
	t.held = true
	b := box{min: unknowns{t.superheat, 0}, max: unknowns{t.warmest() - t.limits.evaporation - offBound, 0}}
	whole, err := t.bounds()
	if err != nil {
		return s, err
	}
	b.min[high], b.max[high] = whole.min[high], whole.max[high]
	if !(b.min[low] < b.max[low]) {
		return s, refused(Impossible, "machine.limits.evaporation_max", nil,
			"the source, at %s, is not warm enough above it for the superheat", temperature(t.warmest()))
	}
	held, ok := t.newton(unknowns{t.superheat + 2, s.x[high]}, b)
	if ok {
		return held, nil
	}
	if held, err = t.nested(unknowns{t.superheat + 2, s.x[high]}, b); err != nil {
		return held, t.explain(err)
	}
	return held, nil
}

func (t *trial) levelsFrom(start *unknowns) (settled, error) {
	b, err := t.bounds()
	if err != nil {
		return settled{}, err
	}
	first := t.guess()
	if start != nil {
		first = *start
	}
	if s, ok := t.newton(first, b); ok {
		return s, nil
	} else if t.ctx.Err() != nil {
		_, err := t.at(first)
		return s, err
	}
	s, err := t.nested(first, b)
	if err != nil {
		return s, t.explain(err)
	}
	return s, nil
}

// warmest returns the highest temperature of the source that is known, K.
func (t *trial) warmest() float64 {
	if !math.IsNaN(t.source.inlet) {
		return t.source.inlet
	}
	if !math.IsNaN(t.source.change) {
		return t.source.outlet + t.source.change
	}
	return t.source.outlet + deepest // its inlet follows from the flow
}

// coldest returns the lowest temperature of the sink that is known, K.
func (t *trial) coldest() float64 {
	if !math.IsNaN(t.sink.inlet) {
		return t.sink.inlet
	}
	if !math.IsNaN(t.sink.change) {
		return t.sink.outlet - t.sink.change
	}
	return t.sink.outlet - deepest
}

// bounds returns where levels can lie at all.
func (t *trial) bounds() (box, error) {
	var b box
	critical := t.fluid.Critical()
	hottest, err := t.fluid.DewPointAtPressure(criticalShare * critical.P)
	if err != nil {
		return b, refused(NoState, "machine.refrigerant", err, "the refrigerant has no dew point near its critical point")
	}
	b.max[low] = math.Min(t.warmest()-offBound, hottest.T-offBound)
	b.min[low] = b.max[low] - deepest
	if _, err := t.fluid.DewPoint(b.min[low]); err != nil {
		if e, ok := errors.AsType[*props.RangeError](err); ok && e.Property == props.Temperature && e.Min > b.min[low] {
			b.min[low] = e.Min + offBound
		}
	}
	b.min[high] = t.coldest() + offBound
	b.max[high] = hottest.T
	if t.gasCooled {
		b.max[high] = b.min[high] + highest
	}
	if !(b.min[low] < b.max[low]) {
		return b, refused(NoState, "condition.source.inlet_temperature", nil,
			"the refrigerant evaporates from %s up, warmer than the source, %s", temperature(b.min[low]), temperature(t.warmest()))
	}
	if !(b.min[high] < b.max[high]) {
		return b, refused(NoState, "condition.sink.inlet_temperature", nil,
			"the refrigerant condenses up to %s, colder than the sink, %s; above it a transcritical layout has a gas cooler",
			temperature(hottest.T), temperature(t.coldest()))
	}
	return b, nil
}

// guess returns where levels usually lie.
func (t *trial) guess() unknowns {
	difference := func(s *side) float64 {
		if s.liquid == nil {
			return guessAir
		}
		return guessLiquid
	}
	far := func(s *side) float64 { // the stream's outlet, or an idea of it
		switch {
		case !math.IsNaN(s.outlet):
			return s.outlet
		case !math.IsNaN(s.change):
			return s.inlet + s.sign*s.change
		case s.liquid == nil:
			return s.inlet
		}
		return s.inlet + s.sign*guessLiquid
	}
	x := unknowns{far(&t.source) - difference(&t.source), far(&t.sink) + difference(&t.sink)}
	if t.gasCooled {
		x[high] = t.coldest() + difference(&t.sink)
		if math.IsNaN(t.sink.inlet) && math.IsNaN(t.sink.change) {
			x[high] = t.sink.outlet - guessAir
		}
	}
	if e := &t.evaporator; e.byInlet() {
		x[low] = t.source.inlet - e.approach
	}
	if k := &t.condenser; k.byInlet() {
		x[high] = t.sink.inlet + k.approach
	}
	return x
}

// refused makes an error of one refusal.
func refused(code Code, field string, cause error, text string, numbers ...cycle.Number) error {
	return &RefusedError{[]Refusal{{Code: code, Field: field, Message: message(text, numbers...), Cause: cause}}}
}

// explain turns the end of a search into the reason why there is no operating point.
func (t *trial) explain(err error) error {
	if interrupted(err) {
		return err
	}
	outer, ok := err.(*wall) //nolint:errorlint // the outermost wall is that of the evaporator
	if !ok {
		return t.impossible(err)
	}
	inner, nested := errors.AsType[*wall](outer.cause)
	switch {
	case nested && inner.cause != nil && !math.IsNaN(inner.miss) && !inner.above:
		return t.tooFlat(inner)
	case nested && inner.cause == nil && inner.above:
		return t.tooSmall(&t.condenser, inner)
	case nested && inner.cause != nil:
		return t.impossible(inner.cause)
	case nested:
		return t.tooFlat(inner)
	case outer.cause != nil && (outer.above || math.IsNaN(outer.miss)):
		return t.impossible(outer.cause)
	case !outer.above:
		return t.tooSmall(&t.evaporator, outer)
	}
	return refused(NoConvergence, "", nil, "the search ended with compressor and exchangers %s of the duty apart, evaporation at %s", plain(outer.miss), temperature(outer.x))
}

func (t *trial) tooSmall(x *exchange, w *wall) error {
	field, what := x.field+".ua", "conductance"
	switch {
	case !math.IsNaN(x.pinch):
		field, what = x.field+".pinch", "pinch"
	case math.IsNaN(x.ua):
		field, what = x.field+".approach", "approach"
	}
	if x.evaporator {
		return refused(ExchangerTooSmall, field, w.cause, "with this "+what+" the evaporator passes what the compressor takes at no evaporation down to %s", temperature(w.x))
	}
	return refused(ExchangerTooSmall, field, w.cause, "with this "+what+" the condenser or gas cooler passes what the compressor delivers at no level up to %s", temperature(w.x))
}

func (t *trial) tooFlat(w *wall) error {
	return refused(LiftTooSmall, "condition.sink", w.cause,
		"the sink is so cold, or the condenser so large, that condensation would fall to evaporation: the search ended at %s; a machine holds it up by throttling the sink", temperature(w.x))
}

// impossible passes on what the cycle or the property model says.
func (t *trial) impossible(err error) error {
	if own, ok := errors.AsType[*RefusedError](err); ok {
		return own
	}
	if e, ok := errors.AsType[*cycle.RefusedError](err); ok {
		out := &RefusedError{}
		for _, r := range e.Refusals {
			out.Refusals = append(out.Refusals, Refusal{
				Code: Code(r.Code), Field: machineField(r.Field), Message: fromCycle(r.Message), Cause: r.Cause,
			})
		}
		return out
	}
	return refused(Impossible, "", err, "the circuit cannot work anywhere near these conditions")
}
