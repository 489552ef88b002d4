package slab

import (
	"math"
	"strconv"

	"betaloom/solvers"
)

// nearCutoff is how close to the cut-off index a mode is flagged.
const nearCutoff = 1e-5

var (
	flagNone       []string
	flagNearCutoff = []string{"near-cutoff"}
	flagAvoided    = []string{"avoided-crossing"}
)

const impedanceOfVacuum = 376.730313668 // ohm, CODATA 2018

// output is the room for modes that a solver gives out.
type output struct {
	modes       []solvers.Mode
	gradients   []float64
	confinement []float64
	acc         [2][]complex128 // dN/dp and d2N/dtdp
	names       [2][]string
	params      int
	stack       *Stack
	w, k        float64
	total       float64 // k times the thickness of all films
}

func (o *output) reset(params int, s *Stack, w float64) {
	o.params, o.stack, o.w, o.k = params, s, w, w/lightSpeed
	o.modes = o.modes[:0]
	o.total = 0
	for i := range s.Layers {
		if !s.Layers[i].HalfSpace {
			o.total += o.k * real(s.Layers[i].Thickness.V)
		}
	}
	o.acc[0], o.acc[1] = resize(o.acc[0], params), resize(o.acc[1], params)
}

// room makes place for n modes.
func (o *output) room(n int) {
	o.modes = resize(o.modes, n)
	o.gradients = resize(o.gradients, 2*n*o.params)
	o.confinement = resize(o.confinement, n*len(o.stack.Layers))
}

// next gives the i-th mode with its slices set and its numbers null.
func (o *output) next(i int) *solvers.Mode {
	m, p, l := &o.modes[i], o.params, len(o.stack.Layers)
	nan := math.NaN()
	*m = solvers.Mode{
		DNeff:       o.gradients[2*i*p : (2*i+1)*p : (2*i+1)*p],
		DNg:         o.gradients[(2*i+1)*p : (2*i+2)*p : (2*i+2)*p],
		Confinement: o.confinement[i*l : (i+1)*l : (i+1)*l],
		Aeff:        nan, CPerM: nan, LPerM: nan, Cutoff: nan,
		Z: complex(nan, nan),
	}
	clear(m.Confinement)
	return m
}

// name is TE or TM with the mode's number.
func (o *output) name(tm bool, m int) string {
	kind, prefix := 0, "TE"
	if tm {
		kind, prefix = 1, "TM"
	}
	for len(o.names[kind]) <= m && m < 64 {
		o.names[kind] = append(o.names[kind], prefix+strconv.Itoa(len(o.names[kind])))
	}
	if m < 64 {
		return o.names[kind][m]
	}
	return prefix + strconv.Itoa(m)
}

// label sets what kind of mode it is.
func (o *output) label(m *solvers.Mode, p *pick, mirror bool) {
	m.Type, m.Family = "TE", o.name(p.tm, p.m)
	if p.tm {
		m.Type = "TM"
	} else {
		m.ExShare = 1
	}
	if p.tem {
		m.Type, m.Family = "TEM", "TEM"
	}
	if mirror {
		m.Symmetry = "even"
		if p.odd {
			m.Symmetry = "odd"
		}
	}
}

// fill writes a mode from a line that has been expanded and gathered.
func fill[T scalar](o *output, q *line[T], norm linear[T], p *pick, m *solvers.Mode) {
	o.label(m, p, q.mirror)
	n2 := q.square()
	n := root(n2)
	at := widen(n.a)
	m.Neff, m.Kappa = real(at), 0-imag(at)
	m.Ng = re(n.a + n.b)
	m.GVD = 2 * re(n.b+n.c) / (lightSpeed * o.w)
	m.Beta3 = 6 * re(n.c+n.d) / (lightSpeed * o.w * o.w)
	cut := 0.0
	if q.branch {
		cut = re(sqrt(q.base.a))
	}
	m.Flags = flagNone
	if m.Neff-cut < nearCutoff {
		m.Flags = flagNearCutoff
	}
	gradient(o, q, norm, n2)
	project(o, n2, n, m)
	shape(o, q, at, m)
	impedance(o, p, at, m)
	m.Cutoff = o.cutoff(p)
	sample(o, q, p, m)
	bound(o, q, norm, n, m)
}

// project turns derivatives of N into those of the indices.
func project[T scalar](o *output, n2, n series[T], m *solvers.Mode) {
	half := widen(0.5 / n.a)
	turn := half * widen(0.5*n2.b/n2.a)
	for i := range o.params {
		v := o.acc[0][i] * half
		m.DNeff[i] = real(v)
		m.DNg[i] = real(v + o.acc[1][i]*half - o.acc[0][i]*turn)
	}
}

// impedance sets the wave impedance: omega mu/beta for TE; for TM it has a
// meaning in one uniform medium only.
func impedance(o *output, p *pick, n complex128, m *solvers.Mode) {
	switch {
	case !p.tm:
		m.Z, m.ZDefinition = impedanceOfVacuum/n, "wave"
	case p.uniform:
		m.Z, m.ZDefinition = impedanceOfVacuum*n/o.stack.Layers[0].Eps[1].V, "wave"
	}
}

// cutoff is the frequency in Hz at which a mode between metal planes
// appears; it has a meaning in one lossless fill that does not depend on frequency.
func (o *output) cutoff(p *pick) float64 {
	l := &o.stack.Layers[0]
	if !o.stack.GroundBottom || !o.stack.GroundTop || !p.plain {
		return math.NaN()
	}
	halves, e := p.m+1, real(l.Eps[0].V)
	if p.tm {
		halves, e = p.m, real(l.Eps[2].V)
	}
	return float64(halves) * o.w / (2 * o.total * math.Sqrt(e))
}
