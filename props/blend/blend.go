package blend

import (
	"fmt"
	"math"
	"slices"
	"sync"

	"dewmark/props/data"
)

// StandardAtmosphere is the pressure of normal bubble and dew points in Pa.
const StandardAtmosphere = 101325.0

// Blend computes the states of one blend, with enthalpy and entropy counted from one datum. It is immutable, cheap to copy
// and safe for concurrent use.
type Blend struct {
	*mixture
	d           *dome
	limits      Limits // per mole
	datum       Datum
	h0, s0      float64 // added to the model's own h and s, J/kg and J/(kg K)
	extrapolate bool
}

// mixture is what all views of a blend share.
type mixture struct {
	model       *model
	whole       *whole
	z, w        []float64 // mole and mass fractions
	designation string
	listed      *data.Blend // nil for a free composition

	build   sync.Once
	made    *dome
	failure error
	solvers sync.Pool
}

func newMixture(m *model, z []float64, name string) (*mixture, error) {
	w, err := newWhole(m, z)
	if err != nil {
		return nil, err
	}
	x := &mixture{model: m, whole: w, z: z, w: massFractions(z, m.M), designation: name}
	x.solvers.New = func() any { return newSolver(x) }
	return x, nil
}

// dome returns the phase envelope, which is made on first use.
func (m *mixture) dome() (*dome, error) {
	m.build.Do(func() {
		s := newSolver(m)
		m.made, m.failure = s.newDome(componentLimits(m.model, m.z, m.whole.T).TemperatureMin)
	})
	return m.made, m.failure
}

// solver returns a solver of this view; release gives it back.
func (b *Blend) solver() *solver {
	s := b.solvers.Get().(*solver)
	s.b, s.d, s.reach = b, b.d, b.limits
	if b.extrapolate {
		s.reach = b.limits.Extrapolated()
	}
	return s
}

func (b *Blend) release(s *solver) { b.solvers.Put(s) }

// Designation returns the ISO 817 designation, or components and fractions of a free composition.
func (m *mixture) Designation() string { return m.designation }

// Listed returns the entry of a listed blend, or nil for a free composition. The caller must not modify it.
func (m *mixture) Listed() *data.Blend { return m.listed }

// MolarMass returns the molar mass in kg/mol.
func (m *mixture) MolarMass() float64 { return m.whole.M }

// Components returns the designations of the components in the order of all compositions.
func (m *mixture) Components() []string {
	ids := make([]string, len(m.model.records))
	for i, r := range m.model.records {
		ids[i] = r.ID
	}
	return ids
}

// MassFractions returns the overall composition by mass. The caller must not modify it.
func (m *mixture) MassFractions() []float64 { return m.w }

// MoleFractions returns the overall composition by mole. The caller must not modify it.
func (m *mixture) MoleFractions() []float64 { return m.z }

// Pairs returns on what the model of every pair of components rests.
func (m *mixture) Pairs() []Pair { return m.model.basis }

// Cautions returns the reservations about every answer of the blend: pairs without published parameters.
func (m *mixture) Cautions() []Caution { return pairCautions(m.model.basis) }

// Datum returns the datum that is in force, never DefaultDatum.
func (b *Blend) Datum() Datum { return b.datum }

// Extrapolate returns a view that also answers above the temperature, pressure and density limits: to 1.5 times the highest
// temperature, 2 times the highest pressure and 1.15 times the highest density. [Blend.Extrapolated] tells which answers
// are extrapolations.
func (b *Blend) Extrapolate() *Blend {
	view := *b
	view.extrapolate = true
	return &view
}

// Extrapolated reports whether st lies outside the limits of the blend.
func (b *Blend) Extrapolated(st State) bool {
	if st.Phase == TwoPhase {
		return false
	}
	plain := *b
	plain.extrapolate = false
	s := plain.solver()
	defer b.release(s)
	return s.check(&point{T: st.T, p: st.P, rho: st.Rho / b.whole.M}) != nil
}

// Limits returns the range in which the blend is computed. It follows from the validity of the components.
func (b *Blend) Limits() Limits {
	l := b.limits
	l.DensityMax *= b.whole.M
	return l
}

// Critical returns the critical point of the mixture model.
func (b *Blend) Critical() Point { return b.point(b.d.critical) }

// Cricondentherm returns the point of the envelope with the highest temperature.
func (b *Blend) Cricondentherm() Point { return b.point(b.d.topT) }

// Cricondenbar returns the point of the envelope with the highest pressure.
func (b *Blend) Cricondenbar() Point { return b.point(b.d.topP) }

