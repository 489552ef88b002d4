package channel

import (
	"context"
	"errors"
	"fmt"
	"math"
	"math/cmplx"
	"sort"

	"betaloom/solvers"
	"betaloom/solvers/internal/ldl"
)

// Options says which modes to find.
type Options struct {
	Want int            // how many, from the highest Re L down; 0: all above Low
	Low  float64        // effective index above which a mode is wanted, > 0
	Near [][]complex128 // vectors of a neighbouring pencil of the same topology to start from, one a mode; may be nil

	// Guess is effective indices near which modes are expected, from the highest down: where there are no Near vectors
	// the search begins at these.
	Guess []float64

	// Expect is how many modes are known to be above Low, 0 where they are to be counted. The wanted ones are proven to be
	// the highest all the same; the count is then Expect, without a proof of its own.
	Expect int

	Slopes bool // give the vectors' derivatives too, for Differentiate
}

// Validate says what is wrong with the options.
func (o *Options) Validate() error {
	switch {
	case o.Expect < 0 || o.Expect > 0 && (o.Want == 0 || o.Want > o.Expect):
		return &solvers.InputError{Where: "modes", Found: fmt.Sprintf("%d wanted of %d expected", o.Want, o.Expect), Expected: "at least one, and no more than are expected"}
	case o.Want < 0:
		return &solvers.InputError{Where: "modes", Found: fmt.Sprintf("%d wanted", o.Want), Expected: "0 or more"}
	case !(o.Low > 0) || math.IsInf(o.Low, 0):
		return &solvers.InputError{Where: "modes", Found: fmt.Sprintf("a lowest effective index of %g", o.Low), Expected: "above 0"}
	}
	return nil
}

// Pair is a mode: L = beta^2 in 1/m^2 and its vector with x'Bx = 1 (never conjugated; -1 for a backward wave without
// loss), the largest entry having a positive real part. X1 is the vector's derivative in the angular frequency with x'B x1 = 0,
// nil unless it was asked for. Residual is |F x| / |L B x| in the norm that does not depend on the functions' scale.
type Pair struct {
	L        complex128
	X, X1    []complex128
	Residual float64
}

// Modes finds the modes of the highest Re L, at most Want of them above Low. The count is of all above
// Low. Without loss it is proven by the inertia of F(Low^2 k^2), and the modes given by that of F just
// below them. With loss the inertia of the real parts is the count, and there is a proof only where as many were found.
// The error is an *solvers.InputError, that of the context, or a *solvers.ConvergenceError where
// the modes could not be found; the pairs are then those that were.
func (p *Pencil) Modes(ctx context.Context, o Options) ([]Pair, solvers.Count, error) {
	if err := o.Validate(); err != nil {
		return nil, solvers.Count{}, err
	}
	for _, x := range o.Near {
		if len(x) != p.t.unknowns {
			return nil, solvers.Count{}, &solvers.InputError{Where: "modes", Found: fmt.Sprintf("a near vector of %d", len(x)), Expected: fmt.Sprint(p.t.unknowns)}
		}
	}
	var pairs []Pair
	var count solvers.Count
	var err error
	if p.lossless {
		pairs, count, err = modesOf(ctx, p, p.real, &p.t.real, o)
	} else {
		pairs, count, err = modesOf(ctx, p, p.cplx, &p.t.cplx, o)
	}
	if err != nil && ctx.Err() == nil {
		err = &solvers.ConvergenceError{Where: fmt.Sprintf("%d modes found", len(pairs)), Err: err}
	}
	return pairs, count, err
}

// pair is a mode of a system.
type pair[T ldl.Number] struct {
	n        T // L/k^2
	x, bx    []T
	x1       []T // derivative of x in w
	residual float64
}

