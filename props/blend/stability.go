package blend

import "math"

// Stability is the outcome of the tangent-plane test of Michelsen, Fluid Phase Equilibria 9 (1982) 1,
// doi:10.1016/0378-3812(82)85001-2: the stationary point of the tangent-plane distance that lies lowest.
type Stability struct {
	// Distance is the tangent-plane distance over R T. A phase is stable when none is negative; zero is a phase in
	// equilibrium with the one that was tested, or that phase itself.
	Distance float64
	// Trial is the composition of the trial phase by mass, in the order of the components.
	Trial []float64
	// TrialDensity is its density in kg/m3.
	TrialDensity float64
}

const (
	stabilityIterations = 300
	trivialDistance     = 1e-4 // of ln(w_i/z_i) and ln(rho): the trial phase is the tested phase itself
	unstable            = 1e-6 // how far below zero a distance is more than rounding
	manyPlaces          = 9    // where a mixture that nobody has tested before is tested along its envelope
)

// Stability tests a single phase of the blend at T in K and rho in kg/m3 against splitting, with trial phases that start
// from a vapour, from a liquid and from every component.
func (b *Blend) Stability(T, rho float64) (Stability, error) {
	s := b.solver()
	defer b.release(s)
	if err := s.checkTemperature(T); err != nil {
		return Stability{}, err
	}
	if err := s.checkVolume(b.whole.M / rho); err != nil {
		return Stability{}, err
	}
	s.iso.set(T)
	p, _ := s.iso.pressure(rho / b.whole.M)
	if !(p > 0) {
		return Stability{}, s.outOfRange(Pressure, p, 0, s.reach.PressureMax, LimitPhysical)
	}
	d, x, density := s.tangentPlane(T, p, rho/b.whole.M)
	return Stability{Distance: d, Trial: massFractions(x, b.model.M), TrialDensity: density * mean(x, b.model.M)}, nil
}

// tangentPlane returns the lowest stationary tangent-plane distance of a phase of overall composition at temperature T,
// pressure p and density rho in mol/m3, with the trial phase.
func (s *solver) tangentPlane(T, p, rho float64) (distance float64, x []float64, density float64) {
	n, z := len(s.m.z), s.m.z
	feed, trial := s.bulk, s.inc
	feed.T, feed.rho, trial.T = T, rho, T
	copy(feed.x, z)
	s.k.evaluate(feed, false)
	x, density = append([]float64(nil), z...), rho

	lnW := make([]float64, n)
	attempt := func() {
		for i := 0; ; i++ {
			if i == stabilityIterations {
				return // no stationary point
			}
			var sum float64
			for i := range lnW {
				sum += math.Exp(lnW[i])
			}
			for i := range lnW {
				trial.x[i] = math.Max(math.Exp(lnW[i])/sum, 1e-300)
			}
			if !s.trialDensity(trial, p) {
				return
			}
			s.k.evaluate(trial, false)
			change, same := 0.0, math.Abs(math.Log(trial.rho/rho))
			for i := range lnW {
				next := feed.lnF[i] - trial.lnF[i] + math.Log(trial.x[i])
				change = math.Max(change, math.Abs(next-lnW[i]))
				same = math.Max(same, math.Abs(math.Log(trial.x[i]/z[i])))
				lnW[i] = next
			}
			if same < trivialDistance {
				return
			}
			if change < 1e-9 {
				break
			}
		}
		var sum float64
		for i := range lnW {
			sum += math.Exp(lnW[i])
		}
		if d := -math.Log(sum); d < distance {
			distance, density = d, trial.rho
			copy(x, trial.x)
		}
	}
	for i := range lnW {
		lnW[i] = math.Log(z[i]) + s.m.model.wilson(i, T) - math.Log(p)
	}
	attempt()
	for i := range lnW {
		lnW[i] = math.Log(z[i]) - s.m.model.wilson(i, T) + math.Log(p)
	}
	attempt()
	for pure := range n {
		for i := range lnW {
			lnW[i] = math.Log(0.05 / float64(n))
		}
		lnW[pure] = math.Log(0.95)
		attempt()
	}
	return distance, x, density
}

// trialDensity sets the density of a trial phase at pressure p: the root of lower Gibbs energy where there are two.
func (s *solver) trialDensity(ph *phase, p float64) bool {
	gibbs := func() float64 {
		s.k.evaluate(ph, false)
		return mean(ph.x, ph.lnF)
	}
	haveLiquid := s.k.liquidDensity(ph, p)
	liquid, liquidGibbs := ph.rho, math.Inf(1)
	if haveLiquid {
		liquidGibbs = gibbs()
	}
	if haveVapour := s.k.vapourDensity(ph, p); haveVapour {
		if math.Abs(ph.rho/liquid-1) < 1e-6 && haveLiquid {
			return true
		}
		if v := gibbs(); v < liquidGibbs || !haveLiquid {
			return true
		}
	} else if !haveLiquid {
		return false
	}
	ph.rho = liquid
	return true
}

// stableFrom returns the lowest temperature, not below Tmin, from which on the envelope is stable: where the saturated bulk
// does not split into anything but the incipient phase that it is in equilibrium with. In a cold liquid the model may have
// a second one. It tests the given number of places between Tmin and the critical point.
func (s *solver) stableFrom(Tmin float64, places int) (float64, error) {
	splits := func(T float64) bool {
		for _, sd := range []side{dense, light} {
			a, ok := s.saturatedAtT(T, sd)
			if !ok {
				return true
			}
			if distance, _, _ := s.tangentPlane(T, a.p, a.bulk.rho); distance < -unstable {
				return true
			}
		}
		return false
	}
	place := func(i int) float64 { return Tmin + 0.95*(s.d.critical.T-Tmin)*float64(i)/float64(max(places-1, 1)) }
	for i := places - 1; i >= 0; i-- {
		if !splits(place(i)) {
			continue
		}
		if places == 1 {
			return s.stableFrom(Tmin, manyPlaces)
		}
		if i == places-1 {
			return 0, &EnvelopeError{Refrigerant: s.m.designation, T: place(i), Reason: "the model has a second liquid there"}
		}
		lo, hi := place(i), place(i+1)
		for hi-lo > 0.1 {
			if T := (lo + hi) / 2; splits(T) {
				lo = T
			} else {
				hi = T
			}
		}
		return math.Ceil(hi), nil
	}
	return Tmin, nil
}
