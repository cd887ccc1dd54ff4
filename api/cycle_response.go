package api

import (
	"strings"

	"dewmark/props"
	"dewmark/service/cycle"
)

// cycleResponse holds the answer in the order it is written: what all responses begin with, then these.
type cycleResponse struct {
	*job
	cycleHead
	states []cycleState
	cycleAccounts
}

type cycleHead struct {
	Layout  string   `json:"layout"`
	With    []string `json:"with,omitempty"` // layouts that transcritical is combined with
	Purpose string   `json:"purpose"`
}

type cycleAccounts struct {
	Components  []component             `json:"components"`
	Compressors []compressorPerformance `json:"compressors"`
	Performance performance             `json:"performance"`
	Figures     figures                 `json:"figures"`
	Optima      []optimum               `json:"optima,omitempty"`
	Closure     closure                 `json:"closure"`
	Ambient     float64                 `json:"ambient_temperature"`   // dead state of the exergy account
	UpperBasis  *basis                  `json:"upper_basis,omitempty"` // of a cascade's upper circuit
}

// cycleState is a state with its label and place, which stand before the members of the state.
type cycleState struct {
	label, place, refrigerant string
	massFlow                  float64
	state                     stateView
}

// encode writes the response. States are too many numbers for reflection.
func (r *cycleResponse) encode(b []byte) ([]byte, error) {
	o := begin(b)
	if err := r.head(&o, append(everything.kinds(), cycleKinds...)); err != nil {
		return nil, err
	}
	if err := o.members(&r.cycleHead); err != nil {
		return nil, err
	}
	writeStates(&o, r.states)
	if err := o.members(&r.cycleAccounts); err != nil {
		return nil, err
	}
	err := r.tail(&o)
	return o.end(), err
}

type component struct {
	Name              string   `json:"name"`
	Inlets            []string `json:"inlets"`
	Outlets           []string `json:"outlets"`
	MassFlow          float64  `json:"mass_flow"`
	Heat              float64  `json:"heat"`             // into the refrigerant
	HeatTemperature   *float64 `json:"heat_temperature"` // of what it comes from or goes to
	Work              float64  `json:"work"`             // into the machine
	EntropyGeneration *float64 `json:"entropy_generation"`
	ExergyDestruction *float64 `json:"exergy_destruction"`
}

