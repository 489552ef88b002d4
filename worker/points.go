package worker

import (
	"fmt"
	"math"

	"betaloom/schema"
	"betaloom/schema/expr"
	"betaloom/solvers"
)

// points evaluates every parameter of a tile at one point after the other.
type points struct {
	values    []float64 // of Physics.Parameters, in their order
	frequency float64   // Hz; 0 where it cannot be told
	q         solvers.Q

	tile    *schema.Tile
	index   map[string]int // of a parameter in values
	varying []int          // where the tile's values go
	axis    []float64
	base    []int
	derived []derived // each after those it refers to
	keep    *expr.Expr
	of      func(name string) float64
}

type derived struct {
	at   int
	name string
	expr *expr.Expr
}

func newPoints(t *schema.Tile) (*points, error) {
	p := &points{tile: t, index: make(map[string]int), values: make([]float64, len(t.Physics.Parameters))}
	for i, q := range t.Physics.Parameters {
		p.index[q.Name], p.values[i] = i, q.Value
	}
	p.of = func(name string) float64 { return p.values[p.index[name]] }
	for _, name := range t.Varying() {
		p.varying = append(p.varying, p.index[name])
	}
	for _, name := range t.Physics.Base() {
		p.base = append(p.base, p.index[name])
	}
	p.q = make(solvers.Q, 1+len(p.base))
	if err := p.compile(); err != nil {
		return nil, err
	}
	return p, p.order()
}

// compile parses the expressions.
func (p *points) compile() (err error) {
	for i, q := range p.tile.Physics.Parameters {
		if q.Kind != schema.Derived {
			continue
		}
		d := derived{at: i, name: q.Name}
		if d.expr, err = p.parse("parameter "+q.Name, q.Expr); err != nil {
			return err
		}
		p.derived = append(p.derived, d)
	}
	if keep := p.tile.Physics.Keep; keep != "" {
		p.keep, err = p.parse("keep", keep)
	}
	return err
}

func (p *points) parse(where, source string) (*expr.Expr, error) {
	e, err := expr.Parse(source)
	if err != nil {
		return nil, &solvers.InputError{Where: where, Found: err.Error(), Expected: "an expression"}
	}
	for _, name := range e.Names() {
		if _, known := p.index[name]; !known {
			return nil, &solvers.InputError{Where: where, Found: "the name " + name, Expected: "a parameter"}
		}
	}
	return e, nil
}

// order sorts the derived parameters so that each follows those it refers to.
func (p *points) order() error {
	waiting := make(map[string]bool)
	for _, d := range p.derived {
		waiting[d.name] = true
	}
	var sorted []derived
	for len(sorted) < len(p.derived) {
		before := len(sorted)
		for _, d := range p.derived {
			if waiting[d.name] && ready(d.expr, waiting) {
				sorted = append(sorted, d)
				delete(waiting, d.name)
			}
		}
		if len(sorted) == before {
			return &solvers.InputError{Where: "parameters", Found: "expressions that refer to each other in a circle", Expected: "none"}
		}
	}
	p.derived = sorted
	return nil
}

func ready(e *expr.Expr, waiting map[string]bool) bool {
	for _, name := range e.Names() {
		if waiting[name] {
			return false
		}
	}
	return true
}

// at evaluates the i-th point into values, frequency and q, and says whether
// it is to be kept. An error is an InputError; values that could not be
// evaluated are NaN then.
func (p *points) at(i int) (keep bool, err error) {
	p.axis = p.tile.Values(i, p.axis)
	for k, at := range p.varying {
		p.values[at] = p.axis[k]
	}
	err = p.derive()
	if e := p.tune(); err == nil {
		err = e
	}
	if err != nil || p.keep == nil {
		return err == nil, err
	}
	keep, err = p.keep.True(p.of)
	if err != nil {
		err = &solvers.InputError{Where: "keep", Found: err.Error(), Expected: "a condition that can be evaluated"}
	}
	return keep, err
}

func (p *points) derive() (first error) {
	for _, d := range p.derived {
		v, err := d.expr.Float(p.of)
		if err != nil {
			v = math.NaN()
			if first == nil {
				first = &solvers.InputError{Where: "parameter " + d.name, Found: err.Error(), Expected: "a value"}
			}
		}
		p.values[d.at] = v
	}
	return first
}

// tune sets the frequency and q.
func (p *points) tune() error {
	p.frequency = math.NaN()
	if at, ok := p.index[schema.Wavelength]; ok {
		p.frequency = schema.LightSpeed / p.values[at]
	}
	if at, ok := p.index[schema.Frequency]; ok {
		p.frequency = p.values[at]
	}
	p.q[0] = 2 * math.Pi * p.frequency
	for k, at := range p.base {
		p.q[1+k] = p.values[at]
	}
	if f := p.frequency; !(f > 0) || math.IsInf(p.q[0], 0) {
		p.frequency = 0
		return &solvers.InputError{Where: "frequency", Found: fmt.Sprintf("%g Hz", f), Expected: "a finite one above 0"}
	}
	return nil
}
