package api

import (
	"context"
	"fmt"
	"runtime"
	"runtime/debug"
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

// chunks answers points in their order, on as many cores as are free for long work. It returns the cause when ctx ends
// first: nobody waits then.
func (j *job) chunks(ctx context.Context, points []point, shown *selection) ([]chunk, error) {
	chunks := make([]chunk, (len(points)+chunkSize-1)/chunkSize)
	var next atomic.Int64
	one := func() (more bool) {
		i := int(next.Add(1)) - 1
		if i >= len(chunks) {
			return false
		}
		first := i * chunkSize
		chunks[i] = j.chunk(points[first:min(first+chunkSize, len(points))], first, shown)
		return true
	}
	var wg sync.WaitGroup
	var broken atomic.Pointer[string]
	for range min(runtime.GOMAXPROCS(0), len(chunks)) - 1 {
		relieved, release, ok := helper(ctx)
		if !ok {
			break
		}
		wg.Go(func() {
			defer release()
			defer func() {
				if cause := recover(); cause != nil { // on its own, a goroutine that panics takes the process with it
					broken.Store(new(fmt.Sprintf("%v\n%s", cause, debug.Stack())))
				}
			}()
			for ctx.Err() == nil && !relieved() && one() {
			}
		})
	}
	func() {
		defer wg.Wait()
		for one() && breathe(ctx) == nil {
		}
	}()
	if cause := broken.Load(); cause != nil {
		panic(*cause)
	}
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
