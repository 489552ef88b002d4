package report

import (
	"bytes"
	"context"
	"encoding/json"
	"maps"
	"math"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"

	"betaloom/scheduler/surface"
	"betaloom/schema"
	"betaloom/schema/column"
)

// answer is what a made-up solver says of a point.
type answer struct {
	guided int
	state  string
	reason string
	modes  []row
}

// row is one mode of a made-up table.
type row struct {
	family, kind, flag string
	values             map[string]float64
}

// writeFolder makes a run's folder by the writer of the program's own tables.
func writeFolder(t testing.TB, r record, q question, solve func(point int) answer) string {
	t.Helper()
	dir := t.TempDir()
	writeJSON(t, filepath.Join(dir, "grid.json"), q)
	writeJSON(t, filepath.Join(dir, "run.json"), r)
	d, err := newData(r.Sweep, q)
	if err != nil {
		t.Fatal(err)
	}
	points := newTable(t, filepath.Join(dir, "points.parquet"), column.Points(&q.Physics))
	modes := newTable(t, filepath.Join(dir, "modes.parquet"), column.Modes(&q.Physics))
	if d.View.IsBox() {
		modes.also, err = surface.NewWriter(filepath.Join(dir, "surfaces.arrow"), surface.Spec{Axes: q.Axes, Physics: &q.Physics})
		if err != nil {
			t.Fatal(err)
		}
	}
	for point := range d.Points {
		a := solve(point)
		points.append(point, map[string]string{"state": a.state, "reason": a.reason}, map[string]float64{"guided_count": float64(a.guided)})
		for _, m := range a.modes {
			modes.append(point, map[string]string{"family": m.family, "mode_type": m.kind, "flag": m.flag}, m.values)
		}
	}
	points.close()
	modes.close()
	return dir
}

func writeJSON(t testing.TB, path string, v any) {
	t.Helper()
	b, err := json.Marshal(v)
	if err == nil {
		err = os.WriteFile(path, b, 0o644)
	}
	if err != nil {
		t.Fatal(err)
	}
}

// table appends rows to a Parquet file.
type table struct {
	t     testing.TB
	file  *os.File
	w     *column.Writer
	batch *column.Batch
	also  *surface.Writer // for modes over a box
}

func newTable(t testing.TB, path string, columns []column.Column) *table {
	t.Helper()
	f, err := os.Create(path)
	if err != nil {
		t.Fatal(err)
	}
	w, err := column.NewWriter(f, columns, column.Options{})
	if err != nil {
		t.Fatal(err)
	}
	return &table{t, f, w, column.NewBatch(columns, nil, 0), nil}
}

func (t *table) append(point int, texts map[string]string, floats map[string]float64) {
	b, i := t.batch, t.batch.Rows
	b.Grow(i + 1)
	for c, col := range b.Columns {
		v := &b.Vectors[c]
		x, given := floats[col.Name]
		switch col.Type {
		case column.String:
			v.Codes[i] = b.Texts.Code(texts[col.Name])
		case column.Float64:
			if v.Floats[i] = x; !given {
				v.Floats[i] = math.NaN()
			}
		default:
			if v.Ints[i] = int64(x); !given {
				v.Ints[i] = column.MissingInt
			}
			if col.Name == "point" {
				v.Ints[i] = int64(point)
			}
		}
	}
	if b.Rows == 65536 {
		t.flush()
	}
}

func (t *table) flush() {
	if err := t.w.Write(t.batch); err != nil {
		t.t.Fatal(err)
	}
	if t.also != nil {
		if err := t.also.AppendBatch(t.batch); err != nil {
			t.t.Fatal(err)
		}
	}
	t.batch.Reset()
}

func (t *table) close() {
	t.flush()
	if err := t.w.Close(); err != nil {
		t.t.Fatal(err)
	}
	if t.also != nil {
		if err := t.also.Close(); err != nil {
			t.t.Fatal(err)
		}
	}
	if err := t.file.Close(); err != nil && !strings.Contains(err.Error(), "already closed") {
		t.t.Fatal(err)
	}
}

// solved asks smooth for two modes; every bound is the same but one.
func solved(v *View, axes []schema.AxisBlock) func(point int) answer {
	return func(point int) answer {
		at := map[string]float64{"wavelength": 1.55e-6, "height": 0.8e-6, "temperature": 293.15}
		for i, x := range v.Values(point) {
			at[axes[i].Parameter] = x
		}
		a := answer{state: "solved"}
		for m, name := range []string{"TE0", "TM0"} {
			_, _, gvd := smooth(m, at)
			if math.IsNaN(gvd) {
				continue
			}
			neff, ng := indices(m, at)
			a.guided++
			a.modes = append(a.modes, row{name, name[:2], "", map[string]float64{"neff": neff, "ng": ng, "gvd_ps2_per_km": gvd, "beta3_ps3_per_km": slope(m, at),
				"neff_err": 3e-12, "ng_err": 1e-10, "gvd_err_ps2_per_km": 2e-4, "beta3_err_ps3_per_km": 1e-3}})
		}
		if a.guided == 0 {
			a.state, a.reason = "no-mode", "no core beats its surroundings"
		}
		return a
	}
}

