package readings

import (
	"context"

	"dewmark/service/cycle"
)

// Machine is what an installed machine is compared with. [Expected] makes one from a [machine.Machine].
type Machine interface {
	// Expect returns how the healthy machine would run with this source, sink and speed.
	Expect(ctx context.Context, c *Conditions) (*Expectation, error)
	// Flow returns the mass flow in kg/s that the compressor should move, by its map or its efficiencies, with the relative
	// standard uncertainty of that. It returns an error where it cannot tell.
	Flow(suctionPressure, suctionTemperature, dischargePressure, speed float64) (flow, relative float64, err error)
}

// heatLosing is a machine that states which share of its power does not reach the refrigerant, and how sure that is.
type heatLosing interface {
	HeatLoss() (fraction, standard float64, ok bool)
}

// Conditions are what a sample says of the surroundings. Values that are not read are NaN.
type Conditions struct {
	Source, Sink StreamConditions
	Speed        float64 // 1/s
	Ambient      float64 // K
}

// StreamConditions are what a sample says of a stream.
type StreamConditions struct {
	Stream
	InletTemperature  float64 // K
	OutletTemperature float64 // K
	MassFlow          float64 // kg/s
	VolumeFlow        float64 // m3/s
	InletHumidity     float64 // relative
	Pressure          float64 // Pa, of moist air; NaN for the standard atmosphere
}

// Feature names a number by which faults show.
type Feature uint8

// The features. Approaches are those of the leaving streams to evaporation and condensation.
const (
	FeatureEvaporation        Feature = iota // K
	FeatureLowPressure                       // Pa, at the evaporator outlet
	FeatureSuperheat                         // K, at the compressor suction
	FeatureCondensation                      // K
	FeatureHighPressure                      // Pa, at the condenser outlet
	FeatureSubcooling                        // K
	FeatureDischarge                         // K
	FeaturePressureRatio                     // of the compressor
	FeatureCondenserChange                   // K, of the sink
	FeatureEvaporatorChange                  // K, of the source
	FeatureCondenserApproach                 // K
	FeatureEvaporatorApproach                // K
	FeatureCapacity                          // W, of cooling
	FeaturePower                             // W, of the compressor
	FeatureCount
)

type featureRow struct {
	name     string
	quantity cycle.Quantity
	// Basic features make up the test whether there is any deviation, and none of them is a function of others. Following
	// ones are functions of others, and add nothing to the likelihood of a fault that those have not added already.
	basic, following bool
}

var featureTable = [FeatureCount]featureRow{
	FeatureEvaporation:        {name: "t_evap", quantity: cycle.Temperature, basic: true},
	FeatureLowPressure:        {name: "p_evap", quantity: cycle.Pressure},
	FeatureSuperheat:          {name: "superheat", quantity: cycle.TemperatureDifference, basic: true},
	FeatureCondensation:       {name: "t_cond", quantity: cycle.Temperature, basic: true},
	FeatureHighPressure:       {name: "p_cond", quantity: cycle.Pressure},
	FeatureSubcooling:         {name: "subcooling", quantity: cycle.TemperatureDifference, basic: true},
	FeatureDischarge:          {name: "t_discharge", quantity: cycle.Temperature, basic: true},
	FeaturePressureRatio:      {name: "pressure_ratio", quantity: cycle.Dimensionless, following: true},
	FeatureCondenserChange:    {name: "dt_condenser_fluid", quantity: cycle.TemperatureDifference, basic: true},
	FeatureEvaporatorChange:   {name: "dt_evaporator_fluid", quantity: cycle.TemperatureDifference, basic: true},
	FeatureCondenserApproach:  {name: "approach_condenser", quantity: cycle.TemperatureDifference, following: true},
	FeatureEvaporatorApproach: {name: "approach_evaporator", quantity: cycle.TemperatureDifference, following: true},
	FeatureCapacity:           {name: "capacity", quantity: cycle.HeatFlow, basic: true},
	FeaturePower:              {name: "power", quantity: cycle.Power, basic: true},
}

func (f Feature) String() string {
	if f >= FeatureCount {
		return ""
	}
	return featureTable[f].name
}

// Quantity returns the kind of quantity of the feature.
func (f Feature) Quantity() cycle.Quantity { return featureTable[f].quantity }

// Expectation is how a healthy machine would run. Values that it does not tell are NaN.
type Expectation struct {
	Features [FeatureCount]float64
	// Standard holds the standard uncertainties of the expected values, SI.
	Standard [FeatureCount]float64
	Cautions []Caution
}

// Comparison holds what is measured against what is expected.
type Comparison struct {
	Residuals []Residual
	// ChiSquared sums the squares of all residuals in units of their joint uncertainty; above Limit, chance explains them in
	// less than 1 of 20 cases.
	ChiSquared, Limit float64
	Degrees           int
	Cautions          []Caution // of the expected values
}

// Deviates reports whether the residuals show more than chance.
func (c *Comparison) Deviates() bool { return c.ChiSquared > c.Limit }

// Residual is a feature that is both measured and expected.
type Residual struct {
	Feature            Feature
	Measured, Expected float64
	Standard           float64 // of the difference: of measurement and expectation together
	Normalised         float64 // difference over Standard
}

// Indication is a fault that the residuals may point to. It is never a verdict.
type Indication struct {
	Fault  string
	Source string // of its signs
	// Score is the mean logarithm of the probability that the true residuals have the signs of the fault, at most 0.
	Score        float64
	For, Against []Evidence // the strongest first
}

// Evidence is a feature with the sign that the fault has in it.
type Evidence struct {
	Feature     Feature
	Sign        Sign
	Normalised  float64 // residual over its standard uncertainty
	Probability float64 // that the true residual has the sign
	Strong      bool    // residual beyond twice its standard uncertainty
}

// Sign is the direction of a residual.
type Sign uint8

// The signs.
const (
	Falls       Sign = iota + 1 // -
	Stays                       // 0
	Rises                       // +
	StaysOrFall                 // 0 or -
	StaysOrRise                 // 0 or +
)

var signNames = [...]string{"", "-", "0", "+", "0 or -", "0 or +"}

func (s Sign) String() string {
	if int(s) >= len(signNames) {
		return ""
	}
	return signNames[s]
}
