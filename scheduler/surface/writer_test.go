package surface

import (
	"bytes"
	"encoding/json"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/apache/arrow/go/v17/arrow"
	"github.com/apache/arrow/go/v17/arrow/array"
	"github.com/apache/arrow/go/v17/arrow/ipc"

	"betaloom/schema"
	"betaloom/schema/column"
)

// smallAxes has 2 batches a family and a TE1 that is absent from a part.
func smallAxes() []schema.AxisBlock {
	return []schema.AxisBlock{wavelengths(20), thickness(30), shifts(30)}
}

// What a plain Arrow reader sees is the table, dense: every node of every family once and in
// order, the columns of modes.parquet in their units, nulls where the family is absent.
func TestFileIsDense(t *testing.T) {
	axes := smallAxes()
	path := filepath.Join(t.TempDir(), "surfaces.arrow")
	writeSlabTo(t, path, axes, 2, 777)
	f, err := os.Open(path)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	r, err := ipc.NewFileReader(f)
	if err != nil {
		t.Fatal(err)
	}
	p := slabSweep(axes)
	tile := schema.Tile{Axes: axes}
	row, absent := 0, 0
	for i := range r.NumRecords() {
		rec, err := r.Record(i)
		if err != nil {
			t.Fatal(err)
		}
		if rec.NumRows() > 65536 {
			t.Fatalf("batch %d: found %d rows, expected at most 65536", i, rec.NumRows())
		}
		family, point := rec.Column(0).(*array.String), rec.Column(1).(*array.Int64)
		neff, slope := rec.Column(2).(*array.Float64), rec.Column(rec.Schema().FieldIndices("dng_dthickness_per_m")[0]).(*array.Float64)
		for k := range int(rec.NumRows()) {
			m, node := row/nodesOf(axes), row%nodesOf(axes)
			if want := []string{"TE0", "TE1"}[m]; family.Value(k) != want || point.Value(k) != int64(node) {
				t.Fatalf("row %d: found %s at %d, expected %s at %d", row, family.Value(k), point.Value(k), want, node)
			}
			v := slabTE(m, at(p, axes, tile.Values(node, nil)))
			if v.guided == neff.IsNull(k) || v.guided && (neff.Value(k) != v.neff || slope.Value(k) != v.dngD) {
				t.Fatalf("row %d: found %v, %g, %g, expected %+v", row, neff.IsValid(k), neff.Value(k), slope.Value(k), v)
			}
			if !v.guided {
				absent++
			}
			row++
		}
	}
	if row != 2*nodesOf(axes) || absent == 0 {
		t.Errorf("found %d rows with %d absent, expected %d with some absent", row, absent, 2*nodesOf(axes))
	}
	checkMeta(t, r.Schema(), axes)
}

func checkMeta(t *testing.T, s *arrow.Schema, axes []schema.AxisBlock) {
	t.Helper()
	text, ok := s.Metadata().GetValue(metaKey)
	var m Meta
	if !ok || json.Unmarshal([]byte(text), &m) != nil {
		t.Fatalf("found metadata %q, expected JSON", text)
	}
	for i, a := range m.Axes {
		if a.Parameter != axes[i].Parameter || a.Unit != []string{"m", "m", ""}[i] || len(a.Values) != len(axes[i].Values) {
			t.Errorf("axis %d: found %+v", i, a)
		}
	}
	if len(m.Families) != 2 || m.Families[1].Name != "TE1" || m.Families[1].FirstRow != int64(nodesOf(axes)) {
		t.Errorf("found families %+v, expected TE1 to begin at row %d", m.Families, nodesOf(axes))
	}
	field := s.Field(s.FieldIndices("gvd_ps2_per_km")[0])
	if unit, _ := field.Metadata.GetValue("unit"); unit != "ps^2/km" {
		t.Errorf("gvd_ps2_per_km: found unit %q, expected ps^2/km", unit)
	}
}

