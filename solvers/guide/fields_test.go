package guide

import (
	"context"
	"errors"
	"math"
	"math/cmplx"
	"strings"
	"testing"

	"betaloom/solvers"
)

const rib = `
materials:
  core: {index: 3.4777}
  oxide: {index: 1.4444}
  air: {index: 1}
parameters: {wavelength: 1.55 um}
section:
  layers:
    - {material: oxide}
    - {material: core, thickness: 0.09 um}
    - {material: core, thickness: 0.13 um, fill: air, strips: [{centre: 0 um, width: 0.5 um}]}
    - {material: air}
`

// crystal is anisotropic, with a plane of symmetry along y only.
const crystal = `
materials:
  core: {axes: {x: {index: 2.1}, y: {index: 2.2}, z: {index: 2.25}}}
  oxide: {index: 1.4444}
parameters: {wavelength: 1.55 um}
section:
  layers:
    - {material: oxide}
    - {material: core, thickness: 0.6 um, fill: oxide, strips: [{centre: 0.1 um, width: 1.1 um, sidewall: 75 deg}]}
    - {material: oxide}
`

// sections are what the fields are held on: a point of each, and how many modes are looked at.
var sections = []struct {
	name, text string
	q          solvers.Q
	modes      int
	top        float64 // an interface over a core from -0.2 um to 0.2 um, m
	eps        [3]float64
}{
	{"strip", strip, solvers.Q{frequency(1.55 * um), 0.5 * um, 0.22 * um, math.Pi / 2}, 2, 0.22 * um, [3]float64{3.4777 * 3.4777, 3.4777 * 3.4777, 3.4777 * 3.4777}},
	{"rib", rib, solvers.Q{frequency(1.55 * um)}, 1, 0.22 * um, [3]float64{3.4777 * 3.4777, 3.4777 * 3.4777, 3.4777 * 3.4777}},
	{"crystal", crystal, solvers.Q{frequency(1.55 * um)}, 3, 0.6 * um, [3]float64{2.1 * 2.1, 2.2 * 2.2, 2.25 * 2.25}},
}

