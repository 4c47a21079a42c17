package element

import (
	"context"
	"sync"
	"sync/atomic"
)

// Each calls work(scratch, e) for e from 0 to count-1 on up to threads goroutines, each with its own
// scratch from start and taking chunk calls at a time. Calls must write only what belongs to e, so that the result does not depend on
// threads. The error of the lowest failing e is returned; the context is looked at between chunks.
func Each[S any](ctx context.Context, count, chunk, threads int, start func() S, work func(scratch S, e int) error) error {
	chunks := (count + chunk - 1) / chunk
	threads = max(1, min(threads, chunks))
	var next atomic.Int64
	var mu sync.Mutex
	var wait sync.WaitGroup
	failed, failure := count, error(nil)
	for range threads {
		wait.Go(func() {
			scratch := start()
			for ctx.Err() == nil {
				// Chunks are handed out in order, so a chunk below a failed one is always finished
				// and the lowest failure always found.
				lo := (int(next.Add(1)) - 1) * chunk
				mu.Lock()
				done := lo >= failed
				mu.Unlock()
				if done || lo >= count {
					return
				}
				for e := lo; e < min(lo+chunk, count); e++ {
					if err := work(scratch, e); err != nil {
						mu.Lock()
						if e < failed {
							failed, failure = e, err
						}
						mu.Unlock()
						break
					}
				}
			}
		})
	}
	wait.Wait()
	if failure != nil {
		return failure
	}
	return ctx.Err()
}
