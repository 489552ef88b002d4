package sweep

import (
	"slices"

	"betaloom/schema"
)

// materialForm is the form of one material.
func materialForm() form[schema.Material] {
	type m = schema.Material
	keys := append(plainMaterialKeys(),
		keyOf("axes", "a material for each axis of the section: x across, y up, z along the guide", axesForm(), func(m *m, v *schema.Axes) { m.Axes = v }),
		keyOf("conductivity", "of a metal: a conductor, not a dielectric", number(measure{conductivity, "5.8e7 S/m", positive}), func(m *m, v *schema.Number) { m.Conductivity = v }))
	return materialOf(keys, "a material", "named", "index", "permittivity", "sellmeier", "table", "axes", "conductivity")
}

// materialOf is a material of which exactly one of the given keys says what
// it is; the others add to these.
func materialOf(keys []key[schema.Material], what string, one ...string) form[schema.Material] {
	return object[schema.Material]{
		what: what, doc: "A material: exactly one of its first keys says what it is, the others add to that.", keys: keys, one: one,
		needs: map[string][]string{
			"extinction":            {"index", "sellmeier", "named"},
			"loss_tangent":          {"permittivity"},
			"add_index":             {"named", "index", "permittivity", "sellmeier", "table"},
			"thermo_optic":          {"named", "index", "permittivity", "sellmeier", "table"},
			"reference_temperature": {"thermo_optic"},
		},
	}
}

// plainMaterialKeys are the keys that an axis of a material may have too.
func plainMaterialKeys() []key[schema.Material] {
	type m = schema.Material
	return []key[m]{
		keyOf("named", "a built-in material; `betaloom materials` lists them",
			builtin{bare(plainText{"the name of a built-in material, such as fused-silica", builtinPattern, "", maxName})},
			func(m *m, v string) { m.Named = v }),
		keyOf("index", "refractive index n", number(pureOf(positive, "1.45")), func(m *m, v *schema.Number) { m.Index = v }),
		keyOf("permittivity", "relative permittivity, real part", number(pureOf(positive, "4.4")), func(m *m, v *schema.Number) { m.Permittivity = v }),
		keyOf("sellmeier", "n^2 = constant + sum of b L^2/(L^2 - c^2), L and c in um", sellmeierForm(), func(m *m, v *schema.Sellmeier) { m.Sellmeier = v }),
		keyOf("table", "a CSV file with the header wavelength_um,n or wavelength_um,n,k", tableForm{}, func(m *m, v *schema.Table) { m.Table = v }),
		keyOf("extinction", "k of the index n - jk; above zero is loss", number(pureOf(anyValue, "1e-4")), func(m *m, v *schema.Number) { m.Extinction = v }),
		keyOf("loss_tangent", "of the permittivity; above zero is loss", number(pureOf(anyValue, "0.02")), func(m *m, v *schema.Number) { m.LossTangent = v }),
		keyOf("add_index", "is added to n", number(pureOf(anyValue, "0.01")), func(m *m, v *schema.Number) { m.AddIndex = v }),
		keyOf("thermo_optic", "dn/dT; acts through the parameter temperature", number(measure{perTemperature, "1e-5 1/K", anyValue}), func(m *m, v *schema.Number) { m.ThermoOptic = v }),
		keyOf("reference_temperature", "where thermo_optic changes nothing (293.15 K where absent)", number(measure{temperature, "293.15 K", notNegative}), func(m *m, v *schema.Number) { m.ReferenceTemperature = v }),
	}
}

// number is the form of a number that may be absent.
func number(m measure) form[*schema.Number] { return optional(numeric{m}) }

func axesForm() form[*schema.Axes] {
	one := materialOf(plainMaterialKeys(), "a material along one axis", "named", "index", "permittivity", "sellmeier", "table")
	return optional(object[schema.Axes]{
		what: "axes", doc: "A material whose principal axes lie along those of the section.",
		keys: []key[schema.Axes]{
			must(keyOf("x", "across", one, func(a *schema.Axes, v schema.Material) { a.X = v })),
			must(keyOf("y", "up, the way layers are stacked", one, func(a *schema.Axes, v schema.Material) { a.Y = v })),
			must(keyOf("z", "along the guide", one, func(a *schema.Axes, v schema.Material) { a.Z = v })),
		},
	})
}

func sellmeierForm() form[*schema.Sellmeier] {
	term := pair(numeric{pureOf(anyValue, "0.6961663")}, "b, and c in um")
	return optional(object[schema.Sellmeier]{
		what: "a Sellmeier formula", doc: "n^2 = constant + sum of b L^2/(L^2 - c^2), L and c in um.",
		keys: []key[schema.Sellmeier]{
			must(keyOf("constant", "1 in most published formulas", numeric{pureOf(anyValue, "1")},
				func(s *schema.Sellmeier, v schema.Number) { s.Constant = v })),
			must(keyOf("terms", "one pair [b, c] a term", list[[2]schema.Number]{term, 1, 20, "pairs [b, c]"},
				func(s *schema.Sellmeier, v [][2]schema.Number) { s.Terms = v })),
		},
	})
}

// builtin is the form of the name of a built-in material.
type builtin struct{ form[string] }

func (b builtin) read(r *reader, at place) (string, bool) {
	name, ok := b.form.read(r, at)
	if !ok || r.builtin == nil || slices.Contains(r.builtin, name) {
		return name, ok
	}
	r.fault(at.path, "the unknown built-in material "+name, "one of those that `betaloom materials` lists"+r.hint(name, r.builtin))
	return name, false
}
