package sweep

import (
	"fmt"
	"math"

	"betaloom/schema"
	"betaloom/schema/quantity"
)

// checkSection checks the rules of the section.
func (c *checker) checkSection() {
	s := c.physics.Section
	switch {
	case s.Layers != nil:
		c.checkLayers(s.Layers)
	case s.Circular != nil:
		c.checkCircular(s.Circular)
	case s.Pipe != nil:
		c.checkPipe(s.Pipe)
	}
}

const layersPath = "section.layers"

// checkLayers checks a stack: half-spaces at its open ends, layers with a
// thickness between them.
func (c *checker) checkLayers(l *schema.Layers) {
	n := len(l.Layers)
	least, ends := 2, "an open stack has a half-space at the bottom and one at the top"
	switch {
	case l.GroundBottom && l.GroundTop:
		least, ends = 1, "a stack between two grounds has at least one layer"
	case l.GroundBottom || l.GroundTop:
		least, ends = 2, "a grounded stack has layers and one half-space"
	}
	if n < least {
		c.fault(layersPath, count(n, "layer"), fmt.Sprintf("at least %d: %s", least, ends))
	}
	for i := range l.Layers {
		path := index(layersPath, i)
		half := n >= least && (i == 0 && !l.GroundBottom || i == n-1 && !l.GroundTop)
		if half {
			c.checkHalfSpace(path, i == 0)
		} else if n >= least {
			c.checkLayer(path, &l.Layers[i])
		}
		c.checkStrips(path, &l.Layers[i])
	}
}

func (c *checker) checkHalfSpace(path string, first bool) {
	which, side := "last", "top"
	if first {
		which, side = "first", "bottom"
	}
	if c.has(path + ".thickness") {
		c.fault(path+".thickness", "a thickness of the "+which+" layer", "none: it is a half-space (or a metal plane beyond it: ground: "+side+")")
	}
	if c.has(path + ".strips") {
		c.fault(path+".strips", "strips in the "+which+" layer", "strips in a layer with a thickness: the "+which+" one is a half-space")
	}
}

// checkLayer checks a layer that has a thickness.
func (c *checker) checkLayer(path string, l *schema.Layer) {
	if !c.has(path + ".thickness") {
		c.fault(path, "no thickness", "a thickness: only the first and the last layer are half-spaces, and not on a grounded side")
		return
	}
	if t, ok := c.value(path+".thickness", l.Thickness); ok && t == 0 && !c.hasConductor(l) {
		c.fault(path+".thickness", "a thickness of zero", "one above zero: only strips of a metal may be that thin")
	}
}

// hasConductor reports whether a layer has a strip of a metal.
func (c *checker) hasConductor(l *schema.Layer) bool {
	for _, s := range l.Strips {
		name := s.Material
		if name == "" {
			name = l.Material
		}
		if c.physics.Materials[name].Metal() {
			return true
		}
	}
	return false
}

// checkStrips checks the strips of a layer, or that a layer without any is
// no metal.
func (c *checker) checkStrips(path string, l *schema.Layer) {
	if !c.has(path + ".strips") {
		if c.physics.Materials[l.Material].Metal() {
			c.fault(path+".material", "the metal "+l.Material, "a dielectric: a metal stands as a strip, a wall or a ground")
		}
		return
	}
	for i := range l.Strips {
		for j := range i {
			if c.overlap(path, l, j, i) {
				c.fault(index(path+".strips", i), fmt.Sprintf("a strip that overlaps strips[%d]", j), "strips side by side")
			}
		}
	}
}

// overlap reports whether two strips of known place and width overlap, the
// widths taken as they are given.
func (c *checker) overlap(path string, l *schema.Layer, a, b int) bool {
	span := func(i int) (lo, hi float64) {
		at := index(path+".strips", i)
		centre, ok := c.value(at+".centre", &l.Strips[i].Centre)
		width, known := c.value(at+".width", &l.Strips[i].Width)
		if !ok || !known {
			return math.NaN(), math.NaN()
		}
		return centre - width/2, centre + width/2
	}
	aLo, aHi := span(a)
	bLo, bHi := span(b)
	const touching = 1e-9
	return min(aHi, bHi)-max(aLo, bLo) > touching*min(aHi-aLo, bHi-bLo)
}

// checkSum checks thicknesses that are all known against the size they fill.
func (c *checker) checkSum(path string, layers []schema.Layer, size float64, what string) {
	sum := 0.0
	for i := range layers {
		t, ok := c.value(index(path, i)+".thickness", layers[i].Thickness)
		if !ok {
			return
		}
		sum += t
	}
	const near = 1e-9
	if math.Abs(sum-size) > near*size {
		c.fault(path, "thicknesses that add up to "+quantity.Format(rounded15(sum), length), what+", "+quantity.Format(rounded15(size), length))
	}
}
