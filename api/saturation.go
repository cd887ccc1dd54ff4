package api

// saturationRequest asks for the saturation curve at temperatures, at pressures or over a range of either: exactly one.
type saturationRequest struct {
	calculation
	Temperatures []float64        `json:"temperatures"`
	Pressures    []float64        `json:"pressures"`
	Range        *saturationRange `json:"range"`
	Properties   []string         `json:"properties" validate:"max=64,dive,max=64"`
}

// saturationRange steps from From towards To; To belongs to it when a step meets it.
type saturationRange struct {
	Of   string   `json:"of" validate:"required,oneof=temperature pressure"`
	From *float64 `json:"from" validate:"required"`
	To   *float64 `json:"to" validate:"required"`
	Step *float64 `json:"step" validate:"required,gt=0"`
}

type saturationResponse struct {
	Refrigerant string            `json:"refrigerant"`
	Datum       string            `json:"datum"`
	Units       map[string]string `json:"units"`
	Site        *site             `json:"site,omitempty"`
	Failed      int               `json:"failed"`
	Rows        []saturationRow   `json:"rows"`
	Basis       basis             `json:"basis"`
	Cautions    []caution         `json:"cautions"`
}

// saturationRow is one row of the table. A failed row holds the given number and the problem alone.
type saturationRow struct {
	Temperature       *float64   `json:"temperature,omitempty"` // of a pure refrigerant, or as given
	Pressure          *float64   `json:"pressure,omitempty"`    // of a pure refrigerant, or as given
	BubbleTemperature *float64   `json:"bubble_temperature,omitempty"`
	DewTemperature    *float64   `json:"dew_temperature,omitempty"`
	Glide             *float64   `json:"glide,omitempty"`
	LatentHeat        *float64   `json:"latent_heat,omitempty"`
	Bubble            *stateView `json:"bubble,omitempty"`
	Dew               *stateView `json:"dew,omitempty"`
	Problem           *Problem   `json:"problem,omitempty"`
}
