package material

import (
	"math"

	"betaloom/schema"
	"betaloom/solvers/jet"
)

// medium is a material along one axis: a source and the shifts upon it.
type medium struct {
	where      string
	source     source
	origin     string // of the band, for messages
	band       band
	extinction *schema.Number
	shifts     []shift
	depends    bool // on parameters
}

// shift is what one material adds to its index.
type shift struct {
	add, thermo *schema.Number
	reference   schema.Number
}

// band is a range of wavelengths in m.
type band struct{ lo, hi float64 }

func everywhere() band { return band{0, math.Inf(1)} }

func (b band) and(c band) band { return band{max(b.lo, c.lo), min(b.hi, c.hi)} }

// bandSlack forgives the rounding of a wavelength that went through w.
const bandSlack = 1e-9

func (b band) has(l float64) bool { return l >= b.lo*(1-bandSlack) && l <= b.hi*(1+bandSlack) }

func (b band) String() string { return micrometres(b.lo) + " to " + micrometres(b.hi) }

// permittivity sets z to (n - jk)^2 at p.
func (m *medium) permittivity(p point, z *jet.Jet) *fault {
	if l := p.wavelength(); !m.band.has(l) {
		return &fault{"wavelength " + micrometres(l), m.band.String() + " (the range of " + m.origin + ")"}
	}
	room := 0
	if m.depends {
		room = p.params
	}
	z.Reset(0, room)
	if f := m.source.set(z, p); f != nil {
		return f
	}
	if f := m.checkSource(z, p); f != nil {
		return f
	}
	if m.source.squared() && m.extinction == nil && len(m.shifts) == 0 {
		return nil
	}
	if m.source.squared() {
		z.Root()
	}
	if f := m.shift(z, p); f != nil {
		return f
	}
	z.Square()
	return nil
}

// shift adds the shifts and the extinction to the index z.
func (m *medium) shift(z *jet.Jet, p point) *fault {
	for _, s := range m.shifts {
		if f := s.apply(z, p); f != nil {
			return f
		}
	}
	if len(m.shifts) > 0 && !positive(real(z.V)) {
		return found("index with its shifts", real(z.V), "above 0")
	}
	if m.extinction == nil {
		return nil
	}
	k, f := p.number(*m.extinction, "extinction")
	if f != nil {
		return f
	}
	z.Accumulate(-1i, &k)
	return nil
}

// apply adds add_index and thermo_optic (T - T_ref) to the index z.
func (s shift) apply(z *jet.Jet, p point) *fault {
	if s.add != nil {
		a, f := p.number(*s.add, "add_index")
		if f != nil {
			return f
		}
		z.Accumulate(1, &a)
	}
	if s.thermo == nil || p.of == nil {
		return nil
	}
	t := p.of(schema.Number{Parameter: schema.Temperature})
	if t == nil {
		return nil
	}
	return s.warm(z, p, t)
}

// warm adds thermo_optic (t - T_ref). The difference is taken first: it is
// small beside the temperatures.
func (s shift) warm(z *jet.Jet, p point, t *jet.Jet) *fault {
	slope, f := p.number(*s.thermo, "thermo_optic")
	if f != nil {
		return f
	}
	ref, f := p.number(s.reference, "reference_temperature")
	if f != nil {
		return f
	}
	rise := jet.Jet{V: t.V - ref.V, W: t.W - ref.W, WW: t.WW - ref.WW, WWW: t.WWW - ref.WWW}
	z.AccumulateProduct(1, &slope, &rise)
	z.Depend(slope.V, slope.W, t)
	z.Depend(-slope.V, -slope.W, &ref)
	return nil
}

// checkSource says whether the source is that of a dielectric at p.
func (m *medium) checkSource(z *jet.Jet, p point) *fault {
	v := real(z.V)
	if positive(v) && !math.IsNaN(imag(z.V)) && !math.IsInf(imag(z.V), 0) {
		return nil
	}
	what, expected := "index", "above 0"
	if m.source.squared() {
		what = "permittivity"
		expected = "above 0 (a negative one is given as index and extinction)"
	}
	return found(what+" at "+micrometres(p.wavelength())+" of", v, expected)
}

func positive(v float64) bool { return v > 0 && !math.IsInf(v, 1) }
