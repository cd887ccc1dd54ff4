package api

import (
	"bufio"
	"context"
	"encoding/csv"
	"errors"
	"fmt"
	"math"
	"net/http"
	"slices"
	"strings"
	"time"

	"github.com/gin-gonic/gin"

	"dewmark/service/machine"
)

// ratingsRequest asks for a table: every source temperature with every sink temperature and every speed.
type ratingsRequest struct {
	machineHead
	SourceTemperatures []float64     `json:"source_temperatures" validate:"required,min=1"`
	SinkTemperatures   []float64     `json:"sink_temperatures" validate:"required,min=1"`
	Speeds             []float64     `json:"speeds"`
	SinkReference      string        `json:"sink_reference" validate:"omitempty,oneof=outlet inlet"` // default outlet
	Source             streamRequest `json:"source"`
	Sink               streamRequest `json:"sink"`
	Speed              *float64      `json:"speed"`
	Demand             demand        `json:"demand"`
	AmbientTemperature *float64      `json:"ambient_temperature"`
}

// ratingColumns are the numbers of a row. A failed row has the first three alone.
var ratingColumns = [...]struct {
	name  string
	kind  kind
	value func(*machine.OperatingPoint) float64 // SI; nil where the grid says it
}{
	ratingSource: {"source_temperature", kindTemperature, nil},
	ratingSink:   {"sink_temperature", kindTemperature, nil},
	ratingSpeed:  {"speed", kindNone, func(p *machine.OperatingPoint) float64 { return p.Speed }},
	{"heating_capacity", kindHeatFlow, func(p *machine.OperatingPoint) float64 { return p.System.HeatingCapacity }},
	{"cooling_capacity", kindHeatFlow, func(p *machine.OperatingPoint) float64 { return p.System.CoolingCapacity }},
	{"power", kindPower, func(p *machine.OperatingPoint) float64 { return p.System.Power }},
	{"cop_heating", kindNone, func(p *machine.OperatingPoint) float64 { return p.System.COPHeating }},
	{"cop_cooling", kindNone, func(p *machine.OperatingPoint) float64 { return p.System.COPCooling }},
	{"compressor_power", kindPower, func(p *machine.OperatingPoint) float64 { return p.System.CompressorPower }},
	{"mass_flow", kindMassFlow, func(p *machine.OperatingPoint) float64 { return p.Cycle.Performance.MassFlow }},
	{"evaporation_temperature", kindTemperature, func(p *machine.OperatingPoint) float64 { return p.EvaporationTemperature }},
	{"condensation_temperature", kindTemperature, func(p *machine.OperatingPoint) float64 { return p.CondensationTemperature }},
	{"evaporating_pressure", kindPressure, func(p *machine.OperatingPoint) float64 { return p.Cycle.Figures.EvaporatingPressure }},
	{"high_pressure", kindPressure, func(p *machine.OperatingPoint) float64 { return p.Cycle.Figures.HighPressure }},
	{"pressure_ratio", kindNone, func(p *machine.OperatingPoint) float64 { return p.Cycle.Performance.PressureRatio }},
	{"discharge_temperature", kindTemperature, func(p *machine.OperatingPoint) float64 { return p.Cycle.Performance.DischargeTemperature }},
	{"superheat", kindTemperatureDifference, func(p *machine.OperatingPoint) float64 { return p.Superheat }},
	{"evaporator_pinch", kindTemperatureDifference, func(p *machine.OperatingPoint) float64 { return p.Evaporator.Pinch }},
	{"condenser_pinch", kindTemperatureDifference, func(p *machine.OperatingPoint) float64 { return p.Condenser.Pinch }},
	{"source_outlet_temperature", kindTemperature, func(p *machine.OperatingPoint) float64 { return p.Evaporator.Secondary.OutletTemperature }},
	{"sink_inlet_temperature", kindTemperature, func(p *machine.OperatingPoint) float64 { return p.Condenser.Secondary.InletTemperature }},
	{"sink_outlet_temperature", kindTemperature, func(p *machine.OperatingPoint) float64 { return p.Condenser.Secondary.OutletTemperature }},
	{"envelope_margin", kindTemperatureDifference, func(p *machine.OperatingPoint) float64 { return p.Envelope.Margin }},
}

