package channel

import (
	"context"
	"fmt"
	"math"
	"os"
	"slices"
	"strconv"
	"strings"
	"testing"

	"betaloom/schema"
	"betaloom/solvers/section"
)

// The strip 0.50 um x 0.22 um of index 3.4777 in 1.4444 at 1.55 um. The values are the converged ones of a
// separate prototype of the same equation (design of this program, 1e-12); at 67,200 unknowns this solver comes within 2e-11 of both.
const (
	stripTE = 2.447288247925
	stripTM = 1.771707850249
	stripK  = 2 * math.Pi / (1.55 * um)
)

var stripEps = [][3]complex128{isotropic(3.4777 * 3.4777), isotropic(1.4444 * 1.4444)}

// graded gives lines from 0 to end around a corner at at: n layers on both sides that shrink by 0.15,
// of inside and outside, and more from outside on.
func graded(at, inside, outside float64, far []float64, n int) []float64 {
	x := []float64{0}
	for k := 1; k <= n; k++ {
		x = append(x, at-inside*math.Pow(0.15, float64(k)))
	}
	x = append(x, at)
	for k := n; k >= 0; k-- {
		x = append(x, at+outside*math.Pow(0.15, float64(k)))
	}
	return append(x, far...)
}

// stripMesh is a quarter of the strip with layers of cells to the corner and order p away from it. The walls
// are 3 um (TM: 6 um) away: exp(-2 g d) is below 1e-15.
func stripMesh(p, layers int, tm bool) *section.Mesh {
	far := []float64{1.5 * um, 3 * um}
	if tm {
		far = []float64{1.5 * um, 3 * um, 6 * um}
	}
	xs := graded(0.25*um, 0.25*um, 0.45*um, far, layers)
	ys := graded(0.11*um, 0.11*um, 0.45*um, far, layers)
	order := func(w float64) int {
		drop := 0
		for limit := 0.08 * um; w < limit && drop < p-3; limit *= 0.15 {
			drop++
		}
		return p - drop
	}
	m := straightMesh(xs, ys, order, func(x, y float64) int {
		if x < 0.25*um && y < 0.11*um {
			return 0
		}
		return 1
	})
	if tm {
		return walls(m, section.Magnetic, section.Electric, section.Electric, section.Electric)
	}
	return walls(m, section.Electric, section.Electric, section.Magnetic, section.Electric)
}

type stripSize struct{ layers, order int }

// stripSizes are those of the table in the package comment.
func stripSizes() []stripSize {
	return []stripSize{{1, 4}, {2, 5}, {3, 6}, {3, 7}, {4, 8}, {5, 10}}
}

// TestStripTable measures the strip over a range of sizes and holds the package comment's table to the figures: the same
// unknowns, errors within a factor 1.6 (they stand with one digit).
func TestStripTable(t *testing.T) {
	doc, err := os.ReadFile("doc.go")
	if err != nil {
		t.Fatal(err)
	}
	for _, s := range stripSizes() {
		e, unknowns := s.measure(t)
		row := s.row(string(doc))
		if len(row) != 5 || row[2] != fmt.Sprint(unknowns) {
			t.Errorf("%v: the package comment has %q, measured %d unknowns, errors %.0e", s, row, unknowns, e)
			continue
		}
		for i, cell := range row[3:] {
			if v, err := strconv.ParseFloat(cell, 64); err != nil || !(e[i]/v > 1/1.6 && e[i]/v < 1.6) {
				t.Errorf("%v: the package comment has %s, measured %.1e", s, cell, e[i])
			}
		}
	}
}

// measure gives the errors of quasi-TE and quasi-TM, and the unknowns of the former.
func (s stripSize) measure(t *testing.T) (e [2]float64, unknowns int) {
	for i, want := range []float64{stripTE, stripTM} {
		p := pencil(t, stripMesh(s.order, s.layers, i == 1), stripK, stripEps...)
		pairs, count := modes(t, p, Options{Want: 1, Low: 1.4444})
		if len(pairs) != 1 || count.N < 1 || count.Proof != "inertia" {
			t.Fatalf("%v: %d modes, %v", s, len(pairs), count)
		}
		e[i] = pairs[0].index(stripK) - want
		if i == 0 {
			unknowns = p.t.Unknowns()
		}
	}
	return e, unknowns
}

