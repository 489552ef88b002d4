package sweep_test

import (
	"errors"
	"io"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"betaloom/schema"
	"betaloom/schema/sweep"
)

const degree = math.Pi / 180

func TestCircular(t *testing.T) {
	s := load(t, "circular.yaml")
	equal(t, s.Physics.Section, schema.Section{Circular: &schema.Circular{
		Layers: []schema.Ring{
			{Name: "graded", Profile: "1.45 + doping - 0.01*(r/radius)^2", Radius: parameter("rad0")},
			{Material: "ln", Radius: literal(50e-6)},
			{Name: "jacket", Material: "clad", Radius: literal(62.5e-6)},
		},
		Orders: [2]int{0, 4}, Wall: "copper",
	}})
	equal(t, s.Physics.Materials["clad"].Sellmeier.Terms[0], [2]schema.Number{*parameter("b1"), *literal(0.0684043)})
	equal(t, s.Axes[0].Values, []float64{180e12, 185e12, 190e12, 195e12, 200e12})
	equal(t, s.Physics.Base(), []string{"size", "doping", "b1"})
	equal(t, s.Physics.Modes, sweep.DefaultModes)
	equal(t, s.Physics.Equation, "auto")
	equal(t, s.Physics.Accuracy, schema.Accuracy{})
}

func TestPipe(t *testing.T) {
	s := load(t, "pipe.yaml")
	equal(t, s.Physics.Section, schema.Section{Pipe: &schema.Pipe{
		Rectangle: &schema.Rectangle{Width: *literal(22.86e-3), Height: *parameter("b")},
		FillAlong: "y",
		FillLayers: []schema.Layer{
			{Name: "slab", Material: "slab", Thickness: parameter("t")},
			{Material: "air", Thickness: parameter("rest")},
		},
		Wall: "steel", Evanescent: 3,
	}})
	equal(t, s.Physics.Accuracy, schema.Accuracy{Neff: 1e-7, Ng: 1e-6, GVDPs2PerKm: 0.5, Beta3Ps3PerKm: 0.05})
	equal(t, s.Physics.Equation, "full-vector")
	equal(t, len(s.Axes), 0) // one point
}

func TestPipeShapes(t *testing.T) {
	d := *parameter("d")
	mm := func(v float64) schema.Number { return *literal(v * 1e-3) }
	corner := func(x, y schema.Number) [2]schema.Number { return [2]schema.Number{x, y} }
	for name, want := range map[string]*schema.Pipe{
		"circle":  {Circle: &schema.Circle{Diameter: d}},
		"coax":    {Coax: &schema.Coax{Inner: *literal(3.04e-3), Outer: d, Offset: literal(0.1e-3)}},
		"ellipse": {Ellipse: &schema.Rectangle{Width: d, Height: mm(4)}},
		"polygon": {Polygon: [][2]schema.Number{corner(mm(0), mm(0)), corner(d, mm(0)), corner(d, *literal(5e-3)), corner(mm(2), *literal(3e-3)), corner(mm(0), *literal(5e-3))}},
	} {
		t.Run(name, func(t *testing.T) {
			want.Fill = "air"
			equal(t, load(t, "pipe-"+name+".yaml").Physics.Section.Pipe, want)
		})
	}
}

func TestLine(t *testing.T) {
	s := load(t, "line.yaml")
	tilt := parameter("tilt")
	equal(t, s.Physics.Section, schema.Section{Layers: &schema.Layers{
		GroundBottom: true, WallsWidth: literal(40e-3),
		Layers: []schema.Layer{
			{Name: "board", Material: "board", Thickness: literal(1.6e-3)},
			{Material: "copper", Thickness: literal(0), Fill: "air", Strips: []schema.Strip{
				{Name: "left", Centre: *parameter("left_at"), Width: *parameter("width"), WidthAt: "foot", SidewallLeft: literal(80 * degree), SidewallRight: tilt},
				{Name: "right", Material: "board", Centre: *literal(1e-3), Width: *parameter("width"), WidthAt: "middle", SidewallLeft: tilt, SidewallRight: tilt},
			}},
			{Material: "air"},
		},
	}})
	equal(t, s.Axes[1].Values, []float64{0.5e-3, 0.4e-3, 0.3e-3, 0.2e-3, 0.1e-3})
	low, high, half := 49.0, 51.0, 0.5
	equal(t, s.Windows, []sweep.Window{{
		Name: "match",
		Require: []sweep.Requirement{{Any: []sweep.Requirement{
			{Column: "z_ohm", AtLeast: &low, AtMost: &high},
			{Column: "confinement_left", AtLeast: &half, For: []sweep.Stretch{{Parameter: "frequency", Lo: 1e9, Hi: 10e9}}},
		}}},
		Tolerance: []sweep.Tolerance{{Parameter: "gap", Spread: sweep.Uniform, By: 20e-6}, {Parameter: "tilt", Spread: sweep.Normal, By: degree}},
	}})
}

