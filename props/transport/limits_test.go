package transport

import (
	"errors"
	"math"
	"math/rand/v2"
	"sync"
	"testing"
)

// Every state within the validity of an equation of state has positive, finite properties with an uncertainty.
func TestWholeRange(t *testing.T) {
	for _, n := range names() {
		r := refrigerants()[n]
		r.grid(24, 10, func(T, rho float64) {
			eta, lambda, err := r.ViscosityAndConductivity(r.State(T, rho))
			if err != nil {
				t.Errorf("%s at %g K, %g mol/m3: %v", n, T, rho, err)
				return
			}
			for _, v := range []Value{eta, lambda} {
				if !(v.Value > 0 && finite(v.Value) && v.Uncertainty > 0 && v.Uncertainty <= 1) {
					t.Errorf("%s %s at %g K, %g mol/m3: %g, uncertainty %g", n, v.Record.Property, T, rho, v.Value, v.Uncertainty)
				}
			}
		})
		for i := range 201 {
			T := min(r.curve.TCritical, r.fluid.TemperatureMin+(r.curve.TCritical-r.fluid.TemperatureMin)*float64(i)/200)
			sigma, err := r.SurfaceTension(T, r.curve.TCritical)
			if err != nil || !(sigma.Value >= 0 && sigma.Value < 0.2) || (sigma.Value < 1e-12) != (i == 200) {
				t.Errorf("%s surface tension at %g K: %g N/m, %v", n, T, sigma.Value, err)
			}
		}
	}
}

// States far outside anything, and no states at all, give a value or a typed error, never NaN.
func TestAnyState(t *testing.T) {
	rnd := rand.New(rand.NewPCG(1, 2))
	odd := []float64{0, -1, math.NaN(), math.Inf(1), math.Inf(-1), 1e-300, 1e300}
	pick := func(low, high float64) float64 {
		if rnd.IntN(10) == 0 {
			return odd[rnd.IntN(len(odd))]
		}
		return low * math.Pow(high/low, rnd.Float64())
	}
	for _, n := range names() {
		r := refrigerants()[n]
		for range 400 {
			T, rho := pick(20, 5000), pick(1e-6, 60000)
			var s State
			if T > 0 && finite(T) && finite(rho) {
				s = r.State(T, rho)
			} else {
				s = State{T: T, Rho: rho, R: molarGas}
			}
			eta, lambda, err := r.ViscosityAndConductivity(s)
			if e, typed := errors.AsType[*StateError](err); err != nil && (!typed || e.Refrigerant != n) {
				t.Errorf("%s at %g K, %g mol/m3: %v", n, T, rho, err)
			}
			if err == nil && !(eta.Value > 0 && finite(eta.Value) && lambda.Value > 0 && finite(lambda.Value)) {
				t.Errorf("%s at %g K, %g mol/m3: %g Pa s, %g W/(m K) without an error", n, T, rho, eta.Value, lambda.Value)
			}
			eta.Cautions()
			lambda.Cautions()
			if sigma, err := r.SurfaceTension(T, r.curve.TCritical); err == nil && !(sigma.Value >= 0 && finite(sigma.Value)) {
				t.Errorf("%s surface tension at %g K: %g N/m", n, T, sigma.Value)
			}
		}
	}
}

// At zero density only the dilute gas is left, and the limit is reached smoothly.
func TestZeroDensity(t *testing.T) {
	for _, n := range names() {
		r := refrigerants()[n]
		T := 0.9 * r.curve.TCritical
		eta, lambda, err := r.ViscosityAndConductivity(r.State(T, 0))
		near, nearLambda, errNear := r.ViscosityAndConductivity(r.State(T, 1e-3*r.fluid.Critical.Rho*1e-3))
		if err != nil || errNear != nil {
			t.Errorf("%s: %v, %v", n, err, errNear)
			continue
		}
		p, _ := newPoint(r.State(T, 0), r.fluid.MolarMass)
		if want := r.viscosity[0].model.dilute(T); math.Abs(eta.Value/want-1) > 2e-5 { // the constants of R123 and R152a do not cancel exactly
			t.Errorf("%s: viscosity at zero density %g, dilute part %g", n, eta.Value, want)
		}
		if want := r.conductivity[0].model.dilute(T, p.cp0); math.Abs(lambda.Value/want-1) > 1e-12 {
			t.Errorf("%s: conductivity at zero density %g, dilute part %g", n, lambda.Value, want)
		}
		// R1234ze(E) has a term in the 2/3rd power of the density, which is 1e-4 there.
		if math.Abs(near.Value/eta.Value-1) > 1e-4 || math.Abs(nearLambda.Value/lambda.Value-1) > 1e-4 {
			t.Errorf("%s: thin gas %g, %g; at zero density %g, %g", n, near.Value, nearLambda.Value, eta.Value, lambda.Value)
		}
	}
}

