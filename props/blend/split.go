package blend

import "math"

// A split is a state of two phases in equilibrium that hold one mole of the blend between them. Its unknowns are, in
// this order, w_i = ln(v_i/l_i) with the amounts v_i and l_i of component i in vapour and liquid, the logarithms of the
// densities of liquid and vapour in mol/m3 and of the temperature. The amounts always add up, nothing can turn negative,
// and moving from one phase to the other at an azeotrope, where the system is nearly singular, changes no other unknown.
type split []float64

const splitIterations = 40

// constraint is a quantity that is given in a split, per mole of the blend and from the zero points of the component
// files.
type constraint struct {
	of    Property // Density is given as molar volume, m3/mol; Quality by mass
	value float64
}

// outcome is what a solved split has.
type outcome struct {
	T, p       float64
	v, h, s    float64   // m3/mol, J/mol, J/(mol K)
	quality    float64   // by mass
	x, y       []float64 // mole fractions of liquid and vapour
	rhoL, rhoV float64   // mol/m3
	hL, hV     float64   // J/mol
	sL, sV     float64   // J/(mol K)
	dpdT       float64   // at constant volume, both phases in equilibrium, Pa/K
}

// solveSplit moves u by Newton's method until both constraints hold in equilibrium. It leaves the phases evaluated at the
// solution: liquid in s.bulk, vapour in s.inc. It reports whether it found a solution with two different phases.
func (s *solver) solveSplit(u split, a, b constraint) bool {
	n := len(s.m.z)
	last := math.Inf(1)
	for range splitIterations {
		s.evaluateSplit(u)
		worst := s.fillSplit(a, b)
		if math.IsNaN(worst) {
			return false
		}
		if worst <= 1 || worst <= 1e3 && worst > 0.3*last {
			return s.bulk.rho > 1.0001*s.inc.rho
		}
		last = worst
		if !s.split.factorise() {
			return false
		}
		s.split.solve(s.splitStep)
		scale := 1.0
		for i, d := range s.splitStep {
			limit := 3.0
			switch i {
			case n:
				limit = 0.3
			case n + 1:
				limit = 0.5
			case n + 2:
				limit = 0.05
			}
			scale = min(scale, limit/math.Abs(d))
		}
		for i := range u {
			u[i] -= scale * s.splitStep[i]
		}
	}
	return false
}

// evaluateSplit evaluates both phases at u.
func (s *solver) evaluateSplit(u split) {
	n := len(s.m.z)
	liquid, vapour := s.bulk, s.inc
	T := math.Exp(u[n+2])
	liquid.T, vapour.T = T, T
	var nl, nv float64
	for i, w := range u[:n] {
		// The smaller amount comes from the exponential, the larger one is the rest.
		e := math.Exp(-math.Abs(w))
		small := s.m.z[i] * e / (1 + e)
		if w > 0 {
			s.liquidAmount[i], s.vapourAmount[i] = small, s.m.z[i]-small
		} else {
			s.liquidAmount[i], s.vapourAmount[i] = s.m.z[i]-small, small
		}
		nl += s.liquidAmount[i]
		nv += s.vapourAmount[i]
	}
	for i := range n {
		liquid.x[i], vapour.x[i] = s.liquidAmount[i]/nl, s.vapourAmount[i]/nv
	}
	liquid.rho, vapour.rho = math.Exp(u[n]), math.Exp(u[n+1])
	s.liquidMoles, s.vapourMoles = nl, nv
	s.k.evaluate(liquid, true)
	s.k.evaluate(vapour, true)
}

