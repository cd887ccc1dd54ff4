package api

import (
	"fmt"
	"math"

	"dewmark/props"
	"dewmark/props/transport"
)

// reservation is what is to be said of a transport property at some states of a response.
type reservation struct {
	transport.Caution
	states int
}

// reserve enters a reservation about one state, where others of its kind stand already.
func (a *account) reserve(c transport.Caution, states int) {
	for i := range a.reservations {
		r := &a.reservations[i]
		if r.Code == c.Code && r.Text == c.Text && r.Quantity == c.Quantity {
			r.states += states
			return
		}
	}
	a.reservations = append(a.reservations, reservation{c, states})
}

// transported computes the transport properties of s and enters their reservations. What no correlation gives is null.
func (w *worker) transported(s props.State) props.Transport {
	t, err := w.r.Transport(s)
	if err != nil {
		w.reserve(transport.Caution{Code: "transport_unavailable", Text: "no correlation gives usable transport properties"}, 1)
	}
	for _, c := range t.Cautions() {
		w.reserve(c, 1)
	}
	return t
}

// say words the reservation for a response with all states.
func (r *reservation) say(u *units, all int) caution {
	k := kindTemperature
	if r.Quantity == "pressure" {
		k = kindPressure
	}
	detail := r.Text
	switch {
	case r.Quantity == "":
	case math.IsInf(r.Min, -1):
		detail += fmt.Sprintf(", %s up to %s", r.Quantity, u.text(k, r.Max))
	default:
		detail += fmt.Sprintf(", %s %s to %s", r.Quantity, u.text(k, r.Min), u.text(k, r.Max))
	}
	if all > 1 {
		detail += fmt.Sprintf(" (%d of %d states)", r.states, all)
	}
	return caution{string(r.Code), detail}
}

// transportModel describes a model of a transport property.
type transportModel struct {
	Property       string               `json:"property"`
	Rank           int                  `json:"rank"` // the lowest answers
	Method         string               `json:"method"`
	Source         string               `json:"source"`
	Note           string               `json:"note"`
	Verification   string               `json:"verification"`
	TemperatureMin float64              `json:"temperature_min"`
	TemperatureMax float64              `json:"temperature_max"`
	PressureMax    *float64             `json:"pressure_max"` // null where the source states none
	Uncertainty    transportUncertainty `json:"uncertainty"`
}

// transportUncertainty is a relative standard uncertainty above and below the critical density.
type transportUncertainty struct {
	Liquid float64 `json:"liquid"`
	Gas    float64 `json:"gas"`
	Basis  string  `json:"basis"`
}

var transportProperties = []transport.Property{transport.Viscosity, transport.ThermalConductivity, transport.SurfaceTension}

// transportModels describes all models of a refrigerant, the recommended one of each property first.
func transportModels(r props.Refrigerant, u *units) []transportModel {
	models := []transportModel{}
	for _, p := range transportProperties {
		for _, rec := range r.TransportRecords(p) {
			models = append(models, transportModel{
				Property: memberOf(p), Rank: rec.Rank, Method: string(rec.Method), Source: rec.Source, Note: rec.Note, Verification: rec.Verification,
				TemperatureMin: tidy(u.out(kindTemperature, rec.Range.TemperatureMin)), TemperatureMax: tidy(u.out(kindTemperature, rec.Range.TemperatureMax)),
				PressureMax: known(tidy(u.out(kindPressure, rec.Range.PressureMax))), Uncertainty: transportUncertainty(rec.Uncertainty),
			})
		}
	}
	return models
}

// memberOf names the member of a state that holds a transport property.
func memberOf(p transport.Property) string {
	return [...]string{transport.Viscosity: "viscosity", transport.ThermalConductivity: "thermal_conductivity", transport.SurfaceTension: "surface_tension"}[p]
}

// transportBasis names what a shown transport property rests on.
type transportBasis struct {
	Property string `json:"property"`
	Method   string `json:"method"`
	Source   string `json:"source"`
}

// transportBases lists the recommended models of the properties that shown shows.
func transportBases(r props.Refrigerant, shown *selection) []transportBasis {
	bases := make([]transportBasis, 0, len(shown.transport))
	for _, p := range shown.transport {
		if records := r.TransportRecords(p); len(records) > 0 {
			bases = append(bases, transportBasis{memberOf(p), string(records[0].Method), records[0].Source})
		}
	}
	return bases
}
