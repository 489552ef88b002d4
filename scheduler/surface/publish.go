package surface

import (
	"bufio"
	"encoding/json"
	"fmt"
	"io"
	"os"
	"slices"
	"strings"

	"github.com/apache/arrow/go/v17/arrow/ipc"

	"betaloom/schema/store"
)

// publish writes the whole file under a temporary name, makes it durable and renames it.
func (w *Writer) publish() error {
	temp := w.path + ".tmp"
	defer os.Remove(temp) // not there any more when it was renamed
	if err := w.write(temp); err != nil {
		return fmt.Errorf("surface: %w", err)
	}
	if err := store.Rename(temp, w.path); err != nil {
		return fmt.Errorf("surface: %w", err)
	}
	return nil
}

func (w *Writer) write(temp string) error {
	f, err := os.Create(temp)
	if err != nil {
		return err
	}
	defer f.Close()
	out := &sequential{Writer: bufio.NewWriterSize(f, 1<<20)}
	if err := w.encode(out); err != nil {
		return err
	}
	if err := out.Flush(); err != nil {
		return err
	}
	return f.Sync()
}

// sequential is the writer of a file that is written once from its start: a
// seek only asks where it stands.
type sequential struct {
	*bufio.Writer
	at int64
}

func (s *sequential) Write(p []byte) (int, error) {
	n, err := s.Writer.Write(p)
	s.at += int64(n)
	return n, err
}

func (s *sequential) Seek(offset int64, whence int) (int64, error) {
	if offset != 0 || whence != io.SeekCurrent {
		return 0, fmt.Errorf("found a seek to %d, expected writing in order", offset)
	}
	return s.at, nil
}

func (w *Writer) encode(out io.WriteSeeker) error {
	families := w.sorted()
	w.meta.Families = []MetaFamily{}
	for i, r := range families {
		w.meta.Families = append(w.meta.Families, MetaFamily{
			Name: r.name, FirstRow: int64(i) * int64(w.meta.Nodes), Rows: int64(w.meta.Nodes), Present: r.count,
		})
	}
	meta, err := json.Marshal(w.meta)
	if err != nil {
		return err
	}
	sch := fileSchema(w.columns, string(meta))
	file, err := ipc.NewFileWriter(out, ipc.WithSchema(sch), ipc.WithLZ4(), ipc.WithMinSpaceSavings(0.1))
	if err != nil {
		return err
	}
	d := newDense(file, sch, w.meta)
	for _, r := range families {
		if err := d.family(w.spill, r); err != nil {
			return err
		}
	}
	return file.Close()
}

func (w *Writer) sorted() []*rows {
	var list []*rows
	for _, r := range w.families {
		list = append(list, r)
	}
	slices.SortFunc(list, func(a, b *rows) int { return strings.Compare(a.name, b.name) })
	return list
}
