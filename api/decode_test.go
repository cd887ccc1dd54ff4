package api

import (
	"encoding/json"
	"errors"
	"net/url"
	"reflect"
	"strings"
	"testing"
)

// What is not JSON, or not what a request looks like, is refused with a pointer to it.
func TestDecodeRefuses(t *testing.T) {
	deep := strings.Repeat(`{"a":`, 10000) + "1" + strings.Repeat("}", 10000)
	for _, tt := range []struct {
		name, body    string
		status        int
		pointer, code string
		says          string // part of the detail
	}{
		{"nothing", ``, 400, "#", "malformed", "empty"},
		{"blanks", " \n\t", 400, "#", "malformed", "empty"},
		{"half an object", `{"refrigerant": "R290"`, 400, "#", "malformed", "too early"},
		{"half a number", `{"points": [{"temperature": 1e`, 400, "#/points/0/temperature", "malformed", "not JSON"},
		{"NaN", `{"points": [{"temperature": NaN}]}`, 400, "#/points/0/temperature", "malformed", "NaN is not a JSON number"},
		{"Infinity", `{"points": [{"temperature": 1}, {"pressure": Infinity}]}`, 400, "#/points/1/pressure", "malformed", "Infinity is not"},
		{"-Infinity", `{"points": [{"temperature": -Infinity}]}`, 400, "#/points/0/temperature", "malformed", "-Infinity is not"},
		{"a plus", `{"points": [{"temperature": +5}]}`, 400, "#/points/0/temperature", "malformed", "line 1, byte 29"},
		{"decimal comma", `{"points": [{"temperature": 5,5}]}`, 400, "#/points/0", "malformed", "not JSON"},
		{"leading zero", `{"points": [{"temperature": 05}]}`, 400, "#/points/0/temperature", "malformed", "not JSON"},
		{"a tab in a string", "{\"points\": [{\"id\": \"a\tb\"}]}", 400, "#/points/0/id", "malformed", "not JSON"},
		{"bad escape", `{"points": [{"id": "\x"}]}`, 400, "#/points/0/id", "malformed", "not JSON"},
		{"bad escape in a name", `{"points": [{"\x": 1}]}`, 400, "#/points/0", "malformed", "not JSON"},
		{"no colon", `{"points" []}`, 400, "#", "malformed", "not JSON"},
		{"two commas", `{"points": [],, "datum": "IIR"}`, 400, "#", "malformed", "not JSON"},
		{"wrong bracket", `{"points": [}`, 400, "#/points/0", "malformed", "not JSON"},
		{"colons in what is skipped", `{"a": {"b": 1 : 2}}`, 400, "#", "malformed", "not JSON"},
		{"truth misspelt", `{"extrapolate": True}`, 400, "#/extrapolate", "malformed", "not JSON"},
		{"single quotes", "{'refrigerant': 'R290'}", 400, "#", "malformed", "not JSON"},
		{"trailing comma", `{"points": [{"temperature": 5},]}`, 400, "#/points/1", "malformed", "not JSON"},
		{"a comment", `{"points": [] /* none */}`, 400, "#", "malformed", "not JSON"},
		{"two values", `{"refrigerant": "R290"} {}`, 400, "#", "malformed", "follows the JSON value (line 1, byte 25"},
		{"rubbish behind", `{"refrigerant": "R290"} x`, 400, "#", "malformed", "follows"},
		{"not UTF-8", "{\"refrigerant\": \"R290\xff\"}", 400, "#", "malformed", "UTF-8"},
		{"deep unknown", `{"x": ` + deep + `}`, 400, "#/x", "malformed", "deeper than 12"},
		{"deep point", `{"points": [{"temperature": ` + strings.Repeat("[", 100000) + `}]}`, 400, "#/points/0/temperature", "malformed", "deeper than 12"},

		{"an array", `[]`, 422, "#", "wrong_type", "must be an object, not an array"},
		{"a string", `"R290"`, 422, "#", "wrong_type", `not the string "R290"`},
		{"null", `null`, 422, "#", "wrong_type", "not null"},
		{"unknown member", `{"refrigerant": "R290", "fluid": 1}`, 422, "#/fluid", "unknown_member", "known are refrigerant, datum"},
		{"other case", `{"Refrigerant": "R290"}`, 422, "#/Refrigerant", "unknown_member", "did you mean refrigerant?"},
		{"other style", `{"points": [{"specificVolume": 1}]}`, 422, "#/points/0/specificVolume", "unknown_member", "did you mean specific_volume?"},
		{"unknown in a point", `{"points": [{}, {"temp": [1, {"a": 2}]}]}`, 422, "#/points/1/temp", "unknown_member", "temperature"},
		{"a slash in a name", `{"a/b~c %": 1}`, 422, "#/a~1b~0c%20%25", "unknown_member", ""},
		{"twice", `{"refrigerant": "R290", "refrigerant": "R32"}`, 422, "#/refrigerant", "duplicate_member", "twice"},
		{"twice in a point", `{"points": [{"temperature": 1, "temperature": {"x": 1}}]}`, 422, "#/points/0/temperature", "duplicate_member", "twice"},
		{"twice in units", `{"units": {"pressure": "bar", "pressure": "kPa"}}`, 422, "#/units/pressure", "duplicate_member", "twice"},
		{"text for a number", `{"points": [{"temperature": "5"}]}`, 422, "#/points/0/temperature", "wrong_type", `must be a number, not the string "5"`},
		{"true for a number", `{"points": [{"temperature": true}]}`, 422, "#/points/0/temperature", "wrong_type", "not true"},
		{"object for a number", `{"points": [{"temperature": {"value": 5}}]}`, 422, "#/points/0/temperature", "wrong_type", "not an object"},
		{"array for a number", `{"points": [{"temperature": [5]}]}`, 422, "#/points/0/temperature", "wrong_type", "not an array"},
		{"number for text", `{"refrigerant": 290}`, 422, "#/refrigerant", "wrong_type", "must be a designation such as \"R454B\", or an object with mass_fractions or mole_fractions, not the number 290"},
		{"fraction as text", `{"refrigerant": {"mass_fractions": {"R32": "0.5"}}}`, 422, "#/refrigerant/mass_fractions/R32", "wrong_type", "must be a number"},
		{"null fraction", `{"refrigerant": {"mass_fractions": {"R32": null}}}`, 422, "#/refrigerant/mass_fractions/R32", "wrong_type", "not null"},
		{"fractions as a list", `{"refrigerant": {"mole_fractions": [0.5, 0.5]}}`, 422, "#/refrigerant/mole_fractions", "wrong_type", "designations and fractions"},
		{"component twice", `{"refrigerant": {"mole_fractions": {"R32": 0.5, "R\u00332": 0.5}}}`, 422, "#/refrigerant/mole_fractions/R32", "duplicate_member", "comes twice"},
		{"both fractions", `{"refrigerant": {"mole_fractions": {}, "mass_fractions": {}}}`, 422, "#/refrigerant", "surplus", "one of them"},
		{"no fractions", `{"refrigerant": {}}`, 422, "#/refrigerant", "missing", "mass_fractions or mole_fractions"},
		{"other fractions", `{"refrigerant": {"massFractions": {}}}`, 422, "#/refrigerant/massFractions", "unknown_member", "did you mean mass_fractions?"},
		{"long name", `{"refrigerant": "` + strings.Repeat("R", 65) + `"}`, 422, "#/refrigerant", "too_long", "64 characters"},
		{"number for a unit", `{"units": {"pressure": 1}}`, 422, "#/units/pressure", "wrong_type", "must be a string"},
		{"array of units", `{"units": ["SI"]}`, 422, "#/units", "wrong_type", "must be an object"},
		{"object of points", `{"points": {"0": {}}}`, 422, "#/points", "wrong_type", "must be an array"},
		{"null point", `{"points": [null]}`, 422, "#/points/0", "wrong_type", "not null"},
		{"text for a truth", `{"extrapolate": "yes"}`, 422, "#/extrapolate", "wrong_type", "true or false"},
		{"1e999", `{"points": [{"temperature": 1e999}]}`, 422, "#/points/0/temperature", "out_of_range", "1e999 is too large"},
		{"-1e999", `{"points": [{"temperature": -1e999}]}`, 422, "#/points/0/temperature", "out_of_range", "-1e999 is too large"},
	} {
		var req statesRequest
		p, ok := errors.AsType[*Problem](decodeJSON([]byte(tt.body), &req))
		if !ok || len(p.Errors) != 1 {
			t.Errorf("%s: %+v", tt.name, p)
			continue
		}
		e := p.Errors[0]
		if p.Status != tt.status || e.Pointer != tt.pointer || e.Code != tt.code || !strings.Contains(e.Detail, tt.says) {
			t.Errorf("%s: %d %s %s: %s", tt.name, p.Status, e.Pointer, e.Code, e.Detail)
		}
		for _, word := range []string{"Go ", "struct", "float64", "statesRequest", "json:"} {
			if strings.Contains(e.Detail, word) {
				t.Errorf("%s: the detail speaks Go: %s", tt.name, e.Detail)
			}
		}
		if len(e.Detail) > 600 || len(e.Pointer) > 200 {
			t.Errorf("%s: %d bytes of detail, %d of pointer", tt.name, len(e.Detail), len(e.Pointer))
		}
	}
}

