package api

import (
	"encoding/csv"
	"errors"
	"math"
	"os"
	"slices"
	"strconv"
	"strings"
	"testing"
)

// codesOf maps the names of testdata/units.csv to the codes of the wire, where the wire has the unit.
var codesOf = map[string]map[string]string{
	"temperature":            {"K": "K", "degC": "Cel", "degF": "[degF]", "degR": "[degR]"},
	"temperature_difference": {"K": "K", "degC_diff": "Cel", "degF_diff": "[degF]"},
	"pressure": {
		"Pa": "Pa", "kPa": "kPa", "MPa": "MPa", "bar": "bar", "mbar": "mbar", "psi": "[psi]", "kgf/cm2": "kgf/cm2", "atm": "atm",
		"mmHg": "mm[Hg]", "inHg": "[in_i'Hg]", "mmH2O": "mm[H2O]", "inH2O": "[in_i'H2O]",
	},
	"power": {
		"W": "W", "kW": "kW", "Btu_IT/h": "[Btu_IT]/h", "ton_refrigeration": "12000.[Btu_IT]/h", "kcal_IT/h": "kcal_IT/h",
		"hp_mechanical": "[HP]", "hp_metric": "75.kgf.m/s",
	},
	"mass_flow": {"kg/s": "kg/s", "kg/h": "kg/h", "lb/h": "[lb_av]/h", "lb/min": "[lb_av]/min"},
	"volume_flow": {
		"m3/s": "m3/s", "m3/h": "m3/h", "L/s": "L/s", "L/min": "L/min", "cfm": "[ft_i]3/min", "gpm_US": "[gal_us]/min", "gpm_UK": "[gal_br]/min",
	},
	"specific_energy":  {"J/kg": "J/kg", "kJ/kg": "kJ/kg", "Btu_IT/lb": "[Btu_IT]/[lb_av]", "kcal_IT/kg": "kcal_IT/kg"},
	"specific_entropy": {"J/(kg K)": "J/(kg.K)", "kJ/(kg K)": "kJ/(kg.K)", "Btu_IT/(lb degF)": "[Btu_IT]/([lb_av].[degF])", "kcal_IT/(kg K)": "kcal_IT/(kg.K)"},
	"density":          {"kg/m3": "kg/m3", "lb/ft3": "[lb_av]/[ft_i]3", "lb/gal_US": "[lb_av]/[gal_us]"},
	"ua":               {"W/K": "W/K", "Btu_IT/(h degF)": "[Btu_IT]/(h.[degF])"},
	"length":           {"m": "m", "ft": "[ft_i]"},
	"velocity":         {"m/s": "m/s", "ft/min": "[ft_i]/min", "ft/s": "[ft_i]/s"},
	"viscosity":        {"Pa s": "Pa.s", "cP": "cP", "lb/(ft h)": "[lb_av]/([ft_i].h)"},
	"conductivity":     {"W/(m K)": "W/(m.K)", "Btu_IT/(h ft degF)": "[Btu_IT]/(h.[ft_i].[degF])"},
	"surface_tension":  {"N/m": "N/m", "dyn/cm": "dyn/cm"},
}

// kindsOf maps the quantities of testdata/units.csv to kinds.
var kindsOf = map[string][]kind{
	"temperature": {kindTemperature}, "temperature_difference": {kindTemperatureDifference},
	"pressure": {kindPressure, kindPressureDifference}, "power": {kindPower, kindHeatFlow}, "mass_flow": {kindMassFlow},
	"volume_flow": {kindVolumeFlow}, "specific_energy": {kindEnthalpy}, "specific_entropy": {kindEntropy}, "density": {kindDensity},
	"ua": {kindEntropyFlow, kindConductance}, "length": {kindLength}, "velocity": {kindVelocity}, "viscosity": {kindViscosity},
	"conductivity": {kindThermalConductivity}, "surface_tension": {kindSurfaceTension},
}

