package api

import (
	"bytes"
	"encoding/csv"
	"fmt"
	"math"
	"strconv"

	"github.com/gin-gonic/gin"

	"dewmark/props"
)

// saturationRequest asks for the saturation curve at temperatures, at pressures or over a range of either: exactly one.
type saturationRequest struct {
	calculation
	Temperatures []float64        `json:"temperatures"`
	Pressures    []float64        `json:"pressures"`
	Range        *saturationRange `json:"range"`
	Properties   []string         `json:"properties" validate:"max=64"` // of the saturated states; default all
}

// saturationRange steps from From towards To, which belongs to it when a step meets it.
type saturationRange struct {
	Of   string   `json:"of" validate:"required,oneof=temperature pressure"`
	From *float64 `json:"from" validate:"required"`
	To   *float64 `json:"to" validate:"required"`
	Step *float64 `json:"step" validate:"required,gt=0"`
}

type saturationResponse struct {
	*job
	kinds  []kind
	failed int
	rows   []saturationRow
}

// saturationRow is one row of the table in the caller's units. Bubble and dew are both at the temperature or both at the
// pressure that was given, where those of a blend differ in the other. The numbers of the row belong to one pressure, that
// of the dew point, as evaporating and condensing temperatures do. A failed row has the given number and the problem alone.
type saturationRow struct {
	numbers     [len(rowColumns)]float64
	bubble, dew stateView
	problem     *Problem
}

// The numbers of a row.
const (
	rowTemperature = iota
	rowPressure
	rowBubbleTemperature
	rowDewTemperature
	rowGlide
	rowLatentHeat
)

var rowColumns = [...]struct {
	name string
	kind kind
}{
	rowTemperature:       {"temperature", kindTemperature},
	rowPressure:          {"pressure", kindPressure},
	rowBubbleTemperature: {"bubble_temperature", kindTemperature},
	rowDewTemperature:    {"dew_temperature", kindTemperature},
	rowGlide:             {"glide", kindTemperatureDifference},
	rowLatentHeat:        {"latent_heat", kindEnthalpy},
}

// saturation answers POST /v1/saturation.
func (a *API) saturation(c *gin.Context) (any, error) {
	var req saturationRequest
	if err := a.decode(c, &req); err != nil {
		return nil, err
	}
	points, err := req.points(a.maxPoints)
	if err != nil {
		return nil, err
	}
	j, err := a.begin(&req.calculation)
	if err != nil {
		return nil, err
	}
	shown, err := selectFields(req.Properties)
	if err != nil {
		return nil, err
	}
	if err := a.batch(c, len(points), 2); err != nil {
		return nil, err
	}
	var all account
	rows := make([]saturationRow, len(points))
	for i, p := range points {
		if i%chunkSize == 0 {
			if err := breathe(contextOf(c)); err != nil {
				return nil, err
			}
		}
		j.row(&rows[i], p, shown, &all)
		all.count(rows[i].problem, false)
	}
	a.metrics.calculated("saturation", &all)
	j.conclude(&all, shown)
	kinds := append(shown.kinds(), kindTemperature, kindPressure, kindTemperatureDifference, kindEnthalpy)
	if accepted(c) == mediaCSV {
		if err := j.announce(c, kinds); err != nil {
			return nil, err
		}
		return &saturationTable{job: j, rows: rows, shown: shown, fields: shown.columns()}, nil
	}
	return &saturationResponse{job: j, kinds: kinds, failed: all.failed(), rows: rows}, nil
}

// encode writes the response.
func (r *saturationResponse) encode(b []byte) ([]byte, error) {
	o := begin(b)
	if err := r.head(&o, r.kinds); err != nil {
		return nil, err
	}
	o.number("failed", float64(r.failed))
	o.name("rows")
	o.b = append(o.b, '[')
	for i := range r.rows {
		if i > 0 {
			o.b = append(o.b, ',')
		}
		var err error
		if o.b, err = r.rows[i].encode(o.b); err != nil {
			return nil, err
		}
	}
	o.b = append(o.b, ']')
	err := r.tail(&o)
	return o.end(), err
}

