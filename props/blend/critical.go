package blend

import "math"

// findCritical locates the critical point of the blend: the smallest eigenvalue of the matrix of second derivatives of the
// Helmholtz energy in the amounts is zero, and so is its derivative along the eigenvector (Heidemann and Khalil, AIChE J.
// 26 (1980) 769, doi:10.1002/aic.690260510). It starts from where the envelope crosses zero spread.
func (s *solver) findCritical(e *envelope) error {
	u := make([]float64, len(s.m.z)+3)
	e.interpolate(0, u)
	start := node{v: u}
	lnT, lnRho := start.lnT(), start.lnRho()
	c := criticality{s: s, n: len(s.m.z)}
	for range 30 {
		const step = 1e-5 // relative; balances truncation and rounding
		f := c.at(lnT, lnRho)
		fT, fT2 := c.at(lnT+step, lnRho), c.at(lnT-step, lnRho)
		fR, fR2 := c.at(lnT, lnRho+step), c.at(lnT, lnRho-step)
		a11, a12 := (fT[0]-fT2[0])/(2*step), (fR[0]-fR2[0])/(2*step)
		a21, a22 := (fT[1]-fT2[1])/(2*step), (fR[1]-fR2[1])/(2*step)
		det := a11*a22 - a12*a21
		dT, dR := (f[0]*a22-f[1]*a12)/det, (f[1]*a11-f[0]*a21)/det
		if math.IsNaN(dT) || math.IsNaN(dR) {
			break
		}
		scale := math.Min(1, 0.05/math.Max(math.Abs(dT), math.Abs(dR)))
		lnT, lnRho = lnT-scale*dT, lnRho-scale*dR
		if math.Abs(dT) < 1e-11 && math.Abs(dR) < 1e-9 {
			break
		}
	}
	// The envelope itself passes close by: a critical point elsewhere is another one.
	if !(math.Abs(lnT-start.lnT()) < 5e-3 && math.Abs(lnRho-start.lnRho()) < 5e-2) {
		return &EnvelopeError{Refrigerant: s.m.designation, T: math.Exp(start.lnT()), Reason: "no critical point on it"}
	}
	ph := s.bulk
	ph.T, ph.rho = math.Exp(lnT), math.Exp(lnRho)
	copy(ph.x, s.m.z)
	s.k.evaluate(ph, false)
	e.critical = edgePoint{0, ph.T, ph.p, ph.rho}
	rise := make([]float64, len(u))
	for i, z := range s.m.z {
		rise[i] = math.Log(z*ph.rho) - u[i]
	}
	rise[c.n], rise[c.n+1], rise[c.n+2] = lnRho-u[c.n], lnT-u[c.n+1], math.Log(ph.p)-u[c.n+2]
	e.rise = rise
	return nil
}

// criticality evaluates the two conditions of a critical point.
type criticality struct {
	s *solver
	n int
	u []float64 // eigenvector of the last evaluation, to keep its sign
}

func (c *criticality) at(lnT, lnRho float64) [2]float64 {
	ph, k, n := c.s.bulk, c.s.k, c.n
	m := c.s.m.model
	eval := func() {
		k.evaluate(ph, false)
	}
	ph.T, ph.rho = math.Exp(lnT), math.Exp(lnRho)
	copy(ph.x, c.s.m.z)
	eval()
	conc := make([]float64, n)
	b := make([]float64, n*n)
	for i := range n {
		conc[i] = ph.x[i] * ph.rho
	}
	for i := range n {
		for j := range n {
			b[i*n+j] = ph.lnFC[i*n+j] * math.Sqrt(m.R[i]*conc[i]/(m.R[j]*conc[j]))
		}
	}
	lambda, u := smallestEigen(b, n)
	if c.u != nil {
		var dot float64
		for i := range u {
			dot += u[i] * c.u[i]
		}
		if dot < 0 {
			for i := range u {
				u[i] = -u[i]
			}
		}
	}
	c.u = u

	// The quadratic form along the eigenvector at a distance, to be differentiated.
	form := func(e float64) float64 {
		rho := 0.0
		for i := range n {
			ph.x[i] = conc[i] + e*u[i]*math.Sqrt(conc[i]/m.R[i]*m.R[0]*ph.rho)
			rho += ph.x[i]
		}
		for i := range n {
			ph.x[i] /= rho
		}
		keep := ph.rho
		ph.rho = rho
		eval()
		ph.rho = keep
		var q float64
		for i := range n {
			di := u[i] * math.Sqrt(conc[i]/m.R[i])
			for j := range n {
				q += di * m.R[i] * ph.lnFC[i*n+j] / (ph.x[j] * rho) * u[j] * math.Sqrt(conc[j]/m.R[j])
			}
		}
		return q
	}
	const h = 1e-3
	cubic := (8*(form(h)-form(-h)) - (form(2*h) - form(-2*h))) / (12 * h)
	return [2]float64{lambda, cubic}
}

// smallestEigen returns the smallest eigenvalue of the symmetric matrix a with its eigenvector of unit length, by the
// method of Jacobi. It destroys a.
func smallestEigen(a []float64, n int) (float64, []float64) {
	v := make([]float64, n*n)
	for i := range n {
		v[i*n+i] = 1
	}
	for range 50 {
		var off float64
		for i := range n {
			for j := range i {
				off += a[i*n+j] * a[i*n+j]
			}
		}
		if off < 1e-28 {
			break
		}
		for p := range n {
			for q := p + 1; q < n; q++ {
				if a[p*n+q] == 0 {
					continue
				}
				theta := (a[q*n+q] - a[p*n+p]) / (2 * a[p*n+q])
				t := math.Copysign(1/(math.Abs(theta)+math.Hypot(theta, 1)), theta)
				c := 1 / math.Hypot(t, 1)
				s := t * c
				for k := range n {
					x, y := a[k*n+p], a[k*n+q]
					a[k*n+p], a[k*n+q] = c*x-s*y, s*x+c*y
				}
				for k := range n {
					x, y := a[p*n+k], a[q*n+k]
					a[p*n+k], a[q*n+k] = c*x-s*y, s*x+c*y
					x, y = v[k*n+p], v[k*n+q]
					v[k*n+p], v[k*n+q] = c*x-s*y, s*x+c*y
				}
			}
		}
	}
	best := 0
	for i := range n {
		if a[i*n+i] < a[best*n+best] {
			best = i
		}
	}
	u := make([]float64, n)
	for i := range n {
		u[i] = v[i*n+best]
	}
	return a[best*n+best], u
}
