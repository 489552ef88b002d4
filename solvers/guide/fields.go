package guide

import (
	"context"
	"math"

	"betaloom/solvers"
	"betaloom/solvers/section"
)

// Fields implements solvers.Fielder. The point is solved as a run solves it that starts there, with as many modes as the
// sweep asks for. Beyond the computational walls, where what is left of the mode's power is below the accuracy of neff, the field is zero.
func (g *Guide) Fields(ctx context.Context, q solvers.Q, mode int, options solvers.FieldOptions) (*solvers.Field, error) {
	if err := options.Validate(); err != nil {
		return nil, err
	}
	p, err := g.place(ctx, q, max(g.physics.Modes, mode+1))
	if err != nil {
		return nil, err
	}
	modes, count, err := p.solve(nil)
	if err != nil {
		return nil, err
	}
	if mode < 0 || mode >= len(modes) {
		return nil, solvers.NoMode(mode, count)
	}
	m := &p.answer[mode]
	w := p.view(m)
	if options.Window != nil {
		w = *options.Window
	}
	f := solvers.NewField(&options, w)
	f.Mode, f.Count = modes[mode], count
	if err := p.sample(f, m, p.draw(f, w)); err != nil {
		return nil, err
	}
	f.Scale(m.pencil.Shares(&m.pair, len(p.outline.Parts)).Power)
	return f, nil
}

// reach is how many decay lengths of a mode a picture shows beyond the cores.
const reach = 4

// view is the window of a mode's picture: the box of wall ends and films, and what reach says beyond open sides.
func (p *point) view(m *solved) solvers.Window {
	x, y := p.window()
	corners := [4]float64{x[0], x[1], y[0], y[1]}
	if l, r, b, t, ok := p.outline.Corners(); ok {
		corners = [4]float64{l, r, b, t}
	}
	box := corners
	box[bottom], box[top] = p.films(box[bottom], box[top])
	least := 0.1 * max(box[right]-box[left], box[top]-box[bottom])
	ends, open := p.ends(), p.openSides()
	for side := range box {
		sign := float64(2*(side%2) - 1) // left and bottom are even
		at := sign*box[side] + max(reach/p.decay(side, m.class, m.neff()), least)
		limit := sign * ends[side]
		if open[side] {
			limit = sign*corners[side] + *distance(&p.bounds, side)
		}
		box[side] = sign * min(at, limit)
	}
	return solvers.Window{Left: box[left], Right: box[right], Bottom: box[bottom], Top: box[top]}
}

// films widens an interval of y to hold every layer that is denser than the half-spaces.
func (p *point) films(low, high float64) (float64, float64) {
	last := len(p.outline.Layers) - 1
	base := max(p.half(0), p.half(last), 1)
	for _, l := range p.outline.Layers {
		if e := p.outline.Media[l.Fill].Eps; !math.IsInf(l.Bottom.V, 0) && !math.IsInf(l.Top.V, 0) && real(e[0].V) > base*base {
			low, high = min(low, l.Bottom.V), max(high, l.Top.V)
		}
	}
	return low, high
}

// ends are where the section's metal planes stand; infinite on open sides.
func (p *point) ends() [4]float64 {
	layers := p.outline.Layers
	e := [4]float64{math.Inf(-1), math.Inf(1), layers[0].Bottom.V, layers[len(layers)-1].Top.V}
	if w := p.outline.SideWalls; w != nil {
		e[left], e[right] = w[0].V, w[1].V
	}
	return e
}

// sample fills the fields row by row, from the part of the section that the mode was solved on. Places are taken a hair lower and further
// left, the first ones higher and further right, so that one on an interface has the fields and the material of one side.
func (p *point) sample(f *solvers.Field, m *solved, d *drawing) error {
	planeX, _ := p.outline.MirrorX()
	planeY, _ := p.outline.MirrorY()
	nx := len(f.X)
	xs, ys := make([]float64, nx), make([]float64, nx)
	signs := make([][6]float64, nx)
	for j := range f.Y {
		if err := p.ctx.Err(); err != nil {
			return err
		}
		for i := range xs {
			xs[i], ys[i] = beside(f.X, i), beside(f.Y, j)
			f.Material[j*nx+i] = d.material(xs[i], ys[i])
			signs[i] = m.class.parity(&xs[i], &ys[i], planeX, planeY)
		}
		for i, s := range m.pencil.Samples(&m.pair, xs, ys) {
			for c := range 3 {
				f.E[c][j*nx+i] = complex(signs[i][c], 0) * s.E[c]
				f.H[c][j*nx+i] = complex(signs[i][3+c], 0) * s.H[c]
			}
		}
	}
	return nil
}

// beside is place i of a list, moved by a hair.
func beside(v []float64, i int) float64 {
	hair := 1e-9 * (v[len(v)-1] - v[0])
	if i == 0 {
		return v[0] + hair
	}
	return v[i] - hair
}

// parity moves a place into the part of the section that a class is solved on and gives the signs of Ex to Ez and Hx to Hz
// there. Across an electric wall the normal E and the tangential H are even, the others odd, since E is a vector and H
// an axial one (Jackson, Classical Electrodynamics); across a magnetic wall it is the other way round.
func (c *class) parity(x, y *float64, planeX, planeY float64) [6]float64 {
	sign := [6]float64{1, 1, 1, 1, 1, 1}
	turn := func(normal int, w section.Wall) {
		for i := range sign {
			even := (i%3 == normal) == (i < 3)
			if even != (w == section.Electric) {
				sign[i] = -sign[i]
			}
		}
	}
	if c.halfX && *x < planeX {
		*x = 2*planeX - *x
		turn(0, c.wallX)
	}
	if c.halfY && *y < planeY {
		*y = 2*planeY - *y
		turn(1, c.wallY)
	}
	return sign
}
