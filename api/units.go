package api

import (
	"cmp"
	"fmt"
	"maps"
	"math"
	"slices"
	"strconv"
	"strings"
)

// kind is a kind of quantity: what one unit code is chosen for.
type kind uint8

// The kinds of quantity. Speed stands for rotation in the trade, so the speed of sound is a velocity here.
const (
	kindTemperature kind = iota
	kindTemperatureDifference
	kindPressure
	kindPressureDifference
	kindDensity
	kindSpecificVolume
	kindEnthalpy // also internal energy and latent heat
	kindEntropy  // also heat capacity
	kindVelocity
	kindJouleThomson
	kindCompressibility
	kindExpansivity
	kindDensityByEnthalpy
	kindDensityByPressure
	kindViscosity
	kindThermalConductivity
	kindSurfaceTension
	kindMassFlow
	kindVolumeFlow
	kindHeatFlow
	kindPower // also exergy destruction
	kindEntropyFlow
	kindVolumetricCapacity
	kindMolarMass
	kindLength
	kindVolume            // swept by one revolution
	kindConductance       // of a heat exchanger
	kindThermalResistance // the reciprocal
	kindCount
	kindNone kind = math.MaxUint8 // a pure number
)

// Definitions that the factors follow from, exact except where noted: SI brochure, yard and pound agreement of 1959,
// International Table calorie.
const (
	gn        = 9.80665 // m/s2
	poundMass = 0.45359237
	foot      = 0.3048
	inch      = 0.0254
	btu       = 1055.05585262
	kcal      = 4186.8
	psi       = poundMass * gn / (inch * inch)
	mercury   = 13595.1 * gn // Pa per metre of conventional mercury
	waterHead = 1000 * gn    // Pa per metre of conventional water
	hour      = 3600
	rankine   = 5. / 9
	gallonUS  = 231 * inch * inch * inch
	gallonUK  = 4.54609e-3
)

// unit converts numbers with a code to SI: SI = (number + shift) * scale, plus the ambient pressure when it is a gauge
// pressure.
type unit struct {
	code  string // UCUM, or one of the gauge pressures
	scale float64
	shift float64
	gauge bool
}

// quantity says what the wire knows of a kind: its name in the units object, the codes of both systems and all codes.
type quantity struct {
	name   string
	si, ip string
	units  []unit
}

