package readings

import (
	"context"
	"math"

	"dewmark/service/readings/uncertainty"
)

// compare holds the features against those of the healthy machine at the same source, sink and speed.
func (w *work) compare(ctx context.Context, r *Result) error {
	m := w.evaluator.installation.Machine
	if m == nil {
		return nil
	}
	expected, err := m.Expect(ctx, w.conditions())
	if cause := context.Cause(ctx); cause != nil {
		return cause
	}
	if err != nil {
		r.Cautions = append(r.Cautions, Caution{
			Code: NoExpectedValues, Field: "machine", Message: message("the given machine has no operating point at these conditions: nothing to compare with"), Cause: err,
		})
		return nil
	}
	measured := w.features()
	k := &Comparison{Cautions: expected.Cautions}
	var residuals []uncertainty.Linear
	var model []float64
	for f := range FeatureCount {
		if !measured[f].Known() || math.IsNaN(expected.Features[f]) {
			continue
		}
		d := w.calculus.Shifted(measured[f], -expected.Features[f])
		u := math.Hypot(w.inputs.Standard(d), expected.Standard[f])
		if !(u > 0) {
			continue
		}
		k.Residuals = append(k.Residuals, Residual{f, measured[f].Value, expected.Features[f], u, d.Value / u})
		if featureTable[f].basic {
			residuals, model = append(residuals, d), append(model, expected.Standard[f])
		}
	}
	k.ChiSquared, k.Degrees = w.inputs.ChiSquared(residuals, model)
	k.Limit = uncertainty.ChiSquaredLimit(k.Degrees, falseAlarms)
	r.Comparison = k
	if k.Deviates() {
		r.Indications = indicate(k, schemeOf(w.evaluator.installation.Expansion))
	}
	return nil
}

// falseAlarms is the share of comparisons of a healthy machine that chance makes look like a fault.
const falseAlarms = 0.05

// conditions collects what the sample says of the surroundings.
func (w *work) conditions() *Conditions {
	s := w.sample
	value := func(r Reading) float64 {
		if !s.has(r) {
			return math.NaN()
		}
		return s.values[r]
	}
	stream := func(of side) StreamConditions {
		row := &sideTable[of]
		in, out, _ := w.ends(of)
		return StreamConditions{
			Stream: *s.stream(of), InletTemperature: in.Value, OutletTemperature: out.Value,
			MassFlow: value(row.massFlow), VolumeFlow: value(row.volumeFlow), InletHumidity: value(row.inletHumidity),
			Pressure: w.evaluator.airPressure(),
		}
	}
	return &Conditions{Source: stream(source), Sink: stream(sink), Speed: value(Speed), Ambient: value(AmbientTemperature)}
}

// features returns what is measured of each feature. The flow by the machine's own map takes no part: it would agree with
// itself.
func (w *work) features() (f [FeatureCount]uncertainty.Linear) {
	c := &w.calculus
	_, sinkOut, sinkChange := w.ends(sink)
	_, sourceOut, sourceChange := w.ends(source)
	f[FeatureEvaporation] = w.figures[FigureEvaporationTemperature]
	f[FeatureLowPressure] = w.points[evaporatorOutlet].p
	f[FeatureSuperheat] = w.figures[FigureSuperheat]
	f[FeatureCondensation] = w.figures[FigureCondensationTemperature]
	f[FeatureHighPressure] = w.points[condenserOutlet].p
	f[FeatureSubcooling] = w.figures[FigureSubcooling]
	f[FeatureDischarge] = w.points[discharge].T
	f[FeaturePressureRatio] = w.figures[FigurePressureRatio]
	f[FeatureCondenserChange], f[FeatureEvaporatorChange] = sinkChange, sourceChange
	f[FeatureCondenserApproach] = c.Difference(f[FeatureCondensation], sinkOut)
	f[FeatureEvaporatorApproach] = c.Difference(sourceOut, f[FeatureEvaporation])
	f[FeatureCapacity] = w.withoutMap(coolingCapacity)
	f[FeaturePower] = w.measured(CompressorPower)
	return f
}

// withoutMap returns a size from its other routes.
func (w *work) withoutMap(of sizing) uncertainty.Linear {
	routes := w.routes[of]
	routes[byMap] = uncertainty.Unknown
	return w.calculus.Weighted(routes[:], w.inputs.Combine(routes[:]).Weights)
}
