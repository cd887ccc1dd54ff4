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

// builder collects terms, plans the powers of tau that they need and sorts their factors in delta into groups.
type builder struct {
	eq      *Equation
	shapeAt map[shapeKey]int
	keys    []shapeKey
	plain   []plainTerm // power holds no index yet; nt is t
	special []specialTerm
}

func (b *builder) exponential(x []float64, l, g float64) error {
	key, err := exponentialKey(x[2], l, g)
	if err != nil {
		return err
	}
	b.plain = append(b.plain, plainTerm{n: x[0], nt: x[1], shape: b.shape(key)})
	return nil
}

func (b *builder) doubleExponential(x []float64) error {
	key, err := exponentialKey(x[2], x[3], 1)
	if err != nil {
		return err
	}
	b.special = append(b.special, specialTerm{n: x[0], t: x[1], shape: b.shape(key), kind: tauExp, beta: x[4]})
	return nil
}

func (b *builder) gaussian(x []float64, kind tauFactor, inv float64) error {
	if err := checkPower(x[2]); err != nil {
		return err
	}
	b.special = append(b.special, specialTerm{
		n: x[0], t: x[1], shape: b.shape(shapeKey{bell: true, d: x[2], eta: x[3], epsilon: x[6]}),
		kind: kind, beta: x[4], gamma: x[5], b: inv,
	})
	return nil
}

func exponentialKey(d, l, g float64) (shapeKey, error) {
	if l != math.Trunc(l) || l < 0 || l > maxPower {
		return shapeKey{}, fmt.Errorf("exponent of delta %g in an exponential is not a whole number from 0 to %d", l, maxPower)
	}
	return shapeKey{d: d, l: int(l), g: g}, checkPower(d)
}

func checkPower(d float64) error {
	if !(d >= 0 && d <= maxPower) {
		return fmt.Errorf("exponent of delta %g is not between 0 and %d", d, maxPower)
	}
	return nil
}

// shape returns the number of the factor in delta with that key.
func (b *builder) shape(key shapeKey) int {
	s, ok := b.shapeAt[key]
	if !ok {
		s = len(b.keys)
		b.shapeAt[key] = s
		b.keys = append(b.keys, key)
	}
	return s
}

// finish orders the shapes so that each exponential in delta is computed once, plans the powers of tau, and numbers
// both in the terms.
func (b *builder) finish() error {
	e := b.eq
	rank := b.orderShapes()
	if len(e.shapes) > maxShapes || len(e.fraction) > deltaPowers-maxPower-1 {
		return fmt.Errorf("helmholtz: %d distinct factors in delta, %d fractional exponents; at most %d and %d are supported",
			len(e.shapes), len(e.fraction), maxShapes, deltaPowers-maxPower-1)
	}

	var exponents []float64
	for _, t := range b.plain {
		exponents = append(exponents, t.nt)
	}
	for _, t := range b.special {
		exponents = append(exponents, t.t)
		if t.kind == tauExp {
			exponents = append(exponents, t.beta)
		}
	}
	for _, r := range e.ideal.TauPowers {
		exponents = append(exponents, r[1])
	}
	e.powers = planPowers(exponents)
	if n := len(e.powers.t); n > maxPowers {
		return fmt.Errorf("helmholtz: %d powers of tau, at most %d are supported", n, maxPowers)
	}
	at := func(t float64) int { return slices.Index(e.powers.t, t) }
	expand := func(n, t float64, shape int) plainTerm {
		return plainTerm{power: at(t), shape: shape, n: n, nt: n * t, ntt: n * t * (t - 1)}
	}
	for i := range e.groups {
		g := &e.groups[i]
		g.first = len(e.terms)
		for _, k := range b.plain {
			if s := rank[k.shape]; g.from <= s && s < g.to {
				t, d := k.nt, e.shapes[s].d
				e.terms = append(e.terms, term{tau: at(t), delta: e.shapes[s].at, n: k.n, t: t, t1: t - 1, d: d, d1: d - 1})
			}
		}
		g.last = len(e.terms)
	}
	e.first = make([]plainTerm, len(e.shapes))
	for _, t := range b.plain {
		k := expand(t.n, t.nt, rank[t.shape])
		if f := &e.first[k.shape]; *f == (plainTerm{}) {
			*f = k
		} else {
			e.plain = append(e.plain, k)
		}
	}
	for _, t := range b.special {
		t.shape, t.power = rank[t.shape], at(t.t)
		t.bell = slices.IndexFunc(e.bells, func(b bell) bool { return b.at == t.shape })
		t.group = slices.IndexFunc(e.groups, func(g group) bool { return g.from <= t.shape && t.shape < g.to })
		if t.kind == tauExp {
			t.mPower = at(t.beta)
		}
		e.special = append(e.special, t)
	}
	for _, r := range e.ideal.TauPowers {
		e.ideal.powers = append(e.ideal.powers, expand(r[0], r[1], 0))
	}
	return nil
}

