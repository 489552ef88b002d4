package report

import (
	"cmp"
	"math"
	"slices"
)

// outline is the lines of a level in pixels, with at most so many vertices;
// ok is false where there would be more.
func (f *frame) outline(g *field, x, y scale, level float64, most int) (lines [][]vertex, ok bool) {
	lines = g.contours(level)
	if vertices(lines) > 30*most { // simplifying saves less than that
		return nil, false
	}
	for k, line := range lines {
		for i, p := range line {
			line[i] = f.pixel(x, y, p.X, p.Y)
		}
		lines[k] = simplify(line, 0.25)
	}
	return lines, vertices(lines) <= most
}

func vertices(lines [][]vertex) int {
	n := 0
	for _, line := range lines {
		n += len(line)
	}
	return n
}

// ink is the class of a level's line, which must stand out from its colour.
func (r ramp) ink(level float64, zero bool) string {
	if zero {
		return "zero"
	}
	if c := r.Colour(r.t(level)); 299*int(c.R)+587*int(c.G)+114*int(c.B) < 128_000 {
		return "contour chalk"
	}
	return "contour ink"
}

// contour adds the lines of one level, with a label at the longest.
func (f *frame) contour(lines [][]vertex, text, class string) {
	if len(lines) == 0 {
		return
	}
	f.vertices += vertices(lines)
	data := pathData(lines, false)
	if class == "zero" {
		f.Inner.Paths = append(f.Inner.Paths, path{Data: data, Class: "zero-halo", Series: -1}, path{Data: data, Class: "zero", Series: -1})
		return
	}
	f.Inner.Paths = append(f.Inner.Paths, path{Data: data, Class: class, Series: -1})
	longest := slices.MaxFunc(lines, func(a, b []vertex) int { return cmp.Compare(length(a), length(b)) })
	f.labelLine(longest, text, class)
}

func length(line []vertex) float64 {
	sum := 0.0
	for i := 1; i < len(line); i++ {
		sum += math.Hypot(line[i].X-line[i-1].X, line[i].Y-line[i-1].Y)
	}
	return sum
}

// labelLine writes a level beside its line, as near the line's middle as
// leaves other labels and the plot's edges clear.
func (f *frame) labelLine(line []vertex, text, class string) {
	total := length(line)
	wide := 6.2*float64(len([]rune(text))) + 8
	if total < wide {
		return
	}
	for _, t := range []float64{0.5, 0.4, 0.6, 0.3, 0.7, 0.2, 0.8, 0.12, 0.88} {
		p := along(line, t*total)
		if p.X < wide/2 || p.X > f.Plot.W-wide/2 || p.Y < 10 || p.Y > f.Plot.H-6 {
			continue
		}
		n := note{X: p.X, Y: p.Y + 3.5, Class: "level " + class, Anchor: "middle", Text: text}
		if f.clear(n, wide) {
			f.Inner.Texts = append(f.Inner.Texts, n)
			return
		}
	}
}

func (f *frame) clear(n note, wide float64) bool {
	for _, o := range f.Inner.Texts {
		if math.Abs(o.X-n.X) < wide && math.Abs(o.Y-n.Y) < 15 {
			return false
		}
	}
	return true
}

// along is the point at a distance along a line.
func along(line []vertex, at float64) vertex {
	for i := 1; i < len(line); i++ {
		step := math.Hypot(line[i].X-line[i-1].X, line[i].Y-line[i-1].Y)
		if at <= step && step > 0 {
			t := at / step
			return vertex{line[i-1].X + t*(line[i].X-line[i-1].X), line[i-1].Y + t*(line[i].Y-line[i-1].Y)}
		}
		at -= step
	}
	return line[len(line)-1]
}