// Factors by NIST SP 811 (2008) appendix B, the SI brochure and the yard and pound agreement of 1959; each is exact, follows
// from a definition, or is a conventional value.
func TestUnitFactors(t *testing.T) {
	file, err := os.Open("../testdata/units.csv")
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	rows, err := csv.NewReader(file).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	seen := 0
	for _, row := range rows[1:] {
		code, ok := codesOf[row[0]][row[1]]
		if !ok {
			continue // a unit that the wire does not have
		}
		factor, offset := number(t, row[2]), number(t, row[3])
		tolerance := 1e-14
		if row[4] == "conventional" {
			tolerance = 1e-12 // the column of mercury is printed with 12 digits
		}
		for _, k := range kindsOf[row[0]] {
			seen++
			u := quantities[k].unit(code)
			if u == nil {
				t.Errorf("%s: no code %s", row[0], code)
				continue
			}
			if rel := math.Abs(u.scale/factor - 1); !(rel <= tolerance) {
				t.Errorf("%s %s: factor %.17g, want %.17g", row[0], code, u.scale, factor)
			}
			if diff := math.Abs(u.shift*u.scale - offset); !(diff <= 1e-12) {
				t.Errorf("%s %s: offset %.17g, want %.17g", row[0], code, u.shift*u.scale, offset)
			}
		}
	}
	if seen < 60 {
		t.Errorf("only %d units compared", seen)
	}
}

func number(t *testing.T, text string) float64 {
	t.Helper()
	x, err := strconv.ParseFloat(text, 64)
	if err != nil {
		t.Fatal(err)
	}
	return x
}

// inCode returns units in which kind k has the given code.
func inCode(t *testing.T, k kind, code string) *units {
	t.Helper()
	u, err := newUnits(map[string]string{quantities[k].name: code}, &site{Altitude: new(0.)})
	if err != nil {
		t.Fatalf("%s %s: %v", quantities[k].name, code, err)
	}
	return u
}

// Every unit brings numbers back: to 1e-14 of the number, of its SI value where the zeros differ, or of 273 K.
func TestUnitsRoundTrip(t *testing.T) {
	for k := range kindCount {
		for _, unit := range quantities[k].units {
			u := inCode(t, k, unit.code)
			for _, x := range []float64{1, -1, 0.1, 37.7, 273.15, 400, 1e-6, 123456.789, 1e9} {
				si := u.in(k, x)
				back := u.exact(k, si)
				size := math.Max(math.Abs(x), math.Abs(si/unit.scale))
				if k == kindTemperature {
					size = math.Max(size, 273.15/unit.scale)
				}
				if unit.gauge {
					size = math.Max(size, u.ambient/unit.scale)
				}
				if !(math.Abs(back-x) <= 1e-14*size) {
					t.Errorf("%s: %v becomes %v", unit.code, x, back)
				}
				if out := u.out(k, si); !(math.Abs(out-x) <= 1e-14*size+6e-12) {
					t.Errorf("%s: %v is written %v", unit.code, x, out)
				}
			}
		}
	}
}

func TestConversions(t *testing.T) {
	for _, tt := range []struct {
		name string
		kind kind
		code string
		x    float64
		want float64 // SI
	}{
		// From the definitions of the scales.
		{"melting ice", kindTemperature, "[degF]", 32, 273.15},
		{"absolute zero", kindTemperature, "[degF]", -459.67, 0},
		{"minus forty on both scales", kindTemperature, "[degF]", -40, 233.15},
		{"20 °F of superheat", kindTemperatureDifference, "[degF]", 20, 100. / 9},
		{"20 °R of superheat", kindTemperatureDifference, "[degR]", 20, 100. / 9},
		{"a difference in Celsius has no zero", kindTemperatureDifference, "Cel", 5, 5},
		{"one Btu a pound", kindEnthalpy, "[Btu_IT]/[lb_av]", 1, 2326},                                            // exact, NIST SP 811
		{"one Btu a pound and degree", kindEntropy, "[Btu_IT]/([lb_av].[degR])", 1, 4186.8},                       // exact, NIST SP 811
		{"a ton of refrigeration", kindHeatFlow, "12000.[Btu_IT]/h", 1, 3516.8528420667},                          // 12 000 Btu/h
		{"a cubic inch", kindVolume, "[in_i]3", 1, 16.387064e-6},                                                  // exact, NIST SP 811
		{"a Btu an hour and degree, upside down", kindThermalResistance, "h.[degF]/[Btu_IT]", 1, 1.8956342406266}, // NIST SP 811, 1.895634 K/W
		{"one psi a degree", kindJouleThomson, "[degR]/[psi]", 1, 5. / 9 / 6894.757293168},
	} {
		u := inCode(t, tt.kind, tt.code)
		if got := u.in(tt.kind, tt.x); !(math.Abs(got-tt.want) <= 1e-12*math.Max(1, math.Abs(tt.want))) {
			t.Errorf("%s: %v %s is %v, want %v", tt.name, tt.x, tt.code, got, tt.want)
		}
	}
}

