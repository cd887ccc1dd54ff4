package api

import (
	"context"

	"github.com/gin-gonic/gin"

	"dewmark/service/machine"
)

// operatingPointsRequest asks where a machine settles.
type operatingPointsRequest struct {
	machineHead
	Conditions []condition `json:"conditions" validate:"required,min=1,dive"`
}

// condition is what a machine finds around it, and what it is asked to do.
type condition struct {
	ID                 string        `json:"id" validate:"max=128"`
	Source             streamRequest `json:"source"`
	Sink               streamRequest `json:"sink"`
	Speed              *float64      `json:"speed"`
	Demand             demand        `json:"demand"`
	AmbientTemperature *float64      `json:"ambient_temperature"`
}

// demand asks for a capacity of the refrigerant instead of a speed.
type demand struct {
	Heating *float64 `json:"heating"`
	Cooling *float64 `json:"cooling"`
}

// maxConditions bounds a batch of operating points: each answers with some 10 KB. A rating table is the way to more.
const maxConditions = 1000

func (r *condition) si(f *fluids, c *choices, at string) machine.Condition {
	u := f.units
	return machine.Condition{
		Source: r.Source.si(f, c, at+"/source"), Sink: r.Sink.si(f, c, at+"/sink"), Speed: r.Speed,
		Demand:             machine.Demand{Heating: u.optional(kindHeatFlow, r.Demand.Heating), Cooling: u.optional(kindHeatFlow, r.Demand.Cooling)},
		AmbientTemperature: u.optional(kindTemperature, r.AmbientTemperature), AmbientPressure: u.ambientPressure(),
	}
}

// statesPerOperatingPoint is about how many states one operating point costs as much as.
const statesPerOperatingPoint = 32

// operatingPoints answers POST /v1/operating-points.
func (a *API) operatingPoints(c *gin.Context) (any, error) {
	var req operatingPointsRequest
	if err := a.decode(c, &req); err != nil {
		return nil, err
	}
	limit := min(a.maxPoints, maxConditions)
	if n := len(req.Conditions); n > limit {
		return nil, tooMany("#/conditions", n, limit)
	}
	j, m, err := a.beginMachine(&req.machineHead)
	if err != nil {
		return nil, err
	}
	f := a.fluids(j.units)
	conditions := make([]machine.Condition, len(req.Conditions))
	faults := make([]choices, len(req.Conditions))
	for i := range req.Conditions {
		conditions[i] = req.Conditions[i].si(f, &faults[i], place{"#/conditions", i}.String())
	}
	if err := a.batch(c, len(conditions), statesPerOperatingPoint); err != nil {
		return nil, err
	}
	points := make([]pointItem, len(conditions))
	answer := func(ctx context.Context, i int) {
		p := &points[i]
		p.id = req.Conditions[i].ID
		if p.problem = problemOrNil(invalid(faults[i])); p.problem != nil {
			p.account.count(p.problem, false)
			return
		}
		j.operatingPoint(ctx, p, m, &conditions[i], machineVoice{
			voice: voice{units: j.units, r: j.r}, condition: place{"#/conditions", i}.String(), oneMap: req.Machine.Compressor.Map != nil,
		})
	}
	if err := inParallel(contextOf(c), len(points), func(i int) { answer(contextOf(c), i) }); err != nil {
		return nil, err
	}
	var all account
	blamed := 0
	for i := range points {
		if err := points[i].fatal; err != nil {
			return nil, err
		}
		if points[i].machine {
			blamed++
		}
		all.add(&points[i].account)
		if n := points[i].evaluations; n > 0 {
			a.metrics.iterations.WithLabelValues("operating_point").Observe(float64(n))
		}
	}
	a.metrics.calculated("operating_point", &all)
	if blamed == len(points) {
		return nil, points[0].problem
	}
	j.conclude(&all, everything)
	j.caution("calculation_aid", handling(j.r, nil))
	return &operatingPointsResponse{job: j, name: req.Machine.Name, failed: all.failed(), points: points}, nil
}

func problemOrNil(err error) *Problem {
	if err == nil {
		return nil
	}
	return problemFor(err)
}