// row finds the size's line of the table.
func (s stripSize) row(text string) []string {
	for line := range strings.Lines(text) {
		f := strings.Fields(strings.TrimPrefix(line, "//"))
		if len(f) == 5 && f[0] == fmt.Sprint(s.layers) && f[1] == fmt.Sprint(s.order) {
			return f
		}
	}
	return nil
}

// Started from a neighbour's vector the same mode comes out, to the residual's accuracy,
// and the same question has the same bits whatever was asked before.
func TestWarmStart(t *testing.T) {
	m := stripMesh(6, 2, false)
	top, err := New(m)
	if err != nil {
		t.Fatal(err)
	}
	ask := func(k float64, near [][]complex128) Pair {
		p, err := top.Assemble(m, k*schema.LightSpeed, media(stripEps...))
		if err != nil {
			t.Fatal(err)
		}
		pairs, _ := modes(t, p, Options{Want: 1, Low: 1.4444, Near: near})
		return pairs[0]
	}
	neighbour := ask(stripK*1.02, nil)
	cold := ask(stripK, nil)
	warm := ask(stripK, [][]complex128{neighbour.X})
	again := ask(stripK, nil)
	if d := math.Abs(warm.index(stripK) - cold.index(stripK)); d > 1e-13 {
		t.Errorf("warm and cold differ by %g", d)
	}
	if again.L != cold.L || !slices.Equal(again.X, cold.X) {
		t.Error("the same question has other bits the second time")
	}
}

// A neighbour's vectors that are no modes at all must not hide the modes.
func TestMisleadingStart(t *testing.T) {
	m := stripMesh(5, 1, false)
	p := pencil(t, m, stripK, stripEps...)
	cold, _ := modes(t, p, Options{Want: 1, Low: 1.4444})
	n := p.t.Unknowns()
	ones, zeros := make([]complex128, n), make([]complex128, n)
	for i := range ones {
		ones[i] = 1
	}
	for name, near := range map[string][][]complex128{"ones": {ones}, "zeros": {zeros}, "the same twice": {cold[0].X, cold[0].X}} {
		t.Run(name, func(t *testing.T) {
			pairs, count := modes(t, p, Options{Want: 1, Low: 1.4444, Near: near})
			if len(pairs) != 1 || count.Proof != "inertia" || math.Abs(pairs[0].index(stripK)-cold[0].index(stripK)) > 1e-12 {
				t.Errorf("%d pairs, %v", len(pairs), count)
			}
		})
	}
}

// BenchmarkStrip measures one point, count included: cold from nothing, warm with the topology and a vector at 0.2 % more
// frequency, and a single factorisation.
func BenchmarkStrip(b *testing.B) {
	for _, s := range stripSizes()[:5] {
		m := stripMesh(s.order, s.layers, false)
		top, err := New(m)
		if err != nil {
			b.Fatal(err)
		}
		point := func(top *Topology, k float64, near [][]complex128) Pair {
			p, err := top.Assemble(m, k*schema.LightSpeed, media(stripEps...))
			if err != nil {
				b.Fatal(err)
			}
			pairs, _, err := p.Modes(context.Background(), Options{Want: 1, Low: 1.4444, Near: near})
			if err != nil || len(pairs) != 1 {
				b.Fatal(len(pairs), err)
			}
			return pairs[0]
		}
		near := [][]complex128{point(top, stripK*1.002, nil).X}
		run := func(name string, do func() Pair) {
			b.Run(fmt.Sprintf("%d/%s", top.Unknowns(), name), func(b *testing.B) {
				var last Pair
				for b.Loop() {
					last = do()
				}
				b.ReportMetric(math.Abs(last.index(stripK)-stripTE)*1e9, "nano-error")
				b.ReportMetric(b.Elapsed().Seconds()*1e3/float64(b.N), "ms")
			})
		}
		run("cold", func() Pair {
			fresh, err := New(m)
			if err != nil {
				b.Fatal(err)
			}
			return point(fresh, stripK, nil)
		})
		run("warm", func() Pair { return point(top, stripK, near) })
		p, err := top.Assemble(m, stripK*schema.LightSpeed, media(stripEps...))
		if err != nil {
			b.Fatal(err)
		}
		f := newFactor(p.real)
		b.Run(fmt.Sprintf("%d/factor", top.Unknowns()), func(b *testing.B) {
			for b.Loop() {
				if err := f.fill(p.real, 5); err != nil {
					b.Fatal(err)
				}
			}
			b.ReportMetric(b.Elapsed().Seconds()*1e3/float64(b.N), "ms")
		})
	}
}
