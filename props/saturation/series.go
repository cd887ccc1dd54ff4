package saturation

import "math"

// degree of every expansion. Sixteen coefficients resolve a piece to rounding at widths that keep a refrigerant near
// 10 kB; a lower degree needs more pieces, a higher one more time in each evaluation.
const degree = 15

// series holds the powers of x in [-1, 1] of a polynomial found as a Chebyshev expansion. The expansions here decay by
// a factor of about ten per degree, so that the change of basis loses nothing, and powers evaluate twice as fast.
type series [degree + 1]float64

// nodes are the Chebyshev points of the first kind for degree+1 coefficients, from +1 down to -1.
var nodes = func() (x [degree + 1]float64) {
	for k := range x {
		x[k] = math.Cos(math.Pi * (float64(k) + 0.5) / (degree + 1))
	}
	return x
}()

// fit returns the polynomial through values f at the nodes.
func fit(f *[degree + 1]float64) series {
	const n = degree + 1
	var c series // Chebyshev coefficients
	for j := range c {
		for k, v := range f {
			c[j] += v * math.Cos(math.Pi*float64(j)*(float64(k)+0.5)/n)
		}
		c[j] *= 2.0 / n
	}
	c[0] /= 2

	var out, prev, cur series // powers of T_(j-1) and T_j
	prev[0], cur[1] = 1, 1
	out[0] = c[0]
	for j := 1; j < n; j++ {
		for i, v := range cur {
			out[i] += c[j] * v
		}
		var next series
		for i := range n - 1 {
			next[i+1] = 2 * cur[i]
		}
		for i, v := range prev {
			next[i] -= v
		}
		prev, cur = cur, next
	}
	return out
}

// at evaluates the polynomial, even and odd powers apart to halve the chain of dependent operations.
func (c *series) at(x float64) float64 {
	y := x * x
	even, odd := c[14], c[15]
	even, odd = even*y+c[12], odd*y+c[13]
	even, odd = even*y+c[10], odd*y+c[11]
	even, odd = even*y+c[8], odd*y+c[9]
	even, odd = even*y+c[6], odd*y+c[7]
	even, odd = even*y+c[4], odd*y+c[5]
	even, odd = even*y+c[2], odd*y+c[3]
	even, odd = even*y+c[0], odd*y+c[1]
	return even + x*odd
}
