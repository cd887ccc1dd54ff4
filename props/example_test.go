package props_test

import (
	"errors"
	"fmt"
	"log"

	"dewmark/props"
)

// A catalogue knows refrigerants by designation, by trade prefix and by common name.
func ExampleCatalogue() {
	catalogue, err := props.NewCatalogue()
	if err != nil {
		log.Fatal(err)
	}
	for _, name := range []string{"R290", "HFC-134a", "carbon dioxide"} {
		r, err := catalogue.Pure(name, props.DefaultDatum)
		if err != nil {
			log.Fatal(err)
		}
		c := r.Critical()
		fmt.Printf("%s: critical point %.2f K, %.4f MPa; %.0f K to %.0f K\n",
			r.Designation(), c.T, c.P/1e6, r.Limits().TemperatureMin, r.Limits().TemperatureMax)
	}
	_, err = catalogue.Pure("R32b", props.DefaultDatum)
	if e, ok := errors.AsType[*props.UnknownRefrigerantError](err); ok {
		fmt.Println("near:", e.Suggestions[0])
	}
	// Output:
	// R290: critical point 369.89 K, 4.2512 MPa; 86 K to 650 K
	// R134a: critical point 374.21 K, 4.0593 MPa; 170 K to 455 K
	// R744: critical point 304.13 K, 7.3773 MPa; 217 K to 2000 K
	// near: R32
}

// The state of a suction gas from what two gauges say.
func ExampleRefrigerant_TemperaturePressure() {
	catalogue, err := props.NewCatalogue()
	if err != nil {
		log.Fatal(err)
	}
	propane, err := catalogue.Pure("R290", props.IIR)
	if err != nil {
		log.Fatal(err)
	}
	s, err := propane.TemperaturePressure(278.15, 400e3) // 5 °C, 4 bar absolute
	if err != nil {
		log.Fatal(err)
	}
	Tsat, err := propane.SaturationTemperature(s.P)
	if err != nil {
		log.Fatal(err)
	}
	fmt.Printf("%s: %.3f kg/m3, h = %.2f kJ/kg, %.1f K superheat\n", s.Phase, s.Rho, s.H/1e3, s.T-Tsat)

	_, err = propane.TemperaturePressure(278.15, 4000e6)
	if e, ok := errors.AsType[*props.RangeError](err); ok {
		fmt.Printf("%s up to %.0f MPa\n", e.Property, e.Max/1e6)
	}
	// Output:
	// vapour: 8.337 kg/m3, h = 586.57 kJ/kg, 10.5 K superheat
	// pressure up to 1000 MPa
}

// A pair may belong to more than one state: saturated vapour of one enthalpy occurs twice, because the enthalpy of
// saturated vapour has a maximum.
func ExampleRefrigerant_States() {
	catalogue, err := props.NewCatalogue()
	if err != nil {
		log.Fatal(err)
	}
	r, err := catalogue.Pure("R134a", props.IIR)
	if err != nil {
		log.Fatal(err)
	}
	h, x := props.Given{Property: props.Enthalpy, Value: 425e3}, props.Given{Property: props.Quality, Value: 1}
	states, err := r.States(h, x)
	if err != nil {
		log.Fatal(err)
	}
	for _, s := range states {
		fmt.Printf("%.2f °C, %.1f kPa\n", s.T-273.15, s.P/1e3)
	}
	_, err = r.State(h, x, props.AnyPhase)
	if e, ok := errors.AsType[*props.AmbiguousError](err); ok {
		fmt.Println(len(e.Solutions), "solutions, none picked")
	}
	// Output:
	// 54.53 °C, 1474.4 kPa
	// 90.61 °C, 3285.1 kPa
	// 2 solutions, none picked
}

// Saturated liquid and vapour at one temperature, and the heat between them.
func ExampleRefrigerant_DewPoint() {
	catalogue, err := props.NewCatalogue()
	if err != nil {
		log.Fatal(err)
	}
	ammonia, err := catalogue.Pure("R717", props.IIR)
	if err != nil {
		log.Fatal(err)
	}
	liquid, err := ammonia.BubblePoint(263.15)
	if err != nil {
		log.Fatal(err)
	}
	vapour, err := ammonia.DewPoint(263.15)
	if err != nil {
		log.Fatal(err)
	}
	fmt.Printf("%.2f kPa, %.2f and %.4f kg/m3, %.1f kJ/kg\n", vapour.P/1e3, liquid.Rho, vapour.Rho, (vapour.H-liquid.H)/1e3)
	// Output:
	// 290.64 kPa, 652.01 and 2.3907 kg/m3, 1296.2 kJ/kg
}

// Enthalpies count from a datum, differences do not.
func ExampleDatum() {
	catalogue, err := props.NewCatalogue()
	if err != nil {
		log.Fatal(err)
	}
	for _, datum := range []props.Datum{props.IIR, props.ASHRAE, props.NBP} {
		r, err := catalogue.Pure("R134a", datum)
		if err != nil {
			log.Fatal(err)
		}
		liquid, err := r.BubblePoint(313.15)
		if err != nil {
			log.Fatal(err)
		}
		vapour, err := r.DewPoint(313.15)
		if err != nil {
			log.Fatal(err)
		}
		fmt.Printf("%-6s h' = %6.2f, h\" = %6.2f, difference %.2f kJ/kg\n", r.Datum(), liquid.H/1e3, vapour.H/1e3, (vapour.H-liquid.H)/1e3)
	}
	_, err = catalogue.Pure("R718", props.ASHRAE)
	if e, ok := errors.AsType[*props.DatumError](err); ok {
		fmt.Printf("water allows %v\n", e.Allowed)
	}
	// Output:
	// IIR    h' = 256.41, h" = 419.43, difference 163.02 kJ/kg
	// ASHRAE h' = 108.27, h" = 271.28, difference 163.02 kJ/kg
	// NBP    h' =  90.60, h" = 253.62, difference 163.02 kJ/kg
	// water allows [NBP triple_point]
}
