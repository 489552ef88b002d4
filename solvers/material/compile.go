package material

import (
	"math"
	"strconv"
	"strings"

	"betaloom/schema"
)

// checkForm says whether a material is given in exactly one way, with what
// goes with it.
func checkForm(m schema.Material) *fault {
	forms := []struct {
		name string
		set  bool
	}{
		{"named", m.Named != ""}, {"index", m.Index != nil}, {"permittivity", m.Permittivity != nil},
		{"sellmeier", m.Sellmeier != nil}, {"table", m.Table != nil}, {"axes", m.Axes != nil},
		{"conductivity", m.Conductivity != nil},
	}
	var given, all []string
	for _, f := range forms {
		all = append(all, f.name)
		if f.set {
			given = append(given, f.name)
		}
	}
	if len(given) != 1 {
		return &fault{strconv.Itoa(len(given)) + " of " + strings.Join(all, ", "), "exactly one of them"}
	}
	if m.Extinction != nil && m.Index == nil && m.Sellmeier == nil && m.Named == "" {
		return &fault{"extinction with " + given[0], "extinction with index, sellmeier or named"}
	}
	if m.LossTangent != nil && m.Permittivity == nil {
		return &fault{"loss_tangent with " + given[0], "loss_tangent with permittivity"}
	}
	return nil
}

// compileMedium compiles a material without axes that is no metal.
func compileMedium(where string, m schema.Material) (*medium, Residual, *fault) {
	c := &medium{where: where, band: everywhere(), extinction: m.Extinction}
	if f := checkLiterals(m); f != nil {
		return nil, Residual{}, f
	}
	var res Residual
	switch {
	case m.Named != "":
		e, f := lookUp(m.Named)
		if f != nil {
			return nil, res, f
		}
		c.source, c.band, c.origin = e.formula.dispersion(), e.band(), e.name
	case m.Index != nil:
		c.source = constant{*m.Index}
	case m.Permittivity != nil:
		c.source = dielectric{*m.Permittivity, or(m.LossTangent, 0)}
	case m.Sellmeier != nil:
		c.source = compileSellmeier(m.Sellmeier)
	case m.Table != nil:
		t, r, f := fitTable(m.Table)
		if f != nil {
			return nil, res, f
		}
		res = r
		c.source, c.band, c.origin = t, t.band, "table "+m.Table.File
	}
	c.depends = anyParameter(numbers(m))
	c.addShift(m)
	return c, res, nil
}

// addShift adds the shifts of a material, if it has any.
func (c *medium) addShift(m schema.Material) {
	if m.AddIndex == nil && m.ThermoOptic == nil {
		return
	}
	s := shift{m.AddIndex, m.ThermoOptic, or(m.ReferenceTemperature, DefaultReferenceTemperature)}
	c.shifts = append(c.shifts, s)
	// the temperature may be a parameter wherever thermo_optic stands
	c.depends = c.depends || m.ThermoOptic != nil || anyParameter([]*schema.Number{m.AddIndex})
}

// or is the number, or a literal where there is none.
func or(n *schema.Number, v float64) schema.Number {
	if n == nil {
		return schema.Number{Value: v}
	}
	return *n
}

// compileSellmeier takes the fast path where every number is a literal.
func compileSellmeier(s *schema.Sellmeier) source {
	all := sellmeierNumbers(s)
	if anyParameter(all) {
		return series{s.Constant, s.Terms}
	}
	f := formula{terms: []term{{power, s.Constant.Value, 0}}}
	for _, t := range s.Terms {
		f.terms = append(f.terms, term{root, t[0].Value, t[1].Value})
	}
	return f.dispersion()
}

func sellmeierNumbers(s *schema.Sellmeier) []*schema.Number {
	all := []*schema.Number{&s.Constant}
	for i := range s.Terms {
		all = append(all, &s.Terms[i][0], &s.Terms[i][1])
	}
	return all
}

// numbers lists the numbers of a material without those of its axes; some
// may be nil.
func numbers(m schema.Material) []*schema.Number {
	all := []*schema.Number{
		m.Index, m.Extinction, m.Permittivity, m.LossTangent, m.Conductivity,
		m.AddIndex, m.ThermoOptic, m.ReferenceTemperature,
	}
	if m.Sellmeier != nil {
		all = append(all, sellmeierNumbers(m.Sellmeier)...)
	}
	return all
}

func anyParameter(all []*schema.Number) bool {
	for _, n := range all {
		if n != nil && n.Parameter != "" {
			return true
		}
	}
	return false
}

// checkLiterals refuses numbers that no point can make good.
func checkLiterals(m schema.Material) *fault {
	for _, n := range numbers(m) {
		if n != nil && (math.IsNaN(n.Value) || math.IsInf(n.Value, 0)) {
			return found("number", n.Value, "a finite number")
		}
	}
	above := []struct {
		name string
		n    *schema.Number
	}{{"index", m.Index}, {"permittivity", m.Permittivity}, {"reference_temperature", m.ReferenceTemperature}}
	for _, a := range above {
		if a.n != nil && a.n.Parameter == "" && !(a.n.Value > 0) {
			return found(a.name, a.n.Value, "above 0")
		}
	}
	return nil
}
