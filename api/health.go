package api

import (
	"net/http"

	"github.com/gin-gonic/gin"
)

// health is the answer to a probe.
type health struct {
	Status  string `json:"status"` // "ok"
	Version string `json:"version"`
}

// live answers GET /livez.
func (a *API) live(*gin.Context) (any, error) { return health{"ok", a.version}, nil }

// readiness answers GET /readyz.
func (a *API) readiness(*gin.Context) (any, error) {
	if !a.ready.Load() {
		return nil, refusal(http.StatusServiceUnavailable, "not-ready", "the service is warming up or shutting down")
	}
	return health{"ok", a.version}, nil
}
