package guide

import (
	"errors"
	"fmt"
	"math"
	"sort"

	"betaloom/schema"
	"betaloom/solvers"
	"betaloom/solvers/channel"
	"betaloom/solvers/jet"
	"betaloom/solvers/section"
)

const lightSpeed = schema.LightSpeed

// start is what a neighbouring point hands on.
type start struct {
	level   int
	bounds  section.Bounds
	classes map[string]warm // by label
}

// warm is the vectors of a class on a level's meshes.
type warm [2]vectors

type vectors struct {
	mesh *section.Mesh
	w    float64        // angular frequency
	x    [][]complex128 // of the modes
	x1   [][]complex128 // their derivatives in w; nil where they are not known
}

// fits gives the vectors where they belong to such a mesh, carried on to the frequency w.
func (v *vectors) fits(m *section.Mesh, w float64) [][]complex128 {
	if v.mesh == nil || !v.mesh.Same(m) {
		return nil
	}
	const far = 0.03 // relative change of frequency over which the derivative leads on
	dw := w - v.w
	if dw == 0 || math.Abs(dw) > far*w {
		return v.x
	}
	out := make([][]complex128, len(v.x))
	for i, x := range v.x {
		out[i] = x
		if x1 := v.x1[i]; x1 != nil {
			out[i] = make([]complex128, len(x))
			for j := range x {
				out[i][j] = x[j] + complex(dw, 0)*x1[j]
			}
		}
	}
	return out
}

func startOf(near []solvers.Mode) *start {
	for _, m := range near {
		if s, ok := m.State.(*start); ok {
			return s
		}
	}
	return nil
}

// solved is a mode of one discretisation.
type solved struct {
	pair   channel.Pair
	pencil *channel.Pencil
	mesh   *section.Mesh
	class  *class
	d      channel.Derivatives
	beta   jet.Jet // d and beta have no derivatives where the vector has none
	tails  channel.Tails
	bound  bound
	k      float64
}

func (m *solved) neff() float64 { return real(m.beta.V) / m.k }
func (m *solved) ng() float64   { return real(m.beta.W) * lightSpeed }

// classModes is the modes of a class in one discretisation, from the highest down.
type classModes struct {
	class *class
	mesh  *section.Mesh
	modes []solved
}

// solve finds the modes of a point.
func (p *point) solve(s *start) ([]solvers.Mode, solvers.Count, error) {
	if p.cold = s == nil; p.cold {
		s = &start{level: p.first(), bounds: p.guess()}
	}
	for i := range p.classes {
		p.classes[i].start = s.classes[p.classes[i].label]
	}
	p.bounds = s.bounds
	p.level(&p.bounds)
	coarse, err := p.begin(s.level)
	if err != nil {
		return nil, solvers.Count{}, err
	}
	count := p.count()
	if len(coarse) == 0 {
		return nil, count, nil
	}
	answer, at, err := p.climb(coarse, s.level)
	if err != nil {
		return nil, solvers.Count{}, err
	}
	p.answer = answer
	return p.modes(answer, at), count, nil
}

// count is that of all classes.
func (p *point) count() (c solvers.Count) {
	c.Proof = "inertia"
	if p.lossy() {
		c.Proof = "inertia of the real parts"
	}
	low := math.Inf(1)
	for i := range p.classes {
		c.N += p.classes[i].census
		low = min(low, p.classes[i].low)
	}
	if c.N == 0 {
		c.Reason = fmt.Sprintf("no mode has an effective index more than %g above %.9g, that of what surrounds the core", closest, low)
	}
	return c
}

// lossy says whether a medium has loss or gain: modes are then counted by the real parts alone.
func (p *point) lossy() bool {
	for i := range p.outline.Media {
		for _, e := range p.outline.Media[i].Eps {
			if imag(e.V) != 0 {
				return true
			}
		}
	}
	return false
}

// begin counts the modes and solves the coarse mesh of a level, or a finer one where that is too coarse to show them all.
func (p *point) begin(at int) ([]classModes, error) {
	const tries = 4
	l := levels()[at].coarse
	for try := 1; ; try++ {
		if err := p.census(fineness{max(l.layers, 1), max(l.order, 4), farGrowth}); err != nil {
			return nil, err
		}
		coarse, err := p.settle(l, try == tries)
		if !errors.Is(err, errHidden) {
			return coarse, err
		}
		l.order++
		p.forget()
	}
}

// errHidden says that modes which were counted are not among those of a coarse mesh.
var errHidden = errors.New("fewer modes than were counted")

