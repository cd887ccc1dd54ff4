package data

import (
	"bytes"
	"encoding/json"
	"math"
	"slices"
	"strconv"
	"strings"
	"testing"
)

func records(t *testing.T) []Record {
	t.Helper()
	all, err := Load()
	if err != nil {
		t.Fatal(err)
	}
	return all
}

func TestLoad(t *testing.T) {
	all := records(t)
	if len(all) != 46 {
		t.Errorf("%d refrigerants, want 46", len(all))
	}
	names := map[string]string{}
	for _, r := range all {
		for _, name := range append([]string{r.ID, r.Name}, r.Aliases...) {
			if owner, taken := names[name]; taken && owner != r.ID || name == "" {
				t.Errorf("%q names %s and %s", name, owner, r.ID)
			}
			names[name] = r.ID
		}
		if tt := r.TripleTemperature; tt != nil && *tt > r.Validity.TemperatureMin {
			t.Errorf("%s: valid from %g K, triple point at %g K", r.ID, r.Validity.TemperatureMin, *tt)
		}
		if c := r.Classification.SafetyClass; c != nil && !slices.Contains([]string{"A1", "A2L", "A2", "A3", "B1", "B2L", "B2", "B3"}, *c) {
			t.Errorf("%s: %q is no safety class of ISO 817", r.ID, *c)
		}
		for name, v := range map[string]*float64{
			"odp": r.Classification.ODP, "ar4": r.Classification.GWP100.AR4, "ar5": r.Classification.GWP100.AR5, "ar6": r.Classification.GWP100.AR6,
			"lower flammability limit": r.Classification.LowerFlammabilityLimit, "toxicity limit": r.Classification.ToxicityLimit,
			"practical limit": r.Classification.PracticalLimit, "concentration limit": r.Classification.ConcentrationLimit,
		} {
			if v != nil && !(*v >= 0 && *v < 20000) {
				t.Errorf("%s: %s is %g", r.ID, name, *v)
			}
		}
	}
}

// The last digit of a CAS number is the sum of the others, weighted by their place from the right, modulo ten (rule of
// Chemical Abstracts Service).
func TestCASNumbers(t *testing.T) {
	for _, r := range records(t) {
		digits := strings.ReplaceAll(r.CAS, "-", "")
		sum := 0
		for i, c := range digits[:len(digits)-1] {
			sum += (len(digits) - 1 - i) * int(c-'0')
		}
		if want := sum % 10; digits[len(digits)-1] != byte('0'+want) {
			t.Errorf("%s: check digit of %s is not %d", r.ID, r.CAS, want)
		}
	}
}

// TestMolarMasses adds up atomic weights (IUPAC 2021, abridged, from memory) by the formula, which for halocarbons must be the
// one that ISO 817 gives to the designation: carbon atoms less one, hydrogen atoms plus one and fluorine atoms, in that
// order, a leading 1 for a double bond, and chlorine on the remaining bonds. Older equations work with older weights.
func TestMolarMasses(t *testing.T) {
	weights := map[string]float64{"C": 12.011, "H": 1.008, "F": 18.998, "Cl": 35.45, "I": 126.90, "O": 15.999, "N": 14.007}
	coded := 0
	for _, r := range records(t) {
		atoms := composition(t, r.Formula)
		var mass float64
		for element, n := range atoms {
			if weights[element] == 0 {
				t.Fatalf("%s: no weight of %q in %q", r.ID, element, r.Formula)
			}
			mass += float64(n) * weights[element] / 1e3
		}
		if !(math.Abs(r.MolarMass/mass-1) < 2e-4) {
			t.Errorf("%s: molar mass %.6g kg/mol, %s weighs %.6g", r.ID, r.MolarMass, r.Formula, mass)
		}
		want, ok := byDesignation(r.ID)
		if !ok {
			continue
		}
		coded++
		for _, element := range []string{"C", "H", "F", "Cl"} {
			if atoms[element] != want[element] {
				t.Errorf("%s: %d atoms of %s in %s, the designation says %d", r.ID, atoms[element], element, r.Formula, want[element])
			}
		}
	}
	if coded < 37 {
		t.Errorf("only %d designations were read", coded)
	}
}

// byDesignation decodes the number of a halocarbon or of a hydrocarbon up to propane.
func byDesignation(id string) (atoms map[string]int, ok bool) {
	digits := strings.TrimLeft(id, "R")
	if i := strings.IndexFunc(digits, func(c rune) bool { return c < '0' || c > '9' }); i >= 0 {
		if digits[i] >= 'A' && digits[i] <= 'Z' {
			return nil, false // an iodine or an ether
		}
		digits = digits[:i]
	}
	n, err := strconv.Atoi(digits)
	if err != nil || 400 <= n && n < 1000 {
		return nil, false // blends, larger hydrocarbons and inorganic fluids are numbered by series
	}
	double := n / 1000
	c, h, f := n/100%10+1, n/10%10-1, n%10
	return map[string]int{"C": c, "H": h, "F": f, "Cl": 2*c + 2 - 2*double - h - f}, true
}