// compressorPerformance describes one compressor or one step of compression.
type compressorPerformance struct {
	Name                 string   `json:"name"` // that of its component
	MassFlow             float64  `json:"mass_flow"`
	Power                float64  `json:"power"`
	IsentropicEfficiency float64  `json:"isentropic_efficiency"`
	VolumetricEfficiency *float64 `json:"volumetric_efficiency"`
	PressureRatio        float64  `json:"pressure_ratio"`
	DischargeTemperature float64  `json:"discharge_temperature"`
	SuctionVolumeFlow    float64  `json:"suction_volume_flow"`
	SweptVolumeFlow      *float64 `json:"swept_volume_flow"`
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

// figures holds pressures, and what only some layouts have; null in the others.
type figures struct {
	EvaporatingPressure    float64  `json:"evaporating_pressure"`
	HighPressure           float64  `json:"high_pressure"`
	IntermediatePressure   *float64 `json:"intermediate_pressure"`
	InjectionRatio         *float64 `json:"injection_ratio"`
	FlowRatio              *float64 `json:"flow_ratio"`
	EntrainmentRatio       *float64 `json:"entrainment_ratio"`
	PressureLift           *float64 `json:"pressure_lift"`
	EjectorEfficiency      *float64 `json:"ejector_efficiency"`
	MotiveVelocity         *float64 `json:"motive_velocity"`
	SuctionVelocity        *float64 `json:"suction_velocity"`
	MixedVelocity          *float64 `json:"mixed_velocity"`
	InternalExchangerHeat  *float64 `json:"internal_exchanger_heat"`
	InternalExchangerLimit *string  `json:"internal_exchanger_limit"` // the side of the smaller capacity: vapour or liquid
}

// optimum describes the search for one pressure. Losses are fractions of the COP, one step beside the optimum.
type optimum struct {
	Pointer     string   `json:"pointer"` // to the member that asked for it
	Pressure    float64  `json:"pressure"`
	COP         float64  `json:"cop"`
	Step        float64  `json:"step"`
	LossBelow   *float64 `json:"loss_below"`
	LossAbove   *float64 `json:"loss_above"`
	Tolerance   float64  `json:"tolerance"`
	Evaluations int      `json:"evaluations"`
	AtLimit     bool     `json:"at_limit"`
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

// cycleKinds are the kinds of quantity in a cycle response, besides those of its states.
var cycleKinds = []kind{kindMassFlow, kindVolumeFlow, kindHeatFlow, kindPower, kindEntropyFlow, kindVolumetricCapacity, kindPressureDifference}

// cycleResponse turns a solution into the caller's units. Upper is the upper circuit of a cascade.
func (j *job) cycleResponse(s *cycle.Solution, upper []*job) *cycleResponse {
	resp := &cycleResponse{job: j, cycleHead: headOf(s), cycleAccounts: accountsOf(s, j.units)}
	var all account
	resp.states = j.cycleStates(s, upper, &all)
	j.conclude(&all, everything)
	if len(upper) > 0 {
		upper[0].basis.Extrapolated = j.basis.Extrapolated
		upper[0].basis.Transport = transportBases(upper[0].r, everything)
		resp.UpperBasis = &upper[0].basis
		j.cautions = append(j.cautions, upper[0].cautions...)
	}
	j.repeat(s.Cautions, all.outside > 0)
	j.caution("calculation_aid", handling(j.r, upper))
	return resp
}

func headOf(s *cycle.Solution) cycleHead {
	h := cycleHead{Layout: s.Layout.String(), Purpose: s.Purpose.String()}
	for _, l := range s.With {
		h.With = append(h.With, l.String())
	}
	return h
}

func accountsOf(s *cycle.Solution, u *units) cycleAccounts {
	a := cycleAccounts{
		Performance: performanceOf(&s.Performance, u), Figures: figuresOf(&s.Figures, u),
		Closure: closure{
			EnergyResidualFraction:    s.Closure.EnergyResidualFraction,
			SmallestEntropyGeneration: u.known(kindEntropyFlow, s.Closure.SmallestEntropyGeneration),
			ExergyDestruction:         u.known(kindPower, s.Closure.ExergyDestruction),
			ExergyDelivered:           u.known(kindPower, s.Closure.ExergyDelivered),
			ExergyReceived:            u.known(kindPower, s.Closure.ExergyReceived),
			ExergyResidualFraction:    u.known(kindNone, s.Closure.ExergyResidualFraction),
		},
		Ambient: u.out(kindTemperature, s.Ambient),
	}
	for i := range s.Components {
		a.Components = append(a.Components, componentOf(&s.Components[i], u))
	}
	for i := range s.Compressors {
		a.Compressors = append(a.Compressors, compressorOf(&s.Compressors[i], u))
	}
	for i := range s.Optima {
		a.Optima = append(a.Optima, optimumOf(&s.Optima[i], u))
	}
	return a
}

// cycleStates returns the states around the circuit and enters what is to be said of them.
func (j *job) cycleStates(s *cycle.Solution, upper []*job, into *account) []cycleState {
	states := make([]cycleState, 0, len(s.States))
	for i := range s.States {
		at := &s.States[i]
		of := j
		if len(upper) > 0 && at.Refrigerant == cycle.Refrigerant(upper[0].r) {
			of = upper[0]
		}
		v := of.view(at.State, everything, into)
		into.count(nil, v.extrapolated)
		states = append(states, cycleState{at.Label, at.Place, of.basis.Refrigerant, j.units.out(kindMassFlow, at.MassFlow), v})
	}
	return states
}

// writeStates adds the member states.
func writeStates(o *object, states []cycleState) {
	o.list("states", len(states), func(i int, item *object) {
		s := &states[i]
		item.text("label", s.label)
		item.text("place", s.place)
		item.text("refrigerant", s.refrigerant)
		item.number("mass_flow", s.massFlow)
		s.state.write(item)
	})
}

// repeat passes on the cautions of the solver, but for what is said already.
func (j *job) repeat(cautions []cycle.Caution, extrapolated bool) {
	say := voice{units: j.units}.number
	for _, c := range cautions {
		if c.Code == cycle.Extrapolated && extrapolated {
			continue
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
}

// handling is the caution that goes with whatever someone might build, charge or wire by.
func handling(r props.Refrigerant, upper []*job) string {
	classes := []string{safetyOf(r)}
	for _, above := range upper {
		classes = append(classes, safetyOf(above.r))
	}
	return strings.Join(classes, ", ") +
		"; a calculation aid only: equipment documentation, local codes and a licensed person decide what may be charged, pressurised or wired"
}

func safetyOf(r props.Refrigerant) string {
	if class := r.Identity().Classification.SafetyClass; class != nil {
		return r.Designation() + " has safety class " + *class
	}
	return r.Designation() + " has no safety class on record and is to be treated as flammable and toxic"
}

func componentOf(c *cycle.Component, u *units) component {
	return component{
		Name: c.Name, Inlets: append([]string{}, c.Inlets...), Outlets: append([]string{}, c.Outlets...),
		MassFlow: u.out(kindMassFlow, c.MassFlow), Heat: u.out(kindHeatFlow, c.Heat), HeatTemperature: u.known(kindTemperature, c.HeatTemperature),
		Work: u.out(kindPower, c.Work), EntropyGeneration: u.known(kindEntropyFlow, c.EntropyGeneration),
		ExergyDestruction: u.known(kindPower, c.ExergyDestruction),
	}
}

func compressorOf(c *cycle.CompressorPerformance, u *units) compressorPerformance {
	return compressorPerformance{
		Name: c.Name, MassFlow: u.out(kindMassFlow, c.MassFlow), Power: u.out(kindPower, c.Power), IsentropicEfficiency: c.IsentropicEfficiency,
		VolumetricEfficiency: u.known(kindNone, c.VolumetricEfficiency), PressureRatio: c.PressureRatio,
		DischargeTemperature: u.out(kindTemperature, c.DischargeTemperature), SuctionVolumeFlow: u.out(kindVolumeFlow, c.SuctionVolumeFlow),
		SweptVolumeFlow: u.known(kindVolumeFlow, c.SweptVolumeFlow),
	}
}

func performanceOf(p *cycle.Performance, u *units) performance {
	return performance{
		MassFlow: u.out(kindMassFlow, p.MassFlow), HeatingCapacity: u.out(kindHeatFlow, p.HeatingCapacity),
		CoolingCapacity: u.out(kindHeatFlow, p.CoolingCapacity), CompressorPower: u.out(kindPower, p.CompressorPower),
		COPHeating: p.COPHeating, COPCooling: p.COPCooling,
		CarnotCOPHeating: u.known(kindNone, p.CarnotCOPHeating), CarnotCOPCooling: u.known(kindNone, p.CarnotCOPCooling),
		SecondLawEfficiency: u.known(kindNone, p.SecondLawEfficiency), IsentropicEfficiency: p.IsentropicEfficiency,
		PressureRatio: p.PressureRatio, DischargeTemperature: u.out(kindTemperature, p.DischargeTemperature),
		SuctionVolumeFlow: u.out(kindVolumeFlow, p.SuctionVolumeFlow), SweptVolumeFlow: u.known(kindVolumeFlow, p.SweptVolumeFlow),
		VolumetricHeatingCapacity: u.out(kindVolumetricCapacity, p.VolumetricHeatingCapacity),
		VolumetricCoolingCapacity: u.out(kindVolumetricCapacity, p.VolumetricCoolingCapacity),
	}
}

func figuresOf(f *cycle.Figures, u *units) figures {
	out := figures{
		EvaporatingPressure: u.out(kindPressure, f.EvaporatingPressure), HighPressure: u.out(kindPressure, f.HighPressure),
		IntermediatePressure: u.known(kindPressure, f.IntermediatePressure), InjectionRatio: u.known(kindNone, f.InjectionRatio),
		FlowRatio: u.known(kindNone, f.FlowRatio), EntrainmentRatio: u.known(kindNone, f.EntrainmentRatio),
		PressureLift: u.known(kindPressureDifference, f.PressureLift), EjectorEfficiency: u.known(kindNone, f.EjectorEfficiency),
		MotiveVelocity: u.known(kindVelocity, f.MotiveVelocity), SuctionVelocity: u.known(kindVelocity, f.SuctionVelocity),
		MixedVelocity: u.known(kindVelocity, f.MixedVelocity), InternalExchangerHeat: u.known(kindHeatFlow, f.InternalExchangerHeat),
	}
	if f.CapacityLimitedBy != "" {
		out.InternalExchangerLimit = &f.CapacityLimitedBy
	}
	return out
}

func optimumOf(o *cycle.Optimum, u *units) optimum {
	return optimum{
		Pointer: fieldPointer(o.Field), Pressure: u.out(kindPressure, o.Pressure), COP: o.COP, Step: u.out(kindPressureDifference, o.Step),
		LossBelow: u.known(kindNone, o.LossBelow), LossAbove: u.known(kindNone, o.LossAbove),
		Tolerance: u.out(kindPressureDifference, o.Tolerance), Evaluations: o.Evaluations, AtLimit: o.AtLimit,
	}
}