var quantities = [kindCount]quantity{
	kindTemperature: {"temperature", "Cel", "[degF]", []unit{
		{code: "K", scale: 1},
		{code: "Cel", scale: 1, shift: 273.15},
		{code: "[degF]", scale: rankine, shift: 459.67},
		{code: "[degR]", scale: rankine},
	}},
	kindTemperatureDifference: {"temperature_difference", "K", "[degR]", []unit{
		{code: "K", scale: 1}, {code: "Cel", scale: 1}, {code: "[degF]", scale: rankine}, {code: "[degR]", scale: rankine},
	}},
	kindPressure: {"pressure", "kPa", "[psi]", append(slices.Clip(absoluteUnits),
		unit{code: "kPa(g)", scale: 1e3, gauge: true},
		unit{code: "bar(g)", scale: 1e5, gauge: true},
		unit{code: "psi(g)", scale: psi, gauge: true},
	)},
	kindPressureDifference: {"pressure_difference", "kPa", "[psi]", absoluteUnits},
	kindDensity: {"density", "kg/m3", "[lb_av]/[ft_i]3", []unit{
		{code: "kg/m3", scale: 1},
		{code: "g/cm3", scale: 1e3},
		{code: "g/m3", scale: 1e-3},
		{code: "kg/L", scale: 1e3},
		{code: "g/L", scale: 1},
		{code: "[lb_av]/[ft_i]3", scale: poundMass / (foot * foot * foot)},
		{code: "[lb_av]/[gal_us]", scale: poundMass / gallonUS},
	}},
	kindSpecificVolume: {"specific_volume", "m3/kg", "[ft_i]3/[lb_av]", []unit{
		{code: "m3/kg", scale: 1},
		{code: "cm3/g", scale: 1e-3},
		{code: "L/kg", scale: 1e-3},
		{code: "[ft_i]3/[lb_av]", scale: foot * foot * foot / poundMass},
		{code: "[gal_us]/[lb_av]", scale: gallonUS / poundMass},
	}},
	kindEnthalpy: {"enthalpy", "kJ/kg", "[Btu_IT]/[lb_av]", []unit{
		{code: "J/kg", scale: 1},
		{code: "kJ/kg", scale: 1e3},
		{code: "MJ/kg", scale: 1e6},
		{code: "J/g", scale: 1e3},
		{code: "kcal_IT/kg", scale: kcal},
		{code: "kW.h/kg", scale: 1e3 * hour},
		{code: "[Btu_IT]/[lb_av]", scale: btu / poundMass},
	}},
	kindEntropy: {"entropy", "kJ/(kg.K)", "[Btu_IT]/([lb_av].[degR])", []unit{
		{code: "J/(kg.K)", scale: 1},
		{code: "kJ/(kg.K)", scale: 1e3},
		{code: "J/(g.K)", scale: 1e3},
		{code: "kcal_IT/(kg.K)", scale: kcal},
		{code: "[Btu_IT]/([lb_av].[degR])", scale: btu / (poundMass * rankine)},
		{code: "[Btu_IT]/([lb_av].[degF])", scale: btu / (poundMass * rankine)},
	}},
	kindVelocity: {"velocity", "m/s", "[ft_i]/s", []unit{
		{code: "m/s", scale: 1}, {code: "km/h", scale: 1. / 3.6}, {code: "[ft_i]/s", scale: foot}, {code: "[ft_i]/min", scale: foot / 60},
	}},
	kindJouleThomson: {"joule_thomson_coefficient", "K/kPa", "[degR]/[psi]", []unit{
		{code: "K/Pa", scale: 1},
		{code: "K/kPa", scale: 1e-3},
		{code: "K/MPa", scale: 1e-6},
		{code: "K/bar", scale: 1e-5},
		{code: "[degR]/[psi]", scale: rankine / psi},
		{code: "[degF]/[psi]", scale: rankine / psi},
	}},
	kindCompressibility: {"compressibility", "kPa-1", "[psi]-1", []unit{
		{code: "Pa-1", scale: 1}, {code: "kPa-1", scale: 1e-3}, {code: "MPa-1", scale: 1e-6}, {code: "bar-1", scale: 1e-5}, {code: "[psi]-1", scale: 1 / psi},
	}},
	kindExpansivity: {"expansivity", "K-1", "[degR]-1", []unit{
		{code: "K-1", scale: 1}, {code: "[degR]-1", scale: 1 / rankine}, {code: "[degF]-1", scale: 1 / rankine},
	}},
	kindDensityByEnthalpy: {"density_by_enthalpy", "kg2/(m3.kJ)", "[lb_av]2/([ft_i]3.[Btu_IT])", []unit{
		{code: "kg2/(m3.J)", scale: 1},
		{code: "kg2/(m3.kJ)", scale: 1e-3},
		{code: "[lb_av]2/([ft_i]3.[Btu_IT])", scale: poundMass * poundMass / (foot * foot * foot * btu)},
	}},
	kindDensityByPressure: {"density_by_pressure", "kg/(m3.kPa)", "[lb_av]/([ft_i]3.[psi])", []unit{
		{code: "kg/(m3.Pa)", scale: 1},
		{code: "kg/(m3.kPa)", scale: 1e-3},
		{code: "kg/(m3.bar)", scale: 1e-5},
		{code: "[lb_av]/([ft_i]3.[psi])", scale: poundMass / (foot * foot * foot * psi)},
	}},
	kindViscosity: {"viscosity", "uPa.s", "[lb_av]/([ft_i].h)", []unit{
		{code: "Pa.s", scale: 1},
		{code: "mPa.s", scale: 1e-3},
		{code: "uPa.s", scale: 1e-6},
		{code: "cP", scale: 1e-3},
		{code: "[lb_av]/([ft_i].h)", scale: poundMass / (foot * hour)},
		{code: "[lb_av]/([ft_i].s)", scale: poundMass / foot},
	}},
	kindThermalConductivity: {"thermal_conductivity", "mW/(m.K)", "[Btu_IT]/(h.[ft_i].[degR])", []unit{
		{code: "W/(m.K)", scale: 1},
		{code: "mW/(m.K)", scale: 1e-3},
		{code: "kcal_IT/(h.m.K)", scale: kcal / hour},
		{code: "[Btu_IT]/(h.[ft_i].[degR])", scale: btu / (hour * foot * rankine)},
		{code: "[Btu_IT]/(h.[ft_i].[degF])", scale: btu / (hour * foot * rankine)},
	}},
	kindSurfaceTension: {"surface_tension", "mN/m", "[lbf_av]/[ft_i]", []unit{
		{code: "N/m", scale: 1}, {code: "mN/m", scale: 1e-3}, {code: "dyn/cm", scale: 1e-3}, {code: "[lbf_av]/[ft_i]", scale: poundMass * gn / foot},
	}},
	kindMassFlow: {"mass_flow", "kg/s", "[lb_av]/h", []unit{
		{code: "kg/s", scale: 1},
		{code: "kg/h", scale: 1. / hour},
		{code: "kg/min", scale: 1. / 60},
		{code: "g/s", scale: 1e-3},
		{code: "[lb_av]/h", scale: poundMass / hour},
		{code: "[lb_av]/min", scale: poundMass / 60},
		{code: "[lb_av]/s", scale: poundMass},
	}},
	kindVolumeFlow: {"volume_flow", "m3/h", "[ft_i]3/min", []unit{
		{code: "m3/s", scale: 1},
		{code: "m3/h", scale: 1. / hour},
		{code: "L/s", scale: 1e-3},
		{code: "L/min", scale: 1e-3 / 60},
		{code: "L/h", scale: 1e-3 / hour},
		{code: "cm3/s", scale: 1e-6},
		{code: "[ft_i]3/min", scale: foot * foot * foot / 60},
		{code: "[cft_i]/min", scale: foot * foot * foot / 60},
		{code: "[gal_us]/min", scale: gallonUS / 60},
		{code: "[gal_br]/min", scale: gallonUK / 60},
	}},
	kindHeatFlow: {"heat_flow", "kW", "[Btu_IT]/h", powerUnits},
	kindPower:    {"power", "kW", "[HP]", powerUnits},
	kindEntropyFlow: {"entropy_flow", "W/K", "[Btu_IT]/(h.[degR])", []unit{
		{code: "W/K", scale: 1},
		{code: "kW/K", scale: 1e3},
		{code: "[Btu_IT]/(h.[degR])", scale: btu / (hour * rankine)},
		{code: "[Btu_IT]/(h.[degF])", scale: btu / (hour * rankine)},
	}},
	kindVolumetricCapacity: {"volumetric_capacity", "kJ/m3", "[Btu_IT]/[ft_i]3", []unit{
		{code: "J/m3", scale: 1},
		{code: "kJ/m3", scale: 1e3},
		{code: "MJ/m3", scale: 1e6},
		{code: "kW.h/m3", scale: 1e3 * hour},
		{code: "[Btu_IT]/[ft_i]3", scale: btu / (foot * foot * foot)},
	}},
	kindMolarMass: {"molar_mass", "g/mol", "g/mol", []unit{{code: "g/mol", scale: 1e-3}, {code: "kg/mol", scale: 1}, {code: "kg/kmol", scale: 1e-3}}},
	kindLength:    {"length", "m", "[ft_i]", []unit{{code: "m", scale: 1}, {code: "km", scale: 1e3}, {code: "[ft_i]", scale: foot}}},
	kindVolume: {"volume", "m3", "[in_i]3", []unit{
		{code: "m3", scale: 1}, {code: "L", scale: 1e-3}, {code: "cm3", scale: 1e-6}, {code: "[ft_i]3", scale: foot * foot * foot}, {code: "[in_i]3", scale: inch * inch * inch},
	}},
	kindConductance: {"conductance", "W/K", "[Btu_IT]/(h.[degR])", []unit{
		{code: "W/K", scale: 1},
		{code: "kW/K", scale: 1e3},
		{code: "kcal_IT/(h.K)", scale: kcal / hour},
		{code: "[Btu_IT]/(h.[degR])", scale: btu / (hour * rankine)},
		{code: "[Btu_IT]/(h.[degF])", scale: btu / (hour * rankine)},
	}},
	kindThermalResistance: {"thermal_resistance", "K/W", "h.[degR]/[Btu_IT]", []unit{
		{code: "K/W", scale: 1},
		{code: "K/kW", scale: 1e-3},
		{code: "h.[degR]/[Btu_IT]", scale: hour * rankine / btu},
		{code: "h.[degF]/[Btu_IT]", scale: hour * rankine / btu},
	}},
}