// operatingPointsResponse holds the answers in the order of the conditions.
type operatingPointsResponse struct {
	*job
	name   string // of the machine
	failed int
	points []pointItem
}

// pointItem is the place of one condition.
type pointItem struct {
	id          string
	problem     *Problem
	machine     bool  // the problem is the machine's, whatever the condition
	fatal       error // no answer at all
	states      []cycleState
	head        cycleHead
	accounts    cycleAccounts
	point       pointAccounts
	account     account
	evaluations int
}

// operatingPoint answers one condition.
func (j *job) operatingPoint(ctx context.Context, into *pointItem, m *machine.Machine, k *machine.Condition, v machineVoice) {
	p, err := machine.Solve(ctx, m, k)
	if err != nil {
		into.problem = v.problem(err)
		into.machine = blamesMachine(err)
		if into.problem.Status >= 500 {
			into.fatal = err
		}
		into.account.count(into.problem, false)
		return
	}
	into.evaluations = p.Evaluations
	into.head, into.accounts = headOf(p.Cycle), accountsOf(p.Cycle, j.units)
	into.states = j.cycleStates(p.Cycle, nil, &into.account)
	into.account.good = 1
	into.point = v.pointAccounts(p)
}

// encode writes the response.
func (r *operatingPointsResponse) encode(b []byte) ([]byte, error) {
	o := begin(b)
	if err := r.head(&o, append(everything.kinds(), pointKinds...)); err != nil {
		return nil, err
	}
	if r.name != "" {
		o.text("machine", r.name)
	}
	o.number("failed", float64(r.failed))
	o.name("operating_points")
	o.b = append(o.b, '[')
	for i := range r.points {
		if i > 0 {
			o.b = append(o.b, ',')
		}
		var err error
		if o.b, err = r.points[i].encode(o.b); err != nil {
			return nil, err
		}
	}
	o.b = append(o.b, ']')
	err := r.tail(&o)
	return o.end(), err
}

// encode adds the item as an object.
func (p *pointItem) encode(b []byte) ([]byte, error) {
	o := begin(b)
	if p.id != "" {
		o.text("id", p.id)
	}
	if p.problem != nil {
		err := o.value("problem", p.problem)
		return o.end(), err
	}
	if err := o.members(&p.head); err != nil {
		return nil, err
	}
	writeStates(&o, p.states)
	if err := p.accounts.write(&o); err != nil {
		return nil, err
	}
	err := o.members(&p.point)
	return o.end(), err
}

// pointKinds are the kinds of quantity of an operating point, besides those of its states.
var pointKinds = append([]kind{kindConductance}, cycleKinds...)

// pointAccounts are the members of an operating point beside those of its cycle.
type pointAccounts struct {
	EvaporationTemperature  float64       `json:"evaporation_temperature"`
	CondensationTemperature *float64      `json:"condensation_temperature"` // null with a gas cooler
	SuctionDewTemperature   float64       `json:"suction_dew_temperature"`
	DischargeDewTemperature *float64      `json:"discharge_dew_temperature"`
	DischargePressure       float64       `json:"discharge_pressure"`
	Superheat               float64       `json:"superheat"`
	Speed                   *float64      `json:"speed"`
	SourceTemperature       float64       `json:"source_temperature"` // entropy mean
	SinkTemperature         float64       `json:"sink_temperature"`
	Evaporator              exchangerView `json:"evaporator"`
	Condenser               exchangerView `json:"condenser"`
	System                  systemView    `json:"system"`
	Envelope                envelopeView  `json:"envelope"`
	WithinEnvelope          bool          `json:"within_envelope"`
	Breaches                []breachView  `json:"breaches"`
	ResidualFraction        float64       `json:"residual_fraction"`
	Cautions                []caution     `json:"cautions"`
}

type systemView struct {
	Power           *float64 `json:"power"`
	CompressorPower float64  `json:"compressor_power"`
	SourcePower     *float64 `json:"source_power"`
	SinkPower       *float64 `json:"sink_power"`
	ControlPower    float64  `json:"control_power"`
	HeatingCapacity *float64 `json:"heating_capacity"`
	CoolingCapacity *float64 `json:"cooling_capacity"`
	COPHeating      *float64 `json:"cop_heating"`
	COPCooling      *float64 `json:"cop_cooling"`
}

