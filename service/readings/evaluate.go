package readings

import (
	"context"
	"math"

	"dewmark/props"
	"dewmark/service/readings/uncertainty"
)

// evaluate answers a sample that was checked. Worth tells from all but the comparison whether the sample is worth one, which
// costs far more than the rest; nil means yes.
func (w *work) evaluate(ctx context.Context, s *Sample, worth func(*Result) bool) (*Result, error) {
	w.sample = s
	w.begin()
	w.pass() // the first pass decides instead of failing
	if s.Standstill > 0 {
		w.stop()
	}
	r := &Result{Time: s.Time}
	w.estimate(r)
	w.listRoutes(r)
	w.listStates(r)
	w.findImplausible(r)
	w.caution(r)
	if s.Standstill == 0 && (worth == nil || worth(r)) {
		if err := w.compare(ctx, r); err != nil {
			return nil, err
		}
	}
	if w.evaluator.options.Method == MonteCarlo {
		if err := w.draw(ctx, r); err != nil {
			return nil, err
		}
	}
	r.Cautions = append(r.Cautions, safety)
	return r, nil
}

// begin prepares the first pass.
func (w *work) begin() {
	w.located = w.sample.locate(w.evaluator.exchanger)
	w.collect()
	w.values = w.values[:0]
	for i := range w.inputs.List {
		w.values = append(w.values, w.inputs.List[i].Value)
	}
	clear(w.obstacles[:])
	w.deciding = true
	w.calculus.Reset(len(w.inputs.List))
}

// stop leaves only what a machine that stands still tells: saturation temperatures at its pressures.
func (w *work) stop() {
	for f := range FigureCount {
		if f != FigureEvaporationTemperature && f != FigureCondensationTemperature {
			w.figures[f] = uncertainty.Unknown
		}
	}
	for of := range w.routes {
		for route := range w.routes[of] {
			w.routes[of][route] = uncertainty.Unknown
		}
	}
}

// estimate gives each figure its uncertainty.
func (w *work) estimate(r *Result) {
	p := w.evaluator.options.Coverage
	room := make([]uncertainty.Share, 0, int(FigureCount)*len(w.inputs.List)/2)
	for f := range FigureCount {
		r.Figures[f].Estimate, room = w.inputs.Estimate(w.figures[f], p, room)
	}
}

// listRoutes tells every way to the sizes, and which differ.
func (w *work) listRoutes(r *Result) {
	r.Routes = make([]Route, 0, routeCount*int(sizedCount)/2)
	for of := range sizedCount {
		first := len(r.Routes)
		for route := range routeCount {
			if y := w.routes[of][route]; y.Known() {
				r.Routes = append(r.Routes, Route{routeName(of, route), sizedFigures[of], y.Value, w.inputs.Standard(y), w.weights[of][route]})
			}
		}
		if len(r.Routes)-first < 2 {
			continue
		}
		for _, d := range w.inputs.Disagreements(&w.calculus, w.routes[of][:]) {
			r.Disagreements = append(r.Disagreements, Disagreement{sizedFigures[of], routeName(of, d.A), routeName(of, d.B), d.Ratio})
		}
	}
}

// listStates tells the states of the refrigerant.
func (w *work) listStates(r *Result) {
	r.States = make([]StateAt, 0, placeCount+2)
	for p := range placeCount {
		if w.standing[p] == unread {
			continue
		}
		if p == evaporatorOutlet && w.standing[expansionInlet].known() {
			w.listExpanded(r)
		}
		at := StateAt{Label: placeTable[p].label, Place: placeTable[p].words, Known: w.standing[p].known(), State: w.points[p].state}
		if !at.Known {
			at.State = unknownState(w.points[p].T.Value, w.points[p].p.Value)
		}
		r.States = append(r.States, at)
		if p == discharge && w.compresses {
			r.States = append(r.States, StateAt{"2s", "isentropic end of compression", true, w.ideal})
		}
	}
}

// listExpanded adds what leaves the expansion valve: the pressure in the evaporator with the enthalpy before the valve.
// The pressure drop of the evaporator is not read, and neglected.
func (w *work) listExpanded(r *Result) {
	p := w.points[evaporatorOutlet].p.Value
	s, err := w.evaluator.fluid.PressureEnthalpy(p, w.points[expansionInlet].state.H)
	if err == nil {
		r.States = append(r.States, StateAt{"6", "evaporator inlet", true, s})
	}
}

func unknownState(T, p float64) props.State {
	nan := math.NaN()
	return props.State{
		T: T, P: p, Rho: nan, H: nan, S: nan, U: nan, Quality: nan, Cp: nan, Cv: nan, W: nan, DPDRho: nan, DPDT: nan, Z: nan,
	}
}

// draw repeats the calculation with random inputs.
func (w *work) draw(ctx context.Context, r *Result) error {
	w.deciding = false
	w.calculus.Reset(0)
	trial := func(inputs, results []float64) int {
		w.values = inputs
		w.calculus.Reset(0)
		if f := w.pass(); f != noFailure {
			return int(f)
		}
		for f := range results {
			results[f] = w.figures[f].Value
			if r.Figures[f].Known() && !w.figures[f].Known() {
				return int(outsideModel)
			}
		}
		return 0
	}
	values := w.values
	d := w.evaluator.options.Draws
	p, err := w.inputs.Propagate(ctx, d, int(FigureCount), int(failureCount), trial)
	w.values = values
	if err != nil {
		return err
	}
	r.Draws = &DrawReport{Seed: d.Seed, Draws: p.Draws, Failed: p.Failed, Failures: map[FailureName]int{}, Stable: p.Stable}
	for kind, n := range p.Failures {
		if n > 0 {
			r.Draws.Failures[failureNames[kind]] = n
		}
	}
	for f := range FigureCount {
		if !r.Figures[f].Known() || math.IsNaN(p.Results[f].Mean) {
			continue
		}
		r.Figures[f].Drawn = &p.Results[f]
		if r.Figures[f].Standard > 0 {
			v := uncertainty.Validate(&r.Figures[f].Estimate, &p.Results[f], d.Digits)
			r.Figures[f].Validation = &v
		}
	}
	w.cautionDraws(r)
	return nil
}
