package machine

import (
	"math"

	"dewmark/service/cycle"
)

// CompressorModel tells what the compressor of a machine moves between flanges that are known, without the machine around
// it. It is safe for concurrent use.
type CompressorModel struct{ unit *unit }

// NewCompressorModel returns the model of m's compressor, which must do the whole lift alone. It returns a [*RefusedError].
func NewCompressorModel(m *Machine) (*CompressorModel, error) {
	u := newUnit(m)
	if len(u.refusals) == 0 && (u.steps || u.ejecting) {
		u.wrong(NotAllowed, "machine.layout", message("only a compressor that does the whole lift alone has a flow of its own"))
	}
	if err := u.err(); err != nil {
		return nil, err
	}
	return &CompressorModel{u}, nil
}

// Flow returns the mass flow in kg/s from suction gas at a pressure in Pa and a temperature in K to a discharge pressure in
// Pa, at a speed in 1/s, or at the compressor's own where that is NaN. It returns a [*RefusedError] where the compressor has
// no such speed or no such flow, and an error of the property model.
func (k *CompressorModel) Flow(suctionPressure, suctionTemperature, dischargePressure, speed float64) (float64, error) {
	u := k.unit
	d := &u.compressor
	if math.IsNaN(speed) {
		speed = d.speed
	}
	if d.hasSpeed() && !(d.slowest <= speed && speed <= d.fastest) {
		return 0, &RefusedError{[]Refusal{{Code: OutOfBounds, Field: d.field + ".speed", Message: message(
			"%s 1/s lies outside the range of speeds, %s to %s 1/s", plain(speed), plain(d.slowest), plain(d.fastest))}}}
	}
	f := flanges{suctionPressure: suctionPressure, dischargePressure: dischargePressure, dischargeDew: math.NaN()}
	var err error
	if f.suction, err = u.fluid.TemperaturePressure(suctionTemperature, suctionPressure); err != nil {
		return 0, err
	}
	if len(d.ratings) == 0 {
		flow := d.volumetric.at(dischargePressure/suctionPressure) * f.suction.Rho * d.swept * speed
		if !(flow > 0) {
			return 0, noFlow(d.field+".volumetric_efficiency", dischargePressure/suctionPressure)
		}
		return flow, nil
	}
	dew, err := u.fluid.DewPointAtPressure(suctionPressure)
	if err != nil {
		return 0, err
	}
	f.suctionDew = dew.T
	if dischargePressure < u.fluid.Critical().P {
		hot, err := u.fluid.DewPointAtPressure(dischargePressure)
		if err != nil {
			return 0, err
		}
		f.dischargeDew = hot.T
	}
	return d.mappedFlow(u.fluid, &f, speed)
}

// mappedFlow is linear in the speed between two maps.
func (d *drive) mappedFlow(fluid cycle.Refrigerant, f *flanges, speed float64) (float64, error) {
	at := func(r *rating) (float64, error) {
		if r.area != nil && !r.area.contains(r.area.at(f)) {
			return 0, &RefusedError{[]Refusal{{Code: EnvelopeLeft, Field: r.field + ".envelope", Message: message("the map says nothing here")}}}
		}
		flow, _, err := r.rated(fluid, f)
		if err == nil && !(flow > 0) {
			err = noFlow(r.field, f.dischargePressure/f.suctionPressure)
		}
		return flow, err
	}
	i, share := around(d.ratings, speed)
	flow, err := at(&d.ratings[i])
	if err != nil || share == 0 {
		return flow, err
	}
	faster, err := at(&d.ratings[i+1])
	return (1-share)*flow + share*faster, err
}

func noFlow(field string, ratio float64) error {
	return &RefusedError{[]Refusal{{Code: OutOfBounds, Field: field, Message: message("it leaves no flow at a pressure ratio of %s", plain(ratio))}}}
}
