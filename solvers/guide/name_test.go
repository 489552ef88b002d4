package guide

import (
	"fmt"
	"math"
	"testing"

	"betaloom/solvers"
)

const broad = `
materials:
  core: {index: 2}
  oxide: {index: 1.444}
parameters:
  wavelength: 1.55 um
section:
  layers:
    - {material: oxide}
    - {material: core, thickness: 1 um, fill: oxide, strips: [{centre: 0 um, width: 5 um}]}
    - {material: oxide}
accuracy: {neff: 1e-4}
`

// firstOdd is the index of the first TE mode with a node in the film of infinite width: -u cot u = w, u^2 + w^2 = v^2 (textbook).
// The first TM mode with one lies lower.
func firstOdd() float64 {
	const core, oxide, half = 2, 1.444, math.Pi / 1.55 // k times half the thickness
	lo, hi := oxide, 2.0
	for range 60 {
		n := (lo + hi) / 2
		u, w := half*math.Sqrt(core*core-n*n), half*math.Sqrt(n*n-oxide*oxide)
		if u > math.Pi/2 && -u/math.Tan(u) > w {
			lo = n
		} else {
			hi = n
		}
	}
	return lo
}

// TestNamesOfAWideFilm: the modes of a film much wider than thick are those of the infinite one, each with a number of lobes across that
// lowers its index. So a mode above the infinite film's first odd mode has no node up the section, the first that has one lies
// just below it (a half wave across lowers neff by (L/2W)^2/2neff, here 0.0072, at most), and those of one node count up
// their lobes across as the index falls.
func TestNamesOfAWideFilm(t *testing.T) {
	const want = 13
	modes, count := solve(t, guide(t, broad), solvers.Q{frequency(1.55 * um)}, want)
	if len(modes) != want {
		t.Fatalf("%d modes of %d", len(modes), count.N)
	}
	edge := firstOdd()
	next := map[string]int{}
	for _, m := range modes {
		var across, up int
		kind := m.Family[:2]
		if _, err := fmt.Sscanf(m.Family[2:], "%1d%1d", &across, &up); err != nil {
			t.Fatalf("family %s: %v", m.Family, err)
		}
		row := fmt.Sprint(kind, up)
		if across != next[row] {
			t.Errorf("neff %.4f is %s, expected %d lobes across", m.Neff, m.Family, next[row])
		}
		next[row] = across + 1
		if m.Neff > edge && up > 0 || row == "TE1" && across == 0 && !(m.Neff < edge && m.Neff > edge-0.0072) {
			t.Errorf("neff %.4f is %s, the infinite film's TE1 is at %.4f", m.Neff, m.Family, edge)
		}
	}
	if next["TE0"] < 2 || next["TM0"] < 2 || next["TE1"] == 0 {
		t.Errorf("found rows of %v modes, expected TE0, TM0 and TE1", next)
	}
}

// TestNamesBesideConductors: charges of one sign on all faces of a strip turn its field round from face to face
// (electrostatics). The fundamental mode has no other change of sign, that of two lines with opposite charges one between these.
func TestNamesBesideConductors(t *testing.T) {
	const head = `
materials:
  board: {permittivity: 4.4}
  air: {index: 1}
  gold: {conductivity: 4e7 S/m}
parameters:
  wavelength: 30 mm
section:
  ground: bottom
  layers:
    - {material: board, thickness: 0.8 mm}
    - {material: gold, thickness: 35 um, fill: air, strips: [%s]}
    - {material: air}
accuracy: {neff: 1e-4}
`
	for _, c := range []struct {
		name, strips string
		want         []string
	}{
		{"one line", "{centre: 0 mm, width: 1.5 mm}", []string{"TM00"}},
		{"one line aside", "{centre: 0 mm, width: 1.5 mm, sidewall: {left: 80 deg, right: 90 deg}}", []string{"TM00"}},
		{"two lines", "{centre: -0.6 mm, width: 0.9 mm}, {centre: 0.6 mm, width: 0.9 mm}", []string{"TM00", "TM10"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			modes, count := solve(t, guide(t, fmt.Sprintf(head, c.strips)), solvers.Q{frequency(30e-3)}, 4)
			if len(modes) != len(c.want) {
				t.Fatalf("%d modes of %d, expected %v", len(modes), count.N, c.want)
			}
			for i, m := range modes {
				if m.Family != c.want[i] {
					t.Errorf("mode %d is %s, expected %s", i, m.Family, c.want[i])
				}
			}
		})
	}
}
