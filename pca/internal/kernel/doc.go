// Package kernel holds the inner loops on flat row-major float64.
//
// [AddCrossProducts] and [Multiply] take nearly all the time of a run; [ColumnSums],
// [CenterColumns], [Dot], [Axpy] and [Rotate] are what is left. [AddMultiply] is Multiply
// on parts of larger matrices.
//
// # Same bits
//
// Every result is stated as a sequence of fused multiply-adds (one rounding each, IEEE
// 754-2008) in a fixed order, so that the assembly for AVX-512, the assembly for AVX2 and
// the plain Go that is specification and oracle give the same bits on every machine. Of a
// NaN only that it is one is promised, not its payload.
//
// # Paths
//
// The path is chosen once, at start, by what the processor can do. Build with -tags purego
// for the plain loops alone. No function keeps its arguments or allocates in steady state:
// packed copies live in pooled buffers, so calls from several goroutines are safe.
package kernel
