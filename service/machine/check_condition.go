package machine

import (
	"math"

	"dewmark/props"
	"dewmark/props/secondary"
)

// streams checks both streams of a condition.
func (p *plan) streams(k *Condition) {
	p.source = p.stream("condition.source", &k.Source, -1, &p.evaporator)
	p.sink = p.stream("condition.sink", &k.Sink, +1, &p.condenser)
	p.ambient = p.number("condition.ambient_temperature", k.AmbientTemperature, &temperatureBounds)
	p.ambientPressure = p.or("site.ambient_pressure", k.AmbientPressure, &pressureBounds, props.StandardAtmosphere)
}

// stream checks one stream.
func (p *plan) stream(field string, s *Stream, sign float64, x *exchange) side {
	out := side{
		field: field, sign: sign, liquid: s.Liquid,
		inlet:  p.number(field+".inlet_temperature", s.InletTemperature, &temperatureBounds),
		outlet: p.number(field+".outlet_temperature", s.OutletTemperature, &temperatureBounds),
		change: p.number(field+".temperature_change", s.TemperatureChange, &positiveKelvins),
		mass:   p.number(field+".mass_flow", s.MassFlow, &massFlowBounds),
		volume: p.number(field+".volume_flow", s.VolumeFlow, &volumeFlowBounds),
	}
	flow := s.MassFlow != nil || s.VolumeFlow != nil
	if s.MassFlow != nil && s.VolumeFlow != nil {
		p.surplus(field+".mass_flow", "give one of mass_flow and volume_flow")
	}
	count := 0
	for _, given := range []bool{s.InletTemperature != nil, s.OutletTemperature != nil, s.TemperatureChange != nil, flow} {
		if given {
			count++
		}
	}
	switch {
	case s.InletTemperature == nil && s.OutletTemperature == nil:
		p.missing(field+".inlet_temperature", "a stream needs its inlet or its outlet temperature")
	case count > 2:
		p.surplus(field, "two of inlet_temperature, outlet_temperature, temperature_change and a flow fix a stream; more are given")
	case count < 2 && !(s.InletTemperature != nil && x.byInlet()):
		p.missing(field, "two of inlet_temperature, outlet_temperature, temperature_change and a flow are needed; inlet_temperature alone is enough only for an exchanger with an approach to the entering stream")
	}
	if s.InletTemperature != nil && s.OutletTemperature != nil && !(sign*(out.outlet-out.inlet) > 0) {
		direction := "above"
		if sign < 0 {
			direction = "below"
		}
		p.wrong(OutOfBounds, field+".outlet_temperature", message("%s must be "+direction+" the inlet, %s", temperature(out.outlet), temperature(out.inlet)))
	}
	if s.Liquid != nil {
		p.liquid(field, s)
		return out
	}
	p.moistAir(field, s, &out)
	return out
}

// liquid refuses what belongs to moist air.
func (p *plan) liquid(field string, s *Stream) {
	for _, f := range []struct {
		name string
		v    *float64
	}{
		{"relative_humidity", s.RelativeHumidity},
		{"wet_bulb_temperature", s.WetBulb},
		{"dew_point_temperature", s.DewPoint},
		{"humidity_ratio", s.HumidityRatio},
		{"pressure", s.Pressure},
	} {
		if f.v != nil {
			p.surplus(field+"."+f.name, "this belongs to moist air, not to a liquid")
		}
	}
}

// moistAir finds the air that enters.
func (p *plan) moistAir(field string, s *Stream, out *side) {
	pressureOfAir := p.or(field+".pressure", s.Pressure, &pressureBounds, props.StandardAtmosphere)
	cooled := out.sign < 0
	p.atMostOne(field, []string{"relative_humidity", "wet_bulb_temperature", "dew_point_temperature", "humidity_ratio"},
		s.RelativeHumidity != nil, s.WetBulb != nil, s.DewPoint != nil, s.HumidityRatio != nil)
	if cooled && (s.InletTemperature == nil || s.OutletTemperature != nil || s.TemperatureChange != nil) {
		p.wrong(NotAllowed, field, message("moist air that is cooled needs its inlet temperature and, unless the exchanger has an approach to the entering stream, its flow: what it leaves with depends on condensation"))
		return
	}
	if s.InletTemperature == nil && (s.RelativeHumidity != nil || s.WetBulb != nil) {
		p.missing(field+".inlet_temperature", "a relative humidity or a wet bulb temperature needs the inlet temperature too; give a dew point or a humidity ratio otherwise")
		return
	}
	T := out.inlet
	if s.InletTemperature == nil {
		T = out.outlet
	}
	if math.IsNaN(T) || math.IsNaN(pressureOfAir) {
		return
	}
	var err error
	name := "inlet_temperature"
	switch {
	case s.RelativeHumidity != nil:
		name = "relative_humidity"
		out.air, err = secondary.AirByRelativeHumidity(pressureOfAir, T, *s.RelativeHumidity)
	case s.WetBulb != nil:
		name = "wet_bulb_temperature"
		out.air, err = secondary.AirByWetBulb(pressureOfAir, T, *s.WetBulb)
	case s.DewPoint != nil:
		name = "dew_point_temperature"
		out.air, err = secondary.AirByDewPoint(pressureOfAir, T, *s.DewPoint)
	case s.HumidityRatio != nil:
		name = "humidity_ratio"
		out.air, err = secondary.AirByHumidityRatio(pressureOfAir, T, *s.HumidityRatio)
	default:
		out.air, err = secondary.AirByHumidityRatio(pressureOfAir, T, 0)
		if cooled {
			p.caution(Assumed, field+".relative_humidity", "no humidity given: dry air assumed, which neither condenses nor frosts")
		}
	}
	if err != nil {
		p.refusals = append(p.refusals, Refusal{
			Code: NoState, Field: field + "." + name, Message: message("there is no such moist air"), Cause: err,
		})
	}
}
