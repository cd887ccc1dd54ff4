package api

import (
	"context"
	"runtime"
	"sync"
	"sync/atomic"
)

// chunkSize is how many points a goroutine takes at a time: enough that handing over costs nothing beside them, few enough
// that the cores end together.
const chunkSize = 64

// chunk is the answer to some points in a row.
type chunk struct {
	text []byte // their items, parted by commas
	account
}

// chunks answers points on all cores, in their order. It returns the cause when ctx ends first: nobody waits then.
func (j *job) chunks(ctx context.Context, points []point, shown *selection) ([]chunk, error) {
	chunks := make([]chunk, (len(points)+chunkSize-1)/chunkSize)
	var next atomic.Int64
	work := func() {
		for ctx.Err() == nil {
			i := int(next.Add(1)) - 1
			if i >= len(chunks) {
				return
			}
			first := i * chunkSize
			chunks[i] = j.chunk(points[first:min(first+chunkSize, len(points))], first, shown)
		}
	}
	var wg sync.WaitGroup
	for range min(runtime.GOMAXPROCS(0), len(chunks)) - 1 {
		wg.Go(work)
	}
	work()
	wg.Wait()
	return chunks, context.Cause(ctx)
}

// chunk answers some points, the first of which is number first.
func (j *job) chunk(points []point, first int, shown *selection) chunk {
	w := newWorker(j, shown)
	text := make([]byte, 0, len(points)*(64+32*len(shown.fields)))
	for i := range points {
		if i > 0 {
			text = append(text, ',')
		}
		text = w.item(text, &points[i], place{"#/points", first + i})
	}
	return chunk{text, w.account}
}
