package blend

import (
	"math"

	"dewmark/props/helmholtz"
)

// phase is a homogeneous phase with everything that Newton's method needs of it. Derivatives are logarithmic and taken in
// temperature and the concentrations c_j = x_j rho: a field ending in T is T d/dT at constant concentrations, one ending
// in C is c_j d/dc_j at constant temperature. Matrices go row by row.
//
// The ideal part of component i carries the gas constant of that component and the residual part the mean of all. So the
// model turns into the pure equation when one component remains, and equilibrium does not depend on the zero points of
// enthalpy and entropy.
type phase struct {
	T, rho float64   // K, mol/m3
	x      []float64 // mole fractions

	p, pT float64   // Pa
	pC    []float64 // Pa

	lnF, lnFT []float64 // fugacity as ln(f_i/Pa)
	lnFC      []float64 // row i: c_j dln(f_i)/dc_j

	// Per volume, only set by caloric evaluation.
	u, uT  float64   // J/m3
	s, sT  float64   // J/(m3 K)
	uC, sC []float64 // J/m3, J/(m3 K)
}

func newPhase(n int) *phase {
	v := make([]float64, 6*n+n*n)
	cut := func(k int) []float64 { c := v[:k:k]; v = v[k:]; return c }
	return &phase{x: cut(n), pC: cut(n), lnF: cut(n), lnFT: cut(n), uC: cut(n), sC: cut(n), lnFC: cut(n * n)}
}

// setConcentrations takes mole fractions and density from the logarithms of concentrations.
func (ph *phase) setConcentrations(lnC []float64) {
	ph.rho = 0
	for i, l := range lnC {
		ph.x[i] = math.Exp(l)
		ph.rho += ph.x[i]
	}
	for i := range ph.x {
		ph.x[i] /= ph.rho
	}
}

// kernel evaluates the model for phases of any composition. It holds the scratch space and serves one goroutine.
type kernel struct {
	m     *model
	red   *reduction
	iso   []helmholtz.Isotherm // components, then departure functions
	ideal helmholtz.Isotherm

	a              []helmholtz.Alpha // of the components
	first          []helmholtz.Alpha // sum_j x_j D_kj over the departure functions: A, T and D
	cross          []float64         // D_kl
	alphaC, alphaT []float64         // rho dalpha/dc_k and its tau d/dtau
	exT, exD       []float64
	idealA, idealT []float64
	ex             []float64
}

func newKernel(m *model) *kernel {
	n := len(m.R)
	k := &kernel{
		m: m, red: newReduction(n), iso: make([]helmholtz.Isotherm, n+len(m.departures)),
		a: make([]helmholtz.Alpha, n), first: make([]helmholtz.Alpha, n), cross: make([]float64, n*n),
	}
	v := make([]float64, 7*n)
	cut := func() []float64 { c := v[:n:n]; v = v[n:]; return c }
	k.alphaC, k.alphaT, k.exT, k.exD, k.ex, k.idealA, k.idealT = cut(), cut(), cut(), cut(), cut(), cut(), cut()
	return k
}

// setIsotherm prepares temperature T at mole fractions x.
func (k *kernel) setIsotherm(T float64, x []float64) {
	k.red.set(k.m, x)
	tau := k.red.T / T
	for i, e := range k.m.residual {
		k.iso[i].Set(e, e.TRed/tau)
	}
	n := len(k.m.residual)
	for i := range k.m.departures {
		k.iso[n+i].Set(k.m.departures[i].eq, 1/tau)
	}
}

// residual returns the residual part on the isotherm at density rho.
func (k *kernel) residual(x []float64, rho float64) helmholtz.Alpha {
	delta := rho * k.red.V
	var sum helmholtz.Alpha
	for i, e := range k.m.residual {
		a := k.iso[i].Residual(delta * e.RhoRed)
		k.a[i] = a
		addScaled(&sum, &a, x[i])
	}
	n := len(k.m.residual)
	for i := range k.m.departures {
		a := k.iso[n+i].Residual(delta)
		var c float64
		for _, u := range k.m.departures[i].uses {
			c += u.factor * x[u.i] * x[u.j]
		}
		addScaled(&sum, &a, c)
	}
	return sum
}

func addScaled(sum, a *helmholtz.Alpha, c float64) {
	sum.A += c * a.A
	sum.D += c * a.D
	sum.T += c * a.T
	sum.DD += c * a.DD
	sum.DT += c * a.DT
	sum.TT += c * a.TT
}