type exchangerView struct {
	Arrangement string        `json:"arrangement"`
	Duty        float64       `json:"duty"`
	Pinch       *float64      `json:"pinch"`
	PinchAt     *float64      `json:"pinch_at"`
	UA          *float64      `json:"ua"`
	UAAvailable *float64      `json:"ua_available"`
	Approach    *float64      `json:"approach"`
	ApproachOf  string        `json:"approach_of"`
	Zones       []zoneView    `json:"zones"`
	Secondary   secondaryView `json:"secondary"`
}

type zoneView struct {
	Name              string   `json:"name"`
	Duty              float64  `json:"duty"`
	LMTD              *float64 `json:"lmtd"`
	UA                *float64 `json:"ua"`
	AreaFraction      *float64 `json:"area_fraction"`
	RefrigerantInlet  float64  `json:"refrigerant_inlet"`
	RefrigerantOutlet float64  `json:"refrigerant_outlet"`
	SecondaryInlet    *float64 `json:"secondary_inlet"`
	SecondaryOutlet   *float64 `json:"secondary_outlet"`
	Slices            int      `json:"slices"`
}

type secondaryView struct {
	Fluid             string   `json:"fluid"`
	InletTemperature  float64  `json:"inlet_temperature"`
	OutletTemperature *float64 `json:"outlet_temperature"`
	MassFlow          *float64 `json:"mass_flow"`
	VolumeFlow        *float64 `json:"volume_flow"`
	FreezingPoint     *float64 `json:"freezing_point,omitempty"` // of a liquid that has one
	Air               *airView `json:"air,omitempty"`
}

// airView tells what happens to moist air.
type airView struct {
	InletRelativeHumidity    *float64 `json:"inlet_relative_humidity"`
	OutletRelativeHumidity   *float64 `json:"outlet_relative_humidity"`
	InletWetBulbTemperature  *float64 `json:"inlet_wet_bulb_temperature"`
	OutletWetBulbTemperature *float64 `json:"outlet_wet_bulb_temperature"`
	InletHumidityRatio       *float64 `json:"inlet_humidity_ratio"`
	OutletHumidityRatio      *float64 `json:"outlet_humidity_ratio"`
	SensibleDuty             *float64 `json:"sensible_duty"`
	LatentDuty               *float64 `json:"latent_duty"`
	SensibleHeatRatio        *float64 `json:"sensible_heat_ratio"`
	CondensateFlow           *float64 `json:"condensate_flow"`
	SurfaceTemperature       *float64 `json:"surface_temperature"`
	ApparatusDewPoint        *float64 `json:"apparatus_dew_point"`
	Wet                      bool     `json:"wet"`
}

type envelopeView struct {
	Verdict string   `json:"verdict"`
	Margin  *float64 `json:"margin"` // negative outside
	Edge    string   `json:"edge,omitempty"`
	Source  string   `json:"source,omitempty"`
}

type breachView struct {
	Pointer string  `json:"pointer"` // to the limit
	Value   float64 `json:"value"`
	Limit   float64 `json:"limit"`
	Detail  string  `json:"detail"`
}

// pointAccounts turns an operating point into the caller's units.
func (v machineVoice) pointAccounts(p *machine.OperatingPoint) pointAccounts {
	u := v.units
	out := pointAccounts{
		EvaporationTemperature: u.out(kindTemperature, p.EvaporationTemperature), CondensationTemperature: u.known(kindTemperature, p.CondensationTemperature),
		SuctionDewTemperature: u.out(kindTemperature, p.SuctionDewTemperature), DischargeDewTemperature: u.known(kindTemperature, p.DischargeDewTemperature),
		DischargePressure: u.out(kindPressure, p.DischargePressure), Superheat: u.out(kindTemperatureDifference, p.Superheat),
		Speed: known(p.Speed), SourceTemperature: u.out(kindTemperature, p.SourceTemperature), SinkTemperature: u.out(kindTemperature, p.SinkTemperature),
		Evaporator: exchangerOf(&p.Evaporator, u), Condenser: exchangerOf(&p.Condenser, u), System: systemOf(&p.System, u),
		Envelope: envelopeView{
			Verdict: string(p.Envelope.Verdict), Margin: u.known(kindTemperatureDifference, p.Envelope.Margin), Edge: string(p.Envelope.Edge), Source: p.Envelope.Source,
		},
		WithinEnvelope: p.WithinEnvelope(), Breaches: []breachView{}, ResidualFraction: p.ResidualFraction, Cautions: v.cautions(p.Cautions),
	}
	for i := range p.Breaches {
		b := &p.Breaches[i]
		k := quantityKinds[b.Quantity]
		out.Breaches = append(out.Breaches, breachView{v.pointer(b.Field), u.out(k, b.Value), u.out(k, b.Limit), b.Message.Render(v.number)})
	}
	return out
}

