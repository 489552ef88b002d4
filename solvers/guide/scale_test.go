package guide

import (
	"math"
	"testing"

	"betaloom/schema"
	"betaloom/solvers"
)

// With indices that do not depend on wavelength a guide scaled with its wavelength is the same guide: neff and ng are homogeneous
// functions of degree 0 of wavelength and lengths. Euler's theorem then ties the derivatives in frequency, of which
// neff's and ng's come from one formula, to those in the lengths, which come from the motion of the mesh:
//
//	ng = neff + sum p dneff/dp,   sum p dng/dp = w c GVD
//
// Angles and indices have no length. The computational walls and the cells beyond the section do not move with it, which is
// part of the bounds; sensitivities have none of their own, so twice those of the other side are allowed.
func TestEuler(t *testing.T) {
	const text = `
materials:
  core: {index: 2}
  under: {index: 1.45}
  over: {index: over}
parameters:
  wavelength: {from: 1.45 um, to: 1.65 um, count: 3}
  rib: 1.1 um
  slab: 0.3 um
  ridge: 0.5 um
  second: 0.4 um
  right: 1.35 um
  angle: 80 deg
  over: 1.3
section:
  layers:
    - {material: under}
    - {material: core, thickness: slab}
    - {name: core, material: core, thickness: ridge, fill: over, strips: [
        {centre: 0 um, width: rib, sidewall: angle},
        {centre: right, width: second, sidewall: angle}]}
    - {material: over}
accuracy: {neff: 1e-7}
`
	w := frequency(1.55 * um)
	g := guide(t, text)
	const lengths = 5
	q := solvers.Q{w, 1.1 * um, 0.3 * um, 0.5 * um, 0.4 * um, 1.35 * um, 80 * math.Pi / 180, 1.3}
	modes, _ := solve(t, g, q, 3)
	if len(modes) != 3 {
		t.Fatalf("%d modes", len(modes))
	}
	for i := range modes {
		m := &modes[i]
		sum, second, size := 0.0, 0.0, 0.0
		for p, v := range q[1 : 1+lengths] {
			sum += v * m.DNeff[p]
			second += v * m.DNg[p]
			size += math.Abs(v * m.DNeff[p])
		}
		same(t, m.Family+" ng", m.Neff+sum, m.Ng, 2*(m.NgErr+m.NeffErr))
		same(t, m.Family+" w c GVD", second, w*schema.LightSpeed*m.GVD, 2*w*schema.LightSpeed*m.GVDErr)
		if !(size > 0.1) {
			t.Errorf("%s: sensitivities %v: nothing is compared", m.Family, m.DNeff)
		}
		t.Logf("%s: ng off by %.1e (bound %.1e), w c GVD off by %.1e (bound %.1e)", m.Family, m.Neff+sum-m.Ng, m.NgErr,
			second-w*schema.LightSpeed*m.GVD, w*schema.LightSpeed*m.GVDErr)
	}
	t.Run("all scaled", func(t *testing.T) {
		const s = 1.7
		scaled := append(solvers.Q{}, q...)
		scaled[0] /= s
		for p := range lengths {
			scaled[1+p] *= s
		}
		other, _ := solve(t, g, scaled, 1)
		same(t, "neff", other[0].Neff, modes[0].Neff, other[0].NeffErr+modes[0].NeffErr)
		same(t, "ng", other[0].Ng, modes[0].Ng, other[0].NgErr+modes[0].NgErr)
		same(t, "gvd", other[0].GVD/s, modes[0].GVD, other[0].GVDErr/s+modes[0].GVDErr)
		same(t, "beta3", other[0].Beta3/s/s, modes[0].Beta3, other[0].Beta3Err/s/s+modes[0].Beta3Err)
	})
}