// absoluteUnits serve pressures and their differences.
var absoluteUnits = []unit{
	{code: "Pa", scale: 1},
	{code: "hPa", scale: 100},
	{code: "kPa", scale: 1e3},
	{code: "MPa", scale: 1e6},
	{code: "mbar", scale: 100},
	{code: "bar", scale: 1e5},
	{code: "[psi]", scale: psi},
	{code: "att", scale: gn * 1e4},
	{code: "kgf/cm2", scale: gn * 1e4},
	{code: "atm", scale: 101325},
	{code: "mm[Hg]", scale: mercury / 1000},
	{code: "um[Hg]", scale: mercury / 1e6},
	{code: "[in_i'Hg]", scale: mercury * inch},
	{code: "mm[H2O]", scale: waterHead / 1000},
	{code: "[in_i'H2O]", scale: waterHead * inch},
}

// powerUnits serve heat and shaft power. UCUM has no ton of refrigeration and no metric horsepower, but it allows to
// write out what they are.
var powerUnits = []unit{
	{code: "W", scale: 1},
	{code: "kW", scale: 1e3},
	{code: "MW", scale: 1e6},
	{code: "[Btu_IT]/h", scale: btu / hour},
	{code: "12000.[Btu_IT]/h", scale: 12000 * btu / hour},
	{code: "kcal_IT/h", scale: kcal / hour},
	{code: "[HP]", scale: 550 * foot * poundMass * gn},
	{code: "75.kgf.m/s", scale: 75 * gn},
}

