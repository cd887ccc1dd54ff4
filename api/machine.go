package api

import (
	"cmp"
	"fmt"
	"math"
	"strings"

	"dewmark/service/cycle"
	"dewmark/service/machine"
)

// machineRequest describes a machine where one is needed. What belongs together is for the solver to say; it knows members
// by their paths here.
type machineRequest struct {
	Name         string             `json:"name" validate:"max=128"`
	Refrigerant  substance          `json:"refrigerant" validate:"required"`
	Layout       string             `json:"layout"`  // default single_stage
	With         []string           `json:"with"`    // layouts that transcritical is combined with
	Purpose      string             `json:"purpose"` // default heating
	Compressor   machineCompressor  `json:"compressor"`
	Second       *machineCompressor `json:"second_compressor"` // default like compressor
	Evaporator   machineExchanger   `json:"evaporator"`
	Condenser    machineExchanger   `json:"condenser"`
	Superheat    *float64           `json:"superheat"`
	Subcooling   *float64           `json:"subcooling"`
	GasCooler    *machineGasCooler  `json:"gas_cooler"`
	Suction      suctionLine        `json:"suction_line"`
	Discharge    dischargeLine      `json:"discharge_line"`
	Liquid       liquidLine         `json:"liquid_line"`
	Exchanger    *exchanger         `json:"internal_exchanger"`
	Intermediate *intermediate      `json:"intermediate"`
	Economiser   *economiser        `json:"economiser"`
	Intercooler  *intercooler       `json:"intercooler"`
	Ejector      *ejector           `json:"ejector"`
	Limits       machineLimits      `json:"limits"`
	Auxiliaries  auxiliaries        `json:"auxiliaries"`
}

// machineCompressor takes a map, several maps, or a swept volume with laws of the efficiencies. Speeds are in 1/s whatever
// the units: revolutions or supply frequency, as the swept volume and the maps count.
type machineCompressor struct {
	Map                  *compressorMap    `json:"map"`
	Maps                 []compressorMap   `json:"maps" validate:"max=100,dive"`
	SweptVolume          *float64          `json:"swept_volume"`
	IsentropicEfficiency []float64         `json:"isentropic_efficiency" validate:"max=3"` // coefficients in the pressure ratio
	VolumetricEfficiency []float64         `json:"volumetric_efficiency" validate:"max=3"`
	VolumetricLaw        string            `json:"volumetric_law"` // default polynomial
	HeatLossFraction     *float64          `json:"heat_loss_fraction"`
	DriveEfficiency      *float64          `json:"drive_efficiency"`
	Speed                *float64          `json:"speed"`
	SpeedMin             *float64          `json:"speed_min"`
	SpeedMax             *float64          `json:"speed_max"`
	Envelopes            []envelopeRequest `json:"envelopes" validate:"max=100,dive"`
}

// compressorMap is a data sheet. All in it but the speed is in the units that it declares.
type compressorMap struct {
	Kind                 string      `json:"kind"` // ten_coefficient, the default, or biquadratic
	MassFlow             []float64   `json:"mass_flow" validate:"max=10"`
	Capacity             []float64   `json:"capacity" validate:"max=10"`
	Power                []float64   `json:"power" validate:"max=10"`
	Units                mapUnits    `json:"units"`
	PressureAxis         bool        `json:"pressure_axis"`
	SuctionSuperheat     *float64    `json:"suction_superheat"`
	ReturnGasTemperature *float64    `json:"return_gas_temperature"`
	Subcooling           *float64    `json:"subcooling"`
	SuperheatFactor      *float64    `json:"superheat_factor"`
	Speed                *float64    `json:"speed"`
	Envelope             [][]float64 `json:"envelope" validate:"max=200"`
}

// mapUnits are the units of a data sheet.
type mapUnits struct {
	Temperature string `json:"temperature"`
	MassFlow    string `json:"mass_flow,omitempty"`
	Capacity    string `json:"capacity,omitempty"`
	Power       string `json:"power"`
	Pressure    string `json:"pressure,omitempty"`
}

