package blend

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"
)

// fugacities returns ln(f_i) of a phase, evaluated afresh.
func fugacities(b *Blend, T, rho float64, x []float64) []float64 {
	k, ph := newKernel(b.model), newPhase(len(x))
	ph.T, ph.rho = T, rho
	copy(ph.x, x)
	k.evaluate(ph, false)
	return ph.lnF
}

// Fugacities of all components are equal in both phases to 1e-9 relative, in splits from every kind of flash, on solved
// edges and on those from the expansions.
func TestEqualFugacities(t *testing.T) {
	l := testLibrary(t)
	rng := rand.New(rand.NewPCG(3, 4))
	perBlend := 20
	if testing.Short() {
		perBlend = 4
	}
	for _, listed := range l.Listed() {
		b, err := l.Blend(listed.Designation, DefaultDatum)
		if err != nil {
			t.Fatal(err)
		}
		s := b.solver()
		worst := 0.0
		check := func(what string, T, rhoL, rhoV float64, x, y []float64) {
			fl, fv := fugacities(b, T, rhoL, x), fugacities(b, T, rhoV, y)
			for i := range fl {
				d := math.Abs(fl[i] - fv[i])
				worst = math.Max(worst, d)
				if !(d <= 1e-9) {
					t.Errorf("%s, %s at %g K: component %d has ln(f) %.14g and %.14g", listed.Designation, what, T, i, fl[i], fv[i])
				}
			}
		}
		for range perBlend {
			T := 213.15 + (b.d.critical.T*0.999-213.15)*rng.Float64()
			q := rng.Float64()
			all, err := s.quality(Temperature, T, q)
			if err != nil {
				t.Errorf("%s at %g K, quality %g: %v", listed.Designation, T, q, err)
				continue
			}
			o := all[0].split
			check("T-q", T, o.rhoL, o.rhoV, o.x, o.y)
			for _, of := range []Property{Enthalpy, Entropy, InternalEnergy, Density} {
				r, err := s.isobar(o.p, of, all[0].value(of))
				if err != nil || r.split == nil {
					t.Errorf("%s at %g Pa: %s %g gives %v", listed.Designation, o.p, of, all[0].value(of), err)
					continue
				}
				check(of.String(), r.T, r.split.rhoL, r.split.rhoV, r.split.x, r.split.y)
			}
			for sd := range 2 {
				a, ok := s.edgeAtT(T, side(sd))
				if !ok {
					t.Errorf("%s at %g K: no edge", listed.Designation, T)
					continue
				}
				check("edge", T, a.bulk.rho, a.rhoInc, b.z, a.x)
			}
		}
		t.Logf("%s: within %.1e", listed.Designation, worst)
	}
}

// The critical point, found from the matrix of second derivatives, is where the envelope itself crosses zero spread.
func TestCriticalPointOnEnvelope(t *testing.T) {
	l := testLibrary(t)
	for _, listed := range l.Listed() {
		b, err := l.Blend(listed.Designation, DefaultDatum)
		if err != nil {
			t.Fatal(err)
		}
		// The cubic through the nodes at both ends of the gap does not know the critical point.
		at := slices.IndexFunc(b.d.nodes, func(n node) bool { return n.S > 0 })
		cubic := node{v: make([]float64, len(b.z)+3)}
		hermite(&b.d.nodes[at-1], &b.d.nodes[at], 0, cubic.v)
		p, c := cubic.point(), b.d.critical
		if !(math.Abs(p.T/c.T-1) < 2e-7 && math.Abs(p.p/c.p-1) < 2e-6 && math.Abs(p.rho/c.rho-1) < 1e-4) {
			t.Errorf("%s: envelope crosses at %v, critical point %v", listed.Designation, p, c)
		}
	}
}