// composition counts the atoms of a formula such as CF3CH=CHCF3 or CH3-2(CH2)-CH3.
func composition(t *testing.T, formula string) map[string]int {
	t.Helper()
	formula, _, _ = strings.Cut(formula, " ") // (cis) and (trans) follow
	atoms := map[string]int{}
	number := func(i int) (n, next int) {
		for next = i; next < len(formula) && formula[next] >= '0' && formula[next] <= '9'; next++ {
			n = 10*n + int(formula[next]-'0')
		}
		return max(n, 1), next
	}
	for i := 0; i < len(formula); {
		switch c := formula[i]; {
		case c == '-' || c == '=':
			i++
		case c == '(' || c >= '0' && c <= '9': // a group, repeated by a number before or after it
			before, open := number(i)
			if formula[open] != '(' {
				t.Fatalf("formula %q", formula)
			}
			end := open + strings.IndexByte(formula[open:], ')')
			after, next := number(end + 1)
			for element, n := range composition(t, formula[open+1:end]) {
				atoms[element] += n * before * after
			}
			i = next
		default:
			end := i + 1
			if end < len(formula) && formula[end] >= 'a' && formula[end] <= 'z' {
				end++
			}
			n, next := number(end)
			atoms[formula[i:end]] += n
			i = next
		}
	}
	return atoms
}

// The molar gas constant of every equation is one that was in use: CODATA 1986, 1998 (to 2006), 2010, 2014 and the exact
// one since 2018, that of Moldover et al. 1988 (from memory), and that of IAPWS R6-95(2018), 461.51805 J/(kg K) times the
// molar mass.
func TestGasConstants(t *testing.T) {
	known := []float64{8.31451, 8.314472, 8.3144621, 8.3144598, 8.314462618, 8.314471, 461.51805 * 0.018015268}
	for _, r := range records(t) {
		if !slices.ContainsFunc(known, func(R float64) bool { return math.Abs(r.GasConstant/R-1) < 1e-12 }) {
			t.Errorf("%s: gas constant %.10g", r.ID, r.GasConstant)
		}
	}
}

func TestDecodeRefuses(t *testing.T) {
	good, err := files.ReadFile("R290.json")
	if err != nil {
		t.Fatal(err)
	}
	if _, err := Decode(good); err != nil {
		t.Fatalf("the unchanged file: %v", err)
	}
	change := func(edit func(m map[string]any)) []byte {
		var m map[string]any
		if err := json.Unmarshal(good, &m); err != nil {
			t.Fatal(err)
		}
		edit(m)
		b, err := json.Marshal(m)
		if err != nil {
			t.Fatal(err)
		}
		return b
	}
	within := func(m map[string]any, name string) map[string]any { return m[name].(map[string]any) }
	for _, tt := range []struct {
		name, words string
		text        []byte
	}{
		{"nothing", "EOF", nil},
		{"half a file", "EOF", good[:len(good)/2]},
		{"no JSON", "invalid character", []byte("propane")},
		{"unknown member", "unknown field", change(func(m map[string]any) { m["flavour"] = 1 })},
		{"text for a number", "molar_mass", change(func(m map[string]any) { m["molar_mass"] = "44" })},
		{"number too large", "molar_mass", bytes.Replace(good, []byte(`"molar_mass": 0.0`), []byte(`"molar_mass": 1e999, "x": 0.0`), 1)},
		{"no molar mass", "molar_mass", change(func(m map[string]any) { delete(m, "molar_mass") })},
		{"negative gas constant", "gas_constant", change(func(m map[string]any) { m["gas_constant"] = -8.3 })},
		{"no reducing density", "reducing.density", change(func(m map[string]any) { delete(within(m, "reducing"), "density") })},
		{"critical pressure zero", "critical.pressure", change(func(m map[string]any) { within(m, "critical")["pressure"] = 0 })},
		{"no upper temperature", "validity.temperature_max", change(func(m map[string]any) { delete(within(m, "validity"), "temperature_max") })},
		{"range ends below the critical point", "critical point", change(func(m map[string]any) { within(m, "validity")["temperature_max"] = 300 })},
		{"range begins above it", "critical point", change(func(m map[string]any) { within(m, "validity")["temperature_min"] = 400 })},
		{"no id", "id", change(func(m map[string]any) { m["id"] = "" })},
		{"no source", "source", change(func(m map[string]any) { m["source"] = "" })},
	} {
		_, err := Decode(tt.text)
		if err == nil || !strings.Contains(err.Error(), tt.words) {
			t.Errorf("%s: %v, want an error with %q", tt.name, err, tt.words)
		}
	}
}
