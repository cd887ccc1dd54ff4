package api

import (
	"errors"
	"fmt"
	"reflect"
	"slices"
	"strings"
	"unicode/utf8"

	"dewmark/props"
	"dewmark/props/blend"
)

// substance is what a request computes with: a refrigerant by its designation, or a mixture by its fractions.
type substance struct {
	designation string
	mixture     *mixture
}

// mixture is a composition under the names that a request has for its components.
type mixture struct {
	basis     blend.FractionBasis
	fractions fractions
}

// fractions holds the members of an object of numbers in their order.
type fractions struct {
	names  []string
	values []float64
}

var (
	typeOfSubstance = reflect.TypeFor[substance]()
	fractionMembers = [...]string{blend.ByMass: "mass_fractions", blend.ByMole: "mole_fractions"}
)

const maxDesignation = 64 // characters; far more than any name has

// decode reads a designation or an object of fractions.
func (s *substance) decode(d *decoder, t token) error {
	switch t.kind {
	case '"':
		text, err := d.unquote(t)
		if err != nil {
			return err
		}
		if utf8.RuneCount(text) > maxDesignation {
			return d.fault("too_long", fmt.Sprintf("may have %d characters at most", maxDesignation))
		}
		s.designation = string(text)
		return nil
	case '{':
		var given struct {
			Mass *fractions `json:"mass_fractions"`
			Mole *fractions `json:"mole_fractions"`
		}
		faults := len(d.faults)
		if err := d.object(reflect.ValueOf(&given).Elem()); err != nil {
			return err
		}
		switch {
		case given.Mass != nil && given.Mole != nil:
			return d.fault("surplus", "mass_fractions and mole_fractions say one thing; give one of them")
		case given.Mass != nil:
			s.mixture = &mixture{blend.ByMass, *given.Mass}
		case given.Mole != nil:
			s.mixture = &mixture{blend.ByMole, *given.Mole}
		case len(d.faults) == faults:
			return d.fault("missing", "a mixture has mass_fractions or mole_fractions")
		}
		return nil
	}
	return d.mismatch(t, `a designation such as "R454B", or an object with mass_fractions or mole_fractions`)
}

// decode reads an object whose members are numbers.
func (f *fractions) decode(d *decoder, t token) error {
	if t.kind != '{' {
		return d.mismatch(t, "an object of designations and fractions")
	}
	seen := map[string]bool{}
	return d.list('}', func() error {
		raw, err := d.name()
		if err != nil {
			return err
		}
		name := string(raw)
		d.path[len(d.path)-1].name = name
		if seen[name] {
			return d.refuse("duplicate_member", "the component comes twice; once is allowed")
		}
		seen[name] = true
		var x float64
		err = d.value(reflect.ValueOf(&x).Elem())
		f.names, f.values = append(f.names, name), append(f.values, x)
		return err
	})
}

// member names the member of the request that holds the fractions.
func (m *mixture) member() string { return fractionMembers[m.basis] }

// pointer leads from the refrigerant to a component, or to all of them when i is negative.
func (m *mixture) pointer(i int) string {
	if i < 0 {
		return pointerTo([]string{"refrigerant", m.member()})
	}
	return pointerTo([]string{"refrigerant", m.member(), m.fractions.names[i]})
}

// resolve returns the composition with its components in natural order, and for each the place that it has in the request.
func (m *mixture) resolve(c *props.Catalogue) (blend.Composition, []int, error) {
	if n := len(m.fractions.names); n > blend.MaxComponents {
		return blend.Composition{}, nil, invalidItem(MemberError{
			Pointer: m.pointer(-1), Code: "too_many", Detail: fmt.Sprintf("%d components; a mixture has 2 to %d", n, blend.MaxComponents),
		})
	}
	type component struct {
		blend.Share
		at int
	}
	components := make([]component, len(m.fractions.names))
	for i, name := range m.fractions.names {
		id, err := c.Component(name)
		if e, ok := errors.AsType[*props.UnknownRefrigerantError](err); ok {
			return blend.Composition{}, nil, unknownComponent(e, m.pointer(i))
		}
		if err != nil {
			return blend.Composition{}, nil, err
		}
		components[i] = component{blend.Share{Designation: id, Fraction: m.fractions.values[i]}, i}
	}
	slices.SortStableFunc(components, func(a, b component) int { return props.CompareDesignations(a.Designation, b.Designation) })
	composition := blend.Composition{Basis: m.basis}
	places := make([]int, len(components))
	for i, k := range components {
		composition.Shares = append(composition.Shares, k.Share)
		places[i] = k.at
	}
	return composition, places, nil
}

func unknownComponent(e *props.UnknownRefrigerantError, pointer string) *Problem {
	detail := quote(e.Name) + " is no pure refrigerant of the catalogue, of which mixtures are made"
	if len(e.Suggestions) > 0 {
		detail += "; did you mean " + strings.Join(e.Suggestions, ", ") + "?"
	}
	p := unprocessable("unknown-refrigerant", "Unknown refrigerant", detail, MemberError{Pointer: pointer, Code: "unknown_refrigerant", Detail: detail})
	p.Suggestions = e.Suggestions
	return p
}

// mixtureProblem tells why a composition makes no mixture. Places leads from its components to those of the request.
func (m *mixture) problem(err error, places []int, u *units) error {
	if e, ok := errors.AsType[*blend.CompositionError](err); ok {
		at := e.Index
		if at >= 0 {
			at = places[at]
		}
		return invalidItem(MemberError{Pointer: m.pointer(at), Code: "composition", Detail: e.Reason})
	}
	if e, ok := errors.AsType[*blend.UnverifiedPairError](err); ok {
		pairs := make([]string, len(e.Pairs))
		for i, p := range e.Pairs {
			pairs[i] = strings.Join(p.Components[:], "/") + " (" + p.Provenance + ")"
		}
		detail := "the mixture parameters of " + strings.Join(pairs, ", ") + " are not verified; with accept_estimates true the service computes with them all the same"
		return unprocessable("unverified-pair", "Unverified mixture parameters", detail, MemberError{Pointer: "#/accept_estimates", Code: "not_accepted", Detail: detail})
	}
	if e, ok := errors.AsType[*blend.EnvelopeError](err); ok {
		detail := fmt.Sprintf("the model gives %s no bubble and dew line that meet in one critical point: %s, near %s", e.Refrigerant, e.Reason, u.text(kindTemperature, e.T))
		return unprocessable("no-phase-envelope", "No ordinary phase envelope", detail, MemberError{Pointer: m.pointer(-1), Code: "no_phase_envelope", Detail: detail})
	}
	return err
}
