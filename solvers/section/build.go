package section

import (
	"fmt"

	"betaloom/solvers"
)

// maxNumbers bounds the numbers of a mesh, those of its derivatives
// included: 64 MB.
const maxNumbers = 1 << 23

// maxWalls bounds the walls of a section that is meshed.
const maxWalls = 4096

// Mesh makes the mesh of the section, or of its half or quarter. The
// computational walls move with the outermost wall ends. It refuses options out of range, a
// mirror plane that is not there, and numbers so far apart that lines coincide or derivatives overflow, as a *solvers.InputError.
func (o *Outline) Mesh(options Options) (*Mesh, error) {
	if err := options.Validate(); err != nil {
		return nil, err
	}
	p, copies, err := o.fold(&options)
	if err != nil {
		return nil, err
	}
	open := p.open()
	if p, err = p.domain(options.Bounds); err != nil {
		return nil, err
	}
	if n := p.walls(); n > maxWalls || n*len(p.levels) > maxNumbers/8/(o.params+1) {
		return nil, tooMany(fmt.Sprintf("%d walls and %d levels", p.walls(), len(p.levels)))
	}
	m := &Mesh{Split: append([]bool{}, o.Split...), Copies: copies}
	options = options.filled(p.size())
	m.close(o, &options)
	f := frame{o: &options, m: m, w: p.web(m.Split, o.tolX), params: o.params, open: open}
	for _, step := range []func() error{f.cut, f.place, f.check, f.differentiate} {
		if err := step(); err != nil {
			return nil, err
		}
	}
	f.fill()
	return m, nil
}

func tooMany(found string) error {
	return &solvers.InputError{Where: "mesh", Found: found, Expected: fmt.Sprintf("a mesh of at most %d numbers", maxNumbers)}
}

// fold takes the half or the quarter that is asked for.
func (o *Outline) fold(options *Options) (plan, int, error) {
	p, copies := o.plan, 1
	if options.HalfX {
		x, ok := o.MirrorX()
		if !ok {
			return p, 0, &solvers.InputError{Where: "mesh", Found: "no vertical mirror plane", Expected: "one, for half the section"}
		}
		p, copies = p.rightOf(x), 2
	}
	if options.HalfY {
		y, ok := o.MirrorY()
		if !ok {
			return p, 0, &solvers.InputError{Where: "mesh", Found: "no horizontal mirror plane", Expected: "one, for half the section"}
		}
		p, copies = p.above(y), 2*copies
	}
	return p, copies, nil
}

func (p *plan) walls() int {
	n := 0
	for k := range p.rows {
		n += len(p.rows[k].walls)
	}
	return n
}

// size is half the largest height or width of a cell of a row with walls,
// the outermost cells' widths aside; without walls that of the highest row.
func (p *plan) size() float64 {
	inner, any := 0.0, 0.0
	for k := range p.rows {
		height := p.levels[k+1].V - p.levels[k].V
		any = max(any, height)
		walls := p.rows[k].walls
		if len(walls) > 0 {
			inner = max(inner, height)
		}
		for i := 1; i < len(walls); i++ {
			inner = max(inner, walls[i].Bottom.V-walls[i-1].Bottom.V, walls[i].Top.V-walls[i-1].Top.V)
		}
	}
	if inner > 0 {
		return inner / 2
	}
	return any / 2
}

// close sets the outer walls.
func (m *Mesh) close(o *Outline, options *Options) {
	side := func(half, metal bool, plane Wall) Wall {
		switch {
		case half:
			return plane
		case metal:
			return Electric
		}
		return options.Outer
	}
	metal := o.SideWalls != nil
	m.Left, m.Right = side(options.HalfX, metal, options.WallX), side(false, metal, 0)
	m.Bottom, m.Top = side(options.HalfY, o.GroundBelow, options.WallY), side(false, o.GroundAbove, 0)
}
