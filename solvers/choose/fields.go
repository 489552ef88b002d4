package choose

import (
	"context"
	"math"

	"betaloom/schema"
	"betaloom/solvers"
	"betaloom/solvers/slab"
)

// reach is how many decay lengths of a mode a picture shows beyond the films.
const reach = 4

// Fields implements solvers.Fielder. The field does not vary along x: there is one place, x = 0.
func (s *slabProblem) Fields(ctx context.Context, q solvers.Q, mode int, options solvers.FieldOptions) (*solvers.Field, error) {
	if err := options.Validate(); err != nil {
		return nil, err
	}
	modes, count, err := s.Modes(ctx, q, max(s.modes, mode+1), nil)
	if err != nil {
		return nil, err
	}
	if mode < 0 || mode >= len(modes) {
		return nil, solvers.NoMode(mode, count)
	}
	m := modes[mode]
	w := s.view(q[0]/schema.LightSpeed, &m)
	if options.Window != nil {
		w.Bottom, w.Top = options.Window.Bottom, options.Window.Top
	}
	f := solvers.NewField(&options, w)
	sampled, err := s.solver.Fields(mode, f.Y)
	if err != nil {
		return nil, err
	}
	f.Mode, f.Count, f.E, f.H = m, count, sampled.E, sampled.H
	s.draw(f, w)
	f.Scale(sampled.Power)
	return f, nil
}

// view is the window of a mode's picture: all films, and what reach says beyond half-spaces.
func (s *slabProblem) view(k float64, m *solvers.Mode) (w solvers.Window) {
	axis := 0
	if m.Type != "TE" {
		axis = 1
	}
	for i := range s.stack.Layers {
		w.Top += real(s.stack.Layers[i].Thickness.V)
	}
	height := w.Top
	margin := func(l *slab.Layer) float64 {
		if !l.HalfSpace {
			return 0
		}
		e := real(l.Eps[axis].V)
		g := k * math.Sqrt(max(m.Neff*m.Neff-e, 1e-12))
		return min(max(reach/g, 0.1*height), 10*height+10/k)
	}
	w.Bottom -= margin(&s.stack.Layers[0])
	w.Top += margin(&s.stack.Layers[len(s.stack.Layers)-1])
	return w
}

// draw puts the layers' materials and interfaces into a field.
func (s *slabProblem) draw(f *solvers.Field, w solvers.Window) {
	top := 0.0
	next := 0
	last := len(s.layers.Layers) - 1
	for i, l := range s.layers.Layers {
		if !s.stack.Layers[i].HalfSpace {
			top += real(s.stack.Layers[i].Thickness.V)
		}
		material := f.MaterialIndex(l.Material, false)
		for next < len(f.Y) && (f.Y[next] <= top || i == last) {
			f.Material[next] = material
			next++
		}
		if i < last && s.layers.Layers[i+1].Material != l.Material {
			f.AddEdge(solvers.Edge{X: [2]float64{w.Left, w.Right}, Y: [2]float64{top, top}}, w)
		}
	}
}
