package transport

import (
	"encoding/json"
	"errors"
	"fmt"
	"math"
)

// tensionModel gives the surface tension in N/m at temperature T in K. criticalT is where the model lets it vanish.
type tensionModel interface {
	tension(T float64) float64
	criticalT() float64
}

// tensionRecord is a record ready for use.
type tensionRecord struct {
	Record
	model tensionModel

	// Beyond its range a fit may turn down or negative; these are the temperatures from which the law of Guggenheim
	// continues it then.
	floor, ceiling float64 // K
}

// tensionSum is sum s (1 - T/T_c)^n.
type tensionSum struct {
	tc   float64
	rows [][2]float64
}

func (m *tensionSum) criticalT() float64 { return m.tc }

func (m *tensionSum) tension(T float64) float64 {
	return polynomial(m.rows, max(0, 1-T/m.tc))
}

// waterTension is IAPWS R1-76 (2014).
type waterTension struct{ tc, B, b, mu float64 }

func (m *waterTension) criticalT() float64 { return m.tc }

func (m *waterTension) tension(T float64) float64 {
	t := max(0, 1-T/m.tc)
	return m.B * math.Pow(t, m.mu) * (1 + m.b*t)
}

// boilingTension is the rule of Brock and Bird, AIChE J. 1 (1955) 174, with the boiling point in the form of Miller.
type boilingTension struct{ tc, factor float64 }

func newBoilingTension(f *Fluid, boiling float64) (*boilingTension, error) {
	c := f.Critical
	tr := boiling / c.T
	if !(tr > 0.3 && tr < 1) {
		return nil, errors.New("boiling_temperature must lie between 0.3 and 1 times the critical temperature")
	}
	q := 0.1196*(1+tr*math.Log(c.P/101325)/(1-tr)) - 0.279
	return &boilingTension{c.T, 1e-3 * math.Pow(c.P/1e5, 2.0/3) * math.Cbrt(c.T) * q}, nil
}

func (m *boilingTension) criticalT() float64 { return m.tc }

func (m *boilingTension) tension(T float64) float64 {
	return m.factor * math.Pow(max(0, 1-T/m.tc), guggenheim)
}

// guggenheim is the exponent of the law of van der Waals and Guggenheim, sigma ~ (1 - T/T_c)^(11/9).
const guggenheim = 11.0 / 9

// mergeFrom is the reduced temperature above which the temperature scale of a record is stretched, so that the tension
// vanishes where the two phases of the equation of state merge and not at the critical point that the record assumes.
const mergeFrom = 0.9

// at returns the tension at T, the phases merging at temperature merge in K.
func (r *tensionRecord) at(T, merge float64) float64 {
	if T >= merge {
		return 0
	}
	if x := T / merge; x > mergeFrom {
		T += (r.model.criticalT() - merge) * (x - mergeFrom) / (1 - mergeFrom)
	}
	if T < r.floor {
		return r.guggenheim(r.floor, T)
	}
	if T > r.ceiling {
		return r.guggenheim(r.ceiling, T)
	}
	return r.model.tension(T)
}

// guggenheim continues the model from temperature end to T.
func (r *tensionRecord) guggenheim(end, T float64) float64 {
	tc := r.model.criticalT()
	return r.model.tension(end) * math.Pow(max(0, tc-T)/(tc-end), guggenheim)
}

// bound sets where the model must not be used.
func (r *tensionRecord) bound(low float64) {
	r.floor, r.ceiling = 0, math.Inf(1)
	if start := r.Range.TemperatureMin; low < start && !sound(r.model, low, start) {
		r.floor = start
	}
	if end, tc := r.Range.TemperatureMax, r.model.criticalT(); end < tc && !sound(r.model, end, tc) {
		r.ceiling = end
	}
}

// sound reports whether the model falls all the way from temperature low to high and is not negative.
func sound(m tensionModel, low, high float64) bool {
	const steps = 400
	before := math.Inf(1)
	for i := range steps + 1 {
		v := m.tension(low + (high-low)*float64(i)/steps)
		if !(v < before && v >= 0) {
			return false
		}
		before = v
	}
	return true
}

// tensionForm is a surface tension record of any kind.
type tensionForm struct {
	head
	TC      float64      `json:"T_c"`
	Rows    [][2]float64 `json:"rows"`
	B       float64      `json:"B"`
	LittleB float64      `json:"b"`
	Mu      float64      `json:"mu"`
	Boiling float64      `json:"boiling_temperature"`
}

func newTension(b json.RawMessage, f *Fluid) (tensionRecord, error) {
	var form tensionForm
	if err := decode(b, &form); err != nil {
		return tensionRecord{}, err
	}
	var r tensionRecord
	var err error
	switch form.Kind {
	case "sigma_sum":
		r.model = &tensionSum{form.TC, form.Rows}
		if len(form.Rows) == 0 {
			err = errors.New("rows are missing")
		}
	case "iapws_surface":
		r.model = &waterTension{form.TC, form.B, form.LittleB, form.Mu}
	case "brock_bird":
		r.model, err = newBoilingTension(f, form.Boiling)
	default:
		err = fmt.Errorf("unknown kind %q", form.Kind)
	}
	if err != nil {
		return tensionRecord{}, err
	}
	if c := r.model.criticalT(); !(math.Abs(c/f.Critical.T-1) < 0.01) {
		return tensionRecord{}, fmt.Errorf("critical temperature T_c %g K is not that of the fluid", c)
	}
	if r.Record, err = describe(&form.head, SurfaceTension, f); err != nil {
		return tensionRecord{}, err
	}
	r.bound(f.TemperatureMin)
	return r, nil
}