// At the critical point of the equation of state, where the compressibility is infinite, the enhancement is limited.
func TestCriticalPoint(t *testing.T) {
	for _, n := range names() {
		r := refrigerants()[n]
		eta, lambda, err := r.ViscosityAndConductivity(r.State(r.curve.TCritical, r.curve.RhoCritical))
		if err != nil || !(eta.Value > 0 && lambda.Value > 0 && lambda.Value < 50) {
			t.Errorf("%s at the critical point: %g Pa s, %g W/(m K), %v", n, eta.Value, lambda.Value, err)
			continue
		}
		cautioned := false
		for _, c := range lambda.Cautions() {
			cautioned = cautioned || c.Code == NearCritical
		}
		if !cautioned && !r.conductivity[0].peaked {
			t.Errorf("%s: no caution at the critical point", n)
		}
	}
}

// Away from the critical point a saturated liquid loses viscosity and surface tension when it gets warmer, a saturated
// vapour gains viscosity, as long as one model answers.
func TestSaturationIsMonotonic(t *testing.T) {
	for _, n := range names() {
		r := refrigerants()[n]
		before, tension := [2]Value{{Value: math.Inf(1)}, {}}, math.Inf(1)
		for i := range 60 {
			T := r.curve.TMin + (0.95*r.curve.TCritical-r.curve.TMin)*float64(i)/59
			_, liquid, vapour := r.curve.At(T)
			l, err := r.Viscosity(r.State(T, liquid))
			g, err2 := r.Viscosity(r.State(T, vapour))
			sigma, err3 := r.SurfaceTension(T, r.curve.TCritical)
			if err := errors.Join(err, err2, err3); err != nil {
				t.Fatal(err)
			}
			if l.Record == before[0].Record && l.Uncertainty < 1 && !(l.Value < before[0].Value) {
				t.Errorf("%s: viscosity of saturated liquid rises to %g at %g K", n, l.Value, T)
			}
			// The conformal state of R115 drifts out of its limits between 290 and 295 K, where the two ways differ by 5 %.
			if g.Record == before[1].Record && !(n == "R115" && T > 288 && T < 298) && !(g.Value > before[1].Value) {
				t.Errorf("%s: viscosity of saturated vapour falls to %g at %g K", n, g.Value, T)
			}
			if !(sigma.Value < tension) {
				t.Errorf("%s: surface tension rises to %g at %g K", n, sigma.Value, T)
			}
			before, tension = [2]Value{l, g}, sigma.Value
		}
	}
}

// Along isotherms nothing jumps: neither where the two ways to a conformal state are blended nor at the cap of the
// enhancement.
func TestNoJumps(t *testing.T) {
	for _, n := range names() {
		r := refrigerants()[n]
		for _, tr := range []float64{0.7, 0.9, 0.999, 1.0005, 1.01, 1.1, 1.3} {
			T := tr * r.curve.TCritical
			if T < r.curve.TMin || T > r.fluid.TemperatureMax {
				continue
			}
			from, to := 0.0, r.density(T, r.fluid.PressureMax, false)
			if T < r.curve.TCritical {
				_, _, to = r.curve.At(T)
			}
			const steps = 400
			var eta0, lambda0 float64
			for i := range steps + 1 {
				rho := from + (to-from)*float64(i)/steps
				eta, lambda, err := r.ViscosityAndConductivity(r.State(T, rho))
				if err != nil {
					t.Fatal(err)
				}
				// Four densities a decade of the steepest part change a property by less than this.
				if i > 0 && (math.Abs(math.Log(eta.Value/eta0)) > 0.04 || math.Abs(math.Log(lambda.Value/lambda0)) > 0.10) {
					t.Errorf("%s at %.4f Tc, %.4f rhoc: viscosity %g after %g, conductivity %g after %g", n, tr,
						rho/r.fluid.Critical.Rho, eta.Value, eta0, lambda.Value, lambda0)
				}
				eta0, lambda0 = eta.Value, lambda.Value
			}
		}
	}
}

// One model answers many goroutines with the same numbers; the race detector looks on.
func TestConcurrentUse(t *testing.T) {
	r := refrigerants()["R22"]
	_, liquid, _ := r.curve.At(300)
	s := r.State(300, liquid)
	eta, lambda, err := r.ViscosityAndConductivity(s)
	if err != nil {
		t.Fatal(err)
	}
	var wg sync.WaitGroup
	for range 4 {
		wg.Go(func() {
			for range 50 {
				e, l, err := r.ViscosityAndConductivity(s)
				if err != nil || e != eta || l != lambda {
					t.Errorf("%g and %g, want %g and %g, %v", e.Value, l.Value, eta.Value, lambda.Value, err)
				}
			}
		})
	}
	wg.Wait()
}

// An evaluation needs no heap.
func TestNoAllocation(t *testing.T) {
	for _, n := range []string{"R134a", "R22", "R718", "R23", "R1130(E)", "R744"} {
		r := refrigerants()[n]
		_, liquid, vapour := r.curve.At(0.8 * r.curve.TCritical)
		for _, s := range []State{r.State(0.8*r.curve.TCritical, liquid), r.State(0.8*r.curve.TCritical, vapour)} {
			if a := testing.AllocsPerRun(10, func() {
				_, _, _ = r.ViscosityAndConductivity(s)
				_, _ = r.SurfaceTension(s.T, r.curve.TCritical)
			}); a != 0 {
				t.Errorf("%s: %g allocations", n, a)
			}
		}
	}
}
