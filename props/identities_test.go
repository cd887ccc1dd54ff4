package props_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"dewmark/props"
)

// eachSinglePhase calls f with random single-phase states over the whole range of every refrigerant.
func eachSinglePhase(t *testing.T, f func(t *testing.T, r *props.Pure, s props.State)) {
	t.Helper()
	n := 150
	if testing.Short() {
		n = 25
	}
	for _, id := range catalogue(t).PureDesignations() {
		t.Run(id, func(t *testing.T) {
			r := refrigerant(t, id)
			rng := rand.New(rand.NewPCG(11, uint64(len(id))))
			for found := 0; found < n; {
				s, ok := sample(r, rng)
				if !ok || !math.IsNaN(s.Quality) {
					continue
				}
				found++
				f(t, r, s)
			}
		})
	}
}

func where(s props.State) string {
	return fmt.Sprintf("%s at %.10g K, %.10g kg/m3, %.6g Pa", s.Phase, s.T, s.Rho, s.P)
}

// near reports whether got is want to a relative tolerance of the larger of want and scale.
func near(got, want, tolerance, scale float64) bool {
	return math.Abs(got-want) <= tolerance*math.Max(math.Abs(want), scale)
}

// TestRelations checks what holds between the members of a state without any derivative being taken.
func TestRelations(t *testing.T) {
	eachSinglePhase(t, func(t *testing.T, r *props.Pure, s props.State) {
		R := gasConstant(r)
		q := s.T * s.DPDT * s.DPDT / (s.Rho * s.Rho * s.DPDRho)
		for _, c := range []struct {
			name             string
			got, want, scale float64
		}{
			{"h = u + p v", s.H, s.U + s.P*s.V(), 1e3},
			{"Z = p v/(R T)", s.Z, s.P / (s.Rho * R * s.T), 0},
			{"cp - cv", s.Cp - s.Cv, q, s.Cp},
			{"w2 = cp/cv (dp/d rho)", s.W * s.W, s.Cp / s.Cv * s.DPDRho, 0},
			{"isentropic exponent", s.IsentropicExponent(), s.W * s.W * s.Rho / s.P, 0},
			{"compressibility", s.IsothermalCompressibility() * s.Rho * s.DPDRho, 1, 0},
			{"expansivity", s.Expansivity(), s.DPDT * s.IsothermalCompressibility(), 0},
			{"Joule-Thomson", s.JouleThomson() * s.Rho * s.Cp, s.T*s.Expansivity() - 1, 1},
		} {
			if !near(c.got, c.want, 1e-12, c.scale) {
				t.Errorf("%s, %s: %.17g, want %.17g", where(s), c.name, c.got, c.want)
			}
		}
		if !(s.Cp > s.Cv && s.Cv > 0 && s.DPDRho > 0 && s.W > 0) {
			t.Errorf("%s is not stable: cp %g, cv %g, (dp/d rho) %g, w %g", where(s), s.Cp, s.Cv, s.DPDRho, s.W)
		}
	})
}

// gasConstant returns the specific gas constant in J/(kg K), by way of the file of the refrigerant.
func gasConstant(r *props.Pure) float64 { return r.Record().GasConstant / r.MolarMass() }

// difference is a derivative by central differences over h and 2h, extrapolated to none, and how far it may be off: by
// a fifth of what the two differ, and by the rounding of the values. It reports false where a state is missing or of
// another phase.
func difference(s props.State, h, noise float64, at func(h float64) (props.State, error), f func(props.State) float64) (slope, within float64, ok bool) {
	var v [4]float64
	for i, k := range []float64{-2, -1, 1, 2} {
		x, err := at(k * h)
		if err != nil || x.Phase != s.Phase || !math.IsNaN(x.Quality) {
			return 0, 0, false
		}
		v[i] = f(x)
	}
	narrow, wide := (v[2]-v[1])/(2*h), (v[3]-v[0])/(4*h)
	return narrow + (narrow-wide)/3, math.Abs(narrow-wide)/5 + noise/h, true
}