func (b *Blend) point(e edgePoint) Point { return Point{T: e.T, P: e.p, Rho: e.rho * b.whole.M} }

// Envelope returns saturated states along the whole phase envelope, in order from the cold end of the bubble line, closely
// past the critical point, to the cold end of the dew line. It returns at least n states, and a [*ConvergenceError] when
// one of them can not be solved.
func (b *Blend) Envelope(n int) ([]State, error) {
	s := b.solver()
	defer b.release(s)
	half := max(n/2+1, 8)
	var out []State
	for _, end := range []float64{b.d.min[dense].S, b.d.min[light].S} {
		var branch []State
		for i := range half {
			// Closer steps towards the critical point, where pictures of the envelope bend most.
			r := float64(i+1) / float64(half)
			a, ok := s.saturatedAtSpread(end * r * r)
			if !ok {
				return nil, s.stuck(constraint{Temperature, a.T}, constraint{Pressure, a.p})
			}
			r0 := a.result()
			branch = append(branch, b.state(&r0))
		}
		if end < 0 {
			slices.Reverse(branch)
		}
		out = append(out, branch...)
	}
	return out, nil
}

// SaturationLimits returns the lowest temperature of the bubble and the dew line in K, and their pressures there in Pa.
func (b *Blend) SaturationLimits() (T, bubble, dew float64) {
	return b.d.min[dense].T, b.d.min[dense].p, b.d.min[light].p
}

// ExpansionBounds returns the largest deviations of the expansions of the bubble and the dew line from the equilibrium
// solver, measured between the nodes when they were made: of pressure, density of the bulk, density of the incipient
// phase, all relative, and of the mole fractions of the incipient phase.
func (b *Blend) ExpansionBounds() (bubble, dew [4]float64) {
	bounds := func(l *line) [4]float64 {
		out := [4]float64{l.worst[lineLnP], l.worst[lineLnRho], l.worst[lineLnRhoInc], 0}
		for _, v := range l.worst[fieldsOfLine : fieldsOfLine+l.n] {
			out[3] = math.Max(out[3], v)
		}
		return out
	}
	return bounds(b.d.lines[dense]), bounds(b.d.lines[light])
}

// ExpansionLimits returns the highest temperatures of the expansions of the bubble and the dew line in K. Closer to the
// critical point the lines are solved.
func (b *Blend) ExpansionLimits() (bubble, dew float64) {
	return b.d.lines[dense].hi.T, b.d.lines[light].hi.T
}

// BubblePressure returns the bubble-point pressure in Pa at temperature T in K. It returns a [*RangeError] unless T lies on
// the bubble line. Where two bubble points have that temperature, it returns the one of lower density.
func (b *Blend) BubblePressure(T float64) (float64, error) {
	s, err := b.BubblePoint(T)
	return s.P, err
}

// DewPressure returns the dew-point pressure in Pa at temperature T in K, like [Blend.DewPoint].
func (b *Blend) DewPressure(T float64) (float64, error) {
	s, err := b.DewPoint(T)
	return s.P, err
}

// BubbleTemperature returns the bubble-point temperature in K at pressure p in Pa, like [Blend.BubblePointAtPressure].
func (b *Blend) BubbleTemperature(p float64) (float64, error) {
	s, err := b.BubblePointAtPressure(p)
	return s.T, err
}

// DewTemperature returns the dew-point temperature in K at pressure p in Pa, like [Blend.DewPointAtPressure].
func (b *Blend) DewTemperature(p float64) (float64, error) {
	s, err := b.DewPointAtPressure(p)
	return s.T, err
}

// NormalPoints returns the bubble and dew temperatures at 101.325 kPa in K, NaN where there is none.
func (b *Blend) NormalPoints() (bubble, dew float64) {
	bubble, err := b.BubbleTemperature(StandardAtmosphere)
	if err != nil {
		bubble = math.NaN()
	}
	dew, err = b.DewTemperature(StandardAtmosphere)
	if err != nil {
		dew = math.NaN()
	}
	return bubble, dew
}

// Residuals returns the normal bubble and dew temperature of the model less the published ones in K, and reports whether
// there are any: free compositions have none.
func (b *Blend) Residuals() (bubble, dew float64, ok bool) {
	if b.listed == nil {
		return 0, 0, false
	}
	bubble, dew = b.NormalPoints()
	return bubble - b.listed.Published.Bubble, dew - b.listed.Published.Dew, true
}

