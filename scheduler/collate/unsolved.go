package collate

import (
	"fmt"
	"math"

	"betaloom/schema"
	"betaloom/schema/column"
	"betaloom/schema/expr"
	"betaloom/schema/part"

	"betaloom/scheduler/grid"
)

// unsolved sets b to the rows of a tile without a part: its points are
// failed with this reason, or excluded where keep is false.
func unsolved(t *schema.Tile, reason string, b *column.Batch) error {
	v, err := newValuation(t)
	if err != nil {
		return err
	}
	builder := part.NewBuilder(&t.Physics)
	for local := range t.Points() {
		pt := part.Point{Values: v.at(local), Guided: part.Missing, State: part.Failed, Reason: reason, FrequencyHz: v.frequency()}
		if v.excluded() {
			pt.State, pt.Reason = part.Excluded, "keep: "+t.Physics.Keep
		}
		if err := builder.Add(pt, nil); err != nil {
			return err
		}
	}
	data, err := builder.Encode("")
	if err != nil {
		return err
	}
	return part.Read(&t.Physics, "", t.Points(), data, b)
}

// valuation gives the values of a tile's parameters, point by point.
type valuation struct {
	tile    *schema.Tile
	keep    *expr.Expr // nil: everything is kept
	derived map[string]*expr.Expr
	varying []float64
	values  map[string]float64 // those known at this point
	pending map[string]bool    // those being worked out
}

func newValuation(t *schema.Tile) (*valuation, error) {
	v := &valuation{tile: t, derived: map[string]*expr.Expr{}, values: map[string]float64{}, pending: map[string]bool{}}
	for _, q := range t.Physics.Parameters {
		if q.Kind != schema.Derived {
			continue
		}
		e, err := expr.Parse(q.Expr)
		if err != nil {
			return nil, fmt.Errorf("parameter %s: %w", q.Name, err)
		}
		v.derived[q.Name] = e
	}
	if t.Physics.Keep == "" {
		return v, nil
	}
	e, err := expr.Parse(t.Physics.Keep)
	if err != nil {
		return nil, fmt.Errorf("keep: %w", err)
	}
	v.keep = e
	return v, nil
}

// at goes to a point and gives its parameters in their order; one that cannot
// be worked out is NaN.
func (v *valuation) at(local int) []float64 {
	clear(v.values)
	v.varying = v.tile.Values(local, v.varying)
	for i, name := range v.tile.Varying() {
		v.values[name] = v.varying[i]
	}
	all := make([]float64, len(v.tile.Physics.Parameters))
	for i, q := range v.tile.Physics.Parameters {
		all[i] = v.of(q.Name)
	}
	return all
}

// of gives a parameter's value at this point.
func (v *valuation) of(name string) float64 {
	if known, ok := v.values[name]; ok {
		return known
	}
	value := math.NaN()
	if e := v.derived[name]; e != nil && !v.pending[name] {
		v.pending[name] = true
		if x, err := e.Float(v.of); err == nil {
			value = x
		}
		delete(v.pending, name)
	} else if q, ok := v.tile.Physics.Parameter(name); ok && q.Kind == schema.Fixed {
		value = q.Value
	}
	v.values[name] = value
	return value
}

func (v *valuation) frequency() float64 {
	for _, name := range []string{schema.Wavelength, schema.Frequency} {
		if w, ok := grid.AngularFrequency(name, v.of(name)); ok && w > 0 {
			return w / (2 * math.Pi)
		}
	}
	return math.NaN()
}

// excluded reports whether keep is known to be false.
func (v *valuation) excluded() bool {
	if v.keep == nil {
		return false
	}
	kept, err := v.keep.True(v.of)
	return err == nil && !kept
}