// indices are the neff and ng that smooth's dispersion belongs to, so that
// the surface finds them each other's derivatives:
// b(w) = b(w0) + b1(w0) (w-w0) + integral of (w-s) b2(s) ds, from w0 at 1.3 um and by
// Simpson's rule on 64 intervals, which leaves less than the bounds stated.
func indices(mode int, at map[string]float64) (neff, ng float64) {
	const c, n = schema.LightSpeed, 64
	w0, w := 2*math.Pi*c/1.3e-6, 2*math.Pi*c/at["wavelength"]
	h := (w - w0) / n
	var first, second float64
	for i := range n + 1 {
		weight := h / 3 * float64(2+2*(i%2))
		if i == 0 || i == n {
			weight = h / 3
		}
		s := w0 + h*float64(i)
		shifted := maps.Clone(at)
		shifted["wavelength"] = 2 * math.Pi * c / s
		_, _, gvd := smooth(mode, shifted)
		first += weight * gvd * 1e-27 // s^2/m
		second += weight * gvd * 1e-27 * (w - s)
	}
	const ng0 = 2.0
	neff0 := 1.9 - 0.1*float64(mode)
	return (neff0*w0/c + ng0/c*(w-w0) + second) * c / w, ng0 + first*c
}

// slope is the derivative of smooth's dispersion by the angular frequency, in
// ps^3/km: it tells the surface between which points a zero lies.
func slope(mode int, at map[string]float64) float64 {
	shifted := maps.Clone(at)
	const step = 1e-4
	shifted["wavelength"] = at["wavelength"] * (1 - step) // raises the frequency by as much
	_, _, a := smooth(mode, at)
	_, _, b := smooth(mode, shifted)
	return (b - a) / (step * 2 * math.Pi * schema.LightSpeed / at["wavelength"] * 1e-12)
}

func someRecord() record {
	return record{Sweep: "film-study", Program: "betaloom 0.1", Reasons: []string{"the section varies along one axis"}, Tiles: 3, Workers: 2, Starts: 1, SolveSeconds: 2, CollateSeconds: 0.5}
}

func TestWrite(t *testing.T) {
	axes := []schema.AxisBlock{wavelengths(21), heights(17)}
	v := newBoxView(axes)
	good := solved(v, axes)
	dir := writeFolder(t, someRecord(), question{Physics: film(axes), Axes: axes}, func(point int) answer {
		switch {
		case point == 7 || point == 8:
			return answer{state: "failed", reason: "layer core: found a thickness of -1 nm, expected one above 0"}
		case point < 17*2:
			return answer{state: "excluded", reason: "keep is false here"}
		}
		a := good(point)
		if point == 100 {
			a.modes[0].values["neff_err"] = 5e-6
			a.modes[0].flag = "near-cutoff; accuracy"
		}
		return a
	})
	if err := Write(context.Background(), dir); err != nil {
		t.Fatal(err)
	}
	first := readFile(t, filepath.Join(dir, Name))

	t.Run("same folder, same bytes", func(t *testing.T) {
		if err := Write(context.Background(), dir); err != nil {
			t.Fatal(err)
		}
		if !bytes.Equal(first, readFile(t, filepath.Join(dir, Name))) {
			t.Error("a second report of the same folder differs")
		}
	})
	t.Run("nothing is left beside it", func(t *testing.T) { checkEntries(t, dir) })
	t.Run("zeros of the dispersion", func(t *testing.T) { checkZeroTable(t, dir, first, axes) })
	t.Run("counts", func(t *testing.T) { checkCounts(t, first) })
}

func checkEntries(t *testing.T, dir string) {
	entries, err := os.ReadDir(dir)
	if err != nil {
		t.Fatal(err)
	}
	var names []string
	for _, e := range entries {
		names = append(names, e.Name())
	}
	if got := strings.Join(names, " "); got != "grid.json modes.parquet points.parquet report.html run.json surfaces.arrow" {
		t.Errorf("folder holds %s", got)
	}
}

// checkZeroTable compares the table's row for TM0 with zeros found without a
// surface.
func checkZeroTable(t *testing.T, dir string, first []byte, axes []schema.AxisBlock) {
	d, err := Load(t.Context(), dir)
	if err != nil {
		t.Fatal(err)
	}
	row := regexp.MustCompile(`TM0( (–|[\d.]+ µm))+`).FindString(textOf(t, first)[strings.Index(textOf(t, first), "Values of wavelength at which"):])
	cells := regexp.MustCompile(`–|[\d.]+`).FindAllString(strings.TrimPrefix(row, "TM0"), -1)
	if len(cells) != len(d.Ups) {
		t.Fatalf("cells %q, expected one for each of %d heights", cells, len(d.Ups))
	}
	there := 0
	for i, y := range d.Ups {
		exact, err := synthetic(axes, 2).exactZeros("TM0", 0, d.View.at(0, y))
		if err != nil {
			t.Fatal(err)
		}
		exact = slices.DeleteFunc(exact, func(c surface.Crossing) bool { return c.Value < 1.34e-6 }) // left out
		if (cells[i] != "–") != (len(exact) == 1) {
			t.Errorf("at row %d the table says %q, expected %v", y, cells[i], exact)
			continue
		}
		if len(exact) == 0 {
			continue
		}
		there++
		got, err := strconv.ParseFloat(cells[i], 64)
		if err != nil {
			t.Fatal(err)
		}
		// Half a unit of the last digit, and as much again for the bound.
		digits := len(cells[i]) - strings.Index(cells[i], ".") - 1
		if diff := math.Abs(got - exact[0].Value*1e6); diff > math.Pow10(-digits) || digits < 3 {
			t.Errorf("at row %d the table says %s, expected %.7f", y, cells[i], exact[0].Value*1e6)
		}
	}
	if there == 0 {
		t.Error("the table has no zero of TM0")
	}
}

