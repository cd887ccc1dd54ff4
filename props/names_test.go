package props_test

import (
	"errors"
	"reflect"
	"slices"
	"strings"
	"testing"

	"dewmark/props"
)

func TestUnknownRefrigerant(t *testing.T) {
	for _, tt := range []struct {
		name string
		want string // among the suggestions, or empty for none at all
	}{
		{"R134", "R134a"},
		{"R290a", "R290"},
		{"propan", "R290"},
		{"amonia", "R717"},
		{"R7444", "R744"},
		{"", ""},
		{"xyzzyxyzzy", ""},
		{strings.Repeat("R134a", 1000), ""},
		{"\x00\xff", ""},
	} {
		_, err := catalogue(t).Refrigerant(tt.name, props.DefaultDatum)
		e, ok := errors.AsType[*props.UnknownRefrigerantError](err)
		if !ok || e.Name != tt.name || len(e.Suggestions) > 3 {
			t.Errorf("%.20q: %T %v", tt.name, err, err)
			continue
		}
		if tt.want == "" && len(e.Suggestions) > 0 || tt.want != "" && !slices.Contains(e.Suggestions, tt.want) {
			t.Errorf("%.20q: suggestions %v, want %q", tt.name, e.Suggestions, tt.want)
		}
		for _, id := range e.Suggestions {
			if !slices.Contains(catalogue(t).PureDesignations(), id) || !strings.Contains(err.Error(), id) {
				t.Errorf("%q: suggestion %q in %q", tt.name, id, err)
			}
		}
	}
	for _, tt := range [][2]string{
		{"r134a", "R134a"},
		{"R-134a", "R134a"},
		{"HFC-134a", "R134a"},
		{" r 1234 ZE (e) ", "R1234ze(E)"},
		{"CO2", "R744"},
		{"propane", "R290"},
		{"Ammonia", "R717"},
		{"water", "R718"},
	} {
		r, err := catalogue(t).Refrigerant(tt[0], props.DefaultDatum)
		if err != nil || r.Designation() != tt[1] {
			t.Errorf("%q: %v, want %s", tt[0], err, tt[1])
		}
	}
}

func TestDatumRefused(t *testing.T) {
	for _, tt := range []struct {
		id      string
		datum   props.Datum
		allowed []props.Datum
	}{
		{"R718", props.ASHRAE, []props.Datum{props.NBP, props.TriplePoint}},            // ice at -40 °C, and at 0 °C by a hair
		{"R718", props.IIR, []props.Datum{props.NBP, props.TriplePoint}},               // its triple point lies at 0.01 °C
		{"R744", props.NBP, []props.Datum{props.IIR, props.ASHRAE, props.TriplePoint}}, // sublimes
		{"R744", 99, []props.Datum{props.IIR, props.ASHRAE, props.TriplePoint}},
	} {
		_, err := catalogue(t).Refrigerant(tt.id, tt.datum)
		e, ok := errors.AsType[*props.DatumError](err)
		if !ok || e.Refrigerant != tt.id || e.Datum != tt.datum || !reflect.DeepEqual(e.Allowed, tt.allowed) {
			t.Errorf("%s of %s: %T %v, want %v allowed", tt.datum, tt.id, err, err, tt.allowed)
		}
	}
	for _, id := range catalogue(t).PureDesignations() {
		r := refrigerant(t, id)
		if len(r.Datums()) == 0 || !slices.Contains(r.Datums(), r.Datum()) {
			t.Errorf("%s: datum %s, possible %v", id, r.Datum(), r.Datums())
		}
	}
}

// TestNames goes through the names that callers write and read.
func TestNames(t *testing.T) {
	for p := props.Temperature; p <= props.Quality; p++ {
		if p.String() == "" || p.Unit() == "" {
			t.Errorf("property %d has name %q, unit %q", uint8(p), p, p.Unit())
		}
	}
	for phase := props.Liquid; phase <= props.Supercritical; phase++ {
		if got, ok := props.ParsePhase(phase.String()); !ok || got != phase {
			t.Errorf("phase %q reads as %v, %v", phase, got, ok)
		}
	}
	for _, d := range []props.Datum{props.IIR, props.ASHRAE, props.NBP, props.TriplePoint} {
		if got, ok := props.ParseDatum(d.String()); !ok || got != d {
			t.Errorf("datum %q reads as %v, %v", d, got, ok)
		}
	}
	for _, name := range []string{"", "gas", "Liquid", "IIR "} {
		if _, ok := props.ParsePhase(name); ok {
			t.Errorf("%q is no phase", name)
		}
		if _, ok := props.ParseDatum(name); ok {
			t.Errorf("%q is no datum", name)
		}
	}
}
