package ldl

// couple turns the rows below the leading block into L21 and leaves W = L21 D
// in work; it gives the largest entry of L21.
func (f *Front[T]) couple(work []T) (growth float64) {
	s := f.S
	for i := f.S; i < f.N; i++ {
		w, row := work[(i-s)*s:(i-s+1)*s], f.Panel[i*s:(i+1)*s]
		for j, p := range f.Perm {
			w[j] = row[p]
		}
	}
	r := f.N - s
	i := 0
	for ; i+4 <= r; i += 4 {
		f.forward4(work[i*s : (i+4)*s])
	}
	for ; i < r; i++ {
		f.forward(work[i*s : (i+1)*s])
	}
	d := f.inverse(work[r*s:])
	for i := range r {
		growth = max(growth, f.unscale(f.Panel[(s+i)*s:(s+i+1)*s], work[i*s:(i+1)*s], d))
	}
	return growth
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

// forward solves L11 x = w in place.
func (f *Front[T]) forward(w []T) {
	s := f.S
	for j := 1; j < s; j++ {
		l := f.Panel[j*s : j*s+j]
		x := w[:len(l)]
		var sum T
		for t := range l {
			sum += l[t] * x[t]
		}
		w[j] -= sum
	}
}

// forward4 is forward on four rows at once.
func (f *Front[T]) forward4(w []T) {
	s := f.S
	w0, w1, w2, w3 := w[:s], w[s:2*s], w[2*s:3*s], w[3*s:4*s]
	for j := 1; j < s; j++ {
		l := f.Panel[j*s : j*s+j]
		x0, x1, x2, x3 := w0[:len(l)], w1[:len(l)], w2[:len(l)], w3[:len(l)]
		var s0, s1, s2, s3 T
		for t, v := range l {
			s0 += v * x0[t]
			s1 += v * x1[t]
			s2 += v * x2[t]
			s3 += v * x3[t]
		}
		w0[j] -= s0
		w1[j] -= s1
		w2[j] -= s2
		w3[j] -= s3
	}
}

// unscale puts w D^-1 into dst and gives the largest entry.
func (f *Front[T]) unscale(dst, w, d []T) (top float64) {
	dst = dst[:len(w)]
	own, off := d[:len(w)], d[f.S:][:len(w)]
	for k, v := range w {
		dst[k] = v * own[k]
	}
	for k, c := range off {
		if c != 0 {
			dst[k] += w[k+1] * c
			dst[k+1] += w[k] * c
		}
	}
	for _, v := range dst {
		top = max(top, Abs1(v))
	}
	return top
}

// update takes l w' off the lower triangle of the r x r matrix c; l and w have
// r rows of s. Blocks of four rows and two columns share their loads; they
// may reach above the diagonal, where nothing is kept.
func update[T Number](c, l, w []T, r, s int) {
	i := 0
	for ; i+4 <= r; i += 4 {
		l0, l1, l2, l3 := l[i*s:(i+1)*s], l[(i+1)*s:(i+2)*s], l[(i+2)*s:(i+3)*s], l[(i+3)*s:(i+4)*s]
		for j := 0; j < i+4; j += 2 {
			block42(c[i*r+j:], r, l0, l1, l2, l3, w[j*s:(j+1)*s], w[(j+1)*s:(j+2)*s])
		}
	}
	for ; i < r; i++ {
		row := l[i*s : (i+1)*s]
		for j := 0; j <= i; j++ {
			c[i*r+j] -= dot(row, w[j*s:(j+1)*s])
		}
	}
}

func dot[T Number](a, b []T) (sum T) {
	b = b[:len(a)]
	for t := range a {
		sum += a[t] * b[t]
	}
	return sum
}

func block42[T Number](c []T, r int, l0, l1, l2, l3, u, v []T) {
	n := len(u)
	l0, l1, l2, l3, v = l0[:n], l1[:n], l2[:n], l3[:n], v[:n]
	var a0, a1, a2, a3, b0, b1, b2, b3 T
	for t := range n {
		x, y := u[t], v[t]
		p := l0[t]
		a0 += p * x
		b0 += p * y
		p = l1[t]
		a1 += p * x
		b1 += p * y
		p = l2[t]
		a2 += p * x
		b2 += p * y
		p = l3[t]
		a3 += p * x
		b3 += p * y
	}
	c[0] -= a0
	c[1] -= b0
	c[r] -= a1
	c[r+1] -= b1
	c[2*r] -= a2
	c[2*r+1] -= b2
	c[3*r] -= a3
	c[3*r+1] -= b3
}
