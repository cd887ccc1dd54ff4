package main

import (
	"context"
	"sync/atomic"
	"testing"
	"testing/synctest"
	"time"
)

// Memory goes back once within two looks after a load has ended, not under load, and under a trickle of requests once a
// minute at most.
func TestTrim(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		var allocated, released atomic.Uint64
		trimmer := &trimmer{allocated.Load, func() { released.Add(1) }}
		ctx, stop := context.WithCancel(t.Context())
		defer stop()
		go trimmer.run(ctx)
		time.Sleep(time.Second / 2) // so that no allocation meets a look
		pass := func(d time.Duration, perSecond uint64) {
			for range d / time.Second {
				time.Sleep(time.Second)
				allocated.Add(perSecond)
			}
			synctest.Wait()
		}
		for _, tt := range []struct {
			what      string
			time      time.Duration
			perSecond uint64
			want      uint64 // times that memory is given back
		}{
			{"load", 10 * time.Minute, 50 << 20, 0},
			{"idle after it", 2 * trimEvery, 0, 1},
			{"idle for longer", time.Hour, 0, 0},
			{"probes and metrics", 5 * time.Minute, 20 << 10, 0},
			{"little load", 10 * time.Minute, 1 << 20, 0},
			{"idle after that", 2 * trimEvery, 0, 1},
		} {
			before := released.Load()
			if pass(tt.time, tt.perSecond); released.Load()-before != tt.want {
				t.Errorf("%s: memory given back %d times, not %d", tt.what, released.Load()-before, tt.want)
			}
		}
		before := released.Load()
		if pass(10*time.Minute, 250<<10); released.Load() == before || released.Load()-before > 10 {
			t.Errorf("a trickle for ten minutes: memory given back %d times", released.Load()-before)
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
