#include "textflag.h"

// In both kernels
//	AX  eight (four) columns of dst    R9  bytes from row to row of dst
//	R10 as many rows of src            R11 bytes from row to row of src
//	R8  how many of them there are     R12 their scales, or nil
//	R13 the columns of src at hand     BX  how many of them there are, R14 how many are left
//	R15 columns of dst left
// and SI walks over src, DI over dst.

// TAIL sets K1 for CX numbers, at most eight.
#define TAIL \
	MOVQ $1, DX; \
	SHLQ CX, DX; \
	DECQ DX; \
	KMOVW DX, K1

DATA unit<>+0(SB)/8, $1.0
GLOBL unit<>(SB), RODATA|NOPTR, $8

// IN loads a row of the source while there are any, OUT stores one of the
// destination while it has any.
#define IN(V) \
	VMOVUPD.Z (SI), K1, V; \
	ADDQ R11, SI; \
	DECQ CX; \
	JZ   loaded

#define OUT(V) \
	VMULPD V, Z16, V; \
	VMOVUPD V, K2, (DI); \
	ADDQ R9, DI; \
	DECQ CX; \
	JZ   stored

// func turn512(dst *float64, dr int, src *float64, sr int, scale *float64, m, n int)
// puts the transpose of src, n x m, into dst, column t times scale[t]
// unless scale is nil: blocks of 8 x 8.
TEXT ·turn512(SB), NOSPLIT, $0-56
	MOVQ dst+0(FP), AX
	MOVQ dr+8(FP), R9
	SHLQ $3, R9
	MOVQ src+16(FP), R10
	MOVQ sr+24(FP), R11
	SHLQ $3, R11
	MOVQ scale+32(FP), R12
	MOVQ n+48(FP), R15

column: // eight columns of dst, rows of src
	MOVQ $8, R8
	CMPQ R15, R8
	CMOVQLT R15, R8
	MOVQ R8, CX
	TAIL
	KMOVW K1, K2
	VBROADCASTSD unit<>(SB), Z16
	TESTQ R12, R12
	JZ   scaled
	VMOVUPD.Z (R12), K2, Z16
	ADDQ $64, R12

scaled:
	MOVQ AX, DI
	MOVQ R10, R13
	MOVQ m+40(FP), R14

row:
	MOVQ $8, BX
	CMPQ R14, BX
	CMOVQLT R14, BX
	MOVQ BX, CX
	TAIL
	MOVQ R13, SI
	MOVQ R8, CX
	IN(Z0)
	IN(Z1)
	IN(Z2)
	IN(Z3)
	IN(Z4)
	IN(Z5)
	IN(Z6)
	IN(Z7)

loaded:
	VUNPCKLPD Z1, Z0, Z8
	VUNPCKHPD Z1, Z0, Z9
	VUNPCKLPD Z3, Z2, Z10
	VUNPCKHPD Z3, Z2, Z11
	VUNPCKLPD Z5, Z4, Z12
	VUNPCKHPD Z5, Z4, Z13
	VUNPCKLPD Z7, Z6, Z14
	VUNPCKHPD Z7, Z6, Z15
	VSHUFF64X2 $0x88, Z10, Z8, Z17
	VSHUFF64X2 $0xDD, Z10, Z8, Z18
	VSHUFF64X2 $0x88, Z14, Z12, Z19
	VSHUFF64X2 $0xDD, Z14, Z12, Z20
	VSHUFF64X2 $0x88, Z11, Z9, Z21
	VSHUFF64X2 $0xDD, Z11, Z9, Z22
	VSHUFF64X2 $0x88, Z15, Z13, Z23
	VSHUFF64X2 $0xDD, Z15, Z13, Z24
	VSHUFF64X2 $0x88, Z19, Z17, Z8
	VSHUFF64X2 $0x88, Z23, Z21, Z9
	VSHUFF64X2 $0x88, Z20, Z18, Z10
	VSHUFF64X2 $0x88, Z24, Z22, Z11
	VSHUFF64X2 $0xDD, Z19, Z17, Z12
	VSHUFF64X2 $0xDD, Z23, Z21, Z13
	VSHUFF64X2 $0xDD, Z20, Z18, Z14
	VSHUFF64X2 $0xDD, Z24, Z22, Z15
	MOVQ BX, CX
	OUT(Z8)
	OUT(Z9)
	OUT(Z10)
	OUT(Z11)
	OUT(Z12)
	OUT(Z13)
	OUT(Z14)
	OUT(Z15)

