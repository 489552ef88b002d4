package surface

import (
	"bytes"
	"os"
	"path/filepath"
	"slices"
	"testing"

	"betaloom/schema"
)

func smallFile(t testing.TB) []byte {
	t.Helper()
	path := filepath.Join(t.TempDir(), "surfaces.arrow")
	writeSlabTo(t, path, []schema.AxisBlock{wavelengths(4), shifts(3)}, 2, 100)
	b, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	return b
}

// use opens bytes as a file and reads everything in it.
func use(b []byte) error {
	s, err := open(bytes.NewReader(b), Options{})
	if err != nil {
		return err
	}
	for _, family := range s.Families() {
		values := make([]float64, len(s.axes))
		for i, a := range s.Axes() {
			values[i] = (slices.Min(a.Values) + slices.Max(a.Values)) / 2
		}
		if _, err := s.At(family, values); err != nil {
			return err
		}
		for node := 0; node < s.meta.Nodes; node += s.meta.BatchNodes {
			if _, err := s.batches.holding(s.families[family], node); err != nil {
				return err
			}
		}
	}
	return nil
}

// A file that was cut short or damaged anywhere is an error or, where the damage meets a value
// only, another value; never a panic.
func TestDamage(t *testing.T) {
	good := smallFile(t)
	if err := use(good); err != nil {
		t.Fatal(err)
	}
	t.Run("cut", func(t *testing.T) {
		for n := range len(good) {
			if use(good[:n]) == nil {
				t.Fatalf("%d of %d bytes: found no error", n, len(good))
			}
		}
	})
	t.Run("changed", func(t *testing.T) {
		failed := 0
		for i := range good {
			b := bytes.Clone(good)
			b[i] ^= [3]byte{0x01, 0x80, 0xff}[i%3]
			if use(b) != nil {
				failed++
			}
		}
		if failed < len(good)/10 {
			t.Errorf("found %d errors in %d changes, expected many", failed, len(good))
		}
	})
	t.Run("other", func(t *testing.T) {
		for name, b := range map[string][]byte{"empty": nil, "text": bytes.Repeat([]byte("ARROW1"), 20)} {
			if err := use(b); err == nil {
				t.Errorf("%s: found no error", name)
			}
		}
	})
}

// Metadata that does not fit the batches is refused.
func TestHostileMetadata(t *testing.T) {
	good := smallFile(t)
	for _, change := range [][2]string{
		{`"nodes":12`, `"nodes":13`}, {`"batch_nodes":16384`, `"batch_nodes":90000`}, {`"batch_nodes":16384`, `"batch_nodes":00000`},
		{`"batch_nodes":16384`, `"batch_nodes":00007`}, {`"name":"TE1"`, `"name":"TE0"`}, {`"name":"TE1"`, `"name":"TE2"`}, {`"first_row":12`, `"first_row":11`},
		{`"format":1`, `"format":2`},
	} {
		t.Run(change[1], func(t *testing.T) {
			if !bytes.Contains(good, []byte(change[0])) {
				t.Fatalf("the file holds no %s", change[0])
			}
			if err := use(bytes.Replace(good, []byte(change[0]), []byte(change[1]), -1)); err == nil {
				t.Errorf("found no error")
			}
		})
	}
}

// Opening and reading nodes of a large surface takes the memory of its cache.
func TestOpenIsLazy(t *testing.T) {
	axes := smallAxes()
	s := writeSlab(t, axes, 2)
	if n := s.batches.order.Len(); n != 0 {
		t.Errorf("found %d batches decoded, expected none before the first question", n)
	}
	if _, err := s.At("TE0", []float64{1.3e-6, 0.4e-6, -0.01}); err != nil {
		t.Fatal(err)
	}
	if n := s.batches.order.Len(); n != 1 {
		t.Errorf("found %d batches decoded, expected one for a node", n)
	}
	if err := (Options{CacheBytes: -1}).Validate(); err == nil {
		t.Error("found a negative cache accepted")
	}
	if _, err := Open(filepath.Join(t.TempDir(), "none.arrow")); !os.IsNotExist(unwrapAll(err)) {
		t.Errorf("found %v, expected a missing file", err)
	}
}

func unwrapAll(err error) error {
	for {
		u, ok := err.(interface{ Unwrap() error })
		if _, path := err.(*os.PathError); path || !ok {
			return err
		}
		err = u.Unwrap()
	}
}

func FuzzOpen(f *testing.F) {
	good := smallFile(f)
	f.Add(good)
	f.Add(good[:len(good)/2])
	f.Add(append(bytes.Clone(good[:len(good)-40]), good[len(good)-20:]...))
	f.Fuzz(func(t *testing.T, b []byte) {
		_ = use(b) // it returns: neither a panic nor memory beyond its bounds
	})
}
