#include "textflag.h"

DATA used<>+0(SB)/8, $-1
DATA used<>+8(SB)/8, $-1
DATA used<>+16(SB)/8, $-1
DATA used<>+24(SB)/8, $-1
DATA used<>+32(SB)/8, $-1
DATA used<>+40(SB)/8, $-1
DATA used<>+48(SB)/8, $-1
DATA used<>+56(SB)/8, $-1
DATA used<>+64(SB)/8, $0
DATA used<>+72(SB)/8, $0
DATA used<>+80(SB)/8, $0
DATA used<>+88(SB)/8, $0
DATA used<>+96(SB)/8, $0
DATA used<>+104(SB)/8, $0
DATA used<>+112(SB)/8, $0
DATA used<>+120(SB)/8, $0
GLOBL used<>(SB), RODATA|NOPTR, $128

// TAIL sets Y14 and Y15 for the CX numbers that are left, fewer than eight.
#define TAIL \
	NEGQ CX; \
	LEAQ used<>(SB), DX; \
	VMOVUPD 64(DX)(CX*8), Y14; \
	VMOVUPD 96(DX)(CX*8), Y15

// FOLD adds eight numbers, four in P and four in Q: (0+4)+(2+6) comes to the lower place of
// X, the lower half of P, and (1+5)+(3+7) to the upper.
#define FOLD(P, Q, X) \
	VADDPD Q, P, P; \
	VEXTRACTF128 $1, P, X2; \
	VADDPD X2, X, X

// TAKE takes the sum of the eight numbers off the number that AX points at and goes on to the next.
#define TAKE(P, Q, X) \
	FOLD(P, Q, X); \
	VPERMILPD $1, X, X2; \
	VADDSD X2, X, X; \
	VMOVSD (AX), X2; \
	VSUBSD X, X2, X2; \
	VMOVSD X2, (AX); \
	ADDQ $8, AX

// MORE adds the products of the eight numbers at A with those in Y0 and Y1; LAST those in use.
#define MORE(A, B, P, Q) \
	VFMADD231PD A, Y0, P; \
	VFMADD231PD B, Y1, Q

#define LAST(A, B, P, Q) \
	VMASKMOVPD A, Y14, Y2; \
	VMASKMOVPD B, Y15, Y3; \
	VFMADD231PD Y2, Y0, P; \
	VFMADD231PD Y3, Y1, Q

#define ZERO(P) VXORPD P, P, P

// func dots256(y, a *float64, row int, x *float64, m, k int)
// takes the products of m rows of A with x off y, four rows at a time.
TEXT ·dots256(SB), NOSPLIT, $0-48
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

four:
	CMPQ R14, $4
	JLT  one
	MOVQ R10, SI
	MOVQ R13, DX
	MOVQ R15, CX
	ZERO(Y4)
	ZERO(Y5)
	ZERO(Y6)
	ZERO(Y7)
	ZERO(Y8)
	ZERO(Y9)
	ZERO(Y10)
	ZERO(Y11)
	SUBQ $8, CX
	JLT  fourtail

fourk:
	VMOVUPD (DX), Y0
	VMOVUPD 32(DX), Y1
	MORE((SI), 32(SI), Y4, Y5)
	MORE((SI)(R11*1), 32(SI)(R11*1), Y6, Y7)
	MORE((SI)(R11*2), 32(SI)(R11*2), Y8, Y9)
	MORE((SI)(BX*1), 32(SI)(BX*1), Y10, Y11)
	ADDQ $64, SI
	ADDQ $64, DX
	SUBQ $8, CX
	JGE  fourk

fourtail:
	ADDQ $8, CX
	JZ   fourend
	VMASKMOVPD (DX), Y14, Y0
	VMASKMOVPD 32(DX), Y15, Y1
	LAST((SI), 32(SI), Y4, Y5)
	LAST((SI)(R11*1), 32(SI)(R11*1), Y6, Y7)
	LAST((SI)(R11*2), 32(SI)(R11*2), Y8, Y9)
	LAST((SI)(BX*1), 32(SI)(BX*1), Y10, Y11)

fourend:
	TAKE(Y4, Y5, X4)
	TAKE(Y6, Y7, X6)
	TAKE(Y8, Y9, X8)
	TAKE(Y10, Y11, X10)
	LEAQ (R10)(R11*4), R10
	SUBQ $4, R14
	JMP  four

one:
	TESTQ R14, R14
	JZ   done
	MOVQ R10, SI
	MOVQ R13, DX
	MOVQ R15, CX
	ZERO(Y4)
	ZERO(Y5)
	SUBQ $8, CX
	JLT  onetail

onek:
	VMOVUPD (DX), Y0
	VMOVUPD 32(DX), Y1
	MORE((SI), 32(SI), Y4, Y5)
	ADDQ $64, SI
	ADDQ $64, DX
	SUBQ $8, CX
	JGE  onek

onetail:
	ADDQ $8, CX
	JZ   oneend
	VMASKMOVPD (DX), Y14, Y0
	VMASKMOVPD 32(DX), Y15, Y1
	LAST((SI), 32(SI), Y4, Y5)

oneend:
	TAKE(Y4, Y5, X4)
	ADDQ R11, R10
	DECQ R14
	JMP  one

done:
	VZEROUPPER
	RET

// CMORE adds the products of Y0, Y1 with Y2, Y3 and with these exchanged in pairs.
#define CMORE \
	VFMADD231PD Y0, Y2, Y4; \
	VFMADD231PD Y1, Y3, Y5; \
	VPERMILPD $5, Y2, Y2; \
	VPERMILPD $5, Y3, Y3; \
	VFMADD231PD Y0, Y2, Y6; \
	VFMADD231PD Y1, Y3, Y7

// func dot256complex(x, y *complex128, n int) (rr, ii, ri, ir float64)
TEXT ·dot256complex(SB), NOSPLIT, $0-56
	MOVQ x+0(FP), SI
	MOVQ y+8(FP), DI
	MOVQ n+16(FP), BX
	ADDQ BX, BX
	MOVQ BX, CX
	ANDQ $7, CX
	TAIL
	ZERO(Y4)
	ZERO(Y5)
	ZERO(Y6)
	ZERO(Y7)
	SUBQ $8, BX
	JLT  ctail

ck:
	VMOVUPD (SI), Y0
	VMOVUPD 32(SI), Y1
	VMOVUPD (DI), Y2
	VMOVUPD 32(DI), Y3
	CMORE
	ADDQ $64, SI
	ADDQ $64, DI
	SUBQ $8, BX
	JGE  ck

ctail:
	ADDQ $8, BX
	JZ   cend
	VMASKMOVPD (SI), Y14, Y0
	VMASKMOVPD 32(SI), Y15, Y1
	VMASKMOVPD (DI), Y14, Y2
	VMASKMOVPD 32(DI), Y15, Y3
	CMORE

cend:
	FOLD(Y4, Y5, X4)
	FOLD(Y6, Y7, X6)
	VMOVUPD X4, rr+24(FP)
	VMOVUPD X6, ri+40(FP)
	VZEROUPPER
	RET