// units converts between the wire and SI. It does not change once made.
type units struct {
	of      [kindCount]*unit
	ambient float64 // Pa, what gauge pressures count from
	site    *site   // as the response repeats it; nil without gauge pressures
}

// site says where gauge pressures are read, by one of its members. An ambient pressure is absolute, in the unit of
// pressure.
type site struct {
	Altitude        *float64 `json:"altitude,omitempty"`
	AmbientPressure *float64 `json:"ambient_pressure,omitempty"`
}

// systems are the values of units.system; the first is the default.
var systems = []string{"SI", "IP"}

// newUnits resolves the units member of a request: a system, with a code for each kind that differs from it. Differences
// of temperature and pressure follow the temperature and the pressure unless they have a code of their own. It returns a
// [*Problem] for an unknown kind or code, and for gauge pressures whose ambient pressure is not known.
func newUnits(codes map[string]string, where *site) (*units, error) {
	if len(codes) == 0 && where == nil {
		return standardUnits, nil
	}
	return resolveUnits(codes, where)
}

// standardUnits are those of a request that names none.
var standardUnits = func() *units {
	u, err := resolveUnits(nil, nil)
	if err != nil {
		panic("api: " + err.Error())
	}
	return u
}()

func resolveUnits(codes map[string]string, where *site) (*units, error) {
	var faults []MemberError
	fault := func(member, code, detail string) {
		faults = append(faults, MemberError{Pointer: "#/" + member, Code: code, Detail: detail})
	}
	system := cmp.Or(codes["system"], systems[0])
	if !slices.Contains(systems, system) {
		fault("units/system", "not_allowed", quote(system)+" is no system of units; allowed are "+strings.Join(systems, ", "))
	}
	u := &units{}
	for k := range kindCount {
		q := &quantities[k]
		code, given := codes[q.name]
		if !given {
			code = cmp.Or(u.inherited(k, codes), q.standard(system))
		}
		if u.of[k] = q.unit(code); u.of[k] == nil {
			fault("units/"+q.name, "unknown_unit", quote(code)+" is no unit of "+q.name+"; allowed are "+q.codes())
			u.of[k] = &q.units[0]
		}
	}
	for _, name := range slices.Sorted(maps.Keys(codes)) {
		if name != "system" && kindNamed(name) == kindNone {
			fault("units/"+escapePointer(name), "unknown_member", quote(name)+" is no kind of quantity; allowed are system, "+strings.Join(kindNames(), ", "))
		}
	}
	if len(faults) == 0 {
		u.settle(where, fault)
	}
	return u, invalid(faults)
}

