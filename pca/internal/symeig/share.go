package symeig

import (
	"sync"
	"sync/atomic"
)

// share calls do for 0..n-1, each once, on several goroutines. No result may depend on
// which goroutine does what.
func share(threads, n int, do func(i int)) {
	if threads = min(threads, n); threads <= 1 {
		for i := range n {
			do(i)
		}
		return
	}
	var next atomic.Int64
	work := func() {
		for i := int(next.Add(1)) - 1; i < n; i = int(next.Add(1)) - 1 {
			do(i)
		}
	}
	var others sync.WaitGroup
	for range threads - 1 {
		others.Go(work)
	}
	work()
	others.Wait()
}