// encode adds the row as an object.
func (r *saturationRow) encode(b []byte) ([]byte, error) {
	o := begin(b)
	for i, x := range r.numbers {
		if r.problem == nil || !math.IsNaN(x) {
			o.number(rowColumns[i].name, x)
		}
	}
	if r.problem != nil {
		err := o.value("problem", r.problem)
		return o.end(), err
	}
	r.bubble.member(&o, "bubble")
	r.dew.member(&o, "dew")
	return o.end(), nil
}

// saturationPoint is where a row is wanted.
type saturationPoint struct {
	property props.Property // Temperature or Pressure
	number   float64
	pointer  string
}

// points lists the rows that are wanted, limit at most.
func (r *saturationRequest) points(limit int) ([]saturationPoint, error) {
	const rule = "exactly one of temperatures, pressures and range is required"
	var list []float64
	property, pointer, given := props.Temperature, "", 0
	if r.Temperatures != nil {
		list, pointer, given = r.Temperatures, "#/temperatures", given+1
	}
	if r.Pressures != nil {
		list, property, pointer, given = r.Pressures, props.Pressure, "#/pressures", given+1
	}
	if r.Range != nil {
		pointer, given = "#/range", given+1
	}
	switch {
	case given == 0:
		return nil, invalidItem(MemberError{Pointer: "#", Code: "missing", Detail: rule})
	case given > 1:
		return nil, invalidItem(MemberError{Pointer: pointer, Code: "surplus", Detail: rule})
	case r.Range != nil:
		return r.Range.points(limit)
	case len(list) == 0:
		return nil, invalidItem(MemberError{Pointer: pointer, Code: "too_few", Detail: "must have 1 item at least"})
	case len(list) > limit:
		return nil, tooMany(pointer, len(list), limit)
	}
	points := make([]saturationPoint, len(list))
	for i, number := range list {
		points[i] = saturationPoint{property, number, pointer + "/" + strconv.Itoa(i)}
	}
	return points, nil
}

// points lists the steps of the range.
func (r *saturationRange) points(limit int) ([]saturationPoint, error) {
	const hit = 1e-9 // of a step; rounding must not lose the last one
	steps := math.Floor((*r.To-*r.From) / *r.Step + hit)
	switch {
	case *r.To < *r.From:
		return nil, invalidItem(MemberError{Pointer: "#/range/to", Code: "out_of_range", Detail: fmt.Sprintf("must not be less than from, %g", *r.From)})
	case !(steps < float64(limit)):
		return nil, invalidItem(MemberError{Pointer: "#/range/step", Code: "too_many", Detail: fmt.Sprintf("the range has %g steps; allowed are %d rows at most", steps, limit)})
	}
	property := props.Temperature
	if r.Of == "pressure" {
		property = props.Pressure
	}
	points := make([]saturationPoint, int(steps)+1)
	for i := range points {
		points[i] = saturationPoint{property, tidy(*r.From + float64(i)**r.Step), "#/range"}
	}
	return points, nil
}

// row computes both ends of the dome at one temperature or pressure.
func (j *job) row(row *saturationRow, p saturationPoint, shown *selection, into *account) {
	g := given{member: "temperature", kind: kindTemperature, number: p.number, Given: props.Given{Property: p.property}}
	bubbleAt, dewAt, column := j.r.BubblePoint, j.r.DewPoint, rowTemperature
	if p.property == props.Pressure {
		g.member, g.kind = "pressure", kindPressure
		bubbleAt, dewAt, column = j.r.BubblePointAtPressure, j.r.DewPointAtPressure, rowPressure
	}
	g.Value = j.units.in(g.kind, p.number)
	for i := range row.numbers {
		row.numbers[i] = math.NaN()
	}
	row.numbers[column] = p.number
	bubble, err := bubbleAt(g.Value)
	var dew props.State
	if err == nil {
		dew, err = dewAt(g.Value)
	}
	if err != nil {
		row.problem = voice{units: j.units, at: p.pointer, given: []given{g}, r: j.r}.problem(err)
		return
	}
	u := j.units
	row.bubble, row.dew = j.view(bubble, shown, into), j.view(dew, shown, into)
	row.bubble.echo(g.member, g.number)
	row.dew.echo(g.member, g.number)
	boiling := bubble // at the pressure of the row
	if boiling.P != dew.P {
		if boiling, err = j.r.BubblePointAtPressure(dew.P); err != nil {
			boiling = props.State{T: math.NaN(), H: math.NaN()} // the bubble line does not reach down to that pressure
		}
	}
	row.numbers = [...]float64{
		rowTemperature: u.out(kindTemperature, dew.T), rowPressure: u.out(kindPressure, dew.P),
		rowBubbleTemperature: u.out(kindTemperature, boiling.T), rowDewTemperature: u.out(kindTemperature, dew.T),
		rowGlide: u.out(kindTemperatureDifference, dew.T-boiling.T), rowLatentHeat: u.out(kindEnthalpy, dew.H-boiling.H),
	}
	row.numbers[column] = p.number
}

