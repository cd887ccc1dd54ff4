package cycle_test

import (
	"math"
	"strings"
	"testing"

	"dewmark/props"
	"dewmark/service/cycle"
)

// worked is one case of testdata/worked_cycles.csv: cycles computed by an independent program from the same equations
// of state, IIR datum, printed to six or seven digits.
type worked struct {
	name   string
	inputs map[string]string
	states map[string]map[string]string // by the first word of their name
	result map[string]string
}

func workedCases(t testing.TB) map[string]*worked {
	cases := map[string]*worked{}
	for _, row := range table(t, "worked_cycles.csv") {
		c := cases[row["case"]]
		if c == nil {
			c = &worked{row["case"], map[string]string{}, map[string]map[string]string{}, map[string]string{}}
			cases[c.name] = c
		}
		switch row["row"] {
		case "input":
			c.inputs[row["name"]] = row["value"]
		case "state":
			c.states[row["name"]] = row
		case "result":
			c.result[row["name"]] = row["value"]
		default:
			t.Fatalf("row of unknown kind %q", row["row"])
		}
	}
	return cases
}

// celsius returns an input in °C as K.
func (w *worked) celsius(t testing.TB, name string) *float64 {
	return new(w.value(t, name) + zeroCelsius)
}

func (w *worked) value(t testing.TB, name string) float64 {
	t.Helper()
	return number(t, w.inputs[name])
}

// tolerance of the worked cases, relative; the table states it.
const workedTolerance = 1e-5

// checkState compares a state with a row, to the tolerance of the table or half a unit of the last digit printed.
func (w *worked) checkState(t *testing.T, row string, s props.State) {
	t.Helper()
	cells := w.states[row]
	if cells == nil {
		t.Fatalf("%s has no state %q", w.name, row)
	}
	for _, k := range []struct {
		column string
		got    float64
		unit   float64 // SI value of one unit of the column
	}{
		{"t_c", s.T - zeroCelsius, 1},
		{"p_bar", s.P, 1e5},
		{"h_kJ_kg", s.H, 1e3},
		{"s_kJ_kgK", s.S, 1e3},
		{"rho_kg_m3", s.Rho, 1},
		{"quality", s.Quality, 1},
	} {
		if cells[k.column] == "" {
			continue
		}
		want := number(t, cells[k.column])
		if got := k.got / k.unit; !near(got, want, workedTolerance, halfDigit(cells[k.column])) {
			t.Errorf("%s, %s: %s is %.9g, want %s", w.name, row, k.column, got, cells[k.column])
		}
	}
}

// checkStates compares every state of the case; label says where each is in the solution.
func (w *worked) checkStates(t *testing.T, s *cycle.Solution, label map[string]string) {
	t.Helper()
	for row := range w.states {
		if label[row] == "" {
			t.Errorf("%s: state %s is not compared", w.name, row)
			continue
		}
		w.checkState(t, row, at(t, s, label[row]))
	}
}

// check compares results in J/kg or without unit with the table's kJ/kg.
func (w *worked) check(t *testing.T, got map[string]float64) {
	t.Helper()
	for name, v := range got {
		cell, ok := w.result[name]
		if !ok {
			t.Fatalf("%s has no result %q", w.name, name)
		}
		want := number(t, cell)
		if !near(v, want, workedTolerance, 1e-6) { // residuals are printed as such, and are zero
			t.Errorf("%s: %s is %.9g, want %s", w.name, name, v, cell)
		}
	}
	for name := range w.result {
		if _, ok := got[name]; !ok {
			t.Errorf("%s: result %s is not compared", w.name, name)
		}
	}
}

// halfDigit returns half a unit of the last digit of a number printed without exponent.
func halfDigit(cell string) float64 {
	_, decimals, _ := strings.Cut(cell, ".")
	return 0.5 * math.Pow(10, -float64(len(decimals))) * (1 + 1e-9)
}

func TestWorkedSingleStage(t *testing.T) {
	for name, w := range workedCases(t) {
		if !strings.ContainsAny(name[:1], "ABCD") {
			continue
		}
		s := solve(t, &cycle.Request{
			Refrigerant:  refrigerant(t, w.inputs["refrigerant"], props.IIR),
			Layout:       cycle.SingleStage,
			Purpose:      cycle.Heating,
			Evaporation:  cycle.Evaporation{Temperature: w.celsius(t, "t_evap"), Superheat: new(w.value(t, "superheat"))},
			Condensation: cycle.Condensation{Temperature: w.celsius(t, "t_cond"), Subcooling: new(w.value(t, "subcooling"))},
			Compressor: cycle.Compressor{
				IsentropicEfficiency: new(w.value(t, "eta_is")), HeatLossFraction: new(w.value(t, "heat_loss_fraction")),
			},
			SourceTemperature: w.celsius(t, "T_source"), SinkTemperature: w.celsius(t, "T_sink"), AmbientTemperature: w.celsius(t, "T0"),
		})
		for row := range w.states {
			label, _, _ := strings.Cut(row, " ")
			w.checkState(t, row, at(t, s, label))
		}
		perKilogram := func(part string) float64 {
			return component(t, s, part).ExergyDestruction / s.Performance.MassFlow / 1e3
		}
		p := s.Performance
		w.check(t, map[string]float64{
			"w":                             p.CompressorPower / p.MassFlow / 1e3,
			"q_evap":                        p.CoolingCapacity / p.MassFlow / 1e3,
			"q_cond":                        p.HeatingCapacity / p.MassFlow / 1e3,
			"COP_cooling":                   p.COPCooling,
			"COP_heating":                   p.COPHeating,
			"volumetric_cooling_capacity":   p.VolumetricCoolingCapacity / 1e3,
			"I_compressor":                  perKilogram("compressor"),
			"I_condenser":                   perKilogram("condenser"),
			"I_valve":                       perKilogram("expansion_valve"),
			"I_evaporator":                  perKilogram("evaporator"),
			"COP_Carnot_heating":            p.CarnotCOPHeating,
			"second_law_efficiency_heating": p.SecondLawEfficiency,
			"exergy_balance_residual":       s.Closure.ExergyResidualFraction,
		})
	}
}
