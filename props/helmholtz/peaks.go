package helmholtz

import (
	"math"

	"dewmark/props/internal/elementary"
)

// addPeaks adds the non-analytic terms. x is tau-1 and y is delta-1, passed separately because the differences of the
// rounded values would lose the digits that matter at the critical point.
func (e *Equation) addPeaks(out *Alpha, tau, x, delta, y float64) {
	if x == 0 && y == 0 {
		y = 1e-12 // the second derivatives do not exist at the very point; this keeps them finite
	}
	q := y * y
	// Near the critical temperature the saturation densities depend on the last digit.
	pow, exponential := math.Pow, math.Exp
	if math.Abs(x) > 0.005 {
		pow, exponential = quickPower, elementary.Exp
	}
	for i := range e.peaks {
		k := &e.peaks[i]
		m := 1 / (2 * k.beta)
		qm := pow(q, m-1) // q^(m-1), finite since m > 1
		qa := pow(q, k.a-1)
		theta := -x + k.A*qm*q
		thetaD := 2 * m * k.A * qm * y
		thetaDD := 2 * m * (2*m - 1) * k.A * qm
		dist := theta*theta + k.B*qa*q
		distD := 2*theta*thetaD + 2*k.a*k.B*qa*y
		distDD := 2*thetaD*thetaD + 2*theta*thetaDD + 2*k.a*(2*k.a-1)*k.B*qa
		distT, distDT := -2*theta, -2*thetaD

		f := pow(dist, k.b)
		f1 := k.b * f / dist
		f2 := (k.b - 1) * f1 / dist
		fD, fT := f1*distD, f1*distT
		fDD := f1*distDD + f2*distD*distD
		fDT := f1*distDT + f2*distD*distT
		fTT := 2*f1 + f2*distT*distT

		psi := k.n * exponential(-k.C*q-k.D*x*x)
		g := delta * psi
		gD := psi * (1 - 2*k.C*delta*y)
		gDD := -2 * k.C * psi * (y*(1-2*k.C*delta*y) + delta + y)
		h := -2 * k.D * x
		gT, gDT, gTT := h*g, h*gD, (h*h-2*k.D)*g

		out.A += f * g
		out.D += delta * (fD*g + f*gD)
		out.T += tau * (fT*g + f*gT)
		out.DD += delta * delta * (fDD*g + 2*fD*gD + f*gDD)
		out.DT += delta * tau * (fDT*g + fD*gT + fT*gD + f*gDT)
		out.TT += tau * tau * (fTT*g + 2*fT*gT + f*gTT)
	}
}

// quickPower returns x^a for x >= 0 and a > 0 to some units in the fifteenth digit.
func quickPower(x, a float64) float64 {
	if x < 1e-300 {
		return 0
	}
	return elementary.Exp(a * elementary.Log(x))
}

// HasPeaks reports whether the equation has non-analytic terms, which make the third derivatives singular at its
// critical point.
func (e *Equation) HasPeaks() bool { return len(e.peaks) > 0 }

// ThirdDensity returns delta^3 d3 alpha/d delta3 of the separable terms of the residual part at density rho in mol/m3.
// Non-analytic terms are left out: an equation that has them states its critical point exactly.
func (s *Isotherm) ThirdDensity(rho float64) float64 {
	e := s.eq
	delta := rho / e.RhoRed
	var sum float64
	for _, g := range e.groups {
		var a0, a1, a2, a3 float64
		for j := g.from; j < g.to; j++ {
			d := e.shapes[j].d
			c := s.weights[j].c * math.Pow(delta, d)
			a0 += c
			a1 += d * c
			a2 += d * (d - 1) * c
			a3 += d * (d - 1) * (d - 2) * c
		}
		v := g.g * math.Pow(delta, g.lf)
		l, u := g.lf, g.lf*v
		f := 1.0
		if g.l > 0 {
			f = math.Exp(-v)
		}
		sum += f * (a3 - 3*u*a2 + 3*u*(u-l+1)*a1 - u*(u*u-3*(l-1)*u+(l-1)*(l-2))*a0)
	}
	for _, b := range e.bells {
		x := delta - b.epsilon
		c := s.weights[b.at].c * math.Pow(delta, e.shapes[b.at].d) * math.Exp(-b.eta*x*x)
		a := e.shapes[b.at].d - 2*b.eta*delta*x
		a1 := -2 * b.eta * delta * (2*delta - b.epsilon)
		a2 := -2 * b.eta * delta * (4*delta - b.epsilon)
		sum += c * (a*(a*a+3*a1) + a2 - 3*(a*a+a1) + 2*a)
	}
	return sum
}
