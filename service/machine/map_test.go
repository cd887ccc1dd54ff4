package machine

import (
	"encoding/csv"
	"fmt"
	"math"
	"os"
	"strconv"
	"strings"
	"testing"
)

func readTable(t *testing.T, name string) []map[string]string {
	t.Helper()
	f, err := os.Open("../../testdata/" + name)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	lines, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	var rows []map[string]string
	for _, line := range lines[1:] {
		row := map[string]string{}
		for i, cell := range line {
			row[lines[0][i]] = cell
		}
		rows = append(rows, row)
	}
	return rows
}

func parse(t *testing.T, text string) float64 {
	t.Helper()
	v, err := strconv.ParseFloat(text, 64)
	if err != nil {
		t.Fatal(err)
	}
	return v
}

// published returns the coefficients of a map in testdata/compressor_maps.csv, in the order of its source.
func published(t *testing.T, id, quantity string) (c []float64) {
	t.Helper()
	for _, row := range readTable(t, "compressor_maps.csv") {
		if row["map_id"] == id && row["quantity"] == quantity {
			c = append(c, parse(t, row["coefficient"]))
		}
	}
	return c
}

// The points of testdata/compressor_map_points.csv: a map of ten coefficients (Lee et al. 2021) and one of nine (Stoecker and
// Jones, table 14-1), to the seven digits printed, in the units of the data sheet and by way of K and SI.
func TestPublishedMapPoints(t *testing.T) {
	kinds := map[string]MapKind{"LEE2021": TenCoefficient, "SJ14-1": Biquadratic}
	count := 0
	for _, row := range readTable(t, "compressor_map_points.csv") {
		kind, ok := kinds[row["map_id"]]
		if !ok {
			t.Fatalf("map %q", row["map_id"])
		}
		if row["suction_C"] == "" {
			continue // a system, see TestPublishedBalance
		}
		var u unit
		c := u.coefficients("map", kind, published(t, row["map_id"], row["quantity"]))
		if len(u.refusals) > 0 {
			t.Fatal(u.refusals)
		}
		count++
		S, D := parse(t, row["suction_C"]), parse(t, row["discharge_C"])
		want := parse(t, row["value"])
		if got, _, _ := c.at(S, D); !(math.Abs(got/want-1) <= 5e-7) {
			t.Errorf("%s: %.9g, want %s", row["id"], got, row["value"])
		}
		r := rating{flow: c, power: c, perFlow: 1e-3, perPower: 1e3}
		flow, power := r.raw(&flanges{suctionDew: S + 273.15, dischargeDew: D + 273.15})
		if !(math.Abs(flow/want*1e3-1) <= 5e-7 && math.Abs(power/want*1e-3-1) <= 5e-7) {
			t.Errorf("%s in SI: %.9g and %.9g, want %s", row["id"], flow, power, row["value"])
		}
	}
	if count != 20 {
		t.Errorf("%d points were compared, not 20", count)
	}
}

