package main

import (
	"context"
	"testing"
	"testing/synctest"
	"time"
)

// Memory goes back once within two looks after a load has ended, not under load, and under a trickle of requests once a
// minute at most.
func TestTrim(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		var allocated uint64
		released := 0
		trimmer := &trimmer{func() uint64 { return allocated }, func() { released++ }}
		ctx, stop := context.WithCancel(t.Context())
		defer stop()
		go trimmer.run(ctx)
		pass := func(d time.Duration, perSecond uint64) {
			for range d / time.Second {
				time.Sleep(time.Second)
				allocated += perSecond
			}
			synctest.Wait()
		}
		for _, tt := range []struct {
			what      string
			time      time.Duration
			perSecond uint64
			want      int // times that memory is given back
		}{
			{"load", 10 * time.Minute, 50 << 20, 0},
			{"idle after it", 2 * trimEvery, 0, 1},
			{"idle for longer", time.Hour, 0, 0},
			{"probes and metrics", 5 * time.Minute, 20 << 10, 0},
			{"little load", 10 * time.Minute, 1 << 20, 0},
			{"idle after that", 2 * trimEvery, 0, 1},
		} {
			before := released
			if pass(tt.time, tt.perSecond); released-before != tt.want {
				t.Errorf("%s: memory given back %d times, not %d", tt.what, released-before, tt.want)
			}
		}
		before := released
		if pass(10*time.Minute, 250<<10); released == before || released-before > 10 {
			t.Errorf("a trickle for ten minutes: memory given back %d times", released-before)
		}
	})
}

// The counter counts.
func TestAllocatedBytes(t *testing.T) {
	before := allocatedBytes()
	kept = make([]byte, 64<<20)
	if grown := allocatedBytes() - before; grown < 64<<20 {
		t.Errorf("64 MB allocated, %d bytes counted", grown)
	}
	kept = nil
	releaseMemory()
}

var kept []byte
