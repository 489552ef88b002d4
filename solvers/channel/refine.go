package channel

import (
	"math"

	"betaloom/solvers/internal/ldl"
)

// Refining: modes close to each other share one shift just below them, inverse
// iteration on all their vectors together, and the pencil projected on these.
const (
	near    = 2e-3  // relative distance in N within which modes share a shift
	offset  = 3e-4  // of the shift below the lowest of them
	precise = 1e-11 // residual at which to stop
	stale   = 1e-9  // residual at which slow progress is taken for rounding
	twin    = 1e-6  // relative distance in N of modes that are parted together
	rounds  = 12
)

// convert takes the neighbours' vectors; there are none where they are not independent.
func (fd *finder[T]) convert(x [][]complex128) (v [][]T) {
	for _, c := range x {
		r := make([]T, len(c))
		for i, e := range c {
			r[i] = fromComplex[T](e)
		}
		if n := norm(r); n > 0 && !math.IsInf(n, 0) {
			v = append(v, r)
		}
	}
	return v
}

// refine turns rough vectors into modes.
func (fd *finder[T]) refine(v [][]T) error {
	if len(v) == 0 {
		return nil
	}
	list, err := fd.project(v)
	if err != nil {
		return err
	}
	for len(list) > 0 {
		n := 1
		for n < len(list) && ldl.Abs1(list[n-1].n-list[n].n) < near*ldl.Abs1(list[n].n) {
			n++
		}
		if err := fd.polish(list[:n]); err != nil {
			return err
		}
		list = list[n:]
	}
	return nil
}

// begin looks for modes near effective indices, for those close to each other from one shift just below them.
func (fd *finder[T]) begin(guess []float64) error {
	for len(guess) > 0 {
		n := 1
		for n < len(guess) && guess[n-1]-guess[n] < near*guess[n] {
			n++
		}
		low := guess[n-1] * guess[n-1]
		pr, err := fd.factor(fromReal[T](low - fd.stepBelow(low, unsure)))
		if err != nil {
			return err
		}
		k := &krylov[T]{fd: fd, shift: pr.at, work: make([]T, fd.s.t.unknowns)}
		found, err := k.run(n, fine)
		if err != nil {
			return err
		}
		if err := fd.refine(found); err != nil {
			return err
		}
		guess = guess[n:]
	}
	return nil
}

// unsure is how far below a guess the shift is, relative to it.
const unsure = 1e-3

// polish iterates on a cluster. Where that is slow, because the first projection had N wrong, the shift moves.
func (fd *finder[T]) polish(list []pair[T]) error {
	if !(realPart(list[0].n) > 0) {
		return nil
	}
	if !fd.served(list) {
		if err := fd.under(list); err != nil {
			return err
		}
	}
	before, worst := math.Inf(1), residual(list)
	for range rounds {
		if worst < precise || worst < stale && worst > 0.3*before {
			break
		}
		if worst > 0.1*before && !math.IsInf(before, 0) {
			if err := fd.under(list); err != nil {
				return err
			}
		}
		before = worst
		v := make([][]T, len(list))
		for i, m := range list {
			v[i] = append([]T{}, m.bx...)
			fd.f.solve(v[i])
			fd.deflate(v[i])
		}
		next, err := fd.project(v)
		if err != nil {
			break
		}
		if len(next) == 0 { // the shift is a mode to the last digit
			if _, err := fd.factor(fromReal[T](fd.at * (1 - 3*nudge))); err != nil {
				return err
			}
			continue
		}
		list, worst = next, residual(next)
	}
	if fd.rates != nil && worst < stale {
		fd.clusterSlopes(list)
	}
	for _, m := range list {
		fd.accept(m)
	}
	return nil
}

// deflate takes the modes found before out of x: one of them may be nearer the shift than the mode that is sought.
func (fd *finder[T]) deflate(x []T) {
	for i := range fd.found {
		m := &fd.found[i]
		add(x, m.x, -bilinear(m.bx, x)/bilinear(m.bx, m.x))
	}
}

// residual is the worst of a cluster.
func residual[T ldl.Number](list []pair[T]) float64 {
	worst := 0.0
	for _, m := range list {
		worst = max(worst, m.residual)
	}
	return worst
}

// served says whether the present factors are just below a cluster.
func (fd *finder[T]) served(list []pair[T]) bool {
	low := realPart(list[len(list)-1].n)
	d := low - fd.at
	return fd.ready && d > 0 && d < 2*unsure*low
}

// under factors just below the lowest of a cluster.
func (fd *finder[T]) under(list []pair[T]) error {
	low := list[len(list)-1].n
	if !(realPart(low) > 0) {
		return nil
	}
	_, err := fd.factor(low - fromReal[T](fd.stepBelow(realPart(low), offset)))
	return err
}

// stepBelow is a step down from N, relative to it, that stays above the modes which are not wanted.
func (fd *finder[T]) stepBelow(n, share float64) float64 {
	step := share * n
	if gap := n - fd.low; gap > 0 {
		step = min(step, 0.2*gap)
	}
	return step
}

// part projects the pencil once more on modes that agree to twin and may have been found one by one: each could be
// a mixture of them.
func (fd *finder[T]) part() error {
	for i := 0; i < len(fd.found); {
		n := 1
		for i+n < len(fd.found) && ldl.Abs1(fd.found[i+n].n-fd.found[i+n-1].n) < twin*ldl.Abs1(fd.found[i].n) {
			n++
		}
		if n > 1 {
			v := make([][]T, n)
			for j := range v {
				v[j] = fd.found[i+j].x
			}
			list, err := fd.project(v)
			if err != nil {
				return err
			}
			if len(list) == n {
				copy(fd.found[i:], list)
			}
		}
		i += n
	}
	return nil
}
