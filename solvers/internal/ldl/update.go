package ldl

import "betaloom/solvers/internal/kernel"

// width is the number of columns of a packed panel: two vectors of the widest processors.
const width = 16

// couple turns the rows below the leading block into L21 and leaves W = L21 D in work,
// transposed in panels: the rows j to j+width of W are S rows of width numbers from j S on.
// It gives the largest entry of L21.
func (f *Front[T]) couple(work []T) (growth float64) {
	s, r := f.S, f.N-f.S
	d := f.inverse(work[r*s:])
	for j := 0; j < r; j += width {
		n := min(width, r-j)
		w, rows := work[j*s:(j+n)*s], f.Panel[(s+j)*s:(s+j+n)*s]
		f.pack(w, rows, n)
		kernel.Solve(view(f.Panel, s), view(w, n), s, n)
		growth = max(growth, f.unscale(rows, w, d, n))
	}
	return growth
}

// pack turns n rows into columns with the unknowns in the order of the pivots. It marks the places
// that are done by the sign of Perm while it goes round the cycles.
func (f *Front[T]) pack(w, rows []T, n int) {
	kernel.Turn(view(w, n), view(rows, f.S), nil, f.S, n)
	var kept [width]T
	for first, p := range f.Perm {
		if int(p) == first || p < 0 {
			continue
		}
		copy(kept[:n], w[first*n:])
		to := first
		for from := int(p); from != first; from = int(f.Perm[to]) {
			copy(w[to*n:(to+1)*n], w[from*n:])
			f.Perm[to] = ^f.Perm[to]
			to = from
		}
		copy(w[to*n:(to+1)*n], kept[:])
		f.Perm[to] = ^f.Perm[to]
	}
	for i, p := range f.Perm {
		f.Perm[i] = max(p, ^p)
	}
}

// view is a matrix of rows, across its transpose.
func view[T Number](x []T, row int) kernel.View[T] { return kernel.View[T]{Data: x, Row: row} }

func across[T Number](x []T, row int) kernel.View[T] {
	return kernel.View[T]{Data: x, Row: 1, Step: row}
}

// inverse gives the diagonals of D^-1, then its off-diagonals, at the places of D's.
func (f *Front[T]) inverse(d []T) []T {
	s := f.S
	d = d[:2*s]
	for k := 0; k < s; k++ {
		d[s+k] = 0
		if f.Off[k] == 0 {
			d[k] = 1 / f.Panel[k*s+k]
			continue
		}
		d[k], d[s+k], d[k+1] = invert2(f.Panel[k*s+k], f.Off[k], f.Panel[(k+1)*s+k+1])
		d[s+k+1] = 0
		k++
	}
	return d
}

// unscale puts D^-1 w, n columns, transposed into rows and gives the largest entry.
func (f *Front[T]) unscale(rows, w, d []T, n int) (top float64) {
	s := f.S
	kernel.Turn(view(rows, s), view(w, n), d, n, s)
	for k, c := range d[s : 2*s] {
		if c == 0 {
			continue
		}
		for i := range n {
			rows[i*s+k] += w[(k+1)*n+i] * c
			rows[i*s+k+1] += w[k*n+i] * c
		}
	}
	return kernel.Peak(rows)
}

// update takes L21 W' off the lower triangle of the rest, panel by panel of columns. The
// blocks on the diagonal reach above it, where nothing is kept.
func (f *Front[T]) update(rest, work []T) {
	s, r := f.S, f.N-f.S
	for j := 0; j < r; j += width {
		n := min(width, r-j)
		kernel.Sub(view(rest[j*r+j:], r), view(f.Panel[(s+j)*s:], s), view(work[j*s:], n), r-j, n, s)
	}
}
