package props

import (
	"math"
	"sync"
	"sync/atomic"

	"dewmark/props/data"
	"dewmark/props/helmholtz"
	"dewmark/props/saturation"
	"dewmark/props/transport"
)

// StandardAtmosphere is the pressure of the normal boiling point, Pa (ISO 2533, sea level).
const StandardAtmosphere = 101325.0

// Pure computes the states of a pure refrigerant, with enthalpy and entropy counted from one datum. It is immutable,
// cheap to copy and safe for concurrent use.
type Pure struct {
	*fluid
	curve       *saturation.Curve
	limits      Limits
	datum       Datum
	h0, s0      float64 // added to the equation's own h and s
	extrapolate bool
}

// fluid is what all views of a refrigerant share.
type fluid struct {
	rec          data.Record
	eq           *helmholtz.Equation
	M            float64 // kg/mol
	Rs           float64 // J/(kg K)
	perM, perRho float64 // reciprocals of the molar mass and of the reducing density, mol/kg and m3/kg
	flow         *transport.Model
	build        sync.Once
	made         atomic.Pointer[saturation.Curve]
	starts       starts                                // above the critical pressure
	views        [TriplePoint + 1]atomic.Pointer[Pure] // by datum, those that were wanted
}

func newFluid(rec data.Record) (*fluid, error) {
	eq, err := helmholtz.New(helmholtz.Coefficients{
		GasConstant: rec.GasConstant, ReducingTemperature: rec.Reducing.Temperature, ReducingDensity: rec.Reducing.Density,
		Ideal: rec.Ideal, Residual: rec.Residual,
	})
	if err != nil {
		return nil, err
	}
	return &fluid{
		rec: rec, eq: eq, M: rec.MolarMass, Rs: rec.GasConstant / rec.MolarMass,
		perM: 1 / rec.MolarMass, perRho: 1 / (rec.MolarMass * rec.Reducing.Density),
	}, nil
}

// saturation returns the saturation curve, which is made on first use. The coefficient files are embedded and a test
// makes every curve, so that failure can only mean a damaged file.
func (f *fluid) saturation() *saturation.Curve {
	f.build.Do(func() {
		curve, err := saturation.New(f.eq, saturation.Options{
			TMin:        f.rec.Validity.TemperatureMin,
			TCritical:   f.rec.Critical.Temperature,
			RhoCritical: f.rec.Critical.Density,
			Acentric:    f.rec.Acentric,
		})
		if err != nil {
			panic("props: " + f.rec.ID + ": " + err.Error())
		}
		f.made.Store(curve)
		f.starts = makeStarts(f.plain())
	})
	return f.made.Load()
}

// view returns the refrigerant with enthalpies and entropies as the equation itself counts them.
func (f *fluid) view() *Pure {
	f.saturation()
	return f.plain()
}

// plain is view when the saturation curve has just been made.
func (f *fluid) plain() *Pure {
	c := f.made.Load()
	v := f.rec.Validity
	_, liquid, _ := c.At(c.TMin)
	return &Pure{fluid: f, curve: c, limits: Limits{
		TemperatureMin: v.TemperatureMin,
		// The saturation curve itself belongs to the range even where the stated one ends just below the critical point.
		TemperatureMax: math.Max(v.TemperatureMax, c.TCritical),
		PressureMax:    v.PressureMax,
		DensityMax:     math.Max(v.DensityMax, liquid*(1+1e-9)) * f.M,
	}}
}

// Designation returns the ISO 817 designation.
func (f *fluid) Designation() string { return f.rec.ID }

// Record returns the coefficient file: names, sources, limits and classification. The caller must not modify it.
func (f *fluid) Record() *data.Record { return &f.rec }

// MolarMass returns the molar mass in kg/mol.
func (f *fluid) MolarMass() float64 { return f.M }

// Datum returns the datum that is in force, never DefaultDatum.
func (r *Pure) Datum() Datum { return r.datum }

