package guide

import "math"

// bound is what is known about the errors of one mode's numbers.
type bound struct{ neff, kappa, ng, gvd, beta3 float64 }

// slack is what the iteration for a vector's derivative leaves of what is made from it.
const slack = 1e-9

// rounding is what is left of a number's relative accuracy on the finest meshes.
const rounding = 1e-13

const (
	gain  = 0.2 // the share of the two meshes' difference that the finer one's error stays below
	lower = 0.5 // the share of the lower derivatives' differences that is added, as a difference may vanish by chance
)

// change is how much the numbers of two solutions differ.
type change struct{ beta, kappa, b1, b2, b3 float64 }

func (m *solved) from(o *solved) change {
	return change{
		absolute(m.beta.V - o.beta.V), math.Abs(imag(m.beta.V - o.beta.V)),
		math.Abs(real(m.beta.W - o.beta.W)), math.Abs(real(m.beta.WW - o.beta.WW)), math.Abs(real(m.beta.WWW - o.beta.WWW)),
	}
}

// scaled multiplies each change by its share.
func (c change) scaled(s change) change {
	return change{c.beta * s.beta, c.kappa * s.kappa, c.b1 * s.b1, c.b2 * s.b2, c.b3 * s.b3}
}

// error estimates that of the finer solution from the difference to the coarser one, and the rate where there is a third.
func (r *refined) error() change {
	d := r.fine.from(r.coarse)
	if r.third == nil {
		return d.scaled(change{gain, gain, gain, gain, gain})
	}
	t := r.coarse.from(r.third)
	share := func(now, before float64) float64 {
		if before == 0 {
			return gain
		}
		return min(gain, 2*now/before)
	}
	return d.scaled(change{share(d.beta, t.beta), share(d.kappa, t.kappa), share(d.b1, t.b1), share(d.b2, t.b2), share(d.b3, t.b3)})
}

// bound forms the bounds of a mode from its discretisations, the walls and the residual.
func (p *point) bound(r *refined) (b bound) {
	f := r.fine
	t, _ := p.truncate(f.class, f, &p.bounds)
	e := r.error()
	cw := lightSpeed * p.w
	dn, dg := e.beta/p.k, e.b1*lightSpeed
	res := f.pair.Residual * f.pair.Residual * f.neff()
	floor := res + rounding*f.neff()
	lossy := min(1, 10*math.Abs(imag(f.beta.V))/real(f.beta.V))
	b.neff = dn + t.neff + floor
	b.kappa = e.kappa/p.k + lossy*dn + t.neff + floor
	b.ng = dg + lower*dn + t.ng + 10*floor
	b2, b3 := math.Abs(real(f.beta.WW)), math.Abs(real(f.beta.WWW))
	b.gvd = slack*b2 + e.b2 + lower*(dg+dn)/cw + t.gvd + 1e3*floor/cw
	b.beta3 = 10*slack*b3 + e.b3 + lower*(e.b2/p.w+(dg+dn)/(cw*p.w)) + t.beta3 + 1e5*floor/(cw*p.w)
	return b
}

// short is how many times larger than asked the worst bound is.
func (p *point) short(list []refined) (worst float64) {
	const gvd, beta3 = 1e-27, 1e-39 // s^2/m in a ps^2/km, s^3/m in a ps^3/km
	a := &p.accuracy
	against := func(err, asked float64) {
		if asked > 0 {
			worst = max(worst, err/asked)
		}
	}
	for i := range list {
		b := &list[i].bound
		against(b.neff, a.Neff)
		against(b.ng, a.Ng)
		against(b.gvd, a.GVDPs2PerKm*gvd)
		against(b.beta3, a.Beta3Ps3PerKm*beta3)
	}
	return worst
}