// All defects are told at once, up to a number.
func TestDecodeTellsAll(t *testing.T) {
	var req statesRequest
	p, _ := errors.AsType[*Problem](decodeJSON([]byte(`{"a": 1, "datum": 2, "points": [{"temperature": "x"}, {"pressure": 1e400, "b": null}]}`), &req))
	var pointers []string
	for _, e := range p.Errors {
		pointers = append(pointers, e.Pointer)
	}
	if got := strings.Join(pointers, " "); got != "#/a #/datum #/points/0/temperature #/points/1/pressure #/points/1/b" {
		t.Errorf("errors at %s", got)
	}
	p, _ = errors.AsType[*Problem](decodeJSON([]byte(`{"points": [`+strings.Repeat(`{"x": 1},`, 1000)+`{}]}`), &req))
	if len(p.Errors) != maxFaults {
		t.Errorf("%d errors, want %d", len(p.Errors), maxFaults)
	}
}

func TestDecodeAccepts(t *testing.T) {
	const body = "\ufeff"
	if err := decodeJSON([]byte(body+`{}`), &statesRequest{}); err == nil {
		t.Error("a byte order mark is no JSON")
	}
	var req statesRequest
	err := decodeJSON([]byte(`
		{"refrigerant": "R\u0032\u0039\u0030", "units": {"system": "IP"}, "datum": null, "site": {"altitude": -0.0},
		 "points": [{"id": "ü", "temperature": 0, "pressure": null, "quality": 1e-400}, {}], "properties": []}
	`), &req)
	if err != nil {
		t.Fatal(err)
	}
	p := req.Points[0]
	if req.Refrigerant.designation != "R290" || req.Units["system"] != "IP" || req.Datum != "" || *req.Site.Altitude != 0 || len(req.Points) != 2 ||
		p.ID != "ü" || *p.Temperature != 0 || p.Pressure != nil || *p.Quality != 0 || req.Properties == nil {
		t.Errorf("%+v", req)
	}
}