// The columns that the grid gives.
const (
	ratingSource = iota
	ratingSink
	ratingSpeed
)

// ratingKinds are the kinds of quantity of a rating table.
func ratingKinds() []kind {
	var kinds []kind
	for _, c := range ratingColumns {
		kinds = append(kinds, c.kind)
	}
	return kinds
}

// ratings answers POST /v1/ratings. Rows are sent as they are found, so that memory does not grow with the table.
func (a *API) ratings(c *gin.Context) {
	answer := func(c *gin.Context) (any, error) { return nil, a.rate(c) }
	if _, err := negotiated(c, answer, []string{mediaJSON, mediaCSV, mediaLines}); err != nil {
		a.fail(c, err)
	}
}

// rate returns an error while nothing is sent yet.
func (a *API) rate(c *gin.Context) error {
	var req ratingsRequest
	if err := a.decode(c, &req); err != nil {
		return err
	}
	j, m, err := a.beginMachine(&req.machineHead)
	if err != nil {
		return err
	}
	g, err := req.grid(a, j.units)
	if err != nil {
		return err
	}
	rows := len(g.SourceTemperatures) * len(g.SinkTemperatures) * max(1, len(g.Speeds))
	if rows > a.maxPoints {
		return invalidItem(MemberError{Pointer: "#/source_temperatures", Code: "too_many", Detail: fmt.Sprintf(
			"%d source temperatures, %d sink temperatures and %d speeds make %d rows; allowed are %d at most", len(g.SourceTemperatures), len(g.SinkTemperatures), max(1, len(g.Speeds)), rows, a.maxPoints)})
	}
	if err := a.batch(c, rows, statesPerOperatingPoint); err != nil {
		return err
	}
	g.Admit = ticketOf(c).share()
	t := &ratingTable{
		job: j, out: bufio.NewWriterSize(c.Writer, maxLine), context: c, media: accepted(c), now: a.now, request: &req,
		voice: machineVoice{voice: voice{units: j.units, r: j.r}, condition: "#", oneMap: req.Machine.Compressor.Map != nil},
	}
	defer func() { a.metrics.calculated("rating", &t.all) }()
	ctx := contextOf(c)
	if err = machine.Rate(ctx, m, g, func(row machine.Row) error {
		if row.Point != nil {
			a.metrics.iterations.WithLabelValues("operating_point").Observe(float64(row.Point.Evaluations))
		}
		err := t.add(&row)
		ticketOf(c).renew()
		return err
	}); err == nil {
		err = t.end()
	}
	switch {
	case err == nil || errors.Is(err, errClientGone):
		return nil
	case t.begun && errors.Is(context.Cause(ctx), context.Canceled):
		return nil // nobody reads the rest
	case t.begun:
		panic(http.ErrAbortHandler) // half a table must not look complete
	}
	if e, ok := errors.AsType[*machine.RefusedError](err); ok {
		p := t.voice.problem(e)
		t.all.count(p, false)
		return p
	}
	return err
}

// grid turns the request into what the solver reads.
func (r *ratingsRequest) grid(a *API, u *units) (*machine.Grid, error) {
	var c choices
	k := condition{Source: r.Source, Sink: r.Sink, Speed: r.Speed, Demand: r.Demand, AmbientTemperature: r.AmbientTemperature}
	g := &machine.Grid{
		Condition: k.si(a.fluids(u), &c, "#"), Speeds: r.Speeds, SinkByInlet: r.SinkReference == "inlet",
		SourceTemperatures: u.all(kindTemperature, r.SourceTemperatures), SinkTemperatures: u.all(kindTemperature, r.SinkTemperatures),
	}
	return g, invalid(c)
}

// all converts a list of numbers to SI.
func (u *units) all(k kind, numbers []float64) []float64 {
	si := make([]float64, len(numbers))
	for i, x := range numbers {
		si[i] = u.in(k, x)
	}
	return si
}

