package resolve

import (
	"sort"

	"betaloom/schema"
	"betaloom/solvers"
	"betaloom/solvers/jet"
	"betaloom/solvers/material"
)

// memory is how many points a medium remembers: enough for one line of a
// tile along a frequency axis.
const memory = 64

// medium is a material with the permittivities it gave last. Along most
// lines of a grid a material sees the same few inputs again and again.
type medium struct {
	material *material.Material
	inputs   []int // indices into the point: 0 and what the material depends on
	seen     []remembered
	last     int // in seen
}

type remembered struct {
	key [8]float64
	eps [3]jet.Jet
}

func newMedium(m *material.Material, inputs []int) *medium {
	return &medium{material: m, inputs: inputs}
}

// Medium gives the relative permittivity along x, y and z of a material at
// the point. The jets are shared: read them only.
func (r *Resolver) Medium(name string) (*[3]jet.Jet, error) {
	m := r.media[name]
	if m == nil {
		return nil, &solvers.InputError{Where: "material " + name, Found: "no dielectric", Expected: "a dielectric of the sweep"}
	}
	var key [8]float64
	if len(m.inputs) > len(key) {
		var eps [3]jet.Jet
		err := m.material.Permittivity(r.point[0], r.Number, r.Params(), &eps)
		return &eps, err
	}
	for i, at := range m.inputs {
		key[i] = r.point[at]
	}
	if eps := m.recall(&key); eps != nil {
		return eps, nil
	}
	var eps [3]jet.Jet
	if err := m.material.Permittivity(r.point[0], r.Number, r.Params(), &eps); err != nil {
		return nil, err
	}
	return m.remember(&key, &eps), nil
}

// recall searches from the entry after the last hit, which is where the
// next point of a line lies.
func (m *medium) recall(key *[8]float64) *[3]jet.Jet {
	for k := range m.seen {
		i := (m.last + k) % len(m.seen)
		if m.seen[i].key == *key {
			m.last = i
			return &m.seen[i].eps
		}
	}
	return nil
}

func (m *medium) remember(key *[8]float64, eps *[3]jet.Jet) *[3]jet.Jet {
	if len(m.seen) < memory {
		m.seen = append(m.seen, remembered{})
		m.last = len(m.seen) - 1
	} else {
		m.last = (m.last + 1) % memory
	}
	m.seen[m.last] = remembered{*key, *eps}
	return &m.seen[m.last].eps
}

// dependencies says, for each parameter, which entries of the point it
// depends on.
func (r *Resolver) dependencies() map[string]map[int]bool {
	needs := map[string]map[int]bool{r.clock: {0: true}}
	for i, name := range r.base {
		needs[name] = map[int]bool{1 + i: true}
	}
	for _, d := range r.derived {
		if d.Name == r.clock {
			continue
		}
		all := map[int]bool{}
		for _, n := range d.Expr.Names() {
			for i := range needs[n] {
				all[i] = true
			}
		}
		needs[d.Name] = all
	}
	return needs
}

// inputs lists the entries of the point that m depends on, the frequency
// always among them.
func (r *Resolver) inputs(m schema.Material, needs map[string]map[int]bool) []int {
	all := map[int]bool{0: true}
	for _, name := range append(parameters(m), schema.Temperature) {
		for i := range needs[name] {
			all[i] = true
		}
	}
	list := make([]int, 0, len(all))
	for i := range all {
		list = append(list, i)
	}
	sort.Ints(list)
	return list
}

// parameters lists the parameters that a material's numbers name.
func parameters(m schema.Material) []string {
	var names []string
	add := func(numbers ...*schema.Number) {
		for _, n := range numbers {
			if n != nil && n.Parameter != "" {
				names = append(names, n.Parameter)
			}
		}
	}
	add(m.Index, m.Extinction, m.Permittivity, m.LossTangent, m.AddIndex, m.ThermoOptic, m.ReferenceTemperature)
	if m.Sellmeier != nil {
		add(&m.Sellmeier.Constant)
		for i := range m.Sellmeier.Terms {
			add(&m.Sellmeier.Terms[i][0], &m.Sellmeier.Terms[i][1])
		}
	}
	if m.Axes != nil {
		for _, a := range []schema.Material{m.Axes.X, m.Axes.Y, m.Axes.Z} {
			names = append(names, parameters(a)...)
		}
	}
	return names
}
