// The command psychrometrics prints states of moist air, one line of CSV each, for compare.cjs to hold against a library of
// its own kind. See run.
package main

import (
	"bufio"
	"fmt"
	"os"

	"dewmark/props/secondary"
)

func main() {
	if err := run(); err != nil {
		fmt.Fprintln(os.Stderr, "psychrometrics:", err)
		os.Exit(1)
	}
}

// run goes over heights, temperatures and humidities that machines meet, and off the grid of round numbers.
func run() error {
	out := bufio.NewWriter(os.Stdout)
	fmt.Fprintln(out, "pressure_Pa,temperature_C,relative_humidity,saturation_pressure_Pa,humidity_ratio,enthalpy_J_kg,volume_m3_kg,density_kg_m3,dew_point_C,wet_bulb_C")
	for _, p := range []float64{101325, 95000, 70108.5} {
		for t := -38.7; t <= 60; t += 3.3 {
			for _, phi := range []float64{0.05, 0.2, 0.41, 0.6, 0.87, 1} {
				T := t + 273.15
				a, err := secondary.AirByRelativeHumidity(p, T, phi)
				if err != nil {
					return err
				}
				ps, err := secondary.VapourPressure(T)
				if err != nil {
					return err
				}
				fmt.Fprintf(out, "%.17g,%.17g,%.17g,%.17g,%.17g,%.17g,%.17g,%.17g,%.17g,%.17g\n",
					p, t, phi, ps, a.W, a.Enthalpy(), a.Volume(), a.Density(), a.DewPoint()-273.15, a.WetBulb()-273.15)
			}
		}
	}
	return out.Flush()
}
