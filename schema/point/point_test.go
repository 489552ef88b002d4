package point_test

import (
	"errors"
	"math"
	"strings"
	"testing"

	"betaloom/schema"
	"betaloom/schema/point"
)

// tile is a box over wavelength and height; gap stands before rim, which it
// refers to.
func tile(change func(t *schema.Tile)) *schema.Tile {
	length := schema.Dimension{Length: 1}
	t := &schema.Tile{
		Physics: schema.Physics{
			Parameters: []schema.Parameter{
				{Name: "gap", Kind: schema.Derived, Dimension: length, Expr: "2 * rim"},
				{Name: schema.Wavelength, Kind: schema.Axis, Dimension: length},
				{Name: "height", Kind: schema.Axis, Dimension: length},
				{Name: "base", Kind: schema.Fixed, Dimension: length, Value: 0.25},
				{Name: "rim", Kind: schema.Derived, Dimension: length, Expr: "sqrt(height * base)"},
			},
			Keep: "height < 5 m",
		},
		Axes: []schema.AxisBlock{{Parameter: schema.Wavelength, Values: []float64{1, 2}}, {Parameter: "height", Values: []float64{4, 9, -1}}},
	}
	if change != nil {
		change(t)
	}
	return t
}

// The numbers are powers of two and squares, so that they are exact by hand.
func TestValues(t *testing.T) {
	p, err := point.New(tile(nil))
	if err != nil {
		t.Fatal(err)
	}
	nan := math.NaN()
	for _, c := range []struct {
		name        string
		local       int
		values      []float64 // gap, wavelength, height, base, rim
		keep, fails bool
	}{
		{"kept", 0, []float64{2, 1, 4, 0.25, 1}, true, false},
		{"left out", 4, []float64{3, 2, 9, 0.25, 1.5}, false, false},
		{"root of a negative", 5, []float64{nan, 2, -1, 0.25, nan}, false, true},
		{"kept after a failure", 3, []float64{2, 2, 4, 0.25, 1}, true, false},
	} {
		t.Run(c.name, func(t *testing.T) {
			keep, err := p.At(c.local)
			if keep != c.keep || (err != nil) != c.fails {
				t.Errorf("found %v, %v, expected %v and an error: %v", keep, err, c.keep, c.fails)
			}
			for i, want := range c.values {
				if got := p.Values[i]; got != want && !(math.IsNaN(got) && math.IsNaN(want)) {
					t.Errorf("value %d: found %g, expected %g", i, got, want)
				}
			}
			f := schema.LightSpeed / c.values[1] // f = c / wavelength
			if p.FrequencyHz != f || p.Q[0] != 2*math.Pi*f || p.Q[1] != c.values[2] || p.Q[2] != c.values[3] || len(p.Q) != 3 {
				t.Errorf("found %g Hz and the point %v, expected %g Hz, height and base", p.FrequencyHz, p.Q, f)
			}
		})
	}
}

func TestFrequencyMayBeDerived(t *testing.T) {
	p, err := point.New(tile(func(t *schema.Tile) {
		t.Physics.Parameters[1].Name, t.Axes[0].Parameter = "period", "period"
		t.Physics.Parameters = append(t.Physics.Parameters, schema.Parameter{Name: schema.Wavelength, Kind: schema.Derived, Expr: "2 * period"})
	}))
	if err != nil {
		t.Fatal(err)
	}
	if keep, err := p.At(3); !keep || err != nil || p.FrequencyHz != schema.LightSpeed/4 {
		t.Errorf("found %v, %v at %g Hz, expected a wavelength of 4 m", keep, err, p.FrequencyHz)
	}
}

func TestRefuses(t *testing.T) {
	for _, c := range []struct {
		name, says string
		change     func(t *schema.Tile)
	}{
		{"circle", "circle", func(t *schema.Tile) { t.Physics.Parameters[4].Expr = "gap / 2" }},
		{"itself", "circle", func(t *schema.Tile) { t.Physics.Parameters[4].Expr = "rim + 1 m" }},
		{"unknown name", "parameter gap: found the name width", func(t *schema.Tile) { t.Physics.Parameters[0].Expr = "width" }},
		{"no expression", "parameter gap", func(t *schema.Tile) { t.Physics.Parameters[0].Expr = "2 *" }},
		{"unknown name in keep", "keep: found the name width", func(t *schema.Tile) { t.Physics.Keep = "width > 1 m" }},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := point.New(tile(c.change))
			var e *point.Error
			if !errors.As(err, &e) || !strings.Contains(err.Error(), c.says) {
				t.Errorf("found %v, expected an error that says %q", err, c.says)
			}
		})
	}
	t.Run("no frequency", func(t *testing.T) {
		p, err := point.New(tile(func(t *schema.Tile) { t.Axes[0].Values[0] = 0 }))
		if err != nil {
			t.Fatal(err)
		}
		if keep, err := p.At(0); keep || err == nil || p.FrequencyHz != 0 {
			t.Errorf("found %v, %v at %g Hz, expected an error and no frequency", keep, err, p.FrequencyHz)
		}
	})
}
