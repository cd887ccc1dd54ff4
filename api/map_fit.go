package api

import (
	"github.com/gin-gonic/gin"

	"dewmark/service/machine"
)

// fitRequest asks for the map that measured points of a compressor make. What it says of the suction gas, the speed and the
// area passes to the map.
type fitRequest struct {
	Units                map[string]string `json:"units"`
	Site                 *site             `json:"site"`
	Points               []ratedPoint      `json:"points" validate:"required,min=3"`
	PressureAxis         bool              `json:"pressure_axis"`
	MapUnits             mapUnits          `json:"map_units"`
	SuctionSuperheat     *float64          `json:"suction_superheat"`
	ReturnGasTemperature *float64          `json:"return_gas_temperature"`
	Speed                *float64          `json:"speed"`
	Envelope             [][]float64       `json:"envelope" validate:"max=200"`
}

// ratedPoint is one measurement: dew temperatures at the flanges, or the discharge pressure with a pressure axis.
type ratedPoint struct {
	EvaporationTemperature  *float64 `json:"evaporation_temperature"`
	CondensationTemperature *float64 `json:"condensation_temperature"`
	DischargePressure       *float64 `json:"discharge_pressure"`
	MassFlow                *float64 `json:"mass_flow"`
	Power                   *float64 `json:"power"`
}

// fitResponse has the map as a machine takes it, and how well it meets the points.
type fitResponse struct {
	Map      fittedMap         `json:"map"`
	MassFlow fitQuality        `json:"mass_flow"`
	Power    fitQuality        `json:"power"`
	Units    map[string]string `json:"units"`
	Site     *site             `json:"site,omitempty"`
	Basis    fitBasis          `json:"basis"`
	Cautions []caution         `json:"cautions"`
}

type fittedMap struct {
	Kind                 string      `json:"kind"`
	MassFlow             []float64   `json:"mass_flow"`
	Power                []float64   `json:"power"`
	Units                mapUnits    `json:"units"`
	PressureAxis         bool        `json:"pressure_axis,omitempty"`
	SuctionSuperheat     *float64    `json:"suction_superheat,omitempty"`
	ReturnGasTemperature *float64    `json:"return_gas_temperature,omitempty"`
	Speed                *float64    `json:"speed,omitempty"`
	Envelope             [][]float64 `json:"envelope,omitempty"`
}

// fitQuality tells how well a fit meets its points. Residuals are measured less fitted.
type fitQuality struct {
	Terms               int       `json:"terms"` // of the ten that the points carry
	RootMeanSquare      float64   `json:"root_mean_square"`
	PredictionDeviation *float64  `json:"prediction_deviation"` // root mean square of each point's residual in a fit without it
	LargestFraction     float64   `json:"largest_fraction"`
	Residuals           []float64 `json:"residuals"`
}

// fitBasis names what a fit rests on. It knows no refrigerant.
type fitBasis struct {
	Model   string `json:"model"`
	Source  string `json:"source"`
	Version string `json:"version"`
}

// fitMap answers POST /v1/compressor-maps/fit.
func (a *API) fitMap(c *gin.Context) (any, error) {
	var req fitRequest
	if err := a.decode(c, &req); err != nil {
		return nil, err
	}
	if n := len(req.Points); n > a.maxPoints {
		return nil, tooMany("#/points", n, a.maxPoints)
	}
	u, err := newUnits(req.Units, req.Site)
	if err != nil {
		return nil, err
	}
	sheet, points, err := req.si(u)
	if err != nil {
		return nil, err
	}
	if err := a.batch(c, len(points), 1); err != nil {
		return nil, err
	}
	var all account
	v := machineVoice{voice: voice{units: u}, condition: "#"}
	fit, err := machine.FitMap(points, sheet.si(), req.PressureAxis)
	if err != nil {
		p := v.problem(err)
		if p.Type == "/problems/impossible-machine" {
			p.Type, p.Title = "/problems/invalid-request", "Invalid request"
		}
		all.count(p, false)
		a.metrics.calculated("map_fit", &all)
		return nil, p
	}
	all.count(nil, false)
	a.metrics.calculated("map_fit", &all)
	return &fitResponse{
		Map: req.fitted(fit, sheet, u), MassFlow: qualityOf(&fit.MassFlow, u, kindMassFlow), Power: qualityOf(&fit.Power, u, kindPower),
		Units: u.names(kindTemperature, kindPressure, kindMassFlow, kindPower), Site: u.site,
		Basis: fitBasis{
			Model: "ten-coefficient polynomial of AHRI 540 and EN 12900", Source: "least squares by singular values, in centred and scaled temperatures", Version: a.version,
		},
		Cautions: v.cautions(fit.Cautions),
	}, nil
}

