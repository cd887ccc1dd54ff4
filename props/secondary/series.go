package secondary

import (
	"math"
	"sort"
)

// piecewise is a function of one variable: a Chebyshev series between each pair of neighbouring knots.
type piecewise struct {
	knots  []float64   // ascending, one more than pieces
	pieces [][]float64 // coefficients, the first counted in full
}

// chebyshev returns the series that meets f at n points between a and b. It is exact for polynomials of degree n - 1.
func chebyshev(a, b float64, n int, f func(float64) (float64, error)) ([]float64, error) {
	values := make([]float64, n)
	for k := range values {
		var err error
		if values[k], err = f((a+b)/2 + (b-a)/2*math.Cos(math.Pi*(float64(k)+0.5)/float64(n))); err != nil {
			return nil, err
		}
	}
	c := make([]float64, n)
	for j := range c {
		for k, v := range values {
			c[j] += v * math.Cos(math.Pi*float64(j)*(float64(k)+0.5)/float64(n))
		}
		c[j] *= 2 / float64(n)
	}
	c[0] /= 2
	return c, nil
}

// at returns the function at x, continuing the outermost pieces.
func (p *piecewise) at(x float64) float64 {
	i := 0
	if len(p.pieces) > 1 {
		i = sort.SearchFloat64s(p.knots[1:len(p.knots)-1], x)
	}
	a, b := p.knots[i], p.knots[i+1]
	return clenshaw(p.pieces[i], (2*x-a-b)/(b-a))
}

// clenshaw sums a Chebyshev series at u between -1 and 1.
func clenshaw(c []float64, u float64) float64 {
	var b1, b2 float64
	for j := len(c) - 1; j > 0; j-- {
		b1, b2 = 2*u*b1-b2+c[j], b1
	}
	return u*b1 - b2 + c[0]
}

// integral returns the integral of p from its first knot.
func (p *piecewise) integral() *piecewise {
	q := &piecewise{knots: p.knots}
	var from float64
	for i, c := range p.pieces {
		half := (p.knots[i+1] - p.knots[i]) / 2
		at := func(j int) float64 {
			if j < len(c) {
				return c[j]
			}
			return 0
		}
		s := make([]float64, len(c)+1)
		for j := 1; j < len(s); j++ {
			below := at(j - 1)
			if j == 1 {
				below *= 2 // the first coefficient counts in full here
			}
			s[j] = half * (below - at(j+1)) / float64(2*j)
		}
		s[0] = from - clenshaw(s, -1)
		q.pieces = append(q.pieces, s)
		from = clenshaw(s, 1)
	}
	return q
}
