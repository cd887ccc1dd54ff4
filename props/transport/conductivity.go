package transport

import (
	"encoding/json"
	"errors"
	"fmt"
)

// conductivityModel is one way to the thermal conductivity without its critical enhancement, in W/(m K); false means that
// the model has a pole there. cp0 is the isobaric heat capacity of the ideal gas in J/(mol K).
type conductivityModel interface {
	dilute(T, cp0 float64) float64
	background(p point) (float64, bool)
}

// conductivityRecord is a record ready for use.
type conductivityRecord struct {
	Record
	model    conductivityModel
	conforms *Fluid       // the fluid whose conformal state the model needs, or nil
	critical *enhancement // nil when the record has none
	peaked   bool         // the model itself includes the critical peak
}

// conductivitySum is lambda0(T) + residual(tau, d).
type conductivitySum struct {
	gas      gas
	residual *background
}

func (m *conductivitySum) dilute(T, _ float64) float64 { return m.gas.at(T) }

func (m *conductivitySum) background(p point) (float64, bool) {
	v, ok := m.residual.value(p.T, p.mass)
	return m.gas.at(p.T) + v, ok
}

// conductivityForm is a conductivity record of kind conductivity_sum.
type conductivityForm struct {
	head
	Dilute   gasForm          `json:"dilute"`
	Residual *backgroundForm  `json:"residual"`
	Critical *enhancementForm `json:"critical"`
}

func (f *conductivityForm) compile() (*conductivitySum, error) {
	g, err := f.Dilute.compile()
	if err != nil {
		return nil, err
	}
	if f.Residual == nil {
		return nil, errors.New("residual is missing")
	}
	b, err := f.Residual.compile()
	return &conductivitySum{g, b}, err
}

// newConductivity reads a conductivity record.
func newConductivity(b json.RawMessage, f *Fluid, references []*Model) (conductivityRecord, error) {
	var kind struct {
		Kind string `json:"kind"`
	}
	if err := json.Unmarshal(b, &kind); err != nil {
		return conductivityRecord{}, err
	}
	var h *head
	var r conductivityRecord
	var critical *enhancementForm
	var err error
	switch kind.Kind {
	case "conductivity_sum":
		var form conductivityForm
		if err = decode(b, &form); err == nil {
			r.model, err = form.compile()
		}
		h, critical = &form.head, form.Critical
	case "corresponding_states":
		var form conformalForm
		if err = decode(b, &form); err == nil {
			r.model, r.conforms, err = form.conductivity(f, references)
		}
		h, critical = &form.head, form.Critical
	case "entropy_scaling":
		var form entropyForm
		if err = decode(b, &form); err == nil {
			r.model, err = form.conductivity(f)
		}
		h, critical = &form.head, form.Critical
	case "iapws_2011":
		var form waterConductivityForm
		if err = decode(b, &form); err == nil {
			r.model, r.critical, err = form.compile(f)
		}
		h = &form.head
	case "shan_2000":
		var form concentrationForm
		if err = decode(b, &form); err == nil {
			r.model, err = form.conductivity()
		}
		h, r.peaked = &form.head, true
	default:
		err = fmt.Errorf("unknown kind %q", kind.Kind)
	}
	if err == nil && critical != nil {
		r.critical, err = critical.compile(f, criticalReach)
	}
	if err != nil {
		return conductivityRecord{}, err
	}
	r.Record, err = describe(h, ThermalConductivity, f)
	return r, err
}
