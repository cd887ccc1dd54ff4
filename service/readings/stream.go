package readings

import (
	"errors"
	"math"

	"dewmark/props"
	"dewmark/props/secondary"
	"dewmark/service/readings/uncertainty"
)

// side is one of the two streams.
type side uint8

const (
	sink side = iota
	source
	sideCount
)

// sideTable names the readings of each side.
var sideTable = [sideCount]struct {
	name                              string
	inlet, outlet, change             Reading
	volumeFlow, massFlow              Reading
	inletHumidity, outletHumidity     Reading
	sign                              float64 // of the change from inlet to outlet
	meter                             Reading
	streamRoute, meterRoute           RouteName
	densityFactor, heatCapacityFactor string
}{
	sink: {
		"sink", SinkInletTemperature, SinkOutletTemperature, SinkTemperatureChange, SinkVolumeFlow, SinkMassFlow,
		SinkInletHumidity, SinkOutletHumidity, 1, HeatingCapacity, SinkStream, HeatingMeter, "sink.density", "sink.heat_capacity",
	},
	source: {
		"source", SourceInletTemperature, SourceOutletTemperature, SourceTemperatureChange, SourceVolumeFlow, SourceMassFlow,
		SourceInletHumidity, SourceOutletHumidity, -1, CoolingCapacity, SourceStream, CoolingMeter, "source.density", "source.heat_capacity",
	},
}

// Uncertainties of what a liquid is, beyond those of its tables: purity, inhibitors, concentration (common practice).
const (
	densityUncertainty      = 0.002
	heatCapacityUncertainty = 0.005
)

// reads reports whether a sample has the readings that heat from a stream takes.
func (s *Sample) reads(of side) bool {
	row := &sideTable[of]
	flow := s.has(row.volumeFlow) || s.has(row.massFlow)
	ends := 0
	for _, r := range [...]Reading{row.inlet, row.outlet, row.change} {
		if s.has(r) {
			ends++
		}
	}
	return flow && ends >= 2 && s.stream(of).known()
}

func (s *Sample) stream(of side) *Stream {
	if of == sink {
		return &s.Sink
	}
	return &s.Source
}

// ends returns inlet and outlet temperature and the change of a stream, those that are known.
func (w *work) ends(of side) (in, out, change uncertainty.Linear) {
	row := &sideTable[of]
	c := &w.calculus
	in, out, change = w.reading(row.inlet), w.reading(row.outlet), w.reading(row.change)
	switch {
	case change.Known() && in.Known():
		out = c.OfTwo(in.Value+row.sign*change.Value, in, 1, change, row.sign) // the pair is better than the two
	case change.Known() && out.Known():
		in = c.OfTwo(out.Value-row.sign*change.Value, out, 1, change, -row.sign)
	case in.Known() && out.Known():
		change = c.OfTwo(row.sign*(out.Value-in.Value), out, row.sign, in, -row.sign)
	}
	return in, out, change
}

// Why the heat of moist air cannot be told.
var (
	errLatent   = errors.New("the air is cooled below its dew point, and nothing tells how much water it loses: its outlet humidity must be read too")
	errHumidity = errors.New("air that is cooled may lose water: its inlet humidity must be read")
)

// streamHeat returns the heat that a stream takes up (sink) or gives off (source).
func (w *work) streamHeat(of side) (uncertainty.Linear, error) {
	in, out, _ := w.ends(of)
	if w.sample.stream(of).MoistAir {
		return w.airHeat(of, in, out)
	}
	return w.liquidHeat(of, in, out)
}

func (w *work) liquidHeat(of side, in, out uncertainty.Linear) (uncertainty.Linear, error) {
	row := &sideTable[of]
	c := &w.calculus
	stream := w.sample.stream(of)
	l := stream.Liquid
	hot, err := l.At(out.Value)
	if err != nil {
		return uncertainty.Unknown, err
	}
	cold, err := l.At(in.Value)
	if err != nil {
		return uncertainty.Unknown, err
	}
	rise := c.OfTwo(row.sign*(hot.Enthalpy-cold.Enthalpy), out, row.sign*hot.HeatCapacity, in, -row.sign*cold.HeatCapacity)
	flow := w.reading(row.massFlow)
	if !flow.Known() {
		metered, at := in, cold
		if stream.MeterAtOutlet {
			metered, at = out, hot
		}
		density := uncertainty.Constant(at.Density)
		if c.Differentiates() {
			const step = 0.1 // K
			density = c.Of(at.Density, metered, (l.Density(metered.Value+step)-l.Density(metered.Value-step))/(2*step))
		}
		flow = c.Product(w.reading(row.volumeFlow), c.Product(density, w.factor(w.density[of])))
	}
	return c.Product(flow, c.Product(rise, w.factor(w.heatCapacity[of]))), nil
}