stored:
	ADDQ $64, R13
	SUBQ $8, R14
	JGT  row
	ADDQ $64, AX
	LEAQ (R10)(R11*8), R10
	SUBQ $8, R15
	JGT  column
	VZEROUPPER
	RET

#define CIN(V) \
	VMOVUPD.Z (SI), K1, V; \
	ADDQ R11, SI; \
	DECQ CX; \
	JZ   cloaded

// COUT is OUT for complex numbers: the scales are in Z16, exchanged in pairs in Z17.
#define COUT(V) \
	VMOVDDUP V, Z18; \
	VPERMILPD $0xff, V, Z19; \
	VMULPD Z17, Z19, Z19; \
	VFMADDSUB213PD Z19, Z16, Z18; \
	VMOVUPD Z18, K2, (DI); \
	ADDQ R9, DI; \
	DECQ CX; \
	JZ   cstored

// CPUT stores the numbers as they are.
#define CPUT(V) \
	VMOVUPD V, K2, (DI); \
	ADDQ R9, DI; \
	DECQ CX; \
	JZ   cstored

// func turn512complex(dst *complex128, dr int, src *complex128, sr int, scale *complex128, m, n int)
// does the same with blocks of 4 x 4.
TEXT ·turn512complex(SB), NOSPLIT, $0-56
	MOVQ dst+0(FP), AX
	MOVQ dr+8(FP), R9
	SHLQ $4, R9
	MOVQ src+16(FP), R10
	MOVQ sr+24(FP), R11
	SHLQ $4, R11
	MOVQ scale+32(FP), R12
	MOVQ n+48(FP), R15

ccolumn:
	MOVQ $4, R8
	CMPQ R15, R8
	CMOVQLT R15, R8
	LEAQ (R8)(R8*1), CX
	TAIL
	KMOVW K1, K2
	TESTQ R12, R12
	JZ   cscaled
	VMOVUPD.Z (R12), K2, Z16
	VPERMILPD $0x55, Z16, Z17
	ADDQ $64, R12

cscaled:
	MOVQ AX, DI
	MOVQ R10, R13
	MOVQ m+40(FP), R14

crow:
	MOVQ $4, BX
	CMPQ R14, BX
	CMOVQLT R14, BX
	LEAQ (BX)(BX*1), CX
	TAIL
	MOVQ R13, SI
	MOVQ R8, CX
	CIN(Z0)
	CIN(Z1)
	CIN(Z2)
	CIN(Z3)

cloaded:
	VSHUFF64X2 $0x44, Z1, Z0, Z4
	VSHUFF64X2 $0xEE, Z1, Z0, Z5
	VSHUFF64X2 $0x44, Z3, Z2, Z6
	VSHUFF64X2 $0xEE, Z3, Z2, Z7
	VSHUFF64X2 $0x88, Z6, Z4, Z8
	VSHUFF64X2 $0xDD, Z6, Z4, Z9
	VSHUFF64X2 $0x88, Z7, Z5, Z10
	VSHUFF64X2 $0xDD, Z7, Z5, Z11
	MOVQ BX, CX
	TESTQ R12, R12
	JZ   cplain
	COUT(Z8)
	COUT(Z9)
	COUT(Z10)
	COUT(Z11)

cplain:
	CPUT(Z8)
	CPUT(Z9)
	CPUT(Z10)
	CPUT(Z11)

cstored:
	ADDQ $64, R13
	SUBQ $4, R14
	JGT  crow
	ADDQ $64, AX
	LEAQ (R10)(R11*4), R10
	SUBQ $4, R15
	JGT  ccolumn
	VZEROUPPER
	RET
