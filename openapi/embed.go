// Package openapi holds the description of the service's HTTP interface in OpenAPI 3.1, kept by hand in openapi.yaml.
package openapi

import _ "embed"

// Document is the description as YAML. The caller must not modify it.
//
//go:embed openapi.yaml
var Document []byte
