package field

import (
	"runtime"
	"sync"
)

// blockSize is the number of elements that one goroutine takes at a time: large against the cost of handing it over,
// small against the meshes that are worth sharing.
const blockSize = 16384

// Parallel runs work over [0, n) in blocks of fixed bounds, on as many goroutines as there are processors. The blocks
// must not depend on one another; results placed by index are the same however they are scheduled.
func Parallel(n int, work func(from, to int)) {
	workers := min(runtime.GOMAXPROCS(0), (n+blockSize-1)/blockSize)
	if workers <= 1 {
		work(0, n)
		return
	}
	var wg sync.WaitGroup
	blocks := make(chan int)
	for range workers {
		wg.Go(func() {
			for b := range blocks {
				work(b*blockSize, min(n, (b+1)*blockSize))
			}
		})
	}
	for b := 0; b*blockSize < n; b++ {
		blocks <- b
	}
	close(blocks)
	wg.Wait()
}
