package api

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"math"
	"strings"
	"sync"
	"testing"

	"github.com/prometheus/client_golang/prometheus/testutil"

	"dewmark/props"
	"dewmark/props/blend"
)

// UnmarshalJSON lets the standard library judge our own decoder.
func (s *substance) UnmarshalJSON(b []byte) error {
	if b[0] == '"' || string(b) == "null" {
		return json.Unmarshal(b, &s.designation)
	}
	var given struct {
		Mass *fractions `json:"mass_fractions"`
		Mole *fractions `json:"mole_fractions"`
	}
	if err := json.Unmarshal(b, &given); err != nil {
		return err
	}
	switch {
	case (given.Mass == nil) == (given.Mole == nil):
		return errors.New("not exactly one kind of fractions")
	case given.Mass != nil:
		s.mixture = &mixture{blend.ByMass, *given.Mass}
	default:
		s.mixture = &mixture{blend.ByMole, *given.Mole}
	}
	return nil
}

// UnmarshalJSON keeps the order of the components.
func (f *fractions) UnmarshalJSON(b []byte) error {
	d := json.NewDecoder(bytes.NewReader(b))
	if brace, err := d.Token(); err != nil || brace != json.Delim('{') {
		return fmt.Errorf("%v, %w", brace, err)
	}
	for d.More() {
		name, err := d.Token()
		if err != nil {
			return err
		}
		var x float64
		if err := d.Decode(&x); err != nil {
			return err
		}
		f.names, f.values = append(f.names, name.(string)), append(f.values, x)
	}
	return nil
}

// Whatever makes no mixture is refused with a pointer to what is wrong.
func TestMixtureRefusals(t *testing.T) {
	for _, tt := range []struct{ refrigerant, kind, pointer, code, says string }{
		{`{"mass_fractions": {"R32": 0.6, "R1234y": 0.4}}`, "unknown-refrigerant", "#/refrigerant/mass_fractions/R1234y", "unknown_refrigerant", "did you mean R1234yf"},
		{`{"mass_fractions": {"R410A": 0.6, "R32": 0.4}}`, "unknown-refrigerant", "#/refrigerant/mass_fractions/R410A", "unknown_refrigerant", "no pure refrigerant"},
		{`{"mass_fractions": {"R32": 0.6, "R1234yf": 0.5}}`, "invalid-request", "#/refrigerant/mass_fractions", "composition", "add up to 1.1 instead of 1"},
		{`{"mole_fractions": {"R32": 60, "R1234yf": 40}}`, "invalid-request", "#/refrigerant/mole_fractions/R32", "composition", "fraction 60 is outside"},
		{`{"mole_fractions": {"R1234yf": -0.4, "R32": 1}}`, "invalid-request", "#/refrigerant/mole_fractions/R32", "composition", "fraction 1 is outside"},
		{`{"mass_fractions": {"R32": 0.6, "r-32": 0.4}}`, "invalid-request", "#/refrigerant/mass_fractions/r-32", "composition", "stands there twice"},
		{`{"mass_fractions": {"R32": 0.9999}}`, "invalid-request", "#/refrigerant/mass_fractions", "composition", "has 1 components"},
		{`{"mass_fractions": {}}`, "invalid-request", "#/refrigerant/mass_fractions", "composition", "has 0 components"},
		{`{"mass_fractions": {` + strings.Repeat(`"R32 ": 0.1, "R32": 0.1, "r32": 0.1, `, 1) + `"a": 0.1, "b": 0.1, "c": 0.1, "d": 0.1, "e": 0.1, "f": 0.1, "g": 0.1, "h": 0.1}}`, "invalid-request", "#/refrigerant/mass_fractions", "too_many", "11 components; a mixture has 2 to 10"},
	} {
		body := `{"refrigerant": ` + tt.refrigerant + `, "points": [{"temperature": 0, "quality": 0}]}`
		w := serve(testHandler(t), newRequest("/v1/states", body))
		problem, err := decodeAll(w.Body.String())
		if err != nil || len(problem) != 1 {
			t.Fatal(err)
		}
		e := at(problem[0], "errors", 0)
		if w.Code != 422 || at(problem[0], "type") != "/problems/"+tt.kind || at(e, "pointer") != tt.pointer || at(e, "code") != tt.code ||
			!strings.Contains(fmt.Sprint(at(e, "detail")), tt.says) {
			t.Errorf("%s: %d %s", tt.refrigerant, w.Code, w.Body)
		}
	}
	// In a cascade the pointers lead to the upper circuit.
	p := answer(t, "POST", "/v1/cycles", `{"refrigerant": "R744", "layout": "cascade", "evaporation": {"temperature": -30}, "condensation": {"temperature": 30},
		"cascade": {"upper": [{"mass_fractions": {"R32": 0.6, "R9": 0.4}}]}}`, 422)
	if got := at(p, "errors", 0, "pointer"); got != "#/cascade/upper/0/mass_fractions/R9" {
		t.Errorf("%v", p)
	}
}

