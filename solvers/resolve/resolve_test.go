package resolve

import (
	"errors"
	"math"
	"math/cmplx"
	"strings"
	"testing"

	"betaloom/schema"
	"betaloom/solvers"
)

const um = 1e-6

func at(l float64) float64 { return 2 * math.Pi * schema.LightSpeed / l }

// film has an index that disperses through an expression, a thickness that
// follows another, and a temperature.
func film(extra ...schema.Parameter) *schema.Physics {
	length := schema.Dimension{Length: 1}
	return &schema.Physics{
		Parameters: append([]schema.Parameter{
			{Name: "film_index", Kind: schema.Derived, Expr: "1.9 + 0.02*(1 um/wavelength)^2 + 0.5*shift^2"},
			{Name: "wavelength", Kind: schema.Axis, Dimension: length},
			{Name: "height", Kind: schema.Axis, Dimension: length},
			{Name: "shift", Kind: schema.Fixed, Value: 0.1},
			{Name: "slab", Kind: schema.Derived, Dimension: length, Expr: "0.25*height + 20 nm"},
			{Name: "temperature", Kind: schema.Axis, Dimension: schema.Dimension{Temperature: 1}},
		}, extra...),
		Materials: map[string]schema.Material{
			"film": {Index: &schema.Number{Parameter: "film_index"}},
			"gel":  {Index: &schema.Number{Value: 1.41}, ThermoOptic: &schema.Number{Value: -3e-4}},
			"rim":  {Conductivity: &schema.Number{Value: 1e7}},
		},
	}
}

func resolver(t *testing.T, p *schema.Physics, q solvers.Q) *Resolver {
	t.Helper()
	r, err := New(p)
	if err != nil {
		t.Fatal(err)
	}
	if err := r.Set(q); err != nil {
		t.Fatal(err)
	}
	return r
}

// near compares to 1e-12 of the larger, a few hundred roundings: the jets
// are exact but for rounding.
func near(t *testing.T, what string, got, want complex128) {
	t.Helper()
	if cmplx.Abs(got-want) > 1e-12*math.Max(cmplx.Abs(got), cmplx.Abs(want)) {
		t.Errorf("%s: found %v, expected %v", what, got, want)
	}
}

// TestDispersionThroughExpression holds the permittivity of the film
// against calculus by hand: with a = 1.9 + s^2/2 and b = 0.02 (1 um)^2 /
// (2 pi c)^2 the index is n = a + b w^2 and the permittivity n^2.
func TestDispersionThroughExpression(t *testing.T) {
	w := at(1.55 * um)
	r := resolver(t, film(), solvers.Q{w, 0.8 * um, 0.1, 293.15})
	eps, err := r.Medium("film")
	if err != nil {
		t.Fatal(err)
	}
	b := 0.02 * um * um / math.Pow(2*math.Pi*schema.LightSpeed, 2)
	n := 1.9 + 0.005 + b*w*w
	for axis, e := range eps {
		name := string("xyz"[axis])
		near(t, name, e.V, complex(n*n, 0))
		near(t, name+" d/dw", e.W, complex(2*n*2*b*w, 0))
		near(t, name+" d2/dw2", e.WW, complex(8*b*b*w*w+4*n*b, 0))
		near(t, name+" d3/dw3", e.WWW, complex(24*b*b*w, 0))
		near(t, name+" d/dshift", e.P[1], complex(2*n*0.1, 0))
		near(t, name+" d2/dw dshift", e.WP[1], complex(2*2*b*w*0.1, 0))
		near(t, name+" d/dheight", e.P[0], 0)
	}
}

func TestTemperature(t *testing.T) {
	r := resolver(t, film(), solvers.Q{at(1.55 * um), 0.8 * um, 0.1, 303.15})
	eps, err := r.Medium("gel")
	if err != nil {
		t.Fatal(err)
	}
	n := 1.41 - 3e-4*(303.15-293.15)
	near(t, "eps", eps[0].V, complex(n*n, 0))
	near(t, "d/dT", eps[0].P[2], complex(-2*n*3e-4, 0))
}

func TestDerivedDimension(t *testing.T) {
	r := resolver(t, film(), solvers.Q{at(1.55 * um), 0.8 * um, 0.1, 293.15})
	d := r.Dimension(schema.Number{Parameter: "slab"})
	near(t, "value", d.V, 0.22e-6)
	near(t, "d/dheight", d.P[0], 0.25)
}

