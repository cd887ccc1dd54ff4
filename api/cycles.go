package api

import (
	"slices"
	"strings"

	"github.com/gin-gonic/gin"

	"dewmark/service/cycle"
)

// cycles answers POST /v1/cycles.
func (a *API) cycles(c *gin.Context) (any, error) {
	var req cycleRequest
	if err := a.decode(c, &req); err != nil {
		return nil, err
	}
	j, err := a.begin(&req.calculation)
	if err != nil {
		return nil, err
	}
	upper, err := a.upperCircuit(&req)
	if err != nil {
		return nil, err
	}
	question, err := req.si(j, upper)
	if err != nil {
		return nil, err
	}
	var all account
	solution, err := cycle.Solve(contextOf(c), question)
	if err != nil {
		p := voice{units: j.units, at: "#", r: j.r}.problem(err)
		all.count(p, false)
		a.metrics.calculated("cycle", &all)
		if p.Status >= 500 {
			return nil, err
		}
		return nil, p
	}
	all.count(nil, false)
	a.metrics.calculated("cycle", &all)
	a.metrics.iterations.WithLabelValues("cycle").Observe(float64(solution.StatesAsked))
	return j.cycleResponse(solution, upper), nil
}

// upperCircuit finds the refrigerants of a cascade that lie above the request's own.
func (a *API) upperCircuit(req *cycleRequest) ([]*job, error) {
	if req.Cascade == nil {
		return nil, nil
	}
	upper := make([]*job, len(req.Cascade.Upper))
	for i := range upper {
		of := req.calculation
		of.Refrigerant = req.Cascade.Upper[i]
		var err error
		if upper[i], err = a.begin(&of); err != nil {
			p := *problemFor(err)
			p.Errors = slices.Clone(p.Errors)
			for k := range p.Errors {
				if rest, ok := strings.CutPrefix(p.Errors[k].Pointer, "#/refrigerant"); ok {
					p.Errors[k].Pointer = place{"#/cascade/upper", i}.String() + rest
				}
			}
			return nil, &p
		}
	}
	return upper, nil
}