// orderShapes sorts the factors in delta by their exponential, bells last, and returns the new number of each.
func (b *builder) orderShapes() (rank []int) {
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
	rank = make([]int, len(order))
	e := b.eq
	for at, i := range order {
		k := b.keys[i]
		rank[i] = at
		e.shapes = append(e.shapes, shape{d: k.d, at: b.powerIndex(k.d)})
		if k.bell {
			e.bells = append(e.bells, bell{at: at, eta: k.eta, epsilon: k.epsilon})
			continue
		}
		last := len(e.groups) - 1
		if last < 0 || e.groups[last].l != k.l || e.groups[last].g != k.g {
			e.groups = append(e.groups, group{from: at, l: k.l, lf: float64(k.l), g: k.g})
			last++
		}
		e.groups[last].to = at + 1
		e.maxDelta = max(e.maxDelta, k.l)
	}
	return rank
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

// planPowers returns a table that holds tau to every exponent. Multiples of one quarter are made by products from tau, 1/tau
// and their roots, each to half a unit in the last place; the others cost one exponential, or are the product
// of two that are there. Equations whose terms cancel, such as that of R22, need every digit.
func planPowers(exponents []float64) powerTable {
	exponents = slices.Clone(exponents)
	slices.SortFunc(exponents, func(x, y float64) int {
		return cmp.Or(cmp.Compare(math.Abs(x), math.Abs(y)), cmp.Compare(y, x))
	})
	exponents = slices.Compact(exponents)
	p := powerTable{t: []float64{0, 1, -1}}
	at := map[float64]int{0: 0, 1: 1, -1: 2}
	put := func(t float64) int {
		at[t] = len(p.t)
		p.t = append(p.t, t)
		return at[t]
	}
	var need func(t float64) int
	need = func(t float64) int {
		if i, ok := at[t]; ok {
			return i
		}
		quarters := t*4 == math.Trunc(t*4) && math.Abs(t) <= 64
		if a := math.Abs(t); a == 0.5 || a == 0.25 {
			a := need(2 * t)
			i := put(t)
			p.roots = append(p.roots, powerStep{i, a, 0})
			return i
		}
		for _, u := range p.t { // the product of two that are there
			j, ok := at[t-u]
			if ok && (quarters && u*t > 0 && (t-u)*t > 0 || !quarters && u+(t-u) == t) {
				a := at[u]
				i := put(t)
				p.products = append(p.products, powerStep{i, a, j})
				return i
			}
		}
		if !quarters {
			i := put(t)
			p.exps = append(p.exps, i)
			return i
		}
		part := math.Trunc(t / 2)
		switch whole := math.Trunc(t); {
		case math.Abs(t) < 1: // three quarters
			part = math.Copysign(0.5, t)
		case whole != t:
			part = whole
		}
		a, b := need(part), need(t-part)
		i := put(t)
		p.products = append(p.products, powerStep{i, a, b})
		return i
	}
	for _, t := range exponents {
		need(t)
	}
	return p
}
