package table_test

import (
	"bufio"
	"bytes"
	"context"
	"encoding/csv"
	"encoding/json"
	"errors"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"

	"betaloom/schema/column"

	"betaloom/scheduler/table"
)

var columns = []column.Column{
	{Name: "point", Description: "index", Type: column.Int64},
	{Name: "width_m", Unit: "m", Description: "width", Type: column.Float64},
	{Name: "z0", Description: "a parameter", Type: column.Float64},
	{Name: "family", Description: "family", Type: column.String},
	{Name: "ng", Description: "group index", Type: column.Float64},
	{Name: "flag", Description: "flags", Type: column.String},
}

// file writes n rows: every fourth family and every fifth ng are missing.
func file(t *testing.T, n int) string {
	t.Helper()
	path := filepath.Join(t.TempDir(), "modes.parquet")
	f, err := os.Create(path)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	w, err := column.NewWriter(f, columns, column.Options{})
	if err != nil {
		t.Fatal(err)
	}
	for from := 0; from < n; from += 5000 {
		b := column.NewBatch(columns, nil, min(5000, n-from))
		for r := range b.Rows {
			fill(b, r, from+r)
		}
		if err := w.Write(b); err != nil {
			t.Fatal(err)
		}
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	return path
}

func fill(b *column.Batch, r, i int) {
	b.Vectors[0].Ints[r] = int64(i)
	b.Vectors[1].Floats[r] = 1e-6 / 3 * float64(i)
	b.Vectors[2].Floats[r] = float64(i % 2)
	b.Vectors[3].Codes[r] = b.Texts.Code([]string{"TE0", "TM0", `say "x", y`, ""}[i%4])
	b.Vectors[4].Floats[r] = 2 + float64(i%5)/10
	if i%5 == 0 {
		b.Vectors[4].Floats[r] = math.NaN()
	}
	b.Vectors[5].Codes[r] = b.Texts.Code([]string{"", "accuracy"}[i%2])
}

func write(t *testing.T, path string, o table.Options) (string, int) {
	t.Helper()
	var out bytes.Buffer
	n, err := table.Write(context.Background(), path, &out, o)
	if err != nil {
		t.Fatal(err)
	}
	return out.String(), n
}

// The CSV is read back by the standard library's reader.
func TestCSV(t *testing.T) {
	text, n := write(t, file(t, 12000), table.Options{})
	rows, err := csv.NewReader(strings.NewReader(text)).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	if n != 12000 || len(rows) != n+1 {
		t.Fatalf("found %d rows and %d lines", n, len(rows))
	}
	if want := []string{"point", "width_m", "z0", "family", "ng", "flag"}; !slices.Equal(rows[0], want) {
		t.Errorf("found %v, expected %v", rows[0], want)
	}
	for i, row := range rows[1:] {
		width, err := strconv.ParseFloat(row[1], 64)
		ng := strconv.FormatFloat(2+float64(i%5)/10, 'g', -1, 64)
		if i%5 == 0 {
			ng = ""
		}
		if row[0] != strconv.Itoa(i) || err != nil || width != 1e-6/3*float64(i) || row[3] != []string{"TE0", "TM0", `say "x", y`, ""}[i%4] || row[4] != ng {
			t.Fatalf("row %d: found %q", i, row)
		}
	}
}

// The lines are read back by the standard library's decoder.
func TestJSONLines(t *testing.T) {
	text, _ := write(t, file(t, 10), table.Options{Columns: []string{"family", "ng", "point", "width_m"}, Format: table.JSONL})
	lines := bufio.NewScanner(strings.NewReader(text))
	for i := 0; lines.Scan(); i++ {
		if i == 0 && lines.Text() != `{"family":"TE0","ng":null,"point":0,"width_m":0}` {
			t.Errorf("found %s", lines.Text())
		}
		var row struct {
			Family *string
			Ng     *float64
			Point  int
			Width  float64 `json:"width_m"`
		}
		if err := json.Unmarshal(lines.Bytes(), &row); err != nil {
			t.Fatal(err)
		}
		if row.Point != i || (row.Family == nil) != (i%4 == 3) || (row.Ng == nil) != (i%5 == 0) || row.Width != 1e-6/3*float64(i) {
			t.Errorf("row %d: found %s", i, lines.Text())
		}
	}
}

func TestWhere(t *testing.T) {
	path := file(t, 9000)
	for _, c := range []struct {
		where string
		want  func(i int) bool
	}{
		{"point < 10", func(i int) bool { return i < 10 }},
		{`family == "TE0"`, func(i int) bool { return i%4 == 0 }},
		{`family=='TE0' and ng > 2.15`, func(i int) bool { return i%4 == 0 && i%5 >= 2 }},
		{`(family == "TE0" or family != "TE0") and not (family == "TM0")`, func(i int) bool { return i%4 != 1 }},
		{`flag != "accuracy" and z0 == 0`, func(i int) bool { return i%2 == 0 }},
		{"family == 'say \"x\", y'", func(i int) bool { return i%4 == 2 }},
		{"ng < 100", func(i int) bool { return i%5 != 0 }},
		{"not (ng < 100)", func(i int) bool { return false }},
		{"width_m >= 2e-3", func(i int) bool { return 1e-6/3*float64(i) >= 2e-3 }},
		{"sqrt(width_m * 3e6) < 3", func(i int) bool { return math.Sqrt(1e-6/3*float64(i)*3e6) < 3 }},
	} {
		t.Run(c.where, func(t *testing.T) {
			text, n := write(t, path, table.Options{Columns: []string{"point"}, Where: c.where})
			var want strings.Builder
			want.WriteString("point\n")
			rows := 0
			for i := range 9000 {
				if c.want(i) {
					fmt.Fprintln(&want, i)
					rows++
				}
			}
			if n != rows || text != want.String() {
				t.Errorf("found %d rows, expected %d", n, rows)
			}
		})
	}
}

func TestWrongOptions(t *testing.T) {
	path := file(t, 10)
	for _, c := range []struct {
		name string
		o    table.Options
		says string
	}{
		{"format", table.Options{Format: "xml"}, `format: found "xml", expected csv or jsonl`},
		{"column", table.Options{Columns: []string{"neff"}}, `columns: found "neff", expected some of: point, width_m`},
		{"name", table.Options{Where: "neff > 2"}, "byte 0: found the name neff"},
		{"text as a number", table.Options{Where: "ng > 2 and family > 2"}, "byte 11: found the text column family"},
		{"number as a text", table.Options{Where: `ng == "2"`}, `byte 0: found "ng" before ==`},
		{"text alone", table.Options{Where: `ng > "TE0"`}, "byte 5: found a text"},
		{"text without an end", table.Options{Where: `family == "TE0`}, "byte 10: found a text without an end"},
		{"what follows a text", table.Options{Where: `family == "TE0" and `}, "byte 20: found the end"},
		{"a number", table.Options{Where: "ng + 1"}, "expected"},
		{"a unit", table.Options{Where: "width_m > 1 um"}, "byte"},
		{"nothing", table.Options{Where: " "}, "byte"},
	} {
		t.Run(c.name, func(t *testing.T) {
			var out bytes.Buffer
			_, err := table.Write(context.Background(), path, &out, c.o)
			var wrong *table.InputError
			if !errors.As(err, &wrong) || !strings.Contains(err.Error(), c.says) {
				t.Errorf("found %v, expected an InputError with %q", err, c.says)
			}
			if out.Len() > 0 {
				t.Errorf("found %q written", out.String())
			}
		})
	}
}

func TestFailures(t *testing.T) {
	path := file(t, 6000)
	t.Run("domain", func(t *testing.T) {
		// log(0) has no value: the row of point 0 does not meet the condition
		below, err := table.Write(context.Background(), path, &bytes.Buffer{}, table.Options{Where: "log(point) < 1"})
		if err != nil {
			t.Fatal(err)
		}
		want, err := table.Write(context.Background(), path, &bytes.Buffer{}, table.Options{Where: "point > 0 and point < 2.718"})
		if err != nil || below != want || want == 0 {
			t.Errorf("found %d rows and %v, expected %d", below, err, want)
		}
	})
	t.Run("no file", func(t *testing.T) {
		_, err := table.Write(context.Background(), path+"x", &bytes.Buffer{}, table.Options{})
		if !errors.Is(err, os.ErrNotExist) {
			t.Errorf("found %v", err)
		}
	})
	t.Run("damaged", func(t *testing.T) {
		b, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		for i := len(b) / 4; i < len(b)/4+100; i++ {
			b[i] ^= 0x55
		}
		bad := filepath.Join(t.TempDir(), "bad.parquet")
		if err := os.WriteFile(bad, b, 0o600); err != nil {
			t.Fatal(err)
		}
		if _, err := table.Write(context.Background(), bad, &bytes.Buffer{}, table.Options{}); err == nil {
			t.Error("found no error")
		}
	})
	t.Run("cancelled", func(t *testing.T) {
		ctx, cancel := context.WithCancel(context.Background())
		cancel()
		if _, err := table.Write(ctx, path, &bytes.Buffer{}, table.Options{}); !errors.Is(err, context.Canceled) {
			t.Errorf("found %v", err)
		}
	})
	t.Run("nowhere to write", func(t *testing.T) {
		full := errors.New("full")
		if _, err := table.Write(context.Background(), path, failing{full}, table.Options{}); !errors.Is(err, full) {
			t.Errorf("found %v", err)
		}
	})
}

type failing struct{ err error }

func (f failing) Write([]byte) (int, error) { return 0, f.err }
