package survey

import (
	"runtime"
	"sync"
)

// shares cuts the channels into ranges for threads. A channel belongs to one range, so
// what is found of it does not depend on how many there are.
type shares struct{ cuts []int }

// leastShare keeps neighbours in memory together.
const leastShare = 8

func newShares(p, threads int) shares {
	if threads <= 0 {
		threads = runtime.GOMAXPROCS(0)
	}
	n := max(1, min(threads, p/leastShare))
	s := shares{}
	for k := range n + 1 {
		s.cuts = append(s.cuts, p*k/n)
	}
	return s
}

func (s shares) each(f func(from, to int)) {
	if len(s.cuts) == 2 {
		f(s.cuts[0], s.cuts[1])
		return
	}
	var wg sync.WaitGroup
	for k := range len(s.cuts) - 1 {
		wg.Go(func() { f(s.cuts[k], s.cuts[k+1]) })
	}
	wg.Wait()
}
