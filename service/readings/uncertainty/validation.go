package uncertainty

import "math"

// Verdict says whether draws confirm the first-order uncertainty of a result.
type Verdict string

// The verdicts.
const (
	Confirmed Verdict = "confirmed" // both ends of the coverage interval agree within the tolerance
	Refuted   Verdict = "refuted"   // one end differs by more than the tolerance and what more draws could explain
	Undecided Verdict = "undecided" // more draws are needed to tell
)

// Validation compares the coverage interval to first order with the drawn one (JCGM 101, clause 8).
type Validation struct {
	Verdict   Verdict
	Tolerance float64 // numerical tolerance of the standard uncertainty at its digits
	Low, High float64 // absolute differences of the ends
}

// Validate compares an estimate with drawn values of the same coverage. Digits are those of the standard uncertainty that
// count, 1 or 2; 0 means 2.
func Validate(e *Estimate, d *Drawn, digits int) Validation {
	if digits == 0 {
		digits = 2
	}
	v := Validation{
		Verdict:   Undecided,
		Tolerance: Tolerance(e.Standard, digits),
		Low:       math.Abs(e.Value - e.Expanded - d.Low),
		High:      math.Abs(e.Value + e.Expanded - d.High),
	}
	switch {
	case v.Low <= v.Tolerance && v.High <= v.Tolerance:
		v.Verdict = Confirmed
	case v.Low > v.Tolerance+2*d.LowNumerical || v.High > v.Tolerance+2*d.HighNumerical:
		v.Verdict = Refuted
	}
	return v
}

// Tolerance returns the numerical tolerance of a standard uncertainty: half a unit of its last digit, when it is written
// with so many significant digits (JCGM 101, 7.9.2).
func Tolerance(u float64, digits int) float64 {
	if !(u > 0) || math.IsInf(u, 1) {
		return 0
	}
	l := math.Floor(math.Log10(u)) - float64(digits-1)
	if math.Round(u/math.Pow(10, l)) >= math.Pow(10, float64(digits)) {
		l++ // 0.0996 is written 0.10
	}
	return 0.5 * math.Pow(10, l)
}
