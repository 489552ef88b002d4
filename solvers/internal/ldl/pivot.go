package ldl

import (
	"math"

	"betaloom/solvers/internal/kernel"
)

// span is the number of pivots after which the rest of the leading block is brought up to date.
const span = 16

// pivot factors the leading block, span columns at a time: a column is brought
// up to date when it is looked at, the block behind the span in one product. So
// pivots are chosen from the whole leading block.
func (f *Front[T]) pivot(work []T) (negative int, err error) {
	for k := 0; k < f.S; {
		b := f.block(k, work)
		next, err := b.run()
		if err != nil {
			return 0, err
		}
		b.trail(next)
		k = next
	}
	return f.negative(), nil
}

// negative counts the negative eigenvalues of D; 2 x 2 pivots have one each, as their determinants are negative.
func (f *Front[T]) negative() (count int) {
	for k := 0; k < f.S; k++ {
		if f.Off[k] != 0 {
			count++
			k++
		} else if d, ok := any(&f.Panel[k*f.S+k]).(*float64); ok && *d < 0 {
			count++
		}
	}
	return count
}

// block is the span of pivots from first to end, perhaps one more. Row k - first of w is
// column k, of L D where its pivot is taken, and row k - first of l that of L with D on its
// diagonal; a row has S numbers. In the last row of w a column behind may be looked at.
// In Panel, the columns from first on stay as they were before the span.
type block[T Number] struct {
	*Front[T]
	first, end int
	w, l       []T
}

func (f *Front[T]) block(first int, work []T) block[T] {
	n := min(span, max(1, f.N/2), f.S-first) // 2 (n + 1) rows fit into work, also one by one
	b := block[T]{f, first, first + n, work[:(n+1)*f.S], work[(n+1)*f.S:]}
	kernel.Turn(view(b.w[first:], f.S), view(f.Panel[first*f.S+first:], f.S), nil, n, f.S-first)
	return b
}

func (b *block[T]) row(k int) []T { return b.w[(k-b.first)*b.S:][:b.S] }

// run takes out the pivots of the span and gives the first place behind them.
func (b *block[T]) run() (k int, err error) {
	first, s := b.first, b.S
	for k = first; k < b.end; {
		k = first + kernel.Pivots(b.w[first:], b.l[first:], s, s-first, k-first, b.end-first, alpha)
		if k == b.end {
			break
		}
		at, two := b.choose(k)
		switch {
		case at < 0:
			return 0, ErrSingular
		case two:
			b.double(k, at)
			k += 2
		default:
			b.single(k, at)
			k++
		}
	}
	kernel.Turn(view(b.Panel[first*s+first:], s), view(b.l[first:], s), nil, s-first, k-first)
	return k, nil
}

// choose gives the place to take the next pivot from (-1 if there is none), with
// its columns in the rows from k on. Row k is up to date and its pivot not large enough.
func (b *block[T]) choose(k int) (at int, two bool) {
	w := b.row(k)
	own, col := Abs1(w[k]), kernel.Peak(w[k+1:])
	if top := max(own, col); !(top > 0) || math.IsInf(top, 0) {
		return -1, false
	}
	im := k + 1
	for Abs1(w[im]) != col {
		im++
	}
	c := b.column(im, k)
	row := max(kernel.Peak(c[k:im]), kernel.Peak(c[im+1:]))
	switch {
	case !(row+Abs1(c[im]) <= math.MaxFloat64):
		return -1, false
	case own >= alpha*col*(col/row):
		return k, false
	case Abs1(c[im]) >= alpha*row:
		copy(w[k:], c[k:])
		return im, false
	}
	copy(b.row(k + 1)[k:], c[k:])
	return im, true
}

// column brings column j of what the pivots before k leave up to date, in the last row.
func (b *block[T]) column(j, k int) []T {
	s, a, w := b.S, b.Panel, b.row(b.end)
	copy(w[k:j], a[j*s+k:j*s+j])
	b.gather(w, j)
	kernel.Sub(view(w[k:], s), across(b.l[j:], s), view(b.w[k:], s), 1, s-k, k-b.first)
	return w
}

// gather takes column j from Panel, from the diagonal on.
func (b *block[T]) gather(w []T, j int) {
	at := j*b.S + j
	for i := j; i < len(w); i++ {
		w[i] = b.Panel[at]
		at += b.S
	}
}

// swap exchanges unknowns p <= q of the leading block, with the rows of L that
// stand and the columns at hand, of which those before place done are up to date.
func (b *block[T]) swap(p, q, done int) {
	if p == q {
		return
	}
	s, a := b.S, b.Panel
	rp, rq := a[p*s:p*s+p], a[q*s:q*s+p]
	for c := range rp {
		rp[c], rq[c] = rq[c], rp[c]
	}
	a[p*s+p], a[q*s+q] = a[q*s+q], a[p*s+p]
	for m := p + 1; m < q; m++ {
		a[m*s+p], a[q*s+m] = a[q*s+m], a[m*s+p]
	}
	for m := q + 1; m < s; m++ {
		a[m*s+p], a[m*s+q] = a[m*s+q], a[m*s+p]
	}
	b.Perm[p], b.Perm[q] = b.Perm[q], b.Perm[p]
	for at := 0; at < (done-b.first)*s; at += s {
		b.w[at+p], b.w[at+q] = b.w[at+q], b.w[at+p]
		b.l[at+p], b.l[at+q] = b.l[at+q], b.l[at+p]
	}
	for j := done; j < min(q+1, b.end); j++ {
		b.row(j)[q] = a[q*s+j]
	}
	if q < b.end {
		b.gather(b.row(q), q)
	}
}

// single takes out the 1 x 1 pivot at, to place k.
func (b *block[T]) single(k, at int) {
	b.swap(k, at, k+1)
	w, l := b.row(k), b.l[(k-b.first)*b.S:][:b.S]
	inv := 1 / w[k]
	for i := k + 1; i < len(w); i++ {
		l[i] = w[i] * inv
	}
	l[k] = w[k]
}

// double takes out the 2 x 2 pivot of k and at, to places k and k+1.
func (b *block[T]) double(k, at int) {
	b.swap(k+1, at, k+2)
	s := b.S
	c, d := b.row(k), b.row(k+1)
	l, m := b.l[(k-b.first)*s:][:s], b.l[(k+1-b.first)*s:][:s]
	i11, i21, i22 := invert2(c[k], c[k+1], d[k+1])
	l[k], l[k+1], m[k+1] = c[k], 0, d[k+1]
	b.Off[k] = c[k+1]
	for i := k + 2; i < s; i++ {
		l[i], m[i] = c[i]*i11+d[i]*i21, c[i]*i21+d[i]*i22
	}
}

// invert2 inverts [[a, b], [b, c]] with b the largest entry.
func invert2[T Number](a, b, c T) (i11, i21, i22 T) {
	p, q := a/b, c/b
	t := 1 / (b * (p*q - 1))
	return q * t, -t, p * t
}

// trail takes the pivots of the block before next off what is left of the leading block.
func (b *block[T]) trail(next int) {
	s, a := b.S, b.Panel
	for j := next; j < s; j += width {
		kernel.Sub(view(a[j*s+j:], s), view(a[j*s+b.first:], s), view(b.w[j:], s), s-j, min(width, s-j), next-b.first)
	}
}
