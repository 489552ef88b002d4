#include "textflag.h"

// The register block of C is 4 rows of 8 numbers (two vectors), or 2 rows of 4 complex
// numbers with two sums each. The registers are used as in the 512-bit kernels:
//	AX  the block of C          R9  bytes from row to row of C
//	R10 the block's rows of A   R11 bytes from row to row, BX three times that,
//	                            R12 bytes from column to column of A
//	R13 the panel of B          R8  bytes from row to row of B
//	R14 rows left               R15 columns left
//	Y14, Y15 the columns in use in the first and the second vector
// and SI walks over A or C, DX over B, CX counts.

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

DATA one<>+0(SB)/8, $1.0
GLOBL one<>(SB), RODATA|NOPTR, $8

// MASKS sets Y14 and Y15 for the next 8 columns.
#define MASKS \
	MOVQ $8, CX; \
	CMPQ R15, CX; \
	CMOVQLT R15, CX; \
	NEGQ CX; \
	LEAQ used<>(SB), DX; \
	VMOVUPD 64(DX)(CX*8), Y14; \
	VMOVUPD 96(DX)(CX*8), Y15

#define LOAD2(P, Q) \
	VMASKMOVPD (SI), Y14, P; \
	VMASKMOVPD 32(SI), Y15, Q; \
	ADDQ R9, SI

// STORE2 is a plain store, PUT2 one of the columns in use, which may be slow.
#define STORE2(P, Q) \
	VMOVUPD P, (SI); \
	VMOVUPD Q, 32(SI); \
	ADDQ R9, SI

#define PUT2(P, Q) \
	VMASKMOVPD P, Y14, (SI); \
	VMASKMOVPD Q, Y15, 32(SI); \
	ADDQ R9, SI

#define START \
	MOVQ R10, SI; \
	MOVQ R13, DX; \
	MOVQ k+72(FP), CX

#define B2 \
	VMASKMOVPD (DX), Y14, Y0; \
	VMASKMOVPD 32(DX), Y15, Y1; \
	ADDQ R8, DX

#define FNMA2(A, P, Q) \
	VBROADCASTSD A, Y2; \
	VFNMADD231PD Y0, Y2, P; \
	VFNMADD231PD Y1, Y2, Q

// func sub256(c *float64, ldc int, a *float64, ars, acs int, b *float64, ldb, m, n, k int)
TEXT ·sub256(SB), NOSPLIT, $0-80
	MOVQ ldc+8(FP), R9
	SHLQ $3, R9
	MOVQ ars+24(FP), R11
	SHLQ $3, R11
	LEAQ (R11)(R11*2), BX
	MOVQ acs+32(FP), R12
	SHLQ $3, R12
	MOVQ b+40(FP), R13
	MOVQ ldb+48(FP), R8
	SHLQ $3, R8
	MOVQ n+64(FP), R15

panel:
	MASKS
	MOVQ c+0(FP), AX
	MOVQ a+16(FP), R10
	MOVQ m+56(FP), R14

four:
	CMPQ R14, $4
	JLT  one
	MOVQ AX, SI
	LOAD2(Y4, Y5)
	LOAD2(Y6, Y7)
	LOAD2(Y8, Y9)
	LOAD2(Y10, Y11)
	START

fourk:
	B2
	FNMA2((SI), Y4, Y5)
	FNMA2((SI)(R11*1), Y6, Y7)
	FNMA2((SI)(R11*2), Y8, Y9)
	FNMA2((SI)(BX*1), Y10, Y11)
	ADDQ R12, SI
	DECQ CX
	JNZ  fourk
	MOVQ AX, SI
	LEAQ (AX)(R9*4), AX
	LEAQ (R10)(R11*4), R10
	SUBQ $4, R14
	CMPQ R15, $8
	JLT  fourput
	STORE2(Y4, Y5)
	STORE2(Y6, Y7)
	STORE2(Y8, Y9)
	STORE2(Y10, Y11)
	JMP  four

fourput:
	PUT2(Y4, Y5)
	PUT2(Y6, Y7)
	PUT2(Y8, Y9)
	PUT2(Y10, Y11)
	JMP  four

