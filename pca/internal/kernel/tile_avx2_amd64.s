//go:build !purego

#include "textflag.h"

// A tile is 4 rows by 8 columns of sums, Y0..Y7, row by row.

#define ZERO(Y) VXORPD Y, Y, Y

#define LOAD(A, B) \
	VMOVUPD (DI), A \
	VMOVUPD 32(DI), B \
	ADDQ AX, DI

#define ADD(A, B) \
	VADDPD (DI), A, A \
	VADDPD 32(DI), B, B \
	ADDQ AX, DI

#define STORE(A, B) \
	VMOVUPD A, (BX) \
	VMOVUPD B, 32(BX) \
	ADDQ AX, BX

#define ROW(FROM, T, A, B) \
	VBROADCASTSD FROM, T \
	VFMADD231PD Y8, T, A \
	VFMADD231PD Y9, T, B

// func tile8AVX2(c *float64, ldc int, left *float64, lane, step int, right *float64, n int, chain bool)
TEXT ·tile8AVX2(SB), NOSPLIT, $0-57
	MOVQ c+0(FP), BX
	MOVQ ldc+8(FP), AX
	MOVQ left+16(FP), SI
	MOVQ lane+24(FP), R8
	MOVQ step+32(FP), R12
	MOVQ right+40(FP), DX
	MOVQ n+48(FP), CX
	MOVBLZX chain+56(FP), R13
	LEAQ (R8)(R8*2), R9
	MOVQ BX, DI
	TESTQ R13, R13
	JNZ  load
	ZERO(Y0)
	ZERO(Y1)
	ZERO(Y2)
	ZERO(Y3)
	ZERO(Y4)
	ZERO(Y5)
	ZERO(Y6)
	ZERO(Y7)
	JMP  start

load:
	LOAD(Y0, Y1)
	LOAD(Y2, Y3)
	LOAD(Y4, Y5)
	LOAD(Y6, Y7)

start:
	TESTQ CX, CX
	JZ   end

	PCALIGN $32
loop:
	VMOVUPD (DX), Y8
	VMOVUPD 32(DX), Y9
	ROW((SI), Y10, Y0, Y1)
	ROW((SI)(R8*1), Y11, Y2, Y3)
	ROW((SI)(R8*2), Y12, Y4, Y5)
	ROW((SI)(R9*1), Y13, Y6, Y7)
	ADDQ R12, SI
	ADDQ $64, DX
	DECQ CX
	JNZ  loop

end:
	TESTQ R13, R13
	JNZ  store
	MOVQ BX, DI
	ADD(Y0, Y1)
	ADD(Y2, Y3)
	ADD(Y4, Y5)
	ADD(Y6, Y7)

store:
	STORE(Y0, Y1)
	STORE(Y2, Y3)
	STORE(Y4, Y5)
	STORE(Y6, Y7)
	VZEROUPPER
	RET
