package report

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"betaloom/schema"
	"betaloom/schema/expr"
)

// sketch is a drawing of a stack of layers.
type sketch struct {
	Width, Height float64
	Slabs         []slabBox
	Scale         string // says how far it is to scale
}

// slabBox is one layer of a sketch, top down in pixels.
type slabBox struct {
	Y, H    float64
	Tint    int    // place of the material
	Metal   bool   // a conductor
	Fade    string // up or down for a half-space
	Name    string
	Detail  string
	Strips  []rect
	Ground  bool
	Outline bool
}

const (
	sketchWidth = 560
	sketchStack = 210 // pixels for the layers that have a thickness
	sketchThin  = 30  // the least of a layer
	sketchOpen  = 58  // of a half-space
	sketchBox   = 230 // width of the stack itself
)

// sketchOf draws the section if it is a stack.
func (d *Data) sketchOf() *sketch {
	layers := d.Physics.Section.Layers
	if layers == nil || len(layers.Layers) == 0 {
		return nil
	}
	s := &sketch{Width: sketchWidth}
	heights, exact := d.heights(layers)
	y := 8.0
	if layers.GroundTop {
		y = s.ground(y)
	}
	for i := len(layers.Layers) - 1; i >= 0; i-- {
		b := d.slabBox(layers, i)
		b.Y, b.H = y, heights[i]
		s.Slabs = append(s.Slabs, b)
		y += heights[i]
	}
	if layers.GroundBottom {
		y = s.ground(y)
	}
	s.Height = y + 8
	s.Scale = "Thicknesses are to scale, at the middle of the box."
	if !exact {
		s.Scale = "Thicknesses are to scale at the middle of the box, but for thin layers, which are drawn thicker."
	}
	return s
}

func (s *sketch) ground(y float64) float64 {
	s.Slabs = append(s.Slabs, slabBox{Y: y, H: 12, Ground: true, Name: "metal plane"})
	return y + 12
}

// heights gives each layer its pixels; exact is false where a thin one was
// drawn thicker.
func (d *Data) heights(l *schema.Layers) (px []float64, exact bool) {
	px, exact = make([]float64, len(l.Layers)), true
	total, known := 0.0, map[string]float64{}
	for i, layer := range l.Layers {
		if layer.Thickness != nil {
			px[i] = max(0, d.middle(*layer.Thickness, known))
			if math.IsNaN(px[i]) {
				px[i] = 0
			}
			total += px[i]
		}
	}
	for i, layer := range l.Layers {
		if layer.Thickness == nil {
			px[i] = sketchOpen
			continue
		}
		if px[i] *= sketchStack / max(total, 1e-300); px[i] < sketchThin {
			px[i], exact = sketchThin, false
		}
	}
	return px, exact
}

// middle is a number's value at the middle of the box, NaN where it cannot
// be found. known keeps what was found, so that each parameter is evaluated once.
func (d *Data) middle(n schema.Number, known map[string]float64) float64 {
	if n.Parameter == "" {
		return n.Value
	}
	if v, ok := known[n.Parameter]; ok {
		return v
	}
	known[n.Parameter] = math.NaN() // stands if the parameter leads back to itself
	if p, ok := d.Physics.Parameter(n.Parameter); ok {
		known[n.Parameter] = d.middleOf(p, known)
	}
	return known[n.Parameter]
}

func (d *Data) middleOf(p schema.Parameter, known map[string]float64) float64 {
	switch p.Kind {
	case schema.Fixed:
		return p.Value
	case schema.Axis:
		s := spanOf(d.valuesOf(p.Name))
		return (s.Lo + s.Hi) / 2
	}
	e, err := expr.Parse(p.Expr)
	if err != nil {
		return math.NaN()
	}
	v, err := e.Float(func(name string) float64 { return d.middle(schema.Number{Parameter: name}, known) })
	if err != nil {
		return math.NaN()
	}
	return v
}

// valuesOf gives the values that a swept parameter takes.
func (d *Data) valuesOf(name string) []float64 {
	for _, a := range d.Axes {
		if a.Parameter == name {
			return a.Values
		}
	}
	if c := slices.Index(d.Columns, name); c >= 0 {
		return columnOf(d.Rows, c)
	}
	return nil
}

