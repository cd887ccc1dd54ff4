package blend

import "math"

// An edge is a point of the phase envelope: a bulk phase of the blend's own composition in equilibrium with the first
// trace of an incipient phase. Its unknowns are, in this order, the logarithms of the concentrations of the incipient
// phase, of the density of the bulk and of temperature. The formulation by concentrations has no density to solve for
// inside, and is as well behaved at 1 Pa as near the critical point.
type edge []float64

func (u edge) lnT() float64 { return u[len(u)-1] }

func (u edge) lnRho() float64 { return u[len(u)-2] }

func (u edge) lnC() []float64 { return u[:len(u)-2] }

// edgeFixed names what is given at an edge.
type edgeFixed uint8

const (
	fixedT      edgeFixed = iota // ln(T)
	fixedP                       // pressure, Pa
	fixedSpread                  // ln of the density of the incipient phase over that of the bulk
	fixedRho                     // ln of the density of the bulk
)

const (
	equilibriumTolerance = 1e-12 // of ln(f); rounding of the sums of terms stays below 1e-13
	edgeIterations       = 40
)

// solver does the phase equilibrium of one mixture. It holds the scratch space and serves one goroutine.
type solver struct {
	m            *mixture
	b            *Blend // the view that uses the solver; nil while the envelope is being made
	d            *dome  // the envelope; without lines while it is being made
	reach        Limits // per mole, of the view that uses the solver
	k            *kernel
	iso          *isotherm
	bulk, inc    *phase
	edgeSystem   *linear
	step         []float64
	split        *linear
	splitStep    []float64
	liquidAmount []float64
	vapourAmount []float64
	liquidMoles  float64
	vapourMoles  float64
}

func newSolver(m *mixture) *solver {
	n := len(m.z)
	return &solver{
		m: m, k: newKernel(m.model), iso: newIsotherm(m.whole), bulk: newPhase(n), inc: newPhase(n), edgeSystem: newLinear(n + 2), step: make([]float64, n+3),
		split: newLinear(n + 3), splitStep: make([]float64, n+3), liquidAmount: make([]float64, n), vapourAmount: make([]float64, n),
	}
}

// solveEdge moves u by Newton's method until both phases are in equilibrium and the fixed quantity has the given value.
// It leaves the phases evaluated and the system factorised at the solution, and reports whether it found one.
func (s *solver) solveEdge(u edge, fixed edgeFixed, value float64, caloric bool) bool {
	n := len(s.m.z)
	last := math.Inf(1)
	for range edgeIterations {
		worst := s.fillEdge(u, fixed, value, caloric)
		if !s.edgeSystem.factorise() || math.IsNaN(worst) {
			return false
		}
		if worst <= 1 || worst <= 1e3 && worst > 0.3*last { // converged, or as far as rounding lets it
			return !s.trivial(u)
		}
		last = worst
		s.edgeSystem.solve(s.step[:n+2])
		// Longer steps leave the region where the linearisation says anything.
		scale := 1.0
		for i, d := range s.step[:n+2] {
			limit := 1.0
			switch i {
			case n:
				limit = 0.3
			case n + 1:
				limit = 0.05
			}
			scale = min(scale, limit/math.Abs(d))
		}
		for i := range u {
			u[i] -= scale * s.step[i]
		}
	}
	return false
}

// fillEdge evaluates both phases at u and sets up the linear system. It returns the largest residual over its tolerance.
func (s *solver) fillEdge(u edge, fixed edgeFixed, value float64, caloric bool) float64 {
	n := len(s.m.z)
	bulk, inc, l := s.bulk, s.inc, s.edgeSystem
	T := math.Exp(u.lnT())
	bulk.T, inc.T = T, T
	bulk.rho = math.Exp(u.lnRho())
	copy(bulk.x, s.m.z)
	inc.setConcentrations(u.lnC())
	s.k.evaluate(bulk, caloric)
	s.k.evaluate(inc, caloric)

	light, dense := inc, bulk
	if inc.rho > bulk.rho {
		light, dense = bulk, inc
	}
	scale := math.Abs(light.p) // a dilute gas has a pressure free of cancellation
	var bulkPC float64
	for _, v := range bulk.pC {
		bulkPC += v
	}
	worst := 0.0
	for i := range n {
		row := l.row(i)
		var sum float64
		for _, v := range bulk.lnFC[i*n : (i+1)*n] {
			sum += v
		}
		copy(row, inc.lnFC[i*n:(i+1)*n])
		row[n], row[n+1] = -sum, inc.lnFT[i]-bulk.lnFT[i]
		l.b[i] = inc.lnF[i] - bulk.lnF[i]
		worst = math.Max(worst, math.Abs(l.b[i])/equilibriumTolerance)
	}
	row := l.row(n)
	for j, v := range inc.pC {
		row[j] = v / scale
	}
	row[n], row[n+1] = -bulkPC/scale, (inc.pT-bulk.pT)/scale
	l.b[n] = (inc.p - bulk.p) / scale
	// The pressure of a cold liquid is a small difference of large terms.
	worst = math.Max(worst, math.Abs(l.b[n])/(10*equilibriumTolerance+1e-14*s.m.whole.R*T*dense.rho/scale))

	row = l.row(n + 1)
	clear(row)
	switch fixed {
	case fixedT:
		row[n+1] = 1
		l.b[n+1] = u.lnT() - value
	case fixedP:
		if light == inc {
			for j, v := range inc.pC {
				row[j] = v / value
			}
		} else {
			row[n] = bulkPC / value
		}
		row[n+1] = light.pT / value
		l.b[n+1] = light.p/value - 1
	case fixedSpread:
		copy(row, inc.x)
		row[n] = -1
		l.b[n+1] = math.Log(inc.rho/bulk.rho) - value
	case fixedRho:
		row[n] = 1
		l.b[n+1] = u.lnRho() - value
	}
	return math.Max(worst, math.Abs(l.b[n+1])/equilibriumTolerance)
}

// trivial reports whether both phases are the same, which solves the equations at any temperature and pressure.
func (s *solver) trivial(u edge) bool {
	for i, l := range u.lnC() {
		if math.Abs(l-math.Log(s.m.z[i])-u.lnRho()) > 1e-5 {
			return false
		}
	}
	return true
}

// edgePressure returns the pressure of the edge that was solved last, from the phase that has it free of cancellation.
func (s *solver) edgePressure() float64 {
	if s.inc.rho > s.bulk.rho {
		return s.bulk.p
	}
	return s.inc.p
}

// edgeTangent writes du/dS at the edge that was solved last with fixed spread S.
func (s *solver) edgeTangent(out []float64) {
	clear(s.edgeSystem.b)
	s.edgeSystem.b[len(s.edgeSystem.b)-1] = 1
	s.edgeSystem.solve(out)
}