// envelopeRequest is an area in the units of the request.
type envelopeRequest struct {
	Vertices     [][]float64 `json:"vertices" validate:"max=200"`
	Speed        *float64    `json:"speed"`
	PressureAxis bool        `json:"pressure_axis"`
	Source       string      `json:"source" validate:"max=256"`
}

// machineExchanger takes ua, pinch or approach.
type machineExchanger struct {
	UA               *float64 `json:"ua"`
	Pinch            *float64 `json:"pinch"`
	Approach         *float64 `json:"approach"`
	ApproachOf       string   `json:"approach_of"`
	Reference        string   `json:"reference"`
	Arrangement      string   `json:"arrangement"`
	Slices           *float64 `json:"slices"`
	SuperheatRatio   *float64 `json:"superheat_ratio"`
	DesuperheatRatio *float64 `json:"desuperheat_ratio"`
	SubcoolingRatio  *float64 `json:"subcooling_ratio"`
	SecondaryShare   *float64 `json:"secondary_share"`
	ReferenceFlow    *float64 `json:"reference_flow"` // mass flow
	FlowExponent     *float64 `json:"flow_exponent"`
	Fouling          *float64 `json:"fouling"`
	drop
}

// machineGasCooler takes pressure, correlation or optimise.
type machineGasCooler struct {
	Pressure    *float64 `json:"pressure"`
	Correlation string   `json:"correlation"`
	Optimise    string   `json:"optimise"`
	PressureMin *float64 `json:"pressure_min"`
	PressureMax *float64 `json:"pressure_max"`
}

type machineLimits struct {
	DischargeTemperature  *float64 `json:"discharge_temperature"`
	PressureRatioMax      *float64 `json:"pressure_ratio_max"`
	PressureRatioMin      *float64 `json:"pressure_ratio_min"`
	PressureDifferenceMin *float64 `json:"pressure_difference_min"`
	HighPressure          *float64 `json:"high_pressure"`
	LowPressure           *float64 `json:"low_pressure"`
	EvaporationMax        *float64 `json:"evaporation_max"`
}

type auxiliaries struct {
	Source  auxiliary `json:"source"`
	Sink    auxiliary `json:"sink"`
	Control *float64  `json:"control"`
}

// auxiliary is a fan or a pump, by its power, or by pressure_rise and efficiency.
type auxiliary struct {
	Power         *float64 `json:"power"`
	PressureRise  *float64 `json:"pressure_rise"`
	Efficiency    *float64 `json:"efficiency"`
	ReferenceFlow *float64 `json:"reference_flow"` // volume flow
	HeatToStream  *float64 `json:"heat_to_stream"`
}

// machineHead holds what all requests with a machine share, beside what each asks of it.
type machineHead struct {
	Machine     *machineRequest   `json:"machine" validate:"required"`
	Datum       string            `json:"datum"`
	Units       map[string]string `json:"units"`
	Site        *site             `json:"site"`
	Extrapolate bool              `json:"extrapolate"`
	Estimates   bool              `json:"accept_estimates"`
}

// beginMachine resolves the head of a request with a machine.
func (a *API) beginMachine(h *machineHead) (*job, *machine.Machine, error) {
	j, err := a.begin(&calculation{
		Refrigerant: h.Machine.Refrigerant, Datum: h.Datum, Units: h.Units, Site: h.Site, Extrapolate: h.Extrapolate, Estimates: h.Estimates,
	})
	if err != nil {
		return nil, nil, within(err, "#/refrigerant", "#/machine/refrigerant")
	}
	m, err := h.Machine.si(j.r, j.units)
	return j, m, err
}

// within returns err with the pointers that lead through one place leading through another.
func within(err error, from, to string) error {
	p := *problemFor(err)
	p.Errors = append([]MemberError(nil), p.Errors...)
	for i := range p.Errors {
		if rest, ok := strings.CutPrefix(p.Errors[i].Pointer, from); ok && (rest == "" || rest[0] == '/') {
			p.Errors[i].Pointer = to + rest
		}
	}
	if p.Status == 422 && p.Type == "/problems/invalid-request" {
		p.Detail = summary(p.Errors)
	}
	return &p
}

