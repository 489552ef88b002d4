package slab

import (
	"context"

	"betaloom/solvers"
	"betaloom/solvers/jet"
)

// Layer is one layer of a stack: its relative permittivity along x, y and z
// and, unless it is a half-space, its thickness in metres.
type Layer struct {
	Eps       [3]jet.Jet
	Thickness jet.Jet // only V and P count: a guide keeps its shape over frequency
	HalfSpace bool
}

// Stack is a planar guide, bottom to top. The first and the last layer are
// half-spaces, unless a metal plane stands in their place.
type Stack struct {
	Layers                  []Layer
	GroundBottom, GroundTop bool
}

// Solver solves stacks. It keeps work space, so it serves one goroutine at a
// time.
type Solver struct {
	params   int
	real     pair[float64]
	loss     pair[complex128]
	ladders  [2]ladder
	picks    []pick
	search   search
	wells    []well
	realOnly bool // every permittivity is real
	out      output
}

// New makes a solver for stacks whose jets have params base parameters.
func New(params int) *Solver { return &Solver{params: params} }

// Solve finds the guided modes of a stack at the angular frequency w in
// rad/s, at most want of them from the highest effective index down. The
// count is that of all guided modes. Confinement has one entry for each layer
// of the stack, DNeff and DNg one for each base parameter. The modes share
// the solver's work space and last until the next call.
//
// The error is an *solvers.InputError for a stack or a frequency that has no
// meaning, a *solvers.ConvergenceError where the modes found could not be
// proven complete, or that of the context.
func (s *Solver) Solve(ctx context.Context, w float64, stack *Stack, want int) ([]solvers.Mode, solvers.Count, error) {
	if err := ctx.Err(); err != nil {
		return nil, solvers.Count{}, err
	}
	if err := check(w, stack, s.params); err != nil {
		return nil, solvers.Count{}, err
	}
	s.out.reset(s.params, stack, w)
	if lossless(stack) {
		return s.lossless(ctx, stack, want)
	}
	return s.lossy(ctx, stack, want)
}
