package machine

import (
	"math"

	"dewmark/props/secondary"
)

const zeroCelsius = 273.15 // K

// side is a secondary stream whose description was checked. NaN stands for what was not given.
type side struct {
	field  string  // path of the stream
	sign   float64 // +1 when the stream takes up heat, -1 when it gives it off
	liquid *secondary.Liquid
	air    secondary.Air // as it enters; its T is NaN when the inlet is not known
	inlet  float64       // K
	outlet float64       // K
	change float64       // K, positive
	mass   float64       // kg/s; of moist air
	volume float64       // m3/s
}

// passage is a stream that has taken up or given off its heat. Without a known flow it keeps its inlet temperature.
type passage struct {
	*side
	known    bool    // flow and outlet are known
	inT, inH float64 // K and J/kg; of moist air, per kg dry air
	outT     float64 // K; of moist air as if it stayed dry
	outH     float64
	flow     float64 // kg/s; of moist air, of dry air
	capacity float64 // W/K, heat over change of temperature
}

// enthalpy returns the enthalpy at T. Moist air keeps its humidity.
func (s *side) enthalpy(T float64) float64 {
	if s.liquid != nil {
		return s.liquid.Enthalpy(T)
	}
	a := s.air
	a.T = T
	return a.Enthalpy()
}

// temperatureAt is the inverse of enthalpy.
func (s *side) temperatureAt(h float64) float64 {
	if s.liquid != nil {
		return s.liquid.Temperature(h)
	}
	a := s.air
	a.T = zeroCelsius
	return a.Heated(h - a.Enthalpy()).T
}

// massFlow returns the flow in kg/s, of dry air for moist air, of a stream that enters at T.
func (s *side) massFlow(T float64) float64 {
	if s.liquid != nil {
		if !math.IsNaN(s.mass) {
			return s.mass
		}
		return s.volume * s.liquid.Density(T)
	}
	a := s.air
	a.T = T
	if !math.IsNaN(s.mass) {
		return s.mass / (1 + a.W)
	}
	return s.volume / a.Volume()
}

// inletRounds is how often the density at an unknown inlet is improved: it changes by some per mille over a stream's change
// of temperature, so that each round gains three digits.
const inletRounds = 6

// pass lets the stream take up or give off a duty in W.
func (s *side) pass(duty float64) passage {
	p := passage{side: s, known: true}
	flowKnown := !math.IsNaN(s.mass) || !math.IsNaN(s.volume)
	p.inT, p.outT = s.inlet, s.outlet
	if !math.IsNaN(s.change) {
		if math.IsNaN(p.inT) && !math.IsNaN(p.outT) {
			p.inT = p.outT - s.sign*s.change
		} else if math.IsNaN(p.outT) {
			p.outT = p.inT + s.sign*s.change
		}
	}
	switch {
	case !math.IsNaN(p.inT) && !math.IsNaN(p.outT):
		p.inH, p.outH = s.enthalpy(p.inT), s.enthalpy(p.outT)
		p.flow = s.sign * duty / (p.outH - p.inH)
	case !math.IsNaN(p.inT) && flowKnown:
		p.inH = s.enthalpy(p.inT)
		p.flow = s.massFlow(p.inT)
		p.outH = p.inH + s.sign*duty/p.flow
		p.outT = s.temperatureAt(p.outH)
	case !math.IsNaN(p.outT):
		p.outH = s.enthalpy(p.outT)
		p.inT = p.outT
		for range inletRounds {
			p.flow = s.massFlow(p.inT)
			p.inH = p.outH - s.sign*duty/p.flow
			p.inT = s.temperatureAt(p.inH)
		}
	default:
		p.known = false
		p.outT, p.flow = p.inT, math.NaN()
		p.inH = s.enthalpy(p.inT)
		p.outH = p.inH
	}
	p.capacity = s.sign * duty / (p.outT - p.inT)
	return p
}

// at returns the temperature where the stream has made a share of its change, from the inlet.
func (p *passage) at(share float64) float64 {
	switch {
	case !p.known || share == 0:
		return p.inT
	case share == 1:
		return p.outT
	}
	return p.temperatureAt(p.inH + share*(p.outH-p.inH))
}

// entropyMean returns the mean temperature of the heat that the stream exchanged, K.
func (p *passage) entropyMean() float64 {
	switch {
	case p.inT == p.outT:
		return p.inT
	case p.liquid != nil:
		return p.liquid.EntropyMean(p.inT, p.outT)
	}
	return (p.outT - p.inT) / math.Log(p.outT/p.inT)
}
