package cycle_test

import (
	"testing"

	"dewmark/props"
	"dewmark/service/cycle"
)

// general hides that a refrigerant has one saturation line.
type general struct{ cycle.Refrigerant }

// TestGeneralModel: the saturation lines of a model that promises nothing give the same cycle.
func TestGeneralModel(t *testing.T) {
	r := heatPump(t)
	r.SuctionLine.TemperatureEquivalent, r.LiquidLine.TemperatureEquivalent = 0.5, 0.2
	want := solve(t, r).Performance
	r.Refrigerant = general{r.Refrigerant}
	if got := solve(t, r).Performance; !near(got.COPHeating, want.COPHeating, 1e-11, 0) || !near(got.MassFlow, want.MassFlow, 1e-11, 0) {
		t.Errorf("COP %.14g and flow %.14g, want %.14g and %.14g", got.COPHeating, got.MassFlow, want.COPHeating, want.MassFlow)
	}
}

// zeotrope is an invented refrigerant: R290 whose dew line lies half a glide above its boiling temperature and whose bubble
// line lies half a glide below. Only what a cycle makes of references and glides can be learnt from it.
type zeotrope struct {
	g    *props.Pure
	half float64 // K
}

func (z zeotrope) Designation() string   { return z.g.Designation() }
func (z zeotrope) Critical() props.Point { return z.g.Critical() }

func shifted(s props.State, err error, dT float64) (props.State, error) {
	s.T += dT
	return s, err
}

func (z zeotrope) BubblePoint(T float64) (props.State, error) {
	s, err := z.g.BubblePoint(T + z.half)
	return shifted(s, err, -z.half)
}

func (z zeotrope) DewPoint(T float64) (props.State, error) {
	s, err := z.g.DewPoint(T - z.half)
	return shifted(s, err, z.half)
}

func (z zeotrope) BubblePointAtPressure(p float64) (props.State, error) {
	s, err := z.g.BubblePointAtPressure(p)
	return shifted(s, err, -z.half)
}

func (z zeotrope) DewPointAtPressure(p float64) (props.State, error) {
	s, err := z.g.DewPointAtPressure(p)
	return shifted(s, err, z.half)
}

func (z zeotrope) TemperaturePressure(T, p float64) (props.State, error) {
	return z.g.TemperaturePressure(T, p)
}

func (z zeotrope) PressureQuality(p, x float64) (props.State, error) {
	return z.g.PressureQuality(p, x)
}

func (z zeotrope) PressureEnthalpy(p, h float64) (props.State, error) {
	return z.g.PressureEnthalpy(p, h)
}

func (z zeotrope) PressureEntropy(p, s float64) (props.State, error) {
	return z.g.PressureEntropy(p, s)
}

func TestGlide(t *testing.T) {
	fluid := refrigerant(t, "R290", props.IIR)
	const half = 3.0
	r := heatPump(t)
	r.Refrigerant = zeotrope{fluid, half}
	Te, Tk := *r.Evaporation.Temperature, *r.Condensation.Temperature
	psat := func(T float64) float64 {
		p, err := fluid.SaturationPressure(T)
		if err != nil {
			t.Fatal(err)
		}
		return p
	}
	check := func(name string, pe, pk, suction, liquid float64) {
		t.Helper()
		s := solve(t, r)
		for what, pair := range map[string][2]float64{
			"evaporating pressure": {s.Figures.EvaporatingPressure, pe},
			"condensing pressure":  {s.Figures.HighPressure, pk},
			"suction temperature":  {at(t, s, "7").T, suction},
			"liquid temperature":   {at(t, s, "4").T, liquid},
		} {
			if !near(pair[0], pair[1], 1e-9, 0) {
				t.Errorf("%s: %s is %.12g, want %.12g", name, what, pair[0], pair[1])
			}
		}
	}
	// By dew: superheat counts from the dew line, subcooling from the bubble line a glide below it.
	check("dew", psat(Te-half), psat(Tk-half), Te+5, Tk-2*half-3)
	// By mean: the condenser's mean is R290's boiling temperature. The evaporator's inlet is at that boiling temperature and
	// its dew point half a glide above, so that their mean lies a quarter of the glide above it.
	r.Evaporation.Reference, r.Condensation.Reference = cycle.Mean, cycle.Mean
	check("mean", psat(Te-half/2), psat(Tk), Te+half/2+5, Tk-half-3)
}

// hinted checks that the starts a cycle gives are near what it asks for.
type hinted struct {
	*props.Pure
	t     *testing.T
	calls *int
}

func (h hinted) check(start, answer props.State, err error) (props.State, error) {
	*h.calls++
	if err == nil && !(near(start.T, answer.T, 0.1, 0) && near(start.Rho, answer.Rho, 0.5, 0)) {
		h.t.Errorf("start at %g K and %g kg/m3 for a state at %g K and %g kg/m3", start.T, start.Rho, answer.T, answer.Rho)
	}
	return answer, err
}

func (h hinted) PressureEnthalpyNear(p, v float64, start props.State) (props.State, error) {
	s, err := h.PressureEnthalpy(p, v)
	return h.check(start, s, err)
}

func (h hinted) PressureEntropyNear(p, v float64, start props.State) (props.State, error) {
	s, err := h.PressureEntropy(p, v)
	return h.check(start, s, err)
}

// TestStartsNearby: a model that takes starts gets good ones, and nothing else changes.
func TestStartsNearby(t *testing.T) {
	for _, k := range optima {
		r := heatPump(t)
		k.change(t, r)
		want := solve(t, r).Performance.COPHeating
		calls := 0
		r.Refrigerant = hinted{r.Refrigerant.(*props.Pure), t, &calls}
		if got := solve(t, r).Performance.COPHeating; !near(got, want, 1e-12, 0) || calls == 0 {
			t.Errorf("%s: COP %.15g after %d calls with a start, %.15g without", k.name, got, calls, want)
		}
	}
}
