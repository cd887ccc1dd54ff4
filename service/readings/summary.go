package readings

import "time"

// SeriesOptions say which samples of a series count. The zero value has all defaults.
type SeriesOptions struct {
	Window    time.Duration // over which a machine must be steady; 0 means 10 minutes
	Deviation float64       // K by which temperatures may differ from their mean; 0 means 0.5 K
	Slope     float64       // K/s by which temperatures may rise or fall; 0 means 0.1 K/min
	// StandstillPower is the power in W at and below which the compressor stands still. 0: 1 % of the highest power seen so far.
	StandstillPower float64
	Baseline        map[Figure]Baseline
	// BaselinePeriod takes the steady samples of the first part of the series as the baseline of figures that Baseline does
	// not have. 0: none.
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
	RefusedSample     Rejection = "refused"            // it cannot be
	StandingStill     Rejection = "standing_still"     // the compressor does not run
	Starting          Rejection = "starting"           // the machine has not run long enough
	Unsteady          Rejection = "unsteady"           // a temperature departs from its mean
	Drifting          Rejection = "drifting"           // a temperature rises or falls
	Defrosting        Rejection = "defrosting"         // the pressures have come close or changed sides
	OutOfOrder        Rejection = "out_of_order"       // no time, or not after the sample before
	NothingToJudge    Rejection = "no_temperature"     // nothing to judge steadiness by
	ImplausibleSample Rejection = "implausible_sample" // a rule of plausibility is broken
)

// Step is the answer to one sample of a series.
type Step struct {
	Result    *Result // nil when the sample was refused
	Steady    bool
	Rejection Rejection
	Field     string // reading that is to blame, or ""
}

// Summary closes a series.
type Summary struct {
	Samples    int
	Steady     int
	From, To   time.Time
	Rejections map[Rejection]int
	Means      []Mean  // over the steady samples
	Drifts     []Drift // of figures with a baseline
	Findings   map[FindingCode]int
	Indicated  map[string]int // samples in which a fault ranked first
	Cautions   []Caution
}

// Mean is a figure over the steady samples.
type Mean struct {
	Figure    Figure
	Count     int
	Mean      float64
	Deviation float64 // standard deviation of the samples
	Low, High float64 // lowest and highest
	// Standard is the standard uncertainty of the mean: what is common to all samples (root mean square of theirs) and
	// what scatters, Deviation over the root of Count.
	Standard float64
	// Trend is the slope of a straight line through the samples, per second, with its standard uncertainty.
	Trend, TrendStandard float64
}

// Drift is how far a figure has moved from its baseline.
type Drift struct {
	Figure           Figure
	Baseline         float64
	BaselineStandard float64
	Mean             float64 // since
	Change           float64 // relative
	Standard         float64 // of Change
	Significant      bool    // beyond twice its standard uncertainty
}
