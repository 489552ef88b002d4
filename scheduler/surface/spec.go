package surface

import (
	"fmt"
	"math"
	"slices"

	"betaloom/scheduler/grid"
	"betaloom/schema"
	"betaloom/schema/expr"
)

// Spec says over which axes the surfaces stand and what physics they show.
type Spec struct {
	Axes    []schema.AxisBlock // file order; none: the sweep is one point
	Physics *schema.Physics
}

// formatMeta is the version of Meta and of the file's layout.
const formatMeta = 1

// metaKey is the key of Meta in the file's schema metadata.
const metaKey = "surfaces"

// Meta is the JSON in the file's schema metadata.
type Meta struct {
	Format         int               `json:"format"`
	Axes           []MetaAxis        `json:"axes"`
	Nodes          int               `json:"nodes"`       // product of the axes' lengths
	BatchNodes     int               `json:"batch_nodes"` // rows of every record batch but a family's last
	Families       []MetaFamily      `json:"families"`
	FrequencyHz    float64           `json:"frequency_hz,omitempty"`      // where no axis sets it
	FrequencyTotal bool              `json:"ng_is_slope_along_frequency"` // no derived parameter follows the frequency
	Sensitivities  []MetaSensitivity `json:"sensitivities"`               // in order of the base parameters
}

// MetaAxis is one axis: SI values, angles in radians, in file order.
type MetaAxis struct {
	Parameter string           `json:"parameter"`
	Dimension schema.Dimension `json:"dimension"`
	Unit      string           `json:"unit"`
	Values    []float64        `json:"values"`
}

// MetaFamily says where a family stands in the file.
type MetaFamily struct {
	Name     string `json:"name"`
	FirstRow int64  `json:"first_row"`
	Rows     int64  `json:"rows"`
	Present  int64  `json:"present"` // rows that are not null
}

// MetaSensitivity names the columns of a base parameter's sensitivities.
// A derivative by the parameter's SI value (radians) is PerSI times the column.
type MetaSensitivity struct {
	Parameter string  `json:"parameter"`
	Neff      string  `json:"neff_column"`
	Ng        string  `json:"ng_column"`
	PerSI     float64 `json:"per_si"`
}

func (s Spec) validate() error {
	if s.Physics == nil {
		return fmt.Errorf("surface: found no physics in the spec")
	}
	nodes := 1.0
	seen := map[string]bool{}
	for _, a := range s.Axes {
		if _, ok := s.Physics.Parameter(a.Parameter); !ok || seen[a.Parameter] {
			return fmt.Errorf("surface: axis %q: expected a parameter of the sweep, once", a.Parameter)
		}
		seen[a.Parameter] = true
		if err := checkValues(a.Parameter, a.Values); err != nil {
			return err
		}
		nodes *= float64(len(a.Values))
	}
	if nodes > grid.MaxPoints {
		return fmt.Errorf("surface: found %.3g nodes, expected at most %d", nodes, grid.MaxPoints)
	}
	return nil
}

func checkValues(name string, values []float64) error {
	if len(values) == 0 {
		return fmt.Errorf("surface: axis %s: found no values", name)
	}
	sorted := slices.Clone(values)
	slices.Sort(sorted)
	for i, v := range sorted {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return fmt.Errorf("surface: axis %s: found %g, expected finite values", name, v)
		}
		if i > 0 && v == sorted[i-1] {
			return fmt.Errorf("surface: axis %s: found %g twice, expected distinct values", name, v)
		}
		if _, frequency := grid.AngularFrequency(name, v); frequency && v <= 0 {
			return fmt.Errorf("surface: axis %s: found %g, expected positive values", name, v)
		}
	}
	return nil
}

func nodesOf(axes []schema.AxisBlock) int {
	n := 1
	for _, a := range axes {
		n *= len(a.Values)
	}
	return n
}

// meta fills in everything but the families.
func (s Spec) meta() Meta {
	m := Meta{Format: formatMeta, Nodes: nodesOf(s.Axes), BatchNodes: batchNodes, FrequencyTotal: true}
	for _, p := range s.Physics.Parameters {
		if w, ok := grid.AngularFrequency(p.Name, p.Value); ok && p.Kind == schema.Fixed {
			m.FrequencyHz = w / (2 * math.Pi)
		}
		if p.Kind == schema.Derived && followsFrequency(p.Expr) {
			m.FrequencyTotal = false
		}
	}
	for _, a := range s.Axes {
		p, _ := s.Physics.Parameter(a.Parameter)
		m.Axes = append(m.Axes, MetaAxis{Parameter: a.Parameter, Dimension: p.Dimension, Unit: siUnit(p), Values: a.Values})
	}
	m.Sensitivities = sensitivities(s.Physics)
	return m
}

// followsFrequency reports whether an expression names the reserved
// parameters of frequency, or cannot be read.
func followsFrequency(source string) bool {
	e, err := expr.Parse(source)
	if err != nil {
		return true
	}
	names := e.Names()
	return slices.Contains(names, schema.Wavelength) || slices.Contains(names, schema.Frequency)
}
