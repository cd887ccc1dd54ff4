package readings

import (
	"math"

	"dewmark/props"
	"dewmark/service/readings/uncertainty"
)

// work is the workspace of one sample. A pass computes its figures from the values of its inputs: the first pass, with
// derivatives, decides what is known and how routes are weighted; passes with random inputs keep to its decisions.
type work struct {
	evaluator *Evaluator
	sample    *Sample
	located   [placeCount]located

	calculus uncertainty.Calculus
	inputs   uncertainty.Inputs
	indices
	values []float64 // of the inputs, in this pass

	deciding bool // this is the first pass
	decisions

	points  [placeCount]point
	ideal   props.State // isentropic end of the compression
	loss    uncertainty.Linear
	perKilo specific
	heat    [sideCount]uncertainty.Linear
	routes  [sizedCount][routeCount]uncertainty.Linear
	figures [FigureCount]uncertainty.Linear
}

// indices tell where the inputs of a sample stand in its list; none for what is certain or not there.
type indices struct {
	index                 [readingCount]int // of the readings
	ambient               int               // pressure
	exchange, compression int               // factors of the property model
	density, heatCapacity [sideCount]int    // factors of liquids
	mapFactor             int
	defaultLoss           int // where no reading tells the heat loss
	shared                []int
}

// decisions are what the first pass finds out.
type decisions struct {
	standing        [placeCount]standing
	obstacles       [placeCount]error // why a state is missing
	flowing         [sideCount]bool   // the stream's heat takes part
	streamObstacles [sideCount]error
	// Differences of enthalpy that have the right sign: over the condenser, the evaporator, the compressor, and an isentropic
	// compression.
	releases, takes, rises, compresses bool
	mapTells                           bool    // the machine's compressor tells a flow
	lossValue                          float64 // heat loss where no reading tells it
	weights                            [sizedCount][routeCount]float64
}

// failure is why a pass with random inputs has no result.
type failure int

const (
	noFailure failure = iota
	wetSuction
	flashedLiquid
	crossedEnthalpy
	outsideModel
	failureCount
)

var failureNames = [failureCount]FailureName{"", WetSuction, FlashedLiquid, CrossedEnthalpy, OutsideModel}

// specific holds what a kilogram of refrigerant at the suction does, in J.
type specific struct {
	release uncertainty.Linear // heat given off by the condenser
	uptake  uncertainty.Linear // heat taken up by the evaporator
	work    uncertainty.Linear // taken by the compressor
	ideal   uncertainty.Linear // of an isentropic compression
}

// pass computes all figures.
func (w *work) pass() failure {
	for p := range placeCount {
		if f := w.visit(p); f != noFailure {
			return f
		}
	}
	if f := w.specifics(); f != noFailure {
		return f
	}
	for of := range sideCount {
		if f := w.meet(of); f != noFailure {
			return f
		}
	}
	if f := w.size(); f != noFailure {
		return f
	}
	w.conclude()
	return noFailure
}

// visit finds the state at a place.
func (w *work) visit(p place) failure {
	at := &w.located[p]
	if at.twin != p {
		w.points[p], w.standing[p], w.obstacles[p] = w.points[at.twin], w.standing[at.twin], w.obstacles[at.twin]
		return noFailure
	}
	pt := &w.points[p]
	*pt = point{
		p: w.reading(at.pressure), T: w.reading(at.temperature),
		saturated: uncertainty.Unknown, margin: uncertainty.Unknown, h: uncertainty.Unknown, s: uncertainty.Unknown, rho: uncertainty.Unknown,
	}
	vapour := placeTable[p].vapour
	e := w.evaluator
	c := &w.calculus
	if pt.p.Known() && pt.p.Value < e.fluid.critical {
		saturated, err := e.fluid.saturated(c, pt.p, vapour)
		if err == nil {
			pt.saturated = saturated
		} else if w.deciding {
			w.obstacles[p] = err
		}
	}
	if pt.T.Known() && pt.saturated.Known() {
		if vapour {
			pt.margin = c.Difference(pt.T, pt.saturated)
		} else {
			pt.margin = c.Difference(pt.saturated, pt.T)
		}
	}
	if w.deciding {
		w.standing[p] = w.judge(p)
	}
	if !w.standing[p].known() {
		return noFailure
	}
	if w.standing[p] == singlePhase && !(pt.margin.Value > 0) {
		if vapour {
			return wetSuction
		}
		return flashedLiquid
	}
	if err := pt.fill(c, &e.fluid); err != nil {
		if !w.deciding {
			return outsideModel
		}
		w.standing[p], w.obstacles[p] = stateless, err
	}
	return noFailure
}