// fillSplit sets up the linear system where the phases are evaluated. It returns the largest residual over its
// tolerance.
func (s *solver) fillSplit(a, b constraint) float64 {
	n := len(s.m.z)
	liquid, vapour, l := s.bulk, s.inc, s.split
	vl, vv, T := s.liquidMoles/liquid.rho, s.vapourMoles/vapour.rho, liquid.T
	// At first with the volumes of both phases in place of the densities.
	// d ln(l_j)/d w_j = -v_j/z_j and d ln(v_j)/d w_j = l_j/z_j.
	worst := 0.0
	scale := math.Abs(vapour.p)
	for i := range n {
		row := l.row(i)
		var sl, sv float64
		for j := range n {
			fl, fv := liquid.lnFC[i*n+j], vapour.lnFC[i*n+j]
			row[j] = (fv*s.liquidAmount[j] + fl*s.vapourAmount[j]) / s.m.z[j]
			sl += fl
			sv += fv
		}
		row[n], row[n+1], row[n+2] = sl, -sv, vapour.lnFT[i]-liquid.lnFT[i]
		l.b[i] = vapour.lnF[i] - liquid.lnF[i]
		worst = math.Max(worst, math.Abs(l.b[i])/equilibriumTolerance)
	}
	row := l.row(n)
	var pl, pv float64
	for j := range n {
		row[j] = (vapour.pC[j]*s.liquidAmount[j] + liquid.pC[j]*s.vapourAmount[j]) / (s.m.z[j] * scale)
		pl += liquid.pC[j]
		pv += vapour.pC[j]
	}
	row[n], row[n+1], row[n+2] = pl/scale, -pv/scale, (vapour.pT-liquid.pT)/scale
	l.b[n] = (vapour.p - liquid.p) / scale
	worst = math.Max(worst, math.Abs(l.b[n])/(10*equilibriumTolerance+1e-13*s.m.whole.R*T*liquid.rho/scale))

	worst = math.Max(worst, s.constrain(l.row(n+1), &l.b[n+1], a, vl, vv))
	worst = math.Max(worst, s.constrain(l.row(n+2), &l.b[n+2], b, vl, vv))

	// From volumes to densities: ln(volume) = ln(moles) - ln(rho).
	for i := range n + 3 {
		row := l.row(i)
		inL, inV := row[n], row[n+1]
		for j := range n {
			row[j] += s.liquidAmount[j] * s.vapourAmount[j] / s.m.z[j] * (inV/s.vapourMoles - inL/s.liquidMoles)
		}
		row[n], row[n+1] = -inL, -inV
	}
	return worst
}

// constrain fills in the row of a constraint and returns its residual over its tolerance.
func (s *solver) constrain(row []float64, residual *float64, c constraint, vl, vv float64) float64 {
	n := len(s.m.z)
	liquid, vapour := s.bulk, s.inc
	clear(row)
	switch c.of {
	case Temperature:
		row[n+2] = 1
		*residual = math.Log(vapour.T / c.value)
	case Pressure:
		var sum float64
		for j, pc := range vapour.pC {
			row[j] = pc * s.liquidAmount[j] / (s.m.z[j] * c.value)
			sum += pc
		}
		row[n+1], row[n+2] = -sum/c.value, vapour.pT/c.value
		*residual = vapour.p/c.value - 1
	case Density:
		row[n], row[n+1] = vl/(vl+vv), vv/(vl+vv)
		*residual = math.Log((vl + vv) / c.value)
	case Quality:
		q := 0.0
		for j, v := range s.vapourAmount {
			q += v * s.m.model.M[j]
		}
		q /= s.m.whole.M
		for j, v := range s.vapourAmount {
			row[j] = v * s.liquidAmount[j] / s.m.z[j] * s.m.model.M[j] / (s.m.whole.M * q * (1 - q))
		}
		*residual = math.Log(q/(1-q)) - math.Log(c.value/(1-c.value))
	case Enthalpy:
		s.extensive(row, vl, vv, s.m.whole.R*vapour.T, func(ph *phase, j int) float64 { return ph.uC[j] + ph.pC[j] })
		row[n] += vl * (liquid.u + liquid.p) / (s.m.whole.R * vapour.T)
		row[n+1] += vv * (vapour.u + vapour.p) / (s.m.whole.R * vapour.T)
		row[n+2] = (vl*(liquid.uT+liquid.pT) + vv*(vapour.uT+vapour.pT)) / (s.m.whole.R * vapour.T)
		*residual = (vl*(liquid.u+liquid.p) + vv*(vapour.u+vapour.p) - c.value) / (s.m.whole.R * vapour.T)
	case InternalEnergy:
		s.extensive(row, vl, vv, s.m.whole.R*vapour.T, func(ph *phase, j int) float64 { return ph.uC[j] })
		row[n] += vl * liquid.u / (s.m.whole.R * vapour.T)
		row[n+1] += vv * vapour.u / (s.m.whole.R * vapour.T)
		row[n+2] = (vl*liquid.uT + vv*vapour.uT) / (s.m.whole.R * vapour.T)
		*residual = (vl*liquid.u + vv*vapour.u - c.value) / (s.m.whole.R * vapour.T)
	case Entropy:
		s.extensive(row, vl, vv, s.m.whole.R, func(ph *phase, j int) float64 { return ph.sC[j] })
		row[n] += vl * liquid.s / s.m.whole.R
		row[n+1] += vv * vapour.s / s.m.whole.R
		row[n+2] = (vl*liquid.sT + vv*vapour.sT) / s.m.whole.R
		*residual = (vl*liquid.s + vv*vapour.s - c.value) / s.m.whole.R
	}
	tolerance := 10 * equilibriumTolerance
	if c.of == Enthalpy || c.of == Entropy || c.of == InternalEnergy {
		tolerance = equilibriumTolerance / 10 // close to an edge a trace of heat is all the vapour there is
	}
	return math.Abs(*residual) / tolerance
}

