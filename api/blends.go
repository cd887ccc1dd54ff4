package api

import (
	"dewmark/props"
	"dewmark/props/blend"
	"dewmark/props/data"
)

// blendBasis is what the basis of a blend's result has besides.
type blendBasis struct {
	Composition []componentBasis `json:"composition"`
	Pairs       []pairBasis      `json:"pairs"`
}

// componentBasis is one component of a blend and the equation that it brings along.
type componentBasis struct {
	Designation  string  `json:"designation"`
	MassFraction float64 `json:"mass_fraction"`
	MoleFraction float64 `json:"mole_fraction"`
	Source       string  `json:"source"` // of its equation
}

// pairBasis says on what the model of two components rests.
type pairBasis struct {
	Components   [2]string `json:"components"`
	Status       string    `json:"status"` // published, fitted, assumed or unverified
	Source       string    `json:"source"`
	Verification string    `json:"verification"` // what it was compared with, and the residuals
}

// pairDetail is all that is known of the model of two components.
type pairDetail struct {
	pairBasis
	Reducing   string `json:"reducing_functions"`
	Departure  bool   `json:"departure_function"`
	Provenance string `json:"provenance"` // how the numbers were transcribed or fitted
}

// blendDetail is what the description of a blend has besides.
type blendDetail struct {
	Pairs     []pairDetail     `json:"pairs"`
	Residuals *normalResiduals `json:"residuals"`
}

// normalResiduals are temperatures at 101.325 kPa, those of the model less the published ones.
type normalResiduals struct {
	Bubble *float64 `json:"normal_boiling_point"`
	Dew    *float64 `json:"normal_dew_point"`
}

// pairStatuses are the words of the wire.
var pairStatuses = map[data.PairStatus]string{
	data.Published: "published", data.Fitted: "fitted", data.Assumed: "assumed", data.Unverified: "unverified",
}

func blendBasisOf(id *props.Identity) *blendBasis {
	b := &blendBasis{Composition: compositionOf(id)}
	for i := range id.Pairs {
		b.Pairs = append(b.Pairs, pairBasisOf(&id.Pairs[i]))
	}
	return b
}

func compositionOf(id *props.Identity) []componentBasis {
	composition := make([]componentBasis, len(id.Composition))
	for i, s := range id.Composition {
		composition[i] = componentBasis(s)
	}
	return composition
}

func pairBasisOf(p *blend.Pair) pairBasis {
	return pairBasis{Components: p.Components, Status: pairStatuses[p.Status], Source: p.Source, Verification: p.Verified}
}

func blendDetailOf(b *props.Blend, id *props.Identity, u *units) *blendDetail {
	d := &blendDetail{}
	for i := range id.Pairs {
		p := &id.Pairs[i]
		d.Pairs = append(d.Pairs, pairDetail{pairBasisOf(p), p.Form, p.Departure, p.Provenance})
	}
	if bubble, dew, ok := b.Residuals(); ok {
		d.Residuals = &normalResiduals{u.known(kindTemperatureDifference, bubble), u.known(kindTemperatureDifference, dew)}
	}
	return d
}

// componentsOf names the components of a blend in the order of its compositions; none of a pure refrigerant.
func componentsOf(r props.Refrigerant) []string {
	if b, ok := r.(*props.Blend); ok {
		return b.Components()
	}
	return nil
}
