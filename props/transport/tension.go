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
}

// tensionSum is sum s (1 - T/T_c)^n.
type tensionSum struct {
	tc   float64
	rows [][2]float64
}

func (m *tensionSum) criticalT() float64 { return m.tc }

func (m *tensionSum) tension(T float64) float64 {
	t := 1 - T/m.tc
	return polynomial(m.rows, t, math.Log(t))
}

// waterTension is IAPWS R1-76 (2014).
type waterTension struct{ tc, B, b, mu float64 }

func (m *waterTension) criticalT() float64 { return m.tc }

func (m *waterTension) tension(T float64) float64 {
	t := 1 - T/m.tc
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
	return m.factor * math.Pow(1-T/m.tc, 11.0/9)
}

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
	return r.model.tension(T)
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
		return tensionRecord{}, fmt.Errorf("T_c %g K is not that of the fluid", c)
	}
	r.Record, err = describe(&form.head, SurfaceTension, f)
	return r, err
}
