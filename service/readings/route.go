package readings

import "dewmark/service/readings/uncertainty"

// sizing is a figure that grows with the machine.
type sizing uint8

const (
	massFlow sizing = iota
	heatingCapacity
	coolingCapacity
	compressorPower
	sizedCount
)

var sizedFigures = [sizedCount]Figure{FigureMassFlow, FigureHeatingCapacity, FigureCoolingCapacity, FigureCompressorPower}

// Routes, in the order in which they are listed.
const (
	bySinkStream = iota
	byHeatingMeter
	bySourceStream
	byCoolingMeter
	byFlowMeter
	byPower
	byMap
	byBalance
	routeCount
)

var routeNames = [routeCount]RouteName{
	SinkStream, HeatingMeter, SourceStream, CoolingMeter, FlowMeasured, CompressorBalance, CompressorMap, EnergyBalance,
}

func routeName(of sizing, route int) RouteName {
	if of == compressorPower && route == byPower {
		return PowerMeasured
	}
	return routeNames[route]
}

// size takes every route to mass flow, capacities and power that the readings allow.
func (w *work) size() failure {
	c := &w.calculus
	for of := range w.routes {
		for r := range w.routes[of] {
			w.routes[of][r] = uncertainty.Unknown
		}
	}
	flow, heating, cooling, power := &w.routes[massFlow], &w.routes[heatingCapacity], &w.routes[coolingCapacity], &w.routes[compressorPower]
	heating[bySinkStream], heating[byHeatingMeter] = w.heat[sink], w.measured(HeatingCapacity)
	cooling[bySourceStream], cooling[byCoolingMeter] = w.heat[source], w.measured(CoolingCapacity)
	flow[byFlowMeter], power[byPower] = w.measured(MassFlow), w.measured(CompressorPower)
	var f failure
	if flow[byMap], f = w.mapped(); f != noFailure {
		return f
	}
	if !w.evaluator.several {
		k := &w.perKilo
		for r := range byBalance {
			switch r {
			case bySinkStream, byHeatingMeter:
				flow[r] = c.Quotient(heating[r], k.release)
			case bySourceStream, byCoolingMeter:
				flow[r] = c.Quotient(cooling[r], k.uptake)
			case byPower:
				flow[r] = c.Quotient(power[r], k.work)
			}
			if !heating[r].Known() {
				heating[r] = c.Product(flow[r], k.release)
			}
			if !cooling[r].Known() {
				cooling[r] = c.Product(flow[r], k.uptake)
			}
			if !power[r].Known() {
				power[r] = c.Product(flow[r], k.work)
			}
		}
	}
	for of := range sizedCount {
		w.weigh(of)
	}
	w.balance()
	return noFailure
}

// measured returns what a meter says, unless it says that nothing flows or that it flows the wrong way.
func (w *work) measured(r Reading) uncertainty.Linear {
	if !(w.sample.values[r] > 0) {
		return uncertainty.Unknown
	}
	return w.reading(r)
}

// weigh finds the weights of the routes to a figure.
func (w *work) weigh(of sizing) {
	if w.deciding {
		w.weights[of] = [routeCount]float64{}
		copy(w.weights[of][:], w.inputs.Combine(w.routes[of][:]).Weights)
	}
}

// sized returns a figure as the weighted mean of its routes.
func (w *work) sized(of sizing) uncertainty.Linear {
	return w.calculus.Weighted(w.routes[of][:], w.weights[of][:])
}

// balance closes the energy of the whole machine where two of its three parts are known and nothing else tells the third:
// no state of the refrigerant is needed for that, but heat gained and lost by pipes is neglected.
func (w *work) balance() {
	c := &w.calculus
	set := func(of sizing, y uncertainty.Linear) {
		w.routes[of][byBalance] = y
		w.weigh(of)
	}
	heating, cooling, power := w.sized(heatingCapacity), w.sized(coolingCapacity), w.sized(compressorPower)
	inside := c.Complement(w.loss)
	switch {
	case !heating.Known():
		heating = c.Sum(cooling, c.Product(inside, power))
		set(heatingCapacity, heating)
	case !cooling.Known():
		cooling = c.Difference(heating, c.Product(inside, power))
		set(coolingCapacity, cooling)
	case !power.Known():
		power = c.Quotient(c.Difference(heating, cooling), inside)
		set(compressorPower, power)
	}
	if !w.sized(massFlow).Known() && !w.evaluator.several {
		flow := c.Quotient(heating, w.perKilo.release)
		if !flow.Known() {
			flow = c.Quotient(cooling, w.perKilo.uptake)
		}
		set(massFlow, flow)
	}
}

// mapped returns the flow that the machine's compressor should move.
func (w *work) mapped() (uncertainty.Linear, failure) {
	inlet, out := &w.points[suction], w.points[discharge].p
	if !w.mapTells || !inlet.h.Known() {
		return uncertainty.Unknown, noFailure
	}
	x := [...]uncertainty.Linear{inlet.p, inlet.T, out, w.reading(Speed)}
	var values [len(x)]float64
	for i := range x {
		values[i] = x[i].Value
	}
	at := func(v *[len(x)]float64) (float64, error) {
		flow, _, err := w.evaluator.installation.Machine.Flow(v[0], v[1], v[2], v[3])
		return flow, err
	}
	flow, err := at(&values)
	if err != nil || !(flow > 0) {
		if w.deciding {
			w.mapTells = false
			return uncertainty.Unknown, noFailure
		}
		return uncertainty.Unknown, outsideModel
	}
	sum := uncertainty.Constant(flow)
	if w.calculus.Differentiates() {
		steps := [len(x)]float64{1e-4 * values[0], 1e-2, 1e-4 * values[2], 1e-4 * values[3]}
		for i := range x {
			if !x[i].Known() {
				continue
			}
			slope, _ := slopeOf(func(v float64) (float64, error) {
				y := values
				y[i] = v
				return at(&y)
			}, values[i], steps[i])
			sum = w.calculus.Sum(sum, w.calculus.Of(0, x[i], slope))
		}
	}
	return w.calculus.Product(sum, w.factor(w.mapFactor)), noFailure
}