one:
	TESTQ R14, R14
	JZ   next
	MOVQ AX, SI
	LOAD2(Y4, Y5)
	START

onek:
	B2
	FNMA2((SI), Y4, Y5)
	ADDQ R12, SI
	DECQ CX
	JNZ  onek
	MOVQ AX, SI
	PUT2(Y4, Y5)
	ADDQ R9, AX
	ADDQ R11, R10
	DECQ R14
	JMP  one

next:
	ADDQ $64, c+0(FP)
	ADDQ $64, R13
	SUBQ $8, R15
	JGT  panel
	VZEROUPPER
	RET

// CTAKE takes the number at A, B times the row of B off the sums P, Q and U, V.
#define CTAKE(A, B, P, Q, U, V) \
	VBROADCASTSD A, Y2; \
	VBROADCASTSD B, Y3; \
	VFNMADD231PD Y0, Y2, P; \
	VFNMADD231PD Y1, Y2, Q; \
	VFMADD231PD Y0, Y3, U; \
	VFMADD231PD Y1, Y3, V

// CLOSE puts the sum U of the products with imaginary parts into P: to the real parts is
// added, from the imaginary parts taken, what U holds for the other. Y13 holds ones.
#define CLOSE(U, P) \
	VPERMILPD $5, U, U; \
	VFMSUBADD213PD U, Y13, P

#define ZERO(P) VXORPD P, P, P

// func sub256complex(c *complex128, ldc int, a *complex128, ars, acs int, b *complex128, ldb, m, n, k int)
TEXT ·sub256complex(SB), NOSPLIT, $0-80
	VBROADCASTSD one<>(SB), Y13
	MOVQ ldc+8(FP), R9
	SHLQ $4, R9
	MOVQ ars+24(FP), R11
	SHLQ $4, R11
	MOVQ acs+32(FP), R12
	SHLQ $4, R12
	MOVQ b+40(FP), R13
	MOVQ ldb+48(FP), R8
	SHLQ $4, R8
	MOVQ n+64(FP), R15
	ADDQ R15, R15

cpanel:
	MASKS
	MOVQ c+0(FP), AX
	MOVQ a+16(FP), R10
	MOVQ m+56(FP), R14

ctwo:
	CMPQ R14, $2
	JLT  cone
	MOVQ AX, SI
	LOAD2(Y4, Y5)
	LOAD2(Y6, Y7)
	ZERO(Y8)
	ZERO(Y9)
	ZERO(Y10)
	ZERO(Y11)
	START

ctwok:
	B2
	CTAKE((SI), 8(SI), Y4, Y5, Y8, Y9)
	CTAKE((SI)(R11*1), 8(SI)(R11*1), Y6, Y7, Y10, Y11)
	ADDQ R12, SI
	DECQ CX
	JNZ  ctwok
	CLOSE(Y8, Y4)
	CLOSE(Y9, Y5)
	CLOSE(Y10, Y6)
	CLOSE(Y11, Y7)
	MOVQ AX, SI
	LEAQ (AX)(R9*2), AX
	LEAQ (R10)(R11*2), R10
	SUBQ $2, R14
	CMPQ R15, $8
	JLT  ctwoput
	STORE2(Y4, Y5)
	STORE2(Y6, Y7)
	JMP  ctwo

ctwoput:
	PUT2(Y4, Y5)
	PUT2(Y6, Y7)
	JMP  ctwo

cone:
	TESTQ R14, R14
	JZ   cnext
	MOVQ AX, SI
	LOAD2(Y4, Y5)
	ZERO(Y8)
	ZERO(Y9)
	START

conek:
	B2
	CTAKE((SI), 8(SI), Y4, Y5, Y8, Y9)
	ADDQ R12, SI
	DECQ CX
	JNZ  conek
	CLOSE(Y8, Y4)
	CLOSE(Y9, Y5)
	MOVQ AX, SI
	PUT2(Y4, Y5)

cnext:
	ADDQ $64, c+0(FP)
	ADDQ $64, R13
	SUBQ $8, R15
	JGT  cpanel
	VZEROUPPER
	RET
