package props

import (
	"cmp"
	"context"
	"fmt"
	"maps"
	"runtime"
	"slices"
	"strconv"
	"strings"
	"sync"
	"sync/atomic"
	"unicode"

	"dewmark/props/blend"
	"dewmark/props/data"
)

// Catalogue holds every refrigerant of the embedded data, pure ones and blends. It is safe for concurrent use.
type Catalogue struct {
	library *blend.Library
	blends  map[string]string // designation by folded name
	fluids  []*fluid          // in natural order of designation
	byName  map[string]*fluid // by folded name
	exact   map[string]*fluid // by designation, as most write it
}

// NewCatalogue reads the embedded coefficient files. The saturation curve of a refrigerant is made when it is first
// needed, or by [Catalogue.Warm].
func NewCatalogue() (*Catalogue, error) {
	records, err := data.Load()
	if err != nil {
		return nil, err
	}
	c := &Catalogue{byName: map[string]*fluid{}, exact: map[string]*fluid{}}
	for _, r := range records {
		f, err := newFluid(r)
		if err != nil {
			return nil, err
		}
		c.fluids = append(c.fluids, f)
		c.exact[r.ID] = f
		for _, name := range append([]string{r.ID, r.Name}, r.Aliases...) {
			key := foldName(name)
			if other, taken := c.byName[key]; taken && other != f {
				return nil, fmt.Errorf("props: name %q belongs to both %s and %s", name, other.rec.ID, r.ID)
			}
			c.byName[key] = f
		}
	}
	if err := addTransport(c.fluids); err != nil {
		return nil, err
	}
	if c.library, err = blend.NewLibrary(records); err != nil {
		return nil, err
	}
	c.blends = map[string]string{}
	for _, b := range c.library.Listed() {
		c.blends[foldName(b.Designation)] = b.Designation
	}
	slices.SortFunc(c.fluids, func(a, b *fluid) int { return CompareDesignations(a.rec.ID, b.rec.ID) })
	return c, nil
}

// Designations returns the ISO 817 designation of every refrigerant in natural order: R32 before R134a before R1234yf.
func (c *Catalogue) Designations() []string {
	names := make([]string, 0, len(c.fluids)+len(c.blends))
	for _, f := range c.fluids {
		names = append(names, f.rec.ID)
	}
	for _, b := range c.library.Listed() {
		names = append(names, b.Designation)
	}
	slices.SortFunc(names, CompareDesignations)
	return names
}

// PureDesignations is [Catalogue.Designations] without the blends.
func (c *Catalogue) PureDesignations() []string {
	names := make([]string, len(c.fluids))
	for i, f := range c.fluids {
		names[i] = f.rec.ID
	}
	return names
}

// Refrigerant returns the refrigerant called name, its enthalpies and entropies counted from datum. Spelling is
// forgiving: case, spaces, hyphens and brackets do not matter, trade prefixes such as HFC and common names are known.
// It returns an [*UnknownRefrigerantError] or a [*DatumError].
func (c *Catalogue) Refrigerant(name string, datum Datum) (Refrigerant, error) {
	if _, pure := c.exact[name]; pure {
		return view(c.Pure(name, datum))
	}
	if designation, ok := c.blends[foldName(name)]; ok {
		b, err := c.library.Blend(designation, datum)
		if err != nil {
			return nil, err
		}
		return c.newBlend(b)
	}
	return view(c.Pure(name, datum))
}

// view keeps a nil pointer from becoming a Refrigerant that is not nil.
func view(r *Pure, err error) (Refrigerant, error) {
	if err != nil {
		return nil, err
	}
	return r, nil
}

// Pure is [Catalogue.Refrigerant] for a refrigerant that is not a blend.
func (c *Catalogue) Pure(name string, datum Datum) (*Pure, error) {
	f, ok := c.exact[name]
	if !ok {
		f, ok = c.byName[foldName(name)]
	}
	if !ok {
		return nil, &UnknownRefrigerantError{Name: name, Suggestions: c.near(name, true)}
	}
	return f.withDatum(datum)
}

// Component returns the designation of the pure refrigerant called name, spelt as in [Catalogue.Refrigerant]. It returns an
// [*UnknownRefrigerantError] that suggests nothing but what a mixture can be made of.
func (c *Catalogue) Component(name string) (string, error) {
	if f, ok := c.byName[foldName(name)]; ok {
		return f.rec.ID, nil
	}
	return "", &UnknownRefrigerantError{Name: name, Suggestions: c.near(name, false)}
}

