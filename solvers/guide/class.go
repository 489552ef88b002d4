package guide

import (
	"math"
	"strings"

	"betaloom/solvers/section"
)

// class is the modes of one symmetry: those whose Ex has given parities across the mirror planes.
type class struct {
	halfX, halfY bool
	wallX, wallY section.Wall
	label        string
	low          float64 // a mode is guided above this effective index
	census       int     // guided modes of this class
	start        warm
}

// pipeLow is the lowest effective index of a mode between metal walls on all sides: below it, next to its cut-off,
// a mode is not looked for.
const pipeLow = 1e-3

// classify lists the classes and finds what is guided in each.
func (p *point) classify() error {
	_, mx := p.outline.MirrorX()
	_, my := p.outline.MirrorY()
	sides := func(mirror bool, even, odd section.Wall) []class {
		if !mirror {
			return []class{{}}
		}
		return []class{{halfX: true, wallX: even, label: "even"}, {halfX: true, wallX: odd, label: "odd"}}
	}
	for _, x := range sides(mx, section.Electric, section.Magnetic) {
		for _, y := range sides(my, section.Magnetic, section.Electric) {
			var words []string
			if mx {
				words = append(words, "x-"+x.label)
			}
			if my {
				words = append(words, "y-"+y.label)
			}
			p.classes = append(p.classes, class{
				halfX: mx, wallX: x.wallX, halfY: my, wallY: y.wallX, label: strings.Join(words, " "),
			})
		}
	}
	return p.thresholds(my)
}

// thresholds sets what is guided: above the half-spaces' indices and above the modes far left and right
// that the class couples to.
func (p *point) thresholds(mirror bool) error {
	base := max(p.half(0), p.half(len(p.outline.Layers)-1), pipeLow)
	for i := range p.classes {
		p.classes[i].low = base
	}
	if p.outline.SideWalls != nil {
		return nil
	}
	stack := p.outline.Far()
	if len(stack.Layers) < 3 && !stack.GroundBottom && !stack.GroundTop {
		return nil
	}
	const enough = 16 // the highest of each kind are among these
	modes, _, err := p.far.Solve(p.ctx, p.w, &stack, enough)
	if err != nil {
		return err
	}
	for _, m := range modes {
		even := (m.Type == "TE") == (m.Symmetry == "even") // Ex of the section's modes that it couples to
		for i := range p.classes {
			c := &p.classes[i]
			if !mirror || m.Symmetry == "" || even == (c.wallY == section.Magnetic) {
				c.low = max(c.low, m.Neff)
			}
		}
	}
	return nil
}

// half is the index of a half-space, the larger one in the plane; 0 if the layer is none.
func (p *point) half(i int) float64 {
	l := &p.outline.Layers[i]
	if !math.IsInf(l.Bottom.V, 0) && !math.IsInf(l.Top.V, 0) {
		return 0
	}
	e := &p.outline.Media[l.Fill].Eps
	return math.Sqrt(max(real(e[0].V), real(e[1].V), 0))
}

// densest is the highest index in the section.
func (p *point) densest() float64 {
	top := 1.0
	for i := range p.outline.Media {
		for _, e := range p.outline.Media[i].Eps {
			top = max(top, real(e.V))
		}
	}
	return math.Sqrt(top)
}

// cellSize is the widest cell: a wavelength in the densest medium, or more where the section is so large that
// this would make too many.
func (p *point) cellSize() float64 {
	const most = 12 // cells across
	size := 2 * math.Pi / (p.k * p.densest())
	if l, r, b, t, ok := p.outline.Corners(); ok {
		size = max(size, (r-l)/most, (t-b)/most)
	}
	return size
}
