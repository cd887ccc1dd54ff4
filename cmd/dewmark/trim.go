package main

import (
	"context"
	"runtime"
	"runtime/debug"
	"runtime/metrics"
	"time"
)

// A service that is idle gives back the memory that its last load needed. Go's collector would not: it runs as memory is
// allocated, which an idle service does not, and keeps what it frees for the next load.
//
// Whether the service is idle shows in what it allocates: a request takes 10 kB at least, so that at 30 of them a second it no
// longer counts as idle, and nothing happens under load but that a counter is read. When idle it costs two collections of some
// 10 ms, once a minute at most, since a trickle below idleAllocation takes a minute to come up to worthTrimming.
const (
	trimEvery      = 15 * time.Second
	idleAllocation = 4 << 20  // bytes within trimEvery; probes and metrics take a tenth
	worthTrimming  = 16 << 20 // bytes since the last time, of which some may be left
)

// trimmer gives memory back when there is little to do.
type trimmer struct {
	allocated func() uint64 // bytes since the start
	release   func()
}

func newTrimmer() *trimmer { return &trimmer{allocatedBytes, releaseMemory} }

// run looks from time to time until ctx ends.
func (t *trimmer) run(ctx context.Context) {
	ticker := time.NewTicker(trimEvery)
	defer ticker.Stop()
	var trimmed uint64
	before := t.allocated()
	for {
		select {
		case <-ctx.Done():
			return
		case <-ticker.C:
		}
		now := t.allocated()
		if now-before < idleAllocation && now-trimmed >= worthTrimming {
			t.release()
			trimmed = now
		}
		before = now
	}
}

func allocatedBytes() uint64 {
	sample := []metrics.Sample{{Name: "/gc/heap/allocs:bytes"}}
	metrics.Read(sample)
	return sample[0].Value.Uint64()
}

// releaseMemory collects twice, because a pool gives up what it keeps at the second collection only.
func releaseMemory() {
	runtime.GC()
	debug.FreeOSMemory()
}
