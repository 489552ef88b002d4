package collate

import (
	"bytes"
	"context"
	"encoding/json"
	"errors"
	"io"
	"io/fs"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"runtime"
	"slices"
	"strings"
	"testing"

	"github.com/parquet-go/parquet-go"

	"betaloom/schema"
	"betaloom/schema/column"
	"betaloom/schema/part"
	"betaloom/schema/part/parttest"
	"betaloom/schema/store"

	"betaloom/scheduler/grid"
	"betaloom/scheduler/surface"
)

// rowsOf reads a table with parquet-go, which shares no code with the writer.
func rowsOf(t *testing.T, b []byte, columns []column.Column) []map[string]parquet.Value {
	t.Helper()
	f, err := parquet.OpenFile(bytes.NewReader(b), int64(len(b)))
	if err != nil {
		t.Fatal(err)
	}
	if found := len(f.Schema().Columns()); found != len(columns) {
		t.Fatalf("found %d columns, expected %d", found, len(columns))
	}
	var rows []map[string]parquet.Value
	for _, g := range f.RowGroups() {
		r := g.Rows()
		buffer := make([]parquet.Row, 256)
		for {
			n, err := r.ReadRows(buffer)
			for _, row := range buffer[:n] {
				m := map[string]parquet.Value{}
				for i, v := range row {
					if !v.IsNull() {
						m[columns[i].Name] = v.Clone()
					}
				}
				rows = append(rows, m)
			}
			if err == io.EOF {
				break
			}
			if err != nil {
				t.Fatal(err)
			}
		}
		if err := r.Close(); err != nil {
			t.Fatal(err)
		}
	}
	return rows
}

// whole is the grid's box as one tile, whose points are in the grid's order.
func whole(g *grid.Grid) *schema.Tile {
	return &schema.Tile{Physics: *g.Physics(), Axes: g.Axes()}
}

func TestTablesHoldEveryPoint(t *testing.T) {
	g := box(t, 37, 50, 3)
	s, dir := newMemory(), t.TempDir()
	solve(t, g, s, every(g))
	sum, err := Run(context.Background(), Input{Grid: g, Store: s, Dir: dir})
	if err != nil {
		t.Fatal(err)
	}
	points := rowsOf(t, readFile(t, dir, PointsFile), column.Points(g.Physics()))
	modes := rowsOf(t, readFile(t, dir, ModesFile), column.Modes(g.Physics()))
	if len(points) != g.Points() || len(modes) != sum.Rows {
		t.Fatalf("found %d points and %d modes, expected %d and %d", len(points), len(modes), g.Points(), sum.Rows)
	}
	next, all := 0, whole(g)
	for i, row := range points {
		pt, want := parttest.Point(all, i)
		comparePoint(t, row, i, pt)
		for k := range want {
			compareMode(t, modes[next], i, k, pt, &want[k])
			next++
		}
	}
	if next != len(modes) {
		t.Errorf("found %d modes, expected %d", len(modes), next)
	}
}

func comparePoint(t *testing.T, row map[string]parquet.Value, i int, pt part.Point) {
	t.Helper()
	switch {
	case row["point"].Int64() != int64(i):
		t.Fatalf("found the point %v, expected %d", row["point"], i)
	case row["wavelength_m"].Double() != pt.Values[0] || row["height_m"].Double() != pt.Values[1] || row["index_shift"].Double() != pt.Values[2]:
		t.Fatalf("point %d: found %v, expected %v", i, row, pt.Values)
	case row["state"].String() != pt.State:
		t.Fatalf("point %d: found the state %v, expected %s", i, row["state"], pt.State)
	}
	reason, ok := row["reason"]
	if ok != (pt.Reason != "") || ok && reason.String() != pt.Reason {
		t.Fatalf("point %d: found the reason %v, expected %q", i, reason, pt.Reason)
	}
	guided, ok := row["guided_count"]
	if ok != (pt.Guided >= 0) || ok && guided.Int64() != int64(pt.Guided) {
		t.Fatalf("point %d: found %v guided, expected %d", i, guided, pt.Guided)
	}
}

