package api

import (
	"cmp"
	"errors"
	"math"
	"net/http"
	"runtime"
	"sync"
	"sync/atomic"

	"github.com/gin-gonic/gin"

	"dewmark/props"
)

type refrigerantsResponse struct {
	Refrigerants []refrigerantSummary `json:"refrigerants"`
	Units        map[string]string    `json:"units"`
}

// refrigerantSummary is one row of the catalogue. Null means not known or not existing.
type refrigerantSummary struct {
	Designation         string     `json:"designation"`
	Name                string     `json:"name"`
	Kind                string     `json:"kind"` // pure or blend
	Composition         []fraction `json:"composition"`
	SafetyClass         *string    `json:"safety_class"` // ISO 817
	GWP100              *float64   `json:"gwp_100"`      // IPCC AR6
	CriticalTemperature float64    `json:"critical_temperature"`
	CriticalPressure    float64    `json:"critical_pressure"`
	CriticalDensity     float64    `json:"critical_density"`
	NormalBoilingPoint  *float64   `json:"normal_boiling_point"` // bubble point of a blend
	NormalDewPoint      *float64   `json:"normal_dew_point"`
	Glide               *float64   `json:"glide"` // at the pressure of both
	TemperatureMin      float64    `json:"temperature_min"`
	TemperatureMax      float64    `json:"temperature_max"`
	PressureMax         float64    `json:"pressure_max"`
}

type fraction struct {
	Designation  string  `json:"designation"`
	MassFraction float64 `json:"mass_fraction"`
}

// refrigerantDetail is the answer to GET /v1/refrigerants/{designation}.
type refrigerantDetail struct {
	refrigerantSummary
	MolarMass              float64    `json:"molar_mass"`
	Formula                string     `json:"formula"`
	CAS                    string     `json:"cas"`
	Aliases                []string   `json:"aliases"`
	TripleTemperature      *float64   `json:"triple_temperature"`
	DensityMax             float64    `json:"density_max"`
	AcentricFactor         *float64   `json:"acentric_factor"`
	Datums                 []string   `json:"datums"` // its default first
	ODP                    *float64   `json:"odp"`
	GWP                    gwp        `json:"gwp"`
	LowerFlammabilityLimit *float64   `json:"lower_flammability_limit"` // kind density, like the three after it
	ToxicityLimit          *float64   `json:"toxicity_limit"`
	PracticalLimit         *float64   `json:"practical_limit"`
	ConcentrationLimit     *float64   `json:"concentration_limit"`
	TypicalUse             string     `json:"typical_use"`
	Notes                  string     `json:"notes"`
	Provenance             provenance `json:"provenance"`
	Model                  model      `json:"model"`
	*blendDetail
	Transport []transportModel  `json:"transport"`
	Units     map[string]string `json:"units"`
	Cautions  []caution         `json:"cautions"`
}

type gwp struct {
	AR4 *float64 `json:"ar4"`
	AR5 *float64 `json:"ar5"`
	AR6 *float64 `json:"ar6"`
}

// provenance says how well each group of numbers is known: S1 to S3 seen in that many independent transcriptions, M from
// memory, C computed from the equations of this service.
type provenance struct {
	Safety        string `json:"safety"`
	GWP           string `json:"gwp"`
	Thermodynamic string `json:"thermodynamic"`
}

// model describes the equation of state.
type model struct {
	Kind         string `json:"kind"`
	Source       string `json:"source"`
	Notes        string `json:"notes"`        // stated uncertainties among them
	Verification string `json:"verification"` // how the coefficients were confirmed
}

// catalogueQuery is the query of both requests here.
type catalogueQuery struct {
	Units map[string]string `json:"units"`
}

// read takes q from a request and returns the units that it asks for.
func (q *catalogueQuery) read(c *gin.Context) (*units, error) {
	if err := decodeQuery(c.Request.URL.Query(), q); err != nil {
		return nil, err
	}
	return newUnits(q.Units, nil)
}

// lists holds the encoded catalogue for each system of units, made when it is first wanted.
type lists map[string]func() ([]byte, error)

func (a *API) makeLists() {
	a.lists = lists{}
	for _, system := range systems {
		a.lists[system] = sync.OnceValues(func() ([]byte, error) {
			u, err := newUnits(map[string]string{"system": system}, nil)
			if err != nil {
				return nil, err
			}
			list, err := a.list(u)
			if err != nil {
				return nil, err
			}
			return encode(nil, list)
		})
	}
}

// listRefrigerants answers GET /v1/refrigerants.
func (a *API) listRefrigerants(c *gin.Context) (any, error) {
	var q catalogueQuery
	u, err := q.read(c)
	if err != nil {
		return nil, err
	}
	if _, special := q.Units["system"]; len(q.Units) == 0 || special && len(q.Units) == 1 {
		body, err := a.lists[cmp.Or(q.Units["system"], systems[0])]()
		return raw(body), err
	}
	return a.list(u)
}