func fields(t testing.TB, text string, q solvers.Q, mode int, o solvers.FieldOptions) *solvers.Field {
	t.Helper()
	f, err := guide(t, text).Fields(context.Background(), q, mode, o)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

func largest(v []complex128) (top float64) {
	for _, c := range v {
		top = max(top, cmplx.Abs(c))
	}
	return top
}

// blur is the relative error to expect of a field: an eigenvalue's error is the square of its vector's (Strang and Fix, An Analysis of the
// Finite Element Method), so the root of neff_err; three times that at single places.
func blur(m *solvers.Mode) float64 { return 3 * math.Sqrt(m.NeffErr) }

// TestFieldContinuity: tangential E and H and normal eps E pass the interface at the top of the core (Collin, Field Theory of Guided
// Waves), seen 10 fm below and above it.
func TestFieldContinuity(t *testing.T) {
	for _, s := range sections {
		for mode := range s.modes {
			const d = 1e-14
			text := at(s.text, "accuracy: {neff: 1e-6}")
			f := fields(t, text, s.q, mode, solvers.FieldOptions{Points: 41, Window: &solvers.Window{Left: -0.2 * um, Right: 0.2 * um, Bottom: s.top - d, Top: s.top + d}})
			t.Run(s.name+"/"+f.Mode.Family, func(t *testing.T) {
				outside := 1.4444 * 1.4444
				if s.name == "rib" {
					outside = 1
				}
				n := len(f.X)
				scale := [2]float64{}
				for c := range 3 {
					scale[0], scale[1] = max(scale[0], largest(f.E[c])), max(scale[1], largest(f.H[c]))
				}
				worst := 0.0
				for i := range n {
					for c := range 3 {
						below, above, top := f.E[c][i], f.E[c][n+i], scale[0]
						if c == 1 {
							below, above, top = below*complex(s.eps[1], 0), above*complex(outside, 0), top*s.eps[1]
						}
						worst = max(worst, cmplx.Abs(below-above)/top, cmplx.Abs(f.H[c][i]-f.H[c][n+i])/scale[1])
					}
				}
				if worst > blur(&f.Mode) {
					t.Errorf("the fields part by %.2g of the largest, expected at most %.2g", worst, blur(&f.Mode))
				}
				if f.Material[0] == f.Material[n] {
					t.Errorf("material %s on both sides", f.Materials[f.Material[0]])
				}
			})
		}
	}
}

// integrals are those of a field over its window, cell by cell between the places: the axial power in W, and the electric and magnetic energy in
// J/m. index gives eps_r of a material along an axis.
func integrals(f *solvers.Field, eps func(material string, axis int) float64) (power, electric, magnetic float64) {
	const mu0 = 4e-7 * math.Pi
	eps0 := 1 / (mu0 * lightSpeed * lightSpeed)
	nx, ny := len(f.X), len(f.Y)
	area := (f.X[1] - f.X[0]) * (f.Y[1] - f.Y[0])
	for j := range ny {
		for i := range nx {
			at, w := j*nx+i, area
			if i == 0 || i == nx-1 {
				w /= 2
			}
			if j == 0 || j == ny-1 {
				w /= 2
			}
			power += w / 2 * real(f.E[0][at]*cmplx.Conj(f.H[1][at])-f.E[1][at]*cmplx.Conj(f.H[0][at]))
			for c := range 3 {
				electric += w / 4 * eps0 * eps(f.Materials[f.Material[at]], c) * math.Pow(cmplx.Abs(f.E[c][at]), 2)
				magnetic += w / 4 * mu0 * math.Pow(cmplx.Abs(f.H[c][at]), 2)
			}
		}
	}
	return power, electric, magnetic
}

// TestFieldEnergy holds the fields to three identities of a guide without loss and dispersion: the power is 1 W as stated, electric and
// magnetic energy are equal, and the group velocity is the power over the energy in a length (Collin, Field Theory of Guided Waves; Haus, Waves and Fields in
// Optoelectronics). Places are 5 nm apart and interfaces half-way between them, so that the midpoint rule errs by (q h)^2/24, with q h up to 0.1 for the
// squares of a standing wave in the core, 5e-4; tilted walls and corners add as much, and the window leaves out what is left after 1.5 um.
func TestFieldEnergy(t *testing.T) {
	for _, s := range sections {
		for mode := range s.modes {
			const h = 0.005 * um
			w := &solvers.Window{Left: -300.5 * h, Right: 300.5 * h, Bottom: -200.5 * h, Top: s.top + 200.5*h}
			f := fields(t, at(s.text, "accuracy: {neff: 1e-6}"), s.q, mode, solvers.FieldOptions{Points: 602, Window: w})
			t.Run(s.name+"/"+f.Mode.Family, func(t *testing.T) {
				power, electric, magnetic := integrals(f, func(m string, axis int) float64 {
					return map[string][3]float64{"core": s.eps, "oxide": {1.4444 * 1.4444, 1.4444 * 1.4444, 1.4444 * 1.4444}, "air": {1, 1, 1}}[m][axis]
				})
				ng := lightSpeed * (electric + magnetic) / power
				const grid = 1e-3
				if math.Abs(power-1) > grid {
					t.Errorf("the grid carries %g W, expected 1 W", power)
				}
				if math.Abs(electric/magnetic-1) > grid {
					t.Errorf("electric energy %g J/m, magnetic %g", electric, magnetic)
				}
				if math.Abs(ng/f.Mode.Ng-1) > grid {
					t.Errorf("ng from the energy is %g, the mode's %g", ng, f.Mode.Ng)
				}
			})
		}
	}
}

// TestFieldMirror: fields found on a quarter of a section and reflected are those found on the whole, which a wall's tilt of 1e-9 of
// a radian forces while it changes nothing that could be seen. Both have the error of a mesh.
func TestFieldMirror(t *testing.T) {
	w := &solvers.Window{Left: -0.5 * um, Right: 0.5 * um, Bottom: -0.3 * um, Top: 0.52 * um}
	whole := strings.Replace(strip, "sidewall: angle", "sidewall: {left: 90 deg, right: angle}", 1)
	for mode, symmetry := range []string{"x-even y-even", "x-odd y-odd", "x-odd y-even"} {
		q := solvers.Q{frequency(1.55 * um), 0.5 * um, 0.22 * um, math.Pi / 2}
		half := fields(t, at(strip, "accuracy: {neff: 1e-6}"), q, mode, solvers.FieldOptions{Points: 48, Window: w})
		q[3] -= 1e-9
		full := fields(t, at(whole, "accuracy: {neff: 1e-6}"), q, mode, solvers.FieldOptions{Points: 48, Window: w})
		t.Run(half.Mode.Family, func(t *testing.T) {
			if half.Mode.Symmetry != symmetry || full.Mode.Symmetry != "" {
				t.Fatalf("symmetries %q and %q, expected %q and none", half.Mode.Symmetry, full.Mode.Symmetry, symmetry)
			}
			tolerance := blur(&half.Mode) + blur(&full.Mode)
			scale := [2]float64{}
			for c := range 3 {
				scale[0], scale[1] = max(scale[0], largest(half.E[c])), max(scale[1], largest(half.H[c]))
			}
			sign := complex(1, 0)
			if top := place(half.E); real(half.E[top[0]][top[1]])*real(full.E[top[0]][top[1]]) < 0 {
				sign = -1
			}
			worst := 0.0
			for c := range 3 {
				for i := range half.E[c] {
					worst = max(worst, cmplx.Abs(half.E[c][i]-sign*full.E[c][i])/scale[0], cmplx.Abs(half.H[c][i]-sign*full.H[c][i])/scale[1])
				}
			}
			if worst > tolerance {
				t.Errorf("the fields differ by %.2g of the largest, expected at most %.2g", worst, tolerance)
			}
		})
	}
}

// place is where a transverse field is largest.
func place(e [3][]complex128) (at [2]int) {
	top := 0.0
	for c := range 2 {
		for i, v := range e[c] {
			if cmplx.Abs(v) > top {
				top, at = cmplx.Abs(v), [2]int{c, i}
			}
		}
	}
	return at
}

func TestFieldRefusals(t *testing.T) {
	q := solvers.Q{frequency(1.55 * um), 0.5 * um, 0.22 * um, math.Pi / 2}
	for _, c := range []struct {
		name, says string
		mode       int
		options    solvers.FieldOptions
	}{
		{"mode too high", "0 to 2", 3, solvers.FieldOptions{}},
		{"mode below none", "0 to 2", -1, solvers.FieldOptions{}},
		{"one point", "2 to", 0, solvers.FieldOptions{Points: 1}},
		{"too many points", "2 to", 0, solvers.FieldOptions{Points: solvers.MaxFieldPoints + 1}},
		{"no window", "a width", 0, solvers.FieldOptions{Window: &solvers.Window{Left: 1, Right: -1, Top: 1}}},
		{"no number", "a width", 0, solvers.FieldOptions{Window: &solvers.Window{Right: math.NaN(), Top: 1}}},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := guide(t, strip).Fields(context.Background(), q, c.mode, c.options)
			var input *solvers.InputError
			if !errors.As(err, &input) || !strings.Contains(err.Error(), c.says) {
				t.Errorf("found %v, expected an input error that says %q", err, c.says)
			}
		})
	}
}
