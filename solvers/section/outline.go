package section

import (
	"fmt"
	"math"

	"betaloom/schema"
	"betaloom/solvers"
	"betaloom/solvers/jet"
	"betaloom/solvers/resolve"
)

// Medium is a dielectric: its relative permittivity along x, y and z.
type Medium struct {
	Name string // of the first material with these numbers
	Eps  [3]jet.Jet
}

// Side is a wall of a strip: where it stands at the bottom and at the top of
// its layer.
type Side struct{ Bottom, Top Length }

// Strip is one strip of a layer, as high as the layer.
type Strip struct {
	Index       int // in the layer's strips
	Medium      int // index into Media, or Metal
	Left, Right Side
}

// Layer is one layer. Bottom or Top is infinite where it is a half-space.
type Layer struct {
	Index       int // in the section's layers
	Bottom, Top Length
	Fill        int     // medium beside the strips, or of the whole layer
	Strips      []Strip // left to right
}

// Part is what has a name of its own in a section: a strip, or a layer
// beside its strips (Strip is then -1). Both are places in the schema's lists.
type Part struct{ Layer, Strip int }

// Outline is a section at one point. Layers and strips of no extent are not
// in it. y is zero at the lowest interface or ground.
type Outline struct {
	Layers      []Layer  // bottom to top
	Media       []Medium // the dielectrics in use, each once
	Parts       []Part
	SideWalls   *[2]Length // left and right metal wall; nil where the section is open
	Split       []bool     // parameters that would open what has no extent: see Mesh
	GroundBelow bool       // a metal plane under the lowest layer
	GroundAbove bool

	params     int
	tolX, tolY float64 // within which two places are one
	plan       plan
}

// rounding is the relative tolerance within which two places are one: 64
// roundings of the section's size.
const rounding = 64 * epsilon

// New takes the outline of a section of layers at the point that r is set
// to. What it refuses is a *solvers.InputError.
func New(p *schema.Physics, r *resolve.Resolver) (*Outline, error) {
	if p.Section.Layers == nil {
		return nil, &solvers.InputError{Where: "section", Found: "no layers", Expected: "layers"}
	}
	b := &builder{physics: p, layers: p.Section.Layers, r: r, media: map[string]int{}}
	b.o = &Outline{
		GroundBelow: b.layers.GroundBottom, GroundAbove: b.layers.GroundTop,
		Split: make([]bool, r.Params()), params: r.Params(),
	}
	for _, step := range []func() error{b.levels, b.strips, b.sideWalls, b.tidy} {
		if err := step(); err != nil {
			return nil, err
		}
	}
	b.o.plan = b.assemble()
	return b.o, nil
}

// builder holds what is needed while an outline is made.
type builder struct {
	physics *schema.Physics
	layers  *schema.Layers
	r       *resolve.Resolver
	media   map[string]int // by the material's name
	o       *Outline
}

func (b *builder) where(i int) string {
	if name := b.layers.Layers[i].Name; name != "" {
		return "layer " + name
	}
	return fmt.Sprintf("section.layers[%d]", i)
}

func (b *builder) whereStrip(i, j int) string {
	if name := b.layers.Layers[i].Strips[j].Name; name != "" {
		return "strip " + name
	}
	return fmt.Sprintf("%s.strips[%d]", b.where(i), j)
}

// levels sets the layers with their bottoms and tops, those of no thickness
// left out.
func (b *builder) levels() error {
	thick, total, err := b.thicknesses()
	if err != nil {
		return err
	}
	b.o.tolY = rounding * total
	bottom := Length{}
	if !b.o.GroundBelow {
		bottom.V = math.Inf(-1)
	}
	for i := range b.layers.Layers {
		t := thick[i]
		switch {
		case t == nil && i == 0 && math.IsInf(bottom.V, -1):
			b.o.Layers = append(b.o.Layers, Layer{Index: i, Bottom: bottom})
			bottom = Length{}
		case t == nil:
			b.o.Layers = append(b.o.Layers, Layer{Index: i, Bottom: bottom, Top: Length{V: math.Inf(1)}})
		case t.V < -b.o.tolY:
			return &solvers.InputError{Where: b.where(i), Found: fmt.Sprintf("a thickness of %g m", t.V), Expected: "zero or more"}
		case t.V <= b.o.tolY:
			if err := b.vanish(i, t); err != nil {
				return err
			}
		default:
			top := bottom.plus(*t)
			b.o.Layers = append(b.o.Layers, Layer{Index: i, Bottom: bottom, Top: top})
			bottom = top
		}
	}
	if len(b.o.Layers) == 0 {
		return &solvers.InputError{Where: "section.layers", Found: "no layer of any thickness", Expected: "one or more"}
	}
	return nil
}