// Mixture returns a mixture of refrigerants by mass or mole fractions; the names of the components may be spelt as in
// [Catalogue.Refrigerant]. A pair of components without published parameters is modelled by combining rules and shows in
// [Refrigerant.Reservations]; one whose parameters nobody has tested needs acceptUnverified. The call follows the phase
// envelope, which takes some 10 to 100 ms, so that callers keep the result. It returns an [*UnknownRefrigerantError], a
// [*blend.CompositionError], a [*blend.EnvelopeError], a [*blend.UnverifiedPairError] or a [*DatumError].
func (c *Catalogue) Mixture(composition blend.Composition, datum Datum, acceptUnverified bool) (*Blend, error) {
	shares := slices.Clone(composition.Shares)
	for i := range shares {
		id, err := c.Component(shares[i].Designation)
		if err != nil {
			return nil, err
		}
		shares[i].Designation = id
	}
	composition.Shares = shares
	b, err := c.library.Mixture(composition, datum, acceptUnverified)
	if err != nil {
		return nil, err
	}
	return c.newBlend(b)
}

// Warm makes the saturation curves of all pure refrigerants on all cores. It returns early with the cause when ctx ends.
func (c *Catalogue) Warm(ctx context.Context) error {
	var wg sync.WaitGroup
	var next atomic.Int64
	for range min(runtime.GOMAXPROCS(0), len(c.fluids)) {
		wg.Go(func() {
			for ctx.Err() == nil {
				i := int(next.Add(1)) - 1
				if i >= len(c.fluids) {
					return
				}
				c.fluids[i].saturation()
			}
		})
	}
	wg.Wait()
	return context.Cause(ctx)
}

// Curves returns how many saturation curves of pure refrigerants have been made and the memory they take in bytes.
func (c *Catalogue) Curves() (made, bytes int) {
	for _, f := range c.fluids {
		if curve := f.made.Load(); curve != nil {
			made++
			bytes += curve.Size()
		}
	}
	return made, bytes
}

// WarmBlends makes the phase envelopes of all listed blends, one after the other: some 30 ms each, otherwise spent by the
// first request for a blend. It returns early with the cause when ctx ends, and the first failure.
func (c *Catalogue) WarmBlends(ctx context.Context) error {
	for _, b := range c.library.Listed() {
		if ctx.Err() != nil {
			return context.Cause(ctx)
		}
		if _, err := c.library.Blend(b.Designation, DefaultDatum); err != nil {
			return err
		}
	}
	return nil
}

// foldName reduces a name to what distinguishes it: lower case letters and digits.
func foldName(name string) string {
	return strings.Map(func(r rune) rune {
		if unicode.IsLetter(r) || unicode.IsDigit(r) {
			return unicode.ToLower(r)
		}
		return -1
	}, name)
}

// near returns up to three designations, those of blends among them or not, whose name or alias is closest to name by edit
// distance.
func (c *Catalogue) near(name string, blends bool) []string {
	key := foldName(name)
	if len(key) > 40 { // longer than any name; the distance would only cost time
		return nil
	}
	best := map[string]int{}
	known := map[string]string{}
	for name, f := range c.byName {
		known[name] = f.rec.ID
	}
	if blends {
		maps.Copy(known, c.blends)
	}
	for known, id := range known {
		d := editDistance(key, known)
		if len(key) >= 3 && strings.HasPrefix(known, key) {
			d = 0 // an unfinished name
		}
		if d > 1 && len(key) < 6 || d > 2 { // a short name has too many neighbours at two letters
			continue
		}
		if have, ok := best[id]; !ok || d < have {
			best[id] = d
		}
	}
	ids := make([]string, 0, len(best))
	for id := range best {
		ids = append(ids, id)
	}
	slices.SortFunc(ids, func(a, b string) int {
		return cmp.Or(cmp.Compare(best[a], best[b]), CompareDesignations(a, b))
	})
	return ids[:min(3, len(ids))]
}

// editDistance returns the Levenshtein distance of a and b.
func editDistance(a, b string) int {
	row := make([]int, len(b)+1)
	for j := range row {
		row[j] = j
	}
	for i := range len(a) {
		diagonal := row[0]
		row[0] = i + 1
		for j := range len(b) {
			change := diagonal
			if a[i] != b[j] {
				change++
			}
			diagonal = row[j+1]
			row[j+1] = min(change, row[j]+1, row[j+1]+1)
		}
	}
	return row[len(b)]
}

// CompareDesignations orders designations by the number in them, then as text, for [slices.SortFunc].
func CompareDesignations(a, b string) int {
	return cmp.Or(cmp.Compare(designationNumber(a), designationNumber(b)), cmp.Compare(a, b))
}

func designationNumber(s string) int {
	start := strings.IndexFunc(s, unicode.IsDigit)
	if start < 0 {
		return 0
	}
	end := start
	for end < len(s) && '0' <= s[end] && s[end] <= '9' {
		end++
	}
	n, _ := strconv.Atoi(s[start:end]) // digits of an embedded designation: cannot fail
	return n
}
