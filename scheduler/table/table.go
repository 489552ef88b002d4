package table

import (
	"bufio"
	"context"
	"fmt"
	"io"
	"os"
	"slices"
	"strings"

	"betaloom/schema/column"
)

// The formats.
const (
	CSV   = "csv"
	JSONL = "jsonl"
)

// Options says what to write.
type Options struct {
	Columns []string // none: all of the table
	Where   string   // a condition; empty: every row
	Format  string   // CSV or JSONL; empty: CSV
}

// Validate reports an unknown format.
func (o Options) Validate() error {
	if !slices.Contains([]string{"", CSV, JSONL}, o.Format) {
		return fmt.Errorf("format: found %q, expected %s or %s", o.Format, CSV, JSONL)
	}
	return nil
}

// batchRows is how many rows are read at a time.
const batchRows = 4096

// InputError says that the options do not fit the table.
type InputError struct {
	Option string // columns, where or format
	Err    error
}

func (e *InputError) Error() string { return "table: " + e.Option + ": " + e.Err.Error() }

// Unwrap gives the cause.
func (e *InputError) Unwrap() error { return e.Err }

// Write writes rows of the Parquet file at path to w and tells how many. An *InputError
// says that the options are wrong; nothing is written then.
func Write(ctx context.Context, path string, w io.Writer, o Options) (rows int, err error) {
	if err := o.Validate(); err != nil {
		return 0, &InputError{"format", err}
	}
	r, err := os.Open(path)
	if err != nil {
		return 0, fmt.Errorf("table: %w", err)
	}
	defer r.Close()
	info, err := r.Stat()
	if err != nil {
		return 0, fmt.Errorf("table: %w", err)
	}
	f, err := column.Open(r, info.Size())
	if err != nil {
		return 0, fmt.Errorf("table %s: %w", path, err)
	}
	defer f.Close()
	q, err := newQuery(f.Columns, o)
	if err != nil {
		return 0, err
	}
	if rows, err = q.write(ctx, f, w); err != nil {
		return rows, fmt.Errorf("table %s: %w", path, err)
	}
	return rows, nil
}

// query is Options bound to a table.
type query struct {
	format  string
	scanned []int           // indices of the file's columns to read
	columns []column.Column // those
	shown   []int           // of the scanned ones, which to write, in order
	filter  *filter         // nil: every row
}

func newQuery(columns []column.Column, o Options) (*query, error) {
	q := &query{format: o.Format}
	names := o.Columns
	if len(names) == 0 {
		for _, c := range columns {
			names = append(names, c.Name)
		}
	}
	at := column.Index(columns)
	for _, name := range names {
		i, ok := at[name]
		if !ok {
			return nil, &InputError{"columns", fmt.Errorf("found %q, expected some of: %s", name, list(columns))}
		}
		q.shown = append(q.shown, q.scan(columns, i))
	}
	if o.Where == "" {
		return q, nil
	}
	f, err := parseFilter(o.Where, columns)
	if err != nil {
		return nil, &InputError{"where", err}
	}
	f.bind(func(name string) int { return q.scan(columns, at[name]) })
	q.filter = f
	return q, nil
}

// scan has a column of the file read and gives its place in the batch.
func (q *query) scan(columns []column.Column, i int) int {
	if place := slices.Index(q.scanned, i); place >= 0 {
		return place
	}
	q.scanned, q.columns = append(q.scanned, i), append(q.columns, columns[i])
	return len(q.scanned) - 1
}

func list(columns []column.Column) string {
	var names []string
	for _, c := range columns {
		names = append(names, c.Name)
	}
	return strings.Join(names, ", ")
}

func (q *query) write(ctx context.Context, f *column.File, w io.Writer) (rows int, err error) {
	scan, err := f.Scan(q.scanned)
	if err != nil {
		return 0, err
	}
	out := bufio.NewWriterSize(w, 64<<10)
	p := newPrinter(q, out)
	if err := p.head(); err != nil {
		return 0, err
	}
	for b := column.NewBatch(q.columns, nil, batchRows); ; {
		n, err := scan.Next(b, batchRows)
		if err != nil {
			return rows, err
		}
		if n == 0 {
			return rows, p.end(out)
		}
		if err := ctx.Err(); err != nil {
			return rows, err
		}
		k, err := q.rows(p, b)
		rows += k
		if err != nil {
			return rows, err
		}
	}
}

// rows writes those of a batch that pass.
func (q *query) rows(p printer, b *column.Batch) (written int, err error) {
	for row := range b.Rows {
		if q.filter != nil && !q.filter.passes(b, row) {
			continue
		}
		if err := p.row(b, row); err != nil {
			return written, err
		}
		written++
	}
	return written, nil
}
