package api

import (
	"strings"

	"dewmark/service/cycle"
)

// cycleRequest describes a vapour-compression cycle. What belongs together is for the solver to say; it knows members by
// their paths here.
type cycleRequest struct {
	calculation
	Layout       string        `json:"layout"`  // default single_stage
	With         []string      `json:"with"`    // layouts that transcritical is combined with
	Purpose      string        `json:"purpose"` // default heating
	Evaporation  evaporation   `json:"evaporation"`
	Condensation condensation  `json:"condensation"`
	GasCooler    *gasCooler    `json:"gas_cooler"` // instead of condensation, in transcritical and ejector
	Compressor   compressor    `json:"compressor"`
	Second       *compressor   `json:"second_compressor"` // default like compressor
	Evaporator   drop          `json:"evaporator"`
	Condenser    drop          `json:"condenser"`
	Suction      suctionLine   `json:"suction_line"`
	Discharge    dischargeLine `json:"discharge_line"`
	Liquid       liquidLine    `json:"liquid_line"`
	Exchanger    *exchanger    `json:"internal_exchanger"`
	Intermediate *intermediate `json:"intermediate"`
	Economiser   *economiser   `json:"economiser"`
	Intercooler  *intercooler  `json:"intercooler"`
	Cascade      *cascade      `json:"cascade"`
	Ejector      *ejector      `json:"ejector"`
	Size         *size         `json:"size"` // without it, results are per 1 kg/s

	SourceTemperature  *float64 `json:"source_temperature"`
	SinkTemperature    *float64 `json:"sink_temperature"`
	AmbientTemperature *float64 `json:"ambient_temperature"`
}

// evaporation takes temperature or pressure.
type evaporation struct {
	Temperature   *float64 `json:"temperature"`
	Pressure      *float64 `json:"pressure"`
	Reference     string   `json:"reference"` // default dew
	Superheat     *float64 `json:"superheat"`
	OutletQuality *float64 `json:"outlet_quality"` // of wet vapour, instead of superheat
}

// condensation takes temperature or pressure.
type condensation struct {
	Temperature *float64 `json:"temperature"`
	Pressure    *float64 `json:"pressure"`
	Reference   string   `json:"reference"` // default dew
	Subcooling  *float64 `json:"subcooling"`
}

// gasCooler takes outlet_temperature or approach, and pressure, correlation or optimise.
type gasCooler struct {
	OutletTemperature *float64 `json:"outlet_temperature"`
	Approach          *float64 `json:"approach"`
	Pressure          *float64 `json:"pressure"`
	Correlation       string   `json:"correlation"`
	Optimise          string   `json:"optimise"`
	PressureMax       *float64 `json:"pressure_max"`
}

// compressor takes isentropic_efficiency or a measured discharge_temperature.
type compressor struct {
	IsentropicEfficiency *float64 `json:"isentropic_efficiency"`
	DischargeTemperature *float64 `json:"discharge_temperature"`
	VolumetricEfficiency *float64 `json:"volumetric_efficiency"`
	HeatLossFraction     *float64 `json:"heat_loss_fraction"`
}

// drop is a loss of pressure, given as pressure or as a fall of saturation temperature.
type drop struct {
	PressureDrop              float64 `json:"pressure_drop"`
	TemperatureDropEquivalent float64 `json:"temperature_drop_equivalent"`
}

type suctionLine struct {
	drop
	TemperatureRise float64 `json:"temperature_rise"`
}

type dischargeLine struct {
	drop
	TemperatureDrop float64 `json:"temperature_drop"`
}

type liquidLine struct {
	drop
	TemperatureChange float64 `json:"temperature_change"`
}

// exchanger subcools liquid with suction vapour.
type exchanger struct {
	Effectiveness *float64 `json:"effectiveness"`
	Liquid        drop     `json:"liquid"`
	Vapour        drop     `json:"vapour"`
}

// intermediate takes exactly one member.
type intermediate struct {
	Pressure    *float64 `json:"pressure"`
	Temperature *float64 `json:"temperature"`
	Optimise    string   `json:"optimise"`
}

// economiser takes approach or injection_ratio.
type economiser struct {
	Approach           *float64 `json:"approach"`
	InjectionSuperheat *float64 `json:"injection_superheat"`
	InjectionRatio     *float64 `json:"injection_ratio"`
}

type intercooler struct {
	Kind        string   `json:"kind"`
	Approach    *float64 `json:"approach"`
	Temperature *float64 `json:"temperature"`
}

// cascade describes what lies above the lower circuit, whose refrigerant is the request's own.
type cascade struct {
	Upper      []substance `json:"upper" validate:"max=8"` // one
	Approach   *float64    `json:"approach"`
	Superheat  *float64    `json:"superheat"`
	Subcooling *float64    `json:"subcooling"`
}

