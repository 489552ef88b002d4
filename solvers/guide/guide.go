package guide

import (
	"context"

	"betaloom/schema"
	"betaloom/solvers"
	"betaloom/solvers/resolve"
	"betaloom/solvers/section"
	"betaloom/solvers/slab"
)

// Guide is layers with strips, ready to be solved at any point. It is a solvers.Problem.
type Guide struct {
	physics  *schema.Physics
	resolver *resolve.Resolver
	far      *slab.Solver
	shelf    shelf
	accuracy schema.Accuracy
	named    [][]section.Part // of each named layer and strip
}

// neffAsked is the accuracy of neff where the sweep asks for none.
const neffAsked = 1e-6

// New prepares the guide of a sweep's physics, whose section is layers.
func New(p *schema.Physics) (*Guide, error) {
	if p.Section.Layers == nil {
		return nil, &solvers.InputError{Where: "section", Found: "no layers", Expected: "layers"}
	}
	r, err := resolve.New(p)
	if err != nil {
		return nil, err
	}
	g := &Guide{physics: p, resolver: r, far: slab.New(r.Params()), accuracy: p.Accuracy}
	if g.accuracy.Neff == 0 {
		g.accuracy.Neff = neffAsked
	}
	for i, l := range p.Section.Layers.Layers {
		if l.Name != "" {
			g.named = append(g.named, ofLayer(i, len(l.Strips)))
		}
		for j, s := range l.Strips {
			if s.Name != "" {
				g.named = append(g.named, []section.Part{{Layer: i, Strip: j}})
			}
		}
	}
	return g, nil
}

// ofLayer is a layer's parts: its strips without what fills it beside them, or all of it where it has none.
func ofLayer(layer, strips int) (parts []section.Part) {
	for j := range strips {
		parts = append(parts, section.Part{Layer: layer, Strip: j})
	}
	if strips == 0 {
		parts = append(parts, section.Part{Layer: layer, Strip: -1})
	}
	return parts
}

// point is one point while it is solved.
type point struct {
	*Guide
	ctx     context.Context
	w, k    float64
	outline *section.Outline
	classes []class
	want    int
	bounds  section.Bounds
	size    float64 // widest cell, m
	cold    bool    // there is no neighbour to start from
	answer  []solved
}

// Modes implements solvers.Problem.
func (g *Guide) Modes(ctx context.Context, q solvers.Q, want int, near []solvers.Mode) ([]solvers.Mode, solvers.Count, error) {
	pt, err := g.place(ctx, q, want)
	if err != nil {
		return nil, solvers.Count{}, err
	}
	return pt.solve(startOf(near))
}

// place sets up a point: outline, symmetry classes and what is guided.
func (g *Guide) place(ctx context.Context, q solvers.Q, want int) (*point, error) {
	if err := g.resolver.Set(q); err != nil {
		return nil, err
	}
	o, err := section.New(g.physics, g.resolver)
	if err != nil {
		return nil, err
	}
	pt := &point{Guide: g, ctx: ctx, w: q[0], k: q[0] / schema.LightSpeed, outline: o, want: want}
	if err := pt.classify(); err != nil {
		return nil, err
	}
	pt.size = pt.cellSize()
	return pt, nil
}
