package transport

import (
	"encoding/json"
	"errors"
	"fmt"
	"math"
)

// viscosityModel is one way to the viscosity. An answer is in Pa s; false means that the model has a pole there.
type viscosityModel interface {
	dilute(T float64) float64
	viscosity(p point) (float64, bool)
}

// viscosityRecord is a record ready for use.
type viscosityRecord struct {
	Record
	model    viscosityModel
	conforms *Fluid  // the fluid whose conformal state the model needs, or nil
	densest  float64 // mass density above which the record must not be used, kg/m3
	critical float64 // relative distance from the critical temperature within which an enhancement is missing
}

// viscositySum is eta0(T) + eta0(T) B(T) c + residual(tau, d).
type viscositySum struct {
	gas      gas
	virial   *viscosityVirial
	residual *background
}

// viscosityVirial is the second viscosity virial coefficient B = scale * sum coef x^exp in m3/mol, x = T/temperature.
type viscosityVirial struct {
	temperature, scale float64
	rows               [][2]float64 // nil for the universal coefficients
}

// rainwaterFriend returns the reduced second viscosity virial coefficient in the theory of Rainwater and Friend, as fitted
// by Vogel, Kuechenmeister, Bich, Laesecke, J. Phys. Chem. Ref. Data 27 (1998) 947.
func rainwaterFriend(x float64) float64 {
	y := 1 / math.Sqrt(math.Sqrt(x)) // all exponents are multiples of -1/4
	y2 := y * y
	y4 := y2 * y2
	y10 := y4 * y4 * y2
	low := horner(universalVirial[:], y)
	return low + y10*(14.085455-0.34664158*y10*y2)
}

var universalVirial = [...]float64{-19.572881, 219.73999, -1015.3226, 2471.0125, -3375.1717, 2491.6597, -787.26086}

func (m *viscositySum) dilute(T float64) float64 { return 1e-6 * m.gas.at(T) }

func (m *viscositySum) viscosity(p point) (float64, bool) {
	eta0 := m.dilute(p.T)
	excess, ok := m.excess(p.T, p.Rho, p.mass, eta0)
	return eta0 + excess, ok
}

// excess returns everything but the dilute part in Pa s.
func (m *viscositySum) excess(T, rho, mass, eta0 float64) (float64, bool) {
	v, ok := m.residual.value(T, mass)
	v *= 1e-6
	if m.virial != nil {
		v += eta0 * m.virial.at(T) * rho
	}
	return v, ok
}

func (b *viscosityVirial) at(T float64) float64 {
	x := T / b.temperature
	if b.rows == nil {
		return b.scale * rainwaterFriend(x)
	}
	return b.scale * polynomial(b.rows, x)
}

// viscosityForm is the viscosity record of a coefficient file, any kind but those of water and R23.
type viscosityForm struct {
	head
	Densest  float64         `json:"usable_density_max"`
	Critical float64         `json:"critical_region"`
	Dilute   gasForm         `json:"dilute"`
	Initial  *virialForm     `json:"initial"`
	Residual *backgroundForm `json:"residual"`
}

type virialForm struct {
	Temperature float64      `json:"temperature"`
	Scale       float64      `json:"scale"`
	Rows        [][2]float64 `json:"rows"`
	From        string       `json:"from"`
}

func (f *viscosityForm) compile() (*viscositySum, error) {
	g, err := f.Dilute.compile()
	if err != nil {
		return nil, err
	}
	if f.Residual == nil {
		return nil, errors.New("residual is missing")
	}
	b, err := f.Residual.compile()
	if err != nil {
		return nil, err
	}
	m := &viscositySum{gas: g, residual: b}
	if i := f.Initial; i != nil {
		if !(i.Temperature > 0 && i.Scale > 0) {
			return nil, errors.New("initial: temperature and scale must be positive")
		}
		m.virial = &viscosityVirial{i.Temperature, i.Scale, i.Rows}
	}
	return m, nil
}

// newViscosity reads a viscosity record.
func newViscosity(b json.RawMessage, f *Fluid, references []*Model) (viscosityRecord, error) {
	var kind struct {
		Kind string `json:"kind"`
	}
	if err := json.Unmarshal(b, &kind); err != nil {
		return viscosityRecord{}, err
	}
	var h *head
	r := viscosityRecord{densest: math.Inf(1)}
	var err error
	switch kind.Kind {
	case "viscosity_sum":
		var form viscosityForm
		if err = decode(b, &form); err == nil {
			r.model, err = form.compile()
		}
		h, r.critical = &form.head, form.Critical
		if form.Densest > 0 {
			r.densest = form.Densest
		}
	case "corresponding_states":
		var form conformalForm
		if err = decode(b, &form); err == nil {
			r.model, r.conforms, err = form.viscosity(f, references)
		}
		h = &form.head
	case "entropy_scaling":
		var form entropyForm
		if err = decode(b, &form); err == nil {
			r.model, err = form.viscosity(f)
		}
		h = &form.head
	case "iapws_2008":
		var form waterViscosityForm
		if err = decode(b, &form); err == nil {
			r.model, err = form.compile(f)
		}
		h = &form.head
	case "shan_2000":
		var form concentrationForm
		if err = decode(b, &form); err == nil {
			r.model, err = form.viscosity()
		}
		h = &form.head
	default:
		err = fmt.Errorf("unknown kind %q", kind.Kind)
	}
	if err != nil {
		return viscosityRecord{}, err
	}
	r.Record, err = describe(h, Viscosity, f)
	return r, err
}
