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
	states   []cycleState
	accounts cycleAccounts
}

type cycleHead struct {
	Layout  string   `json:"layout"`
	With    []string `json:"with,omitempty"` // layouts that transcritical is combined with
	Purpose string   `json:"purpose"`
}

// cycleAccounts are the accounts of a cycle: those of each component and the performance, then the rest.
type cycleAccounts struct {
	solution *cycle.Solution
	units    *units
	rest     cycleRest
}

type cycleRest struct {
	Figures    figures   `json:"figures"`
	Optima     []optimum `json:"optima,omitempty"`
	Closure    closure   `json:"closure"`
	Ambient    float64   `json:"ambient_temperature"`   // dead state of the exergy account
	UpperBasis *basis    `json:"upper_basis,omitempty"` // of a cascade's upper circuit
}

// write adds the members of the accounts.
func (a *cycleAccounts) write(o *object) error {
	writeComponents(o, a.solution, a.units)
	writePerformance(o, &a.solution.Performance, a.units)
	if err := o.err(); err != nil {
		return err
	}
	return o.members(&a.rest)
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
	if err := r.accounts.write(&o); err != nil {
		return nil, err
	}
	err := r.tail(&o)
	return o.end(), err
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
	resp := &cycleResponse{job: j, cycleHead: headOf(s), accounts: accountsOf(s, j.units)}
	var all account
	resp.states = j.cycleStates(s, upper, &all)
	j.conclude(&all, everything)
	if len(upper) > 0 {
		upper[0].basis.Extrapolated = j.basis.Extrapolated
		upper[0].basis.Transport = transportBases(upper[0].r, everything)
		resp.accounts.rest.UpperBasis = &upper[0].basis
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
	rest := cycleRest{
		Figures: figuresOf(&s.Figures, u),
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
	for i := range s.Optima {
		rest.Optima = append(rest.Optima, optimumOf(&s.Optima[i], u))
	}
	return cycleAccounts{s, u, rest}
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
		item.figure("mass_flow", s.massFlow)
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

// writeComponents adds the members components and compressors. Heat goes into the refrigerant and work into the machine, and
// a compressor is one compressor or one step of compression with the name of its component.
func writeComponents(o *object, s *cycle.Solution, u *units) {
	o.list("components", len(s.Components), func(i int, item *object) {
		k := &s.Components[i]
		item.text("name", k.Name)
		item.texts("inlets", k.Inlets)
		item.texts("outlets", k.Outlets)
		item.figure("mass_flow", u.out(kindMassFlow, k.MassFlow))
		item.figure("heat", u.out(kindHeatFlow, k.Heat))
		item.number("heat_temperature", u.out(kindTemperature, k.HeatTemperature))
		item.figure("work", u.out(kindPower, k.Work))
		item.number("entropy_generation", u.out(kindEntropyFlow, k.EntropyGeneration))
		item.number("exergy_destruction", u.out(kindPower, k.ExergyDestruction))
	})
	o.list("compressors", len(s.Compressors), func(i int, item *object) {
		k := &s.Compressors[i]
		item.text("name", k.Name)
		item.figure("mass_flow", u.out(kindMassFlow, k.MassFlow))
		item.figure("power", u.out(kindPower, k.Power))
		item.figure("isentropic_efficiency", k.IsentropicEfficiency)
		item.number("volumetric_efficiency", k.VolumetricEfficiency)
		item.figure("pressure_ratio", k.PressureRatio)
		item.figure("discharge_temperature", u.out(kindTemperature, k.DischargeTemperature))
		item.figure("suction_volume_flow", u.out(kindVolumeFlow, k.SuctionVolumeFlow))
		item.number("swept_volume_flow", u.out(kindVolumeFlow, k.SweptVolumeFlow))
	})
}

// writePerformance adds the member performance.
func writePerformance(o *object, p *cycle.Performance, u *units) {
	o.inner("performance", func(item *object) {
		item.figure("mass_flow", u.out(kindMassFlow, p.MassFlow))
		item.figure("heating_capacity", u.out(kindHeatFlow, p.HeatingCapacity))
		item.figure("cooling_capacity", u.out(kindHeatFlow, p.CoolingCapacity))
		item.figure("compressor_power", u.out(kindPower, p.CompressorPower))
		item.figure("cop_heating", p.COPHeating)
		item.figure("cop_cooling", p.COPCooling)
		item.number("carnot_cop_heating", p.CarnotCOPHeating)
		item.number("carnot_cop_cooling", p.CarnotCOPCooling)
		item.number("second_law_efficiency", p.SecondLawEfficiency)
		item.figure("isentropic_efficiency", p.IsentropicEfficiency)
		item.figure("pressure_ratio", p.PressureRatio)
		item.figure("discharge_temperature", u.out(kindTemperature, p.DischargeTemperature))
		item.figure("suction_volume_flow", u.out(kindVolumeFlow, p.SuctionVolumeFlow))
		item.number("swept_volume_flow", u.out(kindVolumeFlow, p.SweptVolumeFlow))
		item.figure("volumetric_heating_capacity", u.out(kindVolumetricCapacity, p.VolumetricHeatingCapacity))
		item.figure("volumetric_cooling_capacity", u.out(kindVolumetricCapacity, p.VolumetricCoolingCapacity))
	})
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
