package blend

import (
	"fmt"
	"strconv"
	"strings"
	"sync"

	"dewmark/props/data"
)

// Library makes blends from the embedded list and from free compositions. It is safe for concurrent use.
type Library struct {
	records map[string]*data.Record
	pairs   *pairTable
	listed  []data.Blend
	made    map[string]func() (*mixture, error) // of the listed blends, each made once
}

// NewLibrary reads the embedded pairs and blends. records are the pure refrigerants, as [data.Load] returns them.
func NewLibrary(records []data.Record) (*Library, error) {
	pairs, err := data.LoadPairs()
	if err != nil {
		return nil, err
	}
	listed, err := data.LoadBlends()
	if err != nil {
		return nil, err
	}
	l := &Library{records: map[string]*data.Record{}, pairs: newPairTable(pairs), listed: listed, made: map[string]func() (*mixture, error){}}
	for i := range records {
		l.records[records[i].ID] = &records[i]
	}
	for i := range listed {
		b := &listed[i]
		for _, c := range b.Components {
			if l.records[c.Designation] == nil {
				return nil, fmt.Errorf("blend: %s needs %s, which is not among the refrigerants", b.Designation, c.Designation)
			}
		}
		l.made[b.Designation] = sync.OnceValues(func() (*mixture, error) { return l.mixListed(b) })
	}
	return l, nil
}

// Listed returns the blends of nominal composition. The caller must not modify them.
func (l *Library) Listed() []data.Blend { return l.listed }

// Blend returns the listed blend with that ISO 817 designation, its enthalpies and entropies counted from datum. The first
// call for a blend follows its phase envelope, which takes some 10 to 60 ms; later ones share it. It returns an
// [*UnknownBlendError] or a [*DatumError].
func (l *Library) Blend(designation string, datum Datum) (*Blend, error) {
	mix, ok := l.made[designation]
	if !ok {
		return nil, &UnknownBlendError{designation}
	}
	m, err := mix()
	if err != nil {
		return nil, err
	}
	return m.WithDatum(datum)
}

func (l *Library) mixListed(b *data.Blend) (*mixture, error) {
	c := Composition{Basis: ByMass}
	for _, s := range b.Components {
		c.Shares = append(c.Shares, Share{s.Designation, s.MassFraction})
	}
	m, err := l.mix(c, true)
	if err != nil {
		return nil, err
	}
	m.designation, m.listed = b.Designation, b
	return m, nil
}

// Mixture returns a mixture of the given composition. Pairs without parameters are modelled with the Lorentz-Berthelot
// rules, see [Blend.Cautions]. Each call follows the phase envelope anew, some 10 to 100 ms; callers keep the result. It returns a [*CompositionError], a [*DatumError], an [*EnvelopeError], or an
// [*UnverifiedPairError] unless acceptUnverified is set.
func (l *Library) Mixture(c Composition, datum Datum, acceptUnverified bool) (*Blend, error) {
	m, err := l.mix(c, acceptUnverified)
	if err != nil {
		return nil, err
	}
	return m.WithDatum(datum)
}

func (l *Library) mix(c Composition, acceptUnverified bool) (*mixture, error) {
	z, err := c.moleFractions(func(id string) (float64, bool) {
		if r, ok := l.records[id]; ok {
			return r.MolarMass, true
		}
		return 0, false
	})
	if err != nil {
		return nil, err
	}
	records := make([]*data.Record, len(z))
	ids, shares := make([]string, len(z)), make([]string, len(z))
	for i, s := range c.Shares {
		records[i], ids[i] = l.records[s.Designation], s.Designation
		shares[i] = strconv.FormatFloat(100*s.Fraction, 'g', 6, 64)
	}
	model, err := newModel(records, l.pairs.find)
	if err != nil {
		return nil, err
	}
	name := strings.Join(ids, "/") + " " + strings.Join(shares, "/") + " % by " + [...]string{"mass", "mole"}[c.Basis]
	if !acceptUnverified {
		var unverified []Pair
		for _, p := range model.basis {
			if p.Status == data.Unverified {
				unverified = append(unverified, p)
			}
		}
		if len(unverified) > 0 {
			return nil, &UnverifiedPairError{name, unverified}
		}
	}
	return newMixture(model, z, name)
}
