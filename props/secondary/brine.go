package secondary

import (
	"math"
	"slices"
	"sync"

	"dewmark/props/data"
)

// The brines.
const (
	EthyleneGlycol  = "ethylene_glycol"
	PropyleneGlycol = "propylene_glycol"
)

// brines decodes the embedded coefficients once. They are covered by a test, so that failure can only mean a damaged file.
var brines = sync.OnceValue(func() []data.Brine {
	b, err := data.LoadBrines()
	if err != nil {
		panic("secondary: " + err.Error())
	}
	return b.Brines
})

// Brines returns the names of the brines.
func Brines() []string {
	var names []string
	for i := range brines() {
		names = append(names, brines()[i].ID)
	}
	return names
}

func brineNamed(name string) (*data.Brine, error) {
	for i := range brines() {
		if b := &brines()[i]; b.ID == name {
			return b, nil
		}
	}
	return nil, &FluidError{name, Brines()}
}

// NewBrine returns the brine called name with mass fraction w of glycol, valid from its freezing point to 40 °C. It returns
// a [*FluidError] or a [*RangeError]. Inhibited commercial glycols differ by some per cent, and tables of the freezing
// point from other sources by up to 3 K.
func NewBrine(name string, w float64) (*Liquid, error) {
	b, err := brineNamed(name)
	if err != nil {
		return nil, err
	}
	v := &b.Validity
	if !(v.MassFractionMin <= w && w <= v.MassFractionMax) {
		return nil, &RangeError{name, MassFraction, w, v.MassFractionMin, v.MassFractionMax, "validity of the correlation"}
	}
	x := 100*w - b.Reference.MassPercent
	freezing := zeroCelsius + horner(b.Freezing, x)
	l := &Liquid{
		name: name, massFraction: w, min: freezing, max: v.TemperatureMax, freezing: freezing,
		limits: [2]string{"freezing point", "validity of the correlation"},
	}
	for _, e := range []struct {
		into *piecewise
		rows [][]float64
		add  float64
	}{
		{&l.density, b.Density, 0},
		{&l.heatCapacity, b.HeatCapacity, 0},
		{&l.conductivity, b.Conductivity, 0},
		{&l.lnViscosity, b.LnViscosity, math.Log(1e-3)}, // mPa s to Pa s
	} {
		inT := collapse(e.rows, x)
		inT[0] += e.add
		c, _ := chebyshev(l.min, l.max, len(inT), func(T float64) (float64, error) { // exact: a cubic
			return horner(inT, T-zeroCelsius-b.Reference.TemperatureCelsius), nil
		})
		*e.into = piecewise{knots: []float64{l.min, l.max}, pieces: [][]float64{c}}
	}
	return l.finish(), nil
}

// collapse sums a polynomial in two variables over the powers of the first.
func collapse(rows [][]float64, x float64) []float64 {
	inT := make([]float64, len(rows[0]))
	power := 1.0
	for _, row := range rows {
		for j, c := range row {
			inT[j] += c * power
		}
		power *= x
	}
	return inT
}

func horner(c []float64, x float64) float64 {
	var y float64
	for _, v := range slices.Backward(c) {
		y = y*x + v
	}
	return y
}

// waterDensity20 is the density of water at 20 °C and 101.325 kPa, kg/m3 (IAPWS-95).
const waterDensity20 = 998.2

// BrineMassFraction returns the mass fraction of a brine that was mixed at volume fraction phi of glycol at 20 °C. The
// volume lost in mixing, about 1 %, is ignored.
func BrineMassFraction(name string, phi float64) (float64, error) {
	b, err := brineNamed(name)
	if err != nil {
		return 0, err
	}
	if !(0 <= phi && phi <= 1) {
		return 0, &RangeError{name, VolumeFraction, phi, 0, 1, "a fraction"}
	}
	return phi * b.PureDensity / (phi*b.PureDensity + (1-phi)*waterDensity20), nil
}