// inherited returns the code that a difference takes from the kind it is a difference of, or "".
func (u *units) inherited(k kind, codes map[string]string) string {
	switch {
	case k == kindTemperatureDifference && codes["temperature"] != "":
		if u.of[kindTemperature].scale == rankine {
			return "[degR]"
		}
		return "K"
	case k == kindPressureDifference && codes["pressure"] != "":
		p := u.of[kindPressure]
		for i := range quantities[k].units {
			if d := &quantities[k].units[i]; d.scale == p.scale && (p.gauge || d.code == p.code) {
				return d.code
			}
		}
	}
	return ""
}

// settle finds the ambient pressure that gauge pressures count from.
func (u *units) settle(where *site, fault func(member, code, detail string)) {
	gauge := u.of[kindPressure].gauge
	switch {
	case where == nil || where.Altitude == nil && where.AmbientPressure == nil:
		if gauge {
			fault("site", "missing", u.of[kindPressure].code+" is a gauge pressure; give site.altitude or site.ambient_pressure, which it counts from")
		}
		return
	case where.Altitude != nil && where.AmbientPressure != nil:
		fault("site/altitude", "surplus", "give altitude or ambient_pressure, not both")
		return
	case where.Altitude != nil:
		z := u.in(kindLength, *where.Altitude)
		if !(lowestSite <= z && z <= highestSite) {
			fault("site/altitude", "out_of_range", fmt.Sprintf("%s is outside %s to %s", u.text(kindLength, z), u.text(kindLength, lowestSite), u.text(kindLength, highestSite)))
			return
		}
		u.ambient = standardAtmosphere(z)
	default:
		p := *where.AmbientPressure * u.of[kindPressure].scale
		if !(ambientMin <= p && p <= ambientMax) {
			fault("site/ambient_pressure", "out_of_range", fmt.Sprintf("%s is outside %s to %s; the ambient pressure is absolute",
				u.difference(p), u.difference(ambientMin), u.difference(ambientMax)))
			return
		}
		u.ambient = p
	}
	if gauge {
		ambient := u.ambient / u.of[kindPressure].scale
		u.site = &site{Altitude: where.Altitude, AmbientPressure: &ambient}
		if where.AmbientPressure != nil {
			u.site.AmbientPressure = where.AmbientPressure
		}
	}
}

// in converts a number of the caller's to SI.
func (u *units) in(k kind, number float64) float64 {
	if k == kindNone {
		return number
	}
	unit := u.of[k]
	si := (number + unit.shift) * unit.scale
	if k == kindTemperature && unit.code != "K" {
		// 0.01 + 273.15 is a hair less than 273.16, where water is solid. A limit that was converted out must come back.
		si = math.Round(si*1e12) / 1e12
	}
	if unit.gauge {
		si += u.ambient
	}
	return si
}

// optional is in for a number that may be absent.
func (u *units) optional(k kind, number *float64) *float64 {
	if number == nil {
		return nil
	}
	return new(u.in(k, *number))
}

// out converts an SI value to the caller's unit, as it is written. Temperatures and their differences are written to
// 1e-11 of a degree: solvers are not sure of more, and 50 reads better than 49.999999999999716.
func (u *units) out(k kind, si float64) float64 {
	x := u.exact(k, si)
	if k == kindTemperature || k == kindTemperatureDifference {
		return math.Round(x*1e11) / 1e11
	}
	return x
}

