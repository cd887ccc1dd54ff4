package cycle

import "math"

// plan is a request with its defaults filled in. NaN stands for what was not given.
type plan struct {
	layout    Layout // the arrangement itself, never Transcritical or SuctionExchanger
	exchanger bool   // with an internal exchanger
	gasCooled bool   // with a gas cooler instead of a condenser
	purpose   Purpose

	evaporation  evaporation
	condensation condensation
	gasCooling   gasCooling

	first, second  efficiencies
	evaporatorDrop Drop
	condenserDrop  Drop
	suctionLine    SuctionLine
	dischargeLine  DischargeLine
	liquidLine     LiquidLine

	internal     internalExchange
	intermediate intermediate
	economiser   economising
	intercooler  intercooling
	cascade      cascading
	ejector      ejecting

	size                  size
	source, sink, ambient float64 // K
	air                   float64 // Pa, around the machine

	cautions []Caution
	refusals []Refusal // of the check of the request
}

type evaporation struct {
	temperature, pressure float64
	mean                  bool
	superheat, quality    float64
	superheatField        string
	levelField            string // path of what fixes the pressure, where it is no field of the evaporation
}

// field returns the path of what fixes the evaporating pressure.
func (e *evaporation) field() string {
	if e.levelField != "" {
		return e.levelField
	}
	if isGiven(e.pressure) {
		return "evaporation.pressure"
	}
	return "evaporation.temperature"
}

type condensation struct {
	temperature, pressure float64
	mean                  bool
	subcooling            float64
	subcoolingField       string
	levelField            string // as in an evaporation
}

// field returns the path of what fixes the condensing pressure.
func (k *condensation) field() string {
	if k.levelField != "" {
		return k.levelField
	}
	if isGiven(k.pressure) {
		return "condensation.pressure"
	}
	return "condensation.temperature"
}

type gasCooling struct {
	outlet      float64 // K
	outletField string
	pressure    float64
	correlation Correlation
	optimise    bool
	pressureMax float64
}

// field returns the path of what fixes the high-side pressure.
func (g *gasCooling) field() string {
	switch {
	case g.optimise:
		return "gas_cooler.optimise"
	case g.correlation != NoCorrelation:
		return "gas_cooler.correlation"
	}
	return "gas_cooler.pressure"
}

type efficiencies struct {
	fields               *compressorFields
	isentropic           float64
	dischargeTemperature float64 // K, measured; replaces isentropic when given
	volumetric           float64
	heatLoss             float64 // fraction of the power
}

type internalExchange struct {
	effectiveness  float64
	liquid, vapour Drop
}

type intermediate struct {
	pressure, temperature float64
	optimise              bool
}

// field returns the path of what fixes the intermediate pressure.
func (m *intermediate) field() string {
	switch {
	case m.optimise:
		return "intermediate.optimise"
	case isGiven(m.temperature):
		return "intermediate.temperature"
	case isGiven(m.pressure):
		return "intermediate.pressure"
	}
	return "intermediate"
}

type economising struct{ approach, superheat, ratio float64 }

type intercooling struct {
	kind        IntercoolerKind
	approach    float64
	temperature float64
}

type cascading struct {
	upper                           Refrigerant
	approach, superheat, subcooling float64
}

type ejecting struct {
	motive, suction, diffuser, drop float64
	assumed                         bool // at least one of the efficiencies
}

// sizing says which result the size fixes.
type sizing uint8

const (
	perUnit sizing = iota
	byHeating
	byCooling
	byPower
	byMassFlow
	bySweptVolume
)

var sizeFields = [...]string{"", "size.heating", "size.cooling", "size.compressor_power", "size.mass_flow", "size.swept_volume_flow"}

type size struct {
	of    sizing
	value float64
}

// highField returns the path of what fixes the high-side pressure.
func (p *plan) highField() string {
	if p.gasCooled {
		return p.gasCooling.field()
	}
	return p.condensation.field()
}

// isGiven reports whether a number of a plan was given.
func isGiven(v float64) bool { return !math.IsNaN(v) }