type ejector struct {
	MotiveEfficiency    *float64 `json:"motive_efficiency"`
	SuctionEfficiency   *float64 `json:"suction_efficiency"`
	DiffuserEfficiency  *float64 `json:"diffuser_efficiency"`
	SuctionPressureDrop *float64 `json:"suction_pressure_drop"`
}

// size takes exactly one member.
type size struct {
	Heating         *float64 `json:"heating"`
	Cooling         *float64 `json:"cooling"`
	CompressorPower *float64 `json:"compressor_power"`
	MassFlow        *float64 `json:"mass_flow"`
	SweptVolumeFlow *float64 `json:"swept_volume_flow"`
}

// choices collects what is wrong with members that are one word of a list.
type choices []MemberError

// choose returns what name stands for, or fallback when the member is absent.
func choose[T any](c *choices, pointer, name string, fallback T, parse func(string) (T, bool), allowed []string) T {
	if name == "" {
		return fallback
	}
	v, ok := parse(name)
	if !ok {
		*c = append(*c, MemberError{Pointer: pointer, Code: "not_allowed", Detail: quote(name) + " is not known; allowed are " + strings.Join(allowed, ", ")})
		return fallback
	}
	return v
}

// wordsOf lists the names of a choice whose values count from the given one.
func wordsOf[T interface {
	~uint8
	String() string
}](first T) []string {
	var words []string
	for v := first; v.String() != ""; v++ {
		words = append(words, v.String())
	}
	return words
}

// si turns the request into what the solver reads.
func (r *cycleRequest) si(j *job, upper []*job) (*cycle.Request, error) {
	u := j.units
	var c choices
	purposes, references, objectives := wordsOf(cycle.Heating), wordsOf(cycle.Dew), wordsOf(cycle.OptimiseCOP)
	q := &cycle.Request{
		Refrigerant: j.r,
		Layout:      choose(&c, "#/layout", r.Layout, cycle.SingleStage, cycle.ParseLayout, cycle.Layouts()),
		Purpose:     choose(&c, "#/purpose", r.Purpose, cycle.Heating, cycle.ParsePurpose, purposes),
		Evaporation: cycle.Evaporation{
			Temperature: u.optional(kindTemperature, r.Evaporation.Temperature), Pressure: u.optional(kindPressure, r.Evaporation.Pressure),
			Reference: choose(&c, "#/evaporation/reference", r.Evaporation.Reference, cycle.Dew, cycle.ParseReference, references),
			Superheat: u.optional(kindTemperatureDifference, r.Evaporation.Superheat), OutletQuality: r.Evaporation.OutletQuality,
		},
		Condensation: cycle.Condensation{
			Temperature: u.optional(kindTemperature, r.Condensation.Temperature), Pressure: u.optional(kindPressure, r.Condensation.Pressure),
			Reference:  choose(&c, "#/condensation/reference", r.Condensation.Reference, cycle.Dew, cycle.ParseReference, references),
			Subcooling: u.optional(kindTemperatureDifference, r.Condensation.Subcooling),
		},
		Compressor:         r.Compressor.si(u),
		Evaporator:         cycle.Exchanger{Drop: r.Evaporator.si(u)},
		Condenser:          cycle.Exchanger{Drop: r.Condenser.si(u)},
		SuctionLine:        r.Suction.si(u),
		DischargeLine:      r.Discharge.si(u),
		LiquidLine:         r.Liquid.si(u),
		InternalExchanger:  r.Exchanger.si(u),
		Intermediate:       r.Intermediate.si(u, &c, "#/intermediate"),
		Economiser:         r.Economiser.si(u),
		Intercooler:        r.Intercooler.si(u, &c, "#/intercooler"),
		Ejector:            r.Ejector.si(u),
		SourceTemperature:  u.optional(kindTemperature, r.SourceTemperature),
		SinkTemperature:    u.optional(kindTemperature, r.SinkTemperature),
		AmbientTemperature: u.optional(kindTemperature, r.AmbientTemperature),
		AmbientPressure:    u.ambientPressure(),
	}
	q.With = combined(&c, "#/with", r.With)
	if g := r.GasCooler; g != nil {
		q.GasCooler = &cycle.GasCooler{
			OutletTemperature: u.optional(kindTemperature, g.OutletTemperature), Approach: u.optional(kindTemperatureDifference, g.Approach),
			Pressure:    u.optional(kindPressure, g.Pressure),
			Correlation: choose(&c, "#/gas_cooler/correlation", g.Correlation, cycle.NoCorrelation, cycle.ParseCorrelation, cycle.Correlations()),
			Optimise:    choose(&c, "#/gas_cooler/optimise", g.Optimise, cycle.NoObjective, cycle.ParseObjective, objectives),
			PressureMax: u.optional(kindPressure, g.PressureMax),
		}
	}
	if r.Second != nil {
		q.SecondCompressor = new(r.Second.si(u))
	}
	if k := r.Cascade; k != nil {
		q.Cascade = &cycle.CascadeCircuit{
			Approach:  u.optional(kindTemperatureDifference, k.Approach),
			Superheat: u.optional(kindTemperatureDifference, k.Superheat), Subcooling: u.optional(kindTemperatureDifference, k.Subcooling),
		}
		for _, above := range upper {
			q.Cascade.Upper = append(q.Cascade.Upper, above.r)
		}
	}
	if s := r.Size; s != nil {
		q.Size = &cycle.Size{
			Heating: u.optional(kindHeatFlow, s.Heating), Cooling: u.optional(kindHeatFlow, s.Cooling),
			CompressorPower: u.optional(kindPower, s.CompressorPower), MassFlow: u.optional(kindMassFlow, s.MassFlow),
			SweptVolumeFlow: u.optional(kindVolumeFlow, s.SweptVolumeFlow),
		}
	}
	return q, invalid(c)
}

