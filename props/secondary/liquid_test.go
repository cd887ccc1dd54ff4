package secondary

import (
	"encoding/csv"
	"errors"
	"math"
	"os"
	"strconv"
	"sync"
	"testing"

	"dewmark/props"
)

var catalogue = sync.OnceValue(func() *props.Catalogue {
	c, err := props.NewCatalogue()
	if err != nil {
		panic(err)
	}
	return c
})

func water(t testing.TB) *Liquid {
	t.Helper()
	r, err := catalogue().Pure("R718", props.DefaultDatum)
	if err != nil {
		t.Fatal(err)
	}
	l, err := NewWater(r)
	if err != nil {
		t.Fatal(err)
	}
	return l
}

func brine(t testing.TB, name string, w float64) *Liquid {
	t.Helper()
	l, err := NewBrine(name, w)
	if err != nil {
		t.Fatal(err)
	}
	return l
}

// table reads a file of testdata. Its rows are text by column name.
func table(t *testing.T, name string) []map[string]string {
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

func number(t *testing.T, row map[string]string, column string) float64 {
	t.Helper()
	v, err := strconv.ParseFloat(row[column], 64)
	if err != nil {
		t.Fatal(err)
	}
	return v
}

// halfDigit returns half a unit of the last digit of a number as printed.
func halfDigit(t *testing.T, row map[string]string, column string) float64 {
	t.Helper()
	text := row[column]
	digits := 0
	for i := range text {
		if text[i] == '.' {
			digits = len(text) - i - 1
		}
	}
	return 0.5000001 * math.Pow(10, -float64(digits))
}

func TestWaterTable(t *testing.T) {
	w := water(t)
	for _, row := range table(t, "water_liquid.csv") {
		T := zeroCelsius + number(t, row, "t_c")
		s, err := w.At(T)
		if err != nil {
			t.Fatal(err)
		}
		for _, c := range []struct {
			column string
			got    float64
		}{
			{"density_kg_m3", s.Density},
			{"cp_J_kgK", s.HeatCapacity},
			{"viscosity_Pas", s.Viscosity},
			{"conductivity_W_mK", s.Conductivity},
		} {
			want := number(t, row, c.column)
			if !(math.Abs(c.got-want) <= halfDigit(t, row, c.column)) {
				t.Errorf("%s at %s °C: %.8g, want %s", c.column, row["t_c"], c.got, row[c.column])
			}
		}
	}
}

// The expansions stand for the equation of state, so they follow it to near rounding at temperatures that they were not
// made from.
func TestWaterFollowsItsEquation(t *testing.T) {
	w := water(t)
	r, err := catalogue().Pure("R718", props.DefaultDatum)
	if err != nil {
		t.Fatal(err)
	}
	zero, err := r.TemperaturePressure(273.16, WaterPressure)
	if err != nil {
		t.Fatal(err)
	}
	for i := range 200 {
		T := 273.16 + (w.max-273.16)*(float64(i)+0.37)/200
		s, err := r.TemperaturePressure(T, WaterPressure)
		if err != nil {
			t.Fatal(err)
		}
		flow, err := r.Transport(s)
		if err != nil {
			t.Fatal(err)
		}
		got, err := w.At(T)
		if err != nil {
			t.Fatal(err)
		}
		for _, c := range []struct {
			name      string
			got, want float64
		}{
			{"density", got.Density, s.Rho},
			{"heat capacity", got.HeatCapacity, s.Cp},
			{"enthalpy above the triple point", got.Enthalpy - w.Enthalpy(273.16), s.H - zero.H},
			{"viscosity", got.Viscosity, flow.Viscosity.Value},
			{"conductivity", got.Conductivity, flow.ThermalConductivity.Value},
		} {
			if !(math.Abs(c.got-c.want) <= 1e-9*math.Abs(c.want)+1e-5) { // 1e-5 J/kg is rounding of the equation's own enthalpy
				t.Errorf("%s at %g K: %.12g, equation %.12g", c.name, T, c.got, c.want)
			}
		}
	}
}

func TestBrineCheckValues(t *testing.T) {
	for _, row := range table(t, "brine_check_values.csv") {
		l := brine(t, row["fluid"], number(t, row, "mass_pct")/100)
		s, err := l.At(zeroCelsius + number(t, row, "t_c"))
		if err != nil {
			t.Fatal(err)
		}
		for _, c := range []struct {
			column string
			got    float64
		}{
			{"density_kg_m3", s.Density},
			{"cp_J_kgK", s.HeatCapacity},
			{"conductivity_W_mK", s.Conductivity},
			{"viscosity_mPas", s.Viscosity * 1e3},
		} {
			want := number(t, row, c.column)
			if !(math.Abs(c.got/want-1) <= 5.1e-6) { // six digits printed
				t.Errorf("%s of %s %s %% at %s °C: %.8g, want %s", c.column, row["fluid"], row["mass_pct"], row["t_c"], c.got, row[c.column])
			}
		}
	}
}

func TestBrineFreezing(t *testing.T) {
	for _, row := range table(t, "brine_freezing.csv") {
		w := number(t, row, "mass_pct") / 100
		l, err := NewBrine(row["fluid"], w)
		if e, ok := errors.AsType[*RangeError](err); ok && e.Quantity == MassFraction {
			if row["fluid"] == PropyleneGlycol && (w < e.Min || w > e.Max) {
				continue // the correlation's own range is narrower than the table
			}
		}
		if err != nil {
			t.Fatal(err)
		}
		got := l.FreezingPoint() - zeroCelsius
		// The table was computed with the terms in t, which the coefficient file leaves out as negligible.
		const leftOut = 0.005
		if want := number(t, row, "polynomial_freezing_c"); !(math.Abs(got-want) <= halfDigit(t, row, "polynomial_freezing_c")+leftOut) {
			t.Errorf("%s %g: freezes at %.4f °C, want %g", row["fluid"], w, got, want)
		}
		if want := number(t, row, "ashrae_table_freezing_c"); !(math.Abs(got-want) <= 3) { // what NewBrine promises
			t.Errorf("%s %g: freezes at %.2f °C, table %g", row["fluid"], w, got, want)
		}
	}
}

// At no glycol at all the polynomials return water, as their verification states.
func TestBrineWithoutGlycolIsWater(t *testing.T) {
	w, b := water(t), brine(t, EthyleneGlycol, 0)
	for _, T := range []float64{274, 283.15, 293.15, 313.15} {
		x, err := w.At(T)
		if err != nil {
			t.Fatal(err)
		}
		y, err := b.At(T)
		if err != nil {
			t.Fatal(err)
		}
		for _, c := range []struct {
			name         string
			x, y, within float64
		}{
			{"density", x.Density, y.Density, 0.002},
			{"heat capacity", x.HeatCapacity, y.HeatCapacity, 0.002},
			{"conductivity", x.Conductivity, y.Conductivity, 0.01},
			{"viscosity", x.Viscosity, y.Viscosity, 0.04},
		} {
			if !(math.Abs(c.y/c.x-1) <= c.within) {
				t.Errorf("%s at %g K: %g, water %g", c.name, T, c.y, c.x)
			}
		}
	}
}

// liquids are one of each kind.
func liquids(t testing.TB) []*Liquid {
	t.Helper()
	tabulated, err := NewTable("ethanol brine (invented)", []Row{
		{T: 258.15, Density: 972, HeatCapacity: 4180, Conductivity: 0.40, Viscosity: 9.1e-3},
		{T: 263.15, Density: 970, HeatCapacity: 4210, Conductivity: 0.41, Viscosity: 7.0e-3},
		{T: 273.15, Density: 965, HeatCapacity: 4260, Conductivity: 0.42, Viscosity: 4.5e-3},
		{T: 293.15, Density: 956, HeatCapacity: 4240, Conductivity: 0.45, Viscosity: 2.2e-3},
	}, 256)
	if err != nil {
		t.Fatal(err)
	}
	return []*Liquid{water(t), brine(t, EthyleneGlycol, 0.3), brine(t, PropyleneGlycol, 0.25), tabulated}
}

func TestEnthalpyIsIntegralOfHeatCapacity(t *testing.T) {
	for _, l := range liquids(t) {
		low, high := l.Range()
		if h := l.Enthalpy(zeroCelsius); !(math.Abs(h) <= 1e-6) {
			t.Errorf("%s: enthalpy %g J/kg at 0 °C", l.Name(), h)
		}
		for i := -20; i <= 120; i++ {
			T := low + (high-low)*(float64(i)+0.41)/100 // beyond both ends too
			const d = 1e-3
			slope := (l.Enthalpy(T+d) - l.Enthalpy(T-d)) / (2 * d)
			if want := l.heatCapacityAt(T); !(math.Abs(slope/want-1) <= 1e-6) {
				t.Errorf("%s at %g K: dh/dT %g, heat capacity %g", l.Name(), T, slope, want)
			}
			if back := l.Temperature(l.Enthalpy(T)); !(math.Abs(back-T) <= 1e-9) {
				t.Errorf("%s: %g K comes back as %g", l.Name(), T, back)
			}
		}
	}
}

// For a constant heat capacity the mean is the logarithmic one.
func TestEntropyMean(t *testing.T) {
	l, err := NewTable("constant", []Row{{T: 270, Density: 1000, HeatCapacity: 4000}, {T: 370, Density: 1000, HeatCapacity: 4000}}, math.NaN())
	if err != nil {
		t.Fatal(err)
	}
	for _, tt := range [][2]float64{{280, 360}, {300, 301}, {350, 280}} {
		want := (tt[1] - tt[0]) / math.Log(tt[1]/tt[0])
		if got := l.EntropyMean(tt[0], tt[1]); !(math.Abs(got/want-1) <= 1e-11) {
			t.Errorf("mean of %v: %.13g, want %.12g", tt, got, want)
		}
	}
	if got := l.EntropyMean(300, 300); got != 300 {
		t.Errorf("mean without change: %g", got)
	}
	if s, err := l.At(300); err != nil || !math.IsNaN(s.Viscosity) || !math.IsNaN(s.Conductivity) {
		t.Errorf("unknown transport properties: %+v, %v", s, err)
	}
}

func TestTableKeepsItsRows(t *testing.T) {
	rows := []Row{{T: 270, Density: 990, HeatCapacity: 3900}, {T: 280, Density: 985, HeatCapacity: 3950}, {T: 310, Density: 985, HeatCapacity: 3950}, {T: 320, Density: 970, HeatCapacity: 4100}}
	l, err := NewTable("flat in the middle", rows, math.NaN())
	if err != nil {
		t.Fatal(err)
	}
	for _, r := range rows {
		if s, err := l.At(r.T); err != nil || !(math.Abs(s.Density-r.Density) <= 1e-9) || !(math.Abs(s.HeatCapacity-r.HeatCapacity) <= 1e-9) {
			t.Errorf("row at %g K: %+v, %v", r.T, s, err)
		}
	}
	for T := 270.0; T < 320; T += 0.5 {
		if l.Density(T+0.5) > l.Density(T)+1e-9 {
			t.Errorf("density rises after %g K between falling rows", T)
		}
	}
}

func TestBrineMassFraction(t *testing.T) {
	// heat_exchangers handbook practice: w = phi rho_g/(phi rho_g + (1 - phi) rho_w) by hand.
	got, err := BrineMassFraction(EthyleneGlycol, 0.3)
	if want := 0.3 * 1113 / (0.3*1113 + 0.7*998.2); err != nil || !(math.Abs(got-want) <= 1e-12) {
		t.Errorf("30 volume per cent: %g, %v; want %g", got, err, want)
	}
}

func TestLiquidRefusals(t *testing.T) {
	_, unknown := NewBrine("antifreeze", 0.3)
	if e, ok := errors.AsType[*FluidError](unknown); !ok || len(e.Allowed) != 2 {
		t.Errorf("unknown brine: %v", unknown)
	}
	for _, w := range []float64{-0.1, 0.61, math.NaN()} {
		_, err := NewBrine(EthyleneGlycol, w)
		if e, ok := errors.AsType[*RangeError](err); !ok || e.Quantity != MassFraction {
			t.Errorf("mass fraction %g: %v", w, err)
		}
	}
	if _, err := BrineMassFraction(PropyleneGlycol, 1.2); err == nil {
		t.Error("a volume fraction of 1.2 passes")
	}
	l := brine(t, EthyleneGlycol, 0.3)
	for _, T := range []float64{l.FreezingPoint() - 0.01, 314, math.NaN()} {
		_, err := l.At(T)
		if e, ok := errors.AsType[*RangeError](err); !ok || e.Quantity != Temperature || e.Error() == "" {
			t.Errorf("%g K: %v", T, err)
		}
	}
	for i, rows := range [][]Row{
		nil,
		{{T: 280, Density: 1000, HeatCapacity: 4000}},
		{{T: 280, Density: 1000, HeatCapacity: 4000}, {T: 280, Density: 1000, HeatCapacity: 4000}},
		{{T: 280, Density: 1000, HeatCapacity: 4000}, {T: 290, Density: -1, HeatCapacity: 4000}},
		{{T: 280, Density: 1000, HeatCapacity: 4000}, {T: 290, Density: 1000, HeatCapacity: math.NaN()}},
		{{T: 280, Density: 1000, HeatCapacity: 4000, Viscosity: 1e-3}, {T: 290, Density: 1000, HeatCapacity: 4000}},
	} {
		_, err := NewTable("bad", rows, math.NaN())
		if e, ok := errors.AsType[*TableError](err); !ok || e.Error() == "" {
			t.Errorf("table %d: %v", i, err)
		}
	}
	good := []Row{{T: 280, Density: 1000, HeatCapacity: 4000}, {T: 290, Density: 1000, HeatCapacity: 4000}}
	if _, err := NewTable("frozen", good, 290); err == nil {
		t.Error("a table that ends at the freezing point passes")
	}
}

func BenchmarkLiquid(b *testing.B) {
	for _, l := range []*Liquid{water(b), brine(b, EthyleneGlycol, 0.3)} {
		h := l.Enthalpy(281)
		b.Run(l.Name()+"/temperature", func(b *testing.B) {
			for b.Loop() {
				_ = l.Temperature(h)
			}
		})
		b.Run(l.Name()+"/enthalpy", func(b *testing.B) {
			for b.Loop() {
				_ = l.Enthalpy(281)
			}
		})
	}
}