// errClientGone ends a table that nobody reads any more.
var errClientGone = errors.New("the client is gone")

// ratingTable writes a rating table row by row in one of three forms.
type ratingTable struct {
	*job
	request *ratingsRequest
	voice   machineVoice
	media   string
	context *gin.Context
	out     *bufio.Writer
	now     func() time.Time
	begun   bool
	rows    int
	buffer  []byte
	all     account
	seen    []seenCaution
}

// seenCaution is a caution that rows have, told in full once.
type seenCaution struct {
	caution
	row, rows int // the first that has it, and how many do
}

// add writes a row.
func (t *ratingTable) add(row *machine.Row) error {
	var problem *Problem
	var cautions []caution
	if row.Err != nil {
		if problem = t.voice.problem(row.Err); problem.Status >= http.StatusInternalServerError {
			return row.Err
		}
	} else {
		cautions = t.voice.cautions(row.Point.Cautions)
	}
	t.all.count(problem, false)
	codes := t.note(cautions)
	if !t.begun {
		if err := t.begin(); err != nil {
			return err
		}
	}
	t.buffer = t.buffer[:0]
	var err error
	switch t.media {
	case mediaCSV:
		err = t.line(t.cells(row, problem, codes))
	case mediaLines:
		t.buffer, err = t.object(t.buffer, row, problem, codes)
		t.buffer = append(t.buffer, '\n')
	default:
		if t.rows > 0 {
			t.buffer = append(t.buffer, ',')
		}
		t.buffer, err = t.object(t.buffer, row, problem, codes)
	}
	t.rows++
	if err != nil {
		return err
	}
	return t.send()
}

// note keeps what cautions say the first time, and returns their codes, each once.
func (t *ratingTable) note(cautions []caution) []string {
	codes := []string{}
	for _, c := range cautions {
		if slices.Contains(codes, c.Code) {
			continue
		}
		codes = append(codes, c.Code)
		i := slices.IndexFunc(t.seen, func(s seenCaution) bool { return s.Code == c.Code })
		if i < 0 {
			i = len(t.seen)
			t.seen = append(t.seen, seenCaution{caution: c, row: t.rows})
		}
		t.seen[i].rows++
	}
	return codes
}

// begin writes what stands before the first row.
func (t *ratingTable) begin() error {
	h := t.context.Writer.Header()
	switch t.media {
	case mediaJSON:
		o := begin(t.buffer[:0])
		if err := t.head(&o, ratingKinds()); err != nil {
			return err
		}
		if name := t.request.Machine.Name; name != "" {
			o.text("machine", name)
		}
		o.text("sink_reference", t.sinkReference())
		o.name("rows")
		o.b = append(o.b, '[')
		t.buffer = o.b
		h.Set("Content-Type", mediaJSON)
	default:
		// The cautions of the first row stand for those that all rows have.
		j := *t.job
		j.cautions = slices.Clone(j.cautions)
		for _, s := range t.seen {
			j.cautions = append(j.cautions, s.caution)
		}
		j.caution("calculation_aid", handling(j.r, nil))
		if err := j.announce(t.context, ratingKinds()); err != nil {
			return err
		}
		h.Set("Content-Type", mediaLines)
		t.buffer = t.buffer[:0]
		if t.media == mediaCSV {
			h.Set("Content-Type", mediaCSV+"; charset=utf-8; header=present")
			if err := t.line(t.titles()); err != nil {
				return err
			}
		}
	}
	t.begun = true
	t.context.Status(http.StatusOK)
	_, err := t.out.Write(t.buffer)
	return gone(err)
}

func (t *ratingTable) sinkReference() string {
	if t.request.SinkReference == "" {
		return "outlet"
	}
	return t.request.SinkReference
}

// send hands over what is written.
func (t *ratingTable) send() error {
	connection := http.NewResponseController(t.context.Writer)
	_ = connection.SetWriteDeadline(t.now().Add(patience))
	if _, err := t.out.Write(t.buffer); err != nil {
		return gone(err)
	}
	if err := t.out.Flush(); err != nil {
		return gone(err)
	}
	_ = connection.Flush()
	return nil
}

