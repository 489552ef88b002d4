// Package parttest makes the answers of an invented slab for the tests of
// parts and of what is made of them: smooth, full-precision numbers that
// depend on the point alone, every kind of state, and columns without values.
// They obey no equation.
package parttest

import (
	"fmt"
	"math"

	"betaloom/schema"
	"betaloom/schema/part"
)

// Physics is a film between two half-spaces with the axes wavelength, height
// and index_shift, a fixed temperature and wall angle, and a derived gap.
func Physics() schema.Physics {
	length, angle, kelvin := schema.Dimension{Length: 1}, schema.Dimension{Angle: 1}, schema.Dimension{Temperature: 1}
	thickness, index := schema.Number{Parameter: "height"}, schema.Number{Value: 1.45}
	return schema.Physics{
		Format:    schema.FormatPhysics,
		Materials: map[string]schema.Material{"film": {Named: "silicon-nitride"}, "oxide": {Index: &index}},
		Parameters: []schema.Parameter{
			{Name: schema.Wavelength, Kind: schema.Axis, Dimension: length},
			{Name: "height", Kind: schema.Axis, Dimension: length},
			{Name: "index_shift", Kind: schema.Axis},
			{Name: schema.Temperature, Kind: schema.Fixed, Dimension: kelvin, Value: 293.15},
			{Name: "wall", Kind: schema.Fixed, Dimension: angle, Value: 88 * math.Pi / 180},
			{Name: "gap", Kind: schema.Derived, Dimension: length, Expr: "0.25 * height"},
		},
		Section: schema.Section{Layers: &schema.Layers{Layers: []schema.Layer{
			{Material: "oxide"}, {Name: "core", Material: "film", Thickness: &thickness}, {Material: "oxide"}}}},
		Equation: "auto",
		Modes:    2,
		Accuracy: schema.Accuracy{Neff: 1e-6},
	}
}

// Axes is a box of Physics with these numbers of points.
func Axes(wavelengths, heights, shifts int) []schema.AxisBlock {
	return []schema.AxisBlock{
		{Parameter: schema.Wavelength, Values: span(1.3e-6, 1.7e-6, wavelengths)},
		{Parameter: "height", Values: span(0.2e-6, 1.2e-6, heights)},
		{Parameter: "index_shift", Values: span(-0.01, 0.01, shifts)},
	}
}

func span(from, to float64, n int) []float64 {
	values := make([]float64, n)
	for i := range values {
		values[i] = from + (to-from)*float64(i)/float64(max(1, n-1))
	}
	return values
}

// Point answers one point of a tile: its state depends on the height.
func Point(t *schema.Tile, local int) (part.Point, []part.Mode) {
	v := t.Values(local, nil)
	wavelength, height, shift := v[0], v[1], v[2]
	pt := part.Point{
		Values:      []float64{wavelength, height, shift, 293.15, 88 * math.Pi / 180, 0.25 * height},
		FrequencyHz: schema.LightSpeed / wavelength, State: part.Solved, Guided: 2,
	}
	switch {
	case height < 0.25e-6:
		pt.State, pt.Guided, pt.Reason = part.NoMode, 0, "no guided mode, because the film is too thin"
		return pt, nil
	case height > 1.19e-6:
		pt.State, pt.Guided, pt.Reason = part.Failed, part.Missing, fmt.Sprintf("layer core: found a height of %g, expected less", height)
		return pt, nil
	case height > 1.15e-6:
		pt.State, pt.Guided, pt.Reason = part.Excluded, part.Missing, "keep"
		return pt, nil
	}
	return pt, []part.Mode{mode(0, wavelength, height, shift), mode(1, wavelength, height, shift)}
}

func mode(i int, wavelength, height, shift float64) part.Mode {
	x := (height+shift*1e-6)/wavelength - 0.07*float64(i)
	n := 1.45 + 0.55*math.Tanh(2.3*x) + 0.9*shift
	none := math.NaN()
	m := part.Mode{
		Family: []string{"TE0", "TM0"}[i], Type: []string{"TE", "TM"}[i],
		Neff: n, Kappa: 0, Ng: n + 0.4/math.Cosh(3*x), GVD: 1e-25 * math.Sin(5*x), Beta3: 1e-40 * math.Cos(7*x),
		NeffErr: 1e-13 * (1 + x), KappaErr: 0, NgErr: 1e-11 * (2 + math.Sin(x)), GVDErr: 1e-34 * (1 + x*x), Beta3Err: 1e-48 * math.Exp(x),
		DNeff:   []float64{1e5 / math.Cosh(2.3*x), 0.9 + 0.01*x, 1e-5 * x, 0},
		DNg:     []float64{-2e5 * math.Sin(3*x), 0.95 + 0.02*x, 2e-5 * x, 0},
		ExShare: float64(1 - i), Aeff: none, Weff: height * (1.3 + 0.2*math.Cos(4*x)), Confinement: []float64{math.Tanh(3 * x)},
		Z: complex(none, none), Cutoff: none, CPerM: none, LPerM: none,
	}
	if x < 0.2 {
		m.NeffErr, m.Flags = 2e-6, []string{"near-cutoff"}
	}
	for k := range m.Signature {
		m.Signature[k] = float32(math.Sin(float64(k+1)*x) / 4)
	}
	return m
}

// Part is the part of a tile.
func Part(t *schema.Tile) ([]byte, error) {
	b := part.NewBuilder(&t.Physics)
	if err := Fill(b, t); err != nil {
		return nil, err
	}
	name, err := t.Name()
	if err != nil {
		return nil, err
	}
	return b.Encode(name)
}

// Fill adds a tile's points to a builder.
func Fill(b *part.Builder, t *schema.Tile) error {
	for local := range t.Points() {
		pt, modes := Point(t, local)
		if err := b.Add(pt, modes); err != nil {
			return err
		}
	}
	return nil
}