// forget drops the vectors of the neighbour.
func (p *point) forget() {
	for i := range p.classes {
		p.classes[i].start = warm{}
	}
}

// census counts the guided modes of every class, with walls so far away that all are seen.
func (p *point) census(l fineness) error {
	for i := range p.classes {
		c := &p.classes[i]
		if c.low >= p.densest() {
			continue
		}
		far := p.farthest(c)
		p.level(&far)
		pencil, _, err := p.assemble(c, l, &far)
		if err != nil {
			return err
		}
		if c.census, err = pencil.Count(p.ctx, c.low); err != nil {
			return err
		}
		if c.census < 0 {
			return &solvers.InputError{Where: "section", Found: "a permittivity whose real part is not above zero", Expected: "dielectrics"}
		}
	}
	return nil
}

func (p *point) assemble(c *class, l fineness, b *section.Bounds) (*channel.Pencil, *section.Mesh, error) {
	m, err := p.mesh(c, l, b)
	if err != nil {
		return nil, nil, err
	}
	t, err := p.shelf.topology(m)
	if err != nil {
		return nil, nil, err
	}
	if t.Unknowns() > most {
		return nil, nil, errLarge
	}
	pencil, err := t.Assemble(m, p.w, p.outline.Media)
	return pencil, m, err
}

// errLarge says that a mesh has more unknowns than are taken on.
var errLarge = &solvers.ConvergenceError{Where: "mesh", Err: errors.New("the section is too large")}

// The meshes of a level, by which a class keeps its vectors.
const (
	onCoarse = iota
	onFine
)

// find solves one class on a mesh: at most want modes.
func (p *point) find(c *class, l fineness, want, stage int, guess []float64) (classModes, error) {
	out := classModes{class: c}
	pencil, mesh, err := p.assemble(c, l, &p.bounds)
	if err != nil {
		return out, err
	}
	out.mesh = mesh
	o := channel.Options{Want: want, Low: c.low, Near: c.start[stage].fits(mesh, p.w), Guess: guess, Slopes: stage == onFine || p.cold}
	if len(o.Near) >= want {
		o.Near, o.Expect = o.Near[:want], want
	} else if len(guess) >= want {
		o.Near, o.Expect = nil, want
	}
	pairs, _, err := pencil.Modes(p.ctx, o)
	if err != nil && o.Expect > 0 && p.ctx.Err() == nil {
		o.Expect = 0
		pairs, _, err = pencil.Modes(p.ctx, o)
	}
	if err != nil {
		return out, err
	}
	v := vectors{mesh: mesh, w: p.w}
	for _, m := range pairs {
		s := solved{pair: m, pencil: pencil, mesh: mesh, class: c, k: p.k, d: channel.Derivatives{L: jet.Const(m.L)}}
		if o.Slopes {
			s.d = pencil.Differentiate(&m)
		}
		s.beta = jet.Sqrt(s.d.L)
		if stage == onFine {
			s.tails = pencil.Tails(&m)
		}
		out.modes = append(out.modes, s)
		v.x, v.x1 = append(v.x, m.X), append(v.x1, m.X1)
	}
	c.start[stage] = v
	return out, nil
}

// attempts bounds how often walls are moved.
const attempts = 16

// settle solves the coarse mesh and moves the walls until they are far enough for the modes that will be reported. Modes
// that are not found even so are closer to their cut-off than is looked for if this is the last mesh to be tried.
func (p *point) settle(l fineness, last bool) ([]classModes, error) {
	guesses := map[string][]float64{}
	for range attempts {
		sets, err := p.all(l, guesses)
		if err != nil {
			return nil, err
		}
		for _, s := range sets {
			guesses[s.class.label] = indices(s.modes)
		}
		chosen := p.choose(sets)
		if p.hidden(sets, chosen) || p.cold && p.widen(&p.bounds, chosen) {
			continue
		}
		if p.missing(sets) && !last {
			return nil, errHidden
		}
		p.drop(sets)
		return chosen, nil
	}
	return nil, &solvers.ConvergenceError{Where: "walls", Err: errors.New("the modes did not settle as the computational walls moved outward")}
}

// all solves every class that has modes.
func (p *point) all(l fineness, guesses map[string][]float64) (sets []classModes, err error) {
	for i := range p.classes {
		c := &p.classes[i]
		if c.census == 0 {
			continue
		}
		set, err := p.find(c, l, min(p.want, c.census), onCoarse, guesses[c.label])
		if err != nil {
			return nil, err
		}
		sets = append(sets, set)
	}
	return sets, nil
}

