package api

// health is the answer of /livez and /readyz.
type health struct {
	Status  string `json:"status"` // "ok"
	Version string `json:"version"`
}
