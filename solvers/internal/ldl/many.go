package ldl

import "betaloom/solvers/internal/kernel"

// DownAll is Down for m right-hand sides at once: x has S rows of m numbers, below
// N-S rows; work has room for (m+2) S.
func (f *Front[T]) DownAll(x, below, work []T, m int) {
	s := f.S
	z, d := work[:s*m], f.inverse(work[s*m:])
	for i, p := range f.Perm {
		copy(z[i*m:(i+1)*m], x[int(p)*m:])
	}
	kernel.Solve(view(f.Panel, s), view(z, m), s, m)
	kernel.Sub(view(below, m), view(f.Panel[s*s:], s), view(z, m), f.N-s, m, s)
	for k, c := range d[:s] {
		for i, v := range z[k*m : (k+1)*m] {
			x[k*m+i] = v * c
		}
	}
	for k, c := range d[s:] {
		if c == 0 {
			continue
		}
		for i := k * m; i < (k+1)*m; i++ {
			x[i] += z[i+m] * c
			x[i+m] += z[i] * c
		}
	}
}

// UpAll is Up for m right-hand sides at once, laid out as for DownAll.
func (f *Front[T]) UpAll(x, below, work []T, m int) {
	s, l := f.S, f.Panel
	z := work[:s*m]
	copy(z, x)
	kernel.Sub(view(z, m), across(l[s*s:], s), view(below, m), s, m, f.N-s)
	for end := s; end > 0; {
		j := (end - 1) / strip * strip
		for i := end - 1; i > j; i-- {
			kernel.Sub(view(z[j*m:], m), across(l[i*s+j:], s), view(z[i*m:], m), i-j, m, 1)
		}
		kernel.Sub(view(z, m), across(l[j*s:], s), view(z[j*m:], m), j, m, end-j)
		end = j
	}
	for i, p := range f.Perm {
		copy(x[int(p)*m:(int(p)+1)*m], z[i*m:])
	}
}
