package part_test

import (
	"bytes"
	"encoding/binary"
	"fmt"
	"io"
	"math"
	"strings"
	"testing"

	"github.com/apache/arrow/go/v17/arrow/array"
	"github.com/parquet-go/parquet-go"

	"betaloom/schema"
	"betaloom/schema/column"
	"betaloom/schema/part"
	"betaloom/schema/part/parttest"
)

func tileOf(wavelengths, heights, shifts int) *schema.Tile {
	return &schema.Tile{Physics: parttest.Physics(), Axes: parttest.Axes(wavelengths, heights, shifts)}
}

func partOf(t testing.TB, tile *schema.Tile) (name string, data []byte) {
	t.Helper()
	name, err := tile.Name()
	if err != nil {
		t.Fatal(err)
	}
	if data, err = parttest.Part(tile); err != nil {
		t.Fatal(err)
	}
	return name, data
}

// expected gives the columns of a row by a route of its own: SI to the columns'
// units by hand, source: the contract's table of columns.
func expected(pt part.Point, local int, mode int, m *part.Mode) map[string]any {
	row := map[string]any{
		"local": int64(local), "height_m": pt.Values[1], "index_shift": pt.Values[2], "temperature_K": pt.Values[3],
		"wall_deg": 88.0, "gap_m": pt.Values[5], "wavelength_m": pt.Values[0], "frequency_hz": 299792458.0 / pt.Values[0],
		"state": pt.State,
	}
	if pt.Guided >= 0 {
		row["guided_count"] = int64(pt.Guided)
	}
	if pt.Reason != "" {
		row["reason"] = pt.Reason
	}
	if m == nil {
		return row
	}
	wavelengthNM := pt.Values[0] * 1e9
	gvd := m.GVD * 1e24 / 1e-3                                                                          // s^2/m to ps^2/km
	d := -2 * math.Pi * 299792458.0 * 1e9 / 1e12 / (wavelengthNM * wavelengthNM) * (m.GVD * 1e24) * 1e3 // c in nm/ps, GVD in ps^2/km
	for name, v := range map[string]any{
		"mode": int64(mode), "family": m.Family, "mode_type": m.Type, "neff": m.Neff, "kappa_eff": m.Kappa, "loss_db_per_m": 0.0,
		"ng": m.Ng, "gvd_ps2_per_km": gvd, "d_ps_per_nm_km": d, "beta3_ps3_per_km": m.Beta3 * 1e36 / 1e-3,
		"neff_err": m.NeffErr, "ng_err": m.NgErr, "gvd_err_ps2_per_km": m.GVDErr * 1e27, "beta3_err_ps3_per_km": m.Beta3Err * 1e39, "kappa_err": 0.0,
		"dneff_dheight_per_m": m.DNeff[0], "dneff_dindex_shift": m.DNeff[1], "dneff_dtemperature_per_K": m.DNeff[2], "dneff_dwall_per_deg": m.DNeff[3] * math.Pi / 180,
		"dng_dheight_per_m": m.DNg[0], "dng_dindex_shift": m.DNg[1], "dng_dtemperature_per_K": m.DNg[2], "dng_dwall_per_deg": m.DNg[3] * math.Pi / 180,
		"ex_share": m.ExShare, "weff_m": m.Weff, "confinement_core": m.Confinement[0], "origin": "solved", "signature": m.Signature,
	} {
		row[name] = v
	}
	if len(m.Flags) > 0 {
		row["flag"] = strings.Join(m.Flags, ";") + ";accuracy" // parttest's near-cutoff rows are above the 1e-6 asked
	}
	return row
}

func expectedRows(tile *schema.Tile) []map[string]any {
	var rows []map[string]any
	for local := range tile.Points() {
		pt, modes := parttest.Point(tile, local)
		if len(modes) == 0 {
			rows = append(rows, expected(pt, local, 0, nil))
		}
		for i := range modes {
			rows = append(rows, expected(pt, local, i, &modes[i]))
		}
	}
	return rows
}

// Independent reader: parquet-go, which shares no code with the writer.
func TestIndependentReaderFindsThePart(t *testing.T) {
	tile := tileOf(5, 30, 3)
	name, data := partOf(t, tile)
	f, err := parquet.OpenFile(bytes.NewReader(data), int64(len(data)))
	if err != nil {
		t.Fatal(err)
	}
	if found, _ := f.Lookup("betaloom.tile"); found != name {
		t.Errorf("found the tile %q, expected %q", found, name)
	}
	want := expectedRows(tile)
	if f.NumRows() != int64(len(want)) {
		t.Fatalf("found %d rows, expected %d", f.NumRows(), len(want))
	}
	reader := f.RowGroups()[0].Rows()
	defer reader.Close()
	buffer := make([]parquet.Row, 64)
	for at := 0; at < len(want); {
		n, err := reader.ReadRows(buffer)
		if n == 0 || err != nil && err != io.EOF {
			t.Fatalf("row %d: %v", at, err)
		}
		for _, row := range buffer[:n] {
			compareRow(t, &tile.Physics, row, want[at], at)
			at++
		}
	}
}

