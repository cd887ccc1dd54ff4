package data

import (
	"math"
	"strings"
	"testing"
)

func TestLoadPairs(t *testing.T) {
	p, err := LoadPairs()
	if err != nil {
		t.Fatal(err)
	}
	if len(p.Pairs) != 33 || len(p.Missing) != 3 {
		t.Errorf("%d pairs and %d missing, want 33 and 3", len(p.Pairs), len(p.Missing))
	}
	counts := map[PairStatus]int{}
	for _, q := range p.Pairs {
		counts[q.Status]++
	}
	for status, want := range map[PairStatus]int{Published: 16, Fitted: 12, Assumed: 4, Unverified: 1} {
		if counts[status] != want {
			t.Errorf("%d pairs %s, want %d", counts[status], status, want)
		}
	}
}

// The blend designations and their number are those of the data set; molar masses follow from the components (definition).
func TestLoadBlends(t *testing.T) {
	blends, err := LoadBlends()
	if err != nil {
		t.Fatal(err)
	}
	if len(blends) != 38 {
		t.Errorf("%d blends, want 38", len(blends))
	}
	records, err := Load()
	if err != nil {
		t.Fatal(err)
	}
	mass := map[string]float64{}
	for _, r := range records {
		mass[r.ID] = r.MolarMass
	}
	for _, b := range blends {
		var amount float64
		for _, c := range b.Components {
			amount += c.MassFraction / mass[c.Designation]
		}
		if got := 1 / amount; !(math.Abs(got-b.Computed.MolarMass) < 1e-7) {
			t.Errorf("%s: molar mass %.8g kg/mol, want %.7g", b.Designation, got, b.Computed.MolarMass)
		}
	}
}

func TestDecodePairsRefuses(t *testing.T) {
	const good = `{"pairs": [{"components": ["R32", "R125"], "status": "published", "reducing": {"form": "lemmon-jacobsen",
		"excess_temperature": 28.95, "excess_volume": -6.008e-06}, "departure": null, "source": "s", "provenance": "p", "verified": "v"}]}`
	if _, err := DecodePairs([]byte(good)); err != nil {
		t.Fatalf("the unchanged file: %v", err)
	}
	for _, tt := range []struct{ old, new, want string }{
		{`"R125"`, `"R32"`, "same"},
		{`"R125"`, `"R9999"`, "R9999"},
		{`"published"`, `"guessed"`, "guessed"},
		{`"lemmon-jacobsen"`, `"kunz-wagner"`, "0.3 and 3"},
		{`"lemmon-jacobsen"`, `"other"`, "other"},
		{`28.95`, `2895`, "out of the question"},
		{`"source": "s"`, `"source": ""`, "empty"},
		{`null`, `{"factor": 0, "polynomial": [[1, 1, 1]], "exponential": []}`, "factor"},
		{`null`, `{"factor": 1, "polynomial": [[1, 1]], "exponential": []}`, "row 0"},
		{`"verified"`, `"checked"`, "unknown field"},
	} {
		_, err := DecodePairs([]byte(strings.Replace(good, tt.old, tt.new, 1)))
		if err == nil || !strings.Contains(err.Error(), tt.want) {
			t.Errorf("%s instead of %s: error %v, want one that holds %q", tt.new, tt.old, err, tt.want)
		}
	}
	one := good[strings.Index(good, "[{")+1 : strings.LastIndex(good, "]}")]
	turned := strings.Replace(one, `["R32", "R125"]`, `["R125", "R32"]`, 1)
	if _, err := DecodePairs([]byte(`{"pairs": [` + one + "," + turned + "]}")); err == nil || !strings.Contains(err.Error(), "twice") {
		t.Errorf("a pair and the same turned round: error %v", err)
	}
}

func TestDecodeBlendsRefuses(t *testing.T) {
	const good = `{"blends": [{"designation": "R454B", "components": [{"designation": "R32", "mass_fraction": 0.689},
		{"designation": "R1234yf", "mass_fraction": 0.311}], "published": {"normal_bubble_point": 222.25, "normal_dew_point": 223.15},
		"computed": {"molar_mass": 0.0626136, "normal_bubble_point": 222.267, "normal_dew_point": 223.236}, "source": "s"}]}`
	if _, err := DecodeBlends([]byte(good)); err != nil {
		t.Fatalf("the unchanged file: %v", err)
	}
	for _, tt := range []struct{ old, new, want string }{
		{`0.311`, `0.31`, "add up"},
		{`0.311`, `-0.311`, "positive"},
		{`"R1234yf"`, `"R9999"`, "R9999"},
		{`"R1234yf"`, `"R32"`, "twice"},
		{`222.25`, `322.25`, "out of the question"},
		{`0.0626136`, `0`, "molar mass"},
		{`"source": "s"`, `"source": ""`, "empty"},
		{`"source"`, `"sauce"`, "unknown field"},
	} {
		_, err := DecodeBlends([]byte(strings.Replace(good, tt.old, tt.new, 1)))
		if err == nil || !strings.Contains(err.Error(), tt.want) {
			t.Errorf("%s instead of %s: error %v, want one that holds %q", tt.new, tt.old, err, tt.want)
		}
	}
}
