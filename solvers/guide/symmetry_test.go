package guide

import (
	"fmt"
	"math"
	"testing"

	"betaloom/solvers"
)

// alike holds two rows that must be one to the sum of their bounds, and says which share of it their difference is at most.
func alike(t *testing.T, a, b *solvers.Mode) (most float64) {
	t.Helper()
	for _, v := range []struct {
		name        string
		a, b, bound float64
	}{
		{"neff", a.Neff, b.Neff, a.NeffErr + b.NeffErr},
		{"kappa", a.Kappa, b.Kappa, a.KappaErr + b.KappaErr},
		{"ng", a.Ng, b.Ng, a.NgErr + b.NgErr},
		{"gvd", a.GVD, b.GVD, a.GVDErr + b.GVDErr},
		{"beta3", a.Beta3, b.Beta3, a.Beta3Err + b.Beta3Err},
	} {
		same(t, a.Family+" "+v.name, v.a, v.b, v.bound)
		most = max(most, math.Abs(v.a-v.b)/v.bound)
	}
	// shares and the area have no bounds of their own; they are of first order in the field's error, whose square is neff's
	near := 30 * math.Sqrt(a.NeffErr+b.NeffErr)
	same(t, a.Family+" aeff", a.Aeff, b.Aeff, near*a.Aeff)
	if len(a.Confinement) == 0 || len(a.Confinement) != len(b.Confinement) {
		t.Fatalf("confinements %v and %v", a.Confinement, b.Confinement)
	}
	for i := range a.Confinement {
		same(t, a.Family+" confinement", a.Confinement[i], b.Confinement[i], near)
	}
	return most
}

// A section turned by 90 degrees, the axes of its materials with it, has the same modes; x and y change places in their
// names and symmetries. Maxwell's equations do not know which axis is up.
func TestTurned(t *testing.T) {
	const text = `
materials:
  core: {axes: {x: {index: %g, extinction: %g}, y: {index: %g, extinction: %g}, z: {index: 2.1, extinction: 2e-4}}}
  oxide: {index: 1.4444}
parameters:
  wavelength: {from: 1.45 um, to: 1.65 um, count: 3}
  width: %g um
  height: %g um
section:
  layers:
    - {material: oxide}
    - {name: core, material: core, thickness: height, fill: oxide, strips: [{centre: 0 um, width: width}]}
    - {material: oxide}
accuracy: {neff: 1e-7}
`
	w := frequency(1.55 * um)
	run := func(x, kx, y, ky, width, height float64) []solvers.Mode {
		m, _ := solve(t, guide(t, fmt.Sprintf(text, x, kx, y, ky, width, height)), solvers.Q{w, width * um, height * um}, 2)
		if len(m) != 2 {
			t.Fatalf("%d modes", len(m))
		}
		return m
	}
	names := map[string]string{"TE00": "TM00", "TM00": "TE00", "x-even y-even": "x-odd y-odd", "x-odd y-odd": "x-even y-even"}
	most := 0.0
	for _, c := range []struct {
		name         string
		x, kx, y, ky float64
	}{
		{"isotropic", 2.1, 0, 2.1, 0},
		{"anisotropic and lossy", 2.2, 1e-4, 2.05, 3e-4},
	} {
		t.Run(c.name, func(t *testing.T) {
			flat, upright := run(c.x, c.kx, c.y, c.ky, 1.1, 0.7), run(c.y, c.ky, c.x, c.kx, 0.7, 1.1)
			for i := range flat {
				a, b := &flat[i], &upright[i]
				most = max(most, alike(t, a, b))
				if names[a.Family] != b.Family || names[a.Symmetry] != b.Symmetry || a.Type == b.Type {
					t.Errorf("%s (%s, %s) turned is %s (%s, %s)", a.Family, a.Symmetry, a.Type, b.Family, b.Symmetry, b.Type)
				}
				same(t, "ex_share", a.ExShare, 1-b.ExShare, 30*math.Sqrt(a.NeffErr+b.NeffErr))
				for p := range 2 { // dneff/dwidth of one is dneff/dheight of the other: no bounds, the size of ng's
					same(t, "sensitivity", a.DNeff[p], b.DNeff[1-p], 10*(a.NgErr+b.NgErr)/(0.7*um))
				}
			}
			if c.kx > 0 && !(flat[0].Kappa > 1e-5) {
				t.Errorf("kappa %g: no loss to compare", flat[0].Kappa)
			}
		})
	}
	t.Logf("largest difference over the sum of the bounds: %.2g", most)
}

