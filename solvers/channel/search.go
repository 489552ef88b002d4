package channel

import (
	"math"
	"math/cmplx"
	"sort"

	"betaloom/solvers/internal/ldl"
	"betaloom/solvers/internal/ritz"
)

// coarse is the estimated residual at which Arnoldi's vectors are handed on to be refined.
const coarse = 1e-4

// fine is that residual where the shift is so near the modes that few steps reach it.
const fine = 1e-9

// krylov is a run of Arnoldi's method on (A + shift B)^-1 B, whose eigenvalue
// m stands for N = shift - 1/m. The modes found before are deflated, in the bilinear form of B.
type krylov[T ldl.Number] struct {
	fd    *finder[T]
	shift float64
	basis [][]T
	h     [][]complex128 // column j: the coefficients of step j
	work  []T
}

// search looks for modes nearest a shift, below it first, and refines what it finds.
func (fd *finder[T]) search(shift float64) error {
	pr, err := fd.factor(fromReal[T](shift))
	if err != nil {
		return err
	}
	k := &krylov[T]{fd: fd, shift: pr.at, work: make([]T, fd.s.t.unknowns)}
	need := max(1, fd.want-len(fd.found))
	if fd.total < 0 && fd.want == 0 {
		need = 20
	}
	found, err := k.run(need, coarse)
	if err != nil {
		return err
	}
	return fd.refine(found)
}

// random is the same pseudo-random vector for the same number of the search.
func (k *krylov[T]) random() []T {
	x := make([]T, len(k.work))
	k.fd.seed++
	state := k.fd.seed * 0x9e3779b97f4a7c15
	for i, w := range k.fd.s.weight {
		state = state*6364136223846793005 + 1442695040888963407
		x[i] = fromReal[T]((float64(state>>11)/(1<<53) - 0.5) / math.Sqrt(w))
	}
	return x
}

// start is a vector with little outside the modes near the shift.
func (k *krylov[T]) start() []T {
	x := k.random()
	k.apply(x)
	scale(x, fromReal[T](1/norm(x)))
	return x
}

// apply puts (A + shift B)^-1 B x in place of x and deflates.
func (k *krylov[T]) apply(x []T) {
	copy(k.work, x)
	k.fd.s.multiply(x, k.work, 0, 1)
	k.fd.f.solve(x)
	k.fd.deflate(x)
}

// run extends the basis until the need modes nearest the shift show, to an estimated residual.
func (k *krylov[T]) run(need int, enough float64) ([][]T, error) {
	limit := min(len(k.work), 60+8*need)
	k.basis = [][]T{k.start()}
	for j := range limit {
		if err := k.fd.ctx.Err(); err != nil {
			return nil, err
		}
		full := k.extend()
		if done := full || j+1 == limit; done || j >= 9 && j%6 == 3 || need < 4 && j >= 4 && j%2 == 0 {
			v, settled, err := k.look(need, enough)
			if err != nil || settled || done {
				return v, err
			}
		}
	}
	return nil, nil
}

// extend takes one step; full says that the space is exhausted.
func (k *krylov[T]) extend() (full bool) {
	j := len(k.basis) - 1
	x := append([]T{}, k.basis[j]...)
	k.apply(x)
	before := norm(x)
	col := make([]complex128, j+2)
	for range 2 { // twice is enough
		for i, b := range k.basis {
			c := inner(b, x)
			add(x, b, -c)
			col[i] += toComplex(c)
		}
	}
	after := norm(x)
	col[j+1] = complex(after, 0)
	k.h = append(k.h, col)
	if !(after > 1e-13*before) {
		return true
	}
	scale(x, fromReal[T](1/after))
	k.basis = append(k.basis, x)
	return false
}

// candidate is a Ritz pair.
type candidate struct {
	n       complex128
	at      int
	settled bool
}

// look gives the settled vectors of wanted modes, and whether the need nearest ones are all settled.
func (k *krylov[T]) look(need int, enough float64) ([][]T, bool, error) {
	m := len(k.h)
	h := make([][]complex128, m)
	for i := range h {
		h[i] = make([]complex128, m)
		for j := max(0, i-1); j < m; j++ {
			h[i][j] = k.h[j][i]
		}
	}
	values, y, err := ritz.Eigen(h)
	if err != nil {
		return nil, false, err
	}
	last := cmplx.Abs(k.h[m-1][m])
	var list []candidate
	for i, mu := range values {
		n := complex(k.shift, 0) - 1/mu
		if cmplx.IsNaN(n) || !(real(n) > k.fd.low) {
			continue
		}
		list = append(list, candidate{n, i, last*cmplx.Abs(y[m-1][i]) < enough*cmplx.Abs(mu)})
	}
	near := func(c candidate) float64 { return cmplx.Abs(c.n - complex(k.shift, 0)) }
	sort.Slice(list, func(i, j int) bool { return near(list[i]) < near(list[j]) })
	settled := len(list) >= need
	var out [][]T
	for i, c := range list {
		if !c.settled {
			settled = settled && i >= need
			continue
		}
		if len(out) < need+2 {
			out = append(out, k.vector(y, c.at))
		}
	}
	return out, settled, nil
}

// vector turns coefficients into a vector; in real arithmetic its real part.
func (k *krylov[T]) vector(y [][]complex128, at int) []T {
	x := make([]T, len(k.work))
	turn(y, at)
	for i := range y {
		add(x, k.basis[i], fromComplex[T](y[i][at]))
	}
	return x
}