// Pressures of the standard atmosphere in kPa to three decimals, computed from the constants of ISO 2533.
func TestStandardAtmosphere(t *testing.T) {
	for _, tt := range []struct{ z, want float64 }{ // m, kPa
		{0, 101.325}, {500, 95.461}, {1000, 89.875}, {1500, 84.556}, {2000, 79.495}, {3000, 70.109},
	} {
		if got := standardAtmosphere(tt.z) / 1000; !(math.Abs(got-tt.want) <= 0.0006) {
			t.Errorf("at %v m: %.4f kPa, want %.3f", tt.z, got, tt.want)
		}
	}
}

func TestGaugePressure(t *testing.T) {
	for _, tt := range []struct {
		name  string
		codes map[string]string
		site  site
		x     float64
		want  float64 // Pa
	}{
		{"at sea level", map[string]string{"pressure": "bar(g)"}, site{Altitude: new(0.)}, 3, 401325},
		{"in feet", map[string]string{"system": "IP", "pressure": "psi(g)"}, site{Altitude: new(0.)}, 0, 101325},
		{"by barometer, in the unit of pressure", map[string]string{"pressure": "bar(g)"}, site{AmbientPressure: new(0.96)}, 3, 396000},
		{"by barometer in kPa", map[string]string{"pressure": "kPa(g)"}, site{AmbientPressure: new(96.)}, 300, 396000},
		{"below the ambient", map[string]string{"pressure": "kPa(g)"}, site{AmbientPressure: new(96.)}, -50, 46000},
		{"an absolute unit does not care", map[string]string{"pressure": "bar"}, site{Altitude: new(2000.)}, 3, 300000},
	} {
		u, err := newUnits(tt.codes, &tt.site)
		if err != nil {
			t.Errorf("%s: %v", tt.name, err)
			continue
		}
		if got := u.in(kindPressure, tt.x); !(math.Abs(got-tt.want) <= 1e-6) {
			t.Errorf("%s: %v Pa, want %v", tt.name, got, tt.want)
		}
		if gauge := u.of[kindPressure].gauge; (u.site != nil) != gauge {
			t.Errorf("%s: the site is repeated: %v", tt.name, u.site != nil)
		}
	}
}

// A drop of pressure has no basis, and a caller who thinks in bar writes drops in bar.
func TestDifferencesFollow(t *testing.T) {
	for _, tt := range []struct {
		codes                 map[string]string
		pressure, temperature string
	}{
		{nil, "kPa", "K"},
		{map[string]string{"system": "IP"}, "[psi]", "[degR]"},
		{map[string]string{"pressure": "bar", "temperature": "[degF]"}, "bar", "[degR]"},
		{map[string]string{"pressure": "bar(g)"}, "bar", "K"},
		{map[string]string{"pressure": "psi(g)", "temperature": "K"}, "[psi]", "K"},
		{map[string]string{"pressure": "kPa(g)", "pressure_difference": "mbar"}, "mbar", "K"},
		{map[string]string{"system": "IP", "temperature": "Cel"}, "[psi]", "K"},
		{map[string]string{"system": "IP", "pressure": "kgf/cm2", "temperature_difference": "[degF]"}, "kgf/cm2", "[degF]"},
	} {
		u, err := newUnits(tt.codes, &site{Altitude: new(0.)})
		if err != nil {
			t.Errorf("%v: %v", tt.codes, err)
			continue
		}
		if p, T := u.of[kindPressureDifference].code, u.of[kindTemperatureDifference].code; p != tt.pressure || T != tt.temperature {
			t.Errorf("%v: differences in %s and %s, want %s and %s", tt.codes, p, T, tt.pressure, tt.temperature)
		}
	}
}

