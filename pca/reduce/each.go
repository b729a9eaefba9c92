package reduce

import "sync"

// each calls work for 0 to n-1 on some threads; calls must not depend on one another.
func each(n, threads int, work func(i int)) {
	var wg sync.WaitGroup
	threads = min(threads, n)
	for t := range threads {
		wg.Go(func() {
			for i := t; i < n; i += threads {
				work(i)
			}
		})
	}
	wg.Wait()
}