func gone(err error) error {
	if err != nil {
		return errClientGone
	}
	return nil
}

// end writes what stands behind the last row.
func (t *ratingTable) end() error {
	if t.media != mediaJSON {
		return nil
	}
	for _, s := range t.seen {
		detail := s.Detail
		if s.rows < t.rows {
			detail = fmt.Sprintf("%d of %d rows, as row %d: %s", s.rows, t.rows, s.row, s.Detail)
		}
		t.caution(s.Code, detail)
	}
	t.caution("calculation_aid", handling(t.r, nil))
	t.buffer = append(t.buffer[:0], ']')
	o := object{b: t.buffer}
	o.number("failed", float64(t.all.failed()))
	if err := t.tail(&o); err != nil {
		return err
	}
	t.buffer = append(o.end(), '\n')
	return t.send()
}

// numbers returns the numbers of a row in the caller's units, those of the request as they were written.
func (t *ratingTable) numbers(row *machine.Row) [len(ratingColumns)]float64 {
	var x [len(ratingColumns)]float64
	for i := range ratingColumns {
		column := &ratingColumns[i]
		x[i] = math.NaN()
		if column.value != nil && row.Point != nil {
			x[i] = t.units.out(column.kind, column.value(row.Point))
		}
	}
	n, speeds := row.Index, t.request.Speeds
	if len(speeds) > 0 {
		x[ratingSpeed] = speeds[n%len(speeds)]
		n /= len(speeds)
	}
	sinks := t.request.SinkTemperatures
	x[ratingSource], x[ratingSink] = t.request.SourceTemperatures[n/len(sinks)], sinks[n%len(sinks)]
	return x
}

// object adds a row as JSON.
func (t *ratingTable) object(b []byte, row *machine.Row, problem *Problem, codes []string) ([]byte, error) {
	o := begin(b)
	x := t.numbers(row)
	for i := range ratingColumns {
		if i < ratingSpeed || problem == nil || i == ratingSpeed && !math.IsNaN(x[i]) {
			o.number(ratingColumns[i].name, x[i])
		}
	}
	if problem != nil {
		err := o.value("problem", problem)
		return o.end(), err
	}
	if err := o.value("within_envelope", row.Point.WithinEnvelope()); err != nil {
		return nil, err
	}
	o.text("envelope", string(row.Point.Envelope.Verdict))
	err := o.value("cautions", codes)
	return o.end(), err
}

// titles names the columns of CSV.
func (t *ratingTable) titles() []string {
	titles := []string{"machine", "refrigerant"}
	for _, c := range ratingColumns {
		name := c.name
		if c.kind != kindNone {
			name += " (" + t.units.of[c.kind].code + ")"
		}
		titles = append(titles, name)
	}
	titles[2+ratingSpeed] += " (s-1)"
	return append(titles, "within_envelope", "envelope", "cautions", "problem")
}

// cells writes a row of CSV; what does not exist stays empty.
func (t *ratingTable) cells(row *machine.Row, problem *Problem, codes []string) []string {
	cells := []string{t.request.Machine.Name, t.basis.Refrigerant}
	for _, x := range t.numbers(row) {
		cells = append(cells, cell(x))
	}
	if problem != nil {
		return append(cells, "", "", "", problem.Detail)
	}
	within := "false"
	if row.Point.WithinEnvelope() {
		within = "true"
	}
	return append(cells, within, string(row.Point.Envelope.Verdict), strings.Join(codes, " "), "")
}

// line adds a line of CSV, RFC 4180.
func (t *ratingTable) line(cells []string) error {
	w := csv.NewWriter((*byteWriter)(&t.buffer))
	w.UseCRLF = true
	if err := w.Write(cells); err != nil {
		return err
	}
	w.Flush()
	return w.Error()
}

// byteWriter appends what is written to it.
type byteWriter []byte

func (b *byteWriter) Write(text []byte) (int, error) {
	*b = append(*b, text...)
	return len(text), nil
}
