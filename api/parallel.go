package api

import (
	"context"
	"fmt"
	"runtime"
	"runtime/debug"
	"sync"
	"sync/atomic"
)

// inParallel calls work for the numbers below n, on as many processors as are free for long work. It returns the cause when
// ctx ends first.
func inParallel(ctx context.Context, n int, work func(i int)) error {
	var next atomic.Int64
	one := func() (more bool) {
		i := int(next.Add(1)) - 1
		if i >= n {
			return false
		}
		work(i)
		return true
	}
	var wg sync.WaitGroup
	var broken atomic.Pointer[string]
	for range min(runtime.GOMAXPROCS(0), n) - 1 {
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
			for more := true; more && ctx.Err() == nil && !relieved(); {
				more = one()
			}
		})
	}
	func() {
		defer wg.Wait()
		for more := true; more && breathe(ctx) == nil; {
			more = one()
		}
	}()
	if cause := broken.Load(); cause != nil {
		panic(*cause)
	}
	return context.Cause(ctx)
}
