package guide

import (
	"slices"

	"betaloom/solvers"
	"betaloom/solvers/section"
)

// drawing is the section as rows of materials, for the picture of a field.
type drawing struct {
	f    *solvers.Field
	w    solvers.Window
	rows []strata
}

// strata is a layer: material i stands left of wall i.
type strata struct {
	bottom, top float64
	walls       []section.Side
	materials   []int
}

// draw makes the drawing of the section and puts its edges into the field.
func (p *point) draw(f *solvers.Field, w solvers.Window) *drawing {
	d := &drawing{f: f, w: w}
	for _, l := range p.outline.Layers {
		given := &p.physics.Section.Layers.Layers[l.Index]
		fill := given.Material
		if len(given.Strips) > 0 {
			fill = given.Fill
		}
		r := strata{bottom: l.Bottom.V, top: l.Top.V, materials: []int{f.MaterialIndex(fill, false)}}
		for _, s := range l.Strips {
			name := given.Strips[s.Index].Material
			if name == "" {
				name = given.Material
			}
			r.add(s, f.MaterialIndex(name, s.Medium == section.Metal), 1e-9*(w.Right-w.Left))
		}
		d.rows = append(d.rows, r)
		d.sides(&r)
	}
	for i := 1; i < len(d.rows); i++ {
		d.level(&d.rows[i-1], &d.rows[i])
	}
	return d
}

// add puts a strip at the right end; strips that touch within hair share their wall.
func (r *strata) add(s section.Strip, material int, hair float64) {
	n := len(r.walls)
	fill := r.materials[0]
	if n > 0 && s.Left.Bottom.V-r.walls[n-1].Bottom.V <= hair && s.Left.Top.V-r.walls[n-1].Top.V <= hair {
		r.walls, r.materials = r.walls[:n-1], r.materials[:n]
	}
	r.walls = append(r.walls, s.Left, s.Right)
	r.materials = append(r.materials, material, fill)
}

// sides adds the edges of a layer's walls.
func (d *drawing) sides(r *strata) {
	for i, w := range r.walls {
		if r.materials[i] != r.materials[i+1] {
			d.f.AddEdge(solvers.Edge{X: [2]float64{w.Bottom.V, w.Top.V}, Y: [2]float64{r.bottom, r.top}}, d.w)
		}
	}
}

// level adds the edges between two layers.
func (d *drawing) level(below, above *strata) {
	places := []float64{d.w.Left, d.w.Right}
	for _, w := range below.walls {
		places = append(places, w.Top.V)
	}
	for _, w := range above.walls {
		places = append(places, w.Bottom.V)
	}
	slices.Sort(places)
	for i := 0; i+1 < len(places); i++ {
		middle, start := (places[i]+places[i+1])/2, places[i]
		if places[i+1] == start || below.at(middle, 1) == above.at(middle, 0) {
			continue
		}
		d.f.AddEdge(solvers.Edge{X: [2]float64{start, places[i+1]}, Y: [2]float64{above.bottom, above.bottom}}, d.w)
	}
}

// at is the material at x, t of the way up a layer.
func (r *strata) at(x, t float64) int {
	for i, w := range r.walls {
		if x <= (1-t)*w.Bottom.V+t*w.Top.V {
			return r.materials[i]
		}
	}
	return r.materials[len(r.walls)]
}

// material is what stands at a place.
func (d *drawing) material(x, y float64) int {
	at := len(d.rows) - 1
	for i := range d.rows {
		if y <= d.rows[i].top {
			at = i
			break
		}
	}
	r := &d.rows[at]
	t := 0.0
	if len(r.walls) > 0 {
		t = (y - r.bottom) / (r.top - r.bottom)
	}
	return r.at(x, t)
}