// Where the compressor of Stoecker and Jones, table 14-1, balances with the condenser and the evaporator of that chapter:
// condenser 9.39 kW/K above the ambient, evaporator 6.0 (1 + 0.046 d) kW/K at difference d to the water. The nested search
// finds the points of testdata/compressor_map_points.csv, to the digits printed.
func TestPublishedBalance(t *testing.T) {
	var u unit
	capacity := u.coefficients("map", Biquadratic, published(t, "SJ14-1", "refrigeration_capacity"))
	power := u.coefficients("map", Biquadratic, published(t, "SJ14-1", "power"))
	compared := 0
	for _, water := range []float64{10, 20} {
		tc := 45.0
		condense := func(te float64) (float64, error) {
			var err error
			tc, _, err = hunt(tc, 36, 80, func(tc float64) (float64, error) {
				q, _, _ := capacity.at(te, tc)
				w, _, _ := power.at(te, tc)
				return 9.39*(tc-35)/(q+w) - 1, nil
			})
			return tc, err
		}
		y, _, err := hunt(5, -water, 30, func(y float64) (float64, error) { // upwards the evaporation falls
			te := -y
			tc, err := condense(te)
			q, _, _ := capacity.at(te, tc)
			d := water - te
			return 6.0*(1+0.046*d)*d/q - 1, err
		})
		if err != nil {
			t.Fatal(err)
		}
		te := -y
		if _, err := condense(te); err != nil {
			t.Fatal(err)
		}
		q, _, _ := capacity.at(te, tc)
		w, _, _ := power.at(te, tc)
		got := map[string]float64{"t_evap": te, "t_cond": tc, "capacity": q, "power": w}
		for _, row := range readTable(t, "compressor_map_points.csv") {
			name, rest, ok := strings.Cut(strings.TrimPrefix(row["quantity"], "system_balance_"), " ")
			if row["suction_C"] != "" || !ok || !strings.Contains(rest, fmt.Sprintf("water in %g C", water)) {
				continue
			}
			compared++
			if want := parse(t, row["value"]); !(math.Abs(got[name]/want-1) <= 5.1e-7*math.Max(1, 1/math.Abs(want))) {
				t.Errorf("%s: %s %.8g, want %s", row["id"], name, got[name], row["value"])
			}
		}
	}
	if compared != 8 {
		t.Errorf("%d values were compared, not 8", compared)
	}
}

func TestMapSlopes(t *testing.T) {
	c := coefficients{1, 2, 3, 0.4, 0.5, 0.6, 0.07, 0.08, 0.09, 0.01, 0.002}
	const d = 1e-5
	x, byS, byD := c.at(1.7, -2.3)
	want := 0.002 * (1.7 * 2.3) * (1.7 * 2.3)
	for i, p := range powers {
		want += c[i] * math.Pow(1.7, float64(p[0])) * math.Pow(-2.3, float64(p[1]))
	}
	if !(math.Abs(x-want) <= 1e-12) {
		t.Errorf("polynomial %g, its terms %g", x, want)
	}
	s1, _, _ := c.at(1.7+d, -2.3)
	s0, _, _ := c.at(1.7-d, -2.3)
	d1, _, _ := c.at(1.7, -2.3+d)
	d0, _, _ := c.at(1.7, -2.3-d)
	if !(math.Abs((s1-s0)/(2*d)-byS) <= 1e-8 && math.Abs((d1-d0)/(2*d)-byD) <= 1e-8) {
		t.Errorf("slopes %g %g, differences %g %g", byS, byD, (s1-s0)/(2*d), (d1-d0)/(2*d))
	}
}

func TestScales(t *testing.T) {
	for _, c := range []struct {
		scale   Scale
		T, want float64
	}{
		{Scale{}, 273.15, 0},
		{Celsius, 318.15, 45},
		{Fahrenheit, 273.15, 32},
		{Fahrenheit, 310.9277777777778, 100},
		{Scale{1, 0}, 300, 300},
	} {
		if got := c.scale.Reading(c.T); !(math.Abs(got-c.want) <= 1e-11) {
			t.Errorf("%+v at %g K reads %.12g, want %g", c.scale, c.T, got, c.want)
		}
	}
}

// mapped returns the demonstration's unit with its middle map alone.
func mapped(t *testing.T, change func(*Machine)) (*unit, *flanges) {
	t.Helper()
	m := demo(t, "harrow-8")
	m.Compressor.Maps = m.Compressor.Maps[1:2]
	if change != nil {
		change(m)
	}
	u := newUnit(m)
	if len(u.refusals) > 0 {
		t.Fatal(&RefusedError{u.refusals})
	}
	f, err := u.flangesAt(&u.compressor.ratings[0], corner{268.15, 318.15})
	if err != nil {
		t.Fatal(err)
	}
	return u, f
}

