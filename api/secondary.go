package api

import (
	"errors"
	"fmt"
	"math"
	"slices"
	"strings"

	"dewmark/props"
	"dewmark/props/secondary"
	"dewmark/service/machine"
)

// fluidRequest names what flows on the other side of an exchanger.
type fluidRequest struct {
	Fluid          string      `json:"fluid"`
	MassFraction   *float64    `json:"mass_fraction"`   // of a brine
	VolumeFraction *float64    `json:"volume_fraction"` // of a brine, mixed at 20 °C
	Table          *fluidTable `json:"table"`           // of another liquid
}

// fluidTable is a liquid by its properties, in the units of the request.
type fluidTable struct {
	Name          string     `json:"name" validate:"max=64"`
	FreezingPoint *float64   `json:"freezing_point"`
	Rows          []fluidRow `json:"rows" validate:"max=1000"`
}

type fluidRow struct {
	Temperature         *float64 `json:"temperature"`
	Density             *float64 `json:"density"`
	HeatCapacity        *float64 `json:"heat_capacity"`
	ThermalConductivity *float64 `json:"thermal_conductivity"`
	Viscosity           *float64 `json:"viscosity"`
}

// The fluids that are no brines.
const (
	fluidWater  = "water"
	fluidAir    = "moist_air"
	fluidTabled = "table"
)

// fluidNames lists what a fluid can be.
func fluidNames() []string {
	return slices.Concat([]string{fluidWater, fluidAir}, secondary.Brines(), []string{fluidTabled})
}

// fluids finds the liquids of one request, each once: making one takes longer than using it.
type fluids struct {
	water func() (*secondary.Liquid, error)
	units *units
	made  map[fluidKey]*secondary.Liquid
}

type fluidKey struct {
	name     string
	fraction float64
}

func (a *API) fluids(u *units) *fluids {
	return &fluids{water: a.water, units: u, made: map[fluidKey]*secondary.Liquid{}}
}

// makeWater makes liquid water from the catalogue's.
func makeWater(c *props.Catalogue) (*secondary.Liquid, error) {
	r, err := c.Refrigerant("R718", props.TriplePoint)
	if err != nil {
		return nil, err
	}
	pure, ok := r.(*props.Pure)
	if !ok {
		return nil, errors.New("api: water is no pure refrigerant")
	}
	return secondary.NewWater(pure)
}

// liquid returns what a request names, nil for moist air. It notes what is wrong, with pointers from at.
func (f *fluids) liquid(r *fluidRequest, c *choices, at string) *secondary.Liquid {
	brine := slices.Contains(secondary.Brines(), r.Fluid)
	switch {
	case r.Fluid == "":
		c.fault(at+"/fluid", "missing", "is required; allowed are "+strings.Join(fluidNames(), ", "))
		return nil
	case !slices.Contains(fluidNames(), r.Fluid):
		c.fault(at+"/fluid", "not_allowed", quote(r.Fluid)+" is not known; allowed are "+strings.Join(fluidNames(), ", "))
		return nil
	case !brine && r.MassFraction != nil:
		c.fault(at+"/mass_fraction", "surplus", "a mass fraction belongs to a brine: "+strings.Join(secondary.Brines(), ", "))
	case !brine && r.VolumeFraction != nil:
		c.fault(at+"/volume_fraction", "surplus", "a volume fraction belongs to a brine: "+strings.Join(secondary.Brines(), ", "))
	case r.Fluid != fluidTabled && r.Table != nil:
		c.fault(at+"/table", "surplus", "a table belongs to the fluid "+fluidTabled)
	}
	switch {
	case r.Fluid == fluidAir:
		return nil
	case r.Fluid == fluidTabled:
		return f.tabled(r.Table, c, at+"/table")
	case brine:
		return f.brine(r, c, at)
	}
	water, err := f.water()
	if err != nil {
		c.fault(at+"/fluid", "no_state", err.Error())
	}
	return water
}

func (f *fluids) brine(r *fluidRequest, c *choices, at string) *secondary.Liquid {
	pointer, fraction := at+"/mass_fraction", 0.
	switch {
	case r.MassFraction != nil && r.VolumeFraction != nil:
		c.fault(at+"/volume_fraction", "surplus", "give mass_fraction or volume_fraction, not both")
		return nil
	case r.MassFraction != nil:
		fraction = *r.MassFraction
	case r.VolumeFraction != nil:
		pointer = at + "/volume_fraction"
		var err error
		if fraction, err = secondary.BrineMassFraction(r.Fluid, *r.VolumeFraction); err != nil {
			c.fault(pointer, "out_of_range", f.text(err))
			return nil
		}
	default:
		c.fault(pointer, "missing", "a brine needs its mass_fraction or its volume_fraction")
		return nil
	}
	key := fluidKey{r.Fluid, fraction}
	if l, ok := f.made[key]; ok {
		return l
	}
	l, err := secondary.NewBrine(r.Fluid, fraction)
	if err != nil {
		c.fault(pointer, "out_of_range", f.text(err))
		return nil
	}
	f.made[key] = l
	return l
}

