package choose

import (
	"context"
	"fmt"

	"betaloom/schema"
	"betaloom/solvers"
	"betaloom/solvers/resolve"
	"betaloom/solvers/slab"
)

// slabProblem solves layers without strips.
type slabProblem struct {
	layers   *schema.Layers
	resolver *resolve.Resolver
	solver   *slab.Solver
	stack    slab.Stack
	named    []int // layers whose confinement is reported
	modes    int   // the most that a run reports at a point
}

func newSlab(p *schema.Physics) (*slabProblem, error) {
	r, err := resolve.New(p)
	if err != nil {
		return nil, err
	}
	l := p.Section.Layers
	s := &slabProblem{layers: l, resolver: r, solver: slab.New(r.Params()), modes: p.Modes}
	s.stack = slab.Stack{
		Layers:       make([]slab.Layer, len(l.Layers)),
		GroundBottom: l.GroundBottom,
		GroundTop:    l.GroundTop,
	}
	for i, layer := range l.Layers {
		s.stack.Layers[i].HalfSpace = layer.Thickness == nil
		if err := checkName(p, where(i, layer), layer.Thickness); err != nil {
			return nil, err
		}
		if layer.Name != "" {
			s.named = append(s.named, i)
		}
	}
	return s, nil
}

// checkName sees that a thickness which names a parameter names one of p.
func checkName(p *schema.Physics, where string, thickness *schema.Number) error {
	if thickness == nil || thickness.Parameter == "" {
		return nil
	}
	if _, ok := p.Parameter(thickness.Parameter); !ok {
		return &solvers.InputError{Where: where, Found: "the thickness " + thickness.Parameter, Expected: "a parameter of the sweep"}
	}
	return nil
}

// Modes solves the stack at q. Every point is solved on its own: a stack is
// solved faster than a neighbour's answer is checked.
func (s *slabProblem) Modes(ctx context.Context, q solvers.Q, want int, _ []solvers.Mode) ([]solvers.Mode, solvers.Count, error) {
	if err := s.place(q); err != nil {
		return nil, solvers.Count{}, err
	}
	modes, count, err := s.solver.Solve(ctx, q[0], &s.stack, want)
	for i := range modes {
		s.finish(q[0], &modes[i])
	}
	return modes, count, err
}

// place sets the stack's numbers for the point q.
func (s *slabProblem) place(q solvers.Q) error {
	if err := s.resolver.Set(q); err != nil {
		return err
	}
	for i, layer := range s.layers.Layers {
		eps, err := s.resolver.Medium(layer.Material)
		if err != nil {
			return err
		}
		s.stack.Layers[i].Eps = *eps
		if layer.Thickness == nil {
			continue
		}
		t := s.resolver.Dimension(*layer.Thickness)
		if !(real(t.V) >= 0) {
			return &solvers.InputError{Where: where(i, layer), Found: fmt.Sprintf("a thickness of %g m", real(t.V)), Expected: "zero or more"}
		}
		s.stack.Layers[i].Thickness = t
	}
	return nil
}

func where(i int, l schema.Layer) string {
	if l.Name != "" {
		return "layer " + l.Name
	}
	return fmt.Sprintf("section.layers[%d]", i)
}

// finish keeps the confinement of named layers and adds what a frequency
// that follows the parameters brings.
func (s *slabProblem) finish(w float64, m *solvers.Mode) {
	for k, i := range s.named {
		m.Confinement[k] = m.Confinement[i]
	}
	m.Confinement = m.Confinement[:len(s.named)]
	for i, dw := range s.resolver.Sweep() {
		m.DNeff[i] += (m.Ng - m.Neff) / w * dw
		m.DNg[i] += schema.LightSpeed * m.GVD * dw
	}
}
