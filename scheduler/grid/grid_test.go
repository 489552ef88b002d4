package grid

import (
	"math"
	"slices"
	"strings"
	"testing"

	"betaloom/schema"
)

func axis(name string, n int) schema.AxisBlock {
	a := schema.AxisBlock{Parameter: name}
	for i := range n {
		a.Values = append(a.Values, 1+float64(i))
	}
	return a
}

func box(t *testing.T, axes ...schema.AxisBlock) *Grid {
	t.Helper()
	return boxOf(t, schema.Physics{Format: schema.FormatPhysics}, axes...)
}

// withStrips is a physics whose points take long.
func withStrips() schema.Physics {
	return schema.Physics{Format: schema.FormatPhysics, Section: schema.Section{Layers: &schema.Layers{
		Layers: []schema.Layer{{Material: "glass"}, {Material: "core", Fill: "glass", Strips: []schema.Strip{{}}}, {Material: "glass"}},
	}}}
}

// most is the most points that a tile of the grid of this name may hold: with strips, so few that a sweep of some
// hundred points occupies several workers.
func most(name string) int {
	if strings.HasPrefix(name, "strips") {
		return 64
	}
	return 4096
}

func boxOf(t *testing.T, p schema.Physics, axes ...schema.AxisBlock) *Grid {
	t.Helper()
	g, err := New(p, axes, nil, nil)
	if err != nil {
		t.Fatal(err)
	}
	return g
}

func grids(t *testing.T) map[string]*Grid {
	t.Helper()
	rows := make([][]float64, 10_000)
	for i := range rows {
		rows[i] = []float64{float64(i), 1, 2, 3, 4}
	}
	list, err := New(schema.Physics{}, nil, []string{"a", "b", "c", "d", "e"}, rows)
	if err != nil {
		t.Fatal(err)
	}
	strips := func(axes ...schema.AxisBlock) *Grid { return boxOf(t, withStrips(), axes...) }
	stripRows, err := New(withStrips(), nil, []string{"a", "b", "c", "d", "e"}, rows)
	if err != nil {
		t.Fatal(err)
	}
	return map[string]*Grid{
		"strips, one axis":    strips(axis("a", 901)),
		"strips, short axes":  strips(axis("a", 3), axis("b", 8)),
		"strips, three axes":  strips(axis("a", 3), axis("b", 9), axis("c", 21)),
		"strips, long beside": strips(axis("a", 13), axis("b", 3), axis("c", 17), axis("d", 8)),
		"strips, seven axes":  strips(axis("a", 9), axis("b", 9), axis("c", 2), axis("d", 9), axis("e", 1), axis("f", 9), axis("g", 9)),
		"strips, rows":        stripRows,

		"one point":  box(t),
		"one axis":   box(t, axis("a", 9001)),
		"short axis": box(t, axis("a", 3)),
		"two axes":   box(t, axis("a", 130), axis("b", 71)),
		"three axes": box(t, axis("a", 33), axis("b", 3), axis("c", 40)),
		"five axes":  box(t, axis("a", 5), axis("b", 7), axis("c", 9), axis("d", 11), axis("e", 2)),
		"many short": box(t, axis("a", 2), axis("b", 3), axis("c", 8), axis("d", 8), axis("e", 8), axis("f", 5)),
		"rows":       list,
	}
}

// TestTilesCoverThePoints checks that every point of the grid lies in one
// tile, once, with the values that its number says.
func TestTilesCoverThePoints(t *testing.T) {
	for name, g := range grids(t) {
		t.Run(name, func(t *testing.T) {
			seen := make([]bool, g.Points())
			var values []float64
			for i := range g.Tiles() {
				tile, block := g.Tile(i), g.Block(i)
				if n := tile.Points(); n < 1 || n > most(name) {
					t.Fatalf("tile %d holds %d points", i, n)
				}
				for local := range tile.Points() {
					p := g.Point(block, local)
					if seen[p] {
						t.Fatalf("point %d lies in two tiles", p)
					}
					seen[p] = true
					values = tile.Values(local, values)
					if want := valuesOf(g, p); !slices.Equal(values, want) {
						t.Fatalf("point %d: values %v, expected %v", p, values, want)
					}
				}
			}
			if i := slices.Index(seen, false); i >= 0 {
				t.Fatalf("point %d lies in no tile", i)
			}
		})
	}
}

// valuesOf counts through the axes like an odometer.
func valuesOf(g *Grid, point int) []float64 {
	if !g.IsBox() {
		return g.rows[point]
	}
	v := make([]float64, len(g.axes))
	for a := len(g.axes) - 1; a >= 0; a-- {
		n := len(g.axes[a].Values)
		v[a] = g.axes[a].Values[point%n]
		point /= n
	}
	return v
}