// judge decides what can be known of the state at a place.
func (w *work) judge(p place) standing {
	pt := &w.points[p]
	switch {
	case !pt.p.Known() || !pt.T.Known():
		return unread
	case pt.p.Value >= w.evaluator.fluid.critical:
		return aboveCritical
	case !pt.saturated.Known():
		return stateless
	case !(pt.margin.Value > 2*w.inputs.Standard(pt.margin)):
		return tooClose
	}
	return singlePhase
}

// specifics computes the differences of enthalpy.
func (w *work) specifics() failure {
	c := &w.calculus
	e := w.evaluator
	k := &w.perKilo
	k.release, k.uptake, k.work, k.ideal = uncertainty.Unknown, uncertainty.Unknown, uncertainty.Unknown, uncertainty.Unknown
	w.loss = w.heatLoss()
	h := func(p place) uncertainty.Linear { return w.points[p].h }
	exchange, compression := w.factor(w.exchange), w.factor(w.compression)

	k.release = c.Product(exchange, c.Difference(h(condenserInlet), h(condenserOutlet)))
	switch after, before := h(evaporatorOutlet), h(expansionInlet); {
	case e.exchanger && !(after.Known() && before.Known()):
		// What the internal exchanger takes from the liquid it gives to the vapour.
		k.uptake = c.Product(exchange, c.Difference(h(suction), h(condenserOutlet)))
	default:
		k.uptake = c.Product(exchange, c.Difference(after, before))
	}
	rise := c.Product(compression, c.Difference(h(discharge), h(suction)))
	k.work = c.Quotient(rise, c.Complement(w.loss))
	if w.points[suction].h.Known() && w.points[discharge].p.Known() && (w.deciding || w.compresses) {
		s, end, err := e.fluid.compressed(c, &w.points[suction], w.points[discharge].p)
		switch {
		case err == nil:
			w.ideal = s
			k.ideal = c.Product(compression, c.Difference(end, h(suction)))
		case !w.deciding:
			return outsideModel
		}
	}
	for _, d := range [...]struct {
		value *uncertainty.Linear
		part  *bool
	}{{&k.release, &w.releases}, {&k.uptake, &w.takes}, {&k.work, &w.rises}, {&k.ideal, &w.compresses}} {
		right := d.value.Value > 0 // false where it is not known
		if w.deciding {
			*d.part = right
		}
		if *d.part && !right {
			return crossedEnthalpy
		}
		if !*d.part {
			*d.value = uncertainty.Unknown
		}
	}
	return noFailure
}

// heatLoss returns the share of its power that the compressor gives to its surroundings.
func (w *work) heatLoss() uncertainty.Linear {
	c := &w.calculus
	switch {
	case w.sample.has(HeatLossFraction):
		return w.reading(HeatLossFraction)
	case w.shell():
		heat := c.Scaled(c.Difference(w.reading(ShellTemperature), w.reading(AmbientTemperature)), *w.evaluator.installation.ShellConductance)
		return c.Quotient(heat, w.reading(CompressorPower))
	}
	return w.input(w.defaultLoss, w.lossValue)
}

// meet finds the heat of a stream.
func (w *work) meet(of side) failure {
	w.heat[of] = uncertainty.Unknown
	if w.deciding {
		w.flowing[of] = w.sample.reads(of)
		w.streamObstacles[of] = nil
	}
	if !w.flowing[of] {
		return noFailure
	}
	q, err := w.streamHeat(of)
	if w.deciding {
		w.flowing[of] = err == nil && q.Value > 0
		w.streamObstacles[of] = err
	}
	switch {
	case !w.deciding && err != nil:
		return outsideModel
	case !w.deciding && !(q.Value > 0):
		return crossedEnthalpy
	}
	w.heat[of] = q
	return noFailure
}

