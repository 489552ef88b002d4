package point

import (
	"fmt"
	"math"

	"betaloom/schema"
	"betaloom/schema/expr"
)

// Error says what of a tile's parameters, or of one of its points, cannot be
// evaluated.
type Error struct {
	Where    string // parameter gap, keep, frequency
	Found    string
	Expected string
}

// Error gives all three in one line.
func (e *Error) Error() string {
	return fmt.Sprintf("%s: found %s, expected %s", e.Where, e.Found, e.Expected)
}

// Points evaluates every parameter of a tile at one point after the other. It
// serves one goroutine; its slices are used again by the next At.
type Points struct {
	Values      []float64 // of Physics.Parameters, in their order; NaN where one cannot be evaluated
	FrequencyHz float64   // 0 where it cannot be told
	Q           []float64 // the angular frequency in rad/s, then the base parameters: a solver's point

	tile    *schema.Tile
	index   map[string]int // of a parameter in Values
	varying []int          // where the tile's values go
	axis    []float64
	base    []int
	derived []expr.Definition // each after those it refers to
	keep    *expr.Expr        // nil: every point is kept
	of      func(name string) float64
}

// New compiles the expressions of a tile. What it refuses is an *Error.
func New(t *schema.Tile) (*Points, error) {
	p := &Points{tile: t, index: make(map[string]int), Values: make([]float64, len(t.Physics.Parameters))}
	for i, q := range t.Physics.Parameters {
		p.index[q.Name], p.Values[i] = i, q.Value
	}
	p.of = func(name string) float64 { return p.Values[p.index[name]] }
	for _, name := range t.Varying() {
		p.varying = append(p.varying, p.index[name])
	}
	for _, name := range t.Physics.Base() {
		p.base = append(p.base, p.index[name])
	}
	p.Q = make([]float64, 1+len(p.base))
	return p, p.compile()
}

// compile parses the expressions and puts the derived parameters in order.
func (p *Points) compile() (err error) {
	var derived []expr.Definition
	for _, q := range p.tile.Physics.Parameters {
		if q.Kind != schema.Derived {
			continue
		}
		e, err := p.parse("parameter "+q.Name, q.Expr)
		if err != nil {
			return err
		}
		derived = append(derived, expr.Definition{Name: q.Name, Expr: e})
	}
	if keep := p.tile.Physics.Keep; keep != "" {
		if p.keep, err = p.parse("keep", keep); err != nil {
			return err
		}
	}
	sorted, circle := expr.Order(derived)
	if len(circle) > 0 {
		return &Error{Where: "parameters", Found: "expressions that refer to each other in a circle", Expected: "none"}
	}
	p.derived = sorted
	return nil
}

func (p *Points) parse(where, source string) (*expr.Expr, error) {
	e, err := expr.Parse(source)
	if err != nil {
		return nil, &Error{Where: where, Found: err.Error(), Expected: "an expression"}
	}
	for _, name := range e.Names() {
		if _, known := p.index[name]; !known {
			return nil, &Error{Where: where, Found: "the name " + name, Expected: "a parameter"}
		}
	}
	return e, nil
}

// At goes to the point of this local index and says whether it is to be kept.
// What cannot be evaluated is an *Error; keep is false then.
func (p *Points) At(local int) (keep bool, err error) {
	p.axis = p.tile.Values(local, p.axis)
	for k, at := range p.varying {
		p.Values[at] = p.axis[k]
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
		err = &Error{Where: "keep", Found: err.Error(), Expected: "a condition that can be evaluated"}
	}
	return keep, err
}

func (p *Points) derive() (first error) {
	for _, d := range p.derived {
		v, err := d.Expr.Float(p.of)
		if err != nil {
			v = math.NaN()
			if first == nil {
				first = &Error{Where: "parameter " + d.Name, Found: err.Error(), Expected: "a value"}
			}
		}
		p.Values[p.index[d.Name]] = v
	}
	return first
}

// tune sets the frequency and Q.
func (p *Points) tune() error {
	p.FrequencyHz = math.NaN()
	if at, ok := p.index[schema.Wavelength]; ok {
		p.FrequencyHz = schema.LightSpeed / p.Values[at]
	}
	if at, ok := p.index[schema.Frequency]; ok {
		p.FrequencyHz = p.Values[at]
	}
	p.Q[0] = 2 * math.Pi * p.FrequencyHz
	for k, at := range p.base {
		p.Q[1+k] = p.Values[at]
	}
	if f := p.FrequencyHz; !(f > 0) || math.IsInf(p.Q[0], 0) {
		p.FrequencyHz = 0
		return &Error{Where: "frequency", Found: fmt.Sprintf("%g Hz", f), Expected: "a finite one above 0"}
	}
	return nil
}
