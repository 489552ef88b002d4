package fieldmap

import (
	"bytes"
	"encoding/csv"
	"encoding/xml"
	"errors"
	"image/color"
	"image/png"
	"io"
	"math"
	"slices"
	"strconv"
	"strings"
	"testing"

	"betaloom/scheduler/palette"
	"betaloom/solvers"
)

const um = 1e-6

// bump is a field whose Ex is a bell about x = 0.5 um, y = 0.25 um, with Hy and Ez that go with it, and a wall at x = 0.25 um.
func bump() *solvers.Field {
	w := solvers.Window{Left: -1 * um, Right: 1 * um, Bottom: -0.5 * um, Top: 0.5 * um}
	f := solvers.NewField(&solvers.FieldOptions{Points: 241}, w)
	left, right := f.MaterialIndex("gel", false), f.MaterialIndex("film", false)
	for j, y := range f.Y {
		for i, x := range f.X {
			at := j*len(f.X) + i
			v := 4e7 * math.Exp(-(math.Pow(x/um-0.5, 2)+math.Pow(y/um-0.25, 2))/0.02)
			f.E[0][at], f.E[2][at], f.H[1][at] = complex(v, 0), complex(0, -v/2), complex(v/200, 0)
			if f.Material[at] = left; x > 0.25*um {
				f.Material[at] = right
			}
		}
	}
	f.AddEdge(solvers.Edge{X: [2]float64{0.25 * um, 0.25 * um}, Y: [2]float64{-1, 1}}, w)
	return f
}

// film is a field that varies along y alone.
func film() *solvers.Field {
	w := solvers.Window{Bottom: -0.5 * um, Top: 0.5 * um}
	f := solvers.NewField(&solvers.FieldOptions{Points: 81}, w)
	f.MaterialIndex("gel", false)
	f.MaterialIndex("film", false)
	for j, y := range f.Y {
		f.E[0][j] = complex(3e4*math.Exp(-math.Pow(y/um, 2)/0.04), 0)
		if y > 0 {
			f.Material[j] = 1
		}
	}
	f.AddEdge(solvers.Edge{}, w)
	return f
}

// TestQuantities holds what is drawn to its definition, at the place where the bell is 4e7 V/m: |E| = sqrt(1 + 1/4) of that, S = Ex Hy*/2.
func TestQuantities(t *testing.T) {
	f := bump()
	at := 90*len(f.X) + 180 // x = 0.5 um, y = 0.25 um
	for name, want := range map[string]float64{
		"e": 4e7 * math.Sqrt(1.25), "ex": 4e7, "ey": 0, "ez": -2e7, "h": 2e5, "hx": 0, "hy": 2e5, "hz": 0, "s": 4e12,
	} {
		t.Run(name, func(t *testing.T) {
			q := quantityOf(f, name)
			if got := q.values[at]; math.Abs(got-want) > 1e-9*math.Abs(want) {
				t.Errorf("found %g, expected %g", got, want)
			}
			if q.signed != (len(name) == 2) {
				t.Errorf("signed: %v", q.signed)
			}
		})
	}
	if n := len(Quantities()); n != 9 {
		t.Errorf("%d quantities, expected 9", n)
	}
}