func compareRow(t *testing.T, p *schema.Physics, row parquet.Row, want map[string]any, at int) {
	t.Helper()
	seen := 0
	for i, c := range column.Part(p) {
		w, ok := want[c.Name]
		if ok == row[i].IsNull() {
			t.Fatalf("row %d, %s: found %v, expected %v", at, c.Name, row[i], w)
		}
		if !ok {
			continue
		}
		seen++
		switch w := w.(type) {
		case float64: // up to the rounding of a unit's conversion
			if got := row[i].Double(); math.Abs(got-w) > 1e-14*math.Abs(w) {
				t.Fatalf("row %d, %s: found %v, expected %v", at, c.Name, got, w)
			}
		case int64:
			if row[i].Int64() != w {
				t.Fatalf("row %d, %s: found %v, expected %v", at, c.Name, row[i], w)
			}
		case string:
			if row[i].String() != w {
				t.Fatalf("row %d, %s: found %v, expected %v", at, c.Name, row[i], w)
			}
		case [16]float32:
			for k, v := range w {
				if bits := binary.LittleEndian.Uint32(row[i].ByteArray()[4*k:]); bits != math.Float32bits(v) {
					t.Fatalf("row %d, signature %d: found %v, expected %v", at, k, math.Float32frombits(bits), v)
				}
			}
		}
	}
	if seen != len(want) {
		t.Fatalf("row %d: found %d of the %d columns expected", at, seen, len(want))
	}
}

func TestLossAndImpedance(t *testing.T) {
	p := parttest.Physics()
	b := part.NewBuilder(&p)
	nan := math.NaN()
	m := part.Mode{Neff: 1.5, Kappa: 1e-6, GVD: nan, Z: complex(50, -2), ZDefinition: "line", Reduced: true, NeffErr: nan,
		DNeff: make([]float64, 4), DNg: make([]float64, 4), Confinement: []float64{nan}}
	pt := part.Point{Values: []float64{1e-6, 1e-6, 0, 300, 1, 1}, State: part.Solved, Guided: 1, FrequencyHz: 299.792458e12}
	if err := b.Add(pt, []part.Mode{m}); err != nil {
		t.Fatal(err)
	}
	data, err := b.Encode("x")
	if err != nil {
		t.Fatal(err)
	}
	rec, err := part.Decode(&p, "x", 1, data)
	if err != nil {
		t.Fatal(err)
	}
	defer rec.Release()
	at := column.Index(column.Part(&p))
	// A power of exp(-2 k kappa z): 20 log10(e) k kappa decibels per metre.
	loss := 20 * math.Log10(math.E) * 2 * math.Pi / 1e-6 * 1e-6
	for name, want := range map[string]float64{"loss_db_per_m": loss, "z_ohm": 50, "z_imag_ohm": -2} {
		if got := rec.Column(at[name]).(*array.Float64).Value(0); math.Abs(got-want) > 1e-13*math.Abs(want) {
			t.Errorf("%s: found %v, expected %v", name, got, want)
		}
	}
	for name, want := range map[string]string{"origin": "reduced", "z_definition": "line", "flag": "accuracy"} {
		if got := rec.Column(at[name]).ValueStr(0); got != want {
			t.Errorf("%s: found %q, expected %q", name, got, want)
		}
	}
	for _, name := range []string{"gvd_ps2_per_km", "d_ps_per_nm_km", "neff_err", "confinement_core", "signature", "family"} {
		if !rec.Column(at[name]).IsNull(0) {
			t.Errorf("%s: found %s, expected null", name, rec.Column(at[name]).ValueStr(0))
		}
	}
}

