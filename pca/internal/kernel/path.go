package kernel

// The paths, from the specification up.
type way int

const (
	plain way = iota
	avx2
	avx512
)

// path is what this machine takes; tests force others.
var path = best()