// thicknesses resolves the thickness of each layer, nil for a half-space,
// and sums them up.
func (b *builder) thicknesses() ([]*Length, float64, error) {
	n := len(b.layers.Layers)
	thick, total := make([]*Length, n), 0.0
	for i, l := range b.layers.Layers {
		half := i == 0 && !b.o.GroundBelow || i == n-1 && !b.o.GroundAbove
		switch {
		case half && l.Thickness != nil:
			return nil, 0, &solvers.InputError{Where: b.where(i), Found: "a thickness", Expected: "none: it is a half-space"}
		case half && len(l.Strips) > 0:
			return nil, 0, &solvers.InputError{Where: b.where(i), Found: "strips in a half-space", Expected: "strips in a layer with a thickness"}
		case half:
			continue
		case l.Thickness == nil:
			return nil, 0, &solvers.InputError{Where: b.where(i), Found: "no thickness", Expected: "one: only the ends of an open stack are half-spaces"}
		}
		t := fromJet(b.r.Dimension(*l.Thickness))
		total += math.Abs(t.V)
		if !finite(t) || math.IsInf(total, 0) {
			return nil, 0, &solvers.InputError{Where: b.where(i), Found: fmt.Sprintf("a thickness of %g m", t.V), Expected: "a finite one, with finite derivatives"}
		}
		thick[i] = &t
	}
	open := 2
	if b.o.GroundBelow {
		open--
	}
	if b.o.GroundAbove {
		open--
	}
	if n < max(open, 1) {
		return nil, 0, &solvers.InputError{Where: "section.layers", Found: fmt.Sprintf("a list of %d", n), Expected: "at least one layer for each open end"}
	}
	return thick, total, nil
}

// vanish leaves out layer i. A conductor of no thickness does not vanish
// with its layer.
func (b *builder) vanish(i int, t *Length) error {
	for j, s := range b.layers.Layers[i].Strips {
		if b.metal(b.stripMaterial(i, s)) {
			return &solvers.InputError{Where: b.whereStrip(i, j), Found: "a conductor of no thickness", Expected: "one with a thickness"}
		}
	}
	b.split(*t, Length{})
	return nil
}

// split marks the parameters in which a and b, equal in value, part.
func (b *builder) split(u, v Length) { markSplit(b.o.Split, u, v) }

func markSplit(split []bool, u, v Length) {
	for p := range split {
		if math.Abs(u.at(p)-v.at(p)) > rounding*max(math.Abs(u.at(p)), math.Abs(v.at(p))) {
			split[p] = true
		}
	}
}

func (b *builder) stripMaterial(i int, s schema.Strip) string {
	if s.Material != "" {
		return s.Material
	}
	return b.layers.Layers[i].Material
}

func (b *builder) metal(name string) bool { return b.physics.Materials[name].Metal() }

// sideWalls sets the metal walls at the sides.
func (b *builder) sideWalls() error {
	if b.layers.WallsWidth == nil {
		return nil
	}
	w := fromJet(b.r.Dimension(*b.layers.WallsWidth))
	if !(w.V > 0) || !finite(w) {
		return &solvers.InputError{Where: "walls", Found: fmt.Sprintf("a width of %g m", w.V), Expected: "one above zero"}
	}
	b.o.SideWalls = &[2]Length{w.scaled(-0.5), w.scaled(0.5)}
	b.o.tolX = max(b.o.tolX, rounding*w.V)
	return nil
}
