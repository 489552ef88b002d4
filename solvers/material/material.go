package material

import (
	"betaloom/schema"
	"betaloom/solvers/jet"
)

// DefaultReferenceTemperature is in K: where thermo_optic shifts nothing.
const DefaultReferenceTemperature = 293.15

// Numbers gives the jet of a number: that of a literal, or of the parameter
// it names. It is asked for schema.Number{Parameter: schema.Temperature}
// where a material has a thermo_optic coefficient, and answers nil where the
// sweep has no temperature.
type Numbers func(n schema.Number) *jet.Jet

// Material is a compiled material. It does not change once compiled.
type Material struct {
	where    string
	axes     [3]*medium // one medium thrice where isotropic; nil for a metal
	residual Residual
}

// Residual is how far the fit to a table passes from its rows; of a
// material with axes the largest. It is zero without a table.
type Residual struct {
	RMSN, MaxN float64 // of the index
	RMSK, MaxK float64 // of the extinction
}

// Residual tells how well the fit to the material's table follows it.
func (m *Material) Residual() Residual { return m.residual }

// Range gives the wavelengths, in m, at which the material is known: 0 and
// +Inf where its formula names none.
func (m *Material) Range() (lo, hi float64) {
	r := everywhere()
	for _, a := range m.axes {
		if a != nil {
			r = r.and(a.band)
		}
	}
	return r.lo, r.hi
}

// Compile checks a material and fits its table. The error is a
// *solvers.InputError.
func Compile(name string, m schema.Material) (*Material, error) {
	c := &Material{where: "material " + name}
	if f := checkForm(m); f != nil {
		return nil, f.at(c.where)
	}
	if m.Metal() {
		return c, nil
	}
	if m.Axes != nil {
		if err := c.compileAxes(m); err != nil {
			return nil, err
		}
		return c, nil
	}
	one, res, f := compileMedium(c.where, m)
	if f != nil {
		return nil, f.at(c.where)
	}
	c.axes, c.residual = [3]*medium{one, one, one}, res
	return c, nil
}

// compileAxes compiles the three materials of one with axes. Its own shifts
// go to each of them.
func (m *Material) compileAxes(of schema.Material) error {
	if f := checkLiterals(of); f != nil {
		return f.at(m.where)
	}
	for i, a := range []schema.Material{of.Axes.X, of.Axes.Y, of.Axes.Z} {
		where := m.where + ", axis " + string("xyz"[i])
		f := checkForm(a)
		if f == nil && (a.Axes != nil || a.Metal()) {
			f = &fault{"axes or conductivity", "a dielectric without axes of its own"}
		}
		if f != nil {
			return f.at(where)
		}
		one, res, f := compileMedium(where, a)
		if f != nil {
			return f.at(where)
		}
		one.addShift(of)
		m.axes[i] = one
		m.residual = m.residual.worst(res)
	}
	return nil
}

func (r Residual) worst(s Residual) Residual {
	return Residual{
		RMSN: max(r.RMSN, s.RMSN), MaxN: max(r.MaxN, s.MaxN),
		RMSK: max(r.RMSK, s.RMSK), MaxK: max(r.MaxK, s.MaxK),
	}
}

// Permittivity sets dst to the relative permittivity (n - jk)^2 along x, y
// and z at the angular frequency w, with room for params base parameters
// where the material depends on any (P and WP are nil where it depends on
// none). The error is a *solvers.InputError; dst is then undefined.
func (m *Material) Permittivity(w float64, of Numbers, params int, dst *[3]jet.Jet) error {
	if m.axes[0] == nil {
		f := &fault{"a metal (conductivity)", "a dielectric; a metal can be a ground (ground: bottom, top or both), a strip or a wall"}
		return f.at(m.where)
	}
	if !(w > 0) || w > maxFrequency {
		return found("angular frequency", w, "a finite one above 0 rad/s").at(m.where)
	}
	p := point{w: w, of: of, params: params}
	for i, a := range m.axes {
		if i > 0 && a == m.axes[i-1] {
			dst[i].Set(&dst[i-1])
			continue
		}
		if f := a.permittivity(p, &dst[i]); f != nil {
			return f.at(a.where)
		}
	}
	return nil
}

// maxFrequency keeps third derivatives inside the floating-point range; no
// light is near it.
const maxFrequency = 1e60
