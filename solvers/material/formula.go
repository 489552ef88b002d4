package material

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"betaloom/solvers/jet"
)

// shape is how a published formula writes a term of b and c, L in um.
type shape int

const (
	power shape = iota // b L^c
	root               // b L^2/(L^2 - c^2)
	pole               // b L^2/(L^2 - c)
	plain              // b/(L^2 - c)
	wave               // b/(c - 1/L^2)
)

// term is one term of a published formula.
type term struct {
	shape shape
	b, c  float64
}

// text writes the term as it was published.
func (t term) text() string {
	b, c := digits(t.b), digits(t.c)
	switch t.shape {
	case root:
		return b + " L^2/(L^2 - " + c + "^2)"
	case pole:
		return b + " L^2/(L^2 - " + c + ")"
	case plain:
		return b + "/(L^2 - " + c + ")"
	case wave:
		return b + "/(" + c + " - 1/L^2)"
	}
	if t.c == 0 {
		return b
	}
	return b + " L^" + c
}

func digits(v float64) string { return strconv.FormatFloat(v, 'g', -1, 64) }

// formula is n^2, or n where bare, as a sum of terms.
type formula struct {
	bare  bool
	terms []term
}

// text writes the formula for people.
func (f formula) text() string {
	parts := make([]string, len(f.terms))
	for i, t := range f.terms {
		parts[i] = t.text()
	}
	left := "n^2"
	if f.bare {
		left = "n"
	}
	sum := strings.ReplaceAll(strings.Join(parts, " + "), "+ -", "- ")
	return fmt.Sprintf("%s = %s", left, sum)
}

// dispersion is a formula in x = 1/L^2: the sum of b/(1 - q x) and of c x^e.
// It is what is evaluated, in real arithmetic.
type dispersion struct {
	bare   bool
	poles  [][2]float64 // b, q
	powers []monomial
}

type monomial struct {
	c float64
	e int
}

// dispersion brings all shapes of terms to two.
func (f formula) dispersion() *dispersion {
	d := &dispersion{bare: f.bare}
	for _, t := range f.terms {
		switch t.shape {
		case power:
			d.powers = append(d.powers, monomial{t.b, -int(t.c) / 2})
		case root:
			d.poles = append(d.poles, [2]float64{t.b, t.c * t.c})
		case pole:
			d.poles = append(d.poles, [2]float64{t.b, t.c})
		case plain: // b x/(1 - c x)
			d.poles = append(d.poles, [2]float64{t.b / t.c, t.c})
			d.powers = append(d.powers, monomial{-t.b / t.c, 0})
		case wave:
			d.poles = append(d.poles, [2]float64{t.b / t.c, 1 / t.c})
		}
	}
	return d
}

func (d *dispersion) squared() bool { return !d.bare }

// set gives z the formula's value and derivatives. x is k w^2, so that
// dx/dw = 2x/w, d2x/dw2 = 2x/w^2 and no more.
func (d *dispersion) set(z *jet.Jet, p point) *fault {
	x := real(inverseSquare(p.w).V)
	f := d.at(x)
	x1 := 2 * x / p.w
	x2 := x1 / p.w
	z.V = complex(f[0], 0)
	z.W = complex(f[1]*x1, 0)
	z.WW = complex(f[2]*x1*x1+f[1]*x2, 0)
	z.WWW = complex(f[3]*x1*x1*x1+3*f[2]*x1*x2, 0)
	return nil
}

// at gives the sum and its first three derivatives in x.
func (d *dispersion) at(x float64) (f [4]float64) {
	for _, p := range d.poles {
		r := 1 / (1 - p[1]*x)
		t, s := p[0]*r, p[1]*r
		f[0] += t
		f[1] += t * s
		f[2] += 2 * t * s * s
		f[3] += 6 * t * s * s * s
	}
	for _, m := range d.powers {
		t, r := m.c*integerPower(x, m.e), 1/x
		for j := range f {
			f[j] += t
			t *= float64(m.e-j) * r
		}
	}
	return f
}

// integerPower is x^e for the small exponents of published formulas.
func integerPower(x float64, e int) float64 {
	if e < 0 {
		return 1 / integerPower(x, -e)
	}
	y := 1.0
	for range e {
		y *= x
	}
	return y
}

// micrometres writes a wavelength in m for people.
func micrometres(m float64) string {
	if math.IsInf(m, 1) {
		return "infinity"
	}
	return strconv.FormatFloat(m*metre, 'g', 8, 64) + " um"
}