func compareMode(t *testing.T, row map[string]parquet.Value, i, k int, pt part.Point, m *part.Mode) {
	t.Helper()
	if row["point"].Int64() != int64(i) || row["mode"].Int64() != int64(k) || row["family"].String() != m.Family {
		t.Fatalf("found %v, expected mode %d of point %d", row, k, i)
	}
	for name, want := range map[string]float64{
		"wavelength_m": pt.Values[0], "height_m": pt.Values[1], "neff": m.Neff, "ng": m.Ng, "gvd_ps2_per_km": m.GVD * 1e27,
		"beta3_ps3_per_km": m.Beta3 * 1e39, "neff_err": m.NeffErr, "dneff_dheight_per_m": m.DNeff[0], "confinement_core": m.Confinement[0],
	} {
		if got := row[name].Double(); got != want {
			t.Fatalf("point %d, mode %d, %s: found %v, expected %v", i, k, name, got, want)
		}
	}
	if _, ok := row["aeff_m2"]; ok {
		t.Fatalf("point %d: found an area %v, expected null", i, row["aeff_m2"])
	}
}

func TestSummary(t *testing.T) {
	g := box(t, 37, 50, 3)
	s, dir := newMemory(), t.TempDir()
	solve(t, g, s, every(g))
	sum, err := Run(context.Background(), Input{Grid: g, Store: s, Dir: dir})
	if err != nil {
		t.Fatal(err)
	}
	states, families, guided, over := map[string]int{}, map[string]int{}, map[int]int{}, 0
	var bounds []float64
	for i, all := 0, whole(g); i < all.Points(); i++ {
		pt, modes := parttest.Point(all, i)
		states[pt.State]++
		if pt.Guided >= 0 {
			guided[pt.Guided]++
		}
		for _, m := range modes {
			families[m.Family]++
			bounds = append(bounds, m.NeffErr)
			if m.NeffErr > 1e-6 {
				over++
			}
		}
	}
	slices.Sort(bounds)
	if found, want := asJSON(t, sum.Points, sum.Families, sum.Guided, sum.OverAccuracy), asJSON(t, states, families, guided, over); found != want {
		t.Errorf("found %s, expected %s", found, want)
	}
	e := sum.Errors["neff_err"]
	if e.Rows != len(bounds) || e.Worst != bounds[len(bounds)-1] {
		t.Errorf("found %+v, expected %d rows and %g at worst", e, len(bounds), bounds[len(bounds)-1])
	}
	if want := bounds[(len(bounds)-1)/2]; math.Abs(e.Median-want) > 0.01*want {
		t.Errorf("found the median %g, expected %g within the 1 %% promised", e.Median, want)
	}
	for _, name := range []string{PointsFile, ModesFile, SurfacesFile} {
		if want := int64(len(readFile(t, dir, name))); sum.Bytes[name] != want || want == 0 {
			t.Errorf("%s: found %d bytes, expected %d", name, sum.Bytes[name], want)
		}
	}
}

func asJSON(t *testing.T, v ...any) string {
	t.Helper()
	b, err := json.Marshal(v)
	if err != nil {
		t.Fatal(err)
	}
	return string(b)
}

func TestSurfacesAreWritten(t *testing.T) {
	g := box(t, 9, 20, 3)
	s, dir := newMemory(), t.TempDir()
	solve(t, g, s, every(g))
	if _, err := Run(context.Background(), Input{Grid: g, Store: s, Dir: dir}); err != nil {
		t.Fatal(err)
	}
	surfaces, err := surface.Open(filepath.Join(dir, SurfacesFile))
	if err != nil {
		t.Fatal(err)
	}
	defer surfaces.Close()
	if got := surfaces.Families(); !slices.Equal(got, []string{"TE0", "TM0"}) {
		t.Errorf("found the families %v", got)
	}
}

// tables runs and gives the bytes of the tables.
func tables(t *testing.T, in Input) [3][]byte {
	t.Helper()
	if _, err := Run(context.Background(), in); err != nil {
		t.Fatal(err)
	}
	return [3][]byte{readFile(t, in.Dir, PointsFile), readFile(t, in.Dir, ModesFile), readFile(t, in.Dir, SurfacesFile)}
}

func compareTables(t *testing.T, got, want [3][]byte) {
	t.Helper()
	for i, name := range []string{PointsFile, ModesFile, SurfacesFile} {
		if !bytes.Equal(got[i], want[i]) {
			t.Errorf("%s: found other bytes (%d and %d)", name, len(got[i]), len(want[i]))
		}
	}
}

