package choose

import (
	"betaloom/schema"
	"betaloom/solvers"
	"betaloom/solvers/guide"
)

// New builds the problem of p with its equation, ready to be solved at any
// point, and gives the reasons for the equation. What is wrong with p is a
// *solvers.InputError, an equation that is not solved yet a *solvers.ScopeError.
func New(p *schema.Physics) (solvers.Problem, []string, error) {
	if p.Section == (schema.Section{}) {
		return nil, nil, &solvers.InputError{Where: "section", Found: "none of layers, circular and pipe", Expected: "one of them"}
	}
	c := Explain(p)
	problem, err := build(c, p)
	if err != nil {
		return nil, c.Reasons, err
	}
	return problem, c.Reasons, nil
}

// build makes the problem of the equation chosen.
func build(c Choice, p *schema.Physics) (solvers.Problem, error) {
	switch c.Equation {
	case Slab:
		return newSlab(p)
	case FullVector:
		return guide.New(p)
	}
	return nil, &solvers.ScopeError{Section: c.Section, Equation: string(c.Equation)}
}
