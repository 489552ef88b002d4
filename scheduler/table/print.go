package table

import (
	"bufio"
	"encoding/csv"
	"encoding/hex"
	"encoding/json"
	"strconv"

	"betaloom/schema/column"
)

// printer writes rows in one of the formats.
type printer interface {
	head() error
	row(b *column.Batch, row int) error
	end(out *bufio.Writer) error
}

func newPrinter(q *query, out *bufio.Writer) printer {
	var names []string
	for _, place := range q.shown {
		names = append(names, q.columns[place].Name)
	}
	if q.format == JSONL {
		return newLines(q, names, out)
	}
	return &sheet{q: q, names: names, out: csv.NewWriter(out)}
}

// appendValue appends a value as plain text; ok is false where it is missing.
func appendValue(dst []byte, b *column.Batch, place, row int) (_ []byte, ok bool) {
	v := &b.Vectors[place]
	switch b.Columns[place].Type {
	case column.Float64:
		x, ok := b.Float(place, row)
		if !ok {
			return dst, false
		}
		return strconv.AppendFloat(dst, x, 'g', -1, 64), true
	case column.Int64, column.Int32:
		if v.Ints[row] == column.MissingInt {
			return dst, false
		}
		return strconv.AppendInt(dst, v.Ints[row], 10), true
	case column.Bytes:
		blob := v.Blobs[row*column.SignatureBytes : (row+1)*column.SignatureBytes]
		return hex.AppendEncode(dst, blob), true
	}
	return append(dst, b.Text(place, row)...), v.Codes[row] != 0
}

// sheet writes CSV.
type sheet struct {
	q      *query
	names  []string
	out    *csv.Writer
	fields []string
	room   []byte
}

func (s *sheet) head() error { return s.out.Write(s.names) }

func (s *sheet) row(b *column.Batch, row int) error {
	s.fields = s.fields[:0]
	for _, place := range s.q.shown {
		s.room, _ = appendValue(s.room[:0], b, place, row)
		s.fields = append(s.fields, string(s.room))
	}
	return s.out.Write(s.fields)
}

func (s *sheet) end(out *bufio.Writer) error {
	s.out.Flush()
	if err := s.out.Error(); err != nil {
		return err
	}
	return out.Flush()
}

// lines writes a JSON object a line.
type lines struct {
	q    *query
	keys [][]byte // with the colon
	out  *bufio.Writer
	room []byte
}

func newLines(q *query, names []string, out *bufio.Writer) *lines {
	l := &lines{q: q, out: out}
	for _, n := range names {
		l.keys = append(l.keys, append(appendJSON(nil, n), ':'))
	}
	return l
}

func (l *lines) head() error { return nil }

func (l *lines) row(b *column.Batch, row int) error {
	l.room = append(l.room[:0], '{')
	for i, place := range l.q.shown {
		if i > 0 {
			l.room = append(l.room, ',')
		}
		l.room = append(l.room, l.keys[i]...)
		l.value(b, place, row)
	}
	_, err := l.out.Write(append(l.room, '}', '\n'))
	return err
}

func (l *lines) value(b *column.Batch, place, row int) {
	start := len(l.room)
	var ok bool
	if l.room, ok = appendValue(l.room, b, place, row); !ok {
		l.room = append(l.room[:start], "null"...)
		return
	}
	if t := b.Columns[place].Type; t == column.String || t == column.Bytes {
		text := string(l.room[start:])
		l.room = appendJSON(l.room[:start], text)
	}
}

func (l *lines) end(out *bufio.Writer) error { return out.Flush() }

// appendJSON appends a text as JSON; a text always has one.
func appendJSON(dst []byte, s string) []byte {
	b, err := json.Marshal(s)
	if err != nil {
		return append(dst, "null"...)
	}
	return append(dst, b...)
}