// extensive fills in the derivatives of a property of both phases that come through the concentrations; c returns
// c_j db/dc_j of the property per volume b.
func (s *solver) extensive(row []float64, vl, vv, scale float64, c func(ph *phase, j int) float64) {
	n := len(s.m.z)
	for j := range n {
		cl, cv := vl*c(s.bulk, j)/scale, vv*c(s.inc, j)/scale
		row[j] = (cv*s.liquidAmount[j] - cl*s.vapourAmount[j]) / s.m.z[j]
		row[n] -= cl
		row[n+1] -= cv
	}
}

// unknowns returns the unknowns of a solved split.
func (o *outcome) unknowns() split {
	n := len(o.x)
	vl, vv := 1/o.rhoL, 1/o.rhoV
	beta := (o.v - vl) / (vv - vl)
	u := make(split, n+3)
	for i := range o.x {
		u[i] = math.Log(o.y[i]/o.x[i]) + math.Log(beta/(1-beta))
	}
	u[n], u[n+1], u[n+2] = math.Log(o.rhoL), math.Log(o.rhoV), math.Log(o.T)
	return u
}

// outcome returns the split that was solved last.
func (s *solver) outcome() outcome {
	n := len(s.m.z)
	liquid, vapour := s.bulk, s.inc
	vl, vv := s.liquidMoles/liquid.rho, s.vapourMoles/vapour.rho
	o := outcome{
		T: vapour.T, p: vapour.p, v: vl + vv, s: vl*liquid.s + vv*vapour.s,
		x: append([]float64(nil), liquid.x...), y: append([]float64(nil), vapour.x...), rhoL: liquid.rho, rhoV: vapour.rho,
		hL: (liquid.u + vapour.p) / liquid.rho, hV: (vapour.u + vapour.p) / vapour.rho, sL: liquid.s / liquid.rho, sV: vapour.s / vapour.rho,
	}
	o.h = vl*liquid.u + vv*vapour.u + o.p*o.v
	for j, v := range s.vapourAmount {
		o.quality += v * s.m.model.M[j]
	}
	o.quality /= s.m.whole.M

	// The slope of pressure along the isochore: the response of the system to a change of temperature alone.
	s.fillSplit(constraint{Density, o.v}, constraint{Temperature, o.T})
	o.dpdT = math.NaN()
	if s.split.factorise() {
		clear(s.split.b)
		s.split.b[n+2] = 1
		s.split.solve(s.splitStep)
		d := s.splitStep
		var moles float64
		for j := range n {
			moles += s.liquidAmount[j] * s.vapourAmount[j] / s.m.z[j] * d[j]
		}
		moles /= s.vapourMoles
		dp := vapour.pT * d[n+2]
		for j, pc := range vapour.pC {
			dp += pc * (s.liquidAmount[j]/s.m.z[j]*d[j] - moles + d[n+1])
		}
		o.dpdT = dp / o.T
	}
	return o
}
