package slab

import (
	"context"
	"math"
	"testing"

	"betaloom/solvers"
)

const testWavelength = 1.55e-6

func frequency(wavelength float64) float64 { return 2 * math.Pi * lightSpeed / wavelength }

func solveModel(t *testing.T, s *Solver, m *model, want int) ([]solvers.Mode, solvers.Count) {
	t.Helper()
	modes, count, err := s.Solve(context.Background(), m.w0, m.stack(), want)
	if err != nil {
		t.Fatalf("%s: %v", m.name, err)
	}
	return modes, count
}

// dispersive gives a medium a made-up dispersion and sensitivity, different along each axis.
func dispersive(m medium) medium {
	for c := range 3 {
		m.slope[c] = 0.1 * m.eps[c] * complex(1+0.1*float64(c), 0)
		m.curve[c], m.cubic[c] = 0.02, -0.03
		m.pull[c], m.twist[c] = complex(1+float64(c), 0), 0.2
	}
	return m
}

func anisotropic(m medium) medium {
	m.eps[1] *= 1.1
	m.eps[2] *= 0.93
	return m
}

func absorbing(m medium, loss complex128) medium {
	for c := range 3 {
		m.eps[c] -= loss
	}
	return m
}

func metal(d float64) medium {
	m := medium{eps: isotropic(-95 - 3i), d: d, stretch: 1}
	m.open = d == 0
	return dispersive(m)
}

func layeredModels() []*model {
	air, oxide, film := half(1), half(1.444), filmOf(2, 0.8e-6)
	all := []*model{
		{name: "three layers", layers: []medium{oxide, film, air}},
		{name: "symmetric film", layers: []medium{oxide, film, oxide}},
		{name: "dispersive", layers: []medium{dispersive(oxide), dispersive(film), dispersive(air)}},
		{name: "anisotropic", layers: []medium{anisotropic(dispersive(oxide)), anisotropic(dispersive(film)), dispersive(air)}},
		{name: "29 modes", layers: []medium{oxide, filmOf(2, 8e-6), air}},
		{name: "10 nm film", layers: []medium{air, filmOf(2, 0.01e-6), air}},
		{name: "five layers", layers: []medium{oxide, film, filmOf(1.5, 0.8e-6), dispersive(filmOf(2.1, 0.6e-6)), air}},
		{name: "two films 4 um apart", layers: []medium{oxide, film, filmOf(1.5, 4e-6), filmOf(2.1, 0.6e-6), air}},
		{name: "two equal films, unequal sides", layers: []medium{oxide, film, filmOf(1.5, 2e-6), film, air}},
		{name: "equal sides, unequal films", layers: []medium{oxide, film, filmOf(1.5, 0.3e-6), filmOf(1.8, 0.7e-6), oxide}},
		{name: "plates, stacked fill", layers: []medium{film, filmOf(1, 0.8e-6)}, bottom: true, top: true},
		{name: "plates, symmetric fill", layers: []medium{filmOf(1, 0.4e-6), film, filmOf(1, 0.4e-6)}, bottom: true, top: true},
		{name: "film on a metal plane", layers: []medium{dispersive(film), air}, bottom: true},
		{name: "film under a metal plane", layers: []medium{air, dispersive(film)}, top: true},
		{name: "lossy", layers: []medium{absorbing(dispersive(oxide), 0.01i), absorbing(dispersive(film), 0.1i), dispersive(air)}},
		{name: "barely lossy", layers: []medium{oxide, absorbing(film, 1e-12i), air}},
		{name: "amplifying", layers: []medium{oxide, absorbing(dispersive(film), -0.05i), absorbing(oxide, 0.02i)}},
		{name: "lossy, symmetric", layers: []medium{absorbing(oxide, 0.01i), absorbing(film, 0.1i), absorbing(oxide, 0.01i)}},
		{name: "lossy plates", layers: []medium{absorbing(film, 0.1i), filmOf(1, 0.8e-6)}, bottom: true, top: true},
		{name: "metal half-space", layers: []medium{dispersive(half(1.5)), metal(0)}},
		{name: "20 nm metal film", layers: []medium{half(1.5), metal(20e-9), half(1.5)}},
		{name: "50 nm gap in metal", layers: []medium{metal(0), filmOf(1.5, 50e-9), metal(0)}},
		{name: "film over metal", layers: []medium{metal(0), filmOf(1.45, 0.4e-6), dispersive(filmOf(2, 0.5e-6)), air}},
	}
	for _, m := range all {
		m.w0 = frequency(testWavelength)
	}
	return all
}

// TestLayered compares every number that has a closed definition with a transfer
// matrix in 420-bit arithmetic: the index as its root, derivatives by
// differences of such roots. Tolerances are those the solver is held to (1e-11 in neff,
// 1e-9 in ng, 1e-7 in GVD and beta3, all relative, the last two to max(|value|, 1) in
// ps^2/km and ps^3/km); 1e-9 and 1e-7 for sensitivities of neff and ng.
func TestLayered(t *testing.T) {
	s := New(2)
	for _, m := range layeredModels() {
		t.Run(m.name, func(t *testing.T) {
			modes, count := solveModel(t, s, m, 40)
			if len(modes) == 0 || len(modes) != count.N {
				t.Fatalf("%d modes of %d", len(modes), count.N)
			}
			step := max(1, len(modes)/8)
			for i := 0; i < len(modes); i += step {
				judge(t, m, &modes[i])
			}
		})
	}
}

// judge holds a mode to the accuracy of TestLayered and to its own bounds.
func judge(t *testing.T, m *model, mode *solvers.Mode) deviation {
	t.Helper()
	d := m.compare(t, mode)
	if worst := max(d.neff, d.ng, d.gvd, d.beta3, d.dneff, d.dng); !(worst <= 1) {
		t.Errorf("%s %s: error over tolerance %+v", m.name, mode.Family, d)
	}
	if !(d.bounds <= 1) {
		t.Errorf("%s %s: error over bound %g", m.name, mode.Family, d.bounds)
	}
	return d
}

// TestBoundsAreUseful: a bound that is far above the accuracy promised says
// nothing, so in ordinary stacks it stays within it.
func TestBoundsAreUseful(t *testing.T) {
	s := New(2)
	for _, m := range layeredModels() {
		t.Run(m.name, func(t *testing.T) {
			modes, _ := solveModel(t, s, m, 40)
			for i := range modes {
				x := &modes[i]
				if !(x.NeffErr < 1e-11*x.Neff && x.NgErr < 1e-9*x.Ng) {
					t.Errorf("%s: bounds %g of neff, %g of ng", x.Family, x.NeffErr, x.NgErr)
				}
				if !(x.GVDErr < 1e-7*max(math.Abs(x.GVD), ps2PerKm)) || !(x.Beta3Err < 1e-7*max(math.Abs(x.Beta3), ps3PerKm)) {
					t.Errorf("%s: bounds %g of GVD %g, %g of beta3 %g", x.Family, x.GVDErr, x.GVD, x.Beta3Err, x.Beta3)
				}
			}
		})
	}
}
