package api

import (
	"container/list"
	"errors"
	"strconv"
	"sync"

	"dewmark/props"
	"dewmark/props/blend"
)

// mixtures keeps the mixtures of late requests: following a phase envelope takes far longer than most that is asked of it.
// A kept mixture answers as a new one would. Requests that want the same one at the same time make it once.
type mixtures struct {
	mu      sync.Mutex
	byKey   map[string]*list.Element
	recent  *list.List // of *madeMixture, the one wanted last in front
	limit   int
	metrics *metrics
}

type madeMixture struct {
	key  string
	make func() (*props.Blend, error) // makes it when first called
}

func newMixtures(limit int, m *metrics) *mixtures {
	return &mixtures{byKey: map[string]*list.Element{}, recent: list.New(), limit: limit, metrics: m}
}

// get returns the mixture with that key, which build makes when it is not kept. A mixture without a phase envelope is kept
// too, since that takes as long to find out; other failures are not.
func (m *mixtures) get(key string, build func() (*props.Blend, error)) (*props.Blend, error) {
	kept := m.entry(key, build)
	b, err := kept.make()
	if _, costly := errors.AsType[*blend.EnvelopeError](err); err != nil && !costly {
		m.forget(kept)
	}
	return b, err
}

// entry returns what is kept under key, entered now if need be.
func (m *mixtures) entry(key string, build func() (*props.Blend, error)) *madeMixture {
	m.mu.Lock()
	defer m.mu.Unlock()
	if e, ok := m.byKey[key]; ok {
		m.metrics.mixtureHits.Inc()
		m.recent.MoveToFront(e)
		return e.Value.(*madeMixture)
	}
	m.metrics.mixtureMisses.Inc()
	made := &madeMixture{key, sync.OnceValues(build)}
	m.byKey[key] = m.recent.PushFront(made)
	if m.recent.Len() > m.limit {
		m.drop(m.recent.Back())
	}
	m.metrics.mixturesKept.Set(float64(m.recent.Len()))
	return made
}

// forget drops an entry unless its place has been taken.
func (m *mixtures) forget(made *madeMixture) {
	m.mu.Lock()
	defer m.mu.Unlock()
	if e, ok := m.byKey[made.key]; ok && e.Value == made {
		m.drop(e)
	}
	m.metrics.mixturesKept.Set(float64(m.recent.Len()))
}

func (m *mixtures) drop(e *list.Element) {
	m.recent.Remove(e)
	delete(m.byKey, e.Value.(*madeMixture).key)
}

// mixtureKey names a composition to the last digit, and whether estimates are accepted for it.
func mixtureKey(c *blend.Composition, acceptEstimates bool) string {
	key := []byte{'0' + byte(c.Basis)}
	key = strconv.AppendBool(key, acceptEstimates)
	for _, s := range c.Shares {
		key = append(key, ' ')
		key = append(key, s.Designation...)
		key = append(key, ' ')
		key = strconv.AppendFloat(key, s.Fraction, 'g', -1, 64)
	}
	return string(key)
}

// mixture finds the mixture that a request names.
func (a *API) mixture(m *mixture, d props.Datum, acceptEstimates bool, u *units) (*props.Blend, error) {
	composition, places, err := m.resolve(a.catalogue)
	if err != nil {
		return nil, err
	}
	b, err := a.mixtures.get(mixtureKey(&composition, acceptEstimates), func() (*props.Blend, error) {
		return a.catalogue.Mixture(composition, props.DefaultDatum, acceptEstimates)
	})
	if err != nil {
		return nil, m.problem(err, places, u)
	}
	return b.WithDatum(d)
}