// list describes all refrigerants in the given units.
func (a *API) list(u *units) (*refrigerantsResponse, error) {
	names := a.catalogue.Designations()
	resp := &refrigerantsResponse{Refrigerants: make([]refrigerantSummary, len(names)), Units: u.names(kindTemperature, kindTemperatureDifference, kindPressure, kindDensity)}
	failures := make([]error, len(names))
	var next atomic.Int64
	var wg sync.WaitGroup
	for range min(runtime.GOMAXPROCS(0), len(names)) { // curves and envelopes that are not there yet take their time
		wg.Go(func() {
			for i := next.Add(1) - 1; i < int64(len(names)); i = next.Add(1) - 1 {
				r, err := a.catalogue.Refrigerant(names[i], props.DefaultDatum)
				if failures[i] = err; err == nil {
					resp.Refrigerants[i] = summarise(r, u)
				}
			}
		})
	}
	wg.Wait()
	return resp, errors.Join(failures...)
}

// describeRefrigerant answers GET /v1/refrigerants/{designation}.
func (a *API) describeRefrigerant(c *gin.Context) (any, error) {
	var q catalogueQuery
	u, err := q.read(c)
	if err != nil {
		return nil, err
	}
	r, err := a.refrigerant(&calculation{Refrigerant: substance{designation: c.Param("designation")}}, u)
	if err != nil {
		p := problemFor(err)
		if p.Status == http.StatusUnprocessableEntity { // here it is the resource that does not exist
			p.Status = http.StatusNotFound
			p.Errors = nil
		}
		return nil, p
	}
	id, limits := r.Identity(), r.Limits()
	class := &id.Classification
	concentration := func(x *float64) *float64 {
		if x == nil {
			return nil
		}
		return new(tidy(u.out(kindDensity, *x)))
	}
	d := refrigerantDetail{
		refrigerantSummary: summarise(r, u),
		MolarMass:          tidy(u.out(kindMolarMass, r.MolarMass())), Formula: id.Formula, CAS: id.CAS, Aliases: append([]string{}, id.Aliases...),
		DensityMax: tidy(u.out(kindDensity, limits.DensityMax)), AcentricFactor: known(id.Acentric), Datums: datumNames(r.Datums()),
		ODP: class.ODP, GWP: gwp(class.GWP100),
		LowerFlammabilityLimit: concentration(class.LowerFlammabilityLimit), ToxicityLimit: concentration(class.ToxicityLimit),
		PracticalLimit: concentration(class.PracticalLimit), ConcentrationLimit: concentration(class.ConcentrationLimit),
		TypicalUse: class.TypicalUse, Notes: class.Notes, Provenance: provenance(class.Provenance),
		Model: model{id.Model, id.Source, id.Notes, id.Verification}, Transport: transportModels(r, u),
		Units:    u.names(kindTemperature, kindTemperatureDifference, kindPressure, kindDensity, kindMolarMass),
		Cautions: []caution{safetyCaution},
	}
	if b, ok := r.(*props.Blend); ok {
		d.blendDetail = blendDetailOf(b, &id, u)
		for _, reservation := range r.Reservations() {
			d.Cautions = append(d.Cautions, caution(reservation))
		}
	}
	if t := id.TripleTemperature; t != nil {
		d.TripleTemperature = new(tidy(u.out(kindTemperature, *t)))
	}
	if class.SafetyClass == nil {
		d.Cautions = append(d.Cautions, caution{"safety_class_unknown", "no safety class is on record; treat the refrigerant as flammable and toxic until its data sheet says otherwise"})
	}
	return d, nil
}

var safetyCaution = caution{
	"safety_data", "classification and limits are for orientation; the edition of the standard in force, the safety data sheet, local codes and a licensed person decide",
}

func summarise(r props.Refrigerant, u *units) refrigerantSummary {
	id, limits, critical := r.Identity(), r.Limits(), r.Critical()
	bubble, dew := r.NormalBoilingPoint(), math.NaN()
	if T, err := r.DewTemperature(props.StandardAtmosphere); err == nil {
		dew = T
	}
	s := refrigerantSummary{
		Designation: id.Designation, Name: id.Name, Kind: string(id.Kind),
		SafetyClass: id.Classification.SafetyClass, GWP100: id.Classification.GWP100.AR6,
		CriticalTemperature: u.out(kindTemperature, critical.T), CriticalPressure: u.out(kindPressure, critical.P),
		CriticalDensity: u.out(kindDensity, critical.Rho), NormalBoilingPoint: u.known(kindTemperature, bubble),
		NormalDewPoint: u.known(kindTemperature, dew), Glide: u.known(kindTemperatureDifference, dew-bubble),
		TemperatureMin: tidy(u.out(kindTemperature, limits.TemperatureMin)), TemperatureMax: tidy(u.out(kindTemperature, limits.TemperatureMax)),
		PressureMax: tidy(u.out(kindPressure, limits.PressureMax)),
	}
	for _, c := range id.Composition {
		s.Composition = append(s.Composition, fraction{c.Designation, c.MassFraction})
	}
	return s
}
