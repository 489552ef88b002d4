// Macros of the 512-bit kernels. In all of them
//	R8  bytes from row to row of B       R9  bytes from row to row of C
//	R11 bytes from row to row of A, BX three times that
//	SI, DI walk over A (DI four rows down) or C, DX over B, CX counts
//	R15 columns left
//	K1, K2 the columns in use in the first and the second vector

// MASKS sets K1 and K2 for the next 16 columns.
#define MASKS \
	MOVQ  $16, CX; \
	CMPQ  R15, CX; \
	CMOVQLT R15, CX; \
	MOVQ  $1, DX; \
	SHLQ  CX, DX; \
	DECQ  DX; \
	KMOVW DX, K1; \
	SHRQ  $8, DX; \
	KMOVW DX, K2

// LOAD2 and STORE2 move a row of C that SI points at and go on to the next; LOAD1 and STORE1 half as much.
#define LOAD2(P, Q) \
	VMOVUPD.Z (SI), K1, P; \
	VMOVUPD.Z 64(SI), K2, Q; \
	ADDQ R9, SI

#define STORE2(P, Q) \
	VMOVUPD P, K1, (SI); \
	VMOVUPD Q, K2, 64(SI); \
	ADDQ R9, SI

#define LOAD1(P) \
	VMOVUPD.Z (SI), K1, P; \
	ADDQ R9, SI

#define STORE1(P) \
	VMOVUPD P, K1, (SI); \
	ADDQ R9, SI

// B2 and B1 load a row of B.
#define B2 \
	VMOVUPD.Z (DX), K1, Z0; \
	VMOVUPD.Z 64(DX), K2, Z1; \
	ADDQ R8, DX

#define B1 \
	VMOVUPD.Z (DX), K1, Z0; \
	ADDQ R8, DX

// FNMA2 takes A times the row of B off P, Q.
#define FNMA2(A, T, P, Q) \
	VBROADCASTSD A, T; \
	VFNMADD231PD Z0, T, P; \
	VFNMADD231PD Z1, T, Q

// CLOSE puts the sum U of the products with imaginary parts into P: to the real parts is
// added, from the imaginary parts taken, what U holds for the other. Z10 holds ones.
#define CLOSE(U, P) \
	VPERMILPD $0x55, U, U; \
	VFMSUBADD213PD U, Z10, P

#define ZERO(P) VPXORQ P, P, P

