package transport_test

import (
	"encoding/csv"
	"fmt"
	"log"
	"math"
	"os"
	"strconv"
	"testing"

	"dewmark/props"
)

// Liquid propane at 25 °C.
func Example() {
	catalogue, err := props.NewCatalogue()
	if err != nil {
		log.Fatal(err)
	}
	propane, err := catalogue.Pure("R290", props.DefaultDatum)
	if err != nil {
		log.Fatal(err)
	}
	liquid, err := propane.BubblePoint(298.15)
	if err != nil {
		log.Fatal(err)
	}
	t, err := propane.Transport(liquid)
	if err != nil {
		log.Fatal(err)
	}
	fmt.Printf("viscosity %.1f uPa s ± %.0f %%\n", t.Viscosity.Value*1e6, 100*t.Viscosity.Uncertainty)
	fmt.Printf("conductivity %.1f mW/(m K) ± %.1f %%\n", t.ThermalConductivity.Value*1e3, 100*t.ThermalConductivity.Uncertainty)
	fmt.Printf("surface tension %.2f mN/m ± %.0f %%\n", t.SurfaceTension.Value*1e3, 100*t.SurfaceTension.Uncertainty)
	fmt.Println(t.Viscosity.Record.Source)
	// Output:
	// viscosity 97.2 uPa s ± 2 %
	// conductivity 93.7 mW/(m K) ± 2.5 %
	// surface tension 7.02 mN/m ± 2 %
	// Vogel, Herrmann, J. Phys. Chem. Ref. Data 45 (2016) 043103
}

// Saturation at 25 °C (R744: 0 °C) through the property core, against an independent evaluation of the same records.
func TestSaturationTable(t *testing.T) {
	catalogue, err := props.NewCatalogue()
	if err != nil {
		t.Fatal(err)
	}
	f, err := os.Open("../../testdata/transport_saturation.csv")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	rows, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	for i, row := range rows[1:] {
		number := func(column int) (v, rounding float64) {
			v, err := strconv.ParseFloat(row[column], 64)
			if err != nil {
				t.Fatal(err)
			}
			digits := 0
			for j, c := range row[column] {
				if c == '.' {
					digits = len(row[column]) - j - 1
				}
			}
			return v, 0.5 * math.Pow(10, -float64(digits))
		}
		r, err := catalogue.Pure(row[0], props.DefaultDatum)
		if err != nil {
			t.Fatal(err)
		}
		T, _ := number(1)
		tolerance, _ := number(7)
		liquid, err := r.BubblePoint(T)
		if err != nil {
			t.Fatal(err)
		}
		vapour, err := r.DewPoint(T)
		if err != nil {
			t.Fatal(err)
		}
		l, err := r.Transport(liquid)
		if err != nil {
			t.Fatal(err)
		}
		v, err := r.Transport(vapour)
		if err != nil {
			t.Fatal(err)
		}
		for column, got := range map[int]float64{
			2: l.Viscosity.Value * 1e6, 3: v.Viscosity.Value * 1e6,
			4: l.ThermalConductivity.Value * 1e3, 5: v.ThermalConductivity.Value * 1e3, 6: l.SurfaceTension.Value * 1e3,
		} {
			if want, rounding := number(column); !(math.Abs(got-want) <= rounding+tolerance*want) {
				t.Errorf("row %d: %s %s = %.5g, want %g", i+2, row[0], rows[0][column], got, want)
			}
		}
	}
}