// conclude computes the figures from points, differences and sizes.
func (w *work) conclude() {
	c := &w.calculus
	f := &w.figures
	e := w.evaluator
	f[FigureSuperheat] = w.points[suction].margin
	f[FigureEvaporatorSuperheat] = uncertainty.Unknown
	if w.sample.has(EvaporatorOutletTemperature) {
		f[FigureEvaporatorSuperheat] = w.points[evaporatorOutlet].margin
	}
	f[FigureSubcooling] = w.points[condenserOutlet].margin
	f[FigureDischargeSuperheat] = w.points[discharge].margin
	f[FigureEvaporationTemperature] = w.points[evaporatorOutlet].saturated
	f[FigureCondensationTemperature] = w.condensation()
	f[FigurePressureRatio] = uncertainty.Unknown
	if w.points[suction].p.Value > 0 {
		f[FigurePressureRatio] = c.Quotient(w.points[discharge].p, w.points[suction].p)
	}

	flow, heating, cooling, power := w.sized(massFlow), w.sized(heatingCapacity), w.sized(coolingCapacity), w.sized(compressorPower)
	f[FigureMassFlow], f[FigureHeatingCapacity], f[FigureCoolingCapacity], f[FigureCompressorPower] = flow, heating, cooling, power
	k := &w.perKilo
	f[FigureCOPHeating] = w.over(heating, power, k.release, k.work)
	f[FigureCOPCooling] = w.over(cooling, power, k.uptake, k.work)
	f[FigureIsentropicEfficiency] = w.over(c.Product(flow, k.ideal), power, k.ideal, k.work)
	f[FigureVolumetricEfficiency] = uncertainty.Unknown
	if v := e.installation.SweptVolume; v != nil {
		swept := c.Scaled(w.reading(Speed), *v)
		f[FigureVolumetricEfficiency] = c.Quotient(flow, c.Product(w.points[suction].rho, swept))
	}
	f[FigureSecondLawEfficiency] = c.Quotient(f[FigureCOPHeating], w.carnot())
	f[FigureEnergyClosure] = w.closure()
}

// over returns a over b, or where the sizes are not known, their ratio per kilogram.
func (w *work) over(a, b, perKiloA, perKiloB uncertainty.Linear) uncertainty.Linear {
	if y := w.calculus.Quotient(a, b); y.Known() {
		return y
	}
	return w.calculus.Quotient(perKiloA, perKiloB)
}

// condensation returns the dew point at the condenser outlet.
func (w *work) condensation() uncertainty.Linear {
	at := &w.located
	e := w.evaluator
	outlet := &w.points[condenserOutlet]
	switch {
	case e.fluid.line != nil:
		return outlet.saturated
	case at[condenserInlet].pressure == at[condenserOutlet].pressure:
		return w.points[condenserInlet].saturated
	case !outlet.p.Known() || outlet.p.Value >= e.fluid.critical:
		return uncertainty.Unknown
	}
	T, err := e.fluid.saturated(&w.calculus, outlet.p, true)
	if err != nil {
		return uncertainty.Unknown
	}
	return T
}

// carnot returns Carnot's COP of heating between the mean temperatures of the streams.
func (w *work) carnot() uncertainty.Linear {
	c := &w.calculus
	cold, hot := w.streamMean(source), w.streamMean(sink)
	if !(hot.Value > cold.Value) {
		return uncertainty.Unknown
	}
	return c.Quotient(hot, c.Difference(hot, cold))
}

// streamMean returns the mean temperature of a stream.
func (w *work) streamMean(of side) uncertainty.Linear {
	in, out, _ := w.ends(of)
	if !in.Known() || !out.Known() {
		return uncertainty.Unknown
	}
	// The entropy mean at constant heat capacity; where both are nearly the same its formula runs out of digits.
	ln := math.Log(out.Value / in.Value)
	if math.Abs(ln) < 1e-5 {
		return w.calculus.OfTwo((in.Value+out.Value)/2, in, 0.5, out, 0.5)
	}
	mean := (out.Value - in.Value) / ln
	return w.calculus.OfTwo(mean, in, (mean/in.Value-1)/ln, out, (1-mean/out.Value)/ln)
}

// closure returns by how much the energy balance of the whole machine misses, over the heat given off, where all of it is
// measured.
func (w *work) closure() uncertainty.Linear {
	c := &w.calculus
	first := func(direct ...uncertainty.Linear) uncertainty.Linear {
		for _, y := range direct {
			if y.Known() {
				return y
			}
		}
		return uncertainty.Unknown
	}
	off := first(w.heat[sink], w.reading(HeatingCapacity))
	up := first(w.heat[source], w.reading(CoolingCapacity))
	work := c.Product(c.Complement(w.loss), w.reading(CompressorPower))
	return c.Quotient(c.Difference(off, c.Sum(up, work)), off)
}
