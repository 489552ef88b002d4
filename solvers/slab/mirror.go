package slab

import "betaloom/solvers/jet"

// mirrored reports whether a stack is its own mirror image along with its
// derivatives in frequency. Its modes are then even or odd, exactly, and each
// kind is that of the lower half with psi or its flux zero on the plane:
// two films far apart have their pair of modes even when their indices agree
// in every digit. The gradients in the parameters need not be mirrored.
func mirrored(s *Stack) bool {
	if s.GroundBottom != s.GroundTop || len(s.Layers) < 3 && !s.GroundBottom {
		return false
	}
	for i, j := 0, len(s.Layers)-1; i < j; i, j = i+1, j-1 {
		a, b := &s.Layers[i], &s.Layers[j]
		if !a.HalfSpace && a.Thickness.V != b.Thickness.V {
			return false
		}
		for c := range a.Eps {
			if !same(&a.Eps[c], &b.Eps[c]) {
				return false
			}
		}
	}
	return true
}

func same(a, b *jet.Jet) bool {
	return a.V == b.V && a.W == b.W && a.WW == b.WW && a.WWW == b.WWW
}

// turn sets which of a mirrored line's two kinds of mode is solved, 0 for the
// even and 1 for the odd ones; other lines have one kind.
func (q *line[T]) turn(kind int) {
	if !q.mirror {
		return
	}
	q.ends[1].closure = fluxZero
	if kind == 1 {
		q.ends[1].closure = psiZero
	}
}
