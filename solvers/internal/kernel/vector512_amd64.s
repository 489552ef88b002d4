#include "textflag.h"

// FOLD adds the eight numbers of Z: (0+4)+(2+6) comes to the lower place of X, (1+5)+(3+7) to the upper.
#define FOLD(Z, Y, X, U, V) \
	VEXTRACTF64X4 $1, Z, U; \
	VADDPD U, Y, Y; \
	VEXTRACTF128 $1, Y, V; \
	VADDPD V, X, X

// TAKE takes the sum of the eight numbers off the number that AX points at and goes on to the next.
#define TAKE(Z, Y, X) \
	FOLD(Z, Y, X, Y1, X1); \
	VPERMILPD $1, X, X1; \
	VADDSD X1, X, X; \
	VMOVSD (AX), X2; \
	VSUBSD X, X2, X2; \
	VMOVSD X2, (AX); \
	ADDQ $8, AX

// TAIL sets K1 for the CX numbers that are left, fewer than eight.
#define TAIL \
	MOVQ $1, DX; \
	SHLQ CX, DX; \
	DECQ DX; \
	KMOVW DX, K1

// func dots512(y, a *float64, row int, x *float64, m, k int)
// takes the products of m rows of A with x off y, eight rows at a time.
TEXT ·dots512(SB), NOSPLIT, $0-48
	MOVQ y+0(FP), AX
	MOVQ a+8(FP), R10
	MOVQ row+16(FP), R11
	SHLQ $3, R11
	LEAQ (R11)(R11*2), BX
	MOVQ x+24(FP), R13
	MOVQ m+32(FP), R14
	MOVQ k+40(FP), R15
	MOVQ R15, CX
	ANDQ $7, CX
	TAIL

eight:
	CMPQ R14, $8
	JLT  one
	MOVQ R10, SI
	LEAQ (R10)(R11*4), DI
	MOVQ R13, DX
	MOVQ R15, CX
	VPXORQ Z8, Z8, Z8
	VPXORQ Z9, Z9, Z9
	VPXORQ Z10, Z10, Z10
	VPXORQ Z11, Z11, Z11
	VPXORQ Z12, Z12, Z12
	VPXORQ Z13, Z13, Z13
	VPXORQ Z14, Z14, Z14
	VPXORQ Z15, Z15, Z15
	SUBQ $8, CX
	JLT  eighttail

eightk:
	VMOVUPD (DX), Z0
	VFMADD231PD (SI), Z0, Z8
	VFMADD231PD (SI)(R11*1), Z0, Z9
	VFMADD231PD (SI)(R11*2), Z0, Z10
	VFMADD231PD (SI)(BX*1), Z0, Z11
	VFMADD231PD (DI), Z0, Z12
	VFMADD231PD (DI)(R11*1), Z0, Z13
	VFMADD231PD (DI)(R11*2), Z0, Z14
	VFMADD231PD (DI)(BX*1), Z0, Z15
	ADDQ $64, SI
	ADDQ $64, DI
	ADDQ $64, DX
	SUBQ $8, CX
	JGE  eightk

eighttail:
	ADDQ $8, CX
	JZ   eightend
	VMOVUPD.Z (DX), K1, Z0
	VMOVUPD.Z (SI), K1, Z16
	VMOVUPD.Z (SI)(R11*1), K1, Z17
	VMOVUPD.Z (SI)(R11*2), K1, Z18
	VMOVUPD.Z (SI)(BX*1), K1, Z19
	VMOVUPD.Z (DI), K1, Z20
	VMOVUPD.Z (DI)(R11*1), K1, Z21
	VMOVUPD.Z (DI)(R11*2), K1, Z22
	VMOVUPD.Z (DI)(BX*1), K1, Z23
	VFMADD231PD Z16, Z0, Z8
	VFMADD231PD Z17, Z0, Z9
	VFMADD231PD Z18, Z0, Z10
	VFMADD231PD Z19, Z0, Z11
	VFMADD231PD Z20, Z0, Z12
	VFMADD231PD Z21, Z0, Z13
	VFMADD231PD Z22, Z0, Z14
	VFMADD231PD Z23, Z0, Z15

eightend:
	TAKE(Z8, Y8, X8)
	TAKE(Z9, Y9, X9)
	TAKE(Z10, Y10, X10)
	TAKE(Z11, Y11, X11)
	TAKE(Z12, Y12, X12)
	TAKE(Z13, Y13, X13)
	TAKE(Z14, Y14, X14)
	TAKE(Z15, Y15, X15)
	LEAQ (R10)(R11*8), R10
	SUBQ $8, R14
	JMP  eight

one:
	TESTQ R14, R14
	JZ   done
	MOVQ R10, SI
	MOVQ R13, DX
	MOVQ R15, CX
	VPXORQ Z8, Z8, Z8
	SUBQ $8, CX
	JLT  onetail

