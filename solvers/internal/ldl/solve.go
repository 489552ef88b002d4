package ldl

// Down solves for the eliminated unknowns: x (S numbers, a right-hand side) becomes D^-1 L11^-1 P x
// and L21 L11^-1 P x is taken off below (N-S numbers). work has room for 3 S.
func (f *Front[T]) Down(x, below, work []T) {
	s := f.S
	z := work[:s]
	for i, p := range f.Perm {
		z[i] = x[p]
	}
	f.forward(z)
	for i := range below {
		below[i] -= dot(z, f.Panel[(s+i)*s:(s+i+1)*s])
	}
	f.unscale(x, z, f.inverse(work[s:]))
}

// Up finishes what Down began, from the values of the unknowns that were left:
// x becomes P' L11'^-1 (x - L21' below).
func (f *Front[T]) Up(x, below, work []T) {
	s := f.S
	z := work[:s]
	copy(z, x)
	for i, v := range below {
		axpy(z, f.Panel[(s+i)*s:(s+i+1)*s], v)
	}
	for j := s - 1; j > 0; j-- {
		axpy(z[:j], f.Panel[j*s:j*s+j], z[j])
	}
	for i, p := range f.Perm {
		x[p] = z[i]
	}
}
