package blend

import (
	"dewmark/props/helmholtz"
)

// Helmholtz returns the reduced derivatives of the ideal and the residual part of a single phase of the blend at T in K
// and rho in kg/m3, at constant composition, and the gas constant in J/(mol K). Only TT of the ideal part is set.
func (b *Blend) Helmholtz(T, rho float64) (ideal, residual helmholtz.Alpha, R float64) {
	s := b.solver()
	defer b.release(s)
	s.iso.set(T)
	for i := range s.iso.parts {
		ideal.TT += s.iso.parts[i].Ideal.TT
	}
	return ideal, s.iso.residual(rho / b.whole.M), b.whole.R
}

// PhaseOf is one of two phases in equilibrium.
type PhaseOf struct {
	Rho float64   // mol/m3
	X   []float64 // mole fractions
}

// Phases returns both phases of a state of the blend inside the dome or at its edge. It reports false so near to the
// critical point that they cannot be told apart.
func (b *Blend) Phases(st State) (liquid, vapour PhaseOf, ok bool) {
	s := b.solver()
	defer b.release(s)
	of := func(w []float64, solve func(*phase, float64) bool) (PhaseOf, bool) {
		ph := newPhase(len(w))
		ph.T = st.T
		total := 0.0
		for i := range w {
			ph.x[i] = w[i] / b.model.M[i]
			total += ph.x[i]
		}
		for i := range ph.x {
			ph.x[i] /= total
		}
		found := solve(ph, st.P)
		return PhaseOf{Rho: ph.rho, X: ph.x}, found
	}
	liquid, dense := of(st.LiquidComposition, s.k.liquidDensity)
	vapour, thin := of(st.VapourComposition, s.k.vapourDensity)
	return liquid, vapour, dense && thin
}
