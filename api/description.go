package api

import (
	"sync"

	"github.com/gin-gonic/gin"
	"github.com/goccy/go-yaml"

	"dewmark/openapi"
)

// descriptionYAML answers GET /openapi.yaml.
func (a *API) descriptionYAML(*gin.Context) (any, error) { return raw(openapi.Document), nil }

// descriptionJSON answers GET /openapi.json.
func (a *API) descriptionJSON(*gin.Context) (any, error) {
	document, err := descriptionInJSON()
	return raw(document), err
}

// descriptionInJSON is made when it is first wanted: it takes longer than everything else at the start.
var descriptionInJSON = sync.OnceValues(func() ([]byte, error) { return yaml.YAMLToJSON(openapi.Document) })
