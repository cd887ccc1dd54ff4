package readings

import (
	"math"

	"dewmark/props"
	"dewmark/service/readings/uncertainty"
)

const standardAtmosphere = props.StandardAtmosphere

// none stands for an input that has no uncertainty.
const none = -1

// collect puts together the uncertain inputs of a sample: its readings, what they have in common, and the factors of the
// property models.
func (w *work) collect() {
	e, s := w.evaluator, w.sample
	w.inputs.List, w.inputs.Correlations = w.inputs.List[:0], w.inputs.Correlations[:0]
	for r := range w.index {
		w.index[r] = none
	}
	for r := firstReading; r < readingCount; r++ {
		if !s.has(r) || r == ShellTemperature && e.installation.ShellConductance == nil {
			continue
		}
		var stream *Stream
		switch {
		case r >= SourceInletTemperature:
			stream = &s.Source
		case r >= SinkInletTemperature:
			stream = &s.Sink
		}
		d := e.doubtOf(r, s.values[r], stream)
		w.index[r] = w.add(uncertainty.Input{
			Name: r.String(), Value: s.values[r] + e.sealing(r),
			Standard: d.standard, DegreesOfFreedom: d.degrees, Distribution: d.distribution, Assumed: d.assumed,
		})
	}
	w.ambient = w.add(uncertainty.Input{Name: "ambient_pressure", Standard: e.ambient, Distribution: uncertainty.Rectangular, Assumed: !e.ambientKnown})
	w.exchange = w.addFactor("property_model.exchange", e.model, e.installation.ModelUncertainty == nil)
	w.compression = w.addFactor("property_model.compression", e.model, e.installation.ModelUncertainty == nil)
	w.defaultLoss, w.lossValue = none, 0
	if !s.has(HeatLossFraction) && !w.shell() {
		w.lossValue = e.lossValue
		w.defaultLoss = w.add(uncertainty.Input{Name: HeatLossFraction.String(), Value: e.lossValue, Standard: e.lossDoubt, Assumed: true})
	}
	for of := range sideCount {
		w.density[of], w.heatCapacity[of] = none, none
		if s.reads(of) && s.stream(of).Liquid != nil {
			if s.has(sideTable[of].volumeFlow) {
				w.density[of] = w.addFactor(sideTable[of].densityFactor, densityUncertainty, true)
			}
			w.heatCapacity[of] = w.addFactor(sideTable[of].heatCapacityFactor, heatCapacityUncertainty, true)
		}
	}
	w.collectMap()
	w.shared = w.shared[:0]
	for i := range e.installation.Shared {
		k := &e.installation.Shared[i]
		w.shared = append(w.shared, w.add(uncertainty.Input{Name: k.Name, Standard: k.Standard}))
	}
	for _, k := range e.installation.Correlations {
		if a, b := w.index[k.A], w.index[k.B]; a != none && b != none {
			w.inputs.Correlations = append(w.inputs.Correlations, uncertainty.Correlation{A: a, B: b, Coefficient: k.Coefficient})
		}
	}
}

// collectMap asks whether the machine's compressor tells a flow here, and how sure it is.
func (w *work) collectMap() {
	w.mapTells, w.mapFactor = false, none
	e, s := w.evaluator, w.sample
	inlet, outlet := w.located[suction], w.located[discharge]
	if e.installation.Machine == nil || e.several || inlet.pressure == 0 || inlet.temperature == 0 || outlet.pressure == 0 {
		return
	}
	speed := math.NaN()
	if s.has(Speed) {
		speed = s.values[Speed]
	}
	value := func(r Reading) float64 { return s.values[r] + e.sealing(r) }
	flow, relative, err := e.installation.Machine.Flow(value(inlet.pressure), value(inlet.temperature), value(outlet.pressure), speed)
	if err == nil && flow > 0 {
		w.mapTells = true
		w.mapFactor = w.addFactor("compressor_map", relative, true)
	}
}

// add appends an input and returns its index, or none where it is certain.
func (w *work) add(in uncertainty.Input) int {
	if !(in.Standard > 0) {
		return none
	}
	w.inputs.List = append(w.inputs.List, in)
	return len(w.inputs.List) - 1
}

func (w *work) addFactor(name string, relative float64, assumed bool) int {
	return w.add(uncertainty.Input{Name: name, Value: 1, Standard: relative, Assumed: assumed})
}

// shell reports whether the heat loss follows from the temperature of the shell.
func (w *work) shell() bool {
	s := w.sample
	return w.evaluator.installation.ShellConductance != nil && s.has(ShellTemperature) && s.has(AmbientTemperature) && s.values[CompressorPower] > 0
}

// input returns input i, drawn or as collected, or a constant where it is certain.
func (w *work) input(i int, certain float64) uncertainty.Linear {
	if i == none {
		return uncertainty.Constant(certain)
	}
	return w.calculus.Input(i, w.values[i])
}

// factor returns a factor that is 1 but for its uncertainty.
func (w *work) factor(i int) uncertainty.Linear { return w.input(i, 1) }

// reading returns a reading with all that moves it: its own error, those it shares, and the ambient pressure.
func (w *work) reading(r Reading) uncertainty.Linear {
	if r == 0 || !w.sample.has(r) {
		return uncertainty.Unknown
	}
	e := w.evaluator
	x := w.input(w.index[r], w.sample.values[r]+e.sealing(r))
	if r.IsPressure() && w.ambient != none && !e.sealed[r] {
		x = w.calculus.Sum(x, w.calculus.Input(w.ambient, w.values[w.ambient]))
	}
	for k, i := range w.shared {
		if i == none {
			continue
		}
		for _, member := range e.installation.Shared[k].Readings {
			if member == r {
				x = w.calculus.Sum(x, w.calculus.Input(i, w.values[i]))
			}
		}
	}
	return x
}
