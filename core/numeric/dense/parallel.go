package dense

import (
	"sync"
	"sync/atomic"
)

// Parallel calls work for 0 ≤ k < count from the given number of goroutines, each taking the next k when free, and
// waits for all. Which goroutine does which piece is left to chance, so pieces must not depend on one another.
func Parallel(threads, count int, work func(k int)) {
	if threads <= 1 || count <= 1 {
		for k := range count {
			work(k)
		}
		return
	}
	var next atomic.Int64
	var done sync.WaitGroup
	for range min(threads, count) {
		done.Go(func() {
			for {
				k := int(next.Add(1)) - 1
				if k >= count {
					return
				}
				work(k)
			}
		})
	}
	done.Wait()
}
