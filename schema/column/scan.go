package column

import "fmt"

// Scanner reads rows of some columns in order, in memory that one row group's
// column chunks and a page of each bound.
type Scanner struct {
	f       *File
	cursors []cursor
	group   int // row groups begun
	left    int // rows of the one that is being read
	rows    int // rows read
}

// Scan starts to read the columns at these indices of f.Columns.
func (f *File) Scan(columns []int) (*Scanner, error) {
	s := &Scanner{f: f}
	for _, i := range columns {
		if i < 0 || i >= len(f.Columns) {
			return nil, fmt.Errorf("column: found the index %d, expected 0 to %d", i, len(f.Columns)-1)
		}
		s.cursors = append(s.cursors, cursor{f: f, column: i})
	}
	return s, nil
}

// Next sets b, a batch of the scanned columns, to the next rows of a row group,
// at most n; it gives 0 at the end of the file. The texts of b are the scanner's: their
// codes last until the next call.
func (s *Scanner) Next(b *Batch, n int) (rows int, err error) {
	defer recovered(&err)
	if err := s.begin(b.Texts); err != nil {
		return 0, err
	}
	n = min(n, s.left)
	b.Grow(n)
	for i := range s.cursors {
		c := &s.cursors[i]
		if err := c.fill(&b.Vectors[i], b.Texts, n); err != nil {
			return 0, fmt.Errorf("column %s: %w", b.Columns[i].Name, err)
		}
	}
	s.left -= n
	s.rows += n
	return n, nil
}

// begin goes to the next row group that has rows, once the last is read.
func (s *Scanner) begin(texts *Texts) error {
	for s.left == 0 && s.group < len(s.f.footer.RowGroups) {
		rows := s.f.footer.RowGroups[s.group].NumRows
		if rows < 0 || rows > int64(s.f.Rows-s.rows) {
			return fmt.Errorf("found a row group of %d rows, expected 0 to %d", rows, s.f.Rows-s.rows)
		}
		s.left = int(rows)
		for i := range s.cursors {
			if err := s.cursors[i].begin(s.group, s.left); err != nil {
				return fmt.Errorf("column %s: %w", s.f.Columns[s.cursors[i].column].Name, err)
			}
		}
		s.group++
		texts.Truncate(1)
	}
	if s.left == 0 && s.rows != s.f.Rows {
		return fmt.Errorf("found %d rows, expected the file's %d", s.rows, s.f.Rows)
	}
	return nil
}
