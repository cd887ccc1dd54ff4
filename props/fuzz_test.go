package props_test

import (
	"errors"
	"math"
	"testing"

	"dewmark/props"
)

// FuzzStates asks for states of any refrigerant by any pair of values. There is no panic, no number that does not exist,
// no error that contradicts itself, and a state that comes back has the given pair when it is evaluated anew from
// its temperature and density, or quality.
func FuzzStates(f *testing.F) {
	c := catalogue(f)
	names := c.PureDesignations()
	for i, id := range []string{"R134a", "R290", "R717", "R718", "R744", "R1234yf", "R22", "R32"} {
		r := refrigerant(f, id)
		index := uint8(0)
		for k, name := range names {
			if name == id {
				index = uint8(k)
			}
		}
		critical := r.Critical()
		seeds := []func() (props.State, error){
			func() (props.State, error) { return r.TemperatureQuality(0.8*critical.T, 0.3) },
			func() (props.State, error) { return r.DewPoint(0.9 * critical.T) },
			func() (props.State, error) { return r.BubblePoint(r.Limits().TemperatureMin) },
			func() (props.State, error) { return r.TemperatureDensity(0.95*critical.T, 1e-3*critical.Rho) },
			func() (props.State, error) { return r.TemperatureDensity(critical.T*1.001, critical.Rho) },
			func() (props.State, error) { return r.TemperaturePressure(0.7*critical.T, 5*critical.P) },
		}
		for j, seed := range seeds {
			s, err := seed()
			if err != nil {
				continue // not every range holds all of them
			}
			for k, pair := range allPairs() {
				if (i+j+k)%4 == 0 {
					f.Add(index, uint8(k), value(s, pair[0]), value(s, pair[1]))
				}
			}
		}
	}
	for _, x := range []float64{0, -1, math.NaN(), math.Inf(1), 1e308, 5e-324} {
		f.Add(uint8(3), uint8(7), x, 1e5)
		f.Add(uint8(4), uint8(16), 1e5, x)
	}
	f.Add(uint8(40), uint8(0), 647.096, 22.064e6) // critical points, as their authors state them
	f.Add(uint8(41), uint8(0), 304.1282, 7.3773e6)
	pairs := allPairs()
	f.Fuzz(func(t *testing.T, index, pair uint8, x, y float64) {
		r := refrigerant(t, names[int(index)%len(names)])
		p := pairs[int(pair)%len(pairs)]
		a, b := given(p[0], x), given(p[1], y)
		states, err := r.States(a, b)
		checkAnswer(t, r, a, b, states, err)
		for _, s := range states {
			again, err := reproduced(r, s)
			if err != nil {
				t.Errorf("%s by %v %.17g, %v %.17g: %+v cannot be evaluated again: %v", r.Designation(), a.Property, a.Value, b.Property, b.Value, s, err)
				continue
			}
			for _, g := range []props.Given{a, b} {
				if off, within := math.Abs(value(again, g.Property)-g.Value), blur(r, again, g.Property); !(off <= within) {
					t.Errorf("%s by %v %.17g, %v %.17g: %+v has %v %.17g, off by %.1e, rounding is worth %.1e",
						r.Designation(), a.Property, a.Value, b.Property, b.Value, s, g.Property, value(again, g.Property), off, within)
				}
			}
		}
	})
}

// reproduced evaluates a state again from temperature and quality inside the dome and at its edge, and from temperature
// and density elsewhere.
func reproduced(r *props.Pure, s props.State) (props.State, error) {
	if !math.IsNaN(s.Quality) {
		return r.TemperatureQuality(s.T, s.Quality)
	}
	again, err := r.TemperatureDensity(s.T, s.Rho)
	if e, ok := errors.AsType[*props.RangeError](err); ok && e.Value <= e.Max*(1+1e-9) && e.Value >= e.Min*(1-1e-9) {
		return s, nil // at a limit, which rounding passed
	}
	return again, err
}

// blur is how far a property of a state may be off when temperature and density are known to ten digits, and what
// rounding of the terms of the equation adds.
func blur(r *props.Pure, s props.State, p props.Property) float64 {
	const digits = 1e-10
	R := gasConstant(r)
	terms := 1e-15 * 500.0
	if r.Designation() == "R22" {
		terms *= 200 // see the exceptions in props/saturation
	}
	if s.Phase == props.TwoPhase {
		d := math.Abs(s.DPDT) * s.T // along the saturation line
		switch p {
		case props.Pressure:
			return digits * d
		case props.Density:
			return digits * s.Rho * 1e3
		case props.Entropy:
			return digits * (math.Abs(s.S) + 1e3) * 10
		case props.Enthalpy, props.InternalEnergy:
			return digits * (math.Abs(s.H) + 1e5) * 10
		case props.Quality:
			return 1e-9
		default:
			return digits * s.T
		}
	}
	q := math.Abs(s.T*s.DPDT/s.Rho) + s.P/s.Rho + s.DPDRho // J/kg per unit of ln rho, and more
	switch p {
	case props.Temperature:
		return digits * s.T
	case props.Pressure:
		return digits*(s.T*math.Abs(s.DPDT)+s.Rho*s.DPDRho) + terms*s.Rho*R*s.T
	case props.Density:
		return digits * s.Rho
	case props.Entropy:
		return digits*(s.Cv+q/s.T) + terms*(R+math.Abs(s.S))
	case props.Quality:
		return 1e-9
	default:
		return digits*(s.Cv*s.T+q) + terms*(R*s.T+math.Abs(s.H))
	}
}
