package sweep_test

import (
	"math"
	"reflect"
	"testing"

	"betaloom/schema"
	"betaloom/schema/sweep"
)

// TestDesign holds the complete example of the contract against the structs
// that it means, written down by hand.
func TestDesign(t *testing.T) {
	s := load(t, "design.yaml")
	t.Run("name", func(t *testing.T) { equal(t, s.Name, "nitride-comb") })
	t.Run("physics", func(t *testing.T) {
		for name, want := range designMaterials() {
			equal(t, s.Physics.Materials[name], want)
		}
		equal(t, len(s.Physics.Materials), len(designMaterials()))
		equal(t, s.Physics.Parameters, designParameters())
		equal(t, s.Physics.Section, designSection())
		rest := s.Physics
		rest.Materials, rest.Parameters, rest.Section = nil, nil, schema.Section{}
		equal(t, rest, schema.Physics{
			Format: schema.FormatPhysics, Equation: "auto", Modes: 4,
			Accuracy: schema.Accuracy{Neff: 1e-6}, Keep: "width > 2 * slab_left",
		})
	})
	t.Run("axes", func(t *testing.T) { designAxes(t, s) })
	t.Run("windows", func(t *testing.T) {
		low, high, most := -250.0, -20.0, 6.0
		equal(t, s.Windows, []sweep.Window{{
			Name: "comb", Family: "TE00",
			Require: []sweep.Requirement{
				{Column: "gvd_ps2_per_km", AtLeast: &low, AtMost: &high, For: []sweep.Stretch{{Parameter: "wavelength", Lo: 1.5e-6, Hi: 1.6e-6}}},
				{Column: "guided_count", AtMost: &most},
			},
			Tolerance: []sweep.Tolerance{{Parameter: "width", Spread: sweep.Normal, By: 10e-9}, {Parameter: "height", Spread: sweep.Uniform, By: 5e-9}},
			Correlate: []sweep.Correlation{{A: "width", B: "height", Rho: 0.3}},
		}})
	})
	t.Run("source", func(t *testing.T) { equal(t, string(s.Source), string(read(t, "testdata/good/design.yaml"))) })
}

func designMaterials() map[string]schema.Material {
	o, e := schema.Material{Named: "lithium-niobate-o"}, schema.Material{Named: "lithium-niobate-e"}
	return map[string]schema.Material{
		"film":  {Named: "silicon-nitride", AddIndex: parameter("index_shift")},
		"oxide": {Named: "fused-silica"},
		"gel":   {Index: literal(1.41), ThermoOptic: literal(-3e-4)},
		"lossy": {Index: literal(3.5), Extinction: literal(1e-4)},
		"board": {Permittivity: literal(4.4), LossTangent: literal(0.02)},
		"brass": {Conductivity: literal(1.5e7)},
		"mine": {Sellmeier: &schema.Sellmeier{Constant: *literal(1), Terms: [][2]schema.Number{
			{*literal(0.6961663), *literal(0.0684043)}, {*literal(0.4079426), *literal(0.1162414)}, {*literal(0.8974794), *literal(9.896161)},
		}}},
		"lab": {Table: &schema.Table{
			File:        "lab-film.csv",
			WavelengthM: []float64{1.2e-6, 1.3e-6, 1.4e-6, 1.5e-6, 1.6e-6, 1.8e-6},
			N:           []float64{2.010, 2.006, 2.003, 2.000, 1.998, 1.994},
			K:           []float64{1e-5, 1e-5, 9e-6, 9e-6, 8e-6, 8e-6},
		}},
		"ln": {Axes: &schema.Axes{X: e, Y: o, Z: o}},
	}
}

func designParameters() []schema.Parameter {
	length := schema.Dimension{Length: 1}
	return []schema.Parameter{
		{Name: "wavelength", Kind: schema.Axis, Dimension: length},
		{Name: "width", Kind: schema.Axis, Dimension: length},
		{Name: "height", Kind: schema.Fixed, Dimension: length, Value: 0.8e-6},
		{Name: "index_shift", Kind: schema.Axis},
		{Name: "slab_left", Kind: schema.Derived, Dimension: length, Expr: "0.25 * height + 20 nm"},
		{Name: "temperature", Kind: schema.Fixed, Dimension: schema.Dimension{Temperature: 1}, Value: 293.15},
	}
}

func designSection() schema.Section {
	angle := 88 * math.Pi / 180
	return schema.Section{Layers: &schema.Layers{Layers: []schema.Layer{
		{Material: "oxide"},
		{
			Name: "core", Material: "film", Thickness: parameter("height"), Fill: "oxide",
			Strips: []schema.Strip{{Centre: *literal(0), Width: *parameter("width"), SidewallLeft: literal(angle), SidewallRight: literal(angle)}},
		},
		{Material: "oxide"},
	}}}
}

func designAxes(t *testing.T, s *sweep.Sweep) {
	names, counts := []string{}, []int{}
	for _, a := range s.Axes {
		names, counts = append(names, a.Parameter), append(counts, len(a.Values))
	}
	equal(t, names, []string{"wavelength", "width", "index_shift"})
	equal(t, counts, []int{81, 61, 3})
	equal(t, s.Axes[0].Values[0], 1.3e-6)
	equal(t, s.Axes[0].Values[1], 1.305e-6)
	equal(t, s.Axes[0].Values[80], 1.7e-6)
	equal(t, s.Axes[2].Values, []float64{-0.01, 0, 0.01})
	if s.Columns != nil || s.Rows != nil {
		t.Error("found rows, expected axes alone")
	}
}

func equal[T any](t *testing.T, found, expected T) {
	t.Helper()
	if !reflect.DeepEqual(found, expected) {
		t.Errorf("found %+v, expected %+v", found, expected)
	}
}

func literal(v float64) *schema.Number     { return &schema.Number{Value: v} }
func parameter(name string) *schema.Number { return &schema.Number{Parameter: name} }
