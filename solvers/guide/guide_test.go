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

func TestStrip(t *testing.T) {
	g := guide(t, at(strip, "accuracy: {neff: 1e-8}"))
	modes, count := solve(t, g, solvers.Q{frequency(1.55 * um), 0.5 * um, 0.22 * um, math.Pi / 2}, 4)
	fmt.Println(count)
	for _, m := range modes {
		fmt.Printf("%+v\n", m.Family)
		fmt.Printf("neff %.12f (%.1e) ng %.9f (%.1e) gvd %.5f (%.1e) b3 %g (%g) dneff %v dng %v ex %.3f aeff %g conf %v %s\n", m.Neff, m.NeffErr, m.Ng, m.NgErr, m.GVD*1e27, m.GVDErr*1e27, m.Beta3, m.Beta3Err, m.DNeff, m.DNg, m.ExShare, m.Aeff, m.Confinement, m.Symmetry)
	}
	fmt.Println(modes[0].State.(*start).bounds, modes[0].State.(*start).level)
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

// BenchmarkPoint is one point of a tile with all columns, from its neighbour's modes.
func BenchmarkPoint(b *testing.B) {
	for _, c := range []struct {
		name, text string
		want       int
		size       [3]float64
		angle      float64
	}{
		{"strip", strip, 1, [3]float64{1.55, 0.5, 0.22}, 90},
		{"strip2", strip, 2, [3]float64{1.55, 0.5, 0.22}, 90},
		{"tilted", strip, 2, [3]float64{1.55, 0.5, 0.22}, 80},
		{"nitride", nitride, 2, [3]float64{1.55, 1.6, 0.8}, 88},
	} {
		for _, accuracy := range []string{"1e-4", "1e-5", "1e-6", "1e-7"} {
			b.Run(c.name+"/"+accuracy, func(b *testing.B) {
				g := guide(b, at(c.text, "accuracy: {neff: "+accuracy+"}"))
				point := func(i int) solvers.Q {
					return solvers.Q{frequency(c.size[0] * um * (1 + 0.002*float64(i%2))), c.size[1] * um, c.size[2] * um, c.angle * math.Pi / 180}
				}
				modes, _, err := g.Modes(context.Background(), point(0), c.want, nil)
				if err != nil {
					b.Fatal(err)
				}
				for i := 1; b.Loop(); i++ {
					if modes, _, err = g.Modes(context.Background(), point(i), c.want, modes); err != nil {
						b.Fatal(err)
					}
				}
				b.ReportMetric(modes[0].NeffErr, "neff_err")
				b.ReportMetric(float64(modes[0].State.(*start).level), "level")
			})
		}
	}
}
