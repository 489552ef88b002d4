package report

import (
	"bytes"
	"math"
	"strings"
	"testing"

	"golang.org/x/net/html"

	"betaloom/schema"
)

// parse reads a page with an HTML parser of its own.
func parse(t *testing.T, page []byte) *html.Node {
	t.Helper()
	n, err := html.Parse(bytes.NewReader(page))
	if err != nil {
		t.Fatal(err)
	}
	return n
}

// elements gives all elements of a name, below any of the nodes.
func elements(n *html.Node, name string) []*html.Node {
	var out []*html.Node
	for d := range n.Descendants() {
		if d.Type == html.ElementNode && d.Data == name {
			out = append(out, d)
		}
	}
	return out
}

func attribute(n *html.Node, key string) string {
	for _, a := range n.Attr {
		if a.Key == key {
			return a.Val
		}
	}
	return ""
}

func text(n *html.Node) string {
	var b strings.Builder
	for d := range n.Descendants() {
		if d.Type == html.TextNode && d.Parent.Data != "style" {
			b.WriteString(d.Data + " ")
		}
	}
	return strings.Join(strings.Fields(strings.ReplaceAll(b.String(), "\u00a0", " ")), " ")
}

func textOf(t *testing.T, page []byte) string { return text(parse(t, page)) }

func render(t *testing.T, d *Data) []byte {
	t.Helper()
	b, err := Render(d)
	if err != nil {
		t.Fatal(err)
	}
	return b
}

// described gives the labels of all pictures that begin with a text.
func described(n *html.Node, prefix string) []string {
	var out []string
	for _, svg := range elements(n, "svg") {
		if l := attribute(svg, "aria-label"); strings.HasPrefix(l, prefix) {
			out = append(out, l)
		}
	}
	return out
}

func TestPictures(t *testing.T) {
	for _, c := range []struct {
		name                     string
		axes                     []schema.AxisBlock
		maps, lines, zero, count int // pictures: 3 quantities, 2 families
	}{
		{"no axis", nil, 0, 0, 0, 0},
		{"axes of one value", []schema.AxisBlock{wavelengths(1), heights(1)}, 0, 0, 0, 0},
		{"one axis", []schema.AxisBlock{wavelengths(41)}, 0, 5, 0, 1}, // the dispersion of each family once more
		{"two axes", []schema.AxisBlock{wavelengths(21), heights(21)}, 6, 0, 1, 1},
		{"two axes, one short", []schema.AxisBlock{shifts(3), wavelengths(21)}, 0, 9, 0, 3},
		{"three axes", []schema.AxisBlock{wavelengths(21), heights(21), shifts(3)}, 18, 0, 3, 3},
		{"four axes", []schema.AxisBlock{wavelengths(11), heights(11), shifts(4), temperatures(2)}, 36, 0, 6, 6},
	} {
		t.Run(c.name, func(t *testing.T) {
			page := render(t, synthetic(c.axes, 2))
			n := parse(t, page)
			for prefix, want := range map[string]int{"map of the effective": c.maps / 3, "map of the group index": c.maps / 3, "map of the group-velocity": c.maps / 3,
				"lines of the": c.lines, "lines of zero dispersion": c.zero, "colour bar": c.maps / max(1, c.count)} {
				if got := described(n, prefix); len(got) != want {
					t.Errorf("%d pictures %q, expected %d: %q", len(got), prefix, want, got)
				}
			}
			if got := len(described(n, "map of the number")) + len(described(n, "steps of the number")); got != c.count {
				t.Errorf("%d pictures of the count, expected %d", got, c.count)
			}
			for _, f := range elements(n, "figcaption") {
				if !strings.Contains(text(f), ".") {
					t.Errorf("caption %q is no sentence", text(f))
				}
			}
			checkWhole(t, page)
		})
	}
}

