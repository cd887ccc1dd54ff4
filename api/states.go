package api

import "github.com/gin-gonic/gin"

// statesRequest asks for the states of one refrigerant.
type statesRequest struct {
	calculation
	Points     []point  `json:"points" validate:"required,min=1"`
	Properties []string `json:"properties" validate:"max=64"` // members of a state; default all
}

// point names a state by exactly two of its properties. Phase says which one is meant where a pair has several.
type point struct {
	ID             string   `json:"id"`
	Temperature    *float64 `json:"temperature"`
	Pressure       *float64 `json:"pressure"`
	Density        *float64 `json:"density"`
	SpecificVolume *float64 `json:"specific_volume"` // in place of density
	Enthalpy       *float64 `json:"enthalpy"`
	Entropy        *float64 `json:"entropy"`
	InternalEnergy *float64 `json:"internal_energy"`
	Quality        *float64 `json:"quality"`
	Phase          string   `json:"phase"`
}

// singleStateRequest is the query of GET /v1/states, read as if it were an object.
type singleStateRequest struct {
	calculation
	point
	Properties []string `json:"properties" validate:"max=64"`
}

// statesResponse holds the answers in the order of the points, written already.
type statesResponse struct {
	*job
	kinds  []kind
	failed int
	chunks []chunk
}

// singleStateResponse is the answer to GET /v1/states: the members of the state stand beside those of the response.
type singleStateResponse struct {
	*job
	kinds []kind
	state *stateView
}

// states answers POST /v1/states.
func (a *API) states(c *gin.Context) (any, error) {
	var req statesRequest
	if err := a.decode(c, &req); err != nil {
		return nil, err
	}
	if n := len(req.Points); n > a.maxPoints {
		return nil, tooMany("#/points", n, a.maxPoints)
	}
	j, err := a.begin(&req.calculation)
	if err != nil {
		return nil, err
	}
	shown, err := selectFields(req.Properties)
	if err != nil {
		return nil, err
	}
	if err := a.batch(c, len(req.Points), 1); err != nil {
		return nil, err
	}
	resp := &statesResponse{job: j, kinds: shown.kinds()}
	if resp.chunks, err = j.chunks(contextOf(c), req.Points, shown); err != nil {
		return nil, err
	}
	var all account
	for i := range resp.chunks {
		all.add(&resp.chunks[i].account)
	}
	resp.failed = all.failed()
	a.metrics.calculated("state", &all)
	j.conclude(&all, shown)
	return resp, nil
}

// singleState answers GET /v1/states.
func (a *API) singleState(c *gin.Context) (any, error) {
	var req singleStateRequest
	if err := decodeQuery(c.Request.URL.Query(), &req); err != nil {
		return nil, err
	}
	if err := validate(&req); err != nil {
		return nil, err
	}
	j, err := a.begin(&req.calculation)
	if err != nil {
		return nil, err
	}
	shown, err := selectFields(req.Properties)
	if err != nil {
		return nil, err
	}
	w := newWorker(j, shown)
	problem := w.solve(&req.point, place{list: "#", index: -1})
	a.metrics.calculated("state", &w.account)
	if problem != nil {
		return nil, problem
	}
	j.conclude(&w.account, shown)
	return &singleStateResponse{job: j, kinds: shown.kinds(), state: &w.view}, nil
}

// encode writes the response.
func (r *statesResponse) encode(b []byte) ([]byte, error) {
	o := begin(b)
	if err := r.head(&o, r.kinds); err != nil {
		return nil, err
	}
	o.number("failed", float64(r.failed))
	o.name("states")
	o.b = append(o.b, '[')
	for i := range r.chunks {
		if i > 0 {
			o.b = append(o.b, ',')
		}
		o.b = append(o.b, *r.chunks[i].text...)
		giveBack(r.chunks[i].text)
	}
	o.b = append(o.b, ']')
	err := r.tail(&o)
	return o.end(), err
}

// encode writes the response.
func (r *singleStateResponse) encode(b []byte) ([]byte, error) {
	o := begin(b)
	if err := r.head(&o, r.kinds); err != nil {
		return nil, err
	}
	r.state.write(&o)
	err := r.tail(&o)
	return o.end(), err
}
