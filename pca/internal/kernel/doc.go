// Package kernel holds the inner loops on flat row-major float64.
//
// [AddCrossProducts] and [Multiply] take nearly all the time of a run. Each is stated as
// a sequence of fused multiply-adds in a fixed order, so that the assembly for AVX-512
// and for AVX2, and the plain Go that is specification and oracle, give the same bits on
// every machine. Build with -tags purego for the plain loops alone.
package kernel