func systemOf(s *machine.System, u *units) systemView {
	return systemView{
		Power: u.known(kindPower, s.Power), CompressorPower: u.out(kindPower, s.CompressorPower),
		SourcePower: u.known(kindPower, s.SourcePower), SinkPower: u.known(kindPower, s.SinkPower), ControlPower: u.out(kindPower, s.ControlPower),
		HeatingCapacity: u.known(kindHeatFlow, s.HeatingCapacity), CoolingCapacity: u.known(kindHeatFlow, s.CoolingCapacity),
		COPHeating: known(s.COPHeating), COPCooling: known(s.COPCooling),
	}
}

func exchangerOf(x *machine.ExchangerResult, u *units) exchangerView {
	out := exchangerView{
		Arrangement: x.Arrangement.String(), Duty: u.out(kindHeatFlow, x.Duty), Pinch: u.known(kindTemperatureDifference, x.Pinch), PinchAt: known(x.PinchAt),
		UA: u.known(kindConductance, x.UA), UAAvailable: u.known(kindConductance, x.UAAvailable),
		Approach: u.known(kindTemperatureDifference, x.Approach), ApproachOf: x.ApproachOf.String(), Zones: []zoneView{},
		Secondary: secondaryOf(&x.Secondary, u),
	}
	for i := range x.Zones {
		z := &x.Zones[i]
		out.Zones = append(out.Zones, zoneView{
			Name: string(z.Name), Duty: u.out(kindHeatFlow, z.Duty), LMTD: u.known(kindTemperatureDifference, z.LMTD), UA: u.known(kindConductance, z.UA),
			AreaFraction: known(z.Share), RefrigerantInlet: u.out(kindTemperature, z.RefrigerantInlet), RefrigerantOutlet: u.out(kindTemperature, z.RefrigerantOutlet),
			SecondaryInlet: u.known(kindTemperature, z.SecondaryInlet), SecondaryOutlet: u.known(kindTemperature, z.SecondaryOutlet), Slices: z.Slices,
		})
	}
	return out
}

func secondaryOf(s *machine.StreamResult, u *units) secondaryView {
	out := secondaryView{
		Fluid: s.Fluid, InletTemperature: u.out(kindTemperature, s.InletTemperature), OutletTemperature: u.known(kindTemperature, s.OutletTemperature),
		MassFlow: u.known(kindMassFlow, s.MassFlow), VolumeFlow: u.known(kindVolumeFlow, s.VolumeFlow), FreezingPoint: u.known(kindTemperature, s.FreezingPoint),
	}
	if s.Fluid == fluidAir {
		out.Air = &airView{
			InletRelativeHumidity: known(s.InletHumidity), OutletRelativeHumidity: known(s.OutletHumidity),
			InletWetBulbTemperature: u.known(kindTemperature, s.InletWetBulb), OutletWetBulbTemperature: u.known(kindTemperature, s.OutletWetBulb),
			InletHumidityRatio: known(s.InletRatio), OutletHumidityRatio: known(s.OutletRatio),
			SensibleDuty: u.known(kindHeatFlow, s.SensibleDuty), LatentDuty: u.known(kindHeatFlow, s.LatentDuty), SensibleHeatRatio: known(s.SensibleRatio),
			CondensateFlow: u.known(kindMassFlow, s.CondensateFlow), SurfaceTemperature: u.known(kindTemperature, s.SurfaceTemperature),
			ApparatusDewPoint: u.known(kindTemperature, s.ApparatusDewPoint), Wet: s.Wet,
		}
	}
	return out
}