// Glide returns the difference of dew and bubble temperature at pressure p in Pa, in K.
func (b *Blend) Glide(p float64) (float64, error) {
	bubble, err := b.BubbleTemperature(p)
	if err != nil {
		return 0, err
	}
	dew, err := b.DewTemperature(p)
	return dew - bubble, err
}

// ResidualEntropy returns the entropy less that of the ideal gas of the same temperature, density and composition, over the
// gas constant, at T in K and rho in kg/m3 for a single phase of the blend. It is what entropy scaling of transport
// properties counts in.
func (b *Blend) ResidualEntropy(T, rho float64) float64 {
	s := b.solver()
	defer b.release(s)
	s.iso.set(T)
	a := s.iso.residual(rho / b.whole.M)
	return a.T - a.A
}

// FugacityCoefficients returns f_i/(x_i p) of every component, in the order of [Blend.Components], in a single phase of the
// blend at T in K and rho in kg/m3. It returns a [*RangeError] outside the limits, also where the pressure is not positive.
func (b *Blend) FugacityCoefficients(T, rho float64) ([]float64, error) {
	s := b.solver()
	defer b.release(s)
	if err := s.checkTemperature(T); err != nil {
		return nil, err
	}
	if err := s.checkVolume(b.whole.M / rho); err != nil {
		return nil, err
	}
	ph := s.bulk
	ph.T, ph.rho = T, rho/b.whole.M
	copy(ph.x, b.z)
	s.k.evaluate(ph, false)
	if !(ph.p > 0) {
		return nil, s.outOfRange(Pressure, ph.p, 0, s.reach.PressureMax, LimitPhysical)
	}
	out := make([]float64, len(ph.x))
	for i, l := range ph.lnF {
		out[i] = math.Exp(l) / (ph.x[i] * ph.p)
	}
	return out, nil
}

// outward turns a molar quantity of the model into the unit and datum of the view; Density stands for the molar volume.
func (b *Blend) outward(p Property, v float64) float64 {
	switch p {
	case Density:
		return b.whole.M / v
	case Enthalpy, InternalEnergy:
		return v/b.whole.M + b.h0
	case Entropy:
		return v/b.whole.M + b.s0
	}
	return v
}

// inward is the reverse of outward.
func (b *Blend) inward(p Property, v float64) float64 {
	switch p {
	case Density:
		return b.whole.M / v
	case Enthalpy, InternalEnergy:
		return (v - b.h0) * b.whole.M
	case Entropy:
		return (v - b.s0) * b.whole.M
	}
	return v
}

// state turns a result into a state of the view.
func (b *Blend) state(r *result) State {
	M := b.whole.M
	st := State{
		T: r.T, P: r.p, Rho: r.rho * M, H: r.h/M + b.h0, S: r.s/M + b.s0, Quality: r.quality,
		Cp: r.cp / M, Cv: r.cv / M, W: r.w, DPDRho: r.dpdrho / M, DPDT: r.dpdT, Z: r.p / (r.rho * b.whole.R * r.T),
	}
	st.U = st.H - st.P/st.Rho
	switch {
	case r.split != nil:
		nan := math.NaN()
		st.Phase = TwoPhase
		st.Cp, st.Cv, st.W, st.DPDRho = nan, nan, nan, nan
		st.LiquidComposition, st.VapourComposition = massFractions(r.split.x, b.model.M), massFractions(r.split.y, b.model.M)
	case r.edge != nil && r.quality == 0:
		st.Phase = Liquid
		st.LiquidComposition, st.VapourComposition = b.w, massFractions(r.edge.x, b.model.M)
	case r.edge != nil:
		st.Phase = Vapour
		st.LiquidComposition, st.VapourComposition = massFractions(r.edge.x, b.model.M), b.w
	default:
		st.Phase = b.phase(&r.point)
	}
	return st
}

func (b *Blend) phase(q *point) Phase {
	c := &b.d.critical
	switch {
	case q.T <= c.T && q.rho > c.rho:
		return Liquid
	case q.T > c.T && q.p > c.p:
		return Supercritical
	}
	return Vapour
}

// Warm makes the phase envelope and the expansions of its lines, which otherwise happens at the first question.
func (m *mixture) Warm() error {
	_, err := m.dome()
	return err
}

// Describe returns the composition as text, such as "R32/R1234yf (68.9/31.1 % by mass)".
func (m *mixture) Describe() string {
	var ids, shares string
	for i, r := range m.model.records {
		if i > 0 {
			ids, shares = ids+"/", shares+"/"
		}
		ids += r.ID
		shares += fmt.Sprintf("%.5g", 100*m.w[i])
	}
	return ids + " (" + shares + " % by mass)"
}
