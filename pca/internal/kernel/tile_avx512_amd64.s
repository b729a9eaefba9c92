//go:build !purego

#include "textflag.h"

// A tile is 8 rows by 8, 16 or 24 columns of sums, Z0..Z23, row by row. Per step the
// strips of the right factor come to Z24..Z26, the 8 numbers of the left one are
// broadcast to Z27..Z30 in turn.

// Arguments common to the three widths. SI and R10 point to left rows 0 and 4, R8 and R9
// are one and three lanes, DI walks over c with BX as its start.
#define ARGUMENTS \
	MOVQ c+0(FP), BX \
	MOVQ ldc+8(FP), AX \
	MOVQ left+16(FP), SI \
	MOVQ lane+24(FP), R8 \
	MOVQ step+32(FP), R12 \
	MOVQ right+40(FP), DX \
	MOVQ strip+48(FP), R11 \
	MOVQ n+56(FP), CX \
	MOVQ mask+64(FP), R13 \
	MOVBLZX chain+72(FP), R15 \
	KMOVW R13, K1 \
	LEAQ (R8)(R8*2), R9 \
	LEAQ (SI)(R8*4), R10 \
	MOVQ BX, DI

// Sums that start at zero are added to c at the end; c is fetched meanwhile.
#define PREFETCH(LAST) \
	PREFETCHT0 (DI) \
	PREFETCHT0 LAST(DI) \
	ADDQ AX, DI

#define PREFETCH8(LAST) \
	PREFETCH(LAST) \
	PREFETCH(LAST) \
	PREFETCH(LAST) \
	PREFETCH(LAST) \
	PREFETCH(LAST) \
	PREFETCH(LAST) \
	PREFETCH(LAST) \
	PREFETCH(LAST)

#define ZERO(Z) VPXORQ Z, Z, Z

#define ADVANCE \
	ADDQ R12, SI \
	ADDQ R12, R10 \
	ADDQ $64, DX \
	DECQ CX

// 8×24

#define ZERO3(A, B, C) \
	ZERO(A) \
	ZERO(B) \
	ZERO(C)

#define LOAD3(A, B, C) \
	VMOVUPD (DI), A \
	VMOVUPD 64(DI), B \
	VMOVUPD.Z 128(DI), K1, C \
	ADDQ AX, DI

#define ADD3(A, B, C) \
	VADDPD (DI), A, A \
	VADDPD 64(DI), B, B \
	VADDPD 128(DI), C, K1, C \
	ADDQ AX, DI

#define STORE3(A, B, C) \
	VMOVUPD A, (BX) \
	VMOVUPD B, 64(BX) \
	VMOVUPD C, K1, 128(BX) \
	ADDQ AX, BX

#define ROW3(FROM, T, A, B, C) \
	VBROADCASTSD FROM, T \
	VFMADD231PD Z24, T, A \
	VFMADD231PD Z25, T, B \
	VFMADD231PD Z26, T, C

#define ALL3(DO) \
	DO(Z0, Z1, Z2) \
	DO(Z3, Z4, Z5) \
	DO(Z6, Z7, Z8) \
	DO(Z9, Z10, Z11) \
	DO(Z12, Z13, Z14) \
	DO(Z15, Z16, Z17) \
	DO(Z18, Z19, Z20) \
	DO(Z21, Z22, Z23)

// func tile24AVX512(c *float64, ldc int, left *float64, lane, step int, right *float64, strip, n, mask int, chain bool)
TEXT ·tile24AVX512(SB), NOSPLIT, $0-73
	ARGUMENTS
	TESTQ R15, R15
	JNZ   load
	PREFETCH8(128)
	ALL3(ZERO3)
	JMP   start

load:
	ALL3(LOAD3)

start:
	TESTQ CX, CX
	JZ    end

	PCALIGN $64
loop:
	VMOVUPD (DX), Z24
	VMOVUPD (DX)(R11*1), Z25
	VMOVUPD (DX)(R11*2), Z26
	ROW3((SI), Z27, Z0, Z1, Z2)
	ROW3((SI)(R8*1), Z28, Z3, Z4, Z5)
	ROW3((SI)(R8*2), Z29, Z6, Z7, Z8)
	ROW3((SI)(R9*1), Z30, Z9, Z10, Z11)
	ROW3((R10), Z27, Z12, Z13, Z14)
	ROW3((R10)(R8*1), Z28, Z15, Z16, Z17)
	ROW3((R10)(R8*2), Z29, Z18, Z19, Z20)
	ROW3((R10)(R9*1), Z30, Z21, Z22, Z23)
	ADVANCE
	JNZ     loop

end:
	TESTQ R15, R15
	JNZ   store
	MOVQ  BX, DI
	ALL3(ADD3)

store:
	ALL3(STORE3)
	VZEROUPPER
	RET

// 8×16