func (k *compressor) si(u *units) cycle.Compressor {
	return cycle.Compressor{
		IsentropicEfficiency: k.IsentropicEfficiency,
		DischargeTemperature: u.optional(kindTemperature, k.DischargeTemperature),
		VolumetricEfficiency: k.VolumetricEfficiency,
		HeatLossFraction:     k.HeatLossFraction,
	}
}

func (d *drop) si(u *units) cycle.Drop {
	return cycle.Drop{
		Pressure:              u.in(kindPressureDifference, d.PressureDrop),
		TemperatureEquivalent: u.in(kindTemperatureDifference, d.TemperatureDropEquivalent),
	}
}

func (l *suctionLine) si(u *units) cycle.SuctionLine {
	return cycle.SuctionLine{Drop: l.drop.si(u), TemperatureRise: u.in(kindTemperatureDifference, l.TemperatureRise)}
}

func (l *dischargeLine) si(u *units) cycle.DischargeLine {
	return cycle.DischargeLine{Drop: l.drop.si(u), TemperatureDrop: u.in(kindTemperatureDifference, l.TemperatureDrop)}
}

func (l *liquidLine) si(u *units) cycle.LiquidLine {
	return cycle.LiquidLine{Drop: l.drop.si(u), TemperatureChange: u.in(kindTemperatureDifference, l.TemperatureChange)}
}

func (x *exchanger) si(u *units) *cycle.InternalExchanger {
	if x == nil {
		return nil
	}
	return &cycle.InternalExchanger{Effectiveness: x.Effectiveness, Liquid: x.Liquid.si(u), Vapour: x.Vapour.si(u)}
}

// si takes the pointer to the member for what is wrong with it; so do others below.
func (m *intermediate) si(u *units, c *choices, at string) *cycle.Intermediate {
	if m == nil {
		return nil
	}
	return &cycle.Intermediate{
		Pressure: u.optional(kindPressure, m.Pressure), Temperature: u.optional(kindTemperature, m.Temperature),
		Optimise: choose(c, at+"/optimise", m.Optimise, cycle.NoObjective, cycle.ParseObjective, wordsOf(cycle.OptimiseCOP)),
	}
}

func (e *economiser) si(u *units) *cycle.Economiser {
	if e == nil {
		return nil
	}
	return &cycle.Economiser{
		Approach: u.optional(kindTemperatureDifference, e.Approach), InjectionSuperheat: u.optional(kindTemperatureDifference, e.InjectionSuperheat),
		InjectionRatio: e.InjectionRatio,
	}
}

func (i *intercooler) si(u *units, c *choices, at string) *cycle.Intercooler {
	if i == nil {
		return nil
	}
	return &cycle.Intercooler{
		Kind:     choose(c, at+"/kind", i.Kind, cycle.DefaultIntercooler, cycle.ParseIntercooler, wordsOf(cycle.OpenIntercooler)),
		Approach: u.optional(kindTemperatureDifference, i.Approach), Temperature: u.optional(kindTemperature, i.Temperature),
	}
}

func (e *ejector) si(u *units) *cycle.EjectorGeometry {
	if e == nil {
		return nil
	}
	return &cycle.EjectorGeometry{
		MotiveEfficiency: e.MotiveEfficiency, SuctionEfficiency: e.SuctionEfficiency, DiffuserEfficiency: e.DiffuserEfficiency,
		SuctionPressureDrop: u.optional(kindPressureDifference, e.SuctionPressureDrop),
	}
}

// combined returns the layouts that one is combined with.
func combined(c *choices, at string, names []string) []cycle.Layout {
	var layouts []cycle.Layout
	for i, name := range names {
		layouts = append(layouts, choose(c, place{at, i}.String(), name, cycle.SingleStage, cycle.ParseLayout, cycle.Layouts()))
	}
	return layouts
}