func (f *fluids) tabled(t *fluidTable, c *choices, at string) *secondary.Liquid {
	if t == nil {
		c.fault(at, "missing", "the fluid "+fluidTabled+" needs its table")
		return nil
	}
	u := f.units
	freezing := math.NaN()
	if t.FreezingPoint != nil {
		freezing = u.in(kindTemperature, *t.FreezingPoint)
	}
	rows := make([]secondary.Row, len(t.Rows))
	before := len(*c)
	for i := range t.Rows {
		r, here := &t.Rows[i], place{at + "/rows", i}.String()
		number := func(name string, k kind, x *float64, needed bool) float64 {
			if x == nil {
				if needed {
					c.fault(here+"/"+name, "missing", "is required")
				}
				return 0
			}
			return u.in(k, *x)
		}
		rows[i] = secondary.Row{
			T: number("temperature", kindTemperature, r.Temperature, true), Density: number("density", kindDensity, r.Density, true),
			HeatCapacity: number("heat_capacity", kindEntropy, r.HeatCapacity, true),
			Conductivity: number("thermal_conductivity", kindThermalConductivity, r.ThermalConductivity, false),
			Viscosity:    number("viscosity", kindViscosity, r.Viscosity, false),
		}
	}
	if len(*c) > before {
		return nil
	}
	name := t.Name
	if name == "" {
		name = "liquid"
	}
	l, err := secondary.NewTable(name, rows, freezing)
	if e, ok := errors.AsType[*secondary.TableError](err); ok && e.Row >= 0 {
		c.fault(place{at + "/rows", e.Row}.String(), "invalid", e.Reason)
	} else if err != nil {
		c.fault(at, "invalid", f.text(err))
	}
	return l
}

func (f *fluids) text(err error) string { return voice{units: f.units}.cause(err) }

// secondaryKinds maps the quantities of secondary fluids to those of the wire.
var secondaryKinds = map[secondary.Quantity]kind{
	secondary.Temperature: kindTemperature, secondary.WetBulb: kindTemperature, secondary.DewPoint: kindTemperature, secondary.Pressure: kindPressure,
}

// cause tells an error that lies behind a refusal in the caller's units.
func (v voice) cause(err error) string {
	if e, ok := errors.AsType[*secondary.RangeError](err); ok {
		k, ok := secondaryKinds[e.Quantity]
		if !ok {
			k = kindNone
		}
		limits := "above what it allows, up to " + v.text(k, e.Max)
		switch {
		case e.Value < e.Min:
			limits = "below what it allows, from " + v.text(k, e.Min)
		case math.IsNaN(e.Value):
			limits = "no number"
		}
		return fmt.Sprintf("%s: %s %s is %s (%s)", e.Fluid, e.Quantity, v.text(k, e.Value), limits, e.Limit)
	}
	if e, ok := errors.AsType[*secondary.TableError](err); ok {
		return e.Reason
	}
	inner := v
	inner.given = nil
	if p := inner.problem(err); p.Status < 500 {
		return p.Error()
	}
	return err.Error()
}

// streamRequest is what passes an exchanger.
type streamRequest struct {
	fluidRequest
	InletTemperature    *float64 `json:"inlet_temperature"`
	OutletTemperature   *float64 `json:"outlet_temperature"`
	TemperatureChange   *float64 `json:"temperature_change"`
	MassFlow            *float64 `json:"mass_flow"`
	VolumeFlow          *float64 `json:"volume_flow"`
	Pressure            *float64 `json:"pressure"`
	RelativeHumidity    *float64 `json:"relative_humidity"`
	WetBulbTemperature  *float64 `json:"wet_bulb_temperature"`
	DewPointTemperature *float64 `json:"dew_point_temperature"`
	HumidityRatio       *float64 `json:"humidity_ratio"` // mass of water over mass of dry air
}

func (r *streamRequest) si(f *fluids, c *choices, at string) machine.Stream {
	u := f.units
	s := machine.Stream{
		Liquid:           f.liquid(&r.fluidRequest, c, at),
		InletTemperature: u.optional(kindTemperature, r.InletTemperature), OutletTemperature: u.optional(kindTemperature, r.OutletTemperature),
		TemperatureChange: u.optional(kindTemperatureDifference, r.TemperatureChange),
		MassFlow:          u.optional(kindMassFlow, r.MassFlow), VolumeFlow: u.optional(kindVolumeFlow, r.VolumeFlow),
		Pressure: u.optional(kindPressure, r.Pressure), RelativeHumidity: r.RelativeHumidity,
		WetBulb: u.optional(kindTemperature, r.WetBulbTemperature), DewPoint: u.optional(kindTemperature, r.DewPointTemperature),
		HumidityRatio: r.HumidityRatio,
	}
	if r.Fluid == fluidAir && s.Pressure == nil {
		s.Pressure = u.ambientPressure()
	}
	return s
}