#define ZERO2(A, B) \
	ZERO(A) \
	ZERO(B)

#define LOAD2(A, B) \
	VMOVUPD (DI), A \
	VMOVUPD.Z 64(DI), K1, B \
	ADDQ AX, DI

#define ADD2(A, B) \
	VADDPD (DI), A, A \
	VADDPD 64(DI), B, K1, B \
	ADDQ AX, DI

#define STORE2(A, B) \
	VMOVUPD A, (BX) \
	VMOVUPD B, K1, 64(BX) \
	ADDQ AX, BX

#define ROW2(FROM, T, A, B) \
	VBROADCASTSD FROM, T \
	VFMADD231PD Z24, T, A \
	VFMADD231PD Z25, T, B

#define ALL2(DO) \
	DO(Z0, Z1) \
	DO(Z2, Z3) \
	DO(Z4, Z5) \
	DO(Z6, Z7) \
	DO(Z8, Z9) \
	DO(Z10, Z11) \
	DO(Z12, Z13) \
	DO(Z14, Z15)

// func tile16AVX512(c *float64, ldc int, left *float64, lane, step int, right *float64, strip, n, mask int, chain bool)
TEXT ·tile16AVX512(SB), NOSPLIT, $0-73
	ARGUMENTS
	TESTQ R15, R15
	JNZ   load
	PREFETCH8(64)
	ALL2(ZERO2)
	JMP   start

load:
	ALL2(LOAD2)

start:
	TESTQ CX, CX
	JZ    end

	PCALIGN $64
loop:
	VMOVUPD (DX), Z24
	VMOVUPD (DX)(R11*1), Z25
	ROW2((SI), Z27, Z0, Z1)
	ROW2((SI)(R8*1), Z28, Z2, Z3)
	ROW2((SI)(R8*2), Z29, Z4, Z5)
	ROW2((SI)(R9*1), Z30, Z6, Z7)
	ROW2((R10), Z27, Z8, Z9)
	ROW2((R10)(R8*1), Z28, Z10, Z11)
	ROW2((R10)(R8*2), Z29, Z12, Z13)
	ROW2((R10)(R9*1), Z30, Z14, Z15)
	ADVANCE
	JNZ     loop

end:
	TESTQ R15, R15
	JNZ   store
	MOVQ  BX, DI
	ALL2(ADD2)

store:
	ALL2(STORE2)
	VZEROUPPER
	RET

// 8×8

#define LOAD1(A) \
	VMOVUPD.Z (DI), K1, A \
	ADDQ AX, DI

#define ADD1(A) \
	VADDPD (DI), A, K1, A \
	ADDQ AX, DI

#define STORE1(A) \
	VMOVUPD A, K1, (BX) \
	ADDQ AX, BX

#define ROW1(FROM, A) VFMADD231PD.BCST FROM, Z24, A

#define ALL1(DO) \
	DO(Z0) \
	DO(Z1) \
	DO(Z2) \
	DO(Z3) \
	DO(Z4) \
	DO(Z5) \
	DO(Z6) \
	DO(Z7)

// func tile8AVX512(c *float64, ldc int, left *float64, lane, step int, right *float64, strip, n, mask int, chain bool)
TEXT ·tile8AVX512(SB), NOSPLIT, $0-73
	ARGUMENTS
	TESTQ R15, R15
	JNZ   load
	PREFETCH8(0)
	ALL1(ZERO)
	JMP   start

load:
	ALL1(LOAD1)

start:
	TESTQ CX, CX
	JZ    end

	PCALIGN $64
loop:
	VMOVUPD (DX), Z24
	ROW1((SI), Z0)
	ROW1((SI)(R8*1), Z1)
	ROW1((SI)(R8*2), Z2)
	ROW1((SI)(R9*1), Z3)
	ROW1((R10), Z4)
	ROW1((R10)(R8*1), Z5)
	ROW1((R10)(R8*2), Z6)
	ROW1((R10)(R9*1), Z7)
	ADVANCE
	JNZ     loop

end:
	TESTQ R15, R15
	JNZ   store
	MOVQ  BX, DI
	ALL1(ADD1)

store:
	ALL1(STORE1)
	VZEROUPPER
	RET

// func packAVX512(dst, x *float64, ld, n, mask int)
TEXT ·packAVX512(SB), NOSPLIT, $0-40
	MOVQ dst+0(FP), DI
	MOVQ x+8(FP), SI
	MOVQ ld+16(FP), R8
	MOVQ n+24(FP), CX
	MOVQ mask+32(FP), AX
	KMOVW AX, K1

loop:
	VMOVUPD.Z (SI), K1, Z0
	VMOVUPD Z0, (DI)
	ADDQ R8, SI
	ADDQ $64, DI
	DECQ CX
	JNZ  loop
	VZEROUPPER
	RET
