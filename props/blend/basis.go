package blend

import (
	"fmt"

	"dewmark/props/data"
)

// Pair says on what the model of two components of a blend rests.
type Pair struct {
	Components [2]string
	Status     data.PairStatus
	Form       string // of the reducing functions: "kunz-wagner" or "lemmon-jacobsen"
	Departure  bool   // whether the pair has a departure function
	Source     string
	Provenance string // how the numbers were transcribed or fitted
	Verified   string // what they were compared with, and the residuals

	parameters data.PairReducing
	departure  *data.Departure
}

// Caution is a reservation about every answer of a blend.
type Caution struct{ Code, Detail string }

// pairTable finds the parameters of a pair in either order.
type pairTable struct {
	known   map[[2]string]*data.Pair
	missing map[[2]string]string
}

func newPairTable(p *data.Pairs) *pairTable {
	t := &pairTable{known: map[[2]string]*data.Pair{}, missing: map[[2]string]string{}}
	for i := range p.Pairs {
		t.known[p.Pairs[i].Components] = &p.Pairs[i]
	}
	for _, m := range p.Missing {
		a, b := m.Components[0], m.Components[1]
		t.missing[[2]string{a, b}], t.missing[[2]string{b, a}] = m.Reason, m.Reason
	}
	return t
}

// find returns the parameters of a and b in that order, Lorentz-Berthelot when the table has none.
func (t *pairTable) find(a, b string) Pair {
	if p, ok := t.known[[2]string{a, b}]; ok {
		return newPair(p)
	}
	if p, ok := t.known[[2]string{b, a}]; ok {
		turned := newPair(p)
		turned.Components = [2]string{a, b}
		if r := &turned.parameters; r.Form == data.KunzWagnerForm {
			r.BetaTemperature, r.BetaVolume = 1/r.BetaTemperature, 1/r.BetaVolume
		}
		return turned
	}
	reason, ok := t.missing[[2]string{a, b}]
	if !ok {
		reason = "no parameters and no data found"
	}
	return Pair{
		Components: [2]string{a, b}, Status: data.Assumed, Form: data.KunzWagnerForm,
		Source:     "Lorentz-Berthelot combining rules (all parameters one)",
		Provenance: reason,
		Verified:   "not tested against data",
		parameters: data.PairReducing{Form: data.KunzWagnerForm, KunzWagner: data.KunzWagner{
			BetaTemperature: 1, GammaTemperature: 1, BetaVolume: 1, GammaVolume: 1,
		}},
	}
}

func newPair(p *data.Pair) Pair {
	return Pair{
		Components: p.Components, Status: p.Status, Form: p.Reducing.Form, Departure: p.Departure != nil,
		Source: p.Source, Provenance: p.Provenance, Verified: p.Verified,
		parameters: p.Reducing, departure: p.Departure,
	}
}

// pairCautions returns what a reader must know about the pairs.
func pairCautions(pairs []Pair) []Caution {
	var out []Caution
	for _, p := range pairs {
		name := p.Components[0] + "/" + p.Components[1]
		switch p.Status {
		case data.Assumed:
			out = append(out, Caution{"pair_assumed", fmt.Sprintf("%s has no published mixture parameters: Lorentz-Berthelot rules are used (%s)", name, p.Provenance)})
		case data.Unverified:
			out = append(out, Caution{"pair_unverified", fmt.Sprintf("the mixture parameters of %s are unverified: %s", name, p.Provenance)})
		}
	}
	return out
}
