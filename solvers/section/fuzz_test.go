package section

import (
	"encoding/binary"
	"errors"
	"math"
	"testing"

	"betaloom/schema"
	"betaloom/solvers"
)

// dice reads a section from bytes.
type dice struct{ data []byte }

func (d *dice) roll(n int) int {
	if len(d.data) == 0 {
		return 0
	}
	b := d.data[0]
	d.data = d.data[1:]
	return int(b) % n
}

// number is most often one of a few that make a plain section, sometimes any
// float there is.
func (d *dice) number(unit float64) float64 {
	if k := d.roll(16); k > 0 {
		return unit * (float64(d.roll(256)) - 16) / 128
	}
	if len(d.data) < 8 {
		return 0
	}
	v := math.Float64frombits(binary.LittleEndian.Uint64(d.data))
	d.data = d.data[8:]
	return v
}

func (d *dice) section() *sketch {
	s := newSketch()
	materials := []string{"oxide", "core", "nitride", "air", "metal", "jam"}
	l := s.physics.Section.Layers
	l.GroundBottom, l.GroundTop = d.roll(8) == 1, d.roll(8) == 1
	if d.roll(8) == 1 {
		w := s.length(d.number(10 * um))
		l.WallsWidth = &w
	}
	if !l.GroundBottom {
		s.layer("oxide", -1, "")
	}
	for range d.roll(4) {
		var strips []schema.Strip
		for range d.roll(4) {
			p := s.strip(d.number(2*um), d.number(1*um), 90+d.number(30), 90+d.number(30))
			p.Material, p.WidthAt = materials[d.roll(5)], []string{"top", "middle", "foot"}[d.roll(3)]
			strips = append(strips, p)
		}
		s.layer(materials[d.roll(6)], d.number(1*um), materials[d.roll(4)], strips...)
	}
	if !l.GroundTop {
		s.layer("air", -1, "")
	}
	return s
}

func (d *dice) options() Options {
	return Options{
		Bounds: Bounds{d.number(2 * um), d.number(2 * um), d.number(2 * um), d.number(2 * um)},
		Order:  d.roll(12), CornerLayers: d.roll(6), Size: d.number(1 * um), Growth: 1 + d.number(2), Ratio: d.number(0.5),
		HalfX: d.roll(4) == 1, HalfY: d.roll(4) == 1,
	}
}

// FuzzMesh holds that any section is meshed with convex cells or refused as
// bad input.
func FuzzMesh(f *testing.F) {
	for i := range 64 {
		seed := make([]byte, 120)
		for k := range seed {
			seed[k] = byte(i * (k*k + 7*k + 3) >> 1)
		}
		f.Add(seed)
	}
	f.Fuzz(func(t *testing.T, data []byte) {
		d := &dice{data}
		s := d.section()
		o, err := s.outline()
		if err != nil {
			accept(t, err)
			return
		}
		for _, options := range []Options{options(), d.options()} {
			m, err := o.Mesh(options)
			if err != nil {
				accept(t, err)
				continue
			}
			if !m.Same(m) {
				t.Fatal("not its own like")
			}
			for j := range m.OrderY {
				for i := range m.OrderX {
					quadrilateral(t, m, j, i)
				}
			}
			moving(t, m)
		}
	})
}

// moving holds that every derivative of a mesh is a finite number.
func moving(t *testing.T, m *Mesh) {
	t.Helper()
	for p := range m.DX {
		for j, rate := range m.DY[p] {
			for i, x := range append([]float64{rate}, m.DX[p][j]...) {
				if x-x != 0 {
					t.Fatalf("parameter %d moves level %d, place %d by %g", p, j, i, x)
				}
			}
		}
	}
}

func accept(t *testing.T, err error) {
	t.Helper()
	var input *solvers.InputError
	if !errors.As(err, &input) {
		t.Fatalf("%v, expected an InputError", err)
	}
}