// The bytes depend on the rows only, not on how they come.
func TestSameBytes(t *testing.T) {
	axes := smallAxes()
	dir := t.TempDir()
	var want []byte
	for name, write := range map[string]func(path string){
		"records of 100":  func(path string) { writeSlabTo(t, path, axes, 2, 100) },
		"records of 5000": func(path string) { writeSlabTo(t, path, axes, 2, 5000) },
		"one batch": func(path string) {
			p := slabSweep(axes)
			w := newWriter(t, path, axes)
			if err := w.AppendBatch(rowsOf(p, axes, 2, 0, nodesOf(axes))); err != nil {
				t.Fatal(err)
			}
			if err := w.Close(); err != nil {
				t.Fatal(err)
			}
		},
	} {
		path := filepath.Join(dir, name)
		write(path)
		b, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		if want == nil {
			want = b
		}
		if !bytes.Equal(b, want) {
			t.Errorf("%s: found other bytes", name)
		}
	}
	files, err := filepath.Glob(filepath.Join(dir, "*"))
	if err != nil || len(files) != 3 {
		t.Errorf("found %v, %v, expected the three files only", files, err)
	}
}

func newWriter(t testing.TB, path string, axes []schema.AxisBlock) *Writer {
	t.Helper()
	w, err := NewWriter(path, Spec{Axes: axes, Physics: slabSweep(axes)})
	if err != nil {
		t.Fatal(err)
	}
	return w
}

// Rows that cannot be placed are refused; the writer then leaves no file.
func TestRefusedRows(t *testing.T) {
	axes := []schema.AxisBlock{wavelengths(5)}
	p := slabSweep(axes)
	change := func(f func(b *column.Batch, at map[string]int)) *column.Batch {
		b := rowsOf(p, axes, 1, 0, 5)
		f(b, column.Index(b.Columns))
		return b
	}
	cases := map[string]struct {
		batch *column.Batch
		want  string
	}{
		"outside": {change(func(b *column.Batch, at map[string]int) { b.Vectors[at["point"]].Ints[4] = 5 }), "found point 5, expected 0 to 4"},
		"before":  {change(func(b *column.Batch, at map[string]int) { b.Vectors[at["point"]].Ints[0] = -1 }), "found point -1"},
		"twice":   {change(func(b *column.Batch, at map[string]int) { b.Vectors[at["point"]].Ints[2] = 1 }), "found point 1 after 1"},
		"column":  {column.NewBatch(column.Points(p), nil, 0), "column family"},
	}
	for name, c := range cases {
		t.Run(name, func(t *testing.T) {
			dir := t.TempDir()
			w := newWriter(t, filepath.Join(dir, "surfaces.arrow"), axes)
			if err := w.AppendBatch(c.batch); err == nil || !strings.Contains(err.Error(), c.want) {
				t.Errorf("found %v, expected %q", err, c.want)
			}
			if err := w.Close(); err == nil {
				t.Error("found no error from Close, expected that of AppendBatch")
			}
			if files, _ := filepath.Glob(filepath.Join(dir, "*")); len(files) != 0 {
				t.Errorf("found %v, expected no file", files)
			}
		})
	}
}