onek:
	VMOVUPD (DX), Z0
	VFMADD231PD (SI), Z0, Z8
	ADDQ $64, SI
	ADDQ $64, DX
	SUBQ $8, CX
	JGE  onek

onetail:
	ADDQ $8, CX
	JZ   oneend
	VMOVUPD.Z (DX), K1, Z0
	VMOVUPD.Z (SI), K1, Z16
	VFMADD231PD Z16, Z0, Z8

oneend:
	TAKE(Z8, Y8, X8)
	ADDQ R11, R10
	DECQ R14
	JMP  one

done:
	VZEROUPPER
	RET

// func dot512complex(x, y *complex128, n int) (rr, ii, ri, ir float64)
// gives the sums of the products of real parts, of imaginary parts, of real with imaginary
// parts and of imaginary with real parts.
TEXT ·dot512complex(SB), NOSPLIT, $0-56
	MOVQ x+0(FP), SI
	MOVQ y+8(FP), DI
	MOVQ n+16(FP), BX
	ADDQ BX, BX
	MOVQ BX, CX
	ANDQ $7, CX
	TAIL
	VPXORQ Z8, Z8, Z8
	VPXORQ Z9, Z9, Z9
	SUBQ $8, BX
	JLT  ctail

ck:
	VMOVUPD (SI), Z0
	VMOVUPD (DI), Z2
	VPERMILPD $0x55, Z2, Z3
	VFMADD231PD Z0, Z2, Z8
	VFMADD231PD Z0, Z3, Z9
	ADDQ $64, SI
	ADDQ $64, DI
	SUBQ $8, BX
	JGE  ck

ctail:
	ADDQ $8, BX
	JZ   cend
	VMOVUPD.Z (SI), K1, Z0
	VMOVUPD.Z (DI), K1, Z2
	VPERMILPD $0x55, Z2, Z3
	VFMADD231PD Z0, Z2, Z8
	VFMADD231PD Z0, Z3, Z9

cend:
	FOLD(Z8, Y8, X8, Y1, X1)
	FOLD(Z9, Y9, X9, Y1, X1)
	VMOVUPD X8, rr+24(FP)
	VMOVUPD X9, ri+40(FP)
	VZEROUPPER
	RET

DATA size<>+0(SB)/8, $0x7fffffffffffffff
GLOBL size<>(SB), RODATA|NOPTR, $8

// Sizes are compared as whole numbers: that is their order, with NaN above all.

// LARGEST leaves the largest of the sizes of Z8 in X8.
#define LARGEST \
	VEXTRACTI64X4 $1, Z8, Y1; \
	VPMAXUQ Y1, Y8, Y8; \
	VEXTRACTI128 $1, Y8, X1; \
	VPMAXUQ X1, X8, X8; \
	VPSHUFD $0x4E, X8, X1; \
	VPMAXUQ X1, X8, X8

// func peak512(x *float64, n int) float64
TEXT ·peak512(SB), NOSPLIT, $0-24
	MOVQ x+0(FP), SI
	MOVQ n+8(FP), BX
	VBROADCASTSD size<>(SB), Z4
	MOVQ BX, CX
	ANDQ $7, CX
	TAIL
	VPXORQ Z8, Z8, Z8
	SUBQ $8, BX
	JLT  ptail

pk:
	VANDPD (SI), Z4, Z0
	VPMAXUQ Z8, Z0, Z8
	ADDQ $64, SI
	SUBQ $8, BX
	JGE  pk

ptail:
	ADDQ $8, BX
	JZ   pend
	VMOVUPD.Z (SI), K1, Z0
	VANDPD Z0, Z4, Z0
	VPMAXUQ Z8, Z0, Z8

pend:
	LARGEST
	VMOVSD X8, ret+16(FP)
	VZEROUPPER
	RET

// func peak512complex(x *complex128, n int) float64
TEXT ·peak512complex(SB), NOSPLIT, $0-24
	MOVQ x+0(FP), SI
	MOVQ n+8(FP), BX
	ADDQ BX, BX
	VBROADCASTSD size<>(SB), Z4
	MOVQ BX, CX
	ANDQ $7, CX
	TAIL
	VPXORQ Z8, Z8, Z8
	SUBQ $8, BX
	JLT  qtail

qk:
	VANDPD (SI), Z4, Z0
	VPERMILPD $0x55, Z0, Z1
	VADDPD Z1, Z0, Z0
	VPMAXUQ Z8, Z0, Z8
	ADDQ $64, SI
	SUBQ $8, BX
	JGE  qk

qtail:
	ADDQ $8, BX
	JZ   qend
	VMOVUPD.Z (SI), K1, Z0
	VANDPD Z0, Z4, Z0
	VPERMILPD $0x55, Z0, Z1
	VADDPD Z1, Z0, Z0
	VPMAXUQ Z8, Z0, Z8

qend:
	LARGEST
	VMOVSD X8, ret+16(FP)
	VZEROUPPER
	RET