// A query is read as the object that its names spell.
func TestDecodeQuery(t *testing.T) {
	for _, tt := range []struct{ query, pointer, code string }{
		{"refrigerant=R290&temperature=5&pressure=400&system=IP&units.pressure=bar&site.altitude=450&extrapolate=true&properties=density,enthalpy", "", ""},
		{"temperature=NaN", "#/temperature", "wrong_type"},
		{"temperature=", "#/temperature", "wrong_type"},
		{"temperature=5,5", "#/temperature", "wrong_type"},
		{"temperature=null", "#/temperature", "wrong_type"},
		{"temperature=1e999", "#/temperature", "out_of_range"},
		{"temperature=5&temperature=6", "#/temperature", "duplicate_member"},
		{"system=IP&units.system=SI", "#/units/system", "duplicate_member"},
		{"temp=5", "#/temp", "unknown_member"},
		{"units=SI", "#/units", "wrong_type"},
		{"units=SI&units.system=SI", "#/units/system", "duplicate_member"},
		{"extrapolate=yes", "#/extrapolate", "wrong_type"},
		{"site.height=5", "#/site/height", "unknown_member"},
		{"=5", "#/", "unknown_member"},
		{".=5", "#/", "unknown_member"},
	} {
		query, err := url.ParseQuery(tt.query)
		if err != nil {
			t.Fatal(err)
		}
		var req singleStateRequest
		p, _ := errors.AsType[*Problem](decodeQuery(query, &req))
		switch {
		case tt.code == "":
			if p != nil || *req.Temperature != 5 || req.Units["system"] != "IP" || req.Units["pressure"] != "bar" || *req.Site.Altitude != 450 ||
				!req.Extrapolate || len(req.Properties) != 2 {
				t.Errorf("%s: %+v %+v", tt.query, req, p)
			}
		case p == nil || p.Errors[0].Pointer != tt.pointer || p.Errors[0].Code != tt.code:
			t.Errorf("%s: %+v", tt.query, p)
		}
	}
}