func TestBytesDependOnThePartsAlone(t *testing.T) {
	g := box(t, 37, 50, 5)
	s := newMemory()
	solve(t, g, s, every(g))
	want := tables(t, Input{Grid: g, Store: s, Dir: t.TempDir()})
	t.Run("parts made in another order", func(t *testing.T) {
		folder, err := store.Folder(t.TempDir())
		if err != nil {
			t.Fatal(err)
		}
		order := every(g)
		rand.New(rand.NewPCG(1, 2)).Shuffle(len(order), func(i, j int) { order[i], order[j] = order[j], order[i] })
		solve(t, g, folder, order)
		compareTables(t, tables(t, Input{Grid: g, Store: folder, Dir: t.TempDir()}), want)
	})
	t.Run("other numbers of processors", func(t *testing.T) {
		for _, n := range []int{1, 7} {
			before := runtime.GOMAXPROCS(n)
			got := tables(t, Input{Grid: g, Store: s, Dir: t.TempDir()})
			runtime.GOMAXPROCS(before)
			compareTables(t, got, want)
		}
	})
	t.Run("after a partial one and a crash", func(t *testing.T) {
		dir, half := t.TempDir(), newMemory()
		solve(t, g, half, every(g)[:g.Tiles()/2])
		tables(t, Input{Grid: g, Store: half, Dir: dir, Partial: true})
		for _, name := range Temporaries() {
			if err := os.WriteFile(filepath.Join(dir, name), []byte("half a file"), 0o600); err != nil {
				t.Fatal(err)
			}
		}
		compareTables(t, tables(t, Input{Grid: g, Store: s, Dir: dir}), want)
		checkNoTemporaries(t, dir)
	})
	t.Run("rows and texts waiting in a file", func(t *testing.T) {
		dir := t.TempDir()
		in := Input{Grid: g, Store: s, Dir: dir}
		inv, err := takeInventory(context.Background(), in)
		if err != nil {
			t.Fatal(err)
		}
		j, err := newJoin(in, inv)
		if err != nil {
			t.Fatal(err)
		}
		j.shelf.store.limit, j.shelf.known = 20000, 6
		defer j.discard()
		if err := j.run(context.Background()); err != nil {
			t.Fatal(err)
		}
		if j.shelf.store.file == nil {
			t.Error("nothing was spilt")
		}
		compareTables(t, [3][]byte{readFile(t, dir, PointsFile), readFile(t, dir, ModesFile), readFile(t, dir, SurfacesFile)}, want)
	})
}

func checkNoTemporaries(t *testing.T, dir string) {
	t.Helper()
	entries, err := os.ReadDir(dir)
	if err != nil {
		t.Fatal(err)
	}
	for _, e := range entries {
		if !slices.Contains([]string{PointsFile, ModesFile, SurfacesFile}, e.Name()) {
			t.Errorf("found %s in the folder", e.Name())
		}
	}
}

func TestMissingParts(t *testing.T) {
	g := box(t, 40, 40, 5)
	s, dir := newMemory(), t.TempDir()
	solve(t, g, s, every(g)[2:])
	in := Input{Grid: g, Store: s, Dir: dir}
	t.Run("are an error", func(t *testing.T) {
		_, err := Run(context.Background(), in)
		var missing *MissingError
		if !errors.As(err, &missing) || missing.Missing != 2 || missing.Tiles != g.Tiles() || missing.First != nameOf(t, g.Tile(0)) {
			t.Fatalf("found %v", err)
		}
		if _, err := os.Stat(filepath.Join(dir, PointsFile)); !errors.Is(err, fs.ErrNotExist) {
			t.Errorf("found a table: %v", err)
		}
		checkNoTemporaries(t, dir)
	})
	t.Run("are failed points of a partial collation", func(t *testing.T) {
		in.Partial = true
		sum, err := Run(context.Background(), in)
		if err != nil {
			t.Fatal(err)
		}
		if !sum.Partial || sum.MissingTiles != 2 {
			t.Errorf("found %+v", sum)
		}
		for _, name := range []string{PointsFile, ModesFile} {
			b := readFile(t, dir, name)
			f, err := parquet.OpenFile(bytes.NewReader(b), int64(len(b)))
			if err != nil {
				t.Fatal(err)
			}
			if v, _ := f.Lookup(MetaPartial); v != "true" {
				t.Errorf("%s: found partial=%q", name, v)
			}
		}
		checkUnsolved(t, dir, g, []int{0, 1}, PartialReason)
	})
}

