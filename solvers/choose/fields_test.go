package choose

import (
	"context"
	"math"
	"math/cmplx"
	"strings"
	"testing"

	"betaloom/schema"
	"betaloom/solvers"
)

// field samples a mode of the film, over a window that holds all of its power.
func field(t *testing.T, mode int, o solvers.FieldOptions) *solvers.Field {
	t.Helper()
	problem, _, err := New(film())
	if err != nil {
		t.Fatal(err)
	}
	fielder, ok := problem.(solvers.Fielder)
	if !ok {
		t.Fatal("a slab gives no fields")
	}
	f, err := fielder.Fields(context.Background(), solvers.Q{omega(1.55 * um), 0.5 * um}, mode, o)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// TestFieldEnergy: a metre of width carries 1 W, and the group velocity is that over the energy in a length (Collin, Field Theory of Guided Waves). The
// midpoint rule of 4 nm with interfaces half-way between places errs by (q d)^2/24 with q d = 0.04, 7e-5, and the
// window leaves out exp(-2 g 1.75 um), 1e-5 of the mode that reaches furthest.
func TestFieldEnergy(t *testing.T) {
	const d, mu0 = 0.004 * um, 4e-7 * math.Pi
	eps0 := 1 / (mu0 * schema.LightSpeed * schema.LightSpeed)
	for mode := range 2 {
		f := field(t, mode, solvers.FieldOptions{Points: 1001, Window: &solvers.Window{Right: 1, Bottom: -437.5 * d, Top: 562.5 * d}})
		t.Run(f.Mode.Family, func(t *testing.T) {
			power, energy := 0.0, 0.0
			for j := range f.Y {
				eps := map[string]float64{"film": 4, "oxide": 1.45 * 1.45}[f.Materials[f.Material[j]]]
				power += d / 2 * real(f.E[0][j]*cmplx.Conj(f.H[1][j])-f.E[1][j]*cmplx.Conj(f.H[0][j]))
				for c := range 3 {
					energy += d / 4 * (eps0*eps*math.Pow(cmplx.Abs(f.E[c][j]), 2) + mu0*math.Pow(cmplx.Abs(f.H[c][j]), 2))
				}
			}
			if math.Abs(power-1) > 2e-4 {
				t.Errorf("the power is %.7g W, expected 1 W", power)
			}
			if ng := schema.LightSpeed * energy / power; math.Abs(ng/f.Mode.Ng-1) > 2e-4 {
				t.Errorf("ng from the energy is %.7g, the mode's %.7g", ng, f.Mode.Ng)
			}
		})
	}
}

// TestFieldView: the window a mode chooses holds both interfaces, and at its ends the field has fallen to exp(-4), with x for what
// is on the films' side of that: common practice, no source.
func TestFieldView(t *testing.T) {
	f := field(t, 0, solvers.FieldOptions{})
	if len(f.X) != 1 || len(f.Y) != 201 || len(f.Edges) != 2 {
		t.Fatalf("%d by %d places and %d edges, expected 1 by 201 and 2", len(f.X), len(f.Y), len(f.Edges))
	}
	edge := 0
	for f.Y[edge] < 0 {
		edge++
	}
	if r := cmplx.Abs(f.E[0][0] / f.E[0][edge]); r < 0.9*math.Exp(-4) || r > 1.1*math.Exp(-4) {
		t.Errorf("the field at the window's end is %.3g of that at the film, expected %.3g", r, math.Exp(-4))
	}
	if got := f.Materials[f.Material[0]] + " " + f.Materials[f.Material[100]]; got != "oxide film" {
		t.Errorf("found %s, expected oxide film", got)
	}
}

func TestFieldRefusals(t *testing.T) {
	problem, _, err := New(film())
	if err != nil {
		t.Fatal(err)
	}
	for name, c := range map[string]struct {
		mode    int
		options solvers.FieldOptions
		says    string
	}{
		"mode too high": {9, solvers.FieldOptions{}, "modes are guided here"},
		"no mode":       {-1, solvers.FieldOptions{}, "modes are guided here"},
		"one point":     {0, solvers.FieldOptions{Points: 1}, "2 to"},
	} {
		t.Run(name, func(t *testing.T) {
			_, err := problem.(solvers.Fielder).Fields(context.Background(), solvers.Q{omega(1.55 * um), 0.5 * um}, c.mode, c.options)
			if err == nil || !strings.Contains(err.Error(), c.says) {
				t.Errorf("found %v, expected an error that says %q", err, c.says)
			}
		})
	}
}
