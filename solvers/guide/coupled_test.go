package guide

import (
	"fmt"
	"math"
	"testing"

	"betaloom/schema"
	"betaloom/solvers"
)

// pairOfStrips is two silicon strips 0.22 um high in oxide, the second wider by more.
const pairOfStrips = `
materials:
  core: {index: 3.4777}
  oxide: {index: 1.4444}
parameters:
  wavelength: {from: 1.45 um, to: 1.65 um, count: 3}
  left: 0 um
  right: 2 um
  width: 0.5 um
  other: 0.5 um
section:
  layers:
    - {material: oxide}
    - {name: core, material: core, thickness: 0.22 um, fill: oxide, strips: [{centre: left, width: width}, {centre: right, width: other}]}
    - {material: oxide}
accuracy: {neff: %s}
`

// strips solves a pair with a gap; the second strip is wider by more.
func strips(t *testing.T, g *Guide, w, gap, more float64, want int) ([]solvers.Mode, solvers.Count) {
	t.Helper()
	const width = 0.5 * um
	half := (gap + width) / 2
	return solve(t, g, solvers.Q{w, -half, half + more/2, width, width + more}, want)
}

// single is the strip's quasi-TE index at 1.55 um, from a separate prototype (also in solvers/channel).
const single = 2.447288247925

// Two strips so far apart that their quasi-TE modes lie 1e-9 apart and less. The splitting is 2 kappa/k, some exp(-g s), with g = k
// sqrt(neff^2 - 1.4444^2) = 8.0/um: below 1e-12 at 3.5 um. Far apart
// a pair has twice the modes of a strip; with and without a mirror plane.
func TestFarApart(t *testing.T) {
	w := frequency(1.55 * um)
	g := guide(t, fmt.Sprintf(pairOfStrips, "1e-5"))
	alone := guide(t, at(strip, "accuracy: {neff: 1e-5}"))
	one := func(width float64) (float64, int) {
		m, count := solve(t, alone, solvers.Q{w, width, 0.22 * um, math.Pi / 2}, 1)
		return m[0].Neff, count.N
	}
	up, number := one(0.501 * um)
	down, _ := one(0.499 * um)
	slope := (up - down) / (0.002 * um)
	for _, c := range []struct {
		name   string
		more   float64
		mirror bool
	}{
		{"equal", 0, true},
		{"1e-9 apart", 1e-9 / slope, false},
		{"1e-11 apart", 1e-11 / slope, false},
	} {
		t.Run(c.name, func(t *testing.T) {
			m, count := strips(t, g, w, 3.5*um, c.more, 2)
			if len(m) != 2 || count.N != 2*number {
				t.Fatalf("%d modes, a count of %d; want 2 of %d", len(m), count.N, 2*number)
			}
			for i := range m {
				same(t, "neff", m[i].Neff, single, m[i].NeffErr)
				if m[i].Type != "quasi-TE" {
					t.Errorf("mode %d is %s", i, m[i].Type)
				}
			}
			if c.mirror != (m[0].Symmetry != m[1].Symmetry) {
				t.Errorf("symmetries %q and %q", m[0].Symmetry, m[1].Symmetry)
			}
			// what the discretisation adds is the same for both: its change with the width (and the difference's) is left, and rounding
			if !c.mirror {
				same(t, "splitting", m[0].Neff-m[1].Neff, slope*c.more, 1e-3*slope*c.more+2e-12)
			}
			if m[0].Family == m[1].Family {
				t.Errorf("both are called %s", m[0].Family)
			}
		})
	}
}

// The splitting of two equal strips falls with the gap s as their fields' overlap does (Haus and Huang, Proc. IEEE 79, 1505 (1991)).
// In the oxide a field is a sum over waves along y, each of which falls as exp(-sqrt(g^2 + q^2) s), g = k sqrt(neff^2 - n^2): the splitting
// falls faster than exp(-g s), and, with all q equally strong, as exp(-g s)/sqrt(s), which has the slope g + 1/2s. The splitting squared is what
// coupled-mode theory leaves out (below 1e-4 here).
func TestSplitting(t *testing.T) {
	w := frequency(1.55 * um)
	k := w / schema.LightSpeed
	g := guide(t, fmt.Sprintf(pairOfStrips, "1e-7"))
	decay := k * math.Sqrt(single*single-1.4444*1.4444)
	var split []float64
	gaps := []float64{0.4 * um, 0.6 * um, 0.8 * um}
	for _, gap := range gaps {
		m, _ := strips(t, g, w, gap, 0, 2)
		if len(m) != 2 || m[0].Symmetry == m[1].Symmetry {
			t.Fatalf("gap %g: %d modes", gap, len(m))
		}
		split = append(split, m[0].Neff-m[1].Neff)
		same(t, "middle of both", (m[0].Neff+m[1].Neff)/2, single, split[len(split)-1]) // to first order the middle stays
	}
	for i := range len(gaps) - 1 {
		rate := math.Log(split[i]/split[i+1]) / (gaps[i+1] - gaps[i])
		middle := (gaps[i] + gaps[i+1]) / 2
		if !(rate > decay && rate < decay+1/(2*middle)) {
			t.Errorf("between gaps of %g and %g m the splitting falls at %g/m: want %g to %g", gaps[i], gaps[i+1], rate, decay, decay+1/(2*middle))
		}
		t.Logf("gap %.1f um: rate %.4g, decay %.4g /m", middle/um, rate, decay)
	}
}
