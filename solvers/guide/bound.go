package guide

import "math"

// bound is what is known about the errors of one mode's numbers.
type bound struct{ neff, kappa, ng, gvd, beta3 float64 }

// slack is what the iteration for a vector's derivative leaves of what is made from it.
const slack = 1e-9

// rounding is what is left of a number's relative accuracy on the finest meshes.
const rounding = 1e-13

const (
	tail = 1 // the share of what higher polynomials would contribute to L that the error stays below

	// by how much the errors of L's derivatives may exceed what the rate below gives them
	first  = 1.5
	second = 4
	third  = 8
)

// estimate is the errors of beta (1/m) and of its derivatives in the angular frequency that a mesh leaves.
type estimate struct{ b, b1, b2, b3 float64 }

// estimate takes them from the highest polynomials of the mesh: that of L is a share of e = x'F x of these alone, and as they
// change at the rate q = sqrt(x1'F x1/x'F x) with frequency, e does at 2 q. What follows is beta = sqrt(L) differentiated.
func (m *solved) estimate() (e estimate) {
	if !(m.tails.L > 0) {
		return e
	}
	b := real(m.beta.V)
	r1, r2, r3 := math.Abs(real(m.beta.W))/b, math.Abs(real(m.beta.WW))/b, math.Abs(real(m.beta.WWW))/b
	q := 2 * math.Sqrt(m.tails.L1/m.tails.L)
	e.b = tail * m.tails.L / (2 * b)
	e.b1 = first*q*e.b + r1*e.b
	e.b2 = second*q*q*e.b + 2*r1*e.b1 + r2*e.b
	e.b3 = third*q*q*q*e.b + 3*r1*e.b2 + 3*r2*e.b1 + r3*e.b
	return e
}

// bound forms the bounds of a mode from the estimate, the walls, the residual and rounding.
func (p *point) bound(m *solved) (b bound) {
	e := m.estimate()
	t, _ := p.truncate(m.class, m, &p.bounds)
	cw := lightSpeed * p.w
	n, top := m.neff(), p.densest()
	floor := m.pair.Residual*m.pair.Residual*n + rounding*top*top/n
	near := max(1, m.ng()/n) // near a cut-off digits are lost
	lossy := min(1, 10*math.Abs(imag(m.beta.V))/real(m.beta.V))
	b.neff = e.b/p.k + t.neff + floor
	b.kappa = lossy*(e.b/p.k+t.neff) + floor
	b.ng = e.b1*lightSpeed + t.ng + 10*near*floor
	b.gvd = e.b2 + slack*math.Abs(real(m.beta.WW)) + t.gvd + 30*near*near*floor/cw
	b.beta3 = e.b3 + 10*slack*math.Abs(real(m.beta.WWW)) + t.beta3 + 100*near*near*near*floor/(cw*p.w)
	return b
}

func (b *bound) add(o *bound) {
	b.neff, b.kappa, b.ng, b.gvd, b.beta3 = b.neff+o.neff, b.kappa+o.kappa, b.ng+o.ng, b.gvd+o.gvd, b.beta3+o.beta3
}

// against is how many times larger than asked a bound is, at worst.
func (p *point) against(b *bound) (worst float64) {
	const gvd, beta3 = 1e-27, 1e-39 // s^2/m in a ps^2/km, s^3/m in a ps^3/km
	a := &p.accuracy
	for _, v := range [][2]float64{{b.neff, a.Neff}, {b.ng, a.Ng}, {b.gvd, a.GVDPs2PerKm * gvd}, {b.beta3, a.Beta3Ps3PerKm * beta3}} {
		if v[1] > 0 {
			worst = max(worst, v[0]/v[1])
		}
	}
	return worst
}

// short is how many times larger than asked the worst bound of a list is.
func (p *point) short(list []solved) (worst float64) {
	for i := range list {
		worst = max(worst, p.against(&list[i].bound))
	}
	return worst
}
