package transport

import (
	"encoding/csv"
	"os"
	"slices"
	"strconv"
	"sync"
	"testing"

	"dewmark/props/data"
	"dewmark/props/helmholtz"
	"dewmark/props/saturation"
)

// refrigerant is a model with what tests need besides.
type refrigerant struct {
	*Model
	record data.Record
	curve  *saturation.Curve
}

// refrigerants makes the models and saturation curves of all refrigerants once.
var refrigerants = sync.OnceValue(func() map[string]refrigerant {
	records, err := data.Load()
	if err != nil {
		panic(err)
	}
	// The reference fluids of corresponding states come first.
	slices.SortStableFunc(records, func(a, b data.Record) int { return order(a.ID) - order(b.ID) })
	all := map[string]refrigerant{}
	var references []*Model
	for _, r := range records {
		f, err := fluidOf(r)
		if err != nil {
			panic(err)
		}
		m, err := New(f, r.Transport, references...)
		if err != nil {
			panic(err)
		}
		if order(r.ID) == 0 {
			references = append(references, m)
		}
		curve, err := saturation.New(f.Equation, saturation.Options{
			TMin:      r.Validity.TemperatureMin,
			TCritical: r.Critical.Temperature, RhoCritical: r.Critical.Density, Acentric: r.Acentric,
		})
		if err != nil {
			panic(err)
		}
		all[r.ID] = refrigerant{m, r, curve}
	}
	return all
})

func order(id string) int {
	if id == "R134a" || id == "R290" {
		return 0
	}
	return 1
}

func fluidOf(r data.Record) (Fluid, error) {
	eq, err := helmholtz.New(helmholtz.Coefficients{
		GasConstant: r.GasConstant, ReducingTemperature: r.Reducing.Temperature,
		ReducingDensity: r.Reducing.Density, Ideal: r.Ideal, Residual: r.Residual,
	})
	return Fluid{
		Designation: r.ID, MolarMass: r.MolarMass, Equation: eq,
		Critical:       Critical{r.Critical.Temperature, r.Critical.Pressure, r.Critical.Density},
		TemperatureMin: r.Validity.TemperatureMin, TemperatureMax: r.Validity.TemperatureMax,
		PressureMax: r.Validity.PressureMax, DensityMax: r.Validity.DensityMax,
	}, err
}

// names returns the designations in a fixed order.
func names() []string {
	var out []string
	for n := range refrigerants() {
		out = append(out, n)
	}
	slices.Sort(out)
	return out
}

// density returns the density in mol/m3 at T in K and p in Pa by bisection, on the vapour side where vapour is set.
func (r *refrigerant) density(T, p float64, vapour bool) float64 {
	var iso helmholtz.Isotherm
	iso.Set(r.fluid.Equation, T)
	lo, hi := 0.0, 1.2*r.record.Validity.DensityMax
	if T < r.curve.TCritical {
		if _, liquid, gas := r.curve.At(T); vapour {
			hi = gas
		} else {
			lo = liquid
		}
	}
	for range 100 {
		rho := (lo + hi) / 2
		if rho*r.fluid.Equation.R*T*(1+iso.Residual(rho).D) > p {
			hi = rho
		} else {
			lo = rho
		}
	}
	return (lo + hi) / 2
}

// grid calls visit at states over the whole validity of the equation of state: gas, liquid to the highest pressure and
// saturated phases below the critical temperature, everything to the highest pressure above. The lines of temperature are
// n, the densities of each phase are m.
func (r *refrigerant) grid(n, m int, visit func(T, rho float64)) {
	v := r.record.Validity
	for i := range n + 1 {
		T := v.TemperatureMin + (v.TemperatureMax-v.TemperatureMin)*float64(i)/float64(n)
		low := 0.0
		if T < r.curve.TCritical {
			_, liquid, gas := r.curve.At(T)
			for j := range m + 1 {
				visit(T, gas*float64(j)/float64(m))
			}
			low = liquid
		}
		high := max(low, r.density(T, v.PressureMax, false))
		for j := range m + 1 {
			visit(T, low+(high-low)*float64(j)/float64(m))
		}
	}
}

// byRank returns a property of the record with that rank at T in K and rho in kg/m3, in SI units; background leaves the
// critical enhancement out.
func (r *refrigerant) byRank(t *testing.T, property string, rank int, T, rho float64, background bool) float64 {
	t.Helper()
	p, ok := newPoint(r.State(T, rho/r.fluid.MolarMass), r.fluid.MolarMass)
	if !ok {
		t.Fatalf("%s: no point at %g K, %g kg/m3", r.fluid.Designation, T, rho)
	}
	switch property {
	case "viscosity":
		for i := range r.viscosity {
			k := &r.viscosity[i]
			if k.Rank != rank {
				continue
			}
			if w, ok := k.model.(*waterViscosity); ok && background {
				return w.background(T, rho)
			}
			if v, ok := r.viscosityOf(k, &p); ok {
				return v.Value
			}
		}
	case "thermal_conductivity":
		for i := range r.conductivity {
			k := &r.conductivity[i]
			if k.Rank != rank {
				continue
			}
			p.conformTo(&r.fluid, k.conforms)
			if background {
				if v, ok := k.model.background(p); ok {
					return v
				}
			} else if eta, err := r.viscosityAt(&p); err == nil {
				if v, ok := r.conductivityOf(k, &p, eta.Value); ok {
					return v.Value
				}
			}
		}
	case "surface_tension":
		for i := range r.tension {
			if r.tension[i].Rank == rank {
				return r.tension[i].model.tension(T)
			}
		}
	}
	t.Fatalf("%s: no %s of rank %d at %g K, %g kg/m3", r.fluid.Designation, property, rank, T, rho)
	return 0
}

// table reads a file of testdata as one map a row.
func table(t *testing.T, name string) []map[string]string {
	t.Helper()
	f, err := os.Open("../../testdata/" + name)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	rows, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	var out []map[string]string
	for _, row := range rows[1:] {
		m := map[string]string{}
		for i, column := range rows[0] {
			m[column] = row[i]
		}
		out = append(out, m)
	}
	return out
}

func number(t *testing.T, s string) float64 {
	t.Helper()
	v, err := strconv.ParseFloat(s, 64)
	if err != nil {
		t.Fatal(err)
	}
	return v
}
