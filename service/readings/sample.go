package readings

import (
	"time"

	"dewmark/props/secondary"
)

// Sample is what the sensors said at one time. The zero value has no readings.
type Sample struct {
	Time   time.Time // zero where not known; a [Series] needs it
	Sink   Stream    // what passes the condenser or gas cooler
	Source Stream    // what passes the evaporator
	// Standstill is how long the compressor has stood still, 0 while it runs. Two hours or more say something about the
	// charge. A [Series] finds it by itself from compressor powers.
	Standstill time.Duration

	given  uint64
	values [readingCount]float64
}

// Stream says what flows on the other side of an exchanger. The zero value is not known.
type Stream struct {
	Liquid   *secondary.Liquid
	MoistAir bool // instead of a liquid
	// MeterAtOutlet says that the volume flow is metered at the outlet, where the density counts. Default: at the inlet.
	MeterAtOutlet bool
}

func (s *Stream) known() bool { return s.Liquid != nil || s.MoistAir }

// Set puts a value in SI units for a reading.
func (s *Sample) Set(r Reading, value float64) {
	s.given |= 1 << r
	s.values[r] = value
}

// Unset takes a reading away.
func (s *Sample) Unset(r Reading) {
	s.given &^= 1 << r
	s.values[r] = 0
}

// Value returns a reading and reports whether it is given.
func (s *Sample) Value(r Reading) (float64, bool) { return s.values[r], s.has(r) }

func (s *Sample) has(r Reading) bool { return s.given>>r&1 == 1 }