// si turns the machine into what the solver reads.
func (r *machineRequest) si(fluid cycle.Refrigerant, u *units) (*machine.Machine, error) {
	const at = "#/machine"
	var c choices
	m := &machine.Machine{
		Name: r.Name, Refrigerant: fluid,
		Layout:     choose(&c, at+"/layout", r.Layout, cycle.SingleStage, cycle.ParseLayout, cycle.Layouts()),
		With:       combined(&c, at+"/with", r.With),
		Purpose:    choose(&c, at+"/purpose", r.Purpose, cycle.Heating, cycle.ParsePurpose, wordsOf(cycle.Heating)),
		Compressor: r.Compressor.si(u, &c, at+"/compressor"),
		Evaporator: r.Evaporator.si(u, &c, at+"/evaporator"), Condenser: r.Condenser.si(u, &c, at+"/condenser"),
		Superheat: u.optional(kindTemperatureDifference, r.Superheat), Subcooling: u.optional(kindTemperatureDifference, r.Subcooling),
		SuctionLine: r.Suction.si(u), DischargeLine: r.Discharge.si(u), LiquidLine: r.Liquid.si(u),
		InternalExchanger: r.Exchanger.si(u), Intermediate: r.Intermediate.si(u, &c, at+"/intermediate"), Economiser: r.Economiser.si(u),
		Intercooler: r.Intercooler.si(u, &c, at+"/intercooler"), Ejector: r.Ejector.si(u),
		Limits: machine.Limits{
			DischargeTemperature: u.optional(kindTemperature, r.Limits.DischargeTemperature),
			PressureRatioMax:     r.Limits.PressureRatioMax, PressureRatioMin: r.Limits.PressureRatioMin,
			PressureDifferenceMin: u.optional(kindPressureDifference, r.Limits.PressureDifferenceMin),
			HighPressure:          u.optional(kindPressure, r.Limits.HighPressure), LowPressure: u.optional(kindPressure, r.Limits.LowPressure),
			EvaporationMax: u.optional(kindTemperature, r.Limits.EvaporationMax),
		},
		Auxiliaries: machine.Auxiliaries{
			Source: r.Auxiliaries.Source.si(u), Sink: r.Auxiliaries.Sink.si(u), Control: u.optional(kindPower, r.Auxiliaries.Control),
		},
	}
	if r.Second != nil {
		m.SecondCompressor = new(r.Second.si(u, &c, at+"/second_compressor"))
	}
	if g := r.GasCooler; g != nil {
		m.GasCooler = &machine.HighSide{
			Pressure:    u.optional(kindPressure, g.Pressure),
			Correlation: choose(&c, at+"/gas_cooler/correlation", g.Correlation, cycle.NoCorrelation, cycle.ParseCorrelation, cycle.Correlations()),
			Optimise:    choose(&c, at+"/gas_cooler/optimise", g.Optimise, cycle.NoObjective, cycle.ParseObjective, wordsOf(cycle.OptimiseCOP)),
			PressureMin: u.optional(kindPressure, g.PressureMin), PressureMax: u.optional(kindPressure, g.PressureMax),
		}
	}
	return m, invalid(c)
}

