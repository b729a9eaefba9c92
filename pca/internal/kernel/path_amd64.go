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
