package resolve

import (
	"fmt"
	"maps"
	"math"
	"slices"

	"betaloom/schema"
	"betaloom/schema/expr"
	"betaloom/solvers"
	"betaloom/solvers/jet"
	"betaloom/solvers/material"
)

// Resolver evaluates one Physics at one point at a time. It keeps work space:
// it serves one goroutine.
type Resolver struct {
	base    []string
	derived []expr.Definition // each after those it names
	clock   string            // wavelength or frequency, whichever the sweep has
	moving  bool              // the clock is derived

	point solvers.Q
	jets  map[string]*jet.Jet
	sweep []float64
	media map[string]*medium
}

// New compiles the expressions and materials of p. What it refuses is a
// *solvers.InputError.
func New(p *schema.Physics) (*Resolver, error) {
	r := &Resolver{base: p.Base(), jets: map[string]*jet.Jet{}, media: map[string]*medium{}}
	if err := r.compileParameters(p); err != nil {
		return nil, err
	}
	needs := r.dependencies()
	for _, name := range slices.Sorted(maps.Keys(p.Materials)) { // so that the first fault is always the same
		m := p.Materials[name]
		if m.Metal() {
			continue
		}
		c, err := material.Compile(name, m)
		if err != nil {
			return nil, err
		}
		r.media[name] = newMedium(c, r.inputs(m, needs))
	}
	r.sweep = make([]float64, len(r.base))
	return r, nil
}

func (r *Resolver) compileParameters(p *schema.Physics) error {
	var open []expr.Definition
	for _, q := range p.Parameters {
		r.jets[q.Name] = &jet.Jet{}
		if q.Name == schema.Wavelength || q.Name == schema.Frequency {
			r.clock, r.moving = q.Name, q.Kind == schema.Derived
		}
		if q.Kind != schema.Derived {
			continue
		}
		e, err := expr.Parse(q.Expr)
		if err != nil {
			return &solvers.InputError{Where: "parameter " + q.Name, Found: q.Expr, Expected: "an expression: " + err.Error()}
		}
		open = append(open, expr.Definition{Name: q.Name, Expr: e})
	}
	if r.clock == "" {
		return &solvers.InputError{Where: "parameters", Found: "neither wavelength nor frequency", Expected: "one of them"}
	}
	for i, name := range r.base {
		p := make([]complex128, len(r.base))
		p[i] = 1
		r.jets[name].P = p
	}
	return r.order(open)
}

// order sorts the derived parameters so that each follows those it names.
func (r *Resolver) order(open []expr.Definition) error {
	var circle []expr.Definition
	if r.derived, circle = expr.Order(open); len(circle) > 0 {
		return &solvers.InputError{Where: "parameter " + circle[0].Name, Found: "an expression that depends on itself", Expected: "one that does not"}
	}
	return r.known()
}

// known checks that expressions name parameters of the sweep.
func (r *Resolver) known() error {
	for _, d := range r.derived {
		for _, n := range d.Expr.Names() {
			if r.jets[n] == nil {
				return &solvers.InputError{Where: "parameter " + d.Name, Found: "the unknown name " + n, Expected: "a parameter of the sweep"}
			}
		}
	}
	return nil
}

// Params counts the base parameters: the length of P and WP in every jet.
func (r *Resolver) Params() int { return len(r.base) }

// Set moves to the point q: the angular frequency in rad/s, then the values
// of the base parameters in SI units.
func (r *Resolver) Set(q solvers.Q) error {
	if len(q) != 1+len(r.base) {
		return fmt.Errorf("resolve: point of %d numbers, expected %d", len(q), 1+len(r.base))
	}
	if w := q[0]; !(w > 0) || math.IsInf(w, 1) {
		return &solvers.InputError{Where: r.clock, Found: fmt.Sprintf("an angular frequency of %g rad/s", w), Expected: "a positive one"}
	}
	r.point = append(r.point[:0], q...)
	for i, name := range r.base {
		r.jets[name].V = complex(q[1+i], 0)
	}
	return r.evaluate()
}

func (r *Resolver) evaluate() error {
	for _, d := range r.derived {
		v, err := expr.Eval(d.Expr, jet.Real{}, func(name string) jet.Jet {
			if name == r.clock {
				return clock(name, r.point[0])
			}
			return *r.jets[name]
		})
		if err != nil {
			return &solvers.InputError{Where: "parameter " + d.Name, Found: err.Error(), Expected: "a number"}
		}
		if d.Name == r.clock {
			r.setSweep(v)
			continue
		}
		*r.jets[d.Name] = v
	}
	*r.jets[r.clock] = clock(r.clock, r.point[0])
	return nil
}

// setSweep keeps dw/dp of a frequency that is derived from base parameters.
func (r *Resolver) setSweep(v jet.Jet) {
	here := clock(r.clock, r.point[0])
	for i := range r.sweep {
		r.sweep[i] = 0
		if v.P != nil {
			r.sweep[i] = real(v.P[i]) / real(here.W)
		}
	}
}

// clock is the jet, in the angular frequency w, of the vacuum wavelength or
// of the frequency.
func clock(name string, w float64) jet.Jet {
	if name == schema.Frequency {
		return jet.Jet{V: complex(w/(2*math.Pi), 0), W: 1 / (2 * math.Pi)}
	}
	l := 2 * math.Pi * schema.LightSpeed / w
	return jet.Jet{V: complex(l, 0), W: complex(-l/w, 0), WW: complex(2*l/w/w, 0), WWW: complex(-6*l/w/w/w, 0)}
}

// Sweep gives dw/dp in each base parameter, in rad/s per unit; nil where the
// frequency is a parameter of its own.
func (r *Resolver) Sweep() []float64 {
	if !r.moving {
		return nil
	}
	return r.sweep
}

// Number is the jet of a number at the point. It lasts until the next Set.
func (r *Resolver) Number(n schema.Number) *jet.Jet {
	if n.Parameter == "" {
		return &jet.Jet{V: complex(n.Value, 0)}
	}
	return r.jets[n.Parameter]
}

// Dimension is the jet of a length or an angle of the section: no
// derivatives in frequency, and total derivatives in the base parameters.
func (r *Resolver) Dimension(n schema.Number) jet.Jet {
	j := *r.Number(n)
	if r.moving && j.W != 0 {
		p := make([]complex128, len(r.base))
		copy(p, j.P)
		for i, s := range r.sweep {
			p[i] += j.W * complex(s, 0)
		}
		j.P = p
	}
	return jet.Jet{V: j.V, P: j.P}
}
