package blend

import "math"

// linear is a system of linear equations with one right-hand side, or its factors.
type linear struct {
	n     int
	a     []float64 // row by row
	b     []float64
	pivot []int
}

func newLinear(n int) *linear {
	return &linear{n: n, a: make([]float64, n*n), b: make([]float64, n), pivot: make([]int, n)}
}

func (l *linear) row(i int) []float64 { return l.a[i*l.n : (i+1)*l.n] }

// factorise replaces a by its factors, with partial pivoting. It reports whether a is regular.
func (l *linear) factorise() bool {
	n := l.n
	for i := range n {
		l.pivot[i] = i
	}
	for k := range n {
		best, at := 0.0, -1
		for i := k; i < n; i++ {
			if v := math.Abs(l.a[i*n+k]); v > best {
				best, at = v, i
			}
		}
		if !(best > 0) || math.IsInf(best, 0) { // NaN too
			return false
		}
		if at != k {
			rk, ra := l.row(k), l.row(at)
			for j := range rk {
				rk[j], ra[j] = ra[j], rk[j]
			}
			l.pivot[k], l.pivot[at] = l.pivot[at], l.pivot[k]
		}
		rk := l.row(k)
		for i := k + 1; i < n; i++ {
			ri := l.row(i)
			f := ri[k] / rk[k]
			ri[k] = f
			if f == 0 {
				continue
			}
			for j := k + 1; j < n; j++ {
				ri[j] -= f * rk[j]
			}
		}
	}
	return true
}

// solve writes the solution for the right-hand side b into out, after factorise.
func (l *linear) solve(out []float64) {
	n := l.n
	for i := range n {
		s := l.b[l.pivot[i]]
		for j, v := range l.row(i)[:i] {
			s -= v * out[j]
		}
		out[i] = s
	}
	for i := n - 1; i >= 0; i-- {
		ri := l.row(i)
		s := out[i]
		for j := i + 1; j < n; j++ {
			s -= ri[j] * out[j]
		}
		out[i] = s / ri[i]
	}
}
