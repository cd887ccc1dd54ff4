package props

import (
	"math"
	"sort"
)

// starts is a coarse table of states above the critical pressure, from which solvers begin: there is no dome to begin
// from, and Newton's method needs to be brought to the right side of the ridge of the heat capacity. The table decides
// how long a solution takes, never what it is.
type starts []isobarStarts

// isobarStarts holds states of one pressure in order of temperature. Caloric properties are those of the equation itself.
type isobarStarts struct {
	lnP               float64
	T, lnRho, h, s, u []float64
}

// makeStarts fills the table with the view that counts from the equation's own datum.
func makeStarts(r *Pure) starts {
	var out starts
	tc, pc := r.curve.TCritical, r.curve.PCritical
	for _, x := range []float64{1, 1.1, 1.25, 1.5, 2, 3, 5, 10, 30, 100} {
		p := x * pc
		if p > r.limits.PressureMax {
			break
		}
		at := isobarStarts{lnP: math.Log(p)}
		for _, y := range []float64{0.3, 0.4, 0.5, 0.6, 0.7, 0.78, 0.85, 0.9, 0.94, 0.97, 0.99, 1.005, 1.02, 1.04, 1.07, 1.12, 1.2, 1.3, 1.5, 1.8, 2.5, 4} {
			T := y * tc
			if T < r.limits.TemperatureMin || T > r.limits.TemperatureMax {
				continue
			}
			f, err := r.singlePhase(T, p, AnyPhase)
			if err != nil {
				continue // solid
			}
			at.T = append(at.T, T)
			at.lnRho = append(at.lnRho, math.Log(f.rho))
			at.h, at.s, at.u = append(at.h, f.h), append(at.s, f.s), append(at.u, f.u)
		}
		if len(at.T) > 1 {
			out = append(out, at)
		}
	}
	return out
}

// near returns an estimate of the state at pressure p above the critical one with property y equal to v, which counts
// from the equation's own datum.
func (t starts) near(p float64, y Property, v float64) (T, rho float64, ok bool) {
	if len(t) == 0 {
		return 0, 0, false
	}
	lnP := math.Log(p)
	i := sort.Search(len(t), func(i int) bool { return t[i].lnP >= lnP })
	i = min(max(i, 1), len(t)-1)
	if len(t) == 1 {
		T, lnRho := t[0].at(y, v)
		return T, math.Exp(lnRho), true
	}
	a, b := &t[i-1], &t[i]
	w := math.Min(math.Max((lnP-a.lnP)/(b.lnP-a.lnP), 0), 1)
	Ta, ra := a.at(y, v)
	Tb, rb := b.at(y, v)
	return Ta + w*(Tb-Ta), math.Exp(ra + w*(rb-ra)), true
}

// at interpolates temperature and the logarithm of density in a caloric property.
func (s *isobarStarts) at(y Property, v float64) (T, lnRho float64) {
	values := s.h
	switch y {
	case Entropy:
		values = s.s
	case InternalEnergy:
		values = s.u
	}
	i := min(max(sort.SearchFloat64s(values, v), 1), len(values)-1)
	w := math.Min(math.Max((v-values[i-1])/(values[i]-values[i-1]), -0.5), 1.5)
	return s.T[i-1] + w*(s.T[i]-s.T[i-1]), s.lnRho[i-1] + w*(s.lnRho[i]-s.lnRho[i-1])
}
