//go:build !amd64 || purego

package kernel

func best() way { return plain }

func tileSums(tile *[tileRows * tileColumns]float64, left, right *float64, rows, stride int) {
	panic("kernel: no assembly on this machine")
}

func multiplyTile(tile *[multiplyRows * multiplyColumns]float64, x, v *float64, p, stride int) {
	panic("kernel: no assembly on this machine")
}
