package report

import (
	"bytes"
	"embed"
	"fmt"
	"html/template"
	"math"
	"strings"
)

// page is what the template fills in.
type page struct {
	Title      string
	Question   string
	Brief      []Fact // the answer in a few lines
	Sketch     *sketch
	Materials  []Fact
	Equation   Equation
	Parameters []parameterRow
	Keep       string
	Histogram  []bar
	Count      *figure
	Summary    []familyRow
	Columns    []string // of the summary
	Groups     []group
	Zero       *figure
	Zeros      []zeroRow
	ZeroLead   string
	ZeroHead   []string
	NoZero     string
	Remarks    []string // on what is not drawn
	Accuracy   []reachedRow
	Flags      []flagRow
	Reasons    []reasonRow
	Left       []reasonRow // no mode, or left out
	Missing    int
	Cost       []Fact
	Files      []Fact
	Links      []link
}

// group is the figures of one family, or of one quantity.
type group struct {
	Title   string
	Lead    string
	Figures []*figure
}

//go:embed page.gohtml picture.gohtml style.css
var files embed.FS

// limit is the size that a page stays below.
const limit = 8_000_000

// Render writes the page. Where it would exceed the limit the images are
// drawn more coarsely.
func Render(d *Data) ([]byte, error) {
	t, err := template.New("page.gohtml").Funcs(template.FuncMap{"count": count}).ParseFS(files, "page.gohtml", "picture.gohtml")
	if err != nil {
		return nil, err
	}
	style, err := files.ReadFile("style.css")
	if err != nil {
		return nil, err
	}
	var b bytes.Buffer
	fine := 1.5
	for range 5 {
		p, err := newPage(d, newArtist(d, fine))
		if err != nil {
			return nil, err
		}
		b.Reset()
		if err := t.Execute(&b, map[string]any{"Page": p, "Style": template.CSS(style)}); err != nil {
			return nil, err
		}
		if b.Len() < limit {
			return b.Bytes(), nil
		}
		fine *= 0.8 * math.Sqrt(float64(limit)/float64(b.Len()))
	}
	return nil, fmt.Errorf("found a page of %d bytes, expected less than %d", b.Len(), limit)
}

func newPage(d *Data, a *artist) (*page, error) {
	p := &page{Title: d.Name, Question: d.question(), Brief: d.brief(), Sketch: d.sketchOf(), Equation: d.Equation,
		Keep: d.Physics.Keep, Histogram: d.histogram(), Cost: d.Cost}
	for _, name := range d.materialNames() {
		p.Materials = append(p.Materials, Fact{name, d.material(d.Physics.Materials[name])})
	}
	for _, q := range d.Physics.Parameters {
		p.Parameters = append(p.Parameters, d.parameterRow(q))
	}
	p.results(d)
	p.troubles(d)
	for _, f := range d.Files {
		size := ""
		if f.Bytes > 0 {
			size = bytesText(f.Bytes)
		}
		p.Links = append(p.Links, link{f.Name, f.What, size})
	}
	return p, p.pictures(d, a)
}

// pictures fills in everything that is drawn.
func (p *page) pictures(d *Data, a *artist) error {
	var err error
	if p.Count, err = a.countFigure(); err != nil {
		return err
	}
	if len(d.Families) > len(a.drawn) {
		p.Remarks = append(p.Remarks, fmt.Sprintf("Pictures show the %d families of highest effective index; %s more are in modes.parquet only.",
			len(a.drawn), count(len(d.Families)-len(a.drawn))))
	}
	p.Remarks = append(p.Remarks, d.View.remarks(a)...)
	switch v := d.View; {
	case !v.IsBox():
		p.Groups = a.scatterGroups()
		return nil
	case v.X < 0:
		return nil
	case v.Y < 0:
		return p.lineGroups(d, a)
	}
	return p.mapGroups(d, a)
}

func (p *page) lineGroups(d *Data, a *artist) error {
	if len(a.drawn) == 0 {
		return nil
	}
	g := group{Title: "Over " + d.View.Axes[d.View.X].Parameter}
	for q := range quantities {
		g.Figures = append(g.Figures, a.lineFigure(q))
	}
	if len(a.drawn) > 1 && len(d.View.Panels) == 1 {
		g.Figures = append(g.Figures, a.ownScaleFigure())
	}
	p.Groups = append(p.Groups, g)
	p.zeroTable(d, a)
	return nil
}

func (p *page) mapGroups(d *Data, a *artist) error {
	for _, fam := range a.drawn {
		g := group{Title: fam.Name}
		if fam.Type != "" && !strings.HasPrefix(fam.Name, fam.Type) {
			g.Lead = "A " + fam.Type + " mode."
		}
		for q := range quantities {
			f, err := a.mapFigure(fam, q)
			if err != nil {
				return err
			}
			g.Figures = append(g.Figures, f)
		}
		p.Groups = append(p.Groups, g)
	}
	if len(a.drawn) > 0 {
		p.Zero = a.zeroFigure()
	}
	p.zeroTable(d, a)
	return nil
}

// remarks say what the pictures leave out.
func (v *View) remarks(a *artist) []string {
	var out []string
	if v.IsBox() && v.Thinned() {
		for _, side := range []struct{ axis, n int }{{v.X, len(v.Xs)}, {v.Y, len(v.Ys)}} {
			if side.axis >= 0 && side.n < len(v.Axes[side.axis].Values) {
				out = append(out, fmt.Sprintf("Pictures use %s of the %s values along %s, evenly spread; tables and counts on this page use all.",
					count(side.n), count(len(v.Axes[side.axis].Values)), v.Axes[side.axis].Parameter))
			}
		}
	}
	for f, axis := range v.Further {
		if n := v.length(f); n > 3 {
			out = append(out, fmt.Sprintf("Of the %s values of %s the first, the middle and the last have panels.", count(n), v.Axes[axis].Parameter))
		}
	}
	if len(v.Further) > 2 {
		out = append(out, "Each row of panels moves one further parameter and holds the others at their middle.")
	}
	return out
}