func drawn(t *testing.T, f *solvers.Field, o Options) []byte {
	t.Helper()
	var b bytes.Buffer
	if err := Draw(&b, f, o); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

// texts are those of an SVG, which must be well-formed XML.
func texts(t *testing.T, svg []byte) (list []string) {
	t.Helper()
	d, inside := xml.NewDecoder(bytes.NewReader(svg)), false
	for {
		token, err := d.Token()
		if errors.Is(err, io.EOF) {
			return list
		}
		if err != nil {
			t.Fatal(err)
		}
		switch v := token.(type) {
		case xml.StartElement:
			inside = v.Name.Local == "text"
		case xml.CharData:
			if s := strings.TrimSpace(string(v)); inside && s != "" {
				list = append(list, s)
			}
		case xml.EndElement:
			inside = false
		}
	}
}

func TestTexts(t *testing.T) {
	for _, c := range []struct {
		name string
		f    *solvers.Field
		of   string
		want []string
	}{
		{"map", bump(), "", []string{"A title", "first, second", "x (µm)", "y (µm)", "−0.5", "0.5", "|E| (MV/m at 1 W)"}},
		{"component", bump(), "ez", []string{"Im Ez (MV/m at 1 W)", "−20", "20"}},
		{"curve", film(), "ex", []string{"A title", "y (µm)", "Re Ex (kV/m at 1 W per metre of width)", "gel", "film", "−20", "0", "20"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			got := texts(t, drawn(t, c.f, Options{Of: c.of, Format: "svg", Title: "A title", Notes: "first, second"}))
			for _, w := range c.want {
				if !slices.Contains(got, w) {
					t.Errorf("no text %q among %q", w, got)
				}
			}
		})
	}
}

// TestColoursStandAtTheirPlace looks for the darkest dot of a map: it stands where the bell has its top, three quarters of the way
// to the right and up, to a dot or two. There the colour is the darkest of the scale.
func TestColoursStandAtTheirPlace(t *testing.T) {
	f := bump()
	q := quantityOf(f, "ex")
	q.signed = false
	img := newMap(f, &q).image(400, 200)
	best, bx, by := uint32(math.MaxUint32), 0, 0
	for y := range 200 {
		for x := range 400 {
			r, g, b, _ := img.At(x, y).RGBA()
			if sum := r + g + b; sum < best {
				best, bx, by = sum, x, y
			}
		}
	}
	if math.Abs(float64(bx)-300) > 10 || math.Abs(float64(by)-50) > 10 {
		t.Errorf("the darkest dot is at %d, %d, expected 300, 50", bx, by)
	}
	for _, c := range []struct {
		x, y int
		want color.RGBA
	}{{300, 49, palette.Fading(1)}, {2, 197, palette.Fading(0)}} {
		got, ok := img.At(c.x, c.y).(color.RGBA)
		if !ok || apart(got.R, c.want.R)+apart(got.G, c.want.G)+apart(got.B, c.want.B) > 9 {
			t.Errorf("colour %v at %d, %d, expected %v within a shade or two", got, c.x, c.y, c.want)
		}
	}
}

func apart(a, b uint8) int { return max(int(a), int(b)) - min(int(a), int(b)) }

// TestScaleIsEqual: x and y have one scale, so a window twice as wide as high has such a picture. The frame's corners are read from the image's size in
// the SVG, whose lengths have five digits.
func TestScaleIsEqual(t *testing.T) {
	d := xml.NewDecoder(bytes.NewReader(drawn(t, bump(), Options{Format: "svg"})))
	for {
		token, err := d.Token()
		if err != nil {
			t.Fatal("no image: ", err)
		}
		e, ok := token.(xml.StartElement)
		if !ok || e.Name.Local != "image" {
			continue
		}
		size := map[string]float64{}
		for _, a := range e.Attr {
			if v, err := strconv.ParseFloat(a.Value, 64); err == nil {
				size[a.Name.Local] = v
			}
		}
		if ratio := size["width"] / size["height"]; math.Abs(ratio-2) > 1e-3 || !(size["width"] > 200) {
			t.Errorf("the map is %g by %g points, expected 2 to 1", size["width"], size["height"])
		}
		return
	}
}

// TestSpikeAndMetal: a corner's spike at one place neither stretches the colours nor goes unsaid, and metal is grey.
func TestSpikeAndMetal(t *testing.T) {
	f := bump()
	f.E[0][0] = 8e7
	f.Metal[1] = true
	if got := texts(t, drawn(t, f, Options{Of: "ex", Format: "svg"})); !slices.Contains(got, "Re Ex (MV/m at 1 W), largest 80 beyond the scale") || !slices.Contains(got, "20") || slices.Contains(got, "50") {
		t.Errorf("found %q", got)
	}
	q := quantityOf(f, "ex")
	img := newMap(f, &q).image(400, 200)
	if got := img.At(300, 49); got != metalColour {
		t.Errorf("colour %v in metal, expected %v", got, metalColour)
	}
	if got := img.At(100, 49); got == metalColour {
		t.Errorf("the colour of metal %v outside it", got)
	}
}

func TestPNG(t *testing.T) {
	for name, f := range map[string]*solvers.Field{"map": bump(), "curve": film()} {
		t.Run(name, func(t *testing.T) {
			out := drawn(t, f, Options{Format: "png", Title: "A title", Notes: strings.Repeat("a long note, ", 30)})
			img, err := png.Decode(bytes.NewReader(out))
			if err != nil {
				t.Fatal(err)
			}
			if s := img.Bounds().Size(); s.X < 1200 || s.X > 2400 || s.Y < 800 || s.Y > 2400 {
				t.Errorf("%d by %d dots, expected 4 to 8 inches of 300 across", s.X, s.Y)
			}
			if !bytes.Equal(out, drawn(t, f, Options{Format: "png", Title: "A title", Notes: strings.Repeat("a long note, ", 30)})) {
				t.Error("the same field gave other bytes")
			}
		})
	}
}

func TestNoField(t *testing.T) {
	f := solvers.NewField(&solvers.FieldOptions{Points: 5}, solvers.Window{Right: um, Top: um})
	f.MaterialIndex("gel", false)
	for _, of := range Quantities() {
		drawn(t, f, Options{Of: of, Format: "svg"})
	}
}

func TestTable(t *testing.T) {
	f := bump()
	var b bytes.Buffer
	if err := WriteTable(&b, f); err != nil {
		t.Fatal(err)
	}
	rows, err := csv.NewReader(&b).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	if n := 1 + len(f.X)*len(f.Y); len(rows) != n || len(rows[0]) != 15 {
		t.Fatalf("%d rows of %d, expected %d of 15", len(rows), len(rows[0]), n)
	}
	column := func(name string) int {
		i := slices.Index(rows[0], name)
		if i < 0 {
			t.Fatalf("no column %s in %v", name, rows[0])
		}
		return i
	}
	at := 90*len(f.X) + 180
	for name, want := range map[string]float64{
		"x_m": f.X[180], "y_m": f.Y[90], "ex_re_v_per_m": real(f.E[0][at]), "ez_im_v_per_m": imag(f.E[2][at]), "hy_re_a_per_m": real(f.H[1][at]), "hz_im_a_per_m": 0,
	} {
		if got, err := strconv.ParseFloat(rows[1+at][column(name)], 64); err != nil || got != want {
			t.Errorf("%s: found %v (%v), expected %v", name, got, err, want)
		}
	}
	if a, b := rows[1][column("material")], rows[1+at][column("material")]; a != "gel" || b != "film" {
		t.Errorf("materials %s and %s, expected gel and film", a, b)
	}
}

func TestTicks(t *testing.T) {
	for _, c := range []struct {
		low, high float64
		want      string
	}{
		{0, 63, "0 10 20 30 40 50 60"},
		{-0.75, 0.75, "−0.5 0.0 0.5"},
		{-25, 25, "−20 −10 0 10 20"},
		{0, 1, "0.0 0.2 0.4 0.6 0.8 1.0"},
		{0.001, 0.0042, "0.0010 0.0015 0.0020 0.0025 0.0030 0.0035 0.0040"},
	} {
		var got []string
		for _, tick := range (ticks{}).Ticks(c.low, c.high) {
			if tick.Label != "" {
				got = append(got, tick.Label)
			}
			if tick.Value < c.low-1e-9 || tick.Value > c.high+1e-9 {
				t.Errorf("%g is outside %g to %g", tick.Value, c.low, c.high)
			}
		}
		if s := strings.Join(got, " "); s != c.want {
			t.Errorf("%g to %g: found %s, expected %s", c.low, c.high, s, c.want)
		}
	}
}

func TestRefusals(t *testing.T) {
	for name, o := range map[string]Options{"quantity": {Of: "phase", Format: "svg"}, "format": {Format: "gif"}} {
		t.Run(name, func(t *testing.T) {
			var input *solvers.InputError
			if err := Draw(io.Discard, bump(), o); !errors.As(err, &input) {
				t.Errorf("found %v, expected an input error", err)
			}
		})
	}
}