func TestPoints(t *testing.T) {
	s := load(t, "points.yaml")
	length, none := schema.Dimension{Length: 1}, schema.Dimension{}
	equal(t, s.Physics.Parameters, []schema.Parameter{
		{Name: "gap", Kind: schema.Fixed, Dimension: length, Value: 0.3e-6},
		{Name: "total", Kind: schema.Derived, Dimension: length, Expr: "height + gap"},
		{Name: "wavelength", Kind: schema.Axis, Dimension: length},
		{Name: "height", Kind: schema.Axis, Dimension: length},
		{Name: "tilt", Kind: schema.Axis, Dimension: schema.Dimension{Angle: 1}},
		{Name: "temperature", Kind: schema.Axis, Dimension: schema.Dimension{Temperature: 1}},
		{Name: "shift", Kind: schema.Axis, Dimension: none},
	})
	equal(t, s.Columns, []string{"wavelength", "height", "tilt", "temperature", "shift"})
	equal(t, s.Rows, [][]float64{{1.55e-6, 400e-9, 1.5 * degree, 293.15, -0.01}, {1.56e-6, 410.5e-9, 0, 298.65, 0}})
	equal(t, len(s.Axes), 0)
	equal(t, s.Physics.Section.Layers.GroundBottom && s.Physics.Section.Layers.GroundTop, true)
	equal(t, s.Physics.Materials["film"].ReferenceTemperature, literal(293.15))
}

// TestPointsHeaders: a unit may stand in brackets or, as in the tables' own
// columns, at the end of the name; what is no such unit belongs to the name.
func TestPointsHeaders(t *testing.T) {
	src := "format: 1\nsweep: film\nmaterials: {film: {index: 2}, glass: {index: 1.45}}\npoints: {file: p.csv}\n" +
		"section: {layers: [{material: glass}, {material: film, thickness: height}, {material: glass}]}\n"
	for head, want := range map[string][]string{
		"wavelength_um,height_nm":                     {"wavelength", "height"},
		"frequency_hz,height_m,index_shift":           {"frequency", "height", "index_shift"},
		"frequency_THz,height [mm],tilt_deg":          {"frequency", "height", "tilt"},
		"wavelength [m],height_um,temperature_K,n_s":  {"wavelength", "height", "temperature", "n_s"},
		"wavelength_m,height_um,width_in [um],temp_1": {"wavelength", "height", "width_in", "temp_1"},
		"wavelength_m,height_um,shift_in,slope_m [1]": {"wavelength", "height", "shift_in", "slope_m"},
	} {
		t.Run(head, func(t *testing.T) {
			row := strings.TrimSuffix(strings.Repeat("1,", len(want)), ",")
			s, err := sweep.Parse("film.yaml", []byte(src), func(string) (io.ReadCloser, error) {
				return io.NopCloser(strings.NewReader(head + "\n" + row + "\n")), nil
			})
			if err != nil {
				t.Fatal(err)
			}
			equal(t, s.Columns, want)
			height, _ := s.Physics.Parameter("height")
			equal(t, height.Dimension, schema.Dimension{Length: 1})
		})
	}
}

// TestAt: errors that are found later point into the file.
func TestAt(t *testing.T) {
	s := load(t, "design.yaml")
	for path, want := range map[string][2]int{
		"sweep":                              {2, 1},
		"materials":                          {3, 1},
		"materials.film":                     {4, 3},
		"materials.film.named":               {4, 11},
		"parameters.width":                   {15, 3},
		"section.layers[0]":                  {23, 7},
		"section.layers[1].strips[0].width":  {25, 32},
		"section.layers[1].strips[0].height": {25, 17}, // not there: its strip
		"materials.glass.index":              {3, 1},
		"windows[0].require[1].column":       {35, 10},
		"colour":                             {1, 1},
	} {
		t.Run(path, func(t *testing.T) {
			line, column := s.At(path)
			equal(t, [2]int{line, column}, want)
		})
	}
}

// TestExample: the project's main example is accepted.
func TestExample(t *testing.T) {
	s, err := sweep.Load("../../testdata/sweeps/nitride-film.yaml", []string{"silicon-nitride", "fused-silica"})
	if err != nil {
		t.Fatal(err)
	}
	equal(t, s.Name, "nitride-film")
}

// TestBuiltinMaterials: a name that is not built in is one fault among the
// others, and what was probably meant is named.
func TestBuiltinMaterials(t *testing.T) {
	path := filepath.Join(t.TempDir(), "film.yaml")
	src := slab(t, "{index: 2}", "{named: silicn-nitride}", "{index: 1.45}", "{index: -2}")
	if err := os.WriteFile(path, []byte(src), 0o644); err != nil {
		t.Fatal(err)
	}
	_, err := sweep.Load(path, []string{"silicon-nitride", "fused-silica"})
	var list sweep.Diagnostics
	if !errors.As(err, &list) || len(list) != 2 {
		t.Fatalf("found %v, expected two diagnostics", err)
	}
	if got := list[0]; got.Path != "materials.film.named" || got.Column < 10 || !strings.Contains(got.Expected, "did you mean silicon-nitride?") {
		t.Errorf("found %v, expected the place of the name and what was meant", got)
	}
}