// TestDimensionThatFollowsTheWavelength: it is held fixed where the
// frequency moves.
func TestDimensionThatFollowsTheWavelength(t *testing.T) {
	p := film(schema.Parameter{Name: "quarter", Kind: schema.Derived, Dimension: schema.Dimension{Length: 1}, Expr: "wavelength/4"})
	r := resolver(t, p, solvers.Q{at(1.6 * um), 0.8 * um, 0.1, 293.15})
	d := r.Dimension(schema.Number{Parameter: "quarter"})
	near(t, "value", d.V, 0.4e-6)
	if d.W != 0 {
		t.Errorf("d/dw: found %v, expected none", d.W)
	}
}

// TestDerivedWavelength: the clock is a parameter's, so a quarter wave
// moves with it, and Sweep is dw/dp = -w/L dL/dp.
func TestDerivedWavelength(t *testing.T) {
	length := schema.Dimension{Length: 1}
	p := &schema.Physics{Parameters: []schema.Parameter{
		{Name: "detuning", Kind: schema.Axis, Dimension: length},
		{Name: "wavelength", Kind: schema.Derived, Dimension: length, Expr: "1.5 um + 2*detuning"},
		{Name: "quarter", Kind: schema.Derived, Dimension: length, Expr: "wavelength/4"},
	}}
	w := at(1.52 * um)
	r := resolver(t, p, solvers.Q{w, 0.01 * um})
	near(t, "sweep", complex(r.Sweep()[0], 0), complex(-w/(1.52*um)*2, 0))
	near(t, "d quarter/d detuning", r.Dimension(schema.Number{Parameter: "quarter"}).P[0], 0.5)
}

// TestRemembered asks twice over a line of a tile, in both orders, and
// expects the same jets as a fresh resolver gives.
func TestRemembered(t *testing.T) {
	used, err := New(film())
	if err != nil {
		t.Fatal(err)
	}
	for i := range 300 {
		q := solvers.Q{at((1.2 + 0.001*float64(i%100)) * um), float64(1+i%3) * um, 0.1 * float64(i%2), 293.15}
		if err := used.Set(q); err != nil {
			t.Fatal(err)
		}
		got, err := used.Medium("film")
		if err != nil {
			t.Fatal(err)
		}
		want, err := resolver(t, film(), q).Medium("film")
		if err != nil {
			t.Fatal(err)
		}
		if got[0].V != want[0].V || got[0].WWW != want[0].WWW || got[0].P[1] != want[0].P[1] {
			t.Fatalf("point %d: found %+v, expected %+v", i, got[0], want[0])
		}
	}
}

func TestRefused(t *testing.T) {
	derived := func(name, e string) schema.Parameter {
		return schema.Parameter{Name: name, Kind: schema.Derived, Expr: e}
	}
	none := film()
	none.Parameters = none.Parameters[2:4]
	for name, c := range map[string]struct {
		p    *schema.Physics
		says string
	}{
		"a circle":      {film(derived("a", "b+1"), derived("b", "a+1")), "depends on itself"},
		"unknown name":  {film(derived("a", "nobody+1")), "nobody"},
		"no expression": {film(derived("a", "1 +")), "an expression"},
		"no wavelength": {none, "neither wavelength nor frequency"},
	} {
		t.Run(name, func(t *testing.T) {
			_, err := New(c.p)
			var input *solvers.InputError
			if !errors.As(err, &input) || !strings.Contains(err.Error(), c.says) {
				t.Fatalf("found %v, expected an input error that says %q", err, c.says)
			}
		})
	}
}

func TestPointsRefused(t *testing.T) {
	p := film(schema.Parameter{Name: "root", Kind: schema.Derived, Expr: "sqrt(shift)"})
	r, err := New(p)
	if err != nil {
		t.Fatal(err)
	}
	for name, q := range map[string]solvers.Q{
		"no frequency":   {0, um, 0.1, 293},
		"not a number":   {math.NaN(), um, 0.1, 293},
		"root of minus":  {at(um), um, -0.1, 293},
		"too few values": {at(um), um},
	} {
		t.Run(name, func(t *testing.T) {
			if err := r.Set(q); err == nil {
				t.Fatal("was accepted")
			}
		})
	}
	if err := r.Set(solvers.Q{at(um), um, 0.1, 293}); err != nil {
		t.Fatal(err)
	}
	if _, err := r.Medium("rim"); err == nil {
		t.Error("a metal was given a permittivity")
	}
}
