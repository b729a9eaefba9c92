package kernel

import "sync"

// The paths, from the specification up.
type way int

const (
	plain way = iota
	avx2
	avx512
)

func (w way) String() string { return [...]string{"plain", "avx2", "avx512"}[w] }

// path is what this machine takes; tests force others.
var path = best()

// buffers hold packed copies between calls.
var buffers = sync.Pool{New: func() any { return new([]float64) }}

// smallestBuffer is large enough for the Go runtime to align it to pages, and so the rows
// of packed strips to cache lines.
const smallestBuffer = 8192

// buffer returns room for n numbers, to be put back into buffers.
func buffer(n int) *[]float64 {
	b := buffers.Get().(*[]float64)
	if cap(*b) < n {
		*b = make([]float64, max(n, smallestBuffer))
	}
	*b = (*b)[:n]
	return b
}
