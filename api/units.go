package api

import "math"

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
		{code: "K", scale: 1}, {code: "Cel", scale: 1, shift: 273.15},
		{code: "[degF]", scale: rankine, shift: 459.67}, {code: "[degR]", scale: rankine},
	}},
	kindTemperatureDifference: {"temperature_difference", "K", "[degR]", []unit{
		{code: "K", scale: 1}, {code: "Cel", scale: 1}, {code: "[degF]", scale: rankine}, {code: "[degR]", scale: rankine},
	}},
	kindPressure: {"pressure", "kPa", "[psi]", []unit{
		{code: "Pa", scale: 1}, {code: "hPa", scale: 100}, {code: "kPa", scale: 1e3}, {code: "MPa", scale: 1e6},
		{code: "mbar", scale: 100}, {code: "bar", scale: 1e5}, {code: "[psi]", scale: psi},
		{code: "att", scale: gn * 1e4}, {code: "kgf/cm2", scale: gn * 1e4}, {code: "atm", scale: 101325},
		{code: "mm[Hg]", scale: mercury / 1000}, {code: "um[Hg]", scale: mercury / 1e6}, {code: "[in_i'Hg]", scale: mercury * inch},
		{code: "mm[H2O]", scale: waterHead / 1000}, {code: "[in_i'H2O]", scale: waterHead * inch},
		{code: "kPa(g)", scale: 1e3, gauge: true}, {code: "bar(g)", scale: 1e5, gauge: true}, {code: "psi(g)", scale: psi, gauge: true},
	}},
	kindPressureDifference: {"pressure_difference", "kPa", "[psi]", []unit{
		{code: "Pa", scale: 1}, {code: "hPa", scale: 100}, {code: "kPa", scale: 1e3}, {code: "MPa", scale: 1e6},
		{code: "mbar", scale: 100}, {code: "bar", scale: 1e5}, {code: "[psi]", scale: psi},
		{code: "att", scale: gn * 1e4}, {code: "kgf/cm2", scale: gn * 1e4}, {code: "atm", scale: 101325},
		{code: "mm[Hg]", scale: mercury / 1000}, {code: "um[Hg]", scale: mercury / 1e6}, {code: "[in_i'Hg]", scale: mercury * inch},
		{code: "mm[H2O]", scale: waterHead / 1000}, {code: "[in_i'H2O]", scale: waterHead * inch},
	}},
	kindDensity: {"density", "kg/m3", "[lb_av]/[ft_i]3", []unit{
		{code: "kg/m3", scale: 1}, {code: "g/cm3", scale: 1e3}, {code: "g/m3", scale: 1e-3}, {code: "kg/L", scale: 1e3}, {code: "g/L", scale: 1},
		{code: "[lb_av]/[ft_i]3", scale: poundMass / (foot * foot * foot)}, {code: "[lb_av]/[gal_us]", scale: poundMass / gallonUS},
	}},
	kindSpecificVolume: {"specific_volume", "m3/kg", "[ft_i]3/[lb_av]", []unit{
		{code: "m3/kg", scale: 1}, {code: "cm3/g", scale: 1e-3}, {code: "L/kg", scale: 1e-3},
		{code: "[ft_i]3/[lb_av]", scale: foot * foot * foot / poundMass}, {code: "[gal_us]/[lb_av]", scale: gallonUS / poundMass},
	}},
	kindEnthalpy: {"enthalpy", "kJ/kg", "[Btu_IT]/[lb_av]", []unit{
		{code: "J/kg", scale: 1}, {code: "kJ/kg", scale: 1e3}, {code: "MJ/kg", scale: 1e6}, {code: "J/g", scale: 1e3},
		{code: "kcal_IT/kg", scale: kcal}, {code: "kW.h/kg", scale: 1e3 * hour}, {code: "[Btu_IT]/[lb_av]", scale: btu / poundMass},
	}},
	kindEntropy: {"entropy", "kJ/(kg.K)", "[Btu_IT]/([lb_av].[degR])", []unit{
		{code: "J/(kg.K)", scale: 1}, {code: "kJ/(kg.K)", scale: 1e3}, {code: "J/(g.K)", scale: 1e3}, {code: "kcal_IT/(kg.K)", scale: kcal},
		{code: "[Btu_IT]/([lb_av].[degR])", scale: btu / (poundMass * rankine)}, {code: "[Btu_IT]/([lb_av].[degF])", scale: btu / (poundMass * rankine)},
	}},
	kindVelocity: {"velocity", "m/s", "[ft_i]/s", []unit{
		{code: "m/s", scale: 1}, {code: "km/h", scale: 1. / 3.6}, {code: "[ft_i]/s", scale: foot}, {code: "[ft_i]/min", scale: foot / 60},
	}},
	kindJouleThomson: {"joule_thomson_coefficient", "K/kPa", "[degR]/[psi]", []unit{
		{code: "K/Pa", scale: 1}, {code: "K/kPa", scale: 1e-3}, {code: "K/MPa", scale: 1e-6}, {code: "K/bar", scale: 1e-5},
		{code: "[degR]/[psi]", scale: rankine / psi}, {code: "[degF]/[psi]", scale: rankine / psi},
	}},
	kindCompressibility: {"compressibility", "kPa-1", "[psi]-1", []unit{
		{code: "Pa-1", scale: 1}, {code: "kPa-1", scale: 1e-3}, {code: "MPa-1", scale: 1e-6}, {code: "bar-1", scale: 1e-5}, {code: "[psi]-1", scale: 1 / psi},
	}},
	kindExpansivity: {"expansivity", "K-1", "[degR]-1", []unit{
		{code: "K-1", scale: 1}, {code: "[degR]-1", scale: 1 / rankine}, {code: "[degF]-1", scale: 1 / rankine},
	}},
	kindViscosity: {"viscosity", "uPa.s", "[lb_av]/([ft_i].h)", []unit{
		{code: "Pa.s", scale: 1}, {code: "mPa.s", scale: 1e-3}, {code: "uPa.s", scale: 1e-6}, {code: "cP", scale: 1e-3},
		{code: "[lb_av]/([ft_i].h)", scale: poundMass / (foot * hour)}, {code: "[lb_av]/([ft_i].s)", scale: poundMass / foot},
	}},
	kindThermalConductivity: {"thermal_conductivity", "mW/(m.K)", "[Btu_IT]/(h.[ft_i].[degR])", []unit{
		{code: "W/(m.K)", scale: 1}, {code: "mW/(m.K)", scale: 1e-3}, {code: "kcal_IT/(h.m.K)", scale: kcal / hour},
		{code: "[Btu_IT]/(h.[ft_i].[degR])", scale: btu / (hour * foot * rankine)}, {code: "[Btu_IT]/(h.[ft_i].[degF])", scale: btu / (hour * foot * rankine)},
	}},
	kindSurfaceTension: {"surface_tension", "mN/m", "[lbf_av]/[ft_i]", []unit{
		{code: "N/m", scale: 1}, {code: "mN/m", scale: 1e-3}, {code: "dyn/cm", scale: 1e-3}, {code: "[lbf_av]/[ft_i]", scale: poundMass * gn / foot},
	}},
	kindMassFlow: {"mass_flow", "kg/s", "[lb_av]/h", []unit{
		{code: "kg/s", scale: 1}, {code: "kg/h", scale: 1. / hour}, {code: "kg/min", scale: 1. / 60}, {code: "g/s", scale: 1e-3},
		{code: "[lb_av]/h", scale: poundMass / hour}, {code: "[lb_av]/min", scale: poundMass / 60}, {code: "[lb_av]/s", scale: poundMass},
	}},
	kindVolumeFlow: {"volume_flow", "m3/h", "[ft_i]3/min", []unit{
		{code: "m3/s", scale: 1}, {code: "m3/h", scale: 1. / hour}, {code: "L/s", scale: 1e-3}, {code: "L/min", scale: 1e-3 / 60}, {code: "L/h", scale: 1e-3 / hour},
		{code: "cm3/s", scale: 1e-6}, {code: "[ft_i]3/min", scale: foot * foot * foot / 60}, {code: "[cft_i]/min", scale: foot * foot * foot / 60},
		{code: "[gal_us]/min", scale: gallonUS / 60}, {code: "[gal_br]/min", scale: gallonUK / 60},
	}},
	kindHeatFlow: {"heat_flow", "kW", "[Btu_IT]/h", powerUnits},
	kindPower:    {"power", "kW", "[HP]", powerUnits},
	kindEntropyFlow: {"entropy_flow", "W/K", "[Btu_IT]/(h.[degR])", []unit{
		{code: "W/K", scale: 1}, {code: "kW/K", scale: 1e3},
		{code: "[Btu_IT]/(h.[degR])", scale: btu / (hour * rankine)}, {code: "[Btu_IT]/(h.[degF])", scale: btu / (hour * rankine)},
	}},
	kindVolumetricCapacity: {"volumetric_capacity", "kJ/m3", "[Btu_IT]/[ft_i]3", []unit{
		{code: "J/m3", scale: 1}, {code: "kJ/m3", scale: 1e3}, {code: "MJ/m3", scale: 1e6}, {code: "kW.h/m3", scale: 1e3 * hour},
		{code: "[Btu_IT]/[ft_i]3", scale: btu / (foot * foot * foot)},
	}},
	kindMolarMass: {"molar_mass", "g/mol", "g/mol", []unit{{code: "g/mol", scale: 1e-3}, {code: "kg/mol", scale: 1}, {code: "kg/kmol", scale: 1e-3}}},
	kindLength:    {"length", "m", "[ft_i]", []unit{{code: "m", scale: 1}, {code: "km", scale: 1e3}, {code: "[ft_i]", scale: foot}}},
}

// powerUnits serve heat and shaft power. UCUM has no ton of refrigeration and no metric horsepower, but it allows to
// write out what they are.
var powerUnits = []unit{
	{code: "W", scale: 1}, {code: "kW", scale: 1e3}, {code: "MW", scale: 1e6},
	{code: "[Btu_IT]/h", scale: btu / hour}, {code: "12000.[Btu_IT]/h", scale: 12000 * btu / hour}, {code: "kcal_IT/h", scale: kcal / hour},
	{code: "[HP]", scale: 550 * foot * poundMass * gn}, {code: "75.kgf.m/s", scale: 75 * gn},
}

// units converts between the wire and SI for one request. The zero value is not usable; see newUnits.
type units struct {
	of      [kindCount]*unit
	ambient float64 // Pa, what gauge pressures count from
}

// site says where gauge pressures are read. One of both is enough.
type site struct {
	Altitude        *float64 `json:"altitude,omitempty"`
	AmbientPressure *float64 `json:"ambient_pressure,omitempty"`
}