// TestBandsFollowThePoints checks that bands are consecutive runs of points
// and of tiles and that the tiles of a band hold just its points.
func TestBandsFollowThePoints(t *testing.T) {
	for name, g := range grids(t) {
		t.Run(name, func(t *testing.T) {
			point, tile := 0, 0
			for _, b := range g.Bands() {
				if b.First != point || b.Tile != tile {
					t.Fatalf("band starts at point %d, tile %d; expected %d, %d", b.First, b.Tile, point, tile)
				}
				held := 0
				for i := b.Tile; i < b.Tile+b.Tiles; i++ {
					block, n := g.Block(i), g.Tile(i).Points()
					held += n
					for local := range n {
						if p := g.Point(block, local); p < b.First || p >= b.First+b.Points {
							t.Fatalf("point %d lies outside its band", p)
						}
					}
				}
				if held != b.Points {
					t.Fatalf("band of %d points, its tiles hold %d", b.Points, held)
				}
				point, tile = point+b.Points, tile+b.Tiles
			}
			if point != g.Points() || tile != g.Tiles() {
				t.Fatalf("bands end at point %d, tile %d; expected %d, %d", point, tile, g.Points(), g.Tiles())
			}
		})
	}
}

// TestGrownBoxKeepsTiles checks that a box which grows at the end of an axis
// keeps the names of all tiles but those at the old end.
func TestGrownBoxKeepsTiles(t *testing.T) {
	for name, c := range map[string]struct {
		physics             schema.Physics
		before, beside, now int
	}{
		"twice":                          {schema.Physics{}, 100, 50, 200},
		"beside a short axis":            {schema.Physics{}, 2100, 3, 5000},
		"from one tile's share":          {schema.Physics{}, 130, 9, 131},
		"with strips":                    {withStrips(), 19, 9, 33},
		"with strips, by one":            {withStrips(), 21, 21, 22},
		"with strips, beside short axis": {withStrips(), 21, 8, 40},
	} {
		t.Run(name, func(t *testing.T) {
			small := boxOf(t, c.physics, axis("a", c.before), axis("b", c.beside))
			grown := boxOf(t, c.physics, axis("a", c.now), axis("b", c.beside))
			names := map[string]bool{}
			for i := range grown.Tiles() {
				names[nameOf(t, grown.Tile(i))] = true
			}
			kept := 0
			for i := range small.Tiles() {
				has := names[nameOf(t, small.Tile(i))]
				if b := small.Block(i); b.N[0] == small.edges[0] && !has {
					t.Errorf("full tile %d changed its name", i)
				}
				if has {
					kept++
				}
			}
			if kept == 0 {
				t.Fatal("no tile was kept")
			}
		})
	}
}

// TestTileSizes holds blocks to the rule that the package states.
func TestTileSizes(t *testing.T) {
	for _, c := range []struct {
		name    string
		physics schema.Physics
		lengths []int
		want    []int
	}{
		{"films: short axes whole, the others alike", schema.Physics{}, []int{101, 71, 3}, []int{32, 32, 3}},
		{"strips: one axis", withStrips(), []int{201}, []int{64}},
		{"strips: two axes", withStrips(), []int{61, 81}, []int{8, 8}},
		{"strips: beside a short axis", withStrips(), []int{3, 9, 21}, []int{3, 4, 4}},
		{"strips: the last takes two where not all can", withStrips(), []int{9, 21, 3, 8}, []int{1, 2, 3, 8}},
		{"strips: two more than fit", withStrips(), []int{9, 9, 9, 9, 9, 9, 9, 9}, []int{1, 1, 2, 2, 2, 2, 2, 2}},
		{"strips: a short axis that does not fit", withStrips(), []int{5, 8, 8}, []int{1, 8, 8}},
	} {
		t.Run(c.name, func(t *testing.T) {
			var axes []schema.AxisBlock
			for i, n := range c.lengths {
				axes = append(axes, axis(string(rune('a'+i)), n))
			}
			if g := boxOf(t, c.physics, axes...); !slices.Equal(g.edges, c.want) {
				t.Errorf("blocks of %v, expected %v", g.edges, c.want)
			}
		})
	}
}

func nameOf(t *testing.T, tile *schema.Tile) string {
	t.Helper()
	name, err := tile.Name()
	if err != nil {
		t.Fatal(err)
	}
	return name
}

func TestTooManyPoints(t *testing.T) {
	long := axis("a", 40_000)
	if _, err := New(schema.Physics{}, []schema.AxisBlock{long, long}, nil, nil); err == nil {
		t.Fatal("1.6e9 points were accepted")
	}
}

// TestFrequencyRange takes both ends from the definition of the vacuum
// wavelength, f = c/L with c exact in the SI.
func TestFrequencyRange(t *testing.T) {
	g := box(t, schema.AxisBlock{Parameter: schema.Wavelength, Values: []float64{1.3e-6, 1.7e-6, 1.5e-6}})
	lo, hi := g.FrequencyRange()
	if want := 2 * math.Pi * 299792458 / 1.7e-6; math.Abs(lo/want-1) > 1e-15 {
		t.Errorf("lowest %g, expected %g", lo, want)
	}
	if want := 2 * math.Pi * 299792458 / 1.3e-6; math.Abs(hi/want-1) > 1e-15 {
		t.Errorf("highest %g, expected %g", hi, want)
	}
}
