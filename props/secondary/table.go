package secondary

import "math"

// Row is one line of a table of a liquid.
type Row struct {
	T            float64 // K
	Density      float64 // kg/m3
	HeatCapacity float64 // J/(kg K)
	Conductivity float64 // W/(m K); 0 when not known
	Viscosity    float64 // Pa s; 0 when not known
}

// NewTable returns a liquid whose properties are interpolated in rows of ascending temperature, at least two, by cubics
// that keep the data monotone (F. N. Fritsch and J. Butland, SIAM J. Sci. Stat. Comput. 5 (1984)); viscosity by its logarithm. The freezing point
// in K may be NaN for not known. Without conductivities or viscosities these are NaN in the answers. It returns a
// [*TableError] for rows that cannot be used.
func NewTable(name string, rows []Row, freezing float64) (*Liquid, error) {
	if err := checkRows(rows, freezing); err != nil {
		return nil, err
	}
	n := len(rows)
	l := &Liquid{
		name: name, massFraction: math.NaN(), min: rows[0].T, max: rows[n-1].T, freezing: freezing,
		limits: [2]string{"first row of the table", "last row of the table"},
	}
	if freezing > l.min {
		l.min, l.limits[0] = freezing, "freezing point"
	}
	knots := make([]float64, n)
	for i, r := range rows {
		knots[i] = r.T
	}
	for _, e := range []struct {
		into *piecewise
		of   func(*Row) float64
	}{
		{&l.density, func(r *Row) float64 { return r.Density }},
		{&l.heatCapacity, func(r *Row) float64 { return r.HeatCapacity }},
		{&l.conductivity, func(r *Row) float64 { return orUnknown(r.Conductivity) }},
		{&l.lnViscosity, func(r *Row) float64 { return math.Log(orUnknown(r.Viscosity)) }},
	} {
		values := make([]float64, n)
		for i := range rows {
			values[i] = e.of(&rows[i])
		}
		*e.into = monotoneCubics(knots, values)
	}
	return l.finish(), nil
}

func orUnknown(v float64) float64 {
	if v == 0 {
		return math.NaN()
	}
	return v
}

func checkRows(rows []Row, freezing float64) error {
	if len(rows) < 2 {
		return &TableError{-1, "two rows at least are needed"}
	}
	for i := range rows {
		r := &rows[i]
		positive := [...]struct {
			v        float64
			name     string
			optional bool
		}{
			{r.T, "temperature", false},
			{r.Density, "density", false},
			{r.HeatCapacity, "heat capacity", false},
			{r.Conductivity, "conductivity", true},
			{r.Viscosity, "viscosity", true},
		}
		for _, p := range positive {
			if !(p.v > 0 && !math.IsInf(p.v, 1)) && !(p.optional && p.v == 0) {
				return &TableError{i, p.name + " must be positive and finite"}
			}
		}
		if i > 0 && !(r.T > rows[i-1].T) {
			return &TableError{i, "temperatures must ascend"}
		}
		if (r.Conductivity == 0) != (rows[0].Conductivity == 0) || (r.Viscosity == 0) != (rows[0].Viscosity == 0) {
			return &TableError{i, "conductivity and viscosity must be given in every row or in none"}
		}
	}
	if last := rows[len(rows)-1].T; freezing >= last {
		return &TableError{-1, "the freezing point lies above the last row"}
	}
	return nil
}

// monotoneCubics interpolates values at knots by cubics between neighbours.
func monotoneCubics(knots, values []float64) piecewise {
	n := len(knots)
	secant := func(i int) float64 { return (values[i+1] - values[i]) / (knots[i+1] - knots[i]) }
	slope := make([]float64, n)
	slope[0], slope[n-1] = secant(0), secant(n-2)
	for i := 1; i < n-1; i++ {
		left, right := secant(i-1), secant(i)
		if left*right > 0 {
			h0, h1 := knots[i]-knots[i-1], knots[i+1]-knots[i]
			share := (h0 + 2*h1) / (3 * (h0 + h1))
			slope[i] = left * right / (share*right + (1-share)*left)
		}
	}
	p := piecewise{knots: knots}
	for i := range n - 1 {
		h := knots[i+1] - knots[i]
		c, _ := chebyshev(knots[i], knots[i+1], 4, func(x float64) (float64, error) { // exact: a cubic
			u := (x - knots[i]) / h
			v := 1 - u
			return values[i]*v*v*(1+2*u) + values[i+1]*u*u*(1+2*v) + h*u*v*(slope[i]*v-slope[i+1]*u), nil
		})
		p.pieces = append(p.pieces, c)
	}
	return p
}