// TestDifferences compares every derivative that a state holds with differences of the states around it, and with that
// the relations of Maxwell: those of the Helmholtz energy along isotherms and isochores, those of the Gibbs energy along
// isobars, speed of sound along isentropes and the Joule-Thomson coefficient along isenthalps.
func TestDifferences(t *testing.T) {
	type count struct{ seen, skipped, sharp int }
	counts := map[string]*count{}
	eachSinglePhase(t, func(t *testing.T, r *props.Pure, s props.State) {
		dT, dRho := 2e-4*s.T, 2e-4*s.Rho
		// A pressure step that neither a gas nor a stiff liquid feels too much or too little.
		dp := math.Min(1e-3*s.P, 2e-4*s.Rho*s.DPDRho)
		if s.Phase == props.Liquid {
			dp = 2e-4 * s.Rho * s.DPDRho
		}
		R := gasConstant(r)
		// Along an isobar density may not change by more than along the other lines, however near the critical point.
		isobaric := 2e-4 / math.Max(1/s.T, math.Abs(s.Expansivity()))
		// Rounding: terms of the equation some hundred times R T, added up in double precision.
		terms := 500.0
		if r.Designation() == "R22" {
			terms = 1e5 // they cancel as in no other equation, see the exceptions in props/saturation
		}
		noiseU, noiseS := 4e-16*(math.Abs(s.U)+terms*R*s.T), 4e-16*(math.Abs(s.S)+terms*R)
		noiseP := 4e-16 * terms / 5 * s.Rho * R * s.T
		noiseRho := noiseP/s.DPDRho + 1e-15*s.Rho
		alongT := func(h float64) (props.State, error) { return r.TemperatureDensity(s.T+h, s.Rho) }
		alongRho := func(h float64) (props.State, error) { return r.TemperatureDensity(s.T, s.Rho+h) }
		isobar := func(h float64) (props.State, error) { return r.TemperaturePressure(s.T+h, s.P) }
		isotherm := func(h float64) (props.State, error) { return r.TemperaturePressure(s.T, s.P+h) }
		isentrope := func(h float64) (props.State, error) { return r.PressureEntropy(s.P+h, s.S) }
		isenthalp := func(h float64) (props.State, error) { return r.PressureEnthalpy(s.P+h, s.H) }
		T := func(s props.State) float64 { return s.T }
		P := func(s props.State) float64 { return s.P }
		rho := func(s props.State) float64 { return s.Rho }
		lnRho := func(s props.State) float64 { return math.Log(s.Rho) }
		H := func(s props.State) float64 { return s.H }
		S := func(s props.State) float64 { return s.S }
		U := func(s props.State) float64 { return s.U }
		q := s.DPDT / (s.Rho * s.Rho)
		beta := s.Expansivity()
		for _, c := range []struct {
			name  string
			want  float64
			h     float64
			noise float64
			at    func(float64) (props.State, error)
			f     func(props.State) float64
		}{
			{"(dp/dT) at constant rho", s.DPDT, dT, noiseP, alongT, P},
			{"(dp/d rho) at constant T", s.DPDRho, dRho, noiseP, alongRho, P},
			{"(du/dT) at constant rho = cv", s.Cv, dT, noiseU, alongT, U},
			{"(ds/dT) at constant rho = cv/T", s.Cv / s.T, dT, noiseS, alongT, S},
			{"(ds/d rho) at constant T = -(dp/dT)/rho2", -q, dRho, noiseS, alongRho, S},
			{"(du/d rho) at constant T = (p - T dp/dT)/rho2", (s.P/s.Rho - s.T*s.DPDT/s.Rho) / s.Rho, dRho, noiseU, alongRho, U},
			{"(dh/dT) at constant p = cp", s.Cp, isobaric, noiseU + s.P/s.Rho*noiseRho/s.Rho + s.Cp*s.T*noiseRho/s.Rho, isobar, H},
			{"(ds/dT) at constant p = cp/T", s.Cp / s.T, isobaric, noiseS + q*noiseRho, isobar, S},
			{"(d ln rho/dT) at constant p = -beta", -beta, isobaric, noiseRho / s.Rho, isobar, lnRho},
			{"(ds/dp) at constant T = -(dv/dT) at constant p", -beta / s.Rho, dp, noiseS + q*noiseRho, isotherm, S},
			{"(dh/dp) at constant T = v (1 - T beta)", (1 - s.T*beta) / s.Rho, dp, noiseU + s.P/s.Rho*1e-15 + (s.P+s.T*s.DPDT)/s.Rho*noiseRho/s.Rho, isotherm, H},
			{"(d rho/dp) at constant s = 1/w2", 1 / (s.W * s.W), dp, noiseRho + beta*s.Rho*noiseS*s.T/s.Cp, isentrope, rho},
			{"(dT/dp) at constant s = T beta v/cp", s.T * beta / (s.Rho * s.Cp), dp, s.T * (noiseS/s.Cp + 1e-15) * 4, isentrope, T},
			{"(dT/dp) at constant h", s.JouleThomson(), dp, (noiseU/s.Cp + 1e-15*s.T) * 4, isenthalp, T},
		} {
			n := counts[c.name]
			if n == nil {
				n = &count{}
				counts[c.name] = n
			}
			n.seen++
			got, within, ok := difference(s, c.h, c.noise, c.at, c.f)
			if !ok {
				n.skipped++
				continue
			}
			if within < 1e-3*math.Abs(c.want) {
				n.sharp++
			}
			if !(math.Abs(got-c.want) <= within+1e-9*math.Abs(c.want)) {
				t.Errorf("%s: %s is %.12g, differences give %.12g within %.1e", where(s), c.name, c.want, got, within)
			}
		}
	})
	for name, n := range counts {
		t.Logf("%s: %d states, %d at an edge, %d sharp to 0.1 %%", name, n.seen, n.skipped, n.sharp)
		if n.skipped > n.seen/4 || n.sharp < n.seen/2 {
			t.Errorf("%s: %d states, %d at an edge, only %d sharp", name, n.seen, n.skipped, n.sharp)
		}
	}
}
