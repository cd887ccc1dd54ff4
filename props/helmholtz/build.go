package helmholtz

import (
	"cmp"
	"fmt"
	"math"
	"slices"
)

// shapeKey identifies a factor in delta; terms with equal keys share one coefficient on an isotherm.
type shapeKey struct {
	bell         bool
	d            float64
	l            int
	g            float64
	eta, epsilon float64
}

// builder collects terms and sorts their factors in delta into groups.
type builder struct {
	eq      *Equation
	powerAt map[float64]int
	shapeAt map[shapeKey]int
	keys    []shapeKey
}

func (b *builder) exponential(x []float64, l, g float64, kind tauFactor, m float64) error {
	if l != math.Trunc(l) || l < 0 || l > maxPower {
		return fmt.Errorf("exponent of delta %g in an exponential is not a whole number from 0 to %d", l, maxPower)
	}
	if err := checkPower(x[2]); err != nil {
		return err
	}
	b.add(shapeKey{d: x[2], l: int(l), g: g}, term{n: x[0], t: x[1], kind: kind, beta: m})
	return nil
}

func (b *builder) gaussian(x []float64, kind tauFactor, inv float64) error {
	if err := checkPower(x[2]); err != nil {
		return err
	}
	b.add(shapeKey{bell: true, d: x[2], eta: x[3], epsilon: x[6]},
		term{n: x[0], t: x[1], kind: kind, beta: x[4], gamma: x[5], b: inv})
	return nil
}

func (b *builder) add(key shapeKey, t term) {
	p, ok := b.powerAt[t.t]
	if !ok {
		p = len(b.eq.powers)
		b.powerAt[t.t] = p
		b.eq.powers = append(b.eq.powers, t.t)
	}
	s, ok := b.shapeAt[key]
	if !ok {
		s = len(b.keys)
		b.shapeAt[key] = s
		b.keys = append(b.keys, key)
	}
	t.power, t.shape = p, s
	b.eq.terms = append(b.eq.terms, t)
}

// finish orders the shapes so that each exponential is computed once, and renumbers the terms.
func (b *builder) finish() error {
	if len(b.keys) > maxTerms || len(b.eq.powers) > maxTerms {
		return fmt.Errorf("helmholtz: %d distinct factors in delta and %d in tau, at most %d are supported",
			len(b.keys), len(b.eq.powers), maxTerms)
	}
	order := make([]int, len(b.keys))
	for i := range order {
		order[i] = i
	}
	slices.SortStableFunc(order, func(i, j int) int {
		p, q := b.keys[i], b.keys[j]
		if p.bell != q.bell {
			if p.bell {
				return 1
			}
			return -1
		}
		return cmp.Or(cmp.Compare(p.l, q.l), cmp.Compare(p.g, q.g), cmp.Compare(p.d, q.d))
	})
	rank := make([]int, len(order))
	e := b.eq
	for at, i := range order {
		k := b.keys[i]
		rank[i] = at
		e.shapes = append(e.shapes, shape{d: k.d, at: b.powerIndex(k.d)})
		if k.bell {
			e.bells = append(e.bells, bell{at: at, eta: k.eta, epsilon: k.epsilon})
		} else {
			last := len(e.groups) - 1
			if last < 0 || e.groups[last].l != k.l || e.groups[last].g != k.g {
				e.groups = append(e.groups, group{from: at, l: k.l, lf: float64(k.l), g: k.g})
				last++
			}
			e.groups[last].to = at + 1
			e.maxDelta = max(e.maxDelta, k.l)
		}
	}
	if len(e.fraction) > deltaPowers-maxPower-1 {
		return fmt.Errorf("helmholtz: %d fractional exponents of delta, at most %d are supported", len(e.fraction), deltaPowers-maxPower-1)
	}
	for i := range e.terms {
		e.terms[i].shape = rank[e.terms[i].shape]
	}
	return nil
}

// powerIndex returns where delta^d stands in the table of powers, making room for it.
func (b *builder) powerIndex(d float64) int {
	if d == math.Trunc(d) {
		b.eq.maxDelta = max(b.eq.maxDelta, int(d))
		return int(d)
	}
	i := slices.Index(b.eq.fraction, d)
	if i < 0 {
		i = len(b.eq.fraction)
		b.eq.fraction = append(b.eq.fraction, d)
	}
	return maxPower + 1 + i
}

func checkPower(d float64) error {
	if !(d >= 0 && d <= maxPower) {
		return fmt.Errorf("exponent of delta %g is not between 0 and %d", d, maxPower)
	}
	return nil
}
