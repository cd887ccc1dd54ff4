package readings

import "time"

// SeriesOptions say which samples of a series count. The zero value has all defaults.
type SeriesOptions struct {
	Window    time.Duration // over which a machine must be steady; 0 means 10 minutes. Path "window"
	Deviation float64       // K by which temperatures may differ from their mean; 0 means 0.5 K. Path "deviation"
	Slope     float64       // K/s by which temperatures may rise or fall; 0 means 0.1 K/min. Path "slope"
	// StandstillPower is the power in W at and below which the compressor stands still. 0: 1 % of the highest power seen so
	// far. Path "standstill_power".
	StandstillPower float64
	Baseline        map[Figure]Baseline
	// BaselinePeriod takes the steady samples of the first part of the series as the baseline of what Baseline does not have:
	// both COP, efficiencies, superheat and subcooling. 0: none. Path "baseline_period".
	BaselinePeriod time.Duration
}

// Baseline is what a figure was when the machine was known to be well.
type Baseline struct {
	Value    float64
	Standard float64 // standard uncertainty; 0 for none
}

// Rejection says why a sample does not count in the means.
type Rejection string

// The rejections.
const (
	Accepted          Rejection = ""
	RefusedSample     Rejection = "refused"        // it cannot be
	OutOfOrder        Rejection = "out_of_order"   // no time, or not after the sample before
	StandingStill     Rejection = "standing_still" // the compressor does not run
	Defrosting        Rejection = "defrosting"     // it runs, and the pressures have come close or changed sides
	ImplausibleSample Rejection = "implausible"    // a rule is broken that doubts the readings or the refrigerant
	NothingToJudge    Rejection = "no_temperature" // no temperature tells whether the machine is steady
	Starting          Rejection = "starting"       // it has not run, or not been read, for the window
	Drifting          Rejection = "drifting"       // a temperature rises or falls
	Unsteady          Rejection = "unsteady"       // a temperature departs from its mean
)

// Step is the answer to one sample of a series.
type Step struct {
	Result    *Result // nil when the sample was refused
	Refused   error   // a [*RefusedError], or nil
	Steady    bool    // it counts in the means
	Rejection Rejection
	Field     string // reading or figure to blame, or ""
}

// Summary closes a series.
type Summary struct {
	Samples    int
	Steady     int
	From, To   time.Time // first and last sample
	Rejections map[Rejection]int
	Means      []Mean      // over the steady samples
	Drifts     []Drift     // of figures with a baseline
	Deviations []Deviation // from the given machine, over the steady samples
	Findings   map[FindingCode]int
	Indicated  map[string]int // steady samples in which a fault ranked first
	Cautions   []Caution
}

// Mean is a figure over the steady samples.
type Mean struct {
	Figure    Figure
	Count     int
	Mean      float64
	Deviation float64 // standard deviation of the samples; NaN for one
	Low, High float64 // lowest and highest
	// Standard is the standard uncertainty of the mean: that which all samples share, their root mean square, and Deviation
	// over the root of Count.
	Standard float64
	// Trend is the slope of a straight line through the samples, per second, with its standard uncertainty; NaN for fewer than
	// three.
	Trend, TrendStandard float64
}

// Drift is how far a figure has moved from its baseline.
type Drift struct {
	Figure           Figure
	Baseline         float64
	BaselineStandard float64
	Count            int     // steady samples since
	Mean             float64 // of them
	Change           float64 // relative; absolute, in K, for superheat and subcooling
	Standard         float64 // standard uncertainty of Change
	Significant      bool    // beyond twice its standard uncertainty
}

// Deviation is the mean difference of a feature from what is expected.
type Deviation struct {
	Feature    Feature
	Count      int
	Mean       float64 // measured less expected
	Normalised float64 // mean residual over its standard uncertainty
}
