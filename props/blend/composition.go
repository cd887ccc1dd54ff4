package blend

import (
	"fmt"
	"math"
)

// FractionBasis says what the fractions of a composition count.
type FractionBasis uint8

// The bases.
const (
	ByMass FractionBasis = iota
	ByMole
)

// Share is the part that one refrigerant has in a mixture.
type Share struct {
	Designation string
	Fraction    float64
}

// Composition is a mixture of refrigerants. The fractions add up to one, but for the rounding of percentages.
type Composition struct {
	Basis  FractionBasis
	Shares []Share
}

// MaxComponents is how many components a mixture may have.
const MaxComponents = 10

const (
	minFraction  = 1e-7 // below it the incipient phases of the component leave the range of numbers
	sumTolerance = 2e-3 // three shares of 33.3 % must pass
)

// moleFractions returns the mole fractions of c. find returns the molar mass of a refrigerant in kg/mol and reports
// whether it is known.
func (c *Composition) moleFractions(find func(string) (float64, bool)) ([]float64, error) {
	if n := len(c.Shares); n < 2 || n > MaxComponents {
		return nil, &CompositionError{Index: -1, Value: float64(n), Reason: fmt.Sprintf("has %d components, a mixture has 2 to %d", n, MaxComponents)}
	}
	if c.Basis > ByMole {
		return nil, &CompositionError{Index: -1, Value: float64(c.Basis), Reason: "the basis of the fractions is neither mass nor mole"}
	}
	z := make([]float64, len(c.Shares))
	seen := map[string]bool{}
	var sum, moles float64
	for i, s := range c.Shares {
		fault := func(reason string) error {
			return &CompositionError{Index: i, Designation: s.Designation, Value: s.Fraction, Reason: reason}
		}
		M, ok := find(s.Designation)
		switch {
		case !ok:
			return nil, fault("unknown refrigerant")
		case seen[s.Designation]:
			return nil, fault("stands there twice")
		case !(s.Fraction >= minFraction && s.Fraction < 1):
			return nil, fault(fmt.Sprintf("fraction %g is outside %g to 1", s.Fraction, minFraction))
		}
		seen[s.Designation] = true
		sum += s.Fraction
		z[i] = s.Fraction
		if c.Basis == ByMass {
			z[i] /= M
		}
		moles += z[i]
	}
	if !(math.Abs(sum-1) <= sumTolerance) {
		return nil, &CompositionError{Index: -1, Value: sum, Reason: fmt.Sprintf("fractions add up to %.6g instead of 1", sum)}
	}
	for i := range z {
		z[i] /= moles
	}
	return z, nil
}

// massFractions returns the mass fractions of mole fractions x.
func massFractions(x, M []float64) []float64 {
	w := make([]float64, len(x))
	total := mean(x, M)
	for i := range x {
		w[i] = x[i] * M[i] / total
	}
	return w
}
