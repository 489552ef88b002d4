package channel

import (
	"math"

	"betaloom/solvers/internal/ldl"
)

// Tails is what the highest polynomials of a mesh contribute to L by way of a mode's vector and of its derivative in the angular
// frequency: the form x'F x of these functions alone, its size summed over the cells. Dropping them would be the next coarser
// discretisation on the same cells, so that the first measures the error of L (a hierarchical estimate: Verfuerth, A Posteriori
// Error Estimation Techniques, chapter 1.4).
type Tails struct {
	L  float64 // 1/m^2
	L1 float64 // 1/m^2 per (rad/s)^2
}

// Tails estimates from a pair that Modes found, with Slopes for L1.
func (p *Pencil) Tails(m *Pair) Tails {
	k2 := p.k * p.k
	n := m.L / complex(k2, 0)
	size := func(x []complex128) float64 {
		if x == nil {
			return 0
		}
		if p.lossless {
			return k2 * tailOf(p.real, convertAll[float64](x), real(n))
		}
		return k2 * tailOf(p.cplx, x, n)
	}
	return Tails{L: size(m.X), L1: size(m.X1)}
}

// depth is how many of the highest orders along either axis are looked at.
const depth = 4

// shell is the sums of the orders px, px - 1, ... along x, then the same along y.
type shell[T ldl.Number] [2 * depth]T

// tailOf adds up the cells and both axes.
func tailOf[T ldl.Number](s *system[T], x []T, n T) (total float64) {
	var in []T
	for i := range s.cells {
		c, l := &s.t.cells[i], &s.cells[i]
		var sum shell[T]
		f := l.mix(1, n)
		at := c.start
		for _, k := range l.classes {
			in = grow(in, k.size())
			k.gather(in, x, at, c.skel)
			if l.ma != nil {
				l.shells(k, &sum, in, n, c.orders)
			} else {
				k.shells(&sum, in, &f, c.orders)
			}
			at += k.inner
		}
		total += rest(sum[:depth], c.px) + rest(sum[depth:], c.py)
	}
	return total
}

// steepness is by how much what is left out may exceed what the contributions' rate of fall promises.
const steepness = 2

// rest estimates what orders above the highest would contribute along one axis of a cell: the highest, times the rate at
// which they fall from order to order. Where every other order is empty, the field being even or odd about the cell's
// middle, the last that is not empty counts, and the rate of two orders.
func rest[T ldl.Number](shell []T, order int) float64 {
	var t [depth]float64
	for j := range t {
		t[j] = ldl.Abs1(shell[j])
	}
	if order < depth+1 { // too low to tell
		return t[0]
	}
	const empty = 0.1
	fall := max(t[0], t[1]) / max(t[2], t[3]) // over two orders
	switch {
	case !(fall > 0): // nothing at all, or nothing below
		return max(t[0], t[1])
	case t[0] < empty*t[1] && t[2] < empty*t[3]:
		return t[1] * min(1, steepness*fall)
	case t[1] < empty*t[0] && t[3] < empty*t[2]:
		return t[0] * min(1, steepness*fall)
	}
	return t[0] * min(1, steepness*math.Sqrt(fall))
}

// level says which shells a function belongs to, as bits.
func (f function) level(o orders) (bits uint8) {
	if j := o.px - f.a; j < depth && f.a >= 2 {
		bits |= 1 << j
	}
	if j := o.py - f.b; j < depth && f.b >= 2 {
		bits |= 1 << (depth + j)
	}
	return bits
}

// shells adds a straight class's part.
func (k *class[T]) shells(sum *shell[T], x []T, f *[terms]T, o orders) {
	for i := range k.entries {
		e := &k.entries[i]
		both := k.list[e.row].level(o) & k.list[e.col].level(o)
		if both == 0 {
			continue
		}
		v := e.value * f[e.term] * x[e.row] * x[e.col]
		if e.row != e.col {
			v += v
		}
		sum.add(both, v)
	}
}

// shells adds a mapped cell's part.
func (l *local[T]) shells(k *class[T], sum *shell[T], x []T, n T, o orders) {
	size := len(x)
	for i := range size {
		own := k.list[i].level(o)
		if own == 0 {
			continue
		}
		for j := range i + 1 {
			both := own & k.list[j].level(o)
			if both == 0 {
				continue
			}
			v := (l.ma[i*size+j] + n*l.mb[i*size+j]) * x[i] * x[j]
			if i != j {
				v += v
			}
			sum.add(both, v)
		}
	}
}

func (s *shell[T]) add(bits uint8, v T) {
	for j := range s {
		if bits&(1<<j) != 0 {
			s[j] += v
		}
	}
}