func checkCounts(t *testing.T, first []byte) {
	text := textOf(t, first)
	for _, want := range []string{
		"layer core: found a thickness of -1 nm, expected one above 0",
		"2", "7 (wavelength 1.3 µm, height 737.5 nm); 8 (wavelength 1.3 µm, height 800 nm)",
		"keep is false here", "left out by keep", "near-cutoff", "missed in 1 of",
		"point 100 (wavelength 1.4 µm, height 1.2375 µm)",
	} {
		if !strings.Contains(text, want) {
			t.Errorf("the page does not say %q", want)
		}
	}
}

func readFile(t *testing.T, path string) []byte {
	t.Helper()
	b, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	return b
}

func TestWriteKeepsTheOldPage(t *testing.T) {
	axes := []schema.AxisBlock{wavelengths(5)}
	dir := writeFolder(t, someRecord(), question{Physics: film(axes), Axes: axes}, solved(newBoxView(axes), axes))
	path := filepath.Join(dir, Name)
	if err := os.WriteFile(path, []byte("old"), 0o644); err != nil {
		t.Fatal(err)
	}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if err := Write(ctx, dir); err == nil {
		t.Error("a cancelled report gives no error")
	}
	if got := readFile(t, path); string(got) != "old" {
		t.Errorf("the old page was replaced by %d bytes", len(got))
	}
}

func TestBadFolders(t *testing.T) {
	axes := []schema.AxisBlock{wavelengths(5)}
	q := question{Physics: film(axes), Axes: axes}
	whole := func() string {
		return writeFolder(t, someRecord(), q, solved(newBoxView(axes), axes))
	}
	for _, c := range []struct {
		name, file, content, want string
	}{
		{"no grid", "grid.json", "", "grid.json"},
		{"grid is no JSON", "grid.json", "{", "grid.json"},
		{"run is no JSON", "run.json", "[]", "run.json"},
		{"an empty axis", "grid.json", `{"axes":[{"parameter":"wavelength","values":[]}]}`, "axis wavelength has no values"},
		{"a short row", "grid.json", `{"columns":["a","b"],"rows":[[1]]}`, "row 0: found 1 values, expected 2"},
		{"fewer points than the table", "grid.json", `{}`, "found point 1, expected 0 to 0"},
		{"points is no Parquet", "points.parquet", "PAR1 not PAR1", "points.parquet"},
		{"modes is empty", "modes.parquet", "", "modes.parquet"},
	} {
		t.Run(c.name, func(t *testing.T) {
			dir := whole()
			path := filepath.Join(dir, c.file)
			if c.content == "" {
				if err := os.Remove(path); err != nil {
					t.Fatal(err)
				}
			} else if err := os.WriteFile(path, []byte(c.content), 0o644); err != nil {
				t.Fatal(err)
			}
			err := Write(context.Background(), dir)
			if err == nil || !strings.Contains(err.Error(), c.want) {
				t.Errorf("error %v, expected one with %q", err, c.want)
			}
		})
	}
	t.Run("a table of other columns", func(t *testing.T) {
		dir := whole()
		if err := os.Rename(filepath.Join(dir, "points.parquet"), filepath.Join(dir, "modes.parquet")); err != nil {
			t.Fatal(err)
		}
		writeFolderTable(t, dir, q)
		err := Write(context.Background(), dir)
		if err == nil || !strings.Contains(err.Error(), "found no column family") {
			t.Errorf("error %v, expected one that names the column", err)
		}
	})
}

// writeFolderTable puts an empty table of points into a folder.
func writeFolderTable(t *testing.T, dir string, q question) {
	newTable(t, filepath.Join(dir, "points.parquet"), column.Points(&q.Physics)).close()
}

// BenchmarkWrite makes the page of a million rows of modes.
func BenchmarkWrite(b *testing.B) {
	axes := []schema.AxisBlock{wavelengths(250), heights(700), shifts(3)}
	dir := writeFolder(b, someRecord(), question{Physics: film(axes), Axes: axes}, solved(newBoxView(axes), axes))
	b.ResetTimer()
	for b.Loop() {
		if err := Write(b.Context(), dir); err != nil {
			b.Fatal(err)
		}
	}
}