func TestFrequencyKeepsItsDigits(t *testing.T) {
	p := schema.Physics{Parameters: []schema.Parameter{{Name: "frequency", Kind: schema.Axis, Dimension: schema.Dimension{Time: -1}}}, Modes: 1}
	b := part.NewBuilder(&p)
	f := 193.414489032258e12
	if err := b.Add(part.Point{Values: []float64{f}, State: part.NoMode}, nil); err != nil {
		t.Fatal(err)
	}
	data, err := b.Encode("x")
	if err != nil {
		t.Fatal(err)
	}
	rec, err := part.Decode(&p, "x", 1, data)
	if err != nil {
		t.Fatal(err)
	}
	defer rec.Release()
	at := column.Index(column.Part(&p))
	if got := rec.Column(at["frequency_hz"]).(*array.Float64).Value(0); got != f {
		t.Errorf("found %v, expected %v", got, f)
	}
	if got := rec.Column(at["wavelength_m"]).(*array.Float64).Value(0); math.Abs(got-1.55e-6) > 1e-18 {
		t.Errorf("found %v, expected 1.55e-6", got)
	}
}

func TestEqualPointsGiveEqualBytes(t *testing.T) {
	tile := tileOf(7, 20, 3)
	_, want := partOf(t, tile)
	b := part.NewBuilder(&tile.Physics)
	for i, axes := range [][]schema.AxisBlock{parttest.Axes(3, 40, 2), parttest.Axes(2, 5, 9)} {
		other := &schema.Tile{Physics: tile.Physics, Axes: axes}
		if err := parttest.Fill(b, other); err != nil {
			t.Fatal(err)
		}
		if _, err := b.Encode(fmt.Sprint(i)); err != nil {
			t.Fatal(err)
		}
	}
	if err := parttest.Fill(b, tile); err != nil {
		t.Fatal(err)
	}
	name, err := tile.Name()
	if err != nil {
		t.Fatal(err)
	}
	got, err := b.Encode(name)
	if err != nil {
		t.Fatal(err)
	}
	if !bytes.Equal(got, want) {
		t.Errorf("found other bytes from a builder that has built before (%d and %d)", len(got), len(want))
	}
}

func TestAddRefuses(t *testing.T) {
	p := parttest.Physics()
	good := part.Point{Values: make([]float64, 6), State: part.Solved, Guided: 1}
	mode := part.Mode{DNeff: make([]float64, 4), DNg: make([]float64, 4), Confinement: make([]float64, 1)}
	for _, c := range []struct {
		name   string
		change func(pt *part.Point, modes []part.Mode) []part.Mode
		says   string
	}{
		{"values", func(pt *part.Point, m []part.Mode) []part.Mode { pt.Values = nil; return m }, "expected 6"},
		{"state", func(pt *part.Point, m []part.Mode) []part.Mode { pt.State = "done"; return m }, `"done"`},
		{"solved without a mode", func(*part.Point, []part.Mode) []part.Mode { return nil }, "found 0 modes"},
		{"failed with a mode", func(pt *part.Point, m []part.Mode) []part.Mode { pt.State = part.Failed; return m }, "state failed"},
		{"too many modes", func(_ *part.Point, m []part.Mode) []part.Mode { return append(m, m[0], m[0]) }, "found 3 modes"},
		{"sensitivities", func(_ *part.Point, m []part.Mode) []part.Mode { m[0].DNg = nil; return m }, "0 sensitivities"},
		{"confinements", func(_ *part.Point, m []part.Mode) []part.Mode { m[0].Confinement = nil; return m }, "0 confinements"},
	} {
		t.Run(c.name, func(t *testing.T) {
			b := part.NewBuilder(&p)
			pt, m := good, mode
			modes := c.change(&pt, []part.Mode{m})
			if err := b.Add(pt, modes); err == nil || !strings.Contains(err.Error(), c.says) {
				t.Errorf("found %v, expected an error with %q", err, c.says)
			}
			if err := b.Add(good, []part.Mode{mode}); err != nil {
				t.Errorf("the next point: %v", err)
			}
		})
	}
	t.Run("no points", func(t *testing.T) {
		if _, err := part.NewBuilder(&p).Encode("x"); err == nil {
			t.Error("found no error")
		}
	})
}

func TestTextsAreCut(t *testing.T) {
	p := parttest.Physics()
	b := part.NewBuilder(&p)
	long := strings.Repeat("é", 400) + "\xff"
	if err := b.Add(part.Point{Values: make([]float64, 6), State: part.Failed, Guided: part.Missing, Reason: long}, nil); err != nil {
		t.Fatal(err)
	}
	data, err := b.Encode("x")
	if err != nil {
		t.Fatal(err)
	}
	rec, err := part.Decode(&p, "x", 1, data)
	if err != nil {
		t.Fatal(err)
	}
	defer rec.Release()
	got := rec.Column(column.Index(column.Part(&p))["reason"]).ValueStr(0)
	if len(got) > part.MaxText || !strings.HasPrefix(got, "éé") || !strings.HasSuffix(got, "é...") {
		t.Errorf("found %d bytes ending in %q", len(got), got[len(got)-8:])
	}
}