func (r *machineCompressor) si(u *units, c *choices, at string) machine.Compressor {
	k := machine.Compressor{
		SweptVolume: u.optional(kindVolume, r.SweptVolume), HeatLossFraction: r.HeatLossFraction, DriveEfficiency: r.DriveEfficiency,
		Speed: r.Speed, SpeedMin: r.SpeedMin, SpeedMax: r.SpeedMax,
	}
	law := choose(c, at+"/volumetric_law", r.VolumetricLaw, machine.PolynomialLaw, machine.ParseLaw, wordsOf(machine.PolynomialLaw))
	if r.IsentropicEfficiency != nil {
		k.IsentropicEfficiency = &machine.Law{Coefficients: r.IsentropicEfficiency}
	}
	if r.VolumetricEfficiency != nil {
		k.VolumetricEfficiency = &machine.Law{Kind: law, Coefficients: r.VolumetricEfficiency}
	}
	switch {
	case r.Map != nil && r.Maps != nil:
		c.fault(at+"/map", "surplus", "give map for one speed or maps for several, not both")
	case r.Map != nil:
		k.Maps = []machine.Map{r.Map.si(c, at+"/map")}
	}
	for i := range r.Maps {
		k.Maps = append(k.Maps, r.Maps[i].si(c, place{at + "/maps", i}.String()))
	}
	for i := range r.Envelopes {
		e, here := &r.Envelopes[i], place{at + "/envelopes", i}.String()
		k.Envelopes = append(k.Envelopes, machine.Envelope{
			Speed: e.Speed, PressureAxis: e.PressureAxis, Source: e.Source,
			Vertices: vertices(c, here+"/vertices", e.Vertices, func(evaporation, condensation float64) machine.Vertex {
				k := kindTemperature
				if e.PressureAxis {
					k = kindPressure
				}
				return machine.Vertex{Evaporation: u.in(kindTemperature, evaporation), Condensation: u.in(k, condensation)}
			}),
		})
	}
	return k
}

// vertices turns pairs of numbers into corners.
func vertices(c *choices, at string, pairs [][]float64, corner func(evaporation, condensation float64) machine.Vertex) []machine.Vertex {
	corners := make([]machine.Vertex, 0, len(pairs))
	for i, pair := range pairs {
		if len(pair) != 2 {
			c.fault(place{at, i}.String(), "invalid", fmt.Sprintf("a corner is a pair of evaporation and condensation, not %d numbers", len(pair)))
			continue
		}
		corners = append(corners, corner(pair[0], pair[1]))
	}
	return corners
}

// fault notes what is wrong with a member.
func (c *choices) fault(pointer, code, detail string) {
	*c = append(*c, MemberError{Pointer: pointer, Code: code, Detail: detail})
}

func (r *compressorMap) si(c *choices, at string) machine.Map {
	kind, ok := machine.ParseMapKind(cmp.Or(r.Kind, machine.TenCoefficient.String()))
	if !ok {
		c.fault(at+"/kind", "not_allowed", quote(r.Kind)+" is not known; allowed are "+strings.Join(machine.MapKinds(), ", "))
	}
	sheet := r.Units.resolve(c, at+"/units", r.MassFlow != nil, r.Capacity != nil, r.PressureAxis)
	m := machine.Map{
		Kind: kind, MassFlow: r.MassFlow, Capacity: r.Capacity, Power: r.Power, PressureAxis: r.PressureAxis,
		Units: sheet.si(), SuperheatFactor: r.SuperheatFactor, Speed: r.Speed,
		SuctionSuperheat: sheet.difference(r.SuctionSuperheat), Subcooling: sheet.difference(r.Subcooling),
		Envelope: vertices(c, at+"/envelope", r.Envelope, sheet.vertex(r.PressureAxis)),
	}
	if t := r.ReturnGasTemperature; t != nil {
		m.ReturnGasTemperature = new(sheet.temperature.si(*t))
	}
	return m
}

// sheet holds the units of a data sheet.
type sheet struct{ temperature, massFlow, capacity, power, pressure *unit }

// noUnit stands for a unit that a data sheet has no use for.
var noUnit = &unit{scale: 1}

