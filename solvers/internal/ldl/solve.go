package ldl

import "betaloom/solvers/internal/kernel"

// strip is the number of rows of L11 that a solution takes together.
const strip = 8

// Down solves for the eliminated unknowns: x (S numbers, a right-hand side) becomes D^-1 L11^-1 P x
// and L21 L11^-1 P x is taken off below (N-S numbers). work has room for 3 S.
func (f *Front[T]) Down(x, below, work []T) {
	s := f.S
	z := work[:s]
	for i, p := range f.Perm {
		z[i] = x[p]
	}
	f.forward(z)
	kernel.SubDots(below, view(f.Panel[s*s:], s), z, len(below))
	for k := 0; k < s; k++ {
		if f.Off[k] == 0 {
			x[k] = z[k] / f.Panel[k*s+k]
			continue
		}
		i11, i21, i22 := invert2(f.Panel[k*s+k], f.Off[k], f.Panel[(k+1)*s+k+1])
		x[k], x[k+1] = i11*z[k]+i21*z[k+1], i21*z[k]+i22*z[k+1]
		k++
	}
}

// forward solves L11 z = z in place.
func (f *Front[T]) forward(z []T) {
	s := f.S
	for j := 0; j < s; j += strip {
		end := min(j+strip, s)
		if j > 0 {
			kernel.SubDots(z[j:end], view(f.Panel[j*s:], s), z[:j], end-j)
		}
		for i := j + 1; i < end; i++ {
			l, v := f.Panel[i*s+j:i*s+i], z[i]
			for t, u := range z[j:i] {
				v -= l[t] * u
			}
			z[i] = v
		}
	}
}

// Up finishes what Down began, from the values of the unknowns that were left:
// x becomes P' L11'^-1 (x - L21' below).
func (f *Front[T]) Up(x, below, work []T) {
	s := f.S
	z := work[:s]
	copy(z, x)
	kernel.SubRow(z, below, f.Panel[s*s:], s)
	f.backward(z)
	for i, p := range f.Perm {
		x[p] = z[i]
	}
}

// backward solves L11' z = z in place.
func (f *Front[T]) backward(z []T) {
	s := f.S
	for end := s; end > 0; {
		j := (end - 1) / strip * strip
		for i := end - 1; i > j; i-- {
			l, v := f.Panel[i*s+j:i*s+i], z[i]
			u := z[j:i]
			for t := range u {
				u[t] -= l[t] * v
			}
		}
		kernel.SubRow(z[:j], z[j:end], f.Panel[j*s:], s)
		end = j
	}
}
