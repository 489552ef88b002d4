package smooth

import "math"

// trial is one fit on the way to the best.
type trial struct {
	k       knots
	c       []float64
	misfit  float64 // sum of squares
	freedom float64 // equivalent degrees of freedom
	rows    int
}

// left is the degrees of freedom that remain where one of the fit's counts
// cost times, or zero where that is next to nothing.
func (t *trial) left(cost float64) float64 {
	n := float64(t.rows)
	if l := n - cost*t.freedom; l > 1e-4*n {
		return l
	}
	return 0
}

// validation is the generalised cross validation; infinite where no degree
// of freedom is left to judge by.
func (t *trial) validation(cost float64) float64 {
	left := t.left(cost)
	if left == 0 {
		return math.Inf(1)
	}
	return float64(t.rows) * t.misfit / (left * left)
}

// explained says whether the rounding of the samples, of that standard
// deviation, accounts for the misfit.
func (t *trial) explained(rounding float64) bool {
	left := t.left(1)
	return left > 0 && t.misfit <= (1+math.Sqrt(2/left))*left*rounding*rounding
}

// keep copies a trial, with its coefficients in the storage of dst.
func (t *trial) keep(dst *trial) {
	c := append(dst.c[:0], t.c...)
	*dst = *t
	dst.c = c
}

// contest looks for the trial of least validation.
type contest struct {
	cost  float64 // of a degree of freedom
	least float64
	best  trial
}

func newContest(cost float64) *contest { return &contest{cost: cost, least: math.Inf(1)} }

func (c *contest) enter(t *trial) {
	v := t.validation(c.cost)
	if c.best.c == nil || v < c.least {
		t.keep(&c.best)
		c.least = v
	}
}

// choice is what is kept of all trials.
type choice struct {
	rounding float64 // of the samples
	cautious *contest
	sharp    *contest
	plain    trial // the smoothest that rounding explains, if any
}

func (c *choice) enter(t *trial) {
	if t.explained(c.rounding) && (c.plain.c == nil || t.freedom < c.plain.freedom) {
		t.keep(&c.plain)
	}
	c.cautious.enter(t)
	c.sharp.enter(t)
}

// result is the smoothest fit that leaves no more than rounding (the
// discrepancy principle of Morozov); else the cautious contest's, unless
// the other's predicts ten times better: noise cannot feign that, samples
// without noise show it.
func (c *choice) result() trial {
	a, b := &c.cautious.best, &c.sharp.best
	switch {
	case c.plain.c != nil:
		return c.plain
	case b.validation(1) < 0.01*a.validation(1):
		return *b
	}
	return *a
}

// choose fits with growing numbers of coefficients and all strengths of the
// penalty, and keeps the best.
func choose(x, y []float64, degree int, rounding float64) trial {
	cost := 1 + 0.4*min(1, float64(len(x))/manyRows)
	c := &choice{rounding: rounding, cautious: newContest(cost), sharp: newContest(1)}
	for size := degree + 1; ; size *= 2 {
		size = min(size, len(x), most)
		strengths(placed(x, size, degree), x, y, c)
		if c.plain.c != nil || size == len(x) || size == most {
			return c.result()
		}
	}
}

// strengths tries the strengths of the penalty for one set of knots, from
// weak to strong. A strength s smooths over lengths of about s^(1/8): they
// go from a small part of the mean knot interval to several of them, or the
// whole range for the fewest knots; smoother fits need fewer knots.
func strengths(k knots, x, y []float64, c *choice) {
	d, p := data(k, x, y), roughness(k)
	gram, work := d.gram(), make([]float64, len(d.r))
	s := newTriangle(k.size(), d.width)
	t := &trial{k: k, c: make([]float64, k.size()), rows: len(x), freedom: math.Inf(1)}
	length := func(intervals float64) float64 { return 8 * math.Log10(intervals/float64(k.size())) }
	for e := length(1. / 16); e < length(16); e += 0.5 {
		merge(s, d, p, math.Sqrt(float64(len(x))*math.Pow(10, e)))
		before := t.freedom
		if !s.solve(t.c) {
			continue
		}
		t.misfit, t.freedom = d.misfit(t.c), s.trace(gram, work)
		if !(t.freedom <= before*(1+1e-6)) || t.freedom < penalised-0.5 {
			return // beyond what the arithmetic resolves
		}
		c.enter(t)
	}
}
