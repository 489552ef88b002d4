package guide

import (
	"context"
	"fmt"
	"io"
	"math"
	"strings"
	"testing"

	"betaloom/schema"
	"betaloom/schema/sweep"
	"betaloom/solvers"
)

const um = 1e-6

func frequency(wavelength float64) float64 { return 2 * math.Pi * schema.LightSpeed / wavelength }

// physics reads the materials, parameters and section of a sweep file.
func physics(t testing.TB, text string) *schema.Physics {
	t.Helper()
	s, err := sweep.Parse("test.yaml", []byte("format: 1\nsweep: test\n"+text), func(name string) (io.ReadCloser, error) {
		return nil, fmt.Errorf("%s: no files here", name)
	})
	if err != nil {
		t.Fatal(err)
	}
	return &s.Physics
}

func guide(t testing.TB, text string) *Guide {
	t.Helper()
	g, err := New(physics(t, text))
	if err != nil {
		t.Fatal(err)
	}
	return g
}

func solve(t testing.TB, g *Guide, q solvers.Q, want int) ([]solvers.Mode, solvers.Count) {
	t.Helper()
	modes, count, err := g.Modes(context.Background(), q, want, nil)
	if err != nil {
		t.Fatal(err)
	}
	return modes, count
}

const strip = `
materials:
  core: {index: 3.4777}
  oxide: {index: 1.4444}
parameters:
  wavelength: {from: 1.45 um, to: 1.65 um, count: 3}
  width: 0.5 um
  height: 0.22 um
  angle: 90 deg
section:
  layers:
    - {material: oxide}
    - {name: core, material: core, thickness: height, fill: oxide, strips: [{centre: 0 um, width: width, sidewall: angle}]}
    - {material: oxide}
`

func at(text string, accuracy string) string {
	return strings.TrimSuffix(text, "\n") + "\n" + accuracy + "\n"
}

// The strip of package channel's table. The values are the converged ones of a separate prototype of the same equation with
// finer meshes, from the design of this program: neff to 1e-12, ng to 1e-9, GVD to 1e-4 ps^2/km.
func TestStrip(t *testing.T) {
	want := map[string][3]float64{
		"TE00": {2.447288247925, 4.055365545, -1832.7057e-27},
		"TM00": {1.771707850249, 3.652897530, 21495.69e-27},
	}
	for _, accuracy := range []float64{1e-4, 1e-6, 1e-8} {
		t.Run(fmt.Sprint(accuracy), func(t *testing.T) {
			g := guide(t, at(strip, fmt.Sprintf("accuracy: {neff: %g}", accuracy)))
			modes, count := solve(t, g, solvers.Q{frequency(1.55 * um), 0.5 * um, 0.22 * um, math.Pi / 2}, 2)
			if count.N != 3 || count.Proof != "inertia" || len(modes) != 2 {
				t.Fatalf("%d modes, count %v", len(modes), count)
			}
			for _, m := range modes {
				w, ok := want[m.Family]
				if !ok {
					t.Fatalf("a mode named %s", m.Family)
				}
				within(t, m.Family+" neff", m.Neff, w[0], m.NeffErr+2e-12)
				within(t, m.Family+" ng", m.Ng, w[1], m.NgErr+1e-9)
				within(t, m.Family+" GVD", m.GVD, w[2], m.GVDErr+1e-31*max(1, math.Abs(w[2])*1e24))
				if !(m.NeffErr <= accuracy) {
					t.Errorf("%s: bound %g", m.Family, m.NeffErr)
				}
			}
		})
	}
}

func within(t *testing.T, what string, got, want, bound float64) {
	t.Helper()
	if e := math.Abs(got - want); !(e <= bound) {
		t.Errorf("%s: %.13g, want %.13g: off by %.1e, bound %.1e", what, got, want, e, bound)
	}
}

const nitride = `
materials:
  core: {named: silicon-nitride}
  oxide: {named: fused-silica}
parameters:
  wavelength: {from: 1.5 um, to: 1.6 um, count: 11}
  width: {from: 1.4 um, to: 1.8 um, count: 5}
  height: 0.8 um
  angle: 88 deg
section:
  layers:
    - {material: oxide}
    - {name: core, material: core, thickness: height, fill: oxide, strips: [{centre: 0 um, width: width, sidewall: angle}]}
    - {material: oxide}
`
