package blend

import "math"

// reduction is the reducing point of a mixture at one composition with its derivatives. The reducing functions are taken
// as homogeneous of degree two in the mole fractions divided by the square of their sum, so that they are functions of
// the concentrations c_k too. Derivatives are those with respect to the concentrations times the density.
type reduction struct {
	T, V   float64   // K, m3/mol
	t, d   []float64 // rho dln(tau)/dc_k, rho dln(delta)/dc_k
	tt, dd []float64 // rho^2 d2ln(tau)/(dc_k dc_l) and likewise of delta, row by row
}

// pairTerm is the contribution of components i and j to a reducing function:
// k x_i x_j (x_i+x_j)/(b x_i+x_j) with b = beta^2.
type pairTerm struct {
	i, j int
	k, b float64
}

// newKunzWagnerTerm returns the term of Kunz and Wagner (2012), eqs 16 and 17. mean is the geometric mean of the reducing
// temperatures or the mean of Lorentz of the reducing volumes.
func newKunzWagnerTerm(i, j int, beta, gamma, mean float64) pairTerm {
	return pairTerm{i: i, j: j, k: 2 * beta * gamma * mean, b: beta * beta}
}

// newLemmonJacobsenTerm returns the term of Lemmon and Jacobsen (2004), eqs 5 and 6, whose linear part is written as
// sum x_i^2 a_i + sum x_i x_j (a_i+a_j).
func newLemmonJacobsenTerm(i, j int, excess, ai, aj float64) pairTerm {
	return pairTerm{i: i, j: j, k: ai + aj + excess, b: 1}
}

func lorentzMean(v, w float64) float64 {
	c := math.Cbrt(v) + math.Cbrt(w)
	return c * c * c / 8
}

func newReduction(n int) *reduction {
	return &reduction{t: make([]float64, n), d: make([]float64, n), tt: make([]float64, n*n), dd: make([]float64, n*n)}
}

// set evaluates the reducing functions at mole fractions x, which must be positive.
func (r *reduction) set(m *model, x []float64) {
	r.T = quadratic(m.temperaturePairs, m.reducingT, x, r.t, r.tt)
	r.V = quadratic(m.volumePairs, m.reducingV, x, r.d, r.dd)
	logarithmic(r.T, 2, r.t, r.tt)
	logarithmic(r.V, 1, r.d, r.dd)
}

// quadratic returns the reducing function and fills in its first and second derivatives in x.
func quadratic(pairs []pairTerm, pure, x, first, second []float64) float64 {
	n := len(x)
	clear(second)
	var sum float64
	for i, a := range pure {
		sum += a * x[i] * x[i]
		first[i] = 2 * a * x[i]
		second[i*n+i] = 2 * a
	}
	for _, p := range pairs {
		xi, xj := x[p.i], x[p.j]
		w := p.b*xi + xj
		c := (1 - p.b) / w
		g := (xi + xj) / w
		gi, gj := c*xj/w, -c*xi/w
		gii, gjj, gij := -2*p.b*gi/w, -2*gj/w, c*(p.b*xi-xj)/(w*w)
		sum += p.k * xi * xj * g
		first[p.i] += p.k * xj * (g + xi*gi)
		first[p.j] += p.k * xi * (g + xj*gj)
		second[p.i*n+p.i] += p.k * xj * (2*gi + xi*gii)
		second[p.j*n+p.j] += p.k * xi * (2*gj + xj*gjj)
		mixed := p.k * (g + xi*gi + xj*gj + xi*xj*gij)
		second[p.i*n+p.j] += mixed
		second[p.j*n+p.i] += mixed
	}
	return sum
}

// logarithmic turns the derivatives of a quadratic form q into those of ln(q/rho^degree) times powers of rho.
func logarithmic(q, degree float64, first, second []float64) {
	n := len(first)
	for i := range first {
		first[i] /= q
	}
	for i := range n {
		for j := range n {
			second[i*n+j] = second[i*n+j]/q - first[i]*first[j] + degree
		}
	}
	for i := range first {
		first[i] -= degree
	}
}