// ambientPressure returns that of the site in Pa, nil where the request names none.
func (u *units) ambientPressure() *float64 {
	if u.ambient > 0 {
		return &u.ambient
	}
	return nil
}

// known is out for a number that may not exist.
func (u *units) known(k kind, si float64) *float64 { return known(u.out(k, si)) }

// exact converts an SI value to the caller's unit.
func (u *units) exact(k kind, si float64) float64 {
	if k == kindNone {
		return si
	}
	unit := u.of[k]
	if unit.gauge {
		si -= u.ambient
	}
	return si/unit.scale - unit.shift
}

// text writes an SI value in the caller's unit for a message.
func (u *units) text(k kind, si float64) string {
	number := sixDigits(u.out(k, si))
	if k == kindNone {
		return number
	}
	return number + " " + u.of[k].code
}

// sixDigits writes x for a message, without an exponent where people would write none.
func sixDigits(x float64) string {
	short := strconv.FormatFloat(x, 'g', 6, 64)
	if size := math.Abs(x); size < 1e-4 || size >= 1e10 {
		return short
	}
	rounded, _ := strconv.ParseFloat(short, 64) // printed above
	return strconv.FormatFloat(rounded, 'f', -1, 64)
}

// tidy takes off the rounding that a conversion, or a sum of steps of 0.1, leaves behind a number of few digits.
func tidy(x float64) float64 {
	t, _ := strconv.ParseFloat(strconv.FormatFloat(x, 'g', 14, 64), 64) // printed by us
	return t
}

// difference writes an absolute pressure of the site for a message.
func (u *units) difference(p float64) string {
	unit := u.of[kindPressure]
	return sixDigits(p/unit.scale) + " " + strings.TrimSuffix(unit.code, "(g)")
}

// write adds the member units: the code in force for each kind.
func (u *units) write(o *object, kinds []kind) {
	var used [kindCount]bool
	for _, k := range kinds {
		if k != kindNone {
			used[k] = true
		}
	}
	o.name("units")
	codes := begin(o.b)
	for k, yes := range used {
		if yes {
			codes.text(quantities[k].name, u.of[k].code)
		}
	}
	o.b = codes.end()
}

// names returns the code in force for each kind.
func (u *units) names(kinds ...kind) map[string]string {
	codes := make(map[string]string, len(kinds))
	for _, k := range kinds {
		if k != kindNone {
			codes[quantities[k].name] = u.of[k].code
		}
	}
	return codes
}

// standard returns the code that system stands for.
func (q *quantity) standard(system string) string {
	if system == "IP" {
		return q.ip
	}
	return q.si
}

func (q *quantity) unit(code string) *unit {
	for i := range q.units {
		if q.units[i].code == code {
			return &q.units[i]
		}
	}
	return nil
}

func (q *quantity) codes() string {
	codes := make([]string, len(q.units))
	for i, u := range q.units {
		codes[i] = u.code
	}
	return strings.Join(codes, ", ")
}

// kindNamed returns the kind with that name in the units object, or kindNone.
func kindNamed(name string) kind {
	for k := range kindCount {
		if quantities[k].name == name {
			return k
		}
	}
	return kindNone
}

func kindNames() []string {
	names := make([]string, kindCount)
	for k := range kindCount {
		names[k] = quantities[k].name
	}
	return names
}

// Where gauges are read. The altitudes are those that the lowest layer of the standard atmosphere covers on land; the
// pressures hold every mine and mountain and few mistaken units.
const (
	lowestSite, highestSite = -500., 11000. // m
	ambientMin, ambientMax  = 20e3, 130e3   // Pa
)

// standardAtmosphere returns the pressure in Pa at altitude z in m from -500 to 11000, by ISO 2533:1975, the ICAO
// standard atmosphere. Weather moves the real one by some 3 kPa either way.
func standardAtmosphere(z float64) float64 {
	const (
		p0    = 101325.           // Pa
		T0    = 288.15            // K
		lapse = 0.0065            // K/m
		R     = 8314.32 / 28.9644 // J/(kg K), with the gas constant of that standard
	)
	return p0 * math.Pow(1-lapse*z/T0, gn/(R*lapse))
}