// finder collects the modes of one system.
type finder[T ldl.Number] struct {
	ctx     context.Context
	s       *system[T]
	f       *factor[T]
	at      float64                        // where f stands
	ready   bool                           // f is filled
	rates   *slopeRates[T]                 // nil where no slopes are asked for
	reals   func(low float64) (int, error) // counts the modes of the real parts above an N; nil where that is no guide
	low     float64                        // N above which a mode counts
	high    float64                        // no mode above
	counted bool                           // inertia counts modes
	total   int                            // modes above low, -1: not known
	want    int
	found   []pair[T] // from the highest Re N down
	proven  []proof
	seed    uint64
}

// proof is a number of modes above some N.
type proof struct {
	at    float64
	above int
}

func modesOf[T ldl.Number](ctx context.Context, p *Pencil, s *system[T], kit *kit[T], o Options) ([]Pair, solvers.Count, error) {
	if kit.work == nil {
		kit.work = newFactor(s)
	}
	fd := &finder[T]{ctx: ctx, s: s, f: kit.work, low: o.Low * o.Low, high: p.top, counted: p.lossless && p.positive, total: -1, want: o.Want}
	if fd.high <= fd.low {
		fd.high = fd.low * (1 + 1e-9)
	}
	if p.positive && o.Expect == 0 {
		n, err := p.above(ctx, fd.low)
		if err != nil {
			return nil, solvers.Count{}, err
		}
		fd.total = n
		if fd.want == 0 || fd.want > n {
			fd.want = n
		}
	}
	if !fd.counted && p.positive {
		fd.reals = func(low float64) (int, error) { return p.above(ctx, low) }
	}
	if o.Slopes {
		fd.rates = &slopeRates[T]{p, kit, newRates[T](p.kappa)}
	}
	err := fd.run(o.Near, o.Guess)
	if err == nil && o.Slopes {
		err = fd.slopes()
	}
	pairs := fd.pairs(p.k)
	if err != nil {
		return pairs, solvers.Count{}, err
	}
	if o.Expect > 0 {
		return pairs, solvers.Count{N: o.Expect}, nil
	}
	return pairs, fd.count(o.Low), nil
}

// Count gives the number of modes above an effective index, as Modes counts them, without finding any. It is -1 where
// a permittivity is not positive.
func (p *Pencil) Count(ctx context.Context, low float64) (int, error) {
	if !(low > 0) || math.IsInf(low, 0) {
		return 0, &solvers.InputError{Where: "count", Found: fmt.Sprintf("a lowest effective index of %g", low), Expected: "above 0"}
	}
	if !p.positive {
		return -1, nil
	}
	n, err := p.above(ctx, low*low)
	if err != nil && ctx.Err() == nil {
		err = &solvers.ConvergenceError{Where: "count", Err: err}
	}
	return n, err
}

// above counts the modes of the real parts above N = low.
func (p *Pencil) above(ctx context.Context, low float64) (int, error) {
	kit := &p.t.real
	if kit.work == nil {
		kit.work = newFactor(p.real)
	}
	fd := &finder[float64]{ctx: ctx, s: p.real, f: kit.work, counted: true}
	pr, err := fd.factor(low)
	return pr.above, err
}

// count says how many modes there are above low and why.
func (fd *finder[T]) count(low float64) solvers.Count {
	c := solvers.Count{N: fd.total}
	switch {
	case fd.counted:
		c.Proof = "inertia"
	case fd.total < 0:
		c.N = len(fd.found)
	case fd.total == len(fd.found):
		c.Proof = "inertia of the real parts"
	}
	if c.N == 0 {
		c.Reason = fmt.Sprintf("no mode has an effective index above %.9g", low)
	}
	return c
}

// nudge is the relative step by which a shift gives way to a resonance of a part of the section.
const nudge = 3e-6

// steep is the growth above which a part of the section is taken to be in resonance.
const steep = 1e7