func (d *Data) slabBox(l *schema.Layers, i int) slabBox {
	layer := l.Layers[i]
	b := slabBox{Tint: d.tint(layer.Material), Metal: d.Physics.Materials[layer.Material].Metal(), Name: layer.Material}
	if layer.Name != "" && layer.Name != layer.Material {
		b.Name = layer.Name + ": " + layer.Material
	}
	switch {
	case layer.Thickness != nil:
		b.Detail = d.number(*layer.Thickness)
	case i == 0:
		b.Fade, b.Detail = "down", "half-space"
	default:
		b.Fade, b.Detail = "up", "half-space"
	}
	for _, strip := range layer.Strips {
		b.Detail += "; strip " + strings.TrimSpace(strip.Name+" "+d.number(strip.Width)) + " wide"
	}
	return b
}

// tint is a material's place in the order of names.
func (d *Data) tint(material string) int {
	return max(0, slices.Index(d.materialNames(), material)) % 8
}

func (d *Data) materialNames() []string {
	var names []string
	for name := range d.Physics.Materials {
		names = append(names, name)
	}
	slices.Sort(names)
	return names
}

// number writes a number of the section: its value, or its parameter with
// what that runs over.
func (d *Data) number(n schema.Number) string {
	if n.Parameter == "" {
		return value(n.Value, schema.Dimension{Length: 1})
	}
	p, ok := d.Physics.Parameter(n.Parameter)
	if !ok {
		return n.Parameter
	}
	return n.Parameter + " " + d.extent(p)
}

// extent says in short what a parameter is or runs over.
func (d *Data) extent(p schema.Parameter) string {
	switch p.Kind {
	case schema.Fixed:
		return value(p.Value, p.Dimension)
	case schema.Derived:
		return "= " + p.Expr
	}
	values := d.valuesOf(p.Name)
	s := spanOf(values)
	if s.empty() {
		return ""
	}
	u := axisUnit(p.Dimension, values)
	if s.width() == 0 {
		return u.with(short(s.Lo*u.Scale, 7))
	}
	between := "–"
	if s.Lo < 0 {
		between = " to "
	}
	return u.with(short(s.Lo*u.Scale, 7) + between + short(s.Hi*u.Scale, 7))
}

// material describes a material in words.
func (d *Data) material(m schema.Material) string {
	bare := func(n *schema.Number) string {
		if n.Parameter != "" {
			return n.Parameter
		}
		return short(n.Value, 8)
	}
	var text string
	switch {
	case m.Named != "":
		text = m.Named + " (built in)"
	case m.Index != nil:
		text = "n = " + bare(m.Index)
	case m.Permittivity != nil:
		text = "ε = " + bare(m.Permittivity)
	case m.Sellmeier != nil:
		text = fmt.Sprintf("Sellmeier formula with %s", several(len(m.Sellmeier.Terms), "term"))
	case m.Table != nil:
		s := spanOf(m.Table.WavelengthM)
		u := unit{"µm", 1e6}
		text = fmt.Sprintf("table %s, %s", m.Table.File, u.with(short(s.Lo*1e6, 5)+"–"+short(s.Hi*1e6, 5)))
	case m.Axes != nil:
		text = "along x: " + d.material(m.Axes.X) + "; along y: " + d.material(m.Axes.Y) + "; along z: " + d.material(m.Axes.Z)
	case m.Conductivity != nil:
		text = "metal, σ = " + bare(m.Conductivity) + " S/m"
	}
	for _, more := range []struct {
		n           *schema.Number
		text, after string
	}{{m.Extinction, ", k = ", ""}, {m.LossTangent, ", tan δ = ", ""}, {m.AddIndex, ", index raised by ", ""}, {m.ThermoOptic, ", dn/dT = ", " per K"}} {
		if more.n != nil {
			text += more.text + bare(more.n) + more.after
		}
	}
	return text
}

// Middle and the methods below place what belongs to a layer.
func (b slabBox) Middle() float64  { return b.Y + b.H/2 }
func (b slabBox) Bottom() float64  { return b.Y + b.H }
func (b slabBox) Top3() float64    { return b.Y + 3 }
func (b slabBox) Bottom3() float64 { return b.Y + b.H - 3 }