// A section seen from behind: left and right change places.
func TestMirrored(t *testing.T) {
	const text = `
materials:
  core: {index: 2}
  side: {index: 1.7}
  oxide: {index: 1.4444}
parameters:
  wavelength: {from: 1.45 um, to: 1.65 um, count: 3}
  left: %g deg
  right: %g deg
section:
  layers:
    - {material: oxide}
    - {name: core, material: core, thickness: 0.7 um, fill: oxide, strips: [
        {name: main, centre: %[3]g um, width: 0.8 um, sidewall: {left: left, right: right}},
        {name: small, material: side, centre: %[4]g um, width: 0.5 um}]}
    - {material: oxide}
accuracy: {neff: 1e-6}
`
	const deg = math.Pi / 180
	w := frequency(1.55 * um)
	run := func(left, right, main, small float64) []solvers.Mode {
		m, _ := solve(t, guide(t, fmt.Sprintf(text, left, right, main, small)), solvers.Q{w, left * deg, right * deg}, 2)
		if len(m) != 2 {
			t.Fatalf("%d modes", len(m))
		}
		return m
	}
	a, b := run(75, 95, 0.2, 1.2), run(95, 75, -0.2, -1.2)
	for i := range a {
		if a[i].Family != b[i].Family {
			t.Errorf("%s mirrored is %s", a[i].Family, b[i].Family)
		}
		t.Logf("%s: largest difference over the sum of the bounds: %.2g", a[i].Family, alike(t, &a[i], &b[i]))
		for p := range 2 {
			same(t, "sensitivity to an angle", a[i].DNeff[p], b[i].DNeff[1-p], 100*(a[i].NeffErr+b[i].NeffErr))
		}
	}
}

// A little loss in the core: kappa is the core's extinction times dneff/dn (first-order perturbation, Snyder and Love,
// Optical Waveguide Theory, section 18-4; the second order vanishes, the third is extinction^2 times it), in proportion to
// the extinction; and dneff/dn is the slope of neff from separate solves.
func TestLittleLoss(t *testing.T) {
	const text = `
materials:
  core: {index: n, extinction: loss}
  oxide: {index: 1.4444}
parameters:
  wavelength: {from: 1.45 um, to: 1.65 um, count: 3}
  n: 2
  loss: %g
section:
  layers:
    - {material: oxide}
    - {name: core, material: core, thickness: 0.7 um, fill: oxide, strips: [{centre: 0 um, width: 1 um, sidewall: 80 deg}]}
    - {material: oxide}
accuracy: {neff: 1e-7}
`
	w := frequency(1.55 * um)
	run := func(n, loss float64) *solvers.Mode {
		m, _ := solve(t, guide(t, fmt.Sprintf(text, loss)), solvers.Q{w, n, loss}, 1)
		if len(m) != 1 {
			t.Fatalf("%d modes", len(m))
		}
		return &m[0]
	}
	const h, little = 1e-3, 1e-5
	none, one, ten := run(2, 0), run(2, little), run(2, 10*little)
	up, down := run(2+h, 0), run(2-h, 0)
	slope := (up.Neff - down.Neff) / (2 * h)
	t.Run("slope", func(t *testing.T) { // a central difference is off by h^2/6 times a third derivative of order 1
		same(t, "dneff/dn", none.DNeff[0], slope, h*h+(up.NeffErr+down.NeffErr)/(2*h))
	})
	t.Run("perturbation", func(t *testing.T) { // the same mesh, so that only rounding and the third order are left
		same(t, "kappa", one.Kappa, little*none.DNeff[0], 1e-12+10*little*little*little)
		same(t, "neff", one.Neff, none.Neff, 10*little*little+one.NeffErr+none.NeffErr)
	})
	t.Run("proportion", func(t *testing.T) {
		same(t, "kappa", ten.Kappa, 10*one.Kappa, 1e-11+1e4*little*little*little)
	})
	t.Run("phase of dbeta", func(t *testing.T) { // d kappa/d extinction = d neff/d n (Cauchy and Riemann)
		same(t, "loss", (ten.Kappa-one.Kappa)/(9*little), none.DNeff[0], 1e-6)
	})
}