// saturationTable is the answer as CSV, RFC 4180. A line of it says all it means: refrigerant and datum are columns, and
// the names of the columns carry the units.
type saturationTable struct {
	*job
	rows   []saturationRow
	shown  *selection
	fields []int // of stateFields, for each of the two states
}

// incipient returns the phase that begins to form at one end of the dome: its name, its composition in a state, and whether
// the table shows it. The other phase is the blend itself.
func (t *saturationTable) incipient(side string) (name string, of func(*stateView) []float64, shown bool) {
	if side == "bubble" {
		return vapourComposition, func(v *stateView) []float64 { return v.vapour }, t.shown.vapour
	}
	return liquidComposition, func(v *stateView) []float64 { return v.liquid }, t.shown.liquid
}

// columns returns the fields that a table shows of both states: those selected, or all that do not repeat the row. The
// temperature does so always, under the very name that its column would have.
func (s *selection) columns() []int {
	var fields []int
	for _, f := range s.fields {
		name := stateFields[f].name
		if name != "temperature" && (s != everything || f < firstSaturationField && name != "quality") {
			fields = append(fields, f)
		}
	}
	return fields
}

func (t *saturationTable) mediaType() string { return mediaCSV + "; charset=utf-8; header=present" }

func (t *saturationTable) encode(b []byte) ([]byte, error) {
	out := bytes.NewBuffer(b)
	w := csv.NewWriter(out)
	w.UseCRLF = true
	if err := w.Write(t.titles()); err != nil {
		return nil, err
	}
	for i := range t.rows {
		if err := w.Write(t.cells(&t.rows[i])); err != nil {
			return nil, err
		}
	}
	w.Flush()
	return out.Bytes(), w.Error()
}

// titles names the columns.
func (t *saturationTable) titles() []string {
	titles := []string{"refrigerant", "datum"}
	title := func(name string, k kind) {
		if k != kindNone {
			name += " (" + t.units.of[k].code + ")"
		}
		titles = append(titles, name)
	}
	for _, c := range rowColumns {
		title(c.name, c.kind)
	}
	for _, side := range []string{"bubble", "dew"} {
		for _, f := range t.fields {
			title(side+"_"+stateFields[f].name, stateFields[f].kind)
		}
		if name, _, shown := t.incipient(side); shown {
			for _, component := range t.components {
				title(side+"_"+name+" "+component, kindNone)
			}
		}
	}
	return append(titles, "problem")
}

// cells writes one row; what does not exist stays empty.
func (t *saturationTable) cells(r *saturationRow) []string {
	cells := []string{t.basis.Refrigerant, t.basis.Datum}
	for _, x := range r.numbers {
		cells = append(cells, cell(x))
	}
	for _, side := range [...]struct {
		name string
		view *stateView
	}{{"bubble", &r.bubble}, {"dew", &r.dew}} {
		for _, f := range t.fields {
			if r.problem == nil {
				cells = append(cells, cell(side.view.numbers[f]))
			} else {
				cells = append(cells, "")
			}
		}
		if _, of, shown := t.incipient(side.name); shown {
			fractions := of(side.view)
			for i := range t.components {
				if fractions == nil {
					cells = append(cells, "")
				} else {
					cells = append(cells, cell(fractions[i]))
				}
			}
		}
	}
	if r.problem != nil {
		return append(cells, r.problem.Detail)
	}
	return append(cells, "")
}

func cell(x float64) string {
	if math.IsNaN(x) || math.IsInf(x, 0) {
		return ""
	}
	return string(appendNumber(nil, x))
}