// A row without a family, and a value that is no number, are missing.
func TestMissingValues(t *testing.T) {
	axes := []schema.AxisBlock{wavelengths(5)}
	p := slabSweep(axes)
	b := rowsOf(p, axes, 1, 0, 5)
	index := column.Index(b.Columns)
	b.Vectors[index["family"]].Codes[1] = 0
	b.Vectors[index["gvd_ps2_per_km"]].Floats[3] = math.Inf(1)
	path := filepath.Join(t.TempDir(), "surfaces.arrow")
	w := newWriter(t, path, axes)
	if err := w.Append(record(t, b)); err != nil {
		t.Fatal(err)
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	s, err := Open(path)
	if err != nil {
		t.Fatal(err)
	}
	defer s.Close()
	for name, missing := range map[string][]int{"neff": {1}, "gvd_ps2_per_km": {1, 3}} {
		slice, err := s.Slice("TE0", name, []int{0}, []int{0})
		if err != nil {
			t.Fatal(err)
		}
		for i, v := range slice.Values {
			if want := len(missing) > 0 && (i == missing[0] || i == missing[len(missing)-1]); math.IsNaN(v) != want {
				t.Errorf("%s at %d: found %g, expected missing: %v", name, i, v, want)
			}
		}
	}
	// neff is still interpolated, without the slopes that need the GVD; GVD is missing
	l := (axes[0].Values[3] + axes[0].Values[4]) / 2
	v, err := s.At("TE0", []float64{l})
	exact := slabTE(0, at(p, axes, []float64{l}))
	if err != nil || math.Abs(v.Neff.Value-exact.neff) > v.Neff.Bound || !math.IsNaN(v.GVD.Value) || !math.IsNaN(v.GVD.Bound) {
		t.Errorf("found %+v, %v, expected neff %g and no GVD", v, err, exact.neff)
	}
}

func TestSpec(t *testing.T) {
	good := []schema.AxisBlock{wavelengths(5)}
	cases := map[string]struct {
		spec Spec
		want string
	}{
		"no physics": {Spec{Axes: good}, "no physics"},
		"unknown":    {Spec{Axes: []schema.AxisBlock{span("width", 0, 1, 3)}, Physics: slabSweep(nil)}, `axis "width"`},
		"empty":      {Spec{Axes: []schema.AxisBlock{{Parameter: "wavelength"}}, Physics: slabSweep(good)}, "no values"},
		"repeated":   {Spec{Axes: []schema.AxisBlock{{Parameter: "index_shift", Values: []float64{1, 0, 1}}}, Physics: slabSweep(good)}, "found 1 twice"},
		"negative":   {Spec{Axes: []schema.AxisBlock{span("wavelength", -1, 1, 2)}, Physics: slabSweep(good)}, "expected positive"},
		"nan":        {Spec{Axes: []schema.AxisBlock{span("thickness", 1, math.NaN(), 2)}, Physics: slabSweep(good)}, "expected finite"},
		"too large":  {Spec{Axes: []schema.AxisBlock{span("thickness", 0, 1, 40000), span("index_shift", 0, 1, 40000)}, Physics: slabSweep(good)}, "nodes"},
	}
	for name, c := range cases {
		t.Run(name, func(t *testing.T) {
			_, err := NewWriter(filepath.Join(t.TempDir(), "surfaces.arrow"), c.spec)
			if err == nil || !strings.Contains(err.Error(), c.want) {
				t.Errorf("found %v, expected %q", err, c.want)
			}
		})
	}
}

// A sweep without axes has one node; one without a mode has no family.
func TestSmallest(t *testing.T) {
	for _, families := range []int{0, 1} {
		s := writeSlab(t, nil, families)
		if n := len(s.Families()); n != families {
			t.Fatalf("found %d families, expected %d", n, families)
		}
		if families == 0 {
			continue
		}
		v, err := s.At("TE0", nil)
		if exact := slabTE(0, at(slabSweep(nil), nil, nil)); err != nil || v.Neff.Value != exact.neff {
			t.Errorf("found %+v, %v, expected %g", v, err, exact.neff)
		}
		if math.Abs(v.WavelengthM-1.5e-6) > 1e-20 {
			t.Errorf("found wavelength %g, expected 1.5e-6", v.WavelengthM)
		}
	}
}

func BenchmarkAppend(b *testing.B) {
	axes := []schema.AxisBlock{wavelengths(1000), thickness(2000)}
	p := slabSweep(axes)
	rows := rowsOf(p, axes, 1, 0, 8000) // appended again and again with its points moved on
	index := column.Index(rows.Columns)["point"]
	rec := record(b, rows)
	for name, add := range map[string]func(w *Writer) error{
		"batch":  func(w *Writer) error { return w.AppendBatch(rows) },
		"record": func(w *Writer) error { return w.Append(rec) },
	} {
		b.Run(name, func(b *testing.B) {
			for range b.N {
				w := newWriter(b, filepath.Join(b.TempDir(), "surfaces.arrow"), axes)
				for k := range 250 {
					for i := range rows.Rows {
						rows.Vectors[index].Ints[i] = int64(k*rows.Rows + i)
						rec.Column(0).(*array.Int64).Int64Values()[i] = int64(k*rows.Rows + i)
					}
					if err := add(w); err != nil {
						b.Fatal(err)
					}
				}
				if err := w.Close(); err != nil {
					b.Fatal(err)
				}
			}
			b.ReportMetric(float64(b.N)*2e6/b.Elapsed().Seconds(), "rows/s")
		})
	}
}