// Pairs whose parameters nobody has tested need the caller's word, and then a caution goes with the answer.
func TestUnverifiedPairs(t *testing.T) {
	const body = `{"refrigerant": {"mass_fractions": {%s}}, "points": [{"temperature": -30, "quality": 1}]%s}`
	pair := unverifiedPair(t)
	shares := fmt.Sprintf(`%q: 0.5, %q: 0.5`, pair[0], pair[1])
	p := answer(t, "POST", "/v1/states", fmt.Sprintf(body, shares, ""), 422)
	if at(p, "type") != "/problems/unverified-pair" || at(p, "errors", 0, "pointer") != "#/accept_estimates" {
		t.Errorf("%v", p)
	}
	resp := answer(t, "POST", "/v1/states", fmt.Sprintf(body, shares, `, "accept_estimates": true`), 200)
	if at(resp, "basis", "pairs", 0, "status") != "unverified" || at(resp, "cautions", 0, "code") != "pair_unverified" {
		t.Errorf("%v", resp)
	}
}

// unverifiedPair returns a pair of refrigerants that the data mark as unverified.
func unverifiedPair(t *testing.T) [2]string {
	t.Helper()
	catalogue, err := theCatalogue()
	if err != nil {
		t.Fatal(err)
	}
	names := catalogue.PureDesignations()
	for i, a := range names {
		for _, b := range names[:i] {
			shares := []blend.Share{{Designation: a, Fraction: 0.5}, {Designation: b, Fraction: 0.5}}
			_, err := catalogue.Mixture(blend.Composition{Shares: shares}, props.DefaultDatum, false)
			if _, ok := errors.AsType[*blend.UnverifiedPairError](err); ok {
				return [2]string{a, b}
			}
		}
	}
	t.Skip("no pair is unverified any more")
	return [2]string{}
}

// The order of the components, their spelling and the kind of fraction do not matter to what comes out.
func TestMixturesAreCanonical(t *testing.T) {
	// The molar masses of R32 and R125 are 52.024 and 120.021 g/mol, so that equal moles are 0.30239 and 0.69761 by mass.
	states := map[string]any{}
	for _, refrigerant := range []string{
		`{"mass_fractions": {"R32": 0.6, "R1234yf": 0.4}}`, `{"mass_fractions": {"hfo-1234YF": 0.4, "r32": 0.6}}`,
	} {
		resp := answer(t, "POST", "/v1/states", `{"refrigerant": `+refrigerant+`, "points": [{"temperature": 0, "quality": 0.5}]}`, 200)
		states[fmt.Sprint(resp)] = resp
		if at(resp, "refrigerant") != "R32/R1234yf 60/40 % by mass" || at(resp, "basis", "source") != "composition of the request" {
			t.Errorf("%v", resp)
		}
	}
	if len(states) != 1 {
		t.Errorf("%d different answers: %v", len(states), states)
	}
	// R454B is R32 and R1234yf, 68.9 and 31.1 % by mass (ISO 817).
	listed := answer(t, "POST", "/v1/states", `{"refrigerant": "R454B", "points": [{"temperature": 0, "quality": 0.5}]}`, 200)
	free := answer(t, "POST", "/v1/states", `{"refrigerant": {"mass_fractions": {"R32": 0.689, "R1234yf": 0.311}}, "points": [{"temperature": 0, "quality": 0.5}]}`, 200)
	if fmt.Sprint(at(listed, "states")) != fmt.Sprint(at(free, "states")) {
		t.Errorf("listed %v, free %v", at(listed, "states"), at(free, "states"))
	}
	query := answer(t, "GET", "/v1/states?refrigerant.mass_fractions.R32=0.689&refrigerant.mass_fractions.R1234yf=0.311&temperature=0&quality=0.5", "", 200)
	if at(query, "pressure") != at(listed, "states", 0, "pressure") {
		t.Errorf("%v", query)
	}
}