// Extrapolate returns a view that also answers above the temperature, pressure and density limits of the equation: to
// 1.5 times the highest temperature, 2 times the highest pressure and 1.15 times the highest density. The answers are
// extrapolations; [Pure.Extrapolated] tells which.
func (r *Pure) Extrapolate() *Pure {
	view := *r
	view.extrapolate = true
	return &view
}

// Limits returns the range of validity of the equation.
func (r *Pure) Limits() Limits { return r.limits }

// reach returns the range in which the view answers.
func (r *Pure) reach() Limits {
	if r.extrapolate {
		return r.limits.Extrapolated()
	}
	return r.limits
}

// Critical returns the critical point of the equation itself, which differs slightly from the one its authors state.
func (r *Pure) Critical() Point {
	return Point{T: r.curve.TCritical, P: r.curve.PCritical, Rho: r.curve.RhoCritical * r.M}
}

// SaturationLimits returns the lowest temperature in K and pressure in Pa of the saturation curve, which are those of
// the triple point where the equation reaches it.
func (r *Pure) SaturationLimits() (T, p float64) { return r.curve.TMin, r.curve.PMin }

// SaturationBounds returns the largest relative errors of the saturation curve that were measured when it was made.
func (r *Pure) SaturationBounds() saturation.Bounds { return r.curve.Bounds() }

// NormalBoilingPoint returns the boiling temperature at 101.325 kPa in K, or NaN when the saturation curve begins above
// that pressure: R744 sublimes there, the ranges of R161 and R1132(E) do not reach it.
func (r *Pure) NormalBoilingPoint() float64 {
	T, err := r.SaturationTemperature(StandardAtmosphere)
	if err != nil {
		return math.NaN()
	}
	return T
}

// SaturationPressure returns the vapour pressure in Pa at temperature T in K. It returns a [*RangeError] unless T lies
// between the lowest temperature of the equation and its critical temperature. The same holds for [Pure.BubblePoint]
// and [Pure.DewPoint].
func (r *Pure) SaturationPressure(T float64) (float64, error) {
	if err := r.checkSaturationTemperature(T); err != nil {
		return 0, err
	}
	return r.curve.Pressure(T), nil
}

// SaturationTemperature returns the boiling temperature in K at pressure p in Pa. It returns a [*RangeError] unless p lies
// between the vapour pressure at the lowest temperature of the equation and the critical pressure.
func (r *Pure) SaturationTemperature(p float64) (float64, error) {
	if err := r.checkSaturationPressure(p); err != nil {
		return 0, err
	}
	return r.curve.Temperature(p), nil
}

// BubblePoint returns saturated liquid at temperature T in K: phase Liquid, quality 0.
func (r *Pure) BubblePoint(T float64) (State, error) { return r.TemperatureQuality(T, 0) }

// DewPoint returns saturated vapour at temperature T in K: phase Vapour, quality 1.
func (r *Pure) DewPoint(T float64) (State, error) { return r.TemperatureQuality(T, 1) }

// BubblePointAtPressure returns saturated liquid at pressure p in Pa.
func (r *Pure) BubblePointAtPressure(p float64) (State, error) { return r.PressureQuality(p, 0) }

// DewPointAtPressure returns saturated vapour at pressure p in Pa.
func (r *Pure) DewPointAtPressure(p float64) (State, error) { return r.PressureQuality(p, 1) }

func (r *Pure) checkSaturationTemperature(T float64) error {
	if !(r.curve.TMin <= T && T <= r.curve.TCritical) {
		return &RangeError{Refrigerant: r.rec.ID, Property: Temperature, Value: T, Min: r.curve.TMin, Max: r.curve.TCritical, Limit: LimitSaturation}
	}
	return nil
}

func (r *Pure) checkSaturationPressure(p float64) error {
	if !(r.curve.PMin <= p && p <= r.curve.PCritical) {
		return &RangeError{Refrigerant: r.rec.ID, Property: Pressure, Value: p, Min: r.curve.PMin, Max: r.curve.PCritical, Limit: LimitSaturation}
	}
	return nil
}