// decodable are the types that requests are decoded into.
var decodable = []reflect.Type{
	reflect.TypeFor[statesRequest](), reflect.TypeFor[statesHead](), reflect.TypeFor[point](), reflect.TypeFor[saturationRequest](), reflect.TypeFor[cycleRequest](),
}

// FuzzDecode checks that no body panics, that a refused one gets a problem that points somewhere, and that what is
// accepted reads as the standard library reads it.
func FuzzDecode(f *testing.F) {
	for _, body := range []string{
		`{"refrigerant":"R290","units":{"system":"SI"},"points":[{"id":"a","temperature":5,"pressure":4e2,"phase":"vapour"}],"properties":["density"]}`,
		`{"refrigerant":"R134a","range":{"of":"temperature","from":-40,"to":60,"step":5}}`,
		`{"refrigerant":"R32","evaporation":{"temperature":2,"superheat":5},"suction_line":{"pressure_drop":1,"temperature_rise":2},"size":{"heating":8}}`,
		`{"refrigerant":{"mass_fractions":{"R32":0.6,"R1234yf":0.4}},"accept_estimates":true,"temperatures":[0]}`,
		`{"refrigerant":{"mole_fractions":{"R32":6e-1,"R1234ze(E)":0.4},"mass_fractions":null},"points":[]}`,
		`{"temperature":NaN}`, `{"a":{"b":[1,{"c":null}]}}`, `{"points":[{"temperature":1},{"temperature":"1","temperature":1e999}]}`,
		"{\"id\":\"\xff\"}", `{"id":"\ud800"}`, `[[[[[[[[[[[[[[[[[[1]]]]]]]]]]]]]]]]]]`, `{"":1}`, `{"points":[]}x`,
	} {
		f.Add([]byte(body), uint8(0))
		f.Add([]byte(body), uint8(4))
	}
	f.Fuzz(func(t *testing.T, body []byte, which uint8) {
		kind := decodable[int(which)%len(decodable)]
		got := reflect.New(kind).Interface()
		if err := decodeJSON(body, got); err != nil {
			p, ok := errors.AsType[*Problem](err)
			if !ok || p.Status != 400 && p.Status != 422 || len(p.Errors) == 0 || !strings.HasPrefix(p.Errors[0].Pointer, "#") {
				t.Fatalf("%q: %v", body, err)
			}
			if _, err := json.Marshal(p); err != nil {
				t.Fatal(err)
			}
			return
		}
		want := reflect.New(kind).Interface()
		if err := json.Unmarshal(body, want); err != nil {
			t.Fatalf("%q was accepted: %v", body, err)
		}
		if !reflect.DeepEqual(got, want) {
			t.Fatalf("%q reads %+v, want %+v", body, got, want)
		}
	})
}

func BenchmarkDecode(b *testing.B) {
	for name, body := range map[string]string{
		"point": `{"refrigerant":"R290","points":[{"id":"suction","temperature":5,"pressure":400}]}`,
		"1000":  `{"refrigerant":"R290","points":[` + strings.Repeat(`{"temperature":5.25,"pressure":400.125},`, 999) + `{"temperature":5.25,"pressure":400.125}]}`,
	} {
		b.Run(name, func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				var req statesRequest
				if err := decodeJSON([]byte(body), &req); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

// FuzzDecodeQuery checks that no query panics, and that a refused one gets a problem that points somewhere.
func FuzzDecodeQuery(f *testing.F) {
	for _, query := range []string{
		"refrigerant=R290&temperature=5&pressure=400&system=IP", "units.pressure=bar(g)&site.altitude=450&extrapolate=true&properties=density,enthalpy",
		"temperature=NaN&temperature=1", "units=SI&units.system=SI", "a.b.c=1&a.b=2&a=3", "temperature={}&site=[[[", ".=1&=2", "quality=1e999&id=%ff",
		"refrigerant.mass_fractions.R32=0.6&refrigerant.mass_fractions.R1234yf=0.4", "refrigerant.mole_fractions=1&refrigerant.x.y.z=2&refrigerant=R32",
	} {
		f.Add(query)
	}
	f.Fuzz(func(t *testing.T, text string) {
		query, err := url.ParseQuery(text)
		if err != nil {
			return
		}
		var req singleStateRequest
		if err := decodeQuery(query, &req); err != nil {
			p, ok := errors.AsType[*Problem](err)
			if !ok || p.Status != 400 && p.Status != 422 || len(p.Errors) == 0 || !strings.HasPrefix(p.Errors[0].Pointer, "#") {
				t.Fatalf("%q: %v", text, err)
			}
		}
	})
}