// evaluate fills in ph at its temperature, density and mole fractions, which must all be positive.
func (k *kernel) evaluate(ph *phase, caloric bool) {
	m, x, n := k.m, ph.x, len(ph.x)
	k.setIsotherm(ph.T, x)
	red := k.red
	delta := ph.rho * red.V

	// The components, then the departure functions: sum is the residual part of the mixture.
	var sum, departed helmholtz.Alpha
	for i, e := range m.residual {
		k.a[i] = k.iso[i].Residual(delta * e.RhoRed)
		addScaled(&sum, &k.a[i], x[i])
	}
	clear(k.first)
	clear(k.cross)
	for i := range m.departures {
		a := k.iso[n+i].Residual(delta)
		var c float64
		for _, u := range m.departures[i].uses {
			xi, xj := u.factor*x[u.i], u.factor*x[u.j]
			c += xi * x[u.j]
			f, g := &k.first[u.i], &k.first[u.j]
			f.A, f.T, f.D = f.A+xj*a.A, f.T+xj*a.T, f.D+xj*a.D
			g.A, g.T, g.D = g.A+xi*a.A, g.T+xi*a.T, g.D+xi*a.D
			k.cross[u.i*n+u.j] = u.factor * a.A
			k.cross[u.j*n+u.i] = u.factor * a.A
		}
		addScaled(&departed, &a, c)
	}
	addScaled(&sum, &departed, 1)

	// First derivatives in the concentrations. ex is the explicit dependence on composition at constant tau and delta.
	R := mean(x, m.R)
	tt, dd := sum.TT+sum.T, sum.DD+sum.D
	for i := range n {
		k.ex[i] = k.a[i].A + k.first[i].A - departed.A - sum.A
		k.exT[i] = k.a[i].T + k.first[i].T - departed.T - sum.T
		k.exD[i] = k.a[i].D + k.first[i].D - departed.D - sum.D
		k.alphaC[i] = k.ex[i] + sum.T*red.t[i] + sum.D*red.d[i]
		k.alphaT[i] = k.exT[i] + tt*red.t[i] + sum.DT*red.d[i]
	}
	T, rho := ph.T, ph.rho
	rt := rho * T
	ph.p = rt * R * (1 + sum.D)
	ph.pT = ph.p - rt*R*sum.DT
	lnRhoT := math.Log(rt)
	for i := range n {
		ri := m.R[i]
		ph.lnF[i] = math.Log(x[i]*ri) + lnRhoT + sum.A + R/ri*k.alphaC[i]
		ph.lnFT[i] = 1 - sum.T - R/ri*k.alphaT[i]
		ph.pC[i] = ri
	}

	// Second derivatives.
	for i := range n {
		for j := i; j < n; j++ {
			second := k.cross[i*n+j] - k.first[i].A - k.first[j].A + 2*departed.A - k.ex[i] - k.ex[j] +
				k.exT[i]*red.t[j] + k.exT[j]*red.t[i] + k.exD[i]*red.d[j] + k.exD[j]*red.d[i] +
				tt*red.t[i]*red.t[j] + sum.DT*(red.t[i]*red.d[j]+red.t[j]*red.d[i]) + dd*red.d[i]*red.d[j] +
				sum.T*red.tt[i*n+j] + sum.D*red.dd[i*n+j]
			f := m.R[i]*k.alphaC[j] + m.R[j]*k.alphaC[i] + R*second
			ph.lnFC[i*n+j] = x[j] * f / m.R[i]
			ph.pC[j] += x[i] * f
			if i != j {
				ph.lnFC[j*n+i] = x[i] * f / m.R[j]
				ph.pC[i] += x[j] * f
			}
		}
		ph.lnFC[i*n+i]++
	}
	for i := range n {
		ph.pC[i] *= rt * x[i]
	}
	if caloric {
		k.caloric(ph, &sum, R)
	}
}

// caloric fills in internal energy and entropy.
func (k *kernel) caloric(ph *phase, sum *helmholtz.Alpha, R float64) {
	m, x, rho, T := k.m, ph.x, ph.rho, ph.T
	u, s, c := R*sum.T, R*(sum.T-sum.A), R*sum.TT
	for i, e := range m.ideal {
		k.ideal.Set(e, T)
		id := k.ideal.Ideal
		ri := m.R[i]
		lnC := math.Log(x[i] * rho / e.RhoRed)
		u += x[i] * ri * id.T
		s += x[i] * ri * (id.T - id.A - lnC)
		c += x[i] * ri * id.TT
		ph.uC[i] = x[i] * rho * T * (ri*(id.T+sum.T) + R*k.alphaT[i])
		ph.sC[i] = x[i] * rho * (ri*(id.T-id.A-lnC-1+sum.T-sum.A) + R*(k.alphaT[i]-k.alphaC[i]))
	}
	ph.u, ph.uT = rho*T*u, -rho*T*c
	ph.s, ph.sT = rho*s, -rho*c
}