// checkWhole holds for every page: it asks for nothing outside itself and
// has no number that is none.
func checkWhole(t *testing.T, page []byte) {
	t.Helper()
	n := parse(t, page)
	for d := range n.Descendants() {
		if d.Type != html.ElementNode {
			continue
		}
		switch d.Data {
		case "script", "link", "iframe", "object", "img", "base", "form":
			t.Errorf("element %s in the page", d.Data)
		}
		for _, a := range d.Attr {
			if strings.HasPrefix(a.Key, "on") {
				t.Errorf("attribute %s in the page", a.Key)
			}
			if a.Key == "href" && strings.Contains(a.Val, ":") && !strings.HasPrefix(a.Val, "data:image/png;base64,") {
				t.Errorf("link to %.60s", a.Val)
			}
			if a.Key != "aria-label" && a.Key != "href" && (strings.Contains(a.Val, "NaN") || strings.Contains(a.Val, "Inf")) {
				t.Errorf("attribute %s of %s is %.80q", a.Key, d.Data, a.Val)
			}
		}
	}
	for _, bad := range []string{"ZgotmplZ", "%!"} {
		if bytes.Contains(page, []byte(bad)) {
			t.Errorf("the page holds %q", bad)
		}
	}
	if s := text(n); strings.Contains(s, "NaN") || strings.Contains(s, "+Inf") {
		t.Error("a number on the page is none")
	}
	if len(page) >= limit {
		t.Errorf("the page has %d bytes, expected less than %d", len(page), limit)
	}
}

func TestPointsFile(t *testing.T) {
	rows := make([][]float64, 500)
	for i := range rows {
		rows[i] = []float64{1.5e-6 + 1e-9*float64(i%100), 0.6e-6 + 0.5e-9*float64(i), 0.002}
	}
	p := film([]schema.AxisBlock{wavelengths(2), heights(2), shifts(2)})
	q := question{Physics: p, Columns: []string{"wavelength", "height", "index_shift"}, Rows: rows}
	dir := writeFolder(t, someRecord(), q, func(point int) answer {
		neff, ng, gvd := smooth(0, map[string]float64{"wavelength": rows[point][0], "height": rows[point][1], "index_shift": rows[point][2]})
		return answer{guided: 1, state: "solved", modes: []row{{"TE0", "TE", "", map[string]float64{"neff": neff, "ng": ng, "gvd_ps2_per_km": gvd, "neff_err": 1e-9}}}}
	})
	d, err := Load(t.Context(), dir)
	if err != nil {
		t.Fatal(err)
	}
	page := render(t, d)
	checkWhole(t, page)
	n := parse(t, page)
	if got := described(n, "dots of the"); len(got) != 6 {
		t.Errorf("pictures %q, expected 3 quantities over the 2 columns that vary", got)
	}
	var dots int
	for _, p := range elements(n, "path") {
		if strings.HasPrefix(attribute(p, "class"), "dots s0") && !strings.Contains(attribute(p, "d"), "h0") {
			dots = strings.Count(attribute(p, "d"), "M")
		}
	}
	if dots != len(rows) {
		t.Errorf("%d dots in a picture, expected %d", dots, len(rows))
	}
	if s := text(n); !strings.Contains(s, "500 without a bound") || !strings.Contains(s, "from the points file") {
		t.Error("the page does not say that bounds are missing, or where its points are from")
	}
}

func TestNoModes(t *testing.T) {
	axes := []schema.AxisBlock{wavelengths(11), heights(11)}
	d := synthetic(axes, 0)
	d.Reasons = []Reason{{State: "no-mode", Text: "no core beats its surroundings", N: 121, First: []int{0, 1, 2}}}
	page := render(t, d)
	checkWhole(t, page)
	s := textOf(t, page)
	for _, want := range []string{"No mode was found at any point", "no core beats its surroundings", "121, all without a guided mode"} {
		if !strings.Contains(s, want) {
			t.Errorf("the page does not say %q", want)
		}
	}
}

func TestPartOfARun(t *testing.T) {
	d := synthetic([]schema.AxisBlock{wavelengths(11)}, 1)
	d.States["solved"] -= 4
	if s := textOf(t, render(t, d)); !strings.Contains(s, "4 points are not in the tables yet") {
		t.Error("the page does not say that points are missing")
	}
}

