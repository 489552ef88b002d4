package sweep

import (
	"betaloom/schema"
	"betaloom/schema/column"
)

// checkColumns checks that names of parameters, layers and strips give
// columns that can be told apart, and that no parameter carries the name of a
// column.
func (c *checker) checkColumns() {
	taken := map[string]bool{} // columns that are there without any parameter, layer or strip
	none := schema.Physics{}
	for _, f := range append(column.Part(&none), column.Modes(&none)...) {
		taken[f.Name] = true
	}
	before := len(c.problems)
	for _, n := range c.sectionNames() {
		name := "confinement_" + n.v
		if taken[name] {
			c.fault(n.path, "the name "+n.v+" again", "another name: the column "+name+" stands for one layer or strip")
		}
		taken[name] = true
	}
	for _, name := range c.order {
		c.checkColumn(c.parameters[name], taken)
	}
	if err := column.Check(&c.physics); err != nil && before == len(c.problems) && c.settled() {
		c.fault("parameters", err.Error(), "names that tell columns apart")
	}
}

// settled reports whether every parameter's dimension is known.
func (c *checker) settled() bool {
	for _, p := range c.parameters {
		if p.broken {
			return false
		}
	}
	return true
}

func (c *checker) checkColumn(q *resolved, taken map[string]bool) {
	if q.broken || q.name == schema.Wavelength || q.name == schema.Frequency {
		return
	}
	f, _ := column.Parameter(schema.Parameter{Name: q.name, Dimension: q.dim})
	switch {
	case taken[q.name]:
		c.fault(q.path, "the name "+q.name+", which is a column of the tables", "another name")
	case taken[f.Name]:
		c.fault(q.path, "the name "+q.name+", whose column "+f.Name+" is there already", "another name")
	}
	taken[f.Name] = true
}

// sectionNames lists the names in the section and where they stand.
func (c *checker) sectionNames() []named[string] {
	var all []named[string]
	add := func(path, name string) {
		if name != "" {
			all = append(all, named[string]{path: path + ".name", v: name})
		}
	}
	layers := func(path string, layers []schema.Layer) {
		for i, l := range layers {
			add(index(path, i), l.Name)
			for j, s := range l.Strips {
				add(index(index(path, i)+".strips", j), s.Name)
			}
		}
	}
	switch s := c.physics.Section; {
	case s.Layers != nil:
		layers(layersPath, s.Layers.Layers)
	case s.Pipe != nil:
		layers(pipePath+".fill.layers", s.Pipe.FillLayers)
	case s.Circular != nil:
		for i, r := range s.Circular.Layers {
			add(index(ringsPath, i), r.Name)
		}
	}
	return all
}
