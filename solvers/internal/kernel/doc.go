// Package kernel has the inner loops of dense linear algebra for blocks that fit into a
// processor's caches, for real and complex numbers.
//
// Each kernel is defined by a loop in plain Go (portable.go) that says in which order an
// entry of the result is summed, with fused multiply-adds throughout. Where an amd64 processor
// has them, 512-bit or 256-bit vectors do the same sums entry by entry, so that a result has the
// same bits whichever of them runs. (A NaN is a NaN everywhere; its payload is not kept.) The
// widest set of instructions that the processor and the system have is taken when the program
// starts; GODEBUG=cpu.avx512f=off or cpu.avx2=off leave one out.
//
// Matrices are views of slices, in rows. A slice must reach as far as the shape says, or the call
// panics; a shape without rows or columns does nothing. Nothing is allocated.
//
// Source of the way to block: Goto and van de Geijn, Anatomy of high-performance matrix
// multiplication, ACM TOMS 34 (2008), article 12. A block of C stays in registers while A is
// broadcast and B comes in vectors; as the blocks of this program fit into the second cache, A is
// never packed, and B only where its rows are long.
package kernel
