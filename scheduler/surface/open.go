package surface

import (
	"encoding/json"
	"fmt"
	"io"
	"os"
	"slices"
	"sync"

	"github.com/apache/arrow/go/v17/arrow"

	"betaloom/scheduler/grid"
	"betaloom/schema"
	"betaloom/schema/column"
)

// Options is how a file is read; its zero value gives the stated defaults.
type Options struct {
	CacheBytes int64 // decoded batches that are kept; 0 means 256 MiB
}

// Validate reports a setting that means nothing.
func (o Options) Validate() error {
	if o.CacheBytes < 0 {
		return fmt.Errorf("surface: cache of %d bytes: expected 0 or more", o.CacheBytes)
	}
	return nil
}

// Surfaces is an open surfaces.arrow.
type Surfaces struct {
	meta     Meta
	columns  []column.Column
	names    []string
	families map[string]int
	axes     []*axis
	order    []int // axes in the order of collapsing
	batches  *batches
	closer   io.Closer
	spaces   sync.Pool // of *workspace
}

// Open opens a file with the default Options.
func Open(path string) (*Surfaces, error) { return OpenWith(path, Options{}) }

// OpenWith opens a file. The result is to be closed.
func OpenWith(path string, o Options) (*Surfaces, error) {
	if err := o.Validate(); err != nil {
		return nil, err
	}
	f, err := os.Open(path)
	if err != nil {
		return nil, fmt.Errorf("surface: %w", err)
	}
	s, err := open(f, o)
	if err != nil {
		f.Close()
		return nil, fmt.Errorf("surface: %s: %w", path, err)
	}
	s.closer = f
	return s, nil
}

func open(r io.ReadSeeker, o Options) (*Surfaces, error) {
	if o.CacheBytes == 0 {
		o.CacheBytes = 256 << 20
	}
	b, sch, err := openBatches(r, o.CacheBytes)
	if err != nil {
		return nil, err
	}
	s := &Surfaces{batches: b, families: map[string]int{}}
	if err := s.readMeta(sch); err != nil {
		return nil, err
	}
	if err := s.readColumns(sch); err != nil {
		return nil, err
	}
	b.shape(len(s.columns), s.meta, s.names)
	s.makeAxes()
	s.spaces.New = func() any { return newWorkspace(s) }
	return s, nil
}

func (s *Surfaces) readMeta(sch *arrow.Schema) error {
	i := sch.Metadata().FindKey(metaKey)
	if i < 0 {
		return fmt.Errorf("found no metadata under %q, expected a file of surfaces", metaKey)
	}
	if err := json.Unmarshal([]byte(sch.Metadata().Values()[i]), &s.meta); err != nil {
		return fmt.Errorf("metadata: %w", err)
	}
	m := &s.meta
	if m.Format != formatMeta {
		return fmt.Errorf("found format %d, expected %d", m.Format, formatMeta)
	}
	nodes := 1.0
	for i, a := range m.Axes {
		if err := checkValues(a.Parameter, a.Values); err != nil {
			return err
		}
		if slices.ContainsFunc(m.Axes[:i], func(b MetaAxis) bool { return a.Parameter == b.Parameter }) {
			return fmt.Errorf("axis %s: found it twice", a.Parameter)
		}
		nodes *= float64(len(a.Values))
	}
	if nodes > grid.MaxPoints || int(nodes) != m.Nodes || m.BatchNodes < 1 || m.BatchNodes > maxBatchNodes {
		return fmt.Errorf("found %d nodes in batches of %d, expected %.0f in batches of 1 to %d", m.Nodes, m.BatchNodes, nodes, maxBatchNodes)
	}
	return s.readFamilies()
}

func (s *Surfaces) readFamilies() error {
	for i, f := range s.meta.Families {
		first := int64(i) * int64(s.meta.Nodes)
		if f.FirstRow != first || f.Rows != int64(s.meta.Nodes) || i > 0 && f.Name <= s.names[i-1] {
			return fmt.Errorf("family %s: found rows %d to %d, expected %d from %d and names in order", f.Name, f.FirstRow, f.FirstRow+f.Rows, s.meta.Nodes, first)
		}
		s.names = append(s.names, f.Name)
		s.families[f.Name] = i
	}
	per := (s.meta.Nodes + s.meta.BatchNodes - 1) / s.meta.BatchNodes
	if want := per * len(s.names); s.batches.count() != want {
		return fmt.Errorf("found %d record batches, expected %d", s.batches.count(), want)
	}
	return nil
}

// readColumns checks the order of the columns: family, point, core,
// sensitivities, further.
func (s *Surfaces) readColumns(sch *arrow.Schema) error {
	want := []string{"family", "point"}
	want = append(want, core[:]...)
	for _, k := range s.meta.Sensitivities {
		want = append(want, k.Neff)
	}
	for _, k := range s.meta.Sensitivities {
		want = append(want, k.Ng)
	}
	for i, f := range sch.Fields() {
		if i < len(want) && f.Name != want[i] {
			return fmt.Errorf("column %d: found %s, expected %s", i, f.Name, want[i])
		}
		if t := columnType(i); !arrow.TypeEqual(f.Type, t) {
			return fmt.Errorf("column %s: found %s, expected %s", f.Name, f.Type, t)
		}
		if i >= 2 {
			s.columns = append(s.columns, column.Column{
				Name: f.Name, Unit: fieldText(f, "unit"), Description: fieldText(f, "description"), Type: column.Float64,
			})
		}
	}
	if sch.NumFields() < len(want) {
		return fmt.Errorf("found %d columns, expected at least %d", sch.NumFields(), len(want))
	}
	return nil
}

func columnType(i int) arrow.DataType {
	switch i {
	case 0:
		return arrow.BinaryTypes.String
	case 1:
		return arrow.PrimitiveTypes.Int64
	}
	return arrow.PrimitiveTypes.Float64
}

func fieldText(f arrow.Field, key string) string {
	v, _ := f.Metadata.GetValue(key)
	return v
}

// Close closes the file. Nothing may be asked afterwards.
func (s *Surfaces) Close() error {
	if s.closer == nil {
		return nil
	}
	return s.closer.Close()
}

// Families lists the families in order of their names.
func (s *Surfaces) Families() []string { return slices.Clone(s.names) }

// Axes lists the axes in file order: SI values, angles in radians.
func (s *Surfaces) Axes() []schema.AxisBlock {
	var list []schema.AxisBlock
	for _, a := range s.meta.Axes {
		list = append(list, schema.AxisBlock{Parameter: a.Parameter, Values: slices.Clone(a.Values)})
	}
	return list
}

// Sensitivities lists the base parameters in the order of Value.DNeff and Value.DNg,
// with the columns that give their units.
func (s *Surfaces) Sensitivities() []MetaSensitivity { return slices.Clone(s.meta.Sensitivities) }

func (s *Surfaces) family(name string) (int, error) {
	i, ok := s.families[name]
	if !ok {
		return 0, &FamilyError{Family: name, Families: s.names}
	}
	return i, nil
}