// resolve finds the units of a data sheet, which has no defaults: that is how maps are mistaken.
func (r *mapUnits) resolve(c *choices, at string, hasMassFlow, hasCapacity, hasPressure bool) *sheet {
	find := func(member, code string, k kind, needed bool) *unit {
		q := &quantities[k]
		switch u := q.unit(code); {
		case code == "" && needed:
			c.fault(at+"/"+member, "missing", "a map declares its units; allowed are "+absoluteCodes(q))
		case code == "":
		case u == nil || u.gauge:
			c.fault(at+"/"+member, "unknown_unit", quote(code)+" is no unit of it here; allowed are "+absoluteCodes(q))
		default:
			return u
		}
		return noUnit
	}
	return &sheet{
		temperature: find("temperature", r.Temperature, kindTemperature, true),
		massFlow:    find("mass_flow", r.MassFlow, kindMassFlow, hasMassFlow),
		capacity:    find("capacity", r.Capacity, kindHeatFlow, hasCapacity),
		power:       find("power", r.Power, kindPower, true),
		pressure:    find("pressure", r.Pressure, kindPressure, hasPressure),
	}
}

// absoluteCodes lists the units of a quantity that need no site.
func absoluteCodes(q *quantity) string {
	var codes []string
	for _, u := range q.units {
		if !u.gauge {
			codes = append(codes, u.code)
		}
	}
	return strings.Join(codes, ", ")
}

// si converts a number with this unit, which is no gauge.
func (u *unit) si(number float64) float64 { return (number + u.shift) * u.scale }

func (s *sheet) si() machine.MapUnits {
	t := s.temperature
	return machine.MapUnits{
		Temperature: machine.Scale{Unit: t.scale, Zero: t.shift * t.scale},
		MassFlow:    s.massFlow.scale, Power: s.power.scale, Capacity: s.capacity.scale, Pressure: s.pressure.scale,
	}
}

func (s *sheet) difference(number *float64) *float64 {
	if number == nil {
		return nil
	}
	return new(*number * s.temperature.scale)
}

func (s *sheet) vertex(pressureAxis bool) func(evaporation, condensation float64) machine.Vertex {
	axis := s.temperature
	if pressureAxis {
		axis = s.pressure
	}
	return func(evaporation, condensation float64) machine.Vertex {
		return machine.Vertex{Evaporation: s.temperature.si(evaporation), Condensation: axis.si(condensation)}
	}
}

func (r *machineExchanger) si(u *units, c *choices, at string) machine.Exchanger {
	x := machine.Exchanger{
		UA: u.optional(kindConductance, r.UA), Pinch: u.optional(kindTemperatureDifference, r.Pinch), Approach: u.optional(kindTemperatureDifference, r.Approach),
		ApproachOf:     choose(c, at+"/approach_of", r.ApproachOf, machine.DefaultApproach, machine.ParseApproach, wordsOf(machine.LeavingApproach)),
		Reference:      choose(c, at+"/reference", r.Reference, cycle.Dew, cycle.ParseReference, wordsOf(cycle.Dew)),
		Arrangement:    choose(c, at+"/arrangement", r.Arrangement, machine.DefaultArrangement, machine.ParseArrangement, machine.Arrangements()),
		SuperheatRatio: r.SuperheatRatio, DesuperheatRatio: r.DesuperheatRatio, SubcoolingRatio: r.SubcoolingRatio,
		SecondaryShare: r.SecondaryShare, ReferenceFlow: u.optional(kindMassFlow, r.ReferenceFlow), FlowExponent: r.FlowExponent,
		Fouling: u.optional(kindThermalResistance, r.Fouling), Drop: r.drop.si(u),
	}
	x.Slices = c.count(at+"/slices", r.Slices)
	return x
}

// count returns a whole number, for which JSON has no type of its own. Its bounds are for others to say.
func (c *choices) count(pointer string, number *float64) *int {
	if number == nil {
		return nil
	}
	if math.Trunc(*number) != *number || math.Abs(*number) > 1e9 {
		c.fault(pointer, "invalid", fmt.Sprintf("must be a whole number within 1e9 either way, not %g", *number))
		return nil
	}
	return new(int(*number))
}

func (r *auxiliary) si(u *units) machine.Auxiliary {
	return machine.Auxiliary{
		Power: u.optional(kindPower, r.Power), PressureRise: u.optional(kindPressureDifference, r.PressureRise), Efficiency: r.Efficiency,
		ReferenceFlow: u.optional(kindVolumeFlow, r.ReferenceFlow), HeatToStream: r.HeatToStream,
	}
}
