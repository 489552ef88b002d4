package guide

import "math"

// bound is what is known about the errors of one mode's numbers.
type bound struct{ neff, kappa, ng, gvd, beta3 float64 }

// rounding is what is left of a number's relative accuracy on the finest meshes.
const rounding = 1e-13

// bound forms the bounds of a mode from its two discretisations, the walls and the residual.
func (p *point) bound(r *refined) (b bound) {
	f, c := r.fine, r.coarse
	t, _ := p.truncate(f.class, f, &p.bounds)
	cw := lightSpeed * p.w
	dn := absolute(f.beta.V-c.beta.V) / p.k
	dg := math.Abs(real(f.beta.W-c.beta.W)) * lightSpeed
	d2 := math.Abs(real(f.beta.WW - c.beta.WW))
	d3 := math.Abs(real(f.beta.WWW - c.beta.WWW))
	res := f.pair.Residual * f.pair.Residual * f.neff()
	b.neff = dn + t.neff + res + rounding*f.neff()
	b.kappa = b.neff
	b.ng = dg + dn + t.ng + 10*(res+rounding*f.ng())
	b.gvd = d2 + (dg+dn)/cw + t.gvd + 1e3*(res+rounding*f.ng())/cw
	b.beta3 = d3 + d2/p.w + (dg+dn)/(cw*p.w) + t.beta3 + 1e5*(res+rounding*f.ng())/(cw*p.w)
	return b
}

// reached says whether all modes are as accurate as asked.
func (p *point) reached(list []refined) bool {
	const gvd, beta3 = 1e-27, 1e-39 // s^2/m in a ps^2/km, s^3/m in a ps^3/km
	a := &p.accuracy
	met := func(err, asked float64) bool { return asked == 0 || err <= asked }
	for i := range list {
		b := &list[i].bound
		if !met(b.neff, a.Neff) || !met(b.ng, a.Ng) || !met(b.gvd, a.GVDPs2PerKm*gvd) || !met(b.beta3, a.Beta3Ps3PerKm*beta3) {
			return false
		}
	}
	return true
}
