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
	Refrigerant string            `json:"refrigerant"`
	Datum       string            `json:"datum"`
	Units       map[string]string `json:"units"`
	Site        *site             `json:"site,omitempty"`
	Failed      int               `json:"failed"`
	Rows        []saturationRow   `json:"rows"`
	Basis       basis             `json:"basis"`
	Cautions    []caution         `json:"cautions"`
}

// saturationRow is one row of the table. A failed row holds the given number and the problem alone.
type saturationRow struct {
	Temperature       *float64   `json:"temperature,omitempty"`
	Pressure          *float64   `json:"pressure,omitempty"`
	BubbleTemperature *float64   `json:"bubble_temperature,omitempty"`
	DewTemperature    *float64   `json:"dew_temperature,omitempty"`
	Glide             *float64   `json:"glide,omitempty"`
	LatentHeat        *float64   `json:"latent_heat,omitempty"`
	Bubble            *stateView `json:"bubble,omitempty"`
	Dew               *stateView `json:"dew,omitempty"`
	Problem           *Problem   `json:"problem,omitempty"`
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
	a.metrics.batch(c, len(points))
	var all account
	rows := make([]saturationRow, len(points))
	for i, p := range points {
		if i%chunkSize == 0 && c.Request.Context().Err() != nil {
			return nil, c.Request.Context().Err() // nobody waits for the answer
		}
		rows[i] = j.row(p, shown, &all)
		all.count(rows[i].Problem, false)
	}
	a.metrics.calculated("saturation", &all)
	j.conclude(&all, shown)
	kinds := append(shown.kinds(), kindTemperature, kindPressure, kindTemperatureDifference, kindEnthalpy)
	if accepted(c) == mediaCSV {
		if err := j.announce(c, kinds); err != nil {
			return nil, err
		}
		return &saturationTable{job: j, rows: rows, fields: shown.columns()}, nil
	}
	return saturationResponse{
		Refrigerant: j.basis.Refrigerant, Datum: j.basis.Datum, Units: j.units.names(kinds...), Site: j.units.site,
		Failed: all.failed(), Rows: rows, Basis: j.basis, Cautions: j.cautions,
	}, nil
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
func (j *job) row(p saturationPoint, shown *selection, into *account) saturationRow {
	g := given{member: "temperature", kind: kindTemperature, number: p.number, Given: props.Given{Property: p.property}}
	bubbleAt, dewAt := j.r.BubblePoint, j.r.DewPoint
	row := saturationRow{Temperature: &p.number}
	if p.property == props.Pressure {
		g.member, g.kind = "pressure", kindPressure
		bubbleAt, dewAt = j.r.BubblePointAtPressure, j.r.DewPointAtPressure
		row = saturationRow{Pressure: &p.number}
	}
	g.Value = j.units.in(g.kind, p.number)
	bubble, err := bubbleAt(g.Value)
	if err == nil {
		var dew props.State
		if dew, err = dewAt(g.Value); err == nil {
			return j.saturated(row, g, bubble, dew, shown, into)
		}
	}
	row.Problem = voice{units: j.units, at: p.pointer, given: []given{g}, r: j.r}.problem(err)
	return row
}

// saturated fills a row.
func (j *job) saturated(row saturationRow, g given, bubble, dew props.State, shown *selection, into *account) saturationRow {
	u := j.units
	bubbleView, dewView := j.view(bubble, shown, into), j.view(dew, shown, into)
	for _, v := range []*stateView{&bubbleView, &dewView} {
		v.echo(g.member, g.number)
	}
	bubbleT, dewT := u.out(kindTemperature, bubble.T), u.out(kindTemperature, dew.T)
	if g.Property == props.Temperature {
		bubbleT, dewT = g.number, g.number
		row.Pressure = new(u.out(kindPressure, dew.P))
	} else {
		row.Temperature = &dewT
	}
	row.BubbleTemperature, row.DewTemperature = &bubbleT, &dewT
	row.Glide = new(u.out(kindTemperatureDifference, dew.T-bubble.T))
	row.LatentHeat = new(u.out(kindEnthalpy, dew.H-bubble.H))
	row.Bubble, row.Dew = &bubbleView, &dewView
	return row
}

// saturationTable is the answer as CSV, RFC 4180. A line of it says all it means: refrigerant and datum are columns, and
// the names of the columns carry the units.
type saturationTable struct {
	*job
	rows   []saturationRow
	fields []int // of stateFields, for each of the two states
}

// columns returns the fields that a table shows: those selected, or all that do not repeat the row.
func (s *selection) columns() []int {
	if s != everything {
		return s.fields
	}
	var fields []int
	for _, f := range s.fields {
		if f < firstSaturationField && stateFields[f].name != "quality" {
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

// rowColumns are the columns that stand before those of the two states.
var rowColumns = [...]struct {
	name  string
	kind  kind
	value func(*saturationRow) *float64
}{
	{"temperature", kindTemperature, func(r *saturationRow) *float64 { return r.Temperature }},
	{"pressure", kindPressure, func(r *saturationRow) *float64 { return r.Pressure }},
	{"bubble_temperature", kindTemperature, func(r *saturationRow) *float64 { return r.BubbleTemperature }},
	{"dew_temperature", kindTemperature, func(r *saturationRow) *float64 { return r.DewTemperature }},
	{"glide", kindTemperatureDifference, func(r *saturationRow) *float64 { return r.Glide }},
	{"latent_heat", kindEnthalpy, func(r *saturationRow) *float64 { return r.LatentHeat }},
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
	}
	return append(titles, "problem")
}

// cells writes one row; what does not exist stays empty.
func (t *saturationTable) cells(r *saturationRow) []string {
	cells := []string{t.basis.Refrigerant, t.basis.Datum}
	for _, c := range rowColumns {
		x := math.NaN()
		if v := c.value(r); v != nil {
			x = *v
		}
		cells = append(cells, cell(x))
	}
	for _, v := range []*stateView{r.Bubble, r.Dew} {
		for _, f := range t.fields {
			x := math.NaN()
			if v != nil {
				x = v.numbers[f]
			}
			cells = append(cells, cell(x))
		}
	}
	problem := ""
	if r.Problem != nil {
		problem = r.Problem.Detail
	}
	return append(cells, problem)
}

func cell(x float64) string {
	if math.IsNaN(x) || math.IsInf(x, 0) {
		return ""
	}
	return string(appendNumber(nil, x))
}
