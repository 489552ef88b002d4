#include "textflag.h"

DATA size<>+0(SB)/8, $0x7fffffffffffffff
GLOBL size<>(SB), RODATA|NOPTR, $8
DATA unit<>+0(SB)/8, $1.0
GLOBL unit<>(SB), RODATA|NOPTR, $8

// MASKS sets K1 to K4 for the next 32 columns.
#define MASKS \
	MOVQ $32, CX; \
	CMPQ R15, CX; \
	CMOVQLT R15, CX; \
	MOVQ $1, DX; \
	SHLQ CX, DX; \
	DECQ DX; \
	KMOVW DX, K1; \
	SHRQ $8, DX; \
	KMOVW DX, K2; \
	SHRQ $8, DX; \
	KMOVW DX, K3; \
	SHRQ $8, DX; \
	KMOVW DX, K4

// func pivots512(w, l *float64, row, n, t, end int, alpha float64) int
// As plainPivots. In the loop
//	R9  the row               R12 the last row
//	R11 row 0 of w, column R9 R10 row 0 of l, column R9   R8 bytes from row to row
//	AX  the row in w          DI  the row in l
//	R15 columns left          R14 bytes done
//	Z8  the largest size, K5 the columns of the first vector that count for it
TEXT ·pivots512(SB), NOSPLIT, $0-64
	MOVQ w+0(FP), R11
	MOVQ l+8(FP), R10
	MOVQ row+16(FP), R8
	SHLQ $3, R8
	MOVQ t+32(FP), R9
	MOVQ end+40(FP), R12
	LEAQ (R11)(R9*8), R11
	LEAQ (R10)(R9*8), R10
	MOVQ R8, AX
	IMULQ R9, AX
	LEAQ (R10)(AX*1), DI
	ADDQ R11, AX
	VBROADCASTSD size<>(SB), Z4

column:
	CMPQ R9, R12
	JGE  done
	MOVQ n+24(FP), R15
	SUBQ R9, R15
	XORQ R14, R14
	VPXORQ Z8, Z8, Z8

update:
	MASKS
	VMOVUPD.Z (AX)(R14*1), K1, Z16
	VMOVUPD.Z 64(AX)(R14*1), K2, Z17
	VMOVUPD.Z 128(AX)(R14*1), K3, Z18
	VMOVUPD.Z 192(AX)(R14*1), K4, Z19
	LEAQ (R11)(R14*1), DX
	MOVQ R10, SI
	MOVQ R9, CX
	TESTQ CX, CX
	JZ   updated

updatek:
	VBROADCASTSD (SI), Z0
	VFNMADD231PD (DX), Z0, K1, Z16
	VFNMADD231PD 64(DX), Z0, K2, Z17
	VFNMADD231PD 128(DX), Z0, K3, Z18
	VFNMADD231PD 192(DX), Z0, K4, Z19
	ADDQ R8, SI
	ADDQ R8, DX
	DECQ CX
	JNZ  updatek
	VMOVUPD Z16, K1, (AX)(R14*1)
	VMOVUPD Z17, K2, 64(AX)(R14*1)
	VMOVUPD Z18, K3, 128(AX)(R14*1)
	VMOVUPD Z19, K4, 192(AX)(R14*1)

updated:
	KMOVW K1, K5
	TESTQ R14, R14
	JNZ  compare
	VMOVAPD Z16, Z9 // the pivot stands first
	KMOVW K1, DX
	ANDQ $0xfe, DX
	KMOVW DX, K5

compare:
	VANDPD Z16, Z4, Z0
	VANDPD Z17, Z4, Z1
	VANDPD Z18, Z4, Z2
	VANDPD Z19, Z4, Z3
	VPMAXUQ Z0, Z8, K5, Z8
	VPMAXUQ Z1, Z2, Z2
	VPMAXUQ Z3, Z8, Z8
	VPMAXUQ Z2, Z8, Z8
	ADDQ $256, R14
	SUBQ $32, R15
	JGT  update

	VEXTRACTI64X4 $1, Z8, Y1
	VPMAXUQ Y1, Y8, Y8
	VEXTRACTI128 $1, Y8, X1
	VPMAXUQ X1, X8, X8
	VPSHUFD $0x4E, X8, X1
	VPMAXUQ X1, X8, X8
	VMULSD alpha+48(FP), X8, X8
	VANDPD X9, X4, X1
	MOVQ X8, DX
	MOVQ X1, CX
	CMPQ CX, DX // of sizes as whole numbers, as in peak512
	JLT  done
	TESTQ CX, CX
	JZ   done
	MOVQ $0x7ff0000000000000, DX
	CMPQ CX, DX
	JGE  done

	VMOVSD unit<>(SB), X1
	VDIVSD X9, X1, X1
	VBROADCASTSD X1, Z1
	MOVQ n+24(FP), R15
	SUBQ R9, R15
	XORQ R14, R14
	CMPQ R15, $32
	JLE  last // the numbers and their masks are still there

scale:
	MASKS
	VMOVUPD.Z (AX)(R14*1), K1, Z16
	VMOVUPD.Z 64(AX)(R14*1), K2, Z17
	VMOVUPD.Z 128(AX)(R14*1), K3, Z18
	VMOVUPD.Z 192(AX)(R14*1), K4, Z19

last:
	VMULPD Z16, Z1, Z16
	VMULPD Z17, Z1, Z17
	VMULPD Z18, Z1, Z18
	VMULPD Z19, Z1, Z19
	VMOVUPD Z16, K1, (DI)(R14*1)
	VMOVUPD Z17, K2, 64(DI)(R14*1)
	VMOVUPD Z18, K3, 128(DI)(R14*1)
	VMOVUPD Z19, K4, 192(DI)(R14*1)
	ADDQ $256, R14
	SUBQ $32, R15
	JGT  scale
	VMOVSD X9, (DI)

	INCQ R9
	ADDQ $8, R10
	ADDQ $8, R11
	LEAQ 8(AX)(R8*1), AX
	LEAQ 8(DI)(R8*1), DI
	JMP  column

done:
	MOVQ R9, ret+56(FP)
	VZEROUPPER
	RET