func TestUnitsRefused(t *testing.T) {
	for _, tt := range []struct {
		name    string
		codes   map[string]string
		site    *site
		pointer string
		code    string
	}{
		{"system", map[string]string{"system": "metric"}, nil, "#/units/system", "not_allowed"},
		{"kind", map[string]string{"presure": "bar"}, nil, "#/units/presure", "unknown_member"},
		{"code", map[string]string{"pressure": "psig"}, nil, "#/units/pressure", "unknown_unit"},
		{"empty code", map[string]string{"pressure": ""}, nil, "#/units/pressure", "unknown_unit"},
		{"code of another kind", map[string]string{"temperature": "kPa"}, nil, "#/units/temperature", "unknown_unit"},
		{"a difference has no gauge", map[string]string{"pressure_difference": "bar(g)"}, nil, "#/units/pressure_difference", "unknown_unit"},
		{"gauge without site", map[string]string{"pressure": "bar(g)"}, nil, "#/site", "missing"},
		{"gauge with empty site", map[string]string{"pressure": "bar(g)"}, &site{}, "#/site", "missing"},
		{"both of site", map[string]string{"pressure": "bar(g)"}, &site{Altitude: new(1.), AmbientPressure: new(1.)}, "#/site/altitude", "surplus"},
		{"above the troposphere", map[string]string{"pressure": "bar(g)"}, &site{Altitude: new(11001.)}, "#/site/altitude", "out_of_range"},
		{"altitude in feet read as metres", nil, &site{Altitude: new(29000.)}, "#/site/altitude", "out_of_range"},
		{"bar for kPa", map[string]string{"pressure": "kPa(g)"}, &site{AmbientPressure: new(0.96)}, "#/site/ambient_pressure", "out_of_range"},
		{"no barometer", nil, &site{AmbientPressure: new(math.Inf(1))}, "#/site/ambient_pressure", "out_of_range"},
	} {
		_, err := newUnits(tt.codes, tt.site)
		p, ok := errors.AsType[*Problem](err)
		if !ok || len(p.Errors) != 1 || p.Errors[0].Pointer != tt.pointer || p.Errors[0].Code != tt.code || p.Status != 422 {
			t.Errorf("%s: %+v", tt.name, err)
		}
	}
}

// The codes of a kind are different, and both systems use one of them.
func TestQuantities(t *testing.T) {
	for _, q := range quantities {
		var codes []string
		for _, u := range q.units {
			codes = append(codes, u.code)
			if !(u.scale > 0) || math.IsInf(u.scale, 0) {
				t.Errorf("%s: scale of %s is %v", q.name, u.code, u.scale)
			}
			if u.gauge != strings.HasSuffix(u.code, "(g)") {
				t.Errorf("%s: %s is gauge: %v", q.name, u.code, u.gauge)
			}
		}
		slices.Sort(codes)
		if len(slices.Compact(codes)) != len(q.units) || q.unit(q.si) == nil || q.unit(q.ip) == nil {
			t.Errorf("%s: codes %q, SI %s, IP %s", q.name, codes, q.si, q.ip)
		}
	}
}

// FuzzUnits checks that no choice of codes panics, and that those accepted bring numbers back.
func FuzzUnits(f *testing.F) {
	for _, seed := range []struct{ system, kind, code string }{
		{"SI", "pressure", "bar(g)"}, {"IP", "temperature", "Cel"}, {"", "enthalpy", ""}, {"si", "x/y~z", "K"}, {"SI", "system", "IP"},
	} {
		f.Add(seed.system, seed.kind, seed.code, 450., 25.)
	}
	f.Fuzz(func(t *testing.T, system, name, code string, altitude, x float64) {
		u, err := newUnits(map[string]string{"system": system, name: code}, &site{Altitude: &altitude})
		if err != nil {
			if p, ok := errors.AsType[*Problem](err); !ok || p.Status != 422 || len(p.Errors) == 0 {
				t.Fatalf("%v", err)
			}
			return
		}
		for k := range kindCount {
			unit := u.of[k]
			if back := u.exact(k, u.in(k, x)); math.Abs(x) < 1e100 && !(math.Abs(back-x) <= 1e-13*(math.Abs(x)+math.Abs(unit.shift)+u.ambient/unit.scale)) {
				t.Fatalf("%s: %v becomes %v", unit.code, x, back)
			}
		}
	})
}
