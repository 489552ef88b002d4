package sweep

import (
	"bytes"
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"io/fs"
)

// sheet reads a CSV file row by row and reports what is wrong in it.
type sheet struct {
	r      *reader
	name   string
	csv    *csv.Reader
	faults int
}

// sheet opens a CSV file of at most most bytes that is named at a path.
func (r *reader) sheet(path, name string, most int) (s *sheet, bytesRead int, ok bool) {
	b, err := r.slurp(name, most)
	switch {
	case err != nil:
		r.fault(path, fmt.Sprintf("the file %s, which cannot be read: %s", quote(name), reason(err)), "a CSV file, relative to the sweep file")
	case len(b) > most:
		r.fault(path, fmt.Sprintf("the file %s of more than %d bytes", quote(name), most), "a file within that")
	case bytes.IndexByte(b, 0) >= 0:
		r.fault(path, "the file "+quote(name)+" with zero bytes in it", "a CSV file in UTF-8")
	default:
		c := csv.NewReader(bytes.NewReader(bytes.TrimPrefix(b, []byte("\xef\xbb\xbf"))))
		c.Comment, c.FieldsPerRecord, c.TrimLeadingSpace, c.ReuseRecord = '#', -1, true, true
		return &sheet{r: r, name: quote(name), csv: c}, len(b), true
	}
	return nil, 0, false
}

// slurp reads at most a byte more than most.
func (r *reader) slurp(name string, most int) ([]byte, error) {
	f, err := r.open(name)
	if err != nil {
		return nil, err
	}
	defer f.Close()
	return io.ReadAll(io.LimitReader(f, int64(most)+1))
}

// reason is an error without the path that the message has already.
func reason(err error) string {
	var p *fs.PathError
	if errors.As(err, &p) {
		return p.Err.Error()
	}
	return err.Error()
}

// next reads a row. ok is false at the end, and where the file cannot be
// read on.
func (s *sheet) next() (row []string, ok bool) {
	row, err := s.csv.Read()
	if err == nil {
		return row, s.faults < maxCells
	}
	var p *csv.ParseError
	switch {
	case errors.As(err, &p):
		s.faults++
		s.r.add(Diagnostic{s.name, p.Line, p.Column, "", "what is not CSV: " + p.Err.Error(), "fields separated by commas"})
	case !errors.Is(err, io.EOF):
		s.faults++
		s.r.add(Diagnostic{s.name, 1, 1, "", err.Error(), "a file that can be read"})
	}
	return nil, false
}

// fault reports a problem with a field of the row read last.
func (s *sheet) fault(field int, found, expected string) {
	s.faults++
	line, column := s.csv.FieldPos(field)
	s.r.add(Diagnostic{s.name, line, column, "", found, expected})
}

// faultFile reports a problem with the whole file.
func (s *sheet) faultFile(found, expected string) {
	s.faults++
	s.r.add(Diagnostic{s.name, 1, 1, "", found, expected})
}