// si checks the shape of the request and turns its points into SI.
func (r *fitRequest) si(u *units) (*sheet, []machine.RatedPoint, error) {
	var c choices
	sheet := r.MapUnits.resolve(&c, "#/map_units", true, false, r.PressureAxis)
	if r.MapUnits.Capacity != "" {
		c.fault("#/map_units/capacity", "surplus", "the fit is of mass flow and power")
	}
	if r.SuctionSuperheat != nil && r.ReturnGasTemperature != nil {
		c.fault("#/return_gas_temperature", "surplus", "give suction_superheat or return_gas_temperature, not both")
	}
	for i, pair := range r.Envelope {
		if len(pair) != 2 {
			c.fault(place{"#/envelope", i}.String(), "invalid", "a corner is a pair of evaporation and condensation")
		}
	}
	points := make([]machine.RatedPoint, len(r.Points))
	for i := range r.Points {
		p, at := &r.Points[i], place{"#/points", i}.String()
		number := func(name string, k kind, x *float64) float64 {
			if x == nil {
				c.fault(at+"/"+name, "missing", "is required")
				return 1
			}
			return u.in(k, *x)
		}
		q := &points[i]
		q.Evaporation = number("evaporation_temperature", kindTemperature, p.EvaporationTemperature)
		axis, foreign, name := &q.Condensation, p.DischargePressure, "discharge_pressure"
		if r.PressureAxis {
			q.DischargePressure, foreign, name = number(name, kindPressure, p.DischargePressure), p.CondensationTemperature, "condensation_temperature"
		} else {
			*axis = number("condensation_temperature", kindTemperature, p.CondensationTemperature)
		}
		if foreign != nil {
			c.fault(at+"/"+name, "surplus", "pressure_axis says which of condensation_temperature and discharge_pressure a point has")
		}
		q.MassFlow, q.Power = number("mass_flow", kindMassFlow, p.MassFlow), number("power", kindPower, p.Power)
		if len(c) >= maxFaults {
			break
		}
	}
	return sheet, points, invalid(c)
}

// fitted returns the map as a machine takes it, all in the units of its own.
func (r *fitRequest) fitted(fit *machine.MapFit, s *sheet, u *units) fittedMap {
	m := fittedMap{
		Kind: machine.TenCoefficient.String(), MassFlow: fit.MassFlow.Coefficients, Power: fit.Power.Coefficients, Units: r.MapUnits, PressureAxis: r.PressureAxis, Speed: r.Speed,
	}
	if x := r.SuctionSuperheat; x != nil {
		m.SuctionSuperheat = new(tidy(u.in(kindTemperatureDifference, *x) / s.temperature.scale))
	}
	out := func(of *unit, si float64) float64 { return tidy(si/of.scale - of.shift) }
	if x := r.ReturnGasTemperature; x != nil {
		m.ReturnGasTemperature = new(out(s.temperature, u.in(kindTemperature, *x)))
	}
	axis, k := s.temperature, kindTemperature
	if r.PressureAxis {
		axis, k = s.pressure, kindPressure
	}
	for _, pair := range r.Envelope {
		m.Envelope = append(m.Envelope, []float64{out(s.temperature, u.in(kindTemperature, pair[0])), out(axis, u.in(k, pair[1]))})
	}
	return m
}

// qualityOf turns a fit into the caller's units.
func qualityOf(q *machine.QuantityFit, u *units, k kind) fitQuality {
	out := fitQuality{
		Terms: q.Rank, RootMeanSquare: u.out(k, q.RootMeanSquare), PredictionDeviation: u.known(k, q.PredictionSquare),
		LargestFraction: q.LargestShare, Residuals: make([]float64, len(q.Residuals)),
	}
	for i, r := range q.Residuals {
		out.Residuals[i] = u.out(k, r)
	}
	return out
}