// checkUnsolved compares the points of tiles without a part.
func checkUnsolved(t *testing.T, dir string, g *grid.Grid, tiles []int, reason string) {
	t.Helper()
	points := rowsOf(t, readFile(t, dir, PointsFile), column.Points(g.Physics()))
	seen := 0
	for _, i := range tiles {
		block, tile := g.Block(i), g.Tile(i)
		for local := range tile.Points() {
			row := points[g.Point(block, local)]
			v := tile.Values(local, nil)
			if row["state"].String() != part.Failed || row["reason"].String() != reason || !row["guided_count"].IsNull() {
				t.Fatalf("tile %d, point %d: found %v, expected failed: %s", i, local, row, reason)
			}
			for name, want := range map[string]float64{"wavelength_m": v[0], "height_m": v[1], "gap_m": 0.25 * v[1], "temperature_K": 293.15, "frequency_hz": 299792458 / v[0]} {
				if got := row[name].Double(); math.Abs(got-want) > 1e-15*want {
					t.Fatalf("tile %d, point %d, %s: found %v, expected %v", i, local, name, got, want)
				}
			}
			seen++
		}
	}
	if seen == 0 {
		t.Error("found no point to compare")
	}
}

func TestTilesSetAside(t *testing.T) {
	g := box(t, 40, 40, 5)
	s, dir := newMemory(), t.TempDir()
	solve(t, g, s, every(g)[1:])
	name := nameOf(t, g.Tile(0))
	record := asJSON(t, store.SetAside{Tile: name, Reason: "layer core: found a negative thickness", Attempts: 5})
	record = strings.TrimSuffix(strings.TrimPrefix(record, "["), "]")
	if err := s.Put(context.Background(), store.Aside(name), []byte(record)); err != nil {
		t.Fatal(err)
	}
	// One that was set aside once and solved later is solved.
	if err := s.Put(context.Background(), store.Aside(nameOf(t, g.Tile(1))), []byte(record)); err != nil {
		t.Fatal(err)
	}
	sum, err := Run(context.Background(), Input{Grid: g, Store: s, Dir: dir})
	if err != nil {
		t.Fatal(err)
	}
	if sum.Partial || sum.AsideTiles != 1 {
		t.Errorf("found %+v", sum)
	}
	checkUnsolved(t, dir, g, []int{0}, "layer core: found a negative thickness")
}

func TestKeepHoldsWithoutAPart(t *testing.T) {
	p := parttest.Physics()
	p.Keep = "height > 0.5 um and gap < 1 um"
	g, err := grid.New(p, parttest.Axes(3, 11, 1), nil, nil)
	if err != nil {
		t.Fatal(err)
	}
	sum, err := Run(context.Background(), Input{Grid: g, Store: newMemory(), Dir: t.TempDir(), Partial: true})
	if err != nil {
		t.Fatal(err)
	}
	// Heights are 0.2, 0.3 ... 1.2 um: four are not above 0.5 um.
	if sum.Points[part.Excluded] != 3*4 || sum.Points[part.Failed] != 3*7 {
		t.Errorf("found %v, expected 12 excluded and 21 failed", sum.Points)
	}
}

func TestCorruptPartsAreNamed(t *testing.T) {
	g := box(t, 40, 40, 20)
	s, dir := newMemory(), t.TempDir()
	solve(t, g, s, every(g))
	want := tables(t, Input{Grid: g, Store: s, Dir: dir})
	bad := []int{1, g.Tiles() - 1}
	for _, i := range bad {
		name := store.Part(nameOf(t, g.Tile(i)))
		s.data[name][len(s.data[name])/3] ^= 0xff
	}
	_, err := Run(context.Background(), Input{Grid: g, Store: s, Dir: dir})
	var corrupt *CorruptError
	if !errors.As(err, &corrupt) {
		t.Fatalf("found %v, expected a CorruptError", err)
	}
	if names := corrupt.Tiles(); !slices.Equal(names, []string{nameOf(t, g.Tile(bad[0])), nameOf(t, g.Tile(bad[1]))}) {
		t.Errorf("found %v", names)
	}
	if corrupt.Parts[0].Reason == "" {
		t.Error("found no reason")
	}
	checkNoTemporaries(t, dir)
	t.Run("the tables before stand", func(t *testing.T) {
		compareTables(t, [3][]byte{readFile(t, dir, PointsFile), readFile(t, dir, ModesFile), readFile(t, dir, SurfacesFile)}, want)
	})
	t.Run("solved again", func(t *testing.T) {
		solve(t, g, s, bad)
		compareTables(t, tables(t, Input{Grid: g, Store: s, Dir: dir}), want)
	})
}