// choose keeps the modes of highest index.
func (p *point) choose(sets []classModes) []classModes {
	var values []float64
	for _, s := range sets {
		for i := range s.modes {
			values = append(values, s.modes[i].neff())
		}
	}
	sort.Sort(sort.Reverse(sort.Float64Slice(values)))
	low := math.Inf(-1)
	if len(values) > p.want {
		low = values[p.want-1]
	}
	var out []classModes
	left := p.want
	for _, s := range sets {
		n := 0
		for n < len(s.modes) && n < left && s.modes[n].neff() >= low {
			n++
		}
		left -= n
		if n > 0 {
			s.modes = s.modes[:n]
			out = append(out, s)
		}
	}
	return out
}

// hidden moves the walls outward where they may hide a mode that would be reported: counted with walls far away and not
// found; such a mode reaches as far as the walls.
func (p *point) hidden(sets, chosen []classModes) bool {
	lowest, n := math.Inf(1), 0
	for _, s := range chosen {
		for i := range s.modes {
			lowest, n = min(lowest, s.modes[i].neff()), n+1
		}
	}
	moved := false
	for _, s := range sets {
		if len(s.modes) >= min(p.want, s.class.census) {
			continue
		}
		far := p.farthest(s.class)
		for side, open := range p.openSides() {
			d, most := distance(&p.bounds, side), *distance(&far, side)
			reach := 3 / (p.k * *d)
			if open && *d < most && (n < p.want || lowest*lowest < s.class.low*s.class.low+reach*reach) {
				*d = min(2.5**d, most)
				moved = true
			}
		}
	}
	p.level(&p.bounds)
	return moved
}

// missing says whether a class has fewer modes than were counted.
func (p *point) missing(sets []classModes) bool {
	for _, s := range sets {
		if len(s.modes) < min(p.want, s.class.census) {
			return true
		}
	}
	return false
}

// drop takes modes that were counted and are nowhere to be found, hence closer to their cut-off than is looked for,
// off the count.
func (p *point) drop(sets []classModes) {
	for _, s := range sets {
		if n := len(s.modes); n < min(p.want, s.class.census) {
			s.class.census = n
		}
	}
}

// climb solves finer and finer levels until the bounds are as small as asked.
func (p *point) climb(coarse []classModes, at int) ([]solved, int, error) {
	var answer []solved
	reached := at
	for {
		fine, err := p.fine(coarse, levels()[at].fine)
		switch {
		case errors.Is(err, errLarge) && answer != nil:
			return answer, reached, nil
		case errors.Is(err, errLarge) && at > 0:
			at-- // what fits
			continue
		case err != nil:
			return nil, 0, err
		}
		answer, reached = p.judge(fine), at
		short := p.short(answer)
		if short <= 1 || at+1 == len(levels()) {
			return answer, at, nil
		}
		at = min(at+max(1, int(math.Round(math.Log(short)/math.Log(step)))), len(levels())-1)
		p.forget()
		coarse = fine
	}
}

// fine solves the classes of modes on a fine mesh, and once more if its walls turn out to be too near.
func (p *point) fine(sets []classModes, l fineness) ([]classModes, error) {
	fine, err := p.again(sets, l, onFine)
	if err != nil || !p.widen(&p.bounds, fine) {
		return fine, err
	}
	p.forget()
	return p.again(fine, l, onFine)
}

// judge gives all modes their bounds, from the highest index down.
func (p *point) judge(sets []classModes) (out []solved) {
	for _, s := range sets {
		out = append(out, s.modes...)
	}
	for i := range out {
		out[i].bound = p.bound(&out[i])
	}
	sort.SliceStable(out, func(i, j int) bool { return out[i].neff() > out[j].neff() })
	return out
}

// again solves the classes of modes on another mesh.
func (p *point) again(sets []classModes, l fineness, stage int) (out []classModes, err error) {
	for _, s := range sets {
		set, err := p.find(s.class, l, len(s.modes), stage, indices(s.modes))
		if err != nil {
			return nil, err
		}
		if len(set.modes) < len(s.modes) {
			return nil, &solvers.ConvergenceError{Where: "modes " + s.class.label, Err: fmt.Errorf("%d of %d on another mesh", len(set.modes), len(s.modes))}
		}
		out = append(out, set)
	}
	return out, nil
}

// indices are the modes' effective indices.
func indices(modes []solved) (n []float64) {
	for i := range modes {
		n = append(n, modes[i].neff())
	}
	return n
}