// Concurrent requests for one mixture make it once; the least wanted one goes when there is no room.
func TestMixturesAreKept(t *testing.T) {
	a := newAPI(t, func(o *Options) { o.MaxMixtures = 2 })
	ask := func(share float64) {
		body := fmt.Sprintf(`{"refrigerant": {"mass_fractions": {"R32": %g, "R134a": %g}}, "points": [{"temperature": 0, "quality": 0}], "properties": ["pressure"]}`, share, 1-share)
		if w := serve(a.Handler(), newRequest("/v1/states", body)); w.Code != 200 {
			t.Errorf("%d %s", w.Code, w.Body)
		}
	}
	want := func(hits, misses, kept float64) {
		t.Helper()
		for _, m := range []struct {
			name      string
			got, want float64
		}{
			{"hits", testutil.ToFloat64(a.metrics.mixtureHits), hits},
			{"misses", testutil.ToFloat64(a.metrics.mixtureMisses), misses},
			{"kept", testutil.ToFloat64(a.metrics.mixturesKept), kept},
		} {
			if m.got != m.want {
				t.Errorf("%s %g, want %g", m.name, m.got, m.want)
			}
		}
	}
	var wg sync.WaitGroup
	for range 8 {
		wg.Go(func() { ask(0.5) })
	}
	wg.Wait()
	want(7, 1, 1)
	ask(0.25)
	ask(0.5)
	want(8, 2, 2)
	ask(0.75) // 0.25 goes
	ask(0.5)
	want(9, 3, 2)
	ask(0.25)
	want(9, 4, 2)
	bad := `{"refrigerant": {"mass_fractions": {"R32": 0.5, "R134a": 0.6}}, "points": [{"temperature": 0, "quality": 0}]}`
	serve(a.Handler(), newRequest("/v1/states", bad))
	want(9, 5, 1) // it took the place of one that was kept, and is forgotten
}

// A blend shows what each of its pairs rests on, and its list entry the glide.
func TestBlendProvenance(t *testing.T) {
	for _, row := range at(answer(t, "GET", "/v1/refrigerants", "", 200), "refrigerants").([]any) {
		name := fmt.Sprint(at(row, "designation"))
		composition := at(row, "composition").([]any)
		sum := 0.
		for _, c := range composition {
			sum += at(c, "mass_fraction").(float64)
		}
		if math.Abs(sum-1) > 1e-12 {
			t.Errorf("%s: mass fractions add up to %.15g", name, sum)
		}
		if glide, ok := at(row, "glide").(float64); ok && (glide < 0 || math.Abs(glide-(at(row, "normal_dew_point").(float64)-at(row, "normal_boiling_point").(float64))) > 1e-9) {
			t.Errorf("%s: %v", name, row)
		}
		if at(row, "kind") == "pure" {
			continue
		}
		detail := answer(t, "GET", "/v1/refrigerants/"+name, "", 200)
		n := len(composition)
		if pairs := at(detail, "pairs").([]any); len(pairs) != n*(n-1)/2 {
			t.Errorf("%s has %d pairs", name, len(pairs))
		}
		if r := at(detail, "residuals", "normal_boiling_point"); math.Abs(r.(float64)) > 0.6 {
			t.Errorf("%s: normal boiling point off by %v K", name, r)
		}
	}
	// ASHRAE 34 prints -50.9 and -50.0 °C for R454B.
	b := answer(t, "GET", "/v1/refrigerants/R454B", "", 200)
	if x := at(b, "normal_boiling_point").(float64); math.Abs(x+50.9) > 0.1 {
		t.Errorf("normal boiling point %g", x)
	}
	if x := at(b, "normal_dew_point").(float64); math.Abs(x+50.0) > 0.15 {
		t.Errorf("normal dew point %g", x)
	}
}