// Dabiri and Rice: flow follows a part of the density's change, power the flow and the isentropic rise. By hand from states.
func TestSuperheatCorrection(t *testing.T) {
	u, f := mapped(t, nil)
	r := &u.compressor.ratings[0]
	flow0, eta0, err := r.rated(u.fluid, f)
	if err != nil {
		t.Fatal(err)
	}
	S, D := -5.0, 45.0
	x, _, _ := r.flow.at(S, D)
	w, _, _ := r.power.at(S, D)
	if !(math.Abs(flow0/(x/3600)-1) <= 1e-12) {
		t.Errorf("at the map's own superheat: %g kg/s, map %g", flow0, x/3600)
	}
	hot := *f
	if hot.suction, err = u.fluid.TemperaturePressure(268.15+25, f.suctionPressure); err != nil {
		t.Fatal(err)
	}
	flow, eta, err := r.rated(u.fluid, &hot)
	if err != nil {
		t.Fatal(err)
	}
	ratio := hot.suction.Rho / f.suction.Rho
	if want := flow0 * (1 + 0.75*(ratio-1)); !(math.Abs(flow/want-1) <= 1e-12) {
		t.Errorf("flow with 25 K superheat: %g kg/s, want %g", flow, want)
	}
	a, _ := u.fluid.PressureEntropy(f.dischargePressure, f.suction.S)
	b, _ := u.fluid.PressureEntropy(f.dischargePressure, hot.suction.S)
	power := flow * (b.H - hot.suction.H) / eta
	if want := w * (flow / flow0) * (b.H - hot.suction.H) / (a.H - f.suction.H); !(math.Abs(power/want-1) <= 1e-12) {
		t.Errorf("power with 25 K superheat: %g W, want %g", power, want)
	}
	if !(math.Abs(eta/eta0-1) <= 1e-12) {
		t.Errorf("efficiency %g, at the map's own superheat %g", eta, eta0)
	}
}

// The same map as cooling capacity, in °F, Btu/h and W, gives the same compressor.
func TestCapacityMapInOtherUnits(t *testing.T) {
	u, f := mapped(t, nil)
	r := &u.compressor.ratings[0]
	want, eta, err := r.rated(u.fluid, f)
	if err != nil {
		t.Fatal(err)
	}
	const btuPerHour = 0.29307107
	var points []RatedPoint
	for te := 248.15; te < 290; te += 4 {
		for tc := 295.15; tc < 338; tc += 5 {
			g, err := u.flangesAt(r, corner{te, tc})
			if err != nil {
				t.Fatal(err)
			}
			liquid, err := u.fluid.TemperaturePressure(tc-8.3, g.dischargePressure)
			if err != nil {
				t.Fatal(err)
			}
			flow, power := r.raw(g)
			points = append(points, RatedPoint{Evaporation: te, Condensation: tc, MassFlow: flow * (g.suction.H - liquid.H), Power: power})
		}
	}
	fit, err := FitMap(points, MapUnits{Temperature: Fahrenheit, MassFlow: btuPerHour}, false) // the flow stands for a capacity
	if err != nil {
		t.Fatal(err)
	}
	u2, f2 := mapped(t, func(m *Machine) {
		k := &m.Compressor.Maps[0]
		k.MassFlow, k.Capacity, k.Power = nil, fit.MassFlow.Coefficients, fit.Power.Coefficients
		k.Units = MapUnits{Temperature: Fahrenheit, Capacity: btuPerHour}
		k.Subcooling = new(8.3)
	})
	got, eta2, err := u2.compressor.ratings[0].rated(u2.fluid, f2)
	if err != nil || !(math.Abs(got/want-1) <= 0.002 && math.Abs(eta2/eta-1) <= 0.01) { // what the cubic of the capacity leaves
		t.Errorf("by capacity %g kg/s and %g, %v; by flow %g and %g", got, eta2, err, want, eta)
	}
}

