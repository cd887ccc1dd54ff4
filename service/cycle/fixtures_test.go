package cycle_test

import (
	"encoding/csv"
	"math"
	"os"
	"strconv"
	"sync"
	"testing"

	"dewmark/props"
	"dewmark/service/cycle"
)

var catalogue = sync.OnceValues(props.NewCatalogue)

// refrigerant returns a refrigerant in the given datum.
func refrigerant(t testing.TB, name string, datum props.Datum) *props.Pure {
	t.Helper()
	c, err := catalogue()
	if err != nil {
		t.Fatal(err)
	}
	r, err := c.Pure(name, datum)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// table reads a CSV file of testdata as one map from column to cell for each row.
func table(t testing.TB, file string) []map[string]string {
	t.Helper()
	f, err := os.Open("../../testdata/" + file)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	rows, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	cells := make([]map[string]string, len(rows)-1)
	for i, row := range rows[1:] {
		cells[i] = map[string]string{}
		for j, column := range rows[0] {
			cells[i][column] = row[j]
		}
	}
	return cells
}

func number(t testing.TB, cell string) float64 {
	t.Helper()
	v, err := strconv.ParseFloat(cell, 64)
	if err != nil {
		t.Fatal(err)
	}
	return v
}

const zeroCelsius = 273.15

func at(t testing.TB, s *cycle.Solution, label string) props.State {
	t.Helper()
	for _, x := range s.States {
		if x.Label == label {
			return x.State
		}
	}
	t.Fatalf("no state %s", label)
	return props.State{}
}

func component(t testing.TB, s *cycle.Solution, name string) cycle.Component {
	t.Helper()
	for _, k := range s.Components {
		if k.Name == name {
			return k
		}
	}
	t.Fatalf("no component %s", name)
	return cycle.Component{}
}

// near reports whether got is want within a relative tolerance and an absolute one.
func near(got, want, relative, absolute float64) bool {
	return math.Abs(got-want) <= relative*math.Abs(want)+absolute
}

// heatPump is a complete request that raises no caution: R290, -7 °C to 40 °C.
func heatPump(t testing.TB) *cycle.Request {
	return &cycle.Request{
		Refrigerant:        refrigerant(t, "R290", props.IIR),
		Layout:             cycle.SingleStage,
		Purpose:            cycle.Heating,
		Evaporation:        cycle.Evaporation{Temperature: new(266.15), Superheat: new(5.0)},
		Condensation:       cycle.Condensation{Temperature: new(313.15), Subcooling: new(3.0)},
		Compressor:         cycle.Compressor{IsentropicEfficiency: new(0.7), VolumetricEfficiency: new(0.92), HeatLossFraction: new(0.0)},
		Size:               &cycle.Size{Heating: new(8000.0)},
		SourceTemperature:  new(273.15),
		SinkTemperature:    new(308.15),
		AmbientTemperature: new(273.15),
	}
}

func solve(t testing.TB, r *cycle.Request) *cycle.Solution {
	t.Helper()
	s, err := cycle.Solve(t.Context(), r)
	if err != nil {
		t.Fatal(err)
	}
	return s
}