func TestModeWithoutFamily(t *testing.T) {
	g := box(t, 2, 1, 1)
	s := newMemory()
	tile := g.Tile(0)
	b := part.NewBuilder(&tile.Physics)
	for local := range tile.Points() {
		pt, _ := parttest.Point(tile, local)
		pt.State, pt.Guided = part.Solved, 1
		m := part.Mode{DNeff: make([]float64, 4), DNg: make([]float64, 4), Confinement: make([]float64, 1)}
		if err := b.Add(pt, []part.Mode{m}); err != nil {
			t.Fatal(err)
		}
	}
	name := nameOf(t, tile)
	data, err := b.Encode(name)
	if err != nil {
		t.Fatal(err)
	}
	if err := s.Put(context.Background(), store.Part(name), data); err != nil {
		t.Fatal(err)
	}
	dir := t.TempDir()
	_, err = Run(context.Background(), Input{Grid: g, Store: s, Dir: dir})
	if err == nil || !strings.Contains(err.Error(), "point 0, mode 0: found no family: following is not available for this equation") {
		t.Errorf("found %v", err)
	}
	checkNoTemporaries(t, dir)
}

func TestListOfRows(t *testing.T) {
	all := whole(box(t, 9, 20, 5))
	var rows [][]float64
	for i := range all.Points() {
		rows = append(rows, all.Values(i, nil))
	}
	rand.New(rand.NewPCG(3, 4)).Shuffle(len(rows), func(i, j int) { rows[i], rows[j] = rows[j], rows[i] })
	g, err := grid.New(parttest.Physics(), nil, []string{schema.Wavelength, "height", "index_shift"}, rows)
	if err != nil {
		t.Fatal(err)
	}
	s, dir := newMemory(), t.TempDir()
	solve(t, g, s, every(g))
	if _, err := Run(context.Background(), Input{Grid: g, Store: s, Dir: dir}); err != nil {
		t.Fatal(err)
	}
	points := rowsOf(t, readFile(t, dir, PointsFile), column.Points(g.Physics()))
	if len(points) != len(rows) {
		t.Fatalf("found %d points, expected %d", len(points), len(rows))
	}
	for i, row := range points {
		if row["point"].Int64() != int64(i) || row["wavelength_m"].Double() != rows[i][0] || row["height_m"].Double() != rows[i][1] {
			t.Fatalf("found %v, expected %v", row, rows[i])
		}
	}
	if _, err := os.Stat(filepath.Join(dir, SurfacesFile)); !errors.Is(err, fs.ErrNotExist) {
		t.Errorf("found surfaces of a list of rows: %v", err)
	}
}

func TestCancelled(t *testing.T) {
	g := box(t, 40, 40, 20)
	s, dir := newMemory(), t.TempDir()
	solve(t, g, s, every(g))
	for _, after := range []int{0, 1, 3} {
		ctx, cancel := context.WithCancel(context.Background())
		_, err := Run(ctx, Input{Grid: g, Store: &cancelling{memory: s, after: after, cancel: cancel}, Dir: dir})
		cancel()
		if !errors.Is(err, context.Canceled) {
			t.Errorf("after %d parts: found %v, expected the context's error", after, err)
		}
		checkNoTemporaries(t, dir)
	}
}

// cancelling cancels a context when some parts have been read.
type cancelling struct {
	*memory
	after  int
	cancel func()
}

func (c *cancelling) Get(ctx context.Context, name string) ([]byte, error) {
	c.lock.Lock()
	if c.after == 0 {
		c.cancel()
	}
	c.after--
	c.lock.Unlock()
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	return c.memory.Get(ctx, name)
}
