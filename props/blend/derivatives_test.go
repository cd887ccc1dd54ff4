package blend

import (
	"math"
	"sync"
	"testing"

	"dewmark/props/data"
)

var loaded = sync.OnceValues(func() (*Library, error) {
	records, err := data.Load()
	if err != nil {
		return nil, err
	}
	return NewLibrary(records)
})

func testLibrary(t testing.TB) *Library {
	t.Helper()
	l, err := loaded()
	if err != nil {
		t.Fatal(err)
	}
	return l
}

// Every analytic derivative of a phase against the central difference of its primitive, on liquid-like and vapour-like
// states of blends that have every kind of term: both reducing functions, departure functions that pairs share, and the
// non-analytic terms of R744.
func TestPhaseDerivatives(t *testing.T) {
	l := testLibrary(t)
	for _, name := range []string{"R404A", "R448A", "R441A", "R455A", "R515B", "R466A"} {
		b, err := l.Blend(name, DefaultDatum)
		if err != nil {
			t.Fatal(err)
		}
		m := b.mixture
		n := len(m.z)
		k := newKernel(m.model)
		for _, at := range []struct{ tau, delta float64 }{{1.4, 2.7}, {1.1, 0.1}, {0.9, 1.3}} {
			T := m.whole.T / at.tau
			c := make([]float64, n)
			for i := range c {
				c[i] = at.delta * m.whole.Rho * m.z[i] * (1 + 0.1*float64(i))
			}
			eval := func(T float64, c []float64) *phase {
				ph := newPhase(n)
				ph.T = T
				lnC := make([]float64, n)
				for i := range c {
					lnC[i] = math.Log(c[i])
				}
				ph.setConcentrations(lnC)
				k.evaluate(ph, true)
				return ph
			}
			ph := eval(T, c)
			// The step balances truncation and rounding of a central difference with five points.
			const step = 1e-3
			difference := func(f func(e float64) float64) float64 {
				return (8*(f(step)-f(-step)) - (f(2*step) - f(-2*step))) / (12 * step)
			}
			inT := func(get func(*phase) float64) float64 {
				return difference(func(e float64) float64 { return get(eval(T*math.Exp(e), c)) })
			}
			inC := func(j int, get func(*phase) float64) float64 {
				return difference(func(e float64) float64 {
					d := append([]float64(nil), c...)
					d[j] *= math.Exp(e)
					return get(eval(T, d))
				})
			}
			check := func(what string, got, want, scale float64) {
				t.Helper()
				if !(math.Abs(got-want) <= 2e-9*scale) {
					t.Errorf("%s tau %g delta %g: %s = %.12g, difference quotient %.12g", name, at.tau, at.delta, what, got, want)
				}
			}
			rrt := m.whole.R * ph.rho * T
			check("p_T", ph.pT, inT(func(q *phase) float64 { return q.p }), rrt*10)
			check("u_T", ph.uT, inT(func(q *phase) float64 { return q.u }), rrt*10)
			check("s_T", ph.sT, inT(func(q *phase) float64 { return q.s }), rrt/T*10)
			for i := range n {
				check("p_C", ph.pC[i], inC(i, func(q *phase) float64 { return q.p }), rrt*10)
				check("u_C", ph.uC[i], inC(i, func(q *phase) float64 { return q.u }), rrt*10)
				check("s_C", ph.sC[i], inC(i, func(q *phase) float64 { return q.s }), rrt/T*10)
				check("lnF_T", ph.lnFT[i], inT(func(q *phase) float64 { return q.lnF[i] }), 10)
				for j := range n {
					check("lnF_C", ph.lnFC[i*n+j], inC(j, func(q *phase) float64 { return q.lnF[i] }), 10)
				}
			}
			// Gibbs-Duhem at constant temperature: dp = sum c_i R_i T dln(f_i).
			for j := range n {
				var sum float64
				for i := range n {
					sum += ph.x[i] * ph.rho * m.model.R[i] * T * ph.lnFC[i*n+j]
				}
				check("Gibbs-Duhem", sum, ph.pC[j], rrt*1e-3)
			}
		}
	}
}

// The merged equation is the mixture model at fixed composition.
func TestWholeEqualsModel(t *testing.T) {
	l := testLibrary(t)
	for _, listed := range l.Listed() {
		b, err := l.Blend(listed.Designation, DefaultDatum)
		if err != nil {
			t.Fatal(err)
		}
		m := b.mixture
		n := len(m.z)
		k := newKernel(m.model)
		ph := newPhase(n)
		s := newIsotherm(m.whole)
		t.Logf("%s: %d equations", listed.Designation, len(m.whole.parts))
		for _, at := range []struct{ tau, delta float64 }{{1.6, 2.9}, {1.1, 0.1}, {0.9, 1.3}, {0.8, 1e-6}} {
			ph.T, ph.rho = m.whole.T/at.tau, at.delta*m.whole.Rho
			copy(ph.x, m.z)
			k.evaluate(ph, true)
			s.set(ph.T)
			q := s.at(ph.rho)
			var dpdlnRho, cvv float64
			for i := range n {
				dpdlnRho += ph.pC[i]
			}
			cvv = ph.uT / ph.T / ph.rho
			for what, v := range map[string][3]float64{ // merged, model, scale
				"p":      {q.p, ph.p, ph.rho * m.whole.R * ph.T},
				"u":      {q.u(), ph.u / ph.rho, m.whole.R * ph.T * 100},
				"s":      {q.s, ph.s / ph.rho, m.whole.R * 100},
				"cv":     {q.cv, cvv, m.whole.R},
				"dp/dT":  {q.dpdT, ph.pT / ph.T, ph.rho * m.whole.R},
				"dp/rho": {q.dpdrho, dpdlnRho / ph.rho, m.whole.R * ph.T},
			} {
				if !(math.Abs(v[0]-v[1]) <= 1e-11*v[2]) {
					t.Errorf("%s tau %g delta %g: %s of the merged equation %.14g, of the model %.14g", listed.Designation, at.tau, at.delta, what, v[0], v[1])
				}
			}
		}
	}
}
