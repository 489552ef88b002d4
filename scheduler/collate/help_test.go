package collate

import (
	"cmp"
	"context"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"sync"
	"testing"

	"betaloom/schema"
	"betaloom/schema/part/parttest"
	"betaloom/schema/store"

	"betaloom/scheduler/grid"
)

// memory is a store that holds its data in memory.
type memory struct {
	lock sync.Mutex
	data map[string][]byte
}

func newMemory() *memory { return &memory{data: map[string][]byte{}} }

func (m *memory) Put(_ context.Context, name string, data []byte) error {
	m.lock.Lock()
	defer m.lock.Unlock()
	m.data[name] = slices.Clone(data)
	return nil
}

func (m *memory) Get(_ context.Context, name string) ([]byte, error) {
	m.lock.Lock()
	defer m.lock.Unlock()
	data, ok := m.data[name]
	if !ok {
		return nil, store.ErrNotFound
	}
	return slices.Clone(data), nil
}

func (m *memory) List(_ context.Context, prefix string) ([]string, error) {
	m.lock.Lock()
	defer m.lock.Unlock()
	var names []string
	for name := range m.data {
		if strings.HasPrefix(name, prefix) {
			names = append(names, name)
		}
	}
	slices.SortFunc(names, cmp.Compare[string])
	return names, nil
}

func (m *memory) Delete(_ context.Context, name string) error {
	m.lock.Lock()
	defer m.lock.Unlock()
	delete(m.data, name)
	return nil
}

// box is a grid of the invented slab.
func box(t testing.TB, wavelengths, heights, shifts int) *grid.Grid {
	t.Helper()
	g, err := grid.New(parttest.Physics(), parttest.Axes(wavelengths, heights, shifts), nil, nil)
	if err != nil {
		t.Fatal(err)
	}
	return g
}

// solve puts the parts of these tiles into a store.
func solve(t testing.TB, g *grid.Grid, s store.Store, tiles []int) {
	t.Helper()
	for _, i := range tiles {
		data, err := parttest.Part(g.Tile(i))
		if err != nil {
			t.Fatal(err)
		}
		if err := s.Put(context.Background(), store.Part(nameOf(t, g.Tile(i))), data); err != nil {
			t.Fatal(err)
		}
	}
}

func nameOf(t testing.TB, tile *schema.Tile) string {
	t.Helper()
	name, err := tile.Name()
	if err != nil {
		t.Fatal(err)
	}
	return name
}

func every(g *grid.Grid) []int {
	all := make([]int, g.Tiles())
	for i := range all {
		all[i] = i
	}
	return all
}

func readFile(t testing.TB, dir, name string) []byte {
	t.Helper()
	b, err := os.ReadFile(filepath.Join(dir, name))
	if err != nil {
		t.Fatal(err)
	}
	return b
}
