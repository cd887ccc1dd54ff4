package machine

import (
	"context"
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

// settle finds the levels at the speed and the high-side pressure in force. The axes that it found them on are in the trial.
func (t *trial) settle(start *unknowns) (settled, error) {
	t.held = false
	b, err := t.newAxes()
	if err != nil {
		return settled{}, err
	}
	t.on = b
	first := t.guess()
	if start != nil {
		first = *start
	}
	s, err := t.search(first, b)
	if err != nil || !(s.x[low]-t.superheat > t.limits.evaporation) {
		return s, err
	}
	// The valve holds the evaporation: with more superheat the evaporator passes less.
	t.held = true
	if b[low].max = b[low].at(t.limits.evaporation + t.superheat); !(b[low].min < b[low].max) {
		return s, refused(Impossible, "machine.limits.evaporation_max", nil,
			"the source, at %s, is not warm enough above it for the superheat", temperature(t.warmest()))
	}
	return t.search(s.x, b)
}

// search finds the levels by Newton's method, or else by the nested search.
func (t *trial) search(first unknowns, b *axes) (settled, error) {
	y := unknowns{b[low].at(first[low]), b[high].at(first[high])}
	s, ok := t.newton(y, b)
	if ok {
		return s, nil
	}
	if t.ctx.Err() != nil {
		return s, &stopped{context.Cause(t.ctx)}
	}
	s, err := t.nested(y, b)
	if err != nil {
		return s, t.explain(err, b)
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

// newAxes returns what a search moves on.
func (t *trial) newAxes() (*axes, error) {
	critical := t.fluid.Critical()
	hottest, err := t.fluid.DewPointAtPressure(criticalShare * critical.P)
	if err != nil {
		return nil, refused(NoState, "machine.refrigerant", err, "the refrigerant has no dew point near its critical point")
	}
	lowest := t.warmest() - deepest
	if _, err := t.fluid.DewPoint(lowest); err != nil {
		if e, ok := errors.AsType[*props.RangeError](err); ok && e.Property == props.Temperature && e.Min > lowest {
			lowest = e.Min + offBound
		}
	}
	if !(lowest+t.superheat < t.warmest()-offBound) {
		return nil, refused(NoState, "condition.source", nil,
			"the refrigerant evaporates from %s up, which leaves no room for the superheat below the source, %s", temperature(lowest), temperature(t.warmest()))
	}
	warm := math.Min(t.warmest(), hottest.T+t.superheat-offBound)
	cold, hot := t.coldest(), hottest.T-t.subcooling
	if t.gasCooled {
		hot = cold + highest
	}
	if !(cold+offBound < hot) {
		return nil, refused(NoState, "condition.sink", nil,
			"the refrigerant condenses up to %s, too cold for the sink, %s; above it a transcritical layout has a gas cooler", temperature(hottest.T), temperature(cold))
	}
	limits := [2]float64{t.limitOf(&t.evaporator, &t.source), t.limitOf(&t.condenser, &t.sink)}
	if math.IsNaN(limits[low]) { // an approach can ask for vapour warmer, or liquid colder, than the stream enters
		warm += t.superheat
	}
	if math.IsNaN(limits[high]) {
		cold -= t.subcooling
	}
	return &axes{newAxis(-1, limits[low], lowest+t.superheat, warm), newAxis(+1, limits[high], cold, hot)}, nil
}

// limitOf returns the stream's inlet temperature where the refrigerant can come close to it, or NaN.
func (t *trial) limitOf(x *exchange, s *side) float64 {
	if math.IsNaN(x.ua) {
		return nan // an approach may ask for any temperature
	}
	if math.IsNaN(s.inlet) && !math.IsNaN(s.change) {
		return s.outlet - s.sign*s.change
	}
	return s.inlet
}

// guess returns what levels usually are.
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
	te, tc := far(&t.source)-difference(&t.source), far(&t.sink)+difference(&t.sink)
	if e := &t.evaporator; e.byInlet() {
		te = t.source.inlet - e.approach
	}
	if k := &t.condenser; k.byInlet() {
		tc = t.sink.inlet + k.approach
	}
	x := unknowns{te + t.superheat, tc - t.subcooling}
	if t.gasCooled && !t.condenser.byInlet() {
		x[high] = t.coldest() + difference(&t.sink)
		if math.IsNaN(t.sink.inlet) && math.IsNaN(t.sink.change) {
			x[high] = t.sink.outlet - guessAir
		}
	}
	if limit := t.limitOf(&t.evaporator, &t.source); x[low] >= limit {
		x[low] = limit - 1
	}
	if limit := t.limitOf(&t.condenser, &t.sink); x[high] <= limit {
		x[high] = limit + 1
	}
	return x
}

// refused makes an error of one refusal.
func refused(code Code, field string, cause error, text string, numbers ...cycle.Number) error {
	return &RefusedError{[]Refusal{{Code: code, Field: field, Message: message(text, numbers...), Cause: cause}}}
}

// explain turns the end of a search into the reason why there is no operating point.
func (t *trial) explain(err error, b *axes) error {
	if interrupted(err) {
		return err
	}
	outer, ok := err.(*wall) //nolint:errorlint // the outermost wall is that of the evaporator
	if !ok {
		return t.impossible(err)
	}
	inner, nested := errors.AsType[*wall](outer.cause)
	found := nested && !math.IsNaN(inner.miss) // the condenser could be tried
	switch {
	case found && inner.above:
		return t.tooSmall(&t.condenser, inner, b)
	case outer.above && !math.IsNaN(outer.miss):
		return t.tooSmall(&t.evaporator, outer, b)
	case found:
		return t.tooFlat(inner, b)
	case outer.cause != nil:
		return t.impossible(outer.cause)
	}
	return refused(NoConvergence, "", nil, "the search ended with compressor and exchangers %s of the duty apart, the refrigerant leaving the evaporator at %s", plain(outer.miss), temperature(b[low].temperature(outer.x)))
}

func (t *trial) tooSmall(x *exchange, w *wall, b *axes) error {
	field, what := x.field+".ua", "conductance"
	switch {
	case !math.IsNaN(x.pinch):
		field, what = x.field+".pinch", "pinch"
	case math.IsNaN(x.ua):
		field, what = x.field+".approach", "approach"
	}
	if x.evaporator {
		return refused(ExchangerTooSmall, field, w.cause, "with this "+what+" the evaporator passes what the compressor takes at no evaporation down to %s",
			temperature(b[low].temperature(w.x)-t.superheat))
	}
	return refused(ExchangerTooSmall, field, w.cause, "with this "+what+" the condenser or gas cooler passes what the compressor delivers at no outlet temperature of the refrigerant up to %s",
		temperature(b[high].temperature(w.x)))
}

func (t *trial) tooFlat(w *wall, b *axes) error {
	return refused(LiftTooSmall, "condition.sink", w.cause,
		"the sink is so cold, or the condenser so large, that condensation would fall to evaporation: the search ended with the refrigerant leaving the condenser at %s; a machine holds it up by throttling the sink",
		temperature(b[high].temperature(w.x)))
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
