package surface

import (
	"math"
	"path/filepath"
	"strconv"
	"testing"

	"github.com/apache/arrow/go/v17/arrow"

	"betaloom/schema"
	"betaloom/schema/column"
)

// The exact surface of these tests is the symmetric slab's, TE, in closed form:
// with b = sin^2 theta the normalised characteristic equation (Kogelnik and
// Ramaswamy, Appl. Opt. 13, 1857 (1974)) reads
//
//	V = k d NA = (m pi + 2 theta)/cos theta,  n^2 = n2^2 + NA^2 sin^2 theta,
//
// and all derivatives follow from those of an inverse function.

const (
	filmIndex = 1.996
	cladIndex = 1.444
)

// slabPoint is where the slab is evaluated: rad/s, m, index shift of the film.
type slabPoint struct{ w, d, shift float64 }

// slabValues is the exact answer in the units of the columns.
type slabValues struct {
	neff, ng, gvd, beta3 float64
	dneffD, dneffS       float64
	dngD, dngS           float64
	guided               bool
}

// theta inverts V(theta) by Newton's method.
func theta(m int, v float64) float64 {
	lo, hi := 0.0, math.Pi/2
	x := math.Pi / 4
	for range 200 {
		u, c := float64(m)*math.Pi+2*x, math.Cos(x)
		f := u - v*c
		if f > 0 {
			hi = x
		} else {
			lo = x
		}
		next := x - f/(2+v*math.Sin(x))
		if !(next > lo && next < hi) {
			next = (lo + hi) / 2
		}
		if math.Abs(next-x) < 1e-17 {
			return next
		}
		x = next
	}
	return x
}

func slabTE(m int, q slabPoint) slabValues {
	const c = schema.LightSpeed
	n1 := filmIndex + q.shift
	na2 := n1*n1 - cladIndex*cladIndex
	v := q.w / c * q.d * math.Sqrt(na2)
	if v <= float64(m)*math.Pi {
		return slabValues{}
	}
	th := theta(m, v)
	u, sec, tan := float64(m)*math.Pi+2*th, 1/math.Cos(th), math.Tan(th)
	f1 := 2*sec + u*sec*tan
	f2 := 4*sec*tan + u*sec*(tan*tan+sec*sec)
	f3 := 6*sec*(tan*tan+sec*sec) + u*sec*tan*(tan*tan+5*sec*sec)
	t1, t2, t3 := 1/f1, -f2/(f1*f1*f1), (3*f2*f2-f1*f3)/math.Pow(f1, 5)
	s, s2, c2 := math.Pow(math.Sin(th), 2), math.Sin(2*th), math.Cos(2*th)
	sv := s2 * t1
	svv := 2*c2*t1*t1 + s2*t2
	svvv := -4*s2*t1*t1*t1 + 6*c2*t1*t2 + s2*t3
	n := math.Sqrt(cladIndex*cladIndex + na2*s)
	d1 := na2 * sv / (2 * n)
	d2 := (na2*svv - 2*d1*d1) / (2 * n)
	d3 := (na2*svvv - 6*d1*d2) / (2 * n)
	w1, w2, w3 := d1*v/q.w, d2*v*v/(q.w*q.w), d3*math.Pow(v/q.w, 3)
	ms := 2*n1*s + sv*v*n1
	mws := v / q.w * n1 * (3*sv + v*svv)
	ns := ms / (2 * n)
	nws := mws/(2*n) - ms*w1/(2*n*n)
	nd := v / q.d * d1
	nwd := v / (q.w * q.d) * (d1 + v*d2)
	return slabValues{
		neff: n, ng: n + q.w*w1, gvd: (2*w1 + q.w*w2) / c / siGVD, beta3: (3*w2 + q.w*w3) / c / siBeta3,
		dneffD: nd, dneffS: ns, dngD: nd + q.w*nwd, dngS: ns + q.w*nws, guided: true,
	}
}

// slabSweep is the physics of the tests: wavelength, thickness and
// index shift, each an axis or fixed.
func slabSweep(axes []schema.AxisBlock) *schema.Physics {
	length := schema.Dimension{Length: 1}
	p := &schema.Physics{Modes: 3, Parameters: []schema.Parameter{
		{Name: "wavelength", Kind: schema.Fixed, Dimension: length, Value: 1.5e-6},
		{Name: "thickness", Kind: schema.Fixed, Dimension: length, Value: 0.8e-6},
		{Name: "index_shift", Kind: schema.Fixed},
	}, Section: schema.Section{Layers: &schema.Layers{Layers: []schema.Layer{{Material: "a"}, {Name: "core", Material: "b"}, {Material: "a"}}}}}
	for i := range p.Parameters {
		for _, a := range axes {
			if a.Parameter == p.Parameters[i].Name {
				p.Parameters[i].Kind, p.Parameters[i].Value = schema.Axis, 0
			}
		}
	}
	return p
}

