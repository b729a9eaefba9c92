//go:build !purego

package kernel

import "golang.org/x/sys/cpu"

func best() way {
	switch {
	case cpu.X86.HasAVX512F && cpu.X86.HasAVX512DQ:
		return avx512
	case cpu.X86.HasAVX2 && cpu.X86.HasFMA:
		return avx2
	}
	return plain
}

// tileSums sets tile[a*16+b] to Σ_r left[r*stride+a]·right[r*stride+b] for a < 4, b < 16.
func tileSums(tile *[tileRows * tileColumns]float64, left, right *float64, rows, stride int) {
	if path == avx512 {
		tileSumsAVX512(tile, left, right, rows, stride)
		return
	}
	tileSumsAVX2(tile, left, right, rows, stride)
}

// multiplyTile sets tile[a*8+b] to Σ_j x[a*p+j]·v[j*stride+b] for a < 4, b < 8.
func multiplyTile(tile *[multiplyRows * multiplyColumns]float64, x, v *float64, p, stride int) {
	if path == avx512 {
		multiplyTileAVX512(tile, x, v, p, stride)
		return
	}
	multiplyTileAVX2(tile, x, v, p, stride)
}

//go:noescape
func tileSumsAVX512(tile *[tileRows * tileColumns]float64, left, right *float64, rows, stride int)

//go:noescape
func tileSumsAVX2(tile *[tileRows * tileColumns]float64, left, right *float64, rows, stride int)

//go:noescape
func multiplyTileAVX512(tile *[multiplyRows * multiplyColumns]float64, x, v *float64, p, stride int)

//go:noescape
func multiplyTileAVX2(tile *[multiplyRows * multiplyColumns]float64, x, v *float64, p, stride int)
