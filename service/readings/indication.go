package readings

import (
	"cmp"
	"math"
	"slices"
)

// strong is how many standard uncertainties a residual must have to count as a sign (|z| < 2 counts as 0).
const strong = 2.0

// strongFeatures is how many signs must speak for a fault before it is named.
const strongFeatures = 2

// indicate ranks the faults of a scheme by how probable their signs are, given the residuals.
func indicate(k *Comparison, scheme string) []Indication {
	var out []Indication
	for _, s := range signatures()[scheme] {
		i := Indication{Fault: s.fault, Source: schemeSources[scheme]}
		signs, supporting := 0, 0
		for _, r := range k.Residuals {
			sign := s.signs[r.Feature]
			if sign == 0 {
				continue
			}
			e := Evidence{r.Feature, sign, r.Normalised, sign.probability(r.Normalised), math.Abs(r.Normalised) > strong}
			if !featureTable[r.Feature].following {
				signs++
				i.Score += math.Log(e.Probability)
			}
			if e.Probability >= 0.5 {
				i.For = append(i.For, e)
				if e.Strong && sign != Stays {
					supporting++
				}
			} else {
				i.Against = append(i.Against, e)
			}
		}
		if supporting < strongFeatures || signs == 0 {
			continue
		}
		i.Score /= float64(signs)
		strength := func(a, b Evidence) int { return cmp.Compare(math.Abs(b.Normalised), math.Abs(a.Normalised)) }
		slices.SortStableFunc(i.For, strength)
		slices.SortStableFunc(i.Against, strength)
		out = append(out, i)
	}
	slices.SortStableFunc(out, func(a, b Indication) int { return cmp.Compare(b.Score, a.Score) })
	return out
}

// leastProbability keeps one absurd residual from outweighing all others.
const leastProbability = 1e-4

// probability returns how probable it is that a true residual has the sign, when z is measured in units of its standard
// uncertainty. A residual within twice that counts as 0.
func (s Sign) probability(z float64) float64 {
	var p float64
	switch s {
	case Rises:
		p = normal(z)
	case Falls:
		p = normal(-z)
	case Stays:
		p = normal(strong-z) - normal(-strong-z)
	case StaysOrRise:
		p = normal(z + strong)
	case StaysOrFall:
		p = normal(strong - z)
	}
	return math.Max(p, leastProbability)
}

// normal is the distribution function of the standard normal distribution.
func normal(z float64) float64 { return math.Erfc(-z/math.Sqrt2) / 2 }