// at reads a point of the sweep.
func at(p *schema.Physics, axes []schema.AxisBlock, values []float64) slabPoint {
	get := func(name string) float64 {
		for i, a := range axes {
			if a.Parameter == name {
				return values[i]
			}
		}
		q, _ := p.Parameter(name)
		return q.Value
	}
	return slabPoint{w: 2 * math.Pi * schema.LightSpeed / get("wavelength"), d: get("thickness"), shift: get("index_shift")}
}

// testErr is what the slab's rows state as their errors: far above the rounding of
// slabTE, far below what interpolation is asked for.
const testErr = 1e-13

// rowsOf makes the table of nodes first to last-1 for the families TE0.. .
func rowsOf(p *schema.Physics, axes []schema.AxisBlock, families, first, last int) *column.Batch {
	return rowsBy(p, axes, first, last, func(values []float64) []slabValues {
		var list []slabValues
		for m := range families {
			list = append(list, slabTE(m, at(p, axes, values)))
		}
		return list
	})
}

// rowsBy makes the table of what f gives for each node.
func rowsBy(p *schema.Physics, axes []schema.AxisBlock, first, last int, f func(values []float64) []slabValues) *column.Batch {
	columns := column.Modes(p)
	b := column.NewBatch(columns, nil, 0)
	tile := schema.Tile{Axes: axes}
	for node := first; node < last; node++ {
		for m, v := range f(tile.Values(node, nil)) {
			if v.guided {
				addRow(b, p, node, m, v)
			}
		}
	}
	return b
}

func addRow(b *column.Batch, p *schema.Physics, node, mode int, v slabValues) {
	index := column.Index(b.Columns)
	i := b.Rows
	b.Grow(i + 1)
	for c := range b.Columns {
		switch b.Columns[c].Type {
		case column.Float64:
			b.Vectors[c].Floats[i] = math.NaN()
		case column.Int64, column.Int32:
			b.Vectors[c].Ints[i] = int64(mode)
		case column.String:
			b.Vectors[c].Codes[i] = 0
		}
	}
	b.Vectors[index["point"]].Ints[i] = int64(node)
	b.Vectors[index["family"]].Codes[i] = b.Texts.Code("TE" + strconv.Itoa(mode))
	set := func(name string, v float64) { b.Vectors[index[name]].Floats[i] = v }
	set("neff", v.neff)
	set("ng", v.ng)
	set("gvd_ps2_per_km", v.gvd)
	set("beta3_ps3_per_km", v.beta3)
	set("kappa_eff", 0)
	set("kappa_err", 0)
	set("neff_err", testErr)
	set("ng_err", 100*testErr)
	set("gvd_err_ps2_per_km", 1e-9)
	set("beta3_err_ps3_per_km", 1e-9)
	for k, pair := range sensitivities(p) {
		set(pair.Neff, [2]float64{v.dneffD, v.dneffS}[k])
		set(pair.Ng, [2]float64{v.dngD, v.dngS}[k])
	}
	set("confinement_core", 0.5)
}

// record turns a batch into an Arrow record.
func record(t testing.TB, b *column.Batch) arrow.Record {
	t.Helper()
	rec, err := b.Record(column.Schema(b.Columns, nil))
	if err != nil {
		t.Fatal(err)
	}
	return rec
}

// writeSlab writes the surfaces of the slab over axes and opens them.
func writeSlab(t testing.TB, axes []schema.AxisBlock, families int) *Surfaces {
	t.Helper()
	path := filepath.Join(t.TempDir(), "surfaces.arrow")
	writeSlabTo(t, path, axes, families, 1000)
	s, err := Open(path)
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { s.Close() })
	return s
}

func writeSlabTo(t testing.TB, path string, axes []schema.AxisBlock, families, per int) {
	t.Helper()
	p := slabSweep(axes)
	w, err := NewWriter(path, Spec{Axes: axes, Physics: p})
	if err != nil {
		t.Fatal(err)
	}
	n := nodesOf(axes)
	for first := 0; first < n; first += per {
		rec := record(t, rowsOf(p, axes, families, first, min(n, first+per)))
		if err := w.Append(rec); err != nil {
			t.Fatal(err)
		}
		rec.Release()
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
}

// writeRows writes and opens the surfaces of what f gives for each node.
func writeRows(t testing.TB, p *schema.Physics, axes []schema.AxisBlock, f func(values []float64) []slabValues) *Surfaces {
	t.Helper()
	path := filepath.Join(t.TempDir(), "surfaces.arrow")
	w, err := NewWriter(path, Spec{Axes: axes, Physics: p})
	if err != nil {
		t.Fatal(err)
	}
	if err := w.AppendBatch(rowsBy(p, axes, 0, nodesOf(axes), f)); err != nil {
		t.Fatal(err)
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	s, err := Open(path)
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { s.Close() })
	return s
}

// span gives count values from lo to hi.
func span(name string, lo, hi float64, count int) schema.AxisBlock {
	a := schema.AxisBlock{Parameter: name}
	for i := range count {
		a.Values = append(a.Values, lo+(hi-lo)*float64(i)/float64(max(1, count-1)))
	}
	return a
}
