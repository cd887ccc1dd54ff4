package machine

import "context"

// Grid is a table of conditions: every source temperature with every sink temperature and every speed, in this order of
// nesting, the speeds innermost.
type Grid struct {
	// Condition is what all rows share. The grid sets the inlet temperature of its source and the outlet temperature of its
	// sink, as EN 14511 counts, and the speed where Speeds are given.
	Condition          Condition
	SourceTemperatures []float64 // "source_temperatures", K, of the source's inlet
	SinkTemperatures   []float64 // "sink_temperatures", K, of the sink's outlet, or inlet with SinkByInlet
	Speeds             []float64 // 1/s; none means the condition's
	SinkByInlet        bool
	// Workers is how many rows are computed at the same time; 0 means as many as there are cores to run on.
	Workers int
	// Admit, unless nil, is called before each row, by several workers at once. It may wait, and the row ends with release. An
	// error of it, which ends the row, is for a context that has ended.
	Admit func(context.Context) (release func(), err error)
}

// Row is one row of a rating table: an operating point, or the reason why there is none.
type Row struct {
	Index             int
	SourceTemperature float64 // K
	SinkTemperature   float64 // K
	Speed             float64 // 1/s as asked for; NaN when the grid has no speeds
	Point             *OperatingPoint
	Err               error // a *RefusedError when Point is nil
}
