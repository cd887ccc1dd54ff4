package api

import (
	"strings"

	"github.com/gin-gonic/gin"

	"dewmark/service/cycle"
)

// cycleRequest describes a vapour-compression cycle. What belongs together is for the solver to say.
type cycleRequest struct {
	calculation
	Layout       string        `json:"layout"`  // default single_stage
	Purpose      string        `json:"purpose"` // default heating
	Evaporation  evaporation   `json:"evaporation"`
	Condensation condensation  `json:"condensation"`
	Compressor   compressor    `json:"compressor"`
	Evaporator   drop          `json:"evaporator"`
	Condenser    drop          `json:"condenser"`
	Suction      suctionLine   `json:"suction_line"`
	Discharge    dischargeLine `json:"discharge_line"`
	Liquid       liquidLine    `json:"liquid_line"`
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

// size takes exactly one member.
type size struct {
	Heating         *float64 `json:"heating"`
	Cooling         *float64 `json:"cooling"`
	CompressorPower *float64 `json:"compressor_power"`
	MassFlow        *float64 `json:"mass_flow"`
	SweptVolumeFlow *float64 `json:"swept_volume_flow"`
}

type cycleResponse struct {
	Refrigerant string            `json:"refrigerant"`
	Layout      string            `json:"layout"`
	Purpose     string            `json:"purpose"`
	Datum       string            `json:"datum"`
	Units       map[string]string `json:"units"`
	Site        *site             `json:"site,omitempty"`
	States      []cycleState      `json:"states"`
	Components  []component       `json:"components"`
	Performance performance       `json:"performance"`
	Closure     closure           `json:"closure"`
	Ambient     float64           `json:"ambient_temperature"` // dead state of the exergy account
	Basis       basis             `json:"basis"`
	Cautions    []caution         `json:"cautions"`
}

// cycleState is a state with its label and place, which stand before the members of the state.
type cycleState struct {
	label, place string
	state        stateView
}

// MarshalJSON writes the state as an object.
func (s cycleState) MarshalJSON() ([]byte, error) {
	o := begin(nil)
	o.text("label", s.label)
	o.text("place", s.place)
	s.state.write(&o)
	return o.end(), nil
}

type component struct {
	Name              string   `json:"name"`
	Inlets            []string `json:"inlets"`
	Outlets           []string `json:"outlets"`
	MassFlow          float64  `json:"mass_flow"`
	Heat              float64  `json:"heat"` // into the refrigerant
	Work              float64  `json:"work"` // into the machine
	EntropyGeneration *float64 `json:"entropy_generation"`
	ExergyDestruction *float64 `json:"exergy_destruction"`
}

type performance struct {
	MassFlow                  float64  `json:"mass_flow"`
	HeatingCapacity           float64  `json:"heating_capacity"`
	CoolingCapacity           float64  `json:"cooling_capacity"`
	CompressorPower           float64  `json:"compressor_power"`
	COPHeating                float64  `json:"cop_heating"`
	COPCooling                float64  `json:"cop_cooling"`
	CarnotCOPHeating          *float64 `json:"carnot_cop_heating"`
	CarnotCOPCooling          *float64 `json:"carnot_cop_cooling"`
	SecondLawEfficiency       *float64 `json:"second_law_efficiency"`
	IsentropicEfficiency      float64  `json:"isentropic_efficiency"`
	PressureRatio             float64  `json:"pressure_ratio"`
	DischargeTemperature      float64  `json:"discharge_temperature"`
	SuctionVolumeFlow         float64  `json:"suction_volume_flow"`
	SweptVolumeFlow           *float64 `json:"swept_volume_flow"`
	VolumetricHeatingCapacity float64  `json:"volumetric_heating_capacity"`
	VolumetricCoolingCapacity float64  `json:"volumetric_cooling_capacity"`
}

// closure says how well the accounts close. The exergy account needs source and sink temperature.
type closure struct {
	EnergyResidualFraction    float64  `json:"energy_residual_fraction"`
	SmallestEntropyGeneration *float64 `json:"smallest_entropy_generation"`
	ExergyDestruction         *float64 `json:"exergy_destruction"` // of all components
	ExergyDelivered           *float64 `json:"exergy_delivered"`   // with the heat given off
	ExergyReceived            *float64 `json:"exergy_received"`    // with the heat taken up
	ExergyResidualFraction    *float64 `json:"exergy_residual_fraction"`
}

// cycles answers POST /v1/cycles.
func (a *API) cycles(c *gin.Context) (any, error) {
	var req cycleRequest
	if err := a.decode(c, &req); err != nil {
		return nil, err
	}
	j, err := a.begin(&req.calculation)
	if err != nil {
		return nil, err
	}
	question, err := req.si(j)
	if err != nil {
		return nil, err
	}
	counter := &countingRefrigerant{Refrigerant: question.Refrigerant}
	question.Refrigerant = counter
	var all account
	solution, err := cycle.Solve(question)
	a.metrics.iterations.WithLabelValues("cycle").Observe(float64(counter.states))
	if err != nil {
		p := voice{units: j.units, at: "#", r: j.r}.problem(err)
		all.count(p, false)
		a.metrics.calculated("cycle", &all)
		if p.Status >= 500 {
			return nil, err
		}
		return nil, p
	}
	all.count(nil, false)
	a.metrics.calculated("cycle", &all)
	return j.cycleResponse(solution), nil
}

// si turns the request into what the solver reads.
func (r *cycleRequest) si(j *job) (*cycle.Request, error) {
	u := j.units
	var faults []MemberError
	choice := func(pointer, detail string) {
		faults = append(faults, MemberError{Pointer: pointer, Code: "not_allowed", Detail: detail})
	}
	layout, purpose := cycle.SingleStage, cycle.Heating
	var ok bool
	if r.Layout != "" {
		if layout, ok = cycle.ParseLayout(r.Layout); !ok {
			choice("#/layout", quote(r.Layout)+" is no layout; allowed are "+strings.Join(cycle.Layouts(), ", "))
		}
	}
	if r.Purpose != "" {
		if purpose, ok = cycle.ParsePurpose(r.Purpose); !ok {
			choice("#/purpose", quote(r.Purpose)+" is no purpose; allowed are "+cycle.Heating.String()+", "+cycle.Cooling.String())
		}
	}
	reference := func(name, pointer string) cycle.Reference {
		if name == "" {
			return cycle.Dew
		}
		ref, ok := cycle.ParseReference(name)
		if !ok {
			choice(pointer, quote(name)+" is no reference; allowed are "+cycle.Dew.String()+", "+cycle.Mean.String())
		}
		return ref
	}
	dropOf := func(d drop) cycle.Drop {
		return cycle.Drop{
			Pressure:              u.in(kindPressureDifference, d.PressureDrop),
			TemperatureEquivalent: u.in(kindTemperatureDifference, d.TemperatureDropEquivalent),
		}
	}
	question := &cycle.Request{
		Refrigerant: j.r, Layout: layout, Purpose: purpose,
		Evaporation: cycle.Evaporation{
			Temperature: u.optional(kindTemperature, r.Evaporation.Temperature), Pressure: u.optional(kindPressure, r.Evaporation.Pressure),
			Reference: reference(r.Evaporation.Reference, "#/evaporation/reference"),
			Superheat: u.optional(kindTemperatureDifference, r.Evaporation.Superheat), OutletQuality: r.Evaporation.OutletQuality,
		},
		Condensation: cycle.Condensation{
			Temperature: u.optional(kindTemperature, r.Condensation.Temperature), Pressure: u.optional(kindPressure, r.Condensation.Pressure),
			Reference:  reference(r.Condensation.Reference, "#/condensation/reference"),
			Subcooling: u.optional(kindTemperatureDifference, r.Condensation.Subcooling),
		},
		Compressor: cycle.Compressor{
			IsentropicEfficiency: r.Compressor.IsentropicEfficiency,
			DischargeTemperature: u.optional(kindTemperature, r.Compressor.DischargeTemperature),
			VolumetricEfficiency: r.Compressor.VolumetricEfficiency,
			HeatLossFraction:     r.Compressor.HeatLossFraction,
		},
		Evaporator:         cycle.Exchanger{Drop: dropOf(r.Evaporator)},
		Condenser:          cycle.Exchanger{Drop: dropOf(r.Condenser)},
		SuctionLine:        cycle.SuctionLine{Drop: dropOf(r.Suction.drop), TemperatureRise: u.in(kindTemperatureDifference, r.Suction.TemperatureRise)},
		DischargeLine:      cycle.DischargeLine{Drop: dropOf(r.Discharge.drop), TemperatureDrop: u.in(kindTemperatureDifference, r.Discharge.TemperatureDrop)},
		LiquidLine:         cycle.LiquidLine{Drop: dropOf(r.Liquid.drop), TemperatureChange: u.in(kindTemperatureDifference, r.Liquid.TemperatureChange)},
		SourceTemperature:  u.optional(kindTemperature, r.SourceTemperature),
		SinkTemperature:    u.optional(kindTemperature, r.SinkTemperature),
		AmbientTemperature: u.optional(kindTemperature, r.AmbientTemperature),
	}
	if s := r.Size; s != nil {
		question.Size = &cycle.Size{
			Heating: u.optional(kindHeatFlow, s.Heating), Cooling: u.optional(kindHeatFlow, s.Cooling),
			CompressorPower: u.optional(kindPower, s.CompressorPower), MassFlow: u.optional(kindMassFlow, s.MassFlow),
			SweptVolumeFlow: u.optional(kindVolumeFlow, s.SweptVolumeFlow),
		}
	}
	return question, invalid(faults)
}

// cycleKinds are the kinds of quantity in a cycle response, besides those of its states.
var cycleKinds = []kind{kindMassFlow, kindVolumeFlow, kindHeatFlow, kindPower, kindEntropyFlow, kindVolumetricCapacity, kindPressureDifference}

// cycleResponse turns a solution into the caller's units.
func (j *job) cycleResponse(s *cycle.Solution) *cycleResponse {
	u, p := j.units, &s.Performance
	resp := &cycleResponse{
		Refrigerant: j.basis.Refrigerant, Layout: s.Layout.String(), Purpose: s.Purpose.String(), Datum: j.basis.Datum,
		Units: u.names(append(everything.kinds(), cycleKinds...)...), Site: u.site,
		Performance: performance{
			MassFlow: u.out(kindMassFlow, p.MassFlow), HeatingCapacity: u.out(kindHeatFlow, p.HeatingCapacity),
			CoolingCapacity: u.out(kindHeatFlow, p.CoolingCapacity), CompressorPower: u.out(kindPower, p.CompressorPower),
			COPHeating: p.COPHeating, COPCooling: p.COPCooling,
			CarnotCOPHeating: known(p.CarnotCOPHeating), CarnotCOPCooling: known(p.CarnotCOPCooling),
			SecondLawEfficiency: known(p.SecondLawEfficiency), IsentropicEfficiency: p.IsentropicEfficiency,
			PressureRatio: p.PressureRatio, DischargeTemperature: u.out(kindTemperature, p.DischargeTemperature),
			SuctionVolumeFlow: u.out(kindVolumeFlow, p.SuctionVolumeFlow), SweptVolumeFlow: known(u.out(kindVolumeFlow, p.SweptVolumeFlow)),
			VolumetricHeatingCapacity: u.out(kindVolumetricCapacity, p.VolumetricHeatingCapacity),
			VolumetricCoolingCapacity: u.out(kindVolumetricCapacity, p.VolumetricCoolingCapacity),
		},
		Closure: closure{
			EnergyResidualFraction:    s.Closure.EnergyResidualFraction,
			SmallestEntropyGeneration: known(u.out(kindEntropyFlow, s.Closure.SmallestEntropyGeneration)),
			ExergyDestruction:         known(u.out(kindPower, s.Closure.ExergyDestruction)),
			ExergyDelivered:           known(u.out(kindPower, s.Closure.ExergyDelivered)),
			ExergyReceived:            known(u.out(kindPower, s.Closure.ExergyReceived)),
			ExergyResidualFraction:    known(s.Closure.ExergyResidualFraction),
		},
	}
	resp.Ambient = u.out(kindTemperature, s.Ambient)
	var all account
	for _, at := range s.States {
		v := j.view(at.State, everything)
		all.count(nil, v.extrapolated)
		resp.States = append(resp.States, cycleState{at.Label, at.Place, v})
	}
	for _, c := range s.Components {
		resp.Components = append(resp.Components, component{
			Name: c.Name, Inlets: append([]string{}, c.Inlets...), Outlets: append([]string{}, c.Outlets...),
			MassFlow: u.out(kindMassFlow, c.MassFlow), Heat: u.out(kindHeatFlow, c.Heat), Work: u.out(kindPower, c.Work),
			EntropyGeneration: known(u.out(kindEntropyFlow, c.EntropyGeneration)), ExergyDestruction: known(u.out(kindPower, c.ExergyDestruction)),
		})
	}
	j.conclude(&all)
	say := voice{units: u}.number
	for _, c := range s.Cautions {
		if c.Code == cycle.Extrapolated && all.outside > 0 {
			continue // said above
		}
		detail := c.Message.Render(say)
		if c.Field != "" {
			detail = c.Field + ": " + detail
		}
		if c.Label != "" {
			detail += " (state " + c.Label + ")"
		}
		j.caution(string(c.Code), detail)
	}
	j.caution("calculation_aid", j.handling())
	resp.Basis, resp.Cautions = j.basis, j.cautions
	return resp
}

// handling is the caution that goes with whatever someone might build, charge or wire by.
func (j *job) handling() string {
	class := "has no safety class on record: treat it as flammable and toxic"
	if c := j.r.Record().Classification.SafetyClass; c != nil {
		class = "has safety class " + *c
	}
	return j.basis.Refrigerant + " " + class + "; a calculation aid only: equipment documentation, local codes and a licensed person decide what may be charged, pressurised or wired"
}
