package choose

import (
	"betaloom/schema"
	"betaloom/solvers"
)

// New builds the problem of p with its equation, ready to be solved at any
// point, and gives the reasons for the equation. What is wrong with p is a
// *solvers.InputError, an equation that is not solved yet a *solvers.ScopeError.
func New(p *schema.Physics) (solvers.Problem, []string, error) {
	if p.Section == (schema.Section{}) {
		return nil, nil, &solvers.InputError{Where: "section", Found: "none of layers, circular and pipe", Expected: "one of them"}
	}
	c := Explain(p)
	if c.Equation != Slab {
		return nil, c.Reasons, &solvers.ScopeError{Section: c.Section, Equation: string(c.Equation)}
	}
	problem, err := newSlab(p)
	if err != nil {
		return nil, c.Reasons, err
	}
	return problem, c.Reasons, nil
}