func TestHostileTexts(t *testing.T) {
	evil := `</style></title><script>alert(1)</script><img src=x onerror="alert(2)">"'{{.}}` + "\x00\u202e" + strings.Repeat("long", 2000)
	d := synthetic([]schema.AxisBlock{wavelengths(11), heights(7), shifts(2)}, 2)
	d.Name = evil
	d.Physics.Keep = evil
	d.Physics.Materials = map[string]schema.Material{evil: {Named: evil}}
	d.Physics.Section.Layers.Layers[0].Material, d.Physics.Section.Layers.Layers[2].Name = evil, evil
	d.Physics.Parameters[4].Expr = evil
	d.Physics.Parameters[1].Name, d.Axes[1].Parameter = evil, evil
	d.Equation = Equation{evil, []string{evil}}
	d.Reasons = []Reason{{State: "failed", Text: evil, N: 1}, {State: evil, Text: evil, N: 1, First: []int{0}}}
	d.Flags = []Tally{{evil, 1}}
	d.Families[0].Name, d.Families[1].Type = evil, evil
	d.Zeros[0].Family = evil
	d.Cost, d.Files = []Fact{{evil, evil}}, []File{{Name: evil, What: evil}}
	page := render(t, d)
	checkWhole(t, page)
	n := parse(t, page)
	if got := len(elements(n, "title")); got != 1 {
		t.Errorf("%d titles", got)
	}
	if got := text(elements(n, "h1")[0]); !strings.Contains(got, "<script>alert(1)</script>") {
		t.Errorf("the name is shown as %.80q", got)
	}
}

func TestStrangeValues(t *testing.T) {
	for name, change := range map[string]func(v float64, i int) float64{
		"infinite":  func(v float64, i int) float64 { return math.Inf(1 - 2*(i%2)) },
		"constant":  func(v float64, i int) float64 { return 1.5 },
		"zero":      func(v float64, i int) float64 { return 0 },
		"huge":      func(v float64, i int) float64 { return v * 1e300 },
		"tiny":      func(v float64, i int) float64 { return v * 1e-300 },
		"one value": func(v float64, i int) float64 { return map[bool]float64{true: v, false: math.NaN()}[i == 5] },
		"a spike":   func(v float64, i int) float64 { return v + 1e12*float64(1-min(i%97, 1)) },
	} {
		for kind, axes := range map[string][]schema.AxisBlock{"lines": {wavelengths(31)}, "maps": {wavelengths(31), heights(31)}} {
			t.Run(name+" "+kind, func(t *testing.T) {
				d := synthetic(axes, 1)
				for q := range quantities {
					for i, v := range d.Families[0].Values[q] {
						d.Families[0].Values[q][i] = change(v, i)
					}
					d.Families[0].Range[q] = spanOf(d.Families[0].Values[q])
				}
				d.Zeros = nil
				if err := d.findZeros(d.exactZeros); err != nil {
					t.Fatal(err)
				}
				checkWhole(t, render(t, d))
			})
		}
	}
}

// noise makes values that neither compress nor have short contours.
func noise(d *Data) {
	x := uint64(1)
	for _, f := range d.Families {
		for q := range quantities {
			for i := range f.Values[q] {
				x = x*6364136223846793005 + 1442695040888963407
				f.Values[q][i] = float64(x>>40) - 1<<23
			}
		}
	}
}

func TestSizeOfTheWorst(t *testing.T) {
	for name, axes := range map[string][]schema.AxisBlock{
		"maps":           {wavelengths(261), heights(201)},
		"panels of maps": {wavelengths(101), heights(77), shifts(3), temperatures(3)},
		"lines":          {wavelengths(1000), shifts(3), temperatures(3)},
	} {
		t.Run(name, func(t *testing.T) {
			d := synthetic(axes, 12)
			noise(d)
			page := render(t, d)
			if len(page) >= limit {
				t.Errorf("%d bytes, expected less than %d", len(page), limit)
			}
			if s := text(parse(t, page)); !strings.Contains(s, "4 more are in modes.parquet only") || !strings.Contains(s, "Pictures use") {
				t.Error("the page does not say what it leaves out")
			}
		})
	}
}