// airHeat goes by numerical derivatives: psychrometry has too many branches for others.
func (w *work) airHeat(of side, in, out uncertainty.Linear) (uncertainty.Linear, error) {
	row := &sideTable[of]
	byMass := w.sample.has(row.massFlow)
	flow := w.reading(row.volumeFlow)
	if byMass {
		flow = w.reading(row.massFlow)
	}
	x := [...]uncertainty.Linear{flow, in, out, w.reading(row.inletHumidity), w.reading(row.outletHumidity)}
	a := airStream{pressure: w.evaluator.airPressure(), byMass: byMass, humid: x[3].Known(), humidOut: x[4].Known()}
	if of == source && !a.humid {
		return uncertainty.Unknown, errHumidity
	}
	values := [len(x)]float64{}
	for i := range x {
		values[i] = x[i].Value
	}
	q, err := a.heat(&values)
	if err != nil {
		return uncertainty.Unknown, err
	}
	sum := uncertainty.Constant(row.sign * q)
	if !w.calculus.Differentiates() {
		return sum, nil
	}
	steps := [len(x)]float64{1e-4 * flow.Value, 1e-3, 1e-3, 1e-5, 1e-5}
	for i := range x {
		if !x[i].Known() {
			continue
		}
		slope, ok := slopeOf(func(v float64) (float64, error) {
			y := values
			y[i] = v
			return a.heat(&y)
		}, values[i], steps[i])
		if !ok {
			return uncertainty.Unknown, errLatent
		}
		term := w.calculus.Of(0, x[i], row.sign*slope)
		sum = w.calculus.Sum(sum, term)
	}
	return sum, nil
}

// slopeOf differences f around x, on one side where the other has no value.
func slopeOf(f func(float64) (float64, error), x, step float64) (float64, bool) {
	middle, err := f(x)
	if err != nil {
		return 0, false
	}
	above, errAbove := f(x + step)
	below, errBelow := f(x - step)
	switch {
	case errAbove == nil && errBelow == nil:
		return (above - below) / (2 * step), true
	case errAbove == nil:
		return (above - middle) / step, true
	case errBelow == nil:
		return (middle - below) / step, true
	}
	return 0, false
}

// airStream is moist air of which some things are read.
type airStream struct {
	pressure        float64 // Pa
	byMass          bool    // the flow is one of mass
	humid, humidOut bool    // the humidity is read
}

// heat returns the heat that the air takes up on its way, negative when it is cooled, from flow, inlet and outlet
// temperature, inlet and outlet relative humidity. Air whose inlet humidity is not read counts as dry. Water that it loses leaves
// as condensate at the outlet temperature.
func (a *airStream) heat(x *[5]float64) (float64, error) {
	humidity := 0.0
	if a.humid {
		humidity = math.Min(x[3], 1) // a step or a draw may pass saturation
	}
	in, err := secondary.AirByRelativeHumidity(a.pressure, x[1], math.Max(0, humidity))
	if err != nil {
		return 0, err
	}
	dry := x[0] / in.Volume()
	if a.byMass {
		dry = x[0] / (1 + in.W)
	}
	if !a.humid || !a.humidOut {
		out, err := secondary.AirByHumidityRatio(a.pressure, x[2], in.W)
		if err != nil {
			return 0, errLatent
		}
		return dry * (out.Enthalpy() - in.Enthalpy()), nil
	}
	out, err := secondary.AirByRelativeHumidity(a.pressure, x[2], math.Max(0, math.Min(x[4], 1)))
	if err != nil {
		return 0, err
	}
	if x[2] >= x[1] { // heated air keeps its water; its outlet humidity says nothing new
		out, err = secondary.AirByHumidityRatio(a.pressure, x[2], in.W)
		if err != nil {
			return 0, err
		}
	}
	lost := math.Max(0, in.W-out.W)
	return dry * (out.Enthalpy() - in.Enthalpy() + lost*secondary.CondensateEnthalpy(x[2])), nil
}

// airPressure returns the pressure of the air around the machine.
func (e *Evaluator) airPressure() float64 {
	if p := e.installation.Site.AmbientPressure; p != nil {
		return *p
	}
	return props.StandardAtmosphere
}