// Beyond its area a map goes on without a jump, stays positive and finite, and rises with suction temperature.
func TestMapBeyondItsArea(t *testing.T) {
	u, _ := mapped(t, nil)
	r := &u.compressor.ratings[0]
	last := 0.0
	for te := 200.0; te < 330; te += 0.5 {
		flow, power := r.raw(&flanges{suctionDew: te, dischargeDew: 318.15})
		if !(flow > 0 && power > 0 && flow < 1) {
			t.Fatalf("at %g K: flow %g kg/s, power %g W", te, flow, power)
		}
		if last > 0 && !(flow >= last && flow < last+0.002) { // a tenth of the flow in the middle is 0.002 kg/s
			t.Errorf("at %g K the flow goes from %g to %g kg/s", te, last, flow)
		}
		last = flow
	}
}

// Between two speeds flow and power are linear in the speed.
func TestMapSpeeds(t *testing.T) {
	m := demo(t, "harrow-8")
	k := Condition{
		Source: Stream{InletTemperature: new(280.15), RelativeHumidity: new(0.8), VolumeFlow: new(1.0)},
		Sink:   Stream{Liquid: water(), InletTemperature: new(303.15), OutletTemperature: new(308.15)},
	}
	m.Evaporator = Exchanger{Approach: new(8.0)}
	m.Condenser = Exchanger{Approach: new(2.0)}
	at := func(n float64) (flow, power float64) {
		k.Speed = &n
		p, err := Solve(t.Context(), m, &k)
		if err != nil {
			t.Fatal(err)
		}
		return p.Cycle.Performance.MassFlow, p.Cycle.Performance.CompressorPower
	}
	f30, w30 := at(30)
	f60, w60 := at(60)
	f100, w100 := at(100)
	for _, n := range []float64{40, 52.5, 60, 77, 99.5} {
		share, f, w, f0, w0 := (n-30)/30, f60, w60, f30, w30
		if n > 60 {
			share, f, w, f0, w0 = (n-60)/40, f100, w100, f60, w60
		}
		flow, power := at(n)
		if !(math.Abs(flow/(f0+share*(f-f0))-1) <= 1e-9 && math.Abs(power/(w0+share*(w-w0))-1) <= 1e-9) {
			t.Errorf("speed %g: %g kg/s and %g W, want %g and %g", n, flow, power, f0+share*(f-f0), w0+share*(w-w0))
		}
	}
}

// Maps that no compressor can have are refused when they are loaded.
func TestImplausibleMaps(t *testing.T) {
	for name, change := range map[string]func(*Map){
		"power a tenth":                func(m *Map) { scale(m.Power, 0.1) },
		"flow in the wrong unit":       func(m *Map) { m.Units.MassFlow = 1e-3 },
		"negative flow":                func(m *Map) { m.MassFlow[0] -= 200 },
		"flow falls with evaporation":  func(m *Map) { m.MassFlow[1] = -3 },
		"area beyond the critical one": func(m *Map) { m.Envelope[4].Condensation = 380 },
	} {
		m := demo(t, "harrow-8")
		m.Compressor.Maps = m.Compressor.Maps[1:2]
		change(&m.Compressor.Maps[0])
		u := newUnit(m)
		if len(u.refusals) != 1 || u.refusals[0].Code != ImplausibleMap {
			t.Errorf("%s: %v", name, u.refusals)
		}
	}
	m := demo(t, "harrow-8")
	m.Compressor.SweptVolume = new(150e-6)
	if u := newUnit(m); len(u.refusals) != 1 || u.refusals[0].Code != ImplausibleMap || u.refusals[0].Field != "machine.compressor.maps.0" {
		t.Errorf("a quarter of the volumetric efficiency: %v", u.refusals)
	}
	if m := demo(t, "harrow-8"); len(newUnit(m).refusals) > 0 {
		t.Error("the demonstration's own maps are refused")
	}
}

func scale(c []float64, by float64) {
	for i := range c {
		c[i] *= by
	}
}
