package choose

import (
	"fmt"

	"betaloom/schema"
)

// Equation is one of the problems that Maxwell's equations reduce to.
type Equation string

// The equations, from the cheapest to the most general.
const (
	Slab       Equation = "slab"        // one ordinary differential eigenproblem for TE, one for TM
	Stacked    Equation = "LSE and LSM" // metal wall, fill stacked along one axis
	Circular   Equation = "circular"    // one radial eigenproblem for each azimuthal order
	Helmholtz  Equation = "Helmholtz"   // metal wall, one fill: TE and TM from their cut-offs
	Laplace    Equation = "Laplace"     // two or more conductors: TEM or quasi-TEM
	SemiVector Equation = "semi-vectorial"
	FullVector Equation = "full-vector" // E in the plane and along the guide
)

// Choice is an equation and the reasons for it, each one sentence.
type Choice struct {
	Equation Equation
	Section  string // what the section is, for messages
	Reasons  []string
}

// Explain chooses the equation for p, which has a section.
func Explain(p *schema.Physics) Choice {
	switch s := p.Section; {
	case s.Circular != nil:
		return circular(s.Circular)
	case s.Pipe != nil:
		return pipe(s.Pipe)
	default:
		return layers(p)
	}
}

func circular(c *schema.Circular) Choice {
	edge := "open"
	if c.Wall != "" {
		edge = "walled by " + c.Wall
	}
	return Choice{Circular, "circular", []string{
		fmt.Sprintf("the section is round and %s, so the azimuthal orders separate", edge),
		"each order is one radial eigenproblem with HE, EH, TE and TM modes",
	}}
}

func pipe(p *schema.Pipe) Choice {
	switch {
	case len(p.FillLayers) > 0:
		return Choice{Stacked, "pipe", []string{
			"a metal wall encloses fills stacked along " + p.FillAlong,
			"its modes are LSE and LSM, one ordinary differential eigenproblem each",
		}}
	case p.Coax != nil:
		return Choice{Laplace, "pipe", []string{
			"two conductors with one fill carry a TEM wave, found from Laplace's equation in the plane",
			"TE and TM modes above their cut-offs follow from Helmholtz's equation",
		}}
	default:
		return Choice{Helmholtz, "pipe", []string{
			"one metal wall with one fill carries TE and TM modes",
			"one scalar Helmholtz problem gives their cut-offs, and these give every frequency",
		}}
	}
}

func layers(p *schema.Physics) Choice {
	l := p.Section.Layers
	strips, conductors := countStrips(p)
	switch {
	case conductors > 0 && conductors+grounds(l) > 1 && p.Equation != string(FullVector):
		return Choice{Laplace, "layers with strips", []string{
			fmt.Sprintf("%d conductors carry a TEM or quasi-TEM wave, found from Laplace's equation in the plane", conductors+grounds(l)),
		}}
	case strips > 0 && p.Equation == string(SemiVector):
		return Choice{SemiVector, "layers with strips", []string{
			"the section varies along x and y", "semi-vectorial was asked for: an approximation, flagged in every row",
		}}
	case strips > 0:
		return Choice{FullVector, "layers with strips", []string{
			"the section varies along x and y, so its modes are hybrid",
			"nothing simpler than E in the plane and along the guide is exact",
		}}
	case l.WallsWidth != nil:
		return Choice{Stacked, "layers with walls", []string{
			"side walls close a stack that varies along y only",
			"its modes are LSE and LSM, one ordinary differential eigenproblem each",
		}}
	default:
		return slabChoice(p)
	}
}

func slabChoice(p *schema.Physics) Choice {
	c := Choice{Slab, "layers", []string{
		"the section is open and varies along y only, so its modes are TE (E along x) and TM (H along x)",
		"each is one ordinary differential eigenproblem, solved in closed form within each layer",
	}}
	l := p.Section.Layers
	switch grounds(l) {
	case 1:
		c.Reasons = append(c.Reasons, "a metal plane takes the place of one half-space: E along it vanishes there")
	case 2:
		c.Reasons[0] = "the section is closed by two metal planes and varies along y only, so its modes are TE (E along x) and TM (H along x)"
	}
	if p.Equation != "" && p.Equation != "auto" {
		c.Reasons = append(c.Reasons, fmt.Sprintf("%s was asked for: this equation leaves nothing out of Maxwell's equations for such a section, so the answer is the same", p.Equation))
	}
	return c
}

func grounds(l *schema.Layers) int {
	n := 0
	if l.GroundBottom {
		n++
	}
	if l.GroundTop {
		n++
	}
	return n
}

// countStrips counts the strips of a stack and those of a metal among them.
func countStrips(p *schema.Physics) (strips, conductors int) {
	for _, l := range p.Section.Layers.Layers {
		for _, s := range l.Strips {
			strips++
			name := s.Material
			if name == "" {
				name = l.Material
			}
			if p.Materials[name].Metal() {
				conductors++
			}
		}
	}
	return strips, conductors
}