// factor factors F at or (where a part of the section resonates there) just below a shift.
func (fd *finder[T]) factor(at T) (proof, error) {
	if err := fd.ctx.Err(); err != nil {
		return proof{}, err
	}
	var err error
	for try := range 6 {
		shift := at * fromReal[T](1-float64(try*try)*nudge)
		err = fd.f.fill(fd.s, shift)
		fd.at, fd.ready = realPart(shift), err == nil
		if err == nil && (fd.f.growth < steep || try == 5) {
			pr := proof{at: realPart(shift), above: fd.f.negative - fd.s.t.potentials}
			if fd.counted {
				fd.proven = append(fd.proven, pr)
			}
			return pr, nil
		}
	}
	return proof{}, err
}

// errMissing is the cause when modes that inertia counts were not found.
var errMissing = errors.New("modes that the inertia counts were not found")

// run finds the modes.
func (fd *finder[T]) run(near [][]complex128, guess []float64) error {
	if fd.want == 0 && fd.total == 0 {
		return nil
	}
	start := fd.convert(near)
	begun := len(start) > 0
	if begun {
		if err := fd.refine(start); err != nil {
			return err
		}
	} else if len(guess) > 0 {
		begun = true
		if err := fd.begin(guess); err != nil {
			return err
		}
	}
	shift := fd.high
	for round := 0; ; round++ {
		if !begun || round > 0 {
			if err := fd.search(shift); err != nil {
				return err
			}
		}
		next, done, err := fd.judge(round)
		if err == nil && done {
			return fd.part()
		}
		if err != nil {
			return err
		}
		if round > 6+2*max(fd.want, 0) {
			return fd.missing()
		}
		shift = next
	}
}

// missing is the error for modes that were not found.
func (fd *finder[T]) missing() error {
	return fmt.Errorf("%d of %d: %w", len(fd.found), fd.want, errMissing)
}

// pairs gives the modes found in the units of the package.
func (fd *finder[T]) pairs(k float64) []Pair {
	list := fd.found
	if fd.want > 0 && len(list) > fd.want {
		list = list[:fd.want]
	}
	out := make([]Pair, len(list))
	for i, m := range list {
		out[i] = Pair{L: toComplex(m.n) * complex(k*k, 0), X: make([]complex128, len(m.x)), Residual: m.residual}
		scale := norm1(m.x, m.bx)
		for j, v := range m.x {
			out[i].X[j] = toComplex(v) * scale
		}
		if m.x1 != nil {
			out[i].X1 = make([]complex128, len(m.x1))
			for j, v := range m.x1 {
				out[i].X1[j] = toComplex(v) * scale
			}
		}
	}
	return out
}

// norm1 is the factor that makes x'Bx = 1 (or -1, where x is real) and the largest entry's real part positive.
func norm1[T ldl.Number](x, bx []T) complex128 {
	var top complex128
	var sum T
	for i, v := range x {
		sum += v * bx[i]
		if c := toComplex(v); cmplx.Abs(c) > 1.000001*cmplx.Abs(top) {
			top = c
		}
	}
	scale := 1 / cmplx.Sqrt(toComplex(sum))
	if _, ok := any(sum).(float64); ok {
		scale = complex(cmplx.Abs(scale), 0)
	}
	if real(top*scale) < 0 {
		scale = -scale
	}
	return scale
}

// accept adds a refined mode unless it is one of those found or not wanted.
func (fd *finder[T]) accept(m pair[T]) {
	v := realPart(m.n)
	if !(m.residual < usable) || !(v > fd.low) {
		return
	}
	own := ldl.Abs1(bilinear(m.x, m.bx))
	for i := range fd.found {
		o := &fd.found[i]
		c := ldl.Abs1(bilinear(m.x, o.bx))
		if ldl.Abs1(m.n-o.n) < 1e-5*ldl.Abs1(m.n) && c*c > 0.25*own*ldl.Abs1(bilinear(o.x, o.bx)) {
			return
		}
	}
	fd.found = append(fd.found, m)
	sort.SliceStable(fd.found, func(i, j int) bool { return fd.value(i) > fd.value(j) })
}

// usable is the largest residual of a vector that is taken for a mode.
const usable = 1e-5
